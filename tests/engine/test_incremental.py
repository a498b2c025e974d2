"""A table brought up to date is the table made afresh, after any edit; and a preview touches nothing."""

from __future__ import annotations

from collections.abc import Callable
from random import Random
from typing import Any

import numpy as np
import pytest

from engine import patch as patching
from engine.cautions import blocking_flags
from engine.edits import Batch, Edit, Insert, Move, Refusal, Remove, Rename, Set, apply, inverse
from engine.envelope import TOLERANCE
from engine.loads import Case
from engine.margins import MarginTable, compute
from engine.material import LIMITS, THEORIES
from engine.patch import Patch
from engine.project import Point, Project
from engine.removal import removal
from engine.store import parse

from ..random_projects import random_project
from .builders import axial, case, category, loads, material, point, project, shear
from .random_edits import edited

POINTS, CASES = 40, 150
NAMES = ("L0", "L1", "L2", "L3", "gust")
"""Loads; not every point says what a gust does to it."""


# Projects wide enough for groups of cases


def wide(seed: int) -> Project:
    """40 points of every sort x 150 cases, some repeated, some combined, some with a load that not every point knows."""
    chance = Random(seed)
    made: list[Case] = []
    for i in range(CASES):
        made.append(_case(chance, i, made))
    return project(
        [_point(chance, i, made) for i in range(POINTS)],
        made,
        loads(*NAMES),
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
    magnitudes = {name: chance.gauss(0.0, 1.0) for name in NAMES[:4]} | ({"gust": 0.5} if chance.random() < 0.1 else {})
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
    felt = NAMES if i % 3 else NAMES[:4]
    added = {cases[5].name: row(), cases[40].name: row()} if i % 7 == 0 else {}
    return point(f"P{i}", added, per_load={name: row(mean) for name in felt}, material=kind, temperature=own, factor=factor)


# Comparison with a table made afresh


def close(found: np.ndarray, expected: np.ndarray) -> bool:
    """Within 1e-13 of their size (of 1 + margin for margins near zero), unknown ones at the same places."""
    return np.allclose(found, expected, rtol=1e-13, atol=1e-13, equal_nan=True)


def check(table: MarginTable, given: Project) -> None:
    """Asserts that a table is what the project gives afresh."""
    fresh = MarginTable(given)
    assert table.project is given
    assert np.array_equal(np.isnan(table.values), np.isnan(fresh.values))
    assert np.allclose(table.values, fresh.values, rtol=1e-13, atol=0.0, equal_nan=True)
    assert close(table.group_least, fresh.group_least)
    assert np.array_equal(table.hydrostatic, fresh.hydrostatic)
    check_rating(table, fresh)
    check_envelope(table, fresh)
    stale = blocking_flags(given, table.rating, table.envelope)
    assert {k: v.tolist() for k, v in stale.items()} == {
        k: v.tolist() for k, v in blocking_flags(given, fresh.rating, fresh.envelope).items()
    }
    if table.shape[0] and table.shape[1]:
        row, column = table.shape[0] // 2, table.shape[1] // 2
        assert np.allclose(table.stress(row, column), fresh.stress(row, column), rtol=1e-12, equal_nan=True)


def check_rating(table: MarginTable, fresh: MarginTable) -> None:
    """Margins, strengths and temperatures by cell."""
    for i, limit in enumerate(LIMITS):
        for theory in THEORIES:
            assert close(table.margin[limit][theory], fresh.margin[limit][theory])
        assert np.array_equal(table.rating.asked[i], fresh.rating.asked[i])
    for found, expected in ((table.rating, fresh.rating),):
        of, expected_of = found.of_point, expected.of_point
        assert np.array_equal(found.temperature[of], expected.temperature[expected_of], equal_nan=True)
        assert np.array_equal(found.strength[:, :, of], expected.strength[:, :, expected_of], equal_nan=True)
    assert np.array_equal(table.missing(slice(None), slice(None)), fresh.missing(slice(None), slice(None)))


def check_envelope(table: MarginTable, fresh: MarginTable) -> None:
    """Governing cells, the same but for equals; counts and verdicts exactly."""
    found, expected = table.envelope, fresh.envelope
    assert close(found.least, expected.least)
    assert np.array_equal(found.case >= 0, expected.case >= 0)
    for theory, row in np.argwhere((found.case != expected.case) | (found.limit != expected.limit)):
        limit = LIMITS[found.limit[theory, row]]
        margin = fresh.margin[limit][THEORIES[theory]][row, found.case[theory, row]]
        assert abs(margin - expected.least[theory, row]) <= 1.1 * TOLERANCE
    assert found.missing.tolist() == expected.missing.tolist()
    assert found.tension.tolist() == expected.tension.tolist()
    assert found.verdicts().tolist() == expected.verdicts().tolist()
    assert (found.accept, found.thin) == (expected.accept, expected.thin)


# Random sequences


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
        lambda: Set("case", one.name, ("loads",), {name: 20.0 * chance.gauss(0, 1) for name in NAMES[:4]}),
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


@pytest.mark.parametrize("seed", range(8))
def test_after_every_step_a_wide_table_is_that_made_afresh(seed: int) -> None:
    chance = Random(seed)
    given = wide(seed)
    table, undo, patched = compute(given), [], 0
    for _ in range(40):
        step = undo.pop() if undo and chance.random() < 0.3 else any_step(chance, given)
        try:
            after = apply(given, step)
        except Refusal:
            continue
        undo.append(inverse(given, step))
        patched += Patch.between(table, after) is not None
        table, given = compute(after, table), after
        check(table, given)
    assert patched >= 12  # it is the short way that is being tested


@pytest.mark.parametrize("seed", range(40))
def test_after_every_step_a_small_table_is_that_made_afresh(seed: int) -> None:
    chance = Random(seed)
    given = parse(random_project(seed))
    table = compute(given)
    for step in range(12):
        given, _ = edited(given, 100 * seed + step, chance.choice([1, 1, 3]))
        table = compute(given, table)
        check(table, given)


def applied_or_not(given: Project, edit: Edit) -> Project:
    """The project after an edit, or as it is where that is refused."""
    try:
        return apply(given, edit)
    except Refusal:
        return given


@pytest.mark.soak
@pytest.mark.parametrize("seed", range(100, 200))
def test_long_sequences_agree_too(seed: int) -> None:
    chance = Random(seed)
    given = wide(seed)
    table = compute(given)
    for _ in range(150):
        after = applied_or_not(given, any_step(chance, given))
        table, given = compute(after, table), after
        check(table, given)
