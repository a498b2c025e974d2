"""A table brought up to date is the table made afresh, after any edit; and a preview touches nothing."""

from __future__ import annotations

from collections.abc import Callable
from random import Random
from typing import Any

import numpy as np
import pytest

from engine import cells
from engine import patch as patching
from engine.cautions import blocking_flags
from engine.edits import Batch, Edit, Insert, Move, Refusal, Remove, Rename, Set, apply, inverse
from engine.envelope import TOLERANCE, Envelope
from engine.margins import MarginTable, compute
from engine.material import LIMITS, THEORIES
from engine.patch import Patch
from engine.project import Project
from engine.store import parse

from ..random_projects import random_project
from .builders import any_step, axial, case, category, loads, material, point, project, random_step, shear, wide

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
    check_envelope(table.envelope, fresh)
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
    found, expected = table.rating, fresh.rating
    of, expected_of = found.of_point, expected.of_point
    assert np.array_equal(found.temperature[of], expected.temperature[expected_of], equal_nan=True)
    assert np.array_equal(found.strength[:, :, of], expected.strength[:, :, expected_of], equal_nan=True)
    assert np.array_equal(table.missing(slice(None), slice(None)), fresh.missing(slice(None), slice(None)))


def check_envelope(found: Envelope, fresh: MarginTable) -> None:
    """Governing cells, the same but for equals; counts and verdicts exactly."""
    expected = fresh.envelope
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


@pytest.mark.parametrize("seed", range(12))
def test_after_every_step_a_wide_table_is_that_made_afresh(seed: int) -> None:
    chance = Random(seed)
    given = wide(seed)
    table, patched = compute(given), 0
    undo: list[Edit] = []
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
    for _ in range(12):
        for _ in range(chance.choice([1, 1, 3])):
            given, _ = random_step(given, chance.randrange(10**9))
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


# What each edit computes again


def base() -> Project:
    """Twelve points and 70 cases, of three groups; case C40 governs everywhere."""
    made = [case(f"C{i}", {"a": 1.0 + 0.01 * i, "b": 0.2}) for i in range(68)]
    made[40] = case("C40", {"a": 9.0, "b": 0.2})
    made += [case("C68", combine={"C1": 1.0, "C2": 0.5}), case("C69", combine={"C68": 1.1}, category="other")]
    points = [point(f"P{i}", per_load={"a": axial(10.0 + i), "b": shear(5.0)}) for i in range(10)]
    points += [
        point("other", {"C3": axial(4.0)}, per_load={"a": axial(20.0)}, not_felt="rest", material="other"),
        point("direct", {f"C{i}": axial(100.0 + i) for i in range(68)}),
    ]
    categories = [category("normal", 1.5), category("other", 1.2, 2.0)]
    return project(
        points,
        made,
        loads("a", "b"),
        categories=categories,
        materials=[material(ultimate=450.0), material("other", 250.0, 400.0)],
    )


EDITS: list[tuple[Edit, str]] = [
    (Set("case", "C5", ("loads", "a"), 20.0), "5"),  # a load
    (Set("case", "C1", ("loads", "a"), 20.0), "1 68 69"),  # an ingredient: also what combines it, at any depth
    (Set("case", "C68", ("combine", "C1"), 2.0), "68 69"),
    (Set("case", "C5", ("category",), "other"), "5"),  # few columns of other strengths
    (Set("case", "C5", ("temperature",), 50.0), ""),  # a temperature that no strength hangs on
    (Set("case", "C5", ("label",), "words"), ""),
    (Set("case", "C5", ("loads", "b"), 0.2), ""),  # the number it had
    (Set("point", "P3", ("label",), "words"), "P3"),
    (Set("point", "P3", ("per-load", "a"), axial(99.0)), "P3"),
    (Set("point", "direct", ("stress", "C9"), axial(299.0)), "P11"),
    (Set("point", "direct", ("stress", "C9"), None), "P11"),
    (Set("point", "P3", ("factor",), 1.5), "P3"),
    (Set("material", "other", ("yield",), 100.0), ""),  # equivalents stay
    (Set("material", "steel", ("yield",), 200.0), ""),
    (Set("category", "normal", ("yield",), 1.1), ""),
    (Set("category", "other", ("ultimate",), None), "69"),
    (Set("project", "", ("accept",), "tresca"), ""),
    (Set("project", "", ("thin",), 0.5), ""),
    (Set("load", "a", ("label",), "words"), ""),
    (Rename("material", "other", "renamed"), "P10"),
    (Rename("category", "other", "renamed"), ""),
    (Rename("point", "P3", "renamed"), "P3"),
    (Move("case", "C5", 6), "5 6"),
    (Move("point", "P3", 4), "P3 P4"),
    (
        Batch((Set("case", "C5", ("loads", "a"), 20.0), Set("point", "P3", ("factor",), 1.5)), "both"),
        "5 P3",
    ),
]


@pytest.mark.parametrize(("edit", "computed"), EDITS)
def test_only_what_an_edit_touches_is_computed_again(
    edit: Edit, computed: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    before = base()
    table = compute(before)
    kept = table.values
    seen: set[str] = set()

    def recorded(influence: Any, sets: Any, rating: Any, rows: Any, columns: Any, of_case: Any, local: Any) -> Any:
        seen.update(f"P{row}" for row in rows if len(columns) == 70)
        seen.update(str(column) for column in columns if len(columns) < 70)
        return whole(influence, sets, rating, rows, columns, of_case, local)

    whole = cells.equivalents_of
    monkeypatch.setattr(patching, "equivalents_of", recorded)
    after = apply(before, edit)
    table = compute(after, table)
    assert table.values is kept or np.shares_memory(table.values, kept)
    assert seen == set(computed.split())
    monkeypatch.undo()
    check(table, after)
    check(compute(before, table), before)


AFRESH: list[Edit] = [
    Insert("case", 5, {"name": "new", "category": "normal", "loads": {"a": 99.0}}),
    Insert("point", 5, {"name": "new", "material": "steel", "stress": {"C5": axial(290.0)}}),
    Remove("point", "P3"),
    Remove("case", "C69"),
    Set("case", "C5", ("check",), False),
    Set("load", "b", ("sense",), "reversible"),
    Rename("load", "a", "renamed"),
    Move("load", "a", 1),
    Insert("load", 0, {"name": "new"}),
    Move("case", "C5", 60),  # more than half of all columns
    Move("point", "P1", 11),
]


@pytest.mark.parametrize("edit", AFRESH)
def test_an_edit_that_changes_the_shape_or_most_of_a_table_is_computed_afresh(edit: Edit) -> None:
    before = base()
    table = compute(before)
    after = apply(before, edit)
    assert Patch.between(table, after) is None
    table = compute(after, table)
    check(table, after)
    check(compute(before, table), before)


def test_without_any_edit_nothing_is_computed() -> None:
    before = base()
    table = compute(before)
    envelope = table.envelope
    table = compute(before, table)
    assert np.array_equal(table.envelope.least, envelope.least)
    check(table, before)


# What governs after an edit


def governing(table: MarginTable) -> set[str]:
    """The cases that govern linear points, by either theory."""
    return {table.project.checked[case].name for case in table.envelope.case[:, :10].ravel()}


@pytest.mark.parametrize(
    ("relieved", "next_one"),
    [
        ({"a": 0.1}, "C67"),  # from another group of cases
        ({"a": 1.41}, "C67"),
        (None, "C67"),
    ],
)
def test_where_the_case_that_governed_everywhere_is_relieved_the_next_one_governs(
    relieved: dict[str, float] | None, next_one: str
) -> None:
    before = apply(base(), Set("case", "C68", ("combine",), {"C1": 0.1}))
    table = compute(before)
    assert governing(table) == {"C40"}
    after = apply(before, Set("case", "C40", ("loads",), relieved))
    table = compute(after, table)
    assert governing(table) == {next_one}
    check(table, after)
    table = compute(before, table)
    assert governing(table) == {"C40"}


def test_the_next_one_may_stand_in_the_same_group() -> None:
    before = apply(base(), Set("case", "C41", ("loads", "a"), 8.0))
    table = compute(apply(before, Set("case", "C40", ("loads", "a"), 1.0)), compute(before))
    assert governing(table) == {"C41"}


def test_an_equal_case_before_the_governing_one_takes_over_and_gives_back() -> None:
    before = base()
    after = apply(before, Set("case", "C7", ("loads", "a"), 9.0))
    table = compute(after, compute(before))
    assert governing(table) == {"C7"}
    check(table, after)
    table = compute(before, table)
    assert governing(table) == {"C40"}


def test_an_equal_case_after_the_governing_one_governs_once_that_is_relieved() -> None:
    before = apply(base(), Set("case", "C66", ("loads", "a"), 9.0))
    table = compute(before)
    assert governing(table) == {"C40"}
    table = compute(apply(before, Set("case", "C40", ("loads", "a"), 1.0)), table)
    assert governing(table) == {"C66"}


@pytest.mark.parametrize("size", [1.0, 1e-4, 1e-8, 1e-30])  # margins of 1 to 1e30
def test_a_case_is_relieved_however_great_the_margins(size: float) -> None:
    points = [point(f"P{i}", per_load={"a": axial(30.0 + i)}, factor=1.15) for i in range(20)]
    cases = [case(f"C{i}", {"a": size * (1.0 + 0.01 * i)}) for i in range(40)]
    before = project(points, cases, loads("a"), categories=[category("normal", 1.1)])
    after = apply(before, Set("case", "C39", ("loads", "a"), size))
    table = compute(before)
    assert set(table.envelope.case.ravel().tolist()) == {39}
    table = compute(after, table)
    assert set(table.envelope.case.ravel().tolist()) == {38}
    check(table, after)
    table = compute(before, table)
    assert set(table.envelope.case.ravel().tolist()) == {39}
    check(table, before)


def test_cells_that_lose_their_data_stop_governing_and_come_back() -> None:
    before = apply(base(), Set("point", "P0", ("per-load", "b"), None))
    before = apply(before, Batch(tuple(Set("case", f"C{i}", ("loads", "b"), 0.0) for i in range(68)), "no b"))
    table = compute(before)
    assert table.envelope.missing[0] == 0
    after = apply(before, Set("case", "C40", ("loads", "b"), 1.0))
    table = compute(after, table)
    assert table.envelope.missing[0] == 1
    assert table.envelope.case[0, 0] != 40
    check(table, after)
    table = compute(before, table)
    assert table.envelope.case[:, 0].tolist() == [40, 40]
    check(table, before)


def test_a_point_that_loses_its_last_data_and_gets_some_again() -> None:
    points = [point(f"P{i}", per_load={"a": axial(1.0)}) for i in range(3)]
    before = project(points, [case("A", {"a": 1.0}), case("B", {"b": 1.0}), case("C", {"b": 1.0})], loads("a", "b"))
    table = compute(before)
    after = apply(before, Set("case", "A", ("loads", "b"), 1.0))
    table = compute(after, table)
    assert not table.envelope.of_project().known
    check(table, after)
    check(compute(before, table), before)


def test_tension_follows_a_case_that_gets_its_data_while_a_material_changes() -> None:
    tense = [900.0, 900.0, 900.0, 0.0, 0.0, 10.0]
    points = [point("P", per_load={"a": tense}), point("Q", per_load={"a": axial(1.0)}, material="other")]
    cases = [case("A", {"a": 1.0, "b": 1.0}), case("B", {"a": 0.1}), case("C", {"a": 0.1})]
    before = project(points, cases, loads("a", "b"), materials=[material(), material("other", 100.0)])
    both = (Set("case", "A", ("loads", "b"), None), Set("material", "steel", ("yield",), 290.0))
    after = apply(before, Batch(both, "both"))
    table = compute(before)
    assert Patch.between(table, after) is not None
    table = compute(after, table)
    assert table.envelope.tension.tolist() == [1, 0]
    assert table.hydrostatic[:, 0].tolist() == [True, False]
    table = compute(before, table)
    assert table.envelope.tension.tolist() == [0, 0]


def test_tension_follows_a_required_factor_that_no_strength_shows() -> None:
    rows = {name: [700.0, 0.0, 0.0, 0.0, 0.0, 0.0] for name in "ABC"}
    before = project(
        [point(name, rows) for name in "PQR"],
        [case(name) for name in "ABC"],
        categories=[category("normal", (1.0, 1.5))],
        materials=[material(shear_yield=60.0)],
    )
    both = (Set("material", "steel", ("shear-yield",), 120.0), Set("category", "normal", ("yield", "tresca"), 2.0))
    after = apply(before, Batch(both, "the same by Tresca"))
    table = compute(before)
    assert table.envelope.tension.tolist() == [0, 0, 0]
    table = compute(after, table)
    assert table.envelope.tension.tolist() == [3, 3, 3]


def test_a_temperature_by_case_follows_a_case_to_another_column() -> None:
    hot = material("hot", 300.0, yield_at=((20.0, 300.0), (120.0, 200.0)))
    points = [point(f"P{i}", per_load={"a": axial(10.0)}, temperature={"C1": 120.0}, material="hot") for i in range(4)]
    points += [point(f"Q{i}", per_load={"a": axial(10.0)}) for i in range(6)]
    before = project(points, [case(f"C{i}", {"a": 9.0}) for i in range(6)], loads("a"), materials=[hot, material()])
    after = apply(before, Move("case", "C1", 2))
    table = compute(before)
    assert Patch.between(table, after) is not None
    assert table.envelope.case[0].tolist() == [1] * 4 + [0] * 6
    table = compute(after, table)
    assert table.envelope.case[0].tolist() == [2] * 4 + [0] * 6
    check(table, after)


# Previews, and tables taken over


def contents(table: MarginTable) -> list[bytes]:
    """Every array of a table, byte for byte."""
    found, sets, rating, influence = table.envelope, table.sets, table.rating, table.influence
    arrays = [table.values, table.hydrostatic, table.group_least, found.least, found.case, found.limit, found.missing]
    arrays += [found.tension, sets.magnitudes, sets.sizes, rating.strength, rating.allowable, rating.factor]
    arrays += [influence.per_load, influence.unknown, influence.linear, influence.rowed]
    return [array.tobytes() for array in arrays]


@pytest.mark.parametrize("seed", range(3))
def test_a_patch_that_is_not_applied_leaves_its_table_untouched(seed: int) -> None:
    chance, given = Random(seed), wide(seed)
    table = compute(given)
    kept, made = contents(table), 0
    for _ in range(25):
        after = applied_or_not(given, any_step(chance, given))
        made += Patch.between(table, after) is not None
        assert contents(table) == kept
    assert made >= 8
    check(table, given)


@pytest.mark.parametrize("edit", [edit for edit, _ in EDITS])
def test_a_preview_shows_what_the_applied_edit_gives(edit: Edit) -> None:
    before = base()
    after = apply(before, edit)
    table = compute(before)
    patch = Patch.between(table, after)
    assert patch is not None
    preview = patch.envelope
    check_envelope(preview, MarginTable(after))
    applied = patch.apply()
    for name in ("least", "case", "limit", "missing", "tension"):
        assert np.array_equal(getattr(preview, name), getattr(applied.envelope, name), equal_nan=name == "least")


READING: dict[str, Callable[[MarginTable], object]] = {
    "equivalents": lambda table: table.values,
    "tension": lambda table: table.hydrostatic,
    "groups": lambda table: table.group_least,
    "margin": lambda table: table.margin["yield"]["tresca"],
    "equivalent": lambda table: table.equivalent["yield"]["tresca"],
    "block": lambda table: table.margins(slice(None), slice(None), 0),
    "missing": lambda table: table.missing(slice(None), slice(None)),
    "stress": lambda table: table.stress(3, 5),
    "cells": lambda table: table.equivalents_at(0, np.array([0]), np.array([[0]])),
    "compute": lambda table: compute(table.project, table),
}


@pytest.mark.parametrize("read", READING.values(), ids=READING)
def test_a_table_that_was_taken_over_cannot_be_read(read: Callable[[MarginTable], object]) -> None:
    before = base()
    table = compute(before)
    read(compute(before))
    compute(apply(before, Set("point", "P3", ("per-load", "a"), axial(99.0))), table)
    with pytest.raises(RuntimeError, match="taken over"):
        read(table)


def test_a_patch_of_a_table_that_was_taken_over_cannot_be_applied() -> None:
    before = base()
    table = compute(before)
    patch = Patch.between(table, apply(before, Set("case", "C5", ("loads", "a"), 20.0)))
    assert patch is not None
    compute(before, table)
    with pytest.raises(RuntimeError, match="taken over"):
        patch.apply()


def test_a_table_computed_afresh_leaves_the_previous_one_readable() -> None:
    before = base()
    table = compute(before)
    compute(apply(before, Remove("point", "P3")), table)
    check(table, before)
