"""What governs: least margins over cases and limits, the theory that controls, verdicts."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

from engine.frozen import Array
from engine.material import Theory
from engine.project import Accept

TOLERANCE = 1e-9
"""Margins this close are equal, and this close to zero are zero (DESIGN)."""
Verdict = Literal["clear", "thin", "split", "short", "no-data"]
VERDICTS: tuple[Verdict, ...] = ("clear", "thin", "split", "short", "no-data")
Controls = Literal["tresca", "von-mises", "both"]
Places = npt.NDArray[np.intp]
_CLEAR, _THIN, _SPLIT, _SHORT, _NO_DATA = range(5)


def accepted_rows(accept: Accept) -> list[int]:
    """Places in THEORIES of the accepted ones."""
    return {"both": [0, 1], "tresca": [0], "von-mises": [1]}[accept]


def least_accepted(by_theory: Array, accept: Accept) -> Array:
    """The lesser margin over the accepted theories; NaN where none is known.

    by_theory: (2, ...) margins by theory.
    """
    least: Array = np.fmin.reduce(by_theory[accepted_rows(accept)], axis=0)
    return least


def verdict_codes(least: Array, missing: npt.NDArray[np.bool_], accept: Accept, thin: float) -> npt.NDArray[np.int8]:
    """Places in VERDICTS.

    least: (2, ...) least known margins by theory, NaN where none is; missing: (...) whether a cell lacks something.
    """
    failing = np.less(least, -TOLERANCE).sum(axis=0)
    decisive = least_accepted(least, accept)
    unknown = missing | np.isnan(least).all(axis=0)
    found = np.where(decisive < thin - TOLERANCE, _THIN, _CLEAR)
    found = np.where(unknown, _NO_DATA, found)
    return np.where(failing == 2, _SHORT, np.where(failing == 1, _SPLIT, found)).astype(np.int8)


def controls(tresca: float, von_mises: float) -> Controls | None:
    """The theory with the lesser margin, `both` where they are equal, None where neither is known."""
    if np.isnan(tresca) and np.isnan(von_mises):
        return None
    if tresca == von_mises or abs(tresca - von_mises) <= TOLERANCE:
        return "both"
    return "von-mises" if von_mises < tresca or np.isnan(tresca) else "tresca"


@dataclass(frozen=True, eq=False, slots=True)
class Governing:
    """The cell, limit and theory of a least margin. Places are numbers in the project's order."""

    case: int
    """Column among the checked cases; -1: nothing is known."""
    limit: int
    """Place in LIMITS."""
    theory: Controls | None
    """The theory, or `both`; None: nothing is known."""
    margin: float
    """The least margin; infinite where there is no stress, NaN where nothing is known."""
    point: int = -1
    """Row of the point."""

    @property
    def known(self) -> bool:
        """Whether anything governs."""
        return self.case >= 0


@dataclass(frozen=True, eq=False, slots=True)
class Envelope:
    """Least margins of every point, and where they stand. Never changed in place, so a preview can have its own."""

    least: Array
    """(2, points): least known margin by theory; NaN: none known."""
    case: Places
    """(2, points): first case in file order that has it; -1: none."""
    limit: Places
    """(2, points): its limit, yield before ultimate."""
    missing: Places
    """(points,): cells that lack something."""
    tension: Places
    """(points,): cells under hydrostatic tension beyond what yield margins can vouch for."""
    accept: Accept
    """Which theories decide."""
    thin: float
    """Below this a margin is thin."""

    def verdicts(self) -> npt.NDArray[np.int8]:
        """(points,): places in VERDICTS."""
        return verdict_codes(self.least, self.missing > 0, self.accept, self.thin)

    def decisive(self) -> Array:
        """(points,): least margin over the accepted theories."""
        return least_accepted(self.least, self.accept)

    def by_theory(self, point: int, theory: Theory) -> Governing:
        """What governs a point under one theory."""
        row = 0 if theory == "tresca" else 1
        case = int(self.case[row, point])
        return Governing(
            case, int(self.limit[row, point]), theory if case >= 0 else None, float(self.least[row, point]), point
        )

    def of_point(self, point: int) -> Governing:
        """What governs a point over the accepted theories; among equals the first in file order."""
        margin = float(np.fmin.reduce(self.least[accepted_rows(self.accept), point]))
        best: Governing | None = None
        for row in accepted_rows(self.accept):
            at_least = self.least[row, point]
            if self.case[row, point] < 0 or not (at_least == margin or at_least <= margin + TOLERANCE):
                continue
            found = self.by_theory(point, "tresca" if row == 0 else "von-mises")
            if best is None or (found.case, found.limit) < (best.case, best.limit):
                best = found
            elif (found.case, found.limit) == (best.case, best.limit):
                best = Governing(best.case, best.limit, "both", min(best.margin, found.margin), point)
        return best or Governing(-1, 0, None, float("nan"), point)

    def worst_point(self) -> int:
        """First point in file order with the project's least margin; -1 where nothing is known."""
        decisive = self.decisive()
        if not len(decisive) or np.isnan(decisive).all():
            return -1
        least = np.nanmin(decisive)
        with np.errstate(invalid="ignore"):
            return int(np.argmax((decisive == least) | (decisive <= least + TOLERANCE)))

    def of_project(self) -> Governing:
        """What governs the project."""
        point = self.worst_point()
        return self.of_point(point) if point >= 0 else Governing(-1, 0, None, float("nan"))

    def counts(self) -> dict[Verdict, int]:
        """Points by verdict."""
        found = np.bincount(self.verdicts(), minlength=len(VERDICTS))
        return {verdict: int(found[i]) for i, verdict in enumerate(VERDICTS)}
