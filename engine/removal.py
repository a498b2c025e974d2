"""Taking a part away together with what refers to it."""

from __future__ import annotations

from engine.edits import Batch, Edit, Refusal, Remove, Set, Withdraw
from engine.frozen import FrozenMap
from engine.project import Kind, Point, Project
from engine.references import uses

CANNOT_GO = ("category", "material", "section")
"""Kinds that a user must replace first: nothing could stand in their place."""


def removal(project: Project, kind: Kind, name: str) -> Edit:
    """The edit that removes a part and all references to it as one step.

    Raises Refusal where something needs the part: a case its category, a point its material or section.
    """
    users = uses(project, kind, name)
    if not users:
        return Remove(kind, name)
    if kind in CANNOT_GO:
        more = f" and {len(users) - 1} more" if len(users) > 1 else ""
        raise Refusal(f"{kind} {name} is used by {users[0]}{more}: give that another {kind} first")
    steps = _references(project, kind, name)
    return Batch((*steps, Remove(kind, name)), f"delete {kind} {name} and {len(steps)} references to it")


def _references(project: Project, kind: Kind, name: str) -> list[Edit]:
    steps: list[Edit] = []
    if kind == "point":
        return [Withdraw(a.point, a.caution) for a in project.acknowledgements if a.point == name]
    for case in project.cases:
        key = "loads" if kind == "load" else "combine"
        if name in getattr(case, key):
            steps.append(Set("case", case.name, (key, name), None))
    for section in project.sections:
        steps += _of_section(project, section.name, name) if kind == "load" else []
    for point in project.points:
        steps += _of_point(point, kind, name)
    return steps


def _of_section(project: Project, section: str, load: str) -> list[Edit]:
    found = next(s for s in project.sections if s.name == section)
    steps: list[Edit] = []
    if load in found.not_felt:
        steps.append(Set("section", section, ("not-felt",), [n for n in found.not_felt if n != load]))
    steps += [
        Set("section", section, ("resultants", key, load), None) for key, row in found.resultants.items() if load in row
    ]
    return steps


def _of_point(point: Point, kind: Kind, name: str) -> list[Edit]:
    steps: list[Edit] = []
    if kind == "load":
        if name in point.per_load:
            steps.append(Set("point", point.name, ("per-load", name), None))
        if point.not_felt != "rest" and name in point.not_felt:
            steps.append(Set("point", point.name, ("not-felt",), [n for n in point.not_felt if n != name] or None))
    if kind == "case":
        if name in point.stress:
            steps.append(Set("point", point.name, ("stress", name), None))
        if isinstance(point.temperature, FrozenMap) and name in point.temperature:
            left = {case: value for case, value in point.temperature.items() if case != name}
            steps.append(Set("point", point.name, ("temperature",), left or None))
    return steps
