"""The keys of every part of a project file: how each is read, written and named. Format 1 stands here once."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from engine import reading
from engine.frozen import FrozenMap, StressRows
from engine.loads import SENSES, Case, Load
from engine.material import LIMITS, Material
from engine.project import Acknowledgement, Category, Factors, Point, PointFactor, Settings
from engine.reading import Fault, Plain, Reader, Unreadable, choice, many, mapping, number
from engine.sections import RESULTANTS, SHAPES, Section
from engine.stress import COMPONENTS, frame, permutation
from engine.units import SYSTEMS

FORMAT = 1
Writer = Callable[[Any], Plain]


@dataclass(frozen=True, slots=True)
class Key:
    """One key of a table."""

    name: str
    """As the file spells it."""
    attribute: str
    """Of the dataclass."""
    read: Reader
    """Plain value to typed; raises Unreadable."""
    write: Writer = lambda value: value
    """Typed value to plain."""
    required: bool = False
    """Whether the key must be there; an absent one has the dataclass's default and is not written."""


def _factors(value: Plain) -> Factors:
    expected = "a number above 0, or a table { tresca = ..., von-mises = ... }"
    if isinstance(value, Mapping):
        found = mapping(number(above=0), expected, ("tresca", "von-mises"))(value)
        missing = [key for key in ("tresca", "von-mises") if key not in found]
        if missing:
            raise Unreadable(Fault((), f'key "{missing[0]}" is missing, expected {expected}'))
        return Factors(found["tresca"], found["von-mises"])
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise reading.refuse(value, expected)
    both = number(above=0)(value)
    return Factors(both, both)


def _write_factors(value: Factors) -> Plain:
    return {"tresca": value.tresca, "von-mises": value.von_mises}


def _point_factor(value: Plain) -> PointFactor:
    expected = "a number above 0, or a table { yield = ..., ultimate = ... }"
    if isinstance(value, Mapping):
        found = mapping(number(above=0), expected, LIMITS)(value)
        return PointFactor(found.get("yield", 1.0), found.get("ultimate", 1.0))
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise reading.refuse(value, expected)
    both = number(above=0)(value)
    return PointFactor(both, both)


def _write_point_factor(value: PointFactor) -> Plain:
    return value.yield_ if value.yield_ == value.ultimate else {"yield": value.yield_, "ultimate": value.ultimate}


def _temperature(value: Plain) -> float | FrozenMap[float]:
    if isinstance(value, Mapping):
        by_case: FrozenMap[float] = mapping(number(), "a table of temperatures by case")(value)
        return by_case
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise reading.refuse(value, "a number, or a table of temperatures by case")
    found: float = number()(value)
    return found


def _write_map(value: Any) -> Plain:
    return dict(value) if isinstance(value, FrozenMap) else value


def _not_felt(value: Plain) -> tuple[str, ...] | str:
    if value == "rest":
        return "rest"
    if isinstance(value, str):
        raise reading.refuse(value, 'a list of load names, or "rest"' + reading.did_you_mean(value, ["rest"]))
    found: tuple[str, ...] = many(reading.name, 'a list of load names, or "rest"')(value)
    return found


def _list(value: Any) -> Plain:
    return value if isinstance(value, str) else list(value)


def _rows(value: Any) -> Plain:
    return [list(row) for row in value]


def _range(value: Plain) -> tuple[float, ...]:
    low, high = many(number(), "two temperatures, the lower first", 2)(value)
    if low > high:
        raise Unreadable(Fault((), f"found {low:g} before {high:g}, expected two temperatures, the lower first"))
    return low, high


def _table(value: Plain) -> tuple[tuple[float, ...], ...]:
    expected = "a list of [temperature, strength] pairs"
    pair = many(number(), "a pair [temperature, strength]", 2)
    found = reading.ascending(many(pair, expected)(value))
    if not found:
        raise Unreadable(Fault((), f"found an empty list, expected {expected}"))
    low = [place for place, (_, strength) in enumerate(found) if strength <= 0]
    if low:
        raise Unreadable(Fault((low[0], 1), f"found {found[low[0]][1]:g}, expected a strength above 0"))
    return found


def _components(value: Plain) -> tuple[str, ...]:
    names = tuple(reading.text(value).split())
    try:
        permutation(names)
    except ValueError as error:
        raise Unreadable(
            Fault((), f'found {reading.shown(value)}, expected "xx yy zz xy yz zx" in any order: {error}')
        ) from None
    return names


def _axes(value: Plain) -> tuple[tuple[float, ...], ...]:
    vector = many(number(), "a direction of 3 numbers", 3)
    x, y = found = many(vector, "two directions [[...], [...]]", 2)(value)
    try:
        frame(np.array(x), np.array(y))
    except ValueError as error:
        raise Unreadable(Fault((), f"these are no axes: {error}")) from None
    return tuple(found)


def _kt_limits(value: Plain) -> tuple[str, ...]:
    found: tuple[str, ...] = many(choice(*LIMITS), 'a list of "yield" and "ultimate"')(value)
    return found


_TEXT = reading.text
_POSITIVE = number(above=0)
_NAME = Key("name", "name", reading.name, required=True)
_LABEL = Key("label", "label", _TEXT)
_MAGNITUDES = mapping(number(), "a table of load = magnitude")

SETTINGS: tuple[Key, ...] = (
    Key("title", "title", _TEXT, required=True),
    Key("revision", "revision", _TEXT),
    Key("units", "units", choice(*SYSTEMS), required=True),
    Key("components", "components", _components, " ".join, required=True),
    Key("accept", "accept", choice("both", "tresca", "von-mises"), required=True),
    Key("thin", "thin", number(least=0), required=True),
    Key("notes", "notes", _TEXT),
)
CATEGORY: tuple[Key, ...] = (
    _NAME,
    _LABEL,
    Key("loads", "loads", choice("characteristic", "design")),
    Key("yield", "yield_", _factors, _write_factors, required=True),
    Key("ultimate", "ultimate", _factors, _write_factors),
)
MATERIAL: tuple[Key, ...] = (
    _NAME,
    Key("yield", "yield_", _POSITIVE, required=True),
    Key("ultimate", "ultimate", _POSITIVE),
    Key("shear-yield", "shear_yield", _POSITIVE),
    Key("elongation", "elongation", number(least=0, most=1)),
    Key("range", "range", _range, list),
    Key("yield-at", "yield_at", _table, _rows),
    Key("ultimate-at", "ultimate_at", _table, _rows),
    Key("source", "source", _TEXT),
)
LOAD: tuple[Key, ...] = (
    _NAME,
    _LABEL,
    Key("unit", "unit", _TEXT),
    Key("sense", "sense", choice(*SENSES)),
)
CASE: tuple[Key, ...] = (
    _NAME,
    _LABEL,
    Key("category", "category", reading.name, required=True),
    Key("temperature", "temperature", number()),
    Key("loads", "loads", _MAGNITUDES, _write_map),
    Key("combine", "combine", mapping(number(), "a table of case = factor"), _write_map),
    Key("check", "check", reading.flag),
)
_DIMENSIONS = tuple(dict.fromkeys(name for names in SHAPES.values() for name in names))
_RESULTANTS = mapping(mapping(number(), "a table of load = factor"), "a table of resultants", RESULTANTS)
SECTION: tuple[Key, ...] = (
    _NAME,
    Key("shape", "shape", choice(*SHAPES), required=True),
    Key("not-felt", "not_felt", many(reading.name, "a list of load names"), list),
    Key("resultants", "resultants", _RESULTANTS, lambda value: {key: dict(row) for key, row in value.items()}),
)
POINT: tuple[Key, ...] = (
    _NAME,
    _LABEL,
    Key("part", "part", _TEXT),
    Key("material", "material", reading.name, required=True),
    Key("factor", "factor", _point_factor, _write_point_factor),
    Key("temperature", "temperature", _temperature, _write_map),
    Key("source", "source", _TEXT),
    Key("section", "section", reading.name),
    Key("at", "at", many(number(), "two numbers, y and z", 2), list),
    Key("kt", "kt", mapping(_POSITIVE, "a table of resultant = factor", RESULTANTS), _write_map),
    Key("kt-limits", "kt_limits", _kt_limits, list),
    Key("axes", "axes", _axes, _rows),
    Key("not-felt", "not_felt", _not_felt, _list),
)
ACKNOWLEDGE: tuple[Key, ...] = (
    Key("point", "point", reading.name, required=True),
    Key("caution", "caution", reading.name, required=True),
    Key("by", "by", reading.name, required=True),
    Key("reason", "reason", reading.name, required=True),
)


@dataclass(frozen=True, slots=True)
class Part:
    """One kind of table of the file."""

    make: Callable[..., Any]
    """Its dataclass."""
    keys: tuple[Key, ...]
    """In the order in which they are written."""


PARTS: dict[str, Part] = {
    "project": Part(Settings, SETTINGS),
    "category": Part(Category, CATEGORY),
    "material": Part(Material, MATERIAL),
    "load": Part(Load, LOAD),
    "case": Part(Case, CASE),
    "section": Part(Section, SECTION),
    "point": Part(Point, POINT),
    "acknowledge": Part(Acknowledgement, ACKNOWLEDGE),
}


class Codec:
    """Reads and writes parts whose stress rows stand in one component order."""

    def __init__(self, components: tuple[str, ...] = COMPONENTS) -> None:
        order = permutation(components)
        back = np.argsort(order)

        def write_rows(rows: StressRows) -> Plain:
            return dict(zip(rows.names, rows.array[:, back].tolist(), strict=True))

        rows = reading.stress_rows(order)
        self._rows = (Key("per-load", "per_load", rows, write_rows), Key("stress", "stress", rows, write_rows))

    def keys(self, kind: str) -> tuple[Key, ...]:
        """The keys of a kind, in the order in which they are written; a section's dimensions apart."""
        return PARTS[kind].keys + self._rows if kind == "point" else PARTS[kind].keys

    def key(self, kind: str, name: str) -> Key:
        """One key; KeyError where the kind has none of that name."""
        for key in self.keys(kind):
            if key.name == name:
                return key
        raise KeyError(name)

    def read(self, kind: str, document: Plain) -> Any:
        """A part from a plain table. Raises Unreadable with every fault in it, paths from the table down."""
        if not isinstance(document, Mapping):
            raise reading.refuse(document, f"a table: [[{kind}]]")
        values, faults = self._values(kind, document)
        if kind == "section" and "shape" in values:
            values["dimensions"], more = _dimensions(document, values["shape"])
            faults += more
        if faults:
            raise Unreadable(*faults)
        return PARTS[kind].make(**values)

    def _values(self, kind: str, document: Mapping[str, Plain]) -> tuple[dict[str, Any], list[Fault]]:
        keys = {key.name: key for key in self.keys(kind)}
        known = [*keys, *(_DIMENSIONS if kind == "section" else ())]
        faults = [Fault((word,), reading.unknown_key(word, known)) for word in document if word not in known]
        values: dict[str, Any] = {}
        for key in keys.values():
            if key.name in document:
                try:
                    values[key.attribute] = key.read(document[key.name])
                except Unreadable as error:
                    faults += [fault.under(key.name) for fault in error.faults]
            elif key.required:
                faults.append(Fault((), f'key "{key.name}" is missing from this [{kind}]'))
        return values, faults

    def write(self, kind: str, part: Any) -> dict[str, Plain]:
        """The plain table of a part; what has its default is left out, unless the key is required."""
        default = _defaults(kind)
        document: dict[str, Plain] = {}
        for key in self.keys(kind):
            value = getattr(part, key.attribute)
            if key.required or not _is_default(value, default.get(key.attribute)):
                document[key.name] = key.write(value)
            if kind == "section" and key.name == "shape":
                document.update(part.dimensions)
        return document


def _is_default(value: Any, default: Any) -> bool:
    return len(value) == 0 if isinstance(value, StressRows) else bool(value == default)


def _defaults(kind: str) -> dict[str, Any]:
    return {name: f.default for name, f in PARTS[kind].make.__dataclass_fields__.items()}  # type: ignore[attr-defined]


def _dimensions(document: Mapping[str, Plain], shape: str) -> tuple[FrozenMap[float], list[Fault]]:
    found: dict[str, float] = {}
    faults: list[Fault] = []
    for name in SHAPES[shape]:
        if name not in document:
            faults.append(Fault((), f'key "{name}" is missing: a {shape} section has {", ".join(SHAPES[shape])}'))
            continue
        try:
            found[name] = _POSITIVE(document[name])
        except Unreadable as error:
            faults += [fault.under(name) for fault in error.faults]
    return FrozenMap(found), faults
