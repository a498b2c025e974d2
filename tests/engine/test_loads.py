"""Combinations, resolved to what each load amounts to."""

from __future__ import annotations

from dataclasses import replace
from random import Random

import numpy as np
import pytest

from engine.frozen import FrozenMap
from engine.loads import Case, Cycle, LoadSets, dependency_order, dependents, users_of

from .builders import case, loads

AB = loads("a", "b")


def magnitudes(*cases: Case) -> dict[str, list[float]]:
    """What loads a and b amount to, by case."""
    sets = LoadSets(AB, cases)
    return dict(zip((case.name for case in cases), sets.magnitudes.tolist(), strict=True))


def by_name(cases: list[Case]) -> dict[str, Case]:
    return {case.name: case for case in cases}


# What a case says


@pytest.mark.parametrize(
    ("given", "acts"),
    [
        (case("A"), False),
        (case("A", {"a": 0.0, "b": -0.0}), False),  # named, and zero
        (case("A", {"a": 0.0, "b": 1e-300}), True),
        (case("A", combine={"B": 1.0}), False),  # loads of others are not its own
    ],
)
def test_a_case_acts_if_a_load_of_its_own_is_not_zero(given: Case, acts: bool) -> None:
    assert given.acts is acts


# The order of combinations


def test_ingredients_come_before_what_combines_them() -> None:
    cases = by_name([case("top", combine={"mid": 1.0, "low": 1.0}), case("mid", combine={"low": 1.0}), case("low")])
    assert dependency_order(cases) == ["low", "mid", "top"]


def test_an_unknown_ingredient_is_passed_over() -> None:
    assert dependency_order(by_name([case("A", combine={"gone": 1.0})])) == ["A"]


@pytest.mark.parametrize(
    ("cases", "ring"),
    [
        ([case("A", combine={"A": 1.0})], ("A", "A")),  # itself
        ([case("A", combine={"B": 1.0}), case("B", combine={"A": 1.0})], ("A", "B", "A")),
        (
            # a ring that the first case only leads to
            [case("S", combine={"A": 1.0}), case("A", combine={"B": 1.0}), case("B", combine={"A": 1.0})],
            ("A", "B", "A"),
        ),
    ],
)
def test_a_ring_of_combinations_is_named(cases: list[Case], ring: tuple[str, ...]) -> None:
    with pytest.raises(Cycle) as error:
        dependency_order(by_name(cases))
    assert error.value.names == ring
    assert str(error.value) == " -> ".join(ring)


def test_a_case_combined_twice_on_different_ways_is_no_ring() -> None:
    diamond = [case("top", combine={"l": 1.0, "r": 1.0}), case("l", combine={"low": 1.0})]
    diamond += [case("r", combine={"low": 1.0}), case("low")]
    assert sorted(dependency_order(by_name(diamond))) == ["l", "low", "r", "top"]


def test_a_chain_of_five_thousand_combinations_needs_no_deep_stack() -> None:
    chain = [case("0", {"a": 1.0})] + [case(str(i), combine={str(i - 1): 1.0}) for i in range(1, 5000)]
    assert LoadSets(AB, chain[::-1]).magnitudes[0].tolist() == [1.0, 0.0]


def test_dependents_are_all_that_combine_a_case_through_any_depth() -> None:
    cases = [case("low"), case("mid", combine={"low": 1.0}), case("top", combine={"mid": 1.0}), case("other")]
    users = users_of(cases)
    assert users == {"low": ["mid"], "mid": ["top"]}
    assert dependents(users, ["low"]) == {"low", "mid", "top"}
    assert dependents(users, ["top", "other"]) == {"top", "other"}


# What combines to what


def test_a_load_that_a_case_does_not_name_is_zero() -> None:
    assert magnitudes(case("A", {"b": 5.0})) == {"A": [0.0, 5.0]}


def test_a_combination_adds_other_cases_times_their_factors() -> None:
    found = magnitudes(case("A", {"a": 2.0}), case("B", {"a": 3.0, "b": 1.0}), case("C", combine={"A": 1.5, "B": -2.0}))
    assert found["C"] == [-3.0, -2.0]


def test_a_combination_adds_its_own_loads_too() -> None:
    assert magnitudes(case("A", {"a": 2.0}), case("B", {"a": 1.0}, {"A": 2.0}))["B"] == [5.0, 0.0]


def test_a_combination_adds_through_any_depth_whatever_the_order_of_the_file() -> None:
    found = magnitudes(
        case("top", {"b": 0.5}, {"mid": 2.0, "low": 1.0}),
        case("mid", {"b": 1.0}, {"low": 3.0}),
        case("low", {"a": 1.0}),
    )
    assert found == {"low": [1.0, 0.0], "mid": [3.0, 1.0], "top": [7.0, 2.5]}


def test_a_case_that_is_not_checked_is_an_ingredient_all_the_same() -> None:
    assert magnitudes(case("A", {"a": 2.0}, check=False), case("B", combine={"A": 1.0}))["B"] == [2.0, 0.0]


VANISHING = [
    ({"a": 0.1}, {"a": 0.3}, {"A": 3.0, "B": -1.0}, 0.0),  # 3 x 0.1 is not 0.3 in binary
    ({"a": 1.0}, {"a": 1.0}, {"A": 1.0, "B": -1.0}, 0.0),
    ({"a": 1.0}, {"a": 1.0 - 1e-12}, {"A": 1.0, "B": -1.0}, 0.0),  # half of 1e-12 of the sum of sizes
    ({"a": 1.0}, {"a": 1.0 - 4e-12}, {"A": 1.0, "B": -1.0}, 4e-12),  # twice 1e-12 of it
    ({"a": 1e-300}, {"a": 0.0}, {"A": 1.0, "B": 1.0}, 1e-300),  # small alone is not small beside its parts
]


@pytest.mark.parametrize(("first", "second", "combine", "expected"), VANISHING)
def test_a_magnitude_within_1e_12_of_its_parts_is_zero(
    first: dict[str, float], second: dict[str, float], combine: dict[str, float], expected: float
) -> None:
    found = magnitudes(case("A", first), case("B", second), case("C", combine=combine))["C"][0]
    assert found == pytest.approx(expected, rel=1e-3, abs=0.0)


def test_a_magnitude_vanishes_beside_parts_at_any_depth() -> None:
    found = magnitudes(
        case("A", {"a": 0.1}),
        case("B", combine={"A": 3.0}),
        case("C", {"a": -0.3}),
        case("D", combine={"B": 1.0, "C": 1.0}),
        case("E", {"a": 1e-14}, {"B": 1.0, "C": 1.0}),
        case("F", {"a": 1e-14}, {"D": 1.0}),  # the parts of D count, though it is zero
    )
    assert (found["D"][0], found["E"][0], found["F"][0]) == (0.0, 0.0, 0.0)


def test_a_small_load_of_a_case_that_combines_nothing_stands() -> None:
    assert magnitudes(case("A", {"a": 1e-14, "b": 1e14}))["A"] == [1e-14, 1e14]


def test_sizes_are_the_sums_of_the_sizes_of_the_parts() -> None:
    sets = LoadSets(AB, [case("A", {"a": -2.0}), case("B", {"a": 1.0}, {"A": 3.0}), case("C", combine={"B": -2.0})])
    assert sets.magnitudes[:, 0].tolist() == [-2.0, -5.0, 10.0]
    assert sets.sizes[:, 0].tolist() == [2.0, 7.0, 14.0]


@pytest.mark.parametrize("given", [case("A", {"c": 1.0}), case("A", combine={"gone": 1.0})])
def test_an_unknown_name_is_a_key_error(given: Case) -> None:
    with pytest.raises(KeyError):
        LoadSets(AB, [given])


def test_ingredients_are_listed_before_what_combines_them() -> None:
    sets = LoadSets(AB, [case("top", combine={"mid": 1.0}), case("x"), case("mid", combine={"low": 1.0}), case("low")])
    assert sets.ingredients([0]) == [3, 2, 0]
    assert sets.ingredients([2, 1]) == [3, 2, 1] or sets.ingredients([2, 1]) == [1, 3, 2]
    assert LoadSets(AB, [case("A"), case("B")]).ingredients([1, 0]) == [0, 1]


# Updates


def random_cases(chance: Random) -> list[Case]:
    """Cases whose combinations reach backward only."""
    made: list[Case] = []
    for i in range(12):
        combine = {chance.choice(made).name: chance.uniform(-2, 2) for _ in range(chance.randint(0, 2)) if made}
        made.append(case(f"C{i}", {name: chance.uniform(-9, 9) for name in "ab" if chance.random() < 0.7}, combine))
    return made


@pytest.mark.parametrize("seed", range(20))
def test_updated_sets_are_those_made_afresh(seed: int) -> None:
    chance = Random(seed)
    before = random_cases(chance)
    sets = LoadSets(AB, before)
    kept = sets.magnitudes.copy()
    after = list(before)
    changed = chance.sample(range(12), 2)
    for place in changed:
        combine = FrozenMap({before[0].name: 2.0}) if place else FrozenMap()
        after[place] = replace(before[place], loads=FrozenMap({"a": 7.0}), combine=combine)
    new, affected = sets.updated(after, changed)
    fresh = LoadSets(AB, after)
    assert np.array_equal(new.magnitudes, fresh.magnitudes)
    assert np.array_equal(new.sizes, fresh.sizes)
    assert new.users == fresh.users
    moved = np.flatnonzero((new.magnitudes != kept).any(axis=1))
    assert set(moved) <= set(affected)
    assert set(affected) == {fresh.place[name] for name in fresh.reached([after[i].name for i in changed])}
    assert np.array_equal(sets.magnitudes, kept)


def test_an_update_names_no_case_that_it_does_not_reach() -> None:
    cases = [case("A", {"a": 1.0}), case("B", combine={"A": 1.0}), case("C", {"a": 1.0})]
    _, affected = LoadSets(AB, cases).updated([replace(cases[0], loads=FrozenMap({"a": 2.0})), *cases[1:]], [0])
    assert sorted(affected) == [0, 1]


def test_relabelled_sets_share_their_numbers() -> None:
    cases = [case("A", {"a": 1.0}), case("B", combine={"A": 1.0})]
    sets = LoadSets(AB, cases)
    warm = [replace(case, temperature=50.0) for case in cases]
    new = sets.relabelled(warm)
    assert new.magnitudes is sets.magnitudes
    assert new.cases == tuple(warm)
    assert sets.cases == tuple(cases)
    assert new.reached(["A"]) == {"A", "B"}
