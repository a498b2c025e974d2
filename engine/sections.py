"""Sections: shapes whose resultants give stress by formula.

They are kept whole in the file; the formulas are not written yet, and until they are no point that uses a
section has a margin.
"""

from __future__ import annotations

from dataclasses import dataclass

from engine.frozen import FrozenMap

SHAPES: dict[str, tuple[str, ...]] = {"round": ("d",)}
"""Dimensions (length unit) by shape."""
RESULTANTS = ("N", "Vy", "Vz", "T", "My", "Mz", "p-in", "p-out")
"""N, Vy, Vz: forces; T, My, Mz: moments; p-in, p-out: pressures on a cylinder. They act on the face whose outward
normal is +x; N is tension positive."""


@dataclass(frozen=True, slots=True)
class Section:
    """A section of a member with the resultants that loads cause on it."""

    name: str
    """Unique in the project."""
    shape: str
    """A key of SHAPES."""
    dimensions: FrozenMap[float] = FrozenMap()
    """By name, length unit, above 0."""
    not_felt: tuple[str, ...] = ()
    """Loads that cause no resultant here."""
    resultants: FrozenMap[FrozenMap[float]] = FrozenMap()
    """By resultant: factor by load (a lever arm, or 1)."""
