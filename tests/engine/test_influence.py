"""Stress of cells: what adds, what stands alone, what is missing and why."""

from __future__ import annotations

from dataclasses import replace
from random import Random
from typing import Any

import numpy as np
import pytest

from engine.influence import Influence, why_missing
from engine.loads import Case, LoadSets
from engine.margins import compute
from engine.project import Point, Project
from engine.sections import Section

from .builders import axial, case, loads, point, project, shear

AB = loads("a", "b")
UNIT = {"a": axial(2.0), "b": shear(3.0)}


def stress(given: Project, point: int = 0) -> dict[str, list[float] | None]:
    """Stress of a point by case, None where it is not known."""
    sets = LoadSets(given.loads, given.cases)
    found = Influence(given.points, given.loads).stress(slice(None), sets, np.arange(len(given.cases)))[:, point]
    assert (np.isnan(found).all(axis=0) | ~np.isnan(found).any(axis=0)).all()
    names = given.names("case")
    return {name: None if np.isnan(row).any() else row.tolist() for name, row in zip(names, found.T, strict=True)}


def of_point(given: Point, *cases: Case) -> dict[str, list[float] | None]:
    """Stress of one point under loads a and b, by case."""
    return stress(project([given], cases, AB))


# Linear points


def test_the_stress_of_a_linear_point_is_the_sum_over_its_loads() -> None:
    found = of_point(point("P", per_load=UNIT), case("A", {"a": 10.0, "b": -1.0}), case("B", {"b": 2.0}), case("C"))
    assert found == {"A": [20.0, 0, 0, -3.0, 0, 0], "B": [0, 0, 0, 6.0, 0, 0], "C": [0.0] * 6}


def test_the_rows_of_a_linear_point_follow_the_names_of_the_loads_and_not_their_order() -> None:
    given = point("P", per_load={"b": shear(3.0), "a": axial(2.0)})
    assert of_point(given, case("A", {"a": 1.0}))["A"] == [2.0, 0, 0, 0, 0, 0]


def test_a_direct_row_of_a_linear_point_is_an_addition_and_its_absence_adds_nothing() -> None:
    given = point("P", {"A": axial(5.0)}, per_load=UNIT)
    found = of_point(given, case("A", {"a": 1.0}), case("B", {"a": 1.0}))
    assert (found["A"], found["B"]) == (axial(7.0), axial(2.0))


def test_a_combination_adds_the_direct_rows_of_its_parts_through_any_depth() -> None:
    given = point("P", {"A": axial(5.0), "B": axial(100.0), "C": axial(1000.0)}, per_load=UNIT)
    found = of_point(
        given,
        case("C", combine={"B": 2.0}),
        case("A", {"a": 1.0}, check=False),
        case("B", {"a": 1.0}, {"A": 3.0}),
        case("D", combine={"B": -1.0, "A": 1.0}),
    )
    assert found["B"] == axial(100.0 + 2.0 + 3 * 7.0)
    assert found["C"] == axial(1000.0 + 2 * 123.0)
    assert found["D"] == axial(-123.0 + 7.0)


@pytest.mark.parametrize(
    ("given", "known"),
    [
        (case("A", {"a": 1.0}), True),
        (case("A", {"a": 1.0, "b": 1.0}), False),  # b acts, and the point says nothing about it
        (case("A", {"a": 1.0, "b": 0.0}), True),  # b is named, and does not act
        (case("A", {"b": 1e-300}), False),
        (case("A"), True),
    ],
)
def test_a_load_that_acts_and_that_the_point_does_not_know_is_no_data(given: Case, known: bool) -> None:
    assert (of_point(point("P", per_load={"a": axial(2.0)}), given)["A"] is not None) is known


@pytest.mark.parametrize("not_felt", [("b",), "rest"])
def test_a_load_that_is_not_felt_adds_nothing(not_felt: tuple[str, ...] | str) -> None:
    given = point("P", per_load={"a": axial(2.0)}, not_felt=not_felt)  # type: ignore[arg-type]
    assert of_point(given, case("A", {"a": 1.0, "b": 5.0}))["A"] == axial(2.0)


def test_a_load_that_comes_in_by_combination_must_be_known_too() -> None:
    found = of_point(
        point("P", per_load={"a": axial(2.0)}), case("A", {"b": 1.0}), case("B", {"a": 1.0}, {"A": 1.0}), case("C")
    )
    assert found == {"A": None, "B": None, "C": [0.0] * 6}


def test_a_load_that_vanishes_in_combination_does_not_act() -> None:
    found = of_point(
        point("P", per_load={"a": axial(2.0)}),
        case("A", {"a": 1.0, "b": 0.1}),
        case("B", {"b": 0.3}),
        case("C", combine={"A": 3.0, "B": -1.0}),
    )
    assert found == {"A": None, "B": None, "C": axial(6.0)}


def test_a_direct_row_does_not_stand_in_for_a_load_that_a_linear_point_does_not_know() -> None:
    given = point("P", {"A": axial(5.0)}, per_load={"a": axial(2.0)})
    assert of_point(given, case("A", {"b": 1.0}))["A"] is None


# Points with direct rows only


def test_the_stress_of_a_direct_point_is_its_own_row_whatever_the_loads() -> None:
    found = of_point(point("P", {"A": axial(5.0)}), case("A", {"a": 9.0}), case("B", {"a": 9.0}), case("C"))
    assert found == {"A": axial(5.0), "B": None, "C": None}


def test_a_direct_point_adds_the_ingredients_of_a_combination_by_the_same_rule() -> None:
    found = of_point(
        point("P", {"A": axial(5.0), "B": shear(1.0)}),
        case("A"),
        case("B"),
        case("C", combine={"A": 2.0, "B": -1.0}),
        case("D", combine={"C": 0.5, "A": 1.0}),
    )
    assert found["C"] == [10.0, 0, 0, -1.0, 0, 0]
    assert found["D"] == [10.0, 0, 0, -0.5, 0, 0]


def test_the_own_row_of_a_combination_goes_before_the_sum() -> None:
    found = of_point(
        point("P", {"A": axial(5.0), "B": axial(1.0)}),
        case("A"),
        case("B", {"a": 1.0}, {"A": 2.0}),
        case("C", combine={"B": 3.0}),
    )
    assert (found["B"], found["C"]) == (axial(1.0), axial(3.0))


@pytest.mark.parametrize(
    ("own", "known"),
    [
        ({}, True),
        ({"a": 0.0}, True),  # named, and zero
        ({"a": 1.0}, False),  # a load of its own that no row stands for
    ],
)
def test_a_combination_with_loads_of_its_own_needs_its_own_row(own: dict[str, float], known: bool) -> None:
    found = of_point(point("P", {"A": axial(5.0)}), case("A"), case("B", own, {"A": 2.0}))
    assert found["B"] == (axial(10.0) if known else None)


@pytest.mark.parametrize("factor", [1.0, 0.0])
def test_an_ingredient_without_a_row_leaves_the_sum_unknown_whatever_its_factor(factor: float) -> None:
    found = of_point(point("P", {"A": axial(5.0)}), case("A"), case("B"), case("C", combine={"A": 1.0, "B": factor}))
    assert found["C"] is None


def test_a_point_without_any_row_has_no_data() -> None:
    assert of_point(point("P"), case("A"), case("B", combine={"A": 1.0})) == {"A": None, "B": None}


def test_an_empty_table_of_unit_loads_makes_no_linear_point() -> None:
    assert not point("P", per_load={}).linear
    assert of_point(point("P", per_load={}), case("A"))["A"] is None


# What is not computed yet


@pytest.mark.parametrize("not_felt", [(), "rest"])  # it has a row, so it is felt
@pytest.mark.parametrize(("magnitude", "known"), [(1.0, False), (0.0, True)])
@pytest.mark.parametrize("sense", ["reversible", "optional"])
def test_a_load_that_does_not_act_as_given_is_no_data_where_it_acts(
    sense: Any, not_felt: Any, magnitude: float, known: bool
) -> None:
    given = point("P", per_load=UNIT, not_felt=not_felt)
    moving = loads("a") + loads("b", sense=sense)
    found = stress(project([given], [case("A", {"a": 1.0, "b": magnitude})], moving))
    assert (found["A"] is not None) is known


@pytest.mark.parametrize("not_felt", [("b",), "rest"])
def test_a_reversible_load_that_is_not_felt_changes_nothing(not_felt: tuple[str, ...] | str) -> None:
    moving = loads("a") + loads("b", sense="reversible")
    given = point("P", per_load={"a": axial(2.0)}, not_felt=not_felt)  # type: ignore[arg-type]
    assert stress(project([given], [case("A", {"a": 1.0, "b": 1.0})], moving))["A"] == axial(2.0)


def test_a_point_on_a_section_has_no_data_until_sections_are_computed() -> None:
    on = replace(point("P", {"A": axial(1.0)}), section="S", at=(0.0, 0.0), axes=((1.0, 0, 0), (0, 1.0, 0)))
    assert stress(project([on], [case("A")], sections=[Section("S", "round")]))["A"] is None


@pytest.mark.parametrize(
    ("given", "cases"),
    [
        (point("P", per_load={"a": axial(1e300)}), [case("A", {"a": 1e300})]),
        (point("P", {"B": axial(1e300)}), [case("B"), case("A", combine={"B": 1e300})]),
        (point("P", per_load=UNIT), [case("B", {"a": 1e300}), case("A", combine={"B": 1e300})]),
    ],
)
def test_a_number_that_overflows_is_no_finite_stress(given: Point, cases: list[Case]) -> None:
    made = project([given], cases, AB)
    sets = LoadSets(made.loads, made.cases)
    column = np.array([sets.place["A"]])
    assert not np.isfinite(Influence(made.points, made.loads).stress(slice(None), sets, column)).all()


# Blocks


def wide(points: int, cases: int, seed: int = 3, first: int = 0) -> Project:
    """Points of every sort, general stresses, combinations."""
    chance = Random(seed)

    def row() -> list[float]:
        return [chance.gauss(0.0, 50.0) for _ in range(6)]

    names = [f"L{i}" for i in range(7)]
    made: list[Case] = []
    for i in range(cases):
        combine = {made[-1].name: 1.1, made[-2].name: chance.uniform(-1, 1)} if i % 5 == 4 else {}
        made.append(case(f"C{i}", {} if combine else {name: chance.gauss(0, 1) for name in names}, combine))
    plain = [made[i].name for i in range(cases) if i % 5 != 4]
    sorts = [
        lambda i: point(f"P{i}", per_load={name: row() for name in names}),
        lambda i: point(f"P{i}", {name: row() for name in plain}),
        lambda i: point(f"P{i}", {plain[0]: row()}, per_load={name: row() for name in names[:4]}, not_felt="rest"),
    ]
    return project([sorts[(i + first) % 3](i) for i in range(points)], made, loads(*names))


def test_a_block_has_the_stresses_of_the_whole() -> None:
    given = wide(10, 23)
    sets, influence = LoadSets(given.loads, given.cases), Influence(given.points, given.loads)
    whole = influence.stress(slice(None), sets, np.arange(23))
    rows, columns = np.array([7, 1, 2]), np.array([4, 22, 3, 9])
    block = influence.stress(rows, sets, columns)
    assert np.allclose(block, whole[:, rows][:, :, columns], rtol=1e-13, atol=1e-12)


@pytest.mark.parametrize("column", [0, 4, 11])
def test_one_case_alone_has_the_bits_of_that_case_among_others(column: int) -> None:
    given = wide(8, 12)
    sets, influence = LoadSets(given.loads, given.cases), Influence(given.points, given.loads)
    whole = influence.stress(slice(None), sets, np.arange(12))
    assert np.array_equal(influence.stress(slice(None), sets, np.array([column]))[:, :, 0], whole[:, :, column])


@pytest.mark.parametrize("row", [0, 2, 6])
def test_one_point_alone_has_the_bits_of_that_point_among_others(row: int) -> None:
    given = wide(8, 12)
    sets = LoadSets(given.loads, given.cases)
    whole = Influence(given.points, given.loads).stress(slice(None), sets, np.arange(12))
    alone = Influence([given.points[row]], given.loads).stress(slice(None), sets, np.arange(12))
    assert np.array_equal(alone[:, 0], whole[:, row])
    among = Influence(given.points, given.loads).stress(np.array([row]), sets, np.arange(12))
    assert np.array_equal(among[:, 0], whole[:, row])


def test_the_trace_is_the_sum_of_the_normal_stresses() -> None:
    given = wide(9, 15)
    sets, influence = LoadSets(given.loads, given.cases), Influence(given.points, given.loads)
    whole = influence.stress(slice(None), sets, np.arange(15))[:3].sum(axis=0)
    rows, columns = np.array([1, 2, 6]), np.array([14, 0, 3])
    assert np.allclose(influence.trace(slice(None), sets, np.arange(15)), whole, rtol=1e-12, atol=1e-10)
    assert np.allclose(influence.trace(rows, sets, columns), whole[rows[:, None], columns], rtol=1e-12, atol=1e-10)


def test_points_taken_over_have_their_new_stresses() -> None:
    before, after = wide(9, 6), wide(9, 6, seed=4, first=1)
    sets, influence = LoadSets(after.loads, after.cases), Influence(before.points, before.loads)
    rows = np.array([0, 4, 8])
    influence.assign(rows, Influence([after.points[i] for i in rows], after.loads))
    mixed = [after.points[i] if i in rows else before.points[i] for i in range(9)]
    fresh = Influence(mixed, after.loads).stress(slice(None), sets, np.arange(6))
    assert np.array_equal(influence.stress(slice(None), sets, np.arange(6)), fresh)


# Why


WHY = [
    (point("P"), case("A"), "no row for A"),
    (point("P"), case("A", combine={"I": 1.0}), "no row for A, nor for all that it combines"),
    (point("P"), case("A", {"a": 1.0}, {"I": 1.0}), "no row for A, which has loads of its own beside what it combines"),
    (
        point("P", per_load={"a": axial(1.0)}),
        case("A", {"b": 1.0}),
        "no stress per unit of b, and not said to be not felt",
    ),
    (point("P", per_load={"m": axial(1.0)}), case("A", {"m": 1.0}), "load m is reversible, which is not computed yet"),
    (point("P", per_load={"a": axial(1e300)}), case("A", {"a": 1e300}), "the stress is too large for a number"),
]


@pytest.mark.parametrize(("given", "of_case", "why"), WHY)
def test_why_a_stress_is_missing_is_said(given: Point, of_case: Case, why: str) -> None:
    all_loads = AB + loads("m", sense="reversible")
    made = project([given], [case("I"), of_case], all_loads)
    assert np.isnan(compute(made).values[:, 0, 1]).all()
    assert why_missing(given, of_case, made.loads, LoadSets(made.loads, made.cases)) == why


def test_why_a_section_gives_no_stress_is_said() -> None:
    on = replace(point("P"), section="S", at=(0.0, 0.0))
    made = project([on], [case("A")], sections=[Section("S", "round")])
    assert "section is not computed yet" in why_missing(on, made.cases[0], (), LoadSets((), made.cases))
