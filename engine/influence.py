"""Stress at a set of points: everything linear is one matrix, and rows given directly are added or stand alone."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np
import numpy.typing as npt

from engine.envelope import Places
from engine.frozen import Array
from engine.loads import Case, Load, LoadSets
from engine.project import Point


class Influence:
    """Stress per unit load of a sequence of points, and their direct rows. `stress()` serves any block of cells."""

    __slots__ = ("linear", "per_load", "points", "rowed", "undefined", "unknown")

    per_load: Array
    """(6, points, loads), tension positive, stress unit per load unit."""
    unknown: npt.NDArray[np.bool_]
    """(points, loads): a linear point neither names the load nor says that it does not feel it."""
    linear: npt.NDArray[np.bool_]
    """(points,): loads make the stress; otherwise rows by case are all there is."""
    undefined: npt.NDArray[np.bool_]
    """(points,): stress by a section's formula, which is not computed yet."""
    rowed: npt.NDArray[np.bool_]
    """(points,): has direct rows, or has nothing else."""

    def __init__(self, points: Sequence[Point], loads: Sequence[Load]) -> None:
        self.points = list(points)
        count = len(points)
        place = {load.name: i for i, load in enumerate(loads)}
        uncomputed = np.array([load.sense != "fixed" for load in loads], dtype=bool)
        self.per_load = np.zeros((6, count, len(loads)))
        self.unknown = np.zeros((count, len(loads)), dtype=bool)
        self.linear = np.array([point.linear for point in points], dtype=bool)
        self.undefined = np.array([bool(point.section) for point in points], dtype=bool)
        self.rowed = np.array([len(point.stress) > 0 for point in points], dtype=bool) | ~self.linear
        for rows, named, felt in _alike(points, place):
            self.per_load[:, rows[:, None], named] = np.stack([points[row].per_load.array for row in rows]).transpose(
                2, 0, 1
            )
            self.unknown[rows] = felt & uncomputed
            if points[rows[0]].not_felt != "rest":
                self.unknown[rows] |= felt
                self.unknown[rows[:, None], named] = uncomputed[named]

    def stress(self, rows: slice | Places, sets: LoadSets, cases: Places) -> Array:
        """Stress of a block of cells.

        rows: of the points; cases: places among all cases of `sets`.
        Returns (6, rows, cases), stress unit; NaN where something needed is missing or a number overflows.
        """
        magnitudes = sets.magnitudes[cases]
        per_load = self.per_load[:, rows]
        count = per_load.shape[1]
        if len(cases) == 1:  # BLAS takes another path for one column or row, with another last bit: pad to two
            magnitudes = np.concatenate([magnitudes, magnitudes])
        if count == 1:
            per_load = np.concatenate([per_load, per_load], axis=1)
        with np.errstate(over="ignore", invalid="ignore"):
            block: Array = np.matmul(per_load, magnitudes.T)[:, :count, : len(cases)]
            unknown = self.unknown[rows]
            if unknown.any():
                acting = (magnitudes[: len(cases)] != 0).T
                block[:, unknown.astype(np.float32) @ acting.astype(np.float32) > 0] = np.nan
            self._add_direct(block, rows, sets, cases)
        block[:, self.undefined[rows]] = np.nan
        return block

    def trace(self, rows: slice | Places, sets: LoadSets, cases: Places) -> Array:
        """(rows, cases): sum of the normal stresses, for less work; not to be read where the stress is NaN."""
        magnitudes = sets.magnitudes[cases]
        with np.errstate(over="ignore", invalid="ignore"):
            total: Array = self.per_load[:3, rows].sum(axis=0) @ magnitudes.T
            places = np.arange(len(self.points))[rows]
            local = np.flatnonzero(self.rowed[places])
            if len(local):
                total[local] += self._direct(places[local], sets, cases)[:3].sum(axis=0)
        return total

    def _add_direct(self, block: Array, rows: slice | Places, sets: LoadSets, cases: Places) -> None:
        places = np.arange(len(self.points))[rows]
        local = np.flatnonzero(self.rowed[places])
        if len(local):
            block[:, local] += self._direct(places[local], sets, cases)

    def _direct(self, rows: Places, sets: LoadSets, cases: Places) -> Array:
        """(6, rows, cases): direct stress through combinations, by the two rules of DESIGN at once.

        A linear point adds its rows and those of what the case combines, and an absent row adds nothing. Any other
        point has its own row where listed; else, if the case combines and has no load of its own, the sum of what
        it combines; else nothing is known.
        """
        needed = sets.ingredients(cases)
        at = {case: i for i, case in enumerate(needed)}
        linear = self.linear[rows]
        found = np.zeros((len(needed), 6, len(rows)))
        found[:, :, ~linear] = np.nan
        listed = np.zeros((len(needed), len(rows)), dtype=bool)
        for i, row in enumerate(rows):
            self._place_rows(self.points[row], sets, at, found[:, :, i], listed[:, i])
        for case in needed:
            self._combine(sets, case, at, found, listed, linear)
        return found[[at[case] for case in cases]].transpose(1, 2, 0)

    def _place_rows(
        self, point: Point, sets: LoadSets, at: dict[int, int], found: Array, listed: npt.NDArray[np.bool_]
    ) -> None:
        if len(at) < len(point.stress):
            pairs = [(at[case], point.stress.index(sets.cases[case].name)) for case in at]
            pairs = [(here, there) for here, there in pairs if there >= 0]
        else:
            placed = ((at.get(sets.place[name], -1), there) for there, name in enumerate(point.stress.names))
            pairs = [(here, there) for here, there in placed if here >= 0]
        if pairs:
            here, there = np.array(pairs).T
            found[here] = point.stress.array[there]
            listed[here] = True

    @staticmethod
    def _combine(
        sets: LoadSets,
        case: int,
        at: dict[int, int],
        found: Array,
        listed: npt.NDArray[np.bool_],
        linear: npt.NDArray[np.bool_],
    ) -> None:
        own: Case = sets.cases[case]
        if not own.combine:
            return
        here = at[case]
        total = np.zeros(found.shape[1:])
        for name, factor in own.combine.items():
            total += factor * found[at[sets.place[name]]]
        alone = np.full_like(total, np.nan) if own.acts else total
        found[here] = np.where(linear, found[here] + total, np.where(listed[here], found[here], alone))

    def assign(self, rows: Places, other: Influence) -> None:
        """Take over the points of another one at these rows."""
        for i, row in enumerate(rows):
            self.points[row] = other.points[i]
        self.per_load[:, rows] = other.per_load
        self.unknown[rows] = other.unknown
        self.linear[rows] = other.linear
        self.undefined[rows] = other.undefined
        self.rowed[rows] = other.rowed


def _alike(points: Sequence[Point], place: dict[str, int]) -> Iterator[tuple[Places, Places, npt.NDArray[np.bool_]]]:
    """Linear points with the same loads named and not felt, together.

    Gives their rows, the places of the loads that they name, and (loads,) which loads they feel or may feel.
    """
    groups: dict[tuple[object, object], list[int]] = {}
    for row, point in enumerate(points):
        if point.linear:
            groups.setdefault((point.per_load.names, point.not_felt), []).append(row)
    for rows in groups.values():
        first = points[rows[0]]
        named = np.array([place[name] for name in first.per_load.names], dtype=np.intp)
        felt = np.full(len(place), first.not_felt != "rest")
        if first.not_felt != "rest":
            felt[[place[name] for name in first.not_felt]] = False
        felt[named] = True
        yield np.array(rows, dtype=np.intp), named, felt


def why_missing(point: Point, case: Case, project_loads: Sequence[Load], sets: LoadSets) -> str:
    """Why a cell has no stress, in words; empty where it should have one."""
    if point.section:
        return "stress from a section is not computed yet"
    if point.linear:
        return _why_linear(point, case, project_loads, sets)
    if case.combine and case.acts:
        return f"no row for {case.name}, which has loads of its own beside what it combines"
    if case.combine:
        return f"no row for {case.name}, nor for all that it combines"
    return f"no row for {case.name}"


def _why_linear(point: Point, case: Case, project_loads: Sequence[Load], sets: LoadSets) -> str:
    magnitudes = sets.magnitudes[sets.place[case.name]]
    acting = [load for load, value in zip(project_loads, magnitudes, strict=True) if value != 0]
    felt = [
        load
        for load in acting
        if load.name in point.per_load or (point.not_felt != "rest" and load.name not in point.not_felt)
    ]
    for load in felt:
        if load.sense != "fixed":
            return f"load {load.name} is {load.sense}, which is not computed yet"
    for load in felt:
        if load.name not in point.per_load:
            return f"no stress per unit of {load.name}, and not said to be not felt"
    return "the stress is too large for a number"
