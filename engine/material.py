"""Materials: strengths, their temperature tables, ductility."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from engine.frozen import Array

Table = tuple[tuple[float, float], ...]
Limit = Literal["yield", "ultimate"]
Theory = Literal["tresca", "von-mises"]
LIMITS: tuple[Limit, Limit] = ("yield", "ultimate")
THEORIES: tuple[Theory, Theory] = ("tresca", "von-mises")

DUCTILE_ELONGATION = 0.05
"""Least elongation at fracture at which the two theories apply (Budynas & Nisbett, Shigley's Mechanical
Engineering Design, ch. 5: ductile from a fracture strain of 0.05)."""


@dataclass(frozen=True, slots=True)
class Material:
    """A ductile metal in one product form and thickness band."""

    name: str
    """Unique in the project."""
    yield_: float
    """Yield or proof strength, stress unit, above 0."""
    ultimate: float | None = None
    """Ultimate tensile strength, stress unit, above 0; None: not known."""
    shear_yield: float | None = None
    """Measured yield strength in shear, stress unit; None: half the yield, as Tresca has it."""
    elongation: float | None = None
    """Elongation at fracture, 0 to 1; None: not known."""
    range: tuple[float, float] | None = None
    """Temperatures over which the plain values hold, ends included; None: none is claimed."""
    yield_at: Table = ()
    """(temperature, yield strength), strictly ascending; empty: no table."""
    ultimate_at: Table = ()
    """(temperature, ultimate strength), strictly ascending; empty: no table."""
    source: str = ""
    """Where the strengths come from."""

    @property
    def tabled(self) -> bool:
        """Whether a strength is given by temperature."""
        return bool(self.yield_at or self.ultimate_at)

    def covers(self, temperature: float) -> bool:
        """Whether `range` claims the plain values at a temperature."""
        return self.range is not None and self.range[0] <= temperature <= self.range[1]


def tabled_value(table: Table, temperature: Array) -> Array:
    """Value of a table, linear between its rows, ends included; NaN outside, for it is never extrapolated.

    temperature: any shape, the project's temperature unit; NaN gives NaN.
    """
    at, value = np.array(table, dtype=np.float64).T
    found = np.interp(temperature, at, value)
    return np.where((temperature >= at[0]) & (temperature <= at[-1]), found, np.nan)


def yield_strength(material: Material, temperature: Array) -> Array:
    """Yield strength at temperatures (NaN: not given), same shape, stress unit; NaN where no table row reaches."""
    plain = np.full(np.shape(temperature), material.yield_)
    if not material.yield_at:
        return plain
    return np.where(np.isnan(temperature), plain, tabled_value(material.yield_at, temperature))


def ultimate_strength(material: Material, temperature: Array) -> Array:
    """Ultimate strength at temperatures (NaN: not given), same shape, stress unit; NaN where it is not known.

    Where only the yield has a table the plain ultimate serves inside that table and nothing outside it.
    """
    plain = np.full(np.shape(temperature), np.nan if material.ultimate is None else material.ultimate)
    given = ~np.isnan(temperature)
    if material.ultimate_at:
        return np.where(given, tabled_value(material.ultimate_at, temperature), plain)
    if material.yield_at:
        return np.where(given & np.isnan(tabled_value(material.yield_at, temperature)), np.nan, plain)
    return plain


def tresca_yield(material: Material, strength: Array) -> Array:
    """Tresca's yield strength for a yield strength at temperature: min(Y, 2 x shear-yield x Y / yield).

    A shear yield measured below half the yield lowers the strength that Tresca may use, in the same
    proportion at every temperature; one above it gives Tresca nothing.
    """
    if material.shear_yield is None:
        return strength
    return np.minimum(strength, 2.0 * material.shear_yield * strength / material.yield_)


def strengths(material: Material, temperature: Array) -> dict[Limit, dict[Theory, Array]]:
    """Strength by limit and theory at temperatures (NaN: not given), each of the same shape, stress unit."""
    at_yield = yield_strength(material, temperature)
    at_ultimate = ultimate_strength(material, temperature)
    return {
        "yield": {"tresca": tresca_yield(material, at_yield), "von-mises": at_yield},
        "ultimate": {"tresca": at_ultimate, "von-mises": at_ultimate},
    }
