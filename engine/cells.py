"""The numbers of all cells: equivalents kept, least margins over groups of cases, and what a changed part replaces."""

from __future__ import annotations

import os
from collections.abc import Callable, Iterator
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from engine.criteria import equivalents_into
from engine.envelope import TOLERANCE, Places
from engine.frozen import Array
from engine.influence import Influence
from engine.loads import LoadSets
from engine.rating import Rating

GROUP = 16
"""Cases to a group of least margins: a relieved case is governed again from its group and the other groups' least."""
BLOCK = 65536
"""Cells computed at a time: few enough for little memory, enough that two threads seldom wait for the interpreter."""
PARALLEL = 100_000
"""Cells from which a second thread pays."""
Rows = slice | Places
Flags = npt.NDArray[np.bool_]


def groups_of(cases: int) -> int:
    """How many groups cases fall into."""
    return -(-cases // GROUP)


def hydrostatic_flags(trace: Array, rating: Rating, rows: Places, columns: Places | slice) -> Flags:
    """Cells whose hydrostatic tension is beyond what yield margins can vouch for.

    Sum of principals x point factor above 4 x yield / required factor, the larger factor of the two theories: the form
    of ASME BPVC VIII-2, 5.3.2. trace: (rows, columns) sums of principal stresses.
    """
    with np.errstate(over="ignore", invalid="ignore"):
        total = trace * rating.factor[0, rows][:, None]
    bound = 4.0 * rating.strength[0, 1][:, columns] / np.fmax(rating.required[0, 0], rating.required[0, 1])[columns]
    with np.errstate(invalid="ignore"):
        return np.asarray(total > bound[rating.of_point[rows]] * (1 + TOLERANCE))


@dataclass(eq=False, slots=True)
class Equivalents:
    """Equivalent stresses of a block of cells, theory first, and which are under hydrostatic tension."""

    values: Array
    """(2, rows, columns): by theory, stress unit; NaN where the stress is not known."""
    hydrostatic: Flags
    """(rows, columns)."""


def equivalents_of(
    influence: Influence, sets: LoadSets, rating: Rating, rows: Places, columns: Places, of_case: Places, local: Rows
) -> Equivalents:
    """Equivalents of a block.

    rows: of the project; local: the same points in `influence`; columns: among the checked cases; of_case: places of
    the checked cases among all cases.
    """
    stress = influence.stress(local, sets, of_case[columns])
    shape = stress.shape[1:]
    values = np.empty((2, *shape))
    flat = np.ascontiguousarray(stress).reshape(6, -1)
    equivalents_into(flat, values[0].reshape(-1), values[1].reshape(-1))
    with np.errstate(over="ignore", invalid="ignore"):
        if not np.isfinite(values[0].sum()):  # a stress that no number can hold is not known either
            values[:, ~np.isfinite(values).all(axis=0)] = np.nan
        trace = stress[:3].sum(axis=0)
    return Equivalents(values, hydrostatic_flags(trace, rating, rows, columns) & ~np.isnan(values[1]))


def margins_of(values: Array, rating: Rating, rows: Places, columns: Places | slice, limit: int) -> Array:
    """(2, rows, columns) margins of a limit by theory from (2, rows, columns) equivalents.

    strength / (required factor x point factor x equivalent) - 1; infinite where there is no stress, NaN where
    something is not known or not asked. Worked as allowable / equivalent / point factor, here, for groups and for
    governing alike: margins beyond 1e7 differ by more than the tolerance when rounded another way.
    """
    factor = rating.factor[limit, rows][:, None]
    classes = rating.of_point[rows]
    found = np.empty(values.shape)
    with np.errstate(divide="ignore", over="ignore", invalid="ignore"):
        for theory in range(2):
            allowable = rating.allowable[limit, theory][:, columns][classes]
            np.divide(allowable, values[theory], out=found[theory])
    found /= factor
    found -= 1.0
    return found


def few_margins(values: Array, rating: Rating, rows: Places, columns: Places, limits: int) -> Array:
    """(limits, 2, rows, columns) margins of a few cells, the first so many of LIMITS at once: fewer, smaller steps."""
    allowable = rating.allowable[:limits][..., columns].take(rating.of_point[rows], axis=2)
    with np.errstate(divide="ignore", over="ignore", invalid="ignore"):
        found: Array = allowable / values / rating.factor[:limits, None, rows, None]
    found -= 1.0
    return found


def missing_of(values: Array, rating: Rating, rows: Places, columns: Places | slice) -> Flags:
    """(rows, columns): cells of which an asked limit lacks its stress or its strength."""
    found: Flags = np.isnan(values[1]) & rating.asked[:, columns].any(axis=0)
    for limit in rating.limits:
        lacking = np.isnan(rating.allowable[limit, 1][:, columns]) & rating.asked[limit, columns]
        if lacking.any():
            found |= lacking[rating.of_point[rows]]
    return found


def group_least(margins: Array) -> Array:
    """(..., groups): least margin of each group of cases, NaN where none is known. margins: (..., columns)."""
    columns = margins.shape[-1]
    count = groups_of(columns)
    if count * GROUP != columns:
        padded = np.full((*margins.shape[:-1], count * GROUP), np.nan)
        padded[..., :columns] = margins
        margins = padded
    least: Array = np.fmin.reduce(margins.reshape(*margins.shape[:-1], count, GROUP), axis=-1)
    return least


def least_of(values: Array, rating: Rating, rows: Places, columns: slice = slice(None)) -> Array:
    """(2 limits, 2 theories, rows, groups): least margins of equivalents (2, rows, columns), whole groups of columns.

    The point factor is the same all along a row, so it comes in after the least of each group is found.
    """
    found = np.full((2, 2, len(rows), groups_of(values.shape[2])), np.nan)
    classes = rating.of_point[rows]
    with np.errstate(divide="ignore", over="ignore", invalid="ignore"):
        for limit in rating.limits:
            for theory in range(2):
                ratio = rating.allowable[limit, theory][:, columns].take(classes, axis=0)
                np.divide(ratio, values[theory], out=ratio)
                np.divide(group_least(ratio), rating.factor[limit, rows][:, None], out=found[limit, theory])
    found -= 1.0
    return found


@dataclass(eq=False, slots=True)
class Governed:
    """What governs some points, by theory."""

    least: Array
    """(2, rows)."""
    case: Places
    """(2, rows): first case in file order with it, -1 where none is known."""
    limit: Places
    """(2, rows)."""


def govern(
    values: Callable[[int, Places, Places], Array], least: Array, rating: Rating, rows: Places, cases: int
) -> Governed:
    """Least margin of each row and the first case and limit that have it.

    values(theory, rows, columns): equivalents of (rows, n) cells, columns (rows, n); least: (2, 2, rows, groups).
    Only the first group that holds a candidate is read again.
    """
    found = Governed(
        np.full((2, len(rows)), np.nan), np.full((2, len(rows)), -1), np.zeros((2, len(rows)), dtype=np.intp)
    )
    if not cases or not len(rows):
        return found
    of_group = np.fmin(least[0], least[1])
    found.least = np.fmin.reduce(of_group, axis=-1)
    for theory in range(2):
        bound = found.least[theory] + TOLERANCE
        with np.errstate(invalid="ignore"):
            first = np.argmax(of_group[theory] <= bound[:, None], axis=1)
        columns = np.minimum(first[:, None] * GROUP + np.arange(GROUP), cases - 1)
        equivalent = values(theory, rows, columns)
        within = np.zeros((2, *columns.shape), dtype=bool)
        at = rating.of_point[rows][:, None] * cases + columns
        for limit in rating.limits:
            allowable = rating.allowable[limit, theory].reshape(-1).take(at)
            with np.errstate(divide="ignore", over="ignore", invalid="ignore"):
                margins = allowable / equivalent / rating.factor[limit, rows][:, None] - 1.0
                np.less_equal(margins, bound[:, None], out=within[limit])
        place = np.argmax(within[0] | within[1], axis=1)
        row = np.arange(len(rows))
        known = ~np.isnan(found.least[theory])
        found.case[theory] = np.where(known, columns[row, place], -1)
        found.limit[theory] = np.where(known & ~within[0, row, place], 1, 0)
    return found


def blocks(rows: int, columns: int) -> Iterator[Places]:
    """Runs of rows of about BLOCK cells."""
    step = max(1, BLOCK // max(columns, 1))
    for start in range(0, rows, step):
        yield np.arange(start, min(start + step, rows))


def threads_for(cells: int) -> int:
    """How many threads a computation of so many cells is worth."""
    return min(2, os.cpu_count() or 1) if cells >= PARALLEL else 1


def each(work: Callable[[Places], None], rows: int, columns: int) -> None:
    """Run `work` on runs of rows, on two threads where that pays (NumPy releases the lock in its loops)."""
    runs = blocks(rows, columns)
    count = threads_for(rows * columns)
    if count == 1:
        for run in runs:
            work(run)
        return
    with ThreadPoolExecutor(count) as pool:
        for _ in pool.map(work, runs):
            continue
