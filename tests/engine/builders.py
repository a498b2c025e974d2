"""Small projects made in code, from invented parts, and the comparison of a report with the oracle's."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping, Sequence
from random import Random
from typing import Any

from engine import integrity
from engine.edits import Batch, Edit, Insert, Move, Remove, Rename, Set
from engine.frozen import FrozenMap, StressRows
from engine.loads import Case, Load, Sense
from engine.material import Material, Table
from engine.project import (
    KINDS,
    Accept,
    Acknowledgement,
    Category,
    Factors,
    Point,
    PointFactor,
    Project,
    Rest,
    Settings,
)
from engine.removal import removal
from engine.sections import Section

from .random_edits import edited

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


# Projects wide enough for groups of cases


WIDE_POINTS, WIDE_CASES = 40, 150
WIDE_LOADS = ("L0", "L1", "L2", "L3", "gust")
"""Loads of a wide project; not every point says what a gust does to it."""


def wide(seed: int) -> Project:
    """40 points of every sort x 150 cases: repeated, combined, some with a load that not every point knows."""
    chance = Random(seed)
    made: list[Case] = []
    for i in range(WIDE_CASES):
        made.append(_case(chance, i, made))
    return project(
        [_point(chance, i, made) for i in range(WIDE_POINTS)],
        made,
        loads(*WIDE_LOADS),
        categories=[category("normal", (1.5, 1.4), 2.0), category("rare", 1.1), category("test", 1.25, (1.5, 1.6))],
        materials=[
            material("plain", 300.0, 450.0, covered=(0.0, 100.0)),
            material("tabled", 320.0, 460.0, yield_at=((0.0, 320.0), (100.0, 240.0))),
            material("weak in shear", 280.0, shear_yield=120.0),
        ],
    )


def _case(chance: Random, i: int, made: list[Case]) -> Case:
    kind = chance.choice(["normal", "rare", "test"])
    warm = chance.choice([20.0, 60.0, 130.0])
    if i % 10 == 9:
        parts = {chance.choice(made).name: chance.choice([1.0, 1.2, -0.7]) for _ in range(2)}
        return case(f"C{i}", combine=parts, category=kind, temperature=warm)
    if i % 17 == 16:
        earlier = made[i - 5]
        return case(f"C{i}", earlier.loads, earlier.combine, category=earlier.category, temperature=earlier.temperature)
    magnitudes = {name: chance.gauss(0.0, 1.0) for name in WIDE_LOADS[:4]}
    if chance.random() < 0.1:
        magnitudes["gust"] = 0.5
    return case(f"C{i}", magnitudes, category=kind, temperature=warm, check=i % 23 != 22)


def _point(chance: Random, i: int, cases: list[Case]) -> Point:
    def row(mean: float = 0.0) -> list[float]:
        return [chance.gauss(mean, 40.0) for _ in range(3)] + [chance.gauss(0.0, 40.0) for _ in range(3)]

    kind = chance.choice(["plain", "tabled", "weak in shear"])
    own: Any = chance.choice([None, None, 50.0, {cases[3].name: 99.0, cases[70].name: 10.0}])
    factor = chance.choice([1.0, (1.2, 1.0)])
    if i % 4 == 3:
        direct = {one.name: row() for one in cases if not one.combine and chance.random() < 0.95}
        return point(f"P{i}", direct, material=kind, temperature=own, factor=factor)
    mean = 300.0 if i % 5 == 0 else 0.0  # nearly hydrostatic: tension beyond what margins can vouch for in some cases
    felt = WIDE_LOADS if i % 3 else WIDE_LOADS[:4]
    added = {cases[5].name: row(), cases[40].name: row()} if i % 7 == 0 else {}
    return point(
        f"P{i}", added, per_load={name: row(mean) for name in felt}, material=kind, temperature=own, factor=factor
    )


def any_step(chance: Random, given: Project) -> Edit:
    """One edit of a wide project, or several that are one step."""
    if chance.random() < 0.2:
        return Batch(tuple(one_edit(chance, given) for _ in range(chance.randint(2, 4))), "several")
    return one_edit(chance, given)


def one_edit(chance: Random, given: Project) -> Edit:
    """One edit of any kind that margins may hang on."""
    one: Case = chance.choice(given.cases)
    at: Point = chance.choice(given.points)
    load = chance.choice(given.names("load"))
    row = [chance.gauss(0.0, 60.0) for _ in range(6)]
    warm = chance.choice([None, 20.0, 99.0, 101.0, -1.0])
    edits: list[Callable[[], Edit]] = [
        lambda: Set("case", one.name, ("loads", load), chance.choice([None, 0.0, 1e-9, 0.5, chance.gauss(0, 2)])),
        lambda: Set("case", one.name, ("loads",), {name: 20.0 * chance.gauss(0, 1) for name in WIDE_LOADS[:4]}),
        lambda: Set("case", one.name, ("loads",), None),
        lambda: Set("case", one.name, ("combine", chance.choice(given.cases).name), chance.choice([None, 0.5, -1.0])),
        lambda: Set("case", one.name, ("category",), chance.choice(given.categories).name),
        lambda: Set("case", one.name, ("temperature",), warm),
        lambda: Set("case", one.name, ("check",), chance.random() < 0.5),
        lambda: Set("point", at.name, ("per-load", load), chance.choice([None, row])),
        lambda: Set("point", at.name, ("stress", one.name), chance.choice([None, row])),
        lambda: Set("point", at.name, ("not-felt",), chance.choice(["rest", None])),
        lambda: Set("point", at.name, ("temperature",), chance.choice([warm, {one.name: 60.0}])),
        lambda: Set("point", at.name, ("material",), chance.choice(given.materials).name),
        lambda: Set("point", at.name, ("factor",), chance.choice([1.0, 1.5, {"yield": 0.9, "ultimate": 1.3}])),
        lambda: Set("point", at.name, ("label",), "a label"),
        lambda: Set("material", chance.choice(given.materials).name, ("yield",), chance.uniform(200.0, 400.0)),
        lambda: Set("material", chance.choice(given.materials).name, ("ultimate",), chance.choice([None, 500.0])),
        lambda: Set("material", chance.choice(given.materials).name, ("shear-yield",), chance.choice([None, 110.0])),
        lambda: Set("material", "plain", ("yield-at",), chance.choice([None, [[10.0, 310.0], [70.0, 250.0]]])),
        lambda: Set("category", chance.choice(given.categories).name, ("yield",), chance.choice([1.0, 1.2, 0.8])),
        lambda: Set("category", chance.choice(given.categories).name, ("ultimate",), chance.choice([None, 1.5])),
        lambda: Set("project", "", ("accept",), chance.choice(["both", "tresca", "von-mises"])),
        lambda: Set("project", "", ("thin",), chance.choice([0.0, 0.1, 0.5])),
        lambda: Set("load", load, ("sense",), chance.choice(["fixed", "fixed", "reversible"])),
        lambda: Move("case", one.name, chance.randrange(len(given.cases))),
        lambda: Move("point", at.name, chance.randrange(len(given.points))),
        lambda: Rename("case", one.name, f"case {chance.random()}"),
        lambda: Rename("point", at.name, f"point {chance.random()}"),
        lambda: removal(given, "case", one.name),
        lambda: Remove("point", at.name),
        lambda: Insert("case", 3, {"name": f"new {chance.random()}", "category": "rare", "loads": dict(one.loads)}),
        lambda: Insert("point", 3, {"name": f"new {chance.random()}", "material": "plain", "per-load": {load: row}}),
    ]
    return chance.choice(edits)()


def random_step(given: Project, seed: int) -> tuple[Project, list[Edit]]:
    """A small project after one random edit, and that edit; as it is and no edit, where that is refused."""
    return edited(given, seed, 1) if any(given.of(kind) for kind in KINDS) else (given, [])


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
