"""Who refers to whom: what a rename must follow and what a deletion would take with it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from typing import Any

from engine.frozen import FrozenMap
from engine.project import Kind, Point, Project
from engine.sections import Section


def uses(project: Project, kind: Kind, name: str) -> list[str]:
    """Where a part is referred to, in words, in file order: "case LC15 (combine)"."""
    return list(_uses(project, kind, name))


def _uses(project: Project, kind: Kind, name: str) -> Iterator[str]:
    for case in project.cases:
        if kind == "category" and case.category == name:
            yield f"case {case.name} (category)"
        if kind == "load" and name in case.loads:
            yield f"case {case.name} (loads)"
        if kind == "case" and name in case.combine:
            yield f"case {case.name} (combine)"
    for section in project.sections:
        if kind == "load" and (name in section.not_felt or any(name in row for row in section.resultants.values())):
            yield f"section {section.name} (resultants)"
    for point in project.points:
        for key in _point_uses(point, kind, name):
            yield f"point {point.name} ({key})"
    if kind == "point":
        for given in project.acknowledgements:
            if given.point == name:
                yield f"acknowledgement of {given.caution} at {name}"


def _point_uses(point: Point, kind: Kind, name: str) -> Iterator[str]:
    if kind == "material" and point.material == name:
        yield "material"
    if kind == "section" and point.section == name:
        yield "section"
    if kind == "load" and name in point.per_load:
        yield "per-load"
    if kind == "load" and point.not_felt != "rest" and name in point.not_felt:
        yield "not-felt"
    if kind == "case" and name in point.stress:
        yield "stress"
    if kind == "case" and isinstance(point.temperature, FrozenMap) and name in point.temperature:
        yield "temperature"


def renamed_everywhere(project: Project, kind: Kind, old: str, new: str) -> Project:
    """The project with every reference to a part following its new name; parts without one stay the same objects."""
    cases = tuple(_shared(case, _case_renamed(case, kind, old, new)) for case in project.cases)
    sections = tuple(_shared(section, _section_renamed(section, kind, old, new)) for section in project.sections)
    points = tuple(_shared(point, _point_renamed(point, kind, old, new)) for point in project.points)
    given = project.acknowledgements
    if kind == "point":
        given = tuple(replace(a, point=new) if a.point == old else a for a in given)
    return replace(project, cases=cases, sections=sections, points=points, acknowledgements=given)


def _shared(part: Any, changes: dict[str, Any]) -> Any:
    kept = {name: value for name, value in changes.items() if value is not getattr(part, name)}
    return replace(part, **kept) if kept else part


def _case_renamed(case: Any, kind: Kind, old: str, new: str) -> dict[str, Any]:
    if kind == "category" and case.category == old:
        return {"category": new}
    if kind == "load":
        return {"loads": case.loads.renamed(old, new)}
    return {"combine": case.combine.renamed(old, new)} if kind == "case" else {}


def _section_renamed(section: Section, kind: Kind, old: str, new: str) -> dict[str, Any]:
    if kind != "load":
        return {}
    rows = {key: row.renamed(old, new) for key, row in section.resultants.items()}
    same = all(rows[key] is row for key, row in section.resultants.items())
    return {
        "not_felt": _list_renamed(section.not_felt, old, new),
        "resultants": section.resultants if same else FrozenMap(rows),
    }


def _point_renamed(point: Point, kind: Kind, old: str, new: str) -> dict[str, Any]:
    match kind:
        case "material" if point.material == old:
            return {"material": new}
        case "section" if point.section == old:
            return {"section": new}
        case "load":
            felt = point.not_felt if point.not_felt == "rest" else _list_renamed(point.not_felt, old, new)
            return {"per_load": point.per_load.renamed(old, new), "not_felt": felt}
        case "case":
            given = point.temperature
            moved = given.renamed(old, new) if isinstance(given, FrozenMap) else given
            return {"stress": point.stress.renamed(old, new), "temperature": moved}
    return {}


def _list_renamed(names: Any, old: str, new: str) -> Any:
    return tuple(new if name == old else name for name in names) if old in names else names
