"""What an edit touched, as far as margins go. Identity names the candidates, resolved numbers decide."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from operator import is_not
from typing import Any

import numpy as np

from engine.cells import Flags
from engine.envelope import Places
from engine.frozen import Array
from engine.loads import Case, LoadSets
from engine.project import Project
from engine.rating import Rating
from engine.table import MarginTable

FEW = 8
"""Up to one column in so many is worth computing by columns."""


@dataclass(eq=False, slots=True)
class Touched:
    """Places of what has to be computed again, and the new state's load sets and rating."""

    rows: Places
    """Points whose stress may have changed."""
    rated: Places
    """Other points whose strength or factors changed."""
    columns: Places
    """Checked cases of which something changed."""
    sets: LoadSets
    """Resolved load sets of the new state."""
    rating: Rating
    """Strengths and factors of the new state."""

    def cells(self, shape: tuple[int, int]) -> int:
        """About how many cells are read or computed again in a table of (points, cases)."""
        points, cases = shape
        return (len(self.rows) + len(self.rated)) * cases + len(self.columns) * points


def between(table: MarginTable, new: Project) -> Touched | None:
    """What to compute to get from a table to a project; None where everything is."""
    old = table.project
    if not _comparable(old, new):
        return None
    cases = _differing(old.cases, new.cases)
    if any(old.cases[i].check != new.cases[i].check for i in cases):
        return None
    rows = _differing(old.points, new.points)
    sets, columns = _columns(table, new, cases)
    rating = _rating(table, new, cases, rows)
    rated: Places = np.empty(0, dtype=np.intp)
    if rating is not table.rating:
        rated, more = _rated(table.rating, rating)
        columns = np.union1d(columns, more)
        rated = np.setdiff1d(rated, rows)
    if len(columns) and len(rated):  # a step that does both is rare, and its rows are as well computed whole
        rows = sorted({*rows, *rated.tolist()})
        rated = np.empty(0, dtype=np.intp)
    points, checked = table.shape
    if len(rows) * 2 > points or len(columns) * 2 > checked:
        return None
    return Touched(np.array(rows, dtype=np.intp), rated, columns, sets, rating)


def _differing(old: Sequence[Any], new: Sequence[Any]) -> list[int]:
    """Places at which two equally long sequences do not hold the same object."""
    return [] if old is new else [i for i, other in enumerate(map(is_not, old, new)) if other]


def _comparable(old: Project, new: Project) -> bool:
    """Whether rows, columns and loads of two states stand for the same things, place by place."""
    if len(old.points) != len(new.points) or len(old.cases) != len(new.cases):
        return False
    return old.loads is new.loads or [(x.name, x.sense) for x in old.loads] == [(x.name, x.sense) for x in new.loads]


def _columns(table: MarginTable, new: Project, cases: list[int]) -> tuple[LoadSets, Places]:
    none: Places = np.empty(0, dtype=np.intp)
    old = table.project.cases
    if not cases:
        return table.sets, none
    if all(_same_stress(old[i], new.cases[i]) for i in cases):
        return table.sets.relabelled(new.cases), none
    if any(old[i].name != new.cases[i].name for i in cases):
        sets = LoadSets(new.loads, new.cases)
        affected = [sets.place[name] for name in sets.reached([new.cases[i].name for i in cases])]
    else:
        sets, affected = table.sets.updated(new.cases, cases)
    places = np.sort(np.array(affected, dtype=np.intp))
    columns = np.searchsorted(table.of_case, places)
    inside = columns < len(table.of_case)
    columns, places = columns[inside], places[inside]
    return sets, columns[table.of_case[columns] == places]


def _same_stress(old: Case, new: Case) -> bool:
    return old.name == new.name and old.loads == new.loads and old.combine == new.combine


def _rating(table: MarginTable, new: Project, cases: list[int], rows: list[int]) -> Rating:
    old = table.project

    def of_case(case: Case) -> tuple[Any, ...]:
        return case.name, case.category, case.temperature

    same = (
        old.categories is new.categories
        and old.materials is new.materials
        and all(of_case(old.cases[i]) == of_case(new.cases[i]) for i in cases)
        and all(
            (old.points[i].material, old.points[i].temperature, old.points[i].factor)
            == (new.points[i].material, new.points[i].temperature, new.points[i].factor)
            for i in rows
        )
    )
    return table.rating if same else Rating(new)


def _rated(old: Rating, new: Rating) -> tuple[Places, Places]:
    """Rows and columns whose strengths or factors differ; a column is named where only few do."""
    pairs, which = np.unique(np.stack([old.of_point, new.of_point]), axis=1, return_inverse=True)
    differ = np.zeros((pairs.shape[1], old.asked.shape[1]), dtype=bool)
    for i, (a, b) in enumerate(pairs.T):
        for before, after in ((old.allowable, new.allowable), (old.strength, new.strength)):
            differ[i] |= _unlike(before[:, :, a], after[:, :, b])
    differ |= _unlike(old.required, new.required)  # hydrostatic tension reads it beside the strength
    columns: Places = np.flatnonzero(differ.any(axis=0))
    if len(columns) * FEW <= differ.shape[1]:
        differ[:, columns] = False
    else:
        columns = np.empty(0, dtype=np.intp)
    factors = np.not_equal(old.factor, new.factor).any(axis=0)
    of_pair = np.asarray(differ.any(axis=1))
    return np.flatnonzero(of_pair[which.reshape(-1)] | factors), columns


def _unlike(old: Array, new: Array) -> Flags:
    """(cases,): whether the numbers of a case differ, NaN being like NaN. old, new: (2, 2, cases)."""
    return np.asarray(~((old == new) | (np.isnan(old) & np.isnan(new))).all(axis=(0, 1)))
