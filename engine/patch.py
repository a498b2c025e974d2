"""A patch: what an edit changes in a MarginTable, computed without touching it. A preview is a patch not applied."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from engine import touched
from engine.cells import (
    GROUP,
    Flags,
    Governed,
    equivalents_of,
    few_margins,
    govern,
    hydrostatic_flags,
    least_of,
    missing_of,
)
from engine.envelope import TOLERANCE, Envelope, Places
from engine.frozen import Array
from engine.influence import Influence
from engine.loads import LoadSets
from engine.project import Project
from engine.rating import Rating
from engine.table import MarginTable
from engine.touched import Touched

CLOSE = 2 * TOLERANCE
"""A margin this near a least one may be it, or tie with it."""


class Patch:
    """New values of the cells that differ, and the Envelope of the whole project with them."""

    __slots__ = (
        "_at",
        "_base",
        "_column_hydrostatic",
        "_column_values",
        "_columns",
        "_group_least",
        "_groups",
        "_influence",
        "_rated",
        "_rated_hydrostatic",
        "_row_hydrostatic",
        "_row_least",
        "_row_values",
        "_rows",
        "_steady",
        "envelope",
        "project",
        "rating",
        "sets",
    )

    project: Project
    """The state after the edit."""
    sets: LoadSets
    """Its resolved load sets."""
    rating: Rating
    """Its strengths and factors."""
    envelope: Envelope
    """What governs in it."""

    @classmethod
    def between(cls, table: MarginTable, project: Project) -> Patch | None:
        """The patch from a table to a project; None where so much changed that all is computed afresh."""
        found = touched.between(table, project)
        return None if found is None else cls(table, project, found)

    def __init__(self, table: MarginTable, project: Project, found: Touched) -> None:
        self._base, self.project = table, project
        self.sets, self.rating = found.sets, found.rating
        self._rows, self._rated, self._columns = found.rows, found.rated, found.columns
        settings = project.settings
        self.envelope = replace(table.envelope, accept=settings.accept, thin=settings.thin)
        if len(self._rows) or len(self._rated) or len(self._columns):
            before = table.envelope
            self.envelope = replace(
                self.envelope,
                least=before.least.copy(),
                case=before.case.copy(),
                limit=before.limit.copy(),
                missing=before.missing.copy(),
                tension=before.tension.copy(),
            )
        self._compute_columns()
        self._compute_rows()

    # ---- columns: a case changed, for all points but those whose whole row is computed

    def _compute_columns(self) -> None:
        table, columns = self._base, self._columns
        points, _ = table.shape
        whole = np.zeros(points, dtype=bool)
        whole[self._rows] = whole[self._rated] = True
        steady = np.flatnonzero(~whole)
        self._steady = steady
        self._groups = np.array(sorted({int(column) // GROUP for column in columns}), dtype=np.intp)
        if not len(columns):
            return
        self._at = slice(None) if len(steady) == points else steady
        new = equivalents_of(table.influence, self.sets, self.rating, steady, columns, table.of_case, self._at)
        self._column_values, self._column_hydrostatic = new.values, new.hydrostatic
        before = table.values[:, self._at][:, :, columns]
        self._count(steady, before, new.values, table.hydrostatic[self._at][:, columns], new.hydrostatic)
        self._govern_columns(steady, before)

    def _count(self, rows: Places, before: Array, after: Array, tense: Flags, tense_after: Flags) -> None:
        """Carry the counts of missing cells and of hydrostatic tension over to the new columns."""
        columns, envelope = self._columns, self.envelope
        envelope.missing[rows] -= missing_of(before, self._base.rating, rows, columns).sum(axis=1)
        envelope.missing[rows] += missing_of(after, self.rating, rows, columns).sum(axis=1)
        envelope.tension[rows] += tense_after.sum(axis=1) - tense.sum(axis=1)

    def _govern_columns(self, steady: Places, before: Array) -> None:
        """Least margins of the touched groups; points whose least the columns had or now have are governed again."""
        table, columns = self._base, self._columns
        limits = 1 + max(*table.rating.limits, *self.rating.limits)
        least = table.group_least[:, :, self._at][:, :, :, self._groups]
        place = np.searchsorted(self._groups, columns // GROUP)
        old = few_margins(before, table.rating, steady, columns, limits)
        new = few_margins(self._column_values, self.rating, steady, columns, limits)
        bound = table.envelope.least[:, steady, None]
        with np.errstate(invalid="ignore"):
            stale = np.flatnonzero((old <= least[:limits, :, :, place] + CLOSE).any(axis=(0, 1, 3)))
            touched = (old <= bound + CLOSE) | (new <= bound + CLOSE) | (np.isnan(bound) & ~np.isnan(new))
        for i, group in enumerate(place):
            np.fmin(least[:limits, :, :, group], new[..., i], out=least[:limits, :, :, group])
        for i, group in enumerate(self._groups):
            least[:, :, stale, i] = self._group_again(steady[stale], stale, int(group))
        self._group_least = least
        rows = np.flatnonzero(touched.any(axis=(0, 1, 3)))
        self._govern(steady[rows], self._all_groups(steady[rows], rows), self._patched)

    def _group_again(self, rows: Places, local: Places, group: int) -> Array:
        """(2 limits, 2 theories, rows): least margins of one group, read from its cells."""
        _, cases = self._base.shape
        columns = slice(group * GROUP, min((group + 1) * GROUP, cases))
        values = self._base.values[:, :, columns].take(rows, axis=1)
        for i, column in enumerate(self._columns):
            if column // GROUP == group:
                values[:, :, column - columns.start] = self._column_values[:, local, i]
        return least_of(values, self.rating, rows, columns)[..., 0]

    def _all_groups(self, rows: Places, local: Places) -> Array:
        least = self._base.group_least[:, :, rows]
        least[:, :, :, self._groups] = self._group_least[:, :, local]
        return least

    def _patched(self, theory: int, rows: Places, columns: Places) -> Array:
        """Equivalents of cells, the changed columns among them."""
        found = self._base.equivalents_at(theory, rows, columns)
        local = np.searchsorted(self._steady, rows)
        for i, column in enumerate(self._columns):
            at = columns == column
            if at.any():
                where = np.nonzero(at)
                found[where] = self._column_values[theory, local[where[0]], i]
        return found

    # ---- rows: a point changed, or the strengths that hold for it

    def _compute_rows(self) -> None:
        table = self._base
        _, cases = table.shape
        columns = np.arange(cases)
        if not cases:
            return
        if len(self._rows):
            self._influence = Influence([self.project.points[i] for i in self._rows], self.project.loads)
            local = np.arange(len(self._rows))
            new = equivalents_of(self._influence, self.sets, self.rating, self._rows, columns, table.of_case, local)
            self._row_values, self._row_hydrostatic = new.values, new.hydrostatic
        if len(self._rated):
            self._compute_rated()
        self._row_least = np.empty((2, 2, len(self._rows) + len(self._rated), table.group_least.shape[3]))
        if len(self._rows):
            self._whole(self._rows, self._row_values, self._row_hydrostatic, slice(0, len(self._rows)))
        for start in range(0, len(self._rated), max(1, 65536 // cases)):
            run = slice(start, start + max(1, 65536 // cases))
            rows = self._rated[run]
            values = table.values[:, rows]
            after = slice(len(self._rows) + start, len(self._rows) + start + len(rows))
            self._whole(rows, values, self._rated_hydrostatic[run], after)

    def _compute_rated(self) -> None:
        """Hydrostatic tension against the new strengths; equivalents stay."""
        table = self._base
        trace = table.influence.trace(self._rated, self.sets, table.of_case)
        flags = hydrostatic_flags(trace, self.rating, self._rated, slice(None))
        self._rated_hydrostatic = flags & ~np.isnan(table.values[1][self._rated])

    def _whole(self, rows: Places, values: Array, hydrostatic: Flags, place: slice) -> None:
        _, cases = self._base.shape
        least = least_of(values, self.rating, rows)
        self._row_least[:, :, place] = least
        self.envelope.missing[rows] = missing_of(values, self.rating, rows, slice(None)).sum(axis=1)
        self.envelope.tension[rows] = hydrostatic.sum(axis=1)

        def given(theory: int, _: Places, columns: Places) -> Array:
            found: Array = np.take_along_axis(values[theory], columns, axis=1)
            return found

        self._govern(rows, least, given, cases)

    def _govern(self, rows: Places, least: Array, values: object, cases: int | None = None) -> None:
        found: Governed = govern(values, least, self.rating, rows, cases or self._base.shape[1])  # type: ignore[arg-type]
        self.envelope.least[:, rows] = found.least
        self.envelope.case[:, rows] = found.case
        self.envelope.limit[:, rows] = found.limit

    # ---- applying

    def apply(self) -> MarginTable:
        """The table of the new state. It takes the base's arrays over: the base cannot be read afterwards."""
        table = self._base.successor(self.project, self.sets, self.rating, self.envelope)
        _, cases = table.shape
        values, hydrostatic, least = table.values, table.hydrostatic, table.group_least
        if not cases:
            table.influence = Influence(self.project.points, self.project.loads)
            return table
        if len(self._columns):
            at = self._steady[:, None]
            values[:, at, self._columns] = self._column_values
            hydrostatic[at, self._columns] = self._column_hydrostatic
            least[:, :, at, self._groups] = self._group_least
        if len(self._rated):
            hydrostatic[self._rated] = self._rated_hydrostatic
            least[:, :, self._rated] = self._row_least[:, :, len(self._rows) :]
        if len(self._rows):
            table.influence.assign(self._rows, self._influence)
            values[:, self._rows] = self._row_values
            hydrostatic[self._rows] = self._row_hydrostatic
            least[:, :, self._rows] = self._row_least[:, :, : len(self._rows)]
        return table
