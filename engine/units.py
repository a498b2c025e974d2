"""Unit systems of a project and exact conversion from the other units that people type.

Every factor is a `Fraction` built from the defining values, so that a conversion is rounded once, at its end:
inch 25.4 mm and pound 0.45359237 kg (international yard and pound agreement, 1959), standard gravity
9.80665 m/s2 (CGPM, 1901), bar 100 kPa, degF = degC x 9/5 + 32; all as tabled in NIST SP 811 (2008), Appendix B.
"""

import difflib
import math
import re
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

Kind = Literal["length", "force", "moment", "stress", "temperature", "line-load"]

_CALLED: dict[Kind, tuple[str, str]] = {
    "length": ("a length", "lengths"),
    "force": ("a force", "forces"),
    "moment": ("a moment", "moments"),
    "stress": ("a stress or pressure", "stresses and pressures"),
    "temperature": ("a temperature", "temperatures"),
    "line-load": ("a line load", "line loads"),
}
_LONGEST_QUOTE = 40


class UnitError(ValueError):
    """A unit that cannot be used here; the message says what would be right."""


@dataclass(frozen=True)
class UnitSystem:
    """The units that all numbers of one project are in."""

    name: str
    """As it stands in the project file, for example `mm-N-MPa`."""
    length: str
    """Unit of lengths and lever arms."""
    force: str
    """Unit of forces."""
    moment: str
    """Unit of moments and torques."""
    stress: str
    """Unit of stresses, strengths and pressures."""
    temperature: str
    """Unit of temperatures."""
    line_load: str
    """Unit of forces per length."""

    def unit(self, kind: Kind) -> str:
        """The unit of one kind."""
        units: dict[Kind, str] = {
            "length": self.length,
            "force": self.force,
            "moment": self.moment,
            "stress": self.stress,
            "temperature": self.temperature,
            "line-load": self.line_load,
        }
        return units[kind]


SYSTEMS: dict[str, UnitSystem] = {
    system.name: system
    for system in (
        UnitSystem("mm-N-MPa", "mm", "N", "N mm", "MPa", "degC", "N/mm"),
        UnitSystem("m-N-Pa", "m", "N", "N m", "Pa", "degC", "N/m"),
        UnitSystem("in-lbf-psi", "in", "lbf", "lbf in", "psi", "degF", "lbf/in"),
        UnitSystem("in-kip-ksi", "in", "kip", "kip in", "ksi", "degF", "kip/in"),
    )
}


@dataclass(frozen=True)
class Unit:
    """One unit that can be read: base value = (value + offset) x scale."""

    name: str
    """The spelling this program writes."""
    kind: Kind
    """What the unit measures."""
    scale: Fraction
    """Size in the base unit of its kind: m, N, N m, Pa, K, N/m."""
    offset: Fraction = Fraction(0)
    """Distance of the zero from absolute zero, in this unit; temperatures only."""


_MM = Fraction(1, 1000)
_INCH = Fraction("0.0254")
_LBF = Fraction("0.45359237") * Fraction("9.80665")
_METRIC_LENGTHS = {"mm": _MM, "cm": Fraction(1, 100), "m": Fraction(1)}
_INCH_LENGTHS = {"in": _INCH, "ft": 12 * _INCH}
_METRIC_FORCES = {
    "N": Fraction(1),
    "kN": Fraction(1000),
    "MN": Fraction(10**6),
    "daN": Fraction(10),
    "kgf": Fraction("9.80665"),
}
_INCH_FORCES = {"lbf": _LBF, "kip": 1000 * _LBF}
_STRESSES = {
    "Pa": Fraction(1),
    "kPa": Fraction(10**3),
    "MPa": Fraction(10**6),
    "GPa": Fraction(10**9),
    "bar": Fraction(10**5),
    "psi": _LBF / _INCH**2,
    "ksi": 1000 * _LBF / _INCH**2,
}
_TEMPERATURES = (
    Unit("K", "temperature", Fraction(1)),
    Unit("degC", "temperature", Fraction(1), Fraction("273.15")),
    Unit("degF", "temperature", Fraction(5, 9), Fraction("459.67")),
)
_TYPED_AS = {ord("²"): "2", ord("º"): "°", ord("℃"): "°C", ord("℉"): "°F"}
_SPELLINGS = {
    "degC": ("°C", "° C", "deg C", "C"),
    "degF": ("°F", "° F", "deg F", "F"),
    "in": ("inch",),
    "kip": ("kips",),
}


def _family(forces: dict[str, Fraction], lengths: dict[str, Fraction]) -> list[Unit]:
    """The lengths, the forces and everything that a force and a length make."""
    units = [Unit(name, "length", scale) for name, scale in lengths.items()]
    for force, size in forces.items():
        units.append(Unit(force, "force", size))
        for length, scale in lengths.items():
            units.append(Unit(f"{force} {length}", "moment", size * scale))
            units.append(Unit(f"{force}/{length}", "line-load", size / scale))
            units.append(Unit(f"{force}/{length}2", "stress", size / scale**2))
    return units


def _spellings(unit: Unit) -> set[str]:
    """Every way to write a unit, in the form `_tidy` gives. Only inch units turn round: mN is not the newton metre."""
    first, space, second = unit.name.partition(" ")
    if not space:
        return {unit.name, *_SPELLINGS.get(unit.name, ())}
    ways = {unit.name, first + second}
    if second in _INCH_LENGTHS:
        ways |= {f"{second} {first}", second + first}
    return ways


_UNITS = (
    *_family(_METRIC_FORCES, _METRIC_LENGTHS),
    *_family(_INCH_FORCES, _INCH_LENGTHS),
    *(Unit(name, "stress", scale) for name, scale in _STRESSES.items()),
    *_TEMPERATURES,
)
_BY_SPELLING = {way: unit for unit in _UNITS for way in _spellings(unit)}


def _tidy(text: str) -> str:
    """One spelling for the marks between the parts of a unit: N.mm, N*mm, N-mm, N·mm -> N mm; mm^2, mm² -> mm2."""
    text = text.strip().translate(_TYPED_AS)
    text = re.sub(r"\s*/\s*", "/", text)
    text = re.sub(r"(\^|\*\*)2$", "2", text)
    return re.sub(r"(?<=[A-Za-z])\s*[\s.*·⋅×-]\s*(?=[A-Za-z])", " ", text)


def find(text: str) -> Unit | None:
    """The unit a text names, in any of its spellings, or None. Case counts: MN is not mN."""
    return _BY_SPELLING.get(_tidy(text))


def quoted(text: str) -> str:
    """A text in quotes for a message: cut if long, control characters written as escapes."""
    cut = text if len(text) <= _LONGEST_QUOTE else text[: _LONGEST_QUOTE - 3] + "..."
    mark = "'" if '"' in cut else '"'
    return mark + "".join(letter if letter.isprintable() else ascii(letter)[1:-1] for letter in cut) + mark


def described(text: str) -> str:
    """What a unit is, for a message: `kN is a force`, or that it is unknown with the nearest known one."""
    unit = find(text)
    return f"{unit.name} is {_CALLED[unit.kind][0]}" if unit else _unknown(text)


def kind_of_load_unit(unit: str, system: UnitSystem) -> Kind | None:
    """The kind of a load by its unit, None for an empty unit (a plain multiplier).

    The unit must be the system's own for its kind; another name of the same size (N/mm2 for MPa) is the same unit.
    Raises UnitError naming what would be right.
    """
    if not unit.strip():
        return None
    found = find(unit)
    if found is None:
        raise UnitError(f"{_unknown(unit)}; {_choices(system)}")
    own = system.unit(found.kind)
    if not _same(found, _own(system, found.kind)):
        raise UnitError(f"{described(unit)}; this project counts {_CALLED[found.kind][1]} in {own}")
    return found.kind


def convert(value: float | Fraction, unit: str, kind: Kind, system: UnitSystem, difference: bool = False) -> float:
    """A value in `unit` as a float in the system's unit of `kind`, rounded once from the exact product.

    A temperature is shifted to the other scale's zero unless it is a `difference` of temperatures.
    Raises UnitError for an unknown unit, a unit of another kind, a value that is not finite or that no float can hold
    afterwards.
    """
    if isinstance(value, float) and not math.isfinite(value):
        raise UnitError("a finite number is expected before the unit")
    found = find(unit)
    if found is None:
        raise UnitError(f"{_unknown(unit, kind)}; {_wanted(kind, system)}")
    if found.kind != kind:
        raise UnitError(f"{described(unit)}; {_wanted(kind, system)}")
    target = _own(system, kind)
    base = (Fraction(value) + (0 if difference else found.offset)) * found.scale
    return _rounded(base / target.scale - (0 if difference else target.offset), target)


def _rounded(value: Fraction, unit: Unit) -> float:
    """The nearest float, never infinity, and zero only for zero."""
    try:
        result = float(value)
    except OverflowError:
        raise UnitError(f"the number is too large in {unit.name}") from None
    if result == 0 and value != 0:
        raise UnitError(f"the number is too small in {unit.name}")
    return result


def _own(system: UnitSystem, kind: Kind) -> Unit:
    return _BY_SPELLING[system.unit(kind)]


def _same(one: Unit, other: Unit) -> bool:
    return (one.kind, one.scale, one.offset) == (other.kind, other.scale, other.offset)


def _wanted(kind: Kind, system: UnitSystem) -> str:
    return f"{_CALLED[kind][0]} in {system.unit(kind)} is expected here"


def _choices(system: UnitSystem) -> str:
    units = ", ".join(system.unit(kind) for kind in _CALLED)
    return f"a load of this project is in one of {units}, or has an empty unit"


def _unknown(text: str, kind: Kind | None = None) -> str:
    """That a unit is unknown, with the nearest of the kind if any is near; case, the commonest slip, is overlooked."""
    names = {way.casefold(): unit.name for way, unit in _BY_SPELLING.items() if kind in (None, unit.kind)}
    near = difflib.get_close_matches(_tidy(text).casefold(), names, n=1)
    return f"unknown unit {quoted(text.strip())}" + (f" (did you mean {names[near[0]]}?)" if near else "")
