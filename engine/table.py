"""MarginTable: all cells of a Project, and what governs its points."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import TypeVar

import numpy as np

from engine.cells import (
    Flags,
    each,
    equivalents_of,
    govern,
    groups_of,
    least_of,
    margins_of,
    missing_of,
)
from engine.envelope import Envelope, Places
from engine.frozen import Array
from engine.influence import Influence
from engine.loads import LoadSets
from engine.material import LIMITS, THEORIES, Limit, Theory
from engine.project import Project
from engine.rating import Rating

T = TypeVar("T")


class ByTheory(Mapping[Theory, Array]):
    """Arrays by theory, made when asked for."""

    def __init__(self, table: MarginTable, limit: Limit, margins: bool) -> None:
        self._table, self._limit, self._margins = table, limit, margins

    def __getitem__(self, theory: Theory) -> Array:
        row = THEORIES.index(theory)
        if self._margins:
            margins: Array = self._table.margins(slice(None), slice(None), LIMITS.index(self._limit))[row]
            return margins
        view: Array = self._table.values[row].view()
        view.setflags(write=False)
        return view

    def __iter__(self) -> Iterator[Theory]:
        return iter(THEORIES)

    def __len__(self) -> int:
        return len(THEORIES)


class MarginTable:
    """Margins of a project: check points x checked cases x limits x theories.

    Equivalents are kept, margins are computed when asked for. The table owns its arrays; when `compute()` or a
    Patch takes them over for another project, this table can no longer be read (RuntimeError).
    """

    __slots__ = (
        "_hydrostatic",
        "_least",
        "_values",
        "envelope",
        "influence",
        "of_case",
        "project",
        "rating",
        "sets",
    )

    project: Project
    """What was computed."""
    influence: Influence
    """Stress per unit load of its points."""
    sets: LoadSets
    """Its resolved load sets."""
    rating: Rating
    """Its strengths and factors."""
    envelope: Envelope
    """What governs its points."""
    of_case: Places
    """(checked cases,): place of each among all cases."""

    def __init__(self, project: Project) -> None:
        """Compute everything afresh."""
        self.project = project
        self.influence = Influence(project.points, project.loads)
        self.sets = LoadSets(project.loads, project.cases)
        self.rating = Rating(project)
        self.of_case = places_of_checked(project)
        points, cases = len(project.points), len(self.of_case)
        self._values: Array | None = np.empty((2, points, cases))
        self._hydrostatic: Flags | None = np.zeros((points, cases), dtype=bool)
        self._least: Array | None = np.full((2, 2, points, groups_of(cases)), np.nan)
        self._fill()

    def _fill(self) -> None:
        points, cases = self.shape
        columns = np.arange(cases)
        values, hydrostatic, groups = self.values, self.hydrostatic, self.group_least
        missing, tension = np.zeros(points, dtype=np.intp), np.zeros(points, dtype=np.intp)
        least, case, limit = (
            np.full((2, points), np.nan),
            np.full((2, points), -1),
            np.zeros((2, points), dtype=np.intp),
        )

        def block(rows: Places) -> None:
            run = slice(rows[0], rows[-1] + 1)
            found = equivalents_of(self.influence, self.sets, self.rating, rows, columns, self.of_case, run)
            values[:, run], hydrostatic[run] = found.values, found.hydrostatic
            groups[:, :, run] = least_of(found.values, self.rating, rows)
            missing[run] = missing_of(found.values, self.rating, rows, columns).sum(axis=1)
            tension[run] = found.hydrostatic.sum(axis=1)
            governed = govern(self.equivalents_at, groups[:, :, run], self.rating, rows, cases)
            least[:, run], case[:, run], limit[:, run] = governed.least, governed.case, governed.limit

        if points and cases:
            each(block, points, cases)
        settings = self.project.settings
        self.envelope = Envelope(least, case, limit, missing, tension, settings.accept, settings.thin)

    @property
    def shape(self) -> tuple[int, int]:
        """Points and checked cases."""
        return len(self.project.points), len(self.of_case)

    @property
    def values(self) -> Array:
        """(2, points, cases): equivalents by theory, all factors excluded. Not to be written."""
        return self._own(self._values)

    @property
    def hydrostatic(self) -> Flags:
        """(points, cases): cells under hydrostatic tension beyond what yield margins can vouch for."""
        return self._own(self._hydrostatic)

    @property
    def group_least(self) -> Array:
        """(2 limits, 2 theories, points, groups of cases): least margins, NaN where none is known."""
        return self._own(self._least)

    @staticmethod
    def _own(array: T | None) -> T:
        """An array that this table still has."""
        if array is None:
            raise RuntimeError("this table's arrays were taken over by a later one")
        return array

    @property
    def margin(self) -> Mapping[Limit, Mapping[Theory, Array]]:
        """(points, cases) margins by limit and theory; infinite: no stress; NaN: not known or not asked."""
        return {limit: ByTheory(self, limit, margins=True) for limit in LIMITS}

    @property
    def equivalent(self) -> Mapping[Limit, Mapping[Theory, Array]]:
        """(points, cases) equivalent stress by limit and theory, all factors excluded; NaN: not known."""
        return {limit: ByTheory(self, limit, margins=False) for limit in LIMITS}

    def margins(self, rows: slice | Places, columns: slice | Places, limit: int) -> Array:
        """(2, rows, columns) margins of a block by theory; limit: place in LIMITS."""
        points, cases = self.shape
        at = np.arange(points)[rows]
        return margins_of(self.values[:, rows][:, :, columns], self.rating, at, np.arange(cases)[columns], limit)

    def missing(self, rows: slice | Places, columns: slice | Places) -> Flags:
        """(rows, columns): cells of which an asked limit is not known."""
        points, cases = self.shape
        at = np.arange(points)[rows]
        return missing_of(self.values[:, rows][:, :, columns], self.rating, at, np.arange(cases)[columns])

    def stress(self, row: int, column: int) -> Array:
        """(6,) stress of a cell, point and concentration factors excluded; NaN where not known."""
        self._own(self._values)  # the influence goes with the arrays
        found: Array = self.influence.stress(np.array([row]), self.sets, self.of_case[[column]])[:, 0, 0]
        return found

    def equivalents_at(self, theory: int, rows: Places, columns: Places) -> Array:
        """Equivalents of cells by their places; rows (n,), columns (n, k); returns (n, k)."""
        found: Array = self.values[theory].reshape(-1).take(rows[:, None] * len(self.of_case) + columns)
        return found

    def successor(self, project: Project, sets: LoadSets, rating: Rating, envelope: Envelope) -> MarginTable:
        """A table with this one's arrays, for the caller to change; this one cannot be read afterwards."""
        new = object.__new__(MarginTable)
        new._values, new._hydrostatic, new._least = self.values, self.hydrostatic, self.group_least
        self._values = self._hydrostatic = self._least = None
        new.influence, new.of_case = self.influence, self.of_case
        new.project, new.sets, new.rating, new.envelope = project, sets, rating, envelope
        return new


def places_of_checked(project: Project) -> Places:
    """(checked cases,): place of each among all cases."""
    return np.array([i for i, case in enumerate(project.cases) if case.check], dtype=np.intp)
