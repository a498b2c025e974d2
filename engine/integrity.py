"""What must hold between the parts of a project: names that exist, no rings, units of the system, axes said."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any

from engine.loads import Case, Cycle, Load, dependency_order
from engine.project import KINDS, Acknowledgement, Kind, Point, Project
from engine.reading import Fault, clean, did_you_mean, shown
from engine.sections import Section
from engine.units import SYSTEMS, UnitError, kind_of_load_unit

CAUTION_NAMES = ("elongation", "hydrostatic-tension", "temperature", "factor-below-one")
"""The cautions that block, and so can be acknowledged."""
MOST_HINTS = 50
"""Names that nothing defines for which a similar one is looked up; more than messages ever show."""


@dataclass(frozen=True, slots=True)
class Names:
    """What a project defines, for looking names up."""

    of: Mapping[Kind, frozenset[str]]
    """By kind."""
    hints: dict[tuple[Kind, str], str] = field(default_factory=dict, compare=False)
    """What was looked up for a message so far: a search among all names, and a file may have thousands to look up."""

    @classmethod
    def in_project(cls, project: Project) -> Names:
        """The names of a project."""
        return cls({kind: frozenset(project.names(kind)) for kind in KINDS})

    def missing(self, kind: Kind, names: Iterable[str], *path: str) -> Iterator[Fault]:
        """A fault for each name that nothing of the kind defines; its path ends in the name."""
        for name in names:
            if name not in self.of[kind]:
                yield Fault((*path, name), self._message(kind, name))

    def needed(self, kind: Kind, name: str, key: str) -> Iterator[Fault]:
        """A fault if the value of a key names nothing."""
        if name not in self.of[kind]:
            yield Fault((key,), self._message(kind, name))

    def listed(self, kind: Kind, names: Iterable[str], key: str) -> Iterator[Fault]:
        """A fault for each place of a list that names nothing."""
        for place, name in enumerate(names):
            if name not in self.of[kind]:
                yield Fault((key, place), self._message(kind, name))

    def _message(self, kind: Kind, name: str) -> str:
        if len(self.hints) < MOST_HINTS and (kind, name) not in self.hints:
            self.hints[kind, name] = did_you_mean(name, self.of[kind])
        return f"no {kind} is named {shown(name)}{self.hints.get((kind, name), '')}"


def of_part(kind: str, part: Any, project: Project, names: Names) -> list[Fault]:
    """Faults in what one part says about others, paths from the part down."""
    if kind == "load":
        return list(_of_load(part, project))
    if kind == "case":
        return list(_of_case(part, names))
    if kind == "section":
        return list(_of_section(part, names))
    if kind == "point":
        return list(_of_point(part, names))
    if kind == "acknowledge":
        return list(_of_acknowledgement(part, names))
    return []


def _of_load(load: Load, project: Project) -> Iterator[Fault]:
    try:
        kind_of_load_unit(load.unit, SYSTEMS[project.settings.units])
    except UnitError as error:
        yield Fault(("unit",), f"found {shown(load.unit)}: {error}")


def _of_case(case: Case, names: Names) -> Iterator[Fault]:
    yield from names.needed("category", case.category, "category")
    yield from names.missing("load", case.loads, "loads")
    yield from names.missing("case", case.combine, "combine")


def _of_section(section: Section, names: Names) -> Iterator[Fault]:
    yield from names.listed("load", section.not_felt, "not-felt")
    for resultant, parts in section.resultants.items():
        yield from names.missing("load", parts, "resultants", resultant)


def _of_point(point: Point, names: Names) -> Iterator[Fault]:
    yield from names.needed("material", point.material, "material")
    if point.not_felt != "rest":
        yield from names.listed("load", point.not_felt, "not-felt")
        for place, name in enumerate(point.not_felt):
            if name in point.per_load:
                yield Fault(("not-felt", place), f"{shown(name)} also has a per-load row: felt or not felt, not both")
    if not names.of["load"].issuperset(point.per_load.names):
        yield from names.missing("load", point.per_load, "per-load")
    if not names.of["case"].issuperset(point.stress.names):
        yield from names.missing("case", point.stress, "stress")
    if not isinstance(point.temperature, float | None):
        yield from names.missing("case", point.temperature, "temperature")
    yield from _of_place(point, names)


def _of_place(point: Point, names: Names) -> Iterator[Fault]:
    rows = len(point.per_load) + len(point.stress) > 0
    if point.section:
        yield from names.needed("section", point.section, "section")
        if rows and point.axes is None:
            yield Fault(
                (),
                "has a section and rows of its own, expected axes: directions x and y of its rows on the section",
            )
        if point.at is None:
            yield Fault((), "has a section, expected at = [y, z], its place on it")
    else:
        for key, given in (("at", point.at), ("kt", len(point.kt)), ("axes", point.axes)):
            if given:
                yield Fault((key,), f"{key} has a meaning only on a section, and this point names none")
    if point.kt_limits is not None and not point.kt:
        yield Fault(("kt-limits",), "kt-limits has a meaning only beside kt")


def _of_acknowledgement(given: Acknowledgement, names: Names) -> Iterator[Fault]:
    yield from names.needed("point", given.point, "point")
    if given.caution not in CAUTION_NAMES:
        hint = did_you_mean(given.caution, CAUTION_NAMES)
        yield Fault(("caution",), f"found {shown(given.caution)}, expected one of {', '.join(CAUTION_NAMES)}{hint}")


def of_combinations(project: Project) -> list[Fault]:
    """Rings of combinations, and combinations without a temperature of which an ingredient has one."""
    cases = {case.name: case for case in project.cases}
    place = {case.name: i for i, case in enumerate(project.cases)}
    try:
        order = dependency_order(cases)
    except Cycle as ring:
        path = ("case", place[ring.names[0]], "combine", ring.names[1])
        return [Fault(path, f"cases combine one another in a ring: {' -> '.join(clean(name) for name in ring.names)}")]
    faults = []
    warm: dict[str, str] = {}
    for name in order:
        case = cases[name]
        source = next((warm[k] for k in case.combine if k in warm), None)
        if case.temperature is not None:
            warm[name] = name
        elif source is not None:
            warm[name] = source
            message = (
                f"{shown(name)} combines {shown(source)}, which has a temperature, expected a temperature of its own"
            )
            faults.append(Fault(("case", place[name]), message))
    return faults


def _duplicates(names: Iterable[Any]) -> Iterator[tuple[int, Any]]:
    seen: set[Any] = set()
    for place, name in enumerate(names):
        if name in seen:
            yield place, name
        seen.add(name)


def faults(project: Project) -> list[Fault]:
    """Everything that does not hold, paths from the top of the file: (kind, place from 0, keys ...)."""
    names = Names.in_project(project)
    found: list[Fault] = []
    for kind in KINDS:
        for place, name in _duplicates(project.names(kind)):
            found.append(
                Fault(
                    (kind, place, "name"),
                    f"{shown(name)} is the name of an earlier {kind} too, expected each name once",
                )
            )
        for place, part in enumerate(project.of(kind)):
            found += [fault.under(kind, place) for fault in of_part(kind, part, project, names)]
    pairs = [(given.point, given.caution) for given in project.acknowledgements]
    for place, pair in _duplicates(pairs):
        found.append(
            Fault(("acknowledge", place), f"{shown(pair[0])} {shown(pair[1])} is acknowledged twice, expected once")
        )
    for place, given in enumerate(project.acknowledgements):
        found += [fault.under("acknowledge", place) for fault in of_part("acknowledge", given, project, names)]
    return found + of_combinations(project)
