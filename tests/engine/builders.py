"""Small projects made in code, from invented parts, and the comparison of a report with the oracle's."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from typing import Any

from engine import integrity
from engine.frozen import FrozenMap, StressRows
from engine.loads import Case, Load, Sense
from engine.material import Material, Table
from engine.project import Accept, Acknowledgement, Category, Factors, Point, PointFactor, Project, Rest, Settings
from engine.sections import Section

Pair = float | tuple[float, float]
Rows = Mapping[str, Sequence[float]]

STEEL = Material("steel", 300.0, source="invented")
"""A strength that divides well, with a source and nothing to be cautious about."""


def axial(stress: float) -> list[float]:
    """Uniaxial stress along x: both equivalents are its size."""
    return [stress, 0.0, 0.0, 0.0, 0.0, 0.0]


def shear(stress: float) -> list[float]:
    """Pure shear in the xy plane: Tresca is twice its size, von Mises sqrt(3) times."""
    return [0.0, 0.0, 0.0, stress, 0.0, 0.0]


def category(name: str = "normal", yield_: Pair = 1.0, ultimate: Pair | None = None) -> Category:
    """A category; a pair of factors is (tresca, von-mises)."""
    return Category(name, _factors(yield_), None if ultimate is None else _factors(ultimate))


def _factors(given: Pair) -> Factors:
    return Factors(*given) if isinstance(given, tuple) else Factors(given, given)


def material(
    name: str = "steel",
    yield_: float = 300.0,
    ultimate: float | None = None,
    *,
    shear_yield: float | None = None,
    elongation: float | None = None,
    covered: tuple[float, float] | None = None,
    yield_at: Table = (),
    ultimate_at: Table = (),
    source: str = "invented",
) -> Material:
    """A material with a source; `covered` is its range."""
    return Material(name, yield_, ultimate, shear_yield, elongation, covered, yield_at, ultimate_at, source)


def case(
    name: str,
    loads: Mapping[str, float] | None = None,
    combine: Mapping[str, float] | None = None,
    *,
    category: str = "normal",
    temperature: float | None = None,
    check: bool = True,
) -> Case:
    """A case."""
    return Case(
        name,
        category,
        temperature=temperature,
        loads=FrozenMap(loads or {}),
        combine=FrozenMap(combine or {}),
        check=check,
    )


def point(
    name: str,
    stress: Rows | None = None,
    *,
    per_load: Rows | None = None,
    material: str = "steel",
    factor: Pair = 1.0,
    temperature: float | Mapping[str, float] | None = None,
    not_felt: tuple[str, ...] | Rest = (),
    source: str = "invented",
) -> Point:
    """A check point without a section; a pair of factors is (yield, ultimate)."""
    return Point(
        name,
        material,
        factor=PointFactor(*factor) if isinstance(factor, tuple) else PointFactor(factor, factor),
        temperature=FrozenMap(temperature) if isinstance(temperature, Mapping) else temperature,
        source=source,
        not_felt=not_felt,
        per_load=rows(per_load or {}),
        stress=rows(stress or {}),
    )


def rows(given: Rows) -> StressRows:
    """Named rows of stress, in the engine's order of components."""
    return StressRows(given, list(given.values()))


def loads(*names: str, sense: Sense = "fixed") -> tuple[Load, ...]:
    """Loads without units."""
    return tuple(Load(name, sense=sense) for name in names)


def project(
    points: Iterable[Point] = (),
    cases: Iterable[Case] = (),
    loads: Iterable[Load] = (),
    *,
    categories: Iterable[Category] = (category(),),
    materials: Iterable[Material] = (STEEL,),
    sections: Iterable[Section] = (),
    acknowledgements: Iterable[Acknowledgement] = (),
    accept: Accept = "both",
    thin: float = 0.1,
) -> Project:
    """A project, refused by the test itself where it would be no valid file."""
    made = Project(
        Settings("Invented", "mm-N-MPa", accept, thin),
        tuple(categories),
        tuple(materials),
        tuple(loads),
        tuple(cases),
        tuple(sections),
        tuple(points),
        tuple(acknowledgements),
    )
    assert integrity.faults(made) == []
    return made


def direct(stresses: Mapping[str, Sequence[float]], **settings: Any) -> Project:
    """A project of one point "P" with a direct row for each case, all of one category with factors of 1."""
    return project([point("P", stresses)], [case(name) for name in stresses], **settings)


# Comparison with the oracle


def differences(ours: Any, theirs: Any, path: str = "") -> list[str]:
    """Where a report says something else than the oracle's, in words.

    Cautions count by name, whatever their texts. An equivalent that is known where only the strength is missing is
    kept in our report and is null in the oracle's.
    """
    if path.endswith("/cautions"):
        ours, theirs = _by_name(ours), _by_name(theirs)
    if isinstance(ours, dict) and isinstance(theirs, dict) and ours.keys() == theirs.keys():
        return [line for key in ours for line in differences(ours[key], theirs[key], f"{path}/{key}")]
    if isinstance(ours, list) and isinstance(theirs, list) and len(ours) == len(theirs):
        pairs = zip(ours, theirs, strict=True)
        return [line for place, (a, b) in enumerate(pairs) for line in differences(a, b, f"{path}/{place}")]
    kept = path.endswith("/equivalent") and theirs is None and isinstance(ours, float)
    return [] if kept or _equal(ours, theirs) else [f"{path}: {ours!r}, the oracle says {theirs!r}"]


def _by_name(cautions: list[dict[str, Any]]) -> dict[str, Any]:
    return {caution["name"]: {**caution, "text": ""} for caution in cautions}


def _equal(a: Any, b: Any) -> bool:
    """Equal, numbers to 1e-9 of their size; a margin is a difference from 1, so 1e-12 there is rounding."""
    if isinstance(a, float) and isinstance(b, float):
        return math.isclose(a, b, rel_tol=1e-9, abs_tol=1e-12)
    return type(a) is type(b) and bool(a == b)
