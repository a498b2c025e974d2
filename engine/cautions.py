"""Reasons not to trust a margin. A blocking one keeps the project from passing until a person takes it on."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from engine.cells import Flags
from engine.envelope import TOLERANCE, Envelope, least_accepted
from engine.figures import number_text
from engine.integrity import CAUTION_NAMES
from engine.material import DUCTILE_ELONGATION, Material
from engine.project import Project
from engine.rating import Rating
from engine.table import MarginTable

NOTE_NAMES = ("no-source-strength", "no-source-stress", "no-temperature", "ultimate-temperature", "ultimate-elastic")
"""The cautions that do not block."""
MOST_NAMED = 4
"""Cases that the text of a caution names before it only counts them."""


@dataclass(frozen=True, slots=True)
class Caution:
    """One reason at one point."""

    name: str
    """One of CAUTION_NAMES or NOTE_NAMES."""
    text: str
    """Why, with its numbers, for a person."""
    blocking: bool
    """Whether it keeps the project from passing while not acknowledged."""
    acknowledged: bool = False
    """Whether a person has taken it on."""


def blocking_flags(project: Project, rating: Rating, envelope: Envelope) -> dict[str, Flags]:
    """(points,) by name of blocking caution: the points that have it, acknowledged or not."""
    materials = _materials(project, rating)
    brittle = np.array([m.elongation is not None and m.elongation < DUCTILE_ELONGATION for m in materials], dtype=bool)
    outside = np.array([_outside(m, rating, i).any() for i, m in enumerate(materials)], dtype=bool)
    with np.errstate(invalid="ignore"):
        low = np.zeros(len(project.points), dtype=bool)
        for limit in np.flatnonzero(rating.asked.any(axis=1)):
            low |= rating.factor[limit] < 1
        low |= bool((rating.required < 1).any())
    found = (brittle[rating.of_point], envelope.tension > 0, outside[rating.of_point], low)
    return dict(zip(CAUTION_NAMES, found, strict=True))


@dataclass(frozen=True, slots=True)
class Tally:
    """How many blocking cautions there are, point by point."""

    standing: int
    """Nobody has acknowledged them."""
    acknowledged: int
    """A person has taken them on."""


def tally(project: Project, rating: Rating, envelope: Envelope) -> Tally:
    """The blocking cautions of a project, counted."""
    flags = blocking_flags(project, rating, envelope)
    raised = sum(int(flag.sum()) for flag in flags.values())
    place = {point.name: i for i, point in enumerate(project.points)}
    taken = sum(bool(flags[given.caution][place[given.point]]) for given in project.acknowledgements)
    return Tally(raised - taken, taken)


def margins_pass(envelope: Envelope) -> bool:
    """Whether some margin is known and all known ones of the accepted theories are at least zero."""
    least = least_accepted(envelope.least, envelope.accept)
    known = least[~np.isnan(least)]
    return bool(len(known) and (known >= -TOLERANCE).all())


def passes(project: Project, rating: Rating, envelope: Envelope) -> bool:
    """Whether the margins pass and no caution blocks."""
    return margins_pass(envelope) and tally(project, rating, envelope).standing == 0


def complete(envelope: Envelope, cases: int) -> bool:
    """Whether there are cells and none lacks anything."""
    return len(envelope.missing) > 0 and cases > 0 and not envelope.missing.any()


def note_flags(table: MarginTable) -> dict[str, Flags]:
    """(points,) by name of note."""
    project, rating = table.project, table.rating
    materials = _materials(project, rating)
    of_point = rating.of_point

    def by_class(test: Callable[[Material, int], bool]) -> Flags:
        flags: Flags = np.array([test(material, i) for i, material in enumerate(materials)], dtype=bool)[of_point]
        return flags

    return {
        "no-source-strength": by_class(lambda material, _: not material.source),
        "no-source-stress": np.array([not point.source for point in project.points], dtype=bool),
        "no-temperature": by_class(lambda m, i: m.tabled and bool(np.isnan(rating.temperature[i]).any())),
        "ultimate-temperature": by_class(lambda m, i: bool(_plain_ultimate(m, rating, i).any())),
        "ultimate-elastic": np.asarray(_elastic(table, slice(None)).any(axis=1)),
    }


def of_point(table: MarginTable, row: int) -> list[Caution]:
    """The cautions of one point, blocking ones first."""
    project = table.project
    point = project.points[row]
    taken = {given.caution for given in project.acknowledgements if given.point == point.name}
    flags = blocking_flags(project, table.rating, table.envelope)
    found = [Caution(name, _text(table, row, name), True, name in taken) for name in CAUTION_NAMES if flags[name][row]]
    notes = note_flags_of(table, row)
    return found + [Caution(name, _text(table, row, name), False) for name in NOTE_NAMES if name in notes]


def note_flags_of(table: MarginTable, row: int) -> set[str]:
    """Names of the notes of one point, for less work than all."""
    point, rating = table.project.points[row], table.rating
    material = _material(table, row)
    place = int(rating.of_point[row])
    found = {
        "no-source-strength": not material.source,
        "no-source-stress": not point.source,
        "no-temperature": material.tabled and bool(np.isnan(rating.temperature[place]).any()),
        "ultimate-temperature": bool(_plain_ultimate(material, rating, place).any()),
        "ultimate-elastic": bool(_elastic(table, slice(row, row + 1)).any()),
    }
    return {name for name, flag in found.items() if flag}


def _materials(project: Project, rating: Rating) -> list[Material]:
    by_name = {material.name: material for material in project.materials}
    return [by_name[name] for name, _ in rating.classes]


def _material(table: MarginTable, row: int) -> Material:
    name = table.project.points[row].material
    return next(material for material in table.project.materials if material.name == name)


def _outside(material: Material, rating: Rating, place: int) -> Flags:
    """(cases,): a temperature is given that neither a table of the yield nor the range covers."""
    given = rating.temperature[place]
    if material.yield_at:
        return np.zeros(given.shape, dtype=bool)
    if material.range is None:
        return np.asarray(~np.isnan(given))
    outside: Flags = (given < material.range[0]) | (given > material.range[1])
    return outside


def _plain_ultimate(material: Material, rating: Rating, place: int) -> Flags:
    """(cases,): the plain ultimate serves at a temperature for which only the yield is tabled."""
    given = rating.temperature[place]
    if not material.yield_at or material.ultimate_at or material.ultimate is None:
        return np.zeros(given.shape, dtype=bool)
    inside = (given >= material.yield_at[0][0]) & (given <= material.yield_at[-1][0])
    covered = np.zeros(given.shape, dtype=bool)
    if material.range is not None:
        covered = (given >= material.range[0]) & (given <= material.range[1])
    plain: Flags = rating.asked[1] & inside & ~covered
    return plain


def _elastic(table: MarginTable, rows: slice) -> Flags:
    """(rows, cases): ultimate is tested, and the elastic stress is above a yield strength."""
    rating = table.rating
    classes = rating.of_point[rows]
    asked = np.flatnonzero(rating.asked[1])
    found = np.zeros((len(classes), rating.asked.shape[1]), dtype=bool)
    if not len(asked):
        return found
    with np.errstate(invalid="ignore"):
        for theory in range(2):
            bound = rating.strength[0, theory][:, asked][classes] * (1 + TOLERANCE)
            found[:, asked] |= table.values[theory, rows][:, asked] > bound
    found[:, asked] &= ~np.isnan(rating.strength[1, 1][:, asked])[classes]
    return found


def _first(table: MarginTable, flags: Flags) -> tuple[int, str]:
    column = int(np.argmax(flags))
    return column, table.project.checked[column].name


def _text(table: MarginTable, row: int, name: str) -> str:
    """Why a caution stands, with the numbers of the first case that raises it."""
    material, rating = _material(table, row), table.rating
    place = int(rating.of_point[row])
    match name:
        case "elongation":
            least = f"elongation {number_text(material.elongation or 0.0)} is below {DUCTILE_ELONGATION}"
            return f"{least}: the theories are for ductile metals"
        case "hydrostatic-tension":
            return _tension_text(table, row)
        case "temperature":
            uncovered = _named_temperatures(table, place, _outside(material, rating, place))
            return f"no table and no range of {material.name} covers {uncovered}; its plain values serve there"
        case "factor-below-one":
            return "a required factor or the point factor is below 1"
        case "no-source-strength":
            return f"no source is given for the strengths of {material.name}"
        case "no-source-stress":
            return "no source is given for the stresses of this point"
        case "no-temperature":
            _, case = _first(table, np.isnan(rating.temperature[place]))
            return f"{case} has no temperature, and {material.name} has a table; the plain values were used"
        case "ultimate-temperature":
            _, case = _first(table, _plain_ultimate(material, rating, place))
            return f"{material.name} has no ultimate-at: the plain ultimate was used in {case}"
        case _:
            _, case = _first(table, _elastic(table, slice(row, row + 1))[0])
            return f"the elastic stress in {case} is above yield, so its ultimate margin is only a guide"


def _named_temperatures(table: MarginTable, place: int, flags: Flags) -> str:
    """The flagged cases with their temperatures, hottest first: "350 in LC14, 150 in LC07 and 3 more cases"."""
    given = table.rating.temperature[place]
    columns = sorted(np.flatnonzero(flags).tolist(), key=lambda column: -given[column])
    named = [f"{number_text(float(given[c]))} in {table.project.checked[c].name}" for c in columns[:MOST_NAMED]]
    more = len(columns) - len(named)
    return ", ".join(named) + (f" and {more} more cases" if more > 1 else f" and {more} more case" if more else "")


def _tension_text(table: MarginTable, row: int) -> str:
    rating = table.rating
    column, case = _first(table, table.hydrostatic[row])
    total = sum(table.stress(row, column).tolist()[:3]) * float(rating.factor[0, row])
    factor = float(np.fmax(*rating.required[0, :, column]))
    strength = float(rating.strength[0, 1, rating.of_point[row], column])
    return f"sum of principals {total:.1f} in {case} is above 4 x {number_text(strength)} / {number_text(factor)}"
