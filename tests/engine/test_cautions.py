"""Reasons not to trust a margin: which stand, which block, and what that does to the project."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from engine.cautions import NOTE_NAMES, Caution, blocking_flags, complete, note_flags, of_point, passes, tally
from engine.integrity import CAUTION_NAMES
from engine.margins import MarginTable, compute
from engine.project import Acknowledgement, Project
from engine.store import parse

from ..random_projects import random_project
from .builders import axial, case, category, direct, material, point, project

TENSE = [900.0, 900.0, 900.0, 0.0, 0.0, 0.0]
TABLE = ((0.0, 300.0), (100.0, 200.0))


def names(given: Project, row: int = 0) -> list[str]:
    """The cautions of a point, in their order."""
    return [caution.name for caution in of_point(compute(given), row)]


def text(given: Project, name: str) -> str:
    """The text of the first point's caution of that name."""
    return next(caution.text for caution in of_point(compute(given), 0) if caution.name == name)


def warm(temperature: float | None, **of_material: Any) -> Project:
    """One point in one case at a temperature."""
    cases = [case("A", temperature=temperature)]
    return project([point("P", {"A": axial(1.0)})], cases, materials=[material(**of_material)])


def test_a_sound_point_has_no_cautions() -> None:
    assert names(direct({"A": axial(100.0)})) == []


# Blocking cautions


@pytest.mark.parametrize(
    ("elongation", "brittle"),
    [(None, False), (0.05, False), (0.0499, True), (0.0, True), (0.2, False)],  # at 0.05 a metal is ductile
)
def test_an_elongation_below_0_05_blocks(elongation: float | None, brittle: bool) -> None:
    given = direct({"A": axial(1.0)}, materials=[material(elongation=elongation)])
    assert names(given) == (["elongation"] if brittle else [])


def test_hydrostatic_tension_blocks() -> None:
    given = direct({"A": axial(1.0), "B": TENSE}, categories=[category("normal", 1.5)])
    assert names(given) == ["hydrostatic-tension"]
    assert "2700.0 in B" in text(given, "hydrostatic-tension")
    assert "4 x 300 / 1.5" in text(given, "hydrostatic-tension")


TEMPERATURES = [
    (None, {}, []),  # none given: the plain values
    (20.0, {}, ["temperature"]),  # given, and neither table nor range
    (50.0, {"covered": (0.0, 50.0)}, []),  # ends included
    (0.0, {"covered": (0.0, 50.0)}, []),
    (50.1, {"covered": (0.0, 50.0)}, ["temperature"]),
    (-0.1, {"covered": (0.0, 50.0)}, ["temperature"]),
    (50.0, {"yield_at": TABLE}, []),  # the table vouches
    (101.0, {"yield_at": TABLE}, []),  # outside the table there is no margin to be cautious about
    (101.0, {"yield_at": TABLE, "covered": (0.0, 50.0)}, []),
    (20.0, {"ultimate": 450.0, "ultimate_at": TABLE}, ["temperature"]),  # a table of the ultimate says nothing of yield
]


@pytest.mark.parametrize(("temperature", "given", "expected"), TEMPERATURES)
def test_a_temperature_that_no_table_or_range_covers_blocks(
    temperature: float | None, given: dict[str, Any], expected: list[str]
) -> None:
    assert names(warm(temperature, **given)) == expected


def test_a_temperature_of_the_points_own_blocks_too() -> None:
    given = project([point("P", {"A": axial(1.0)}, temperature=60.0)], [case("A")])
    assert names(given) == ["temperature"]
    assert "60 in A" in text(given, "temperature")


FACTORS = [
    (category("normal", 1.0), 1.0, []),
    (category("normal", (0.99, 1.0)), 1.0, ["factor-below-one"]),
    (category("normal", (1.0, 0.99)), 1.0, ["factor-below-one"]),
    (category("normal", 1.0, (1.0, 0.99)), 1.0, ["factor-below-one"]),
    (category("normal", 1.0), (0.99, 1.0), ["factor-below-one"]),
    (category("normal", 1.0), (1.0, 0.99), []),  # a point factor of a limit that no case asks for
    (category("normal", 1.0, 1.0), (1.0, 0.99), ["factor-below-one"]),
]


@pytest.mark.parametrize(("of_cases", "of_point", "expected"), FACTORS)
def test_a_factor_below_one_blocks(of_cases: Any, of_point: Any, expected: list[str]) -> None:
    given = project(
        [point("P", {"A": axial(1.0)}, factor=of_point)],
        [case("A")],
        categories=[of_cases],
        materials=[material(ultimate=450.0)],
    )
    assert names(given) == expected


@pytest.mark.parametrize(("check", "expected"), [(True, ["factor-below-one"]), (False, [])])
def test_only_the_categories_of_checked_cases_count(check: bool, expected: list[str]) -> None:
    given = project(
        [point("P", {"A": axial(1.0), "B": axial(1.0)})],
        [case("A"), case("B", category="low", check=check)],
        categories=[category(), category("low", 0.9)],
    )
    assert names(given) == expected


def test_without_checked_cases_no_factor_is_used() -> None:
    given = project([point("P", {"A": axial(1.0)}, factor=0.9)], [case("A", check=False)])
    assert names(given) == []


# Notes


def test_a_missing_source_of_a_strength_is_noted() -> None:
    assert names(direct({"A": axial(1.0)}, materials=[material(source="")])) == ["no-source-strength"]


def test_a_missing_source_of_the_stresses_of_a_point_is_noted() -> None:
    given = project([point("P", {"A": axial(1.0)}, source=""), point("Q", {"A": axial(1.0)})], [case("A")])
    assert names(given, 0) == ["no-source-stress"]
    assert names(given, 1) == []


@pytest.mark.parametrize(
    ("temperature", "given", "expected"),
    [
        (None, {"yield_at": TABLE}, ["no-temperature"]),
        (None, {"ultimate": 450.0, "ultimate_at": TABLE}, ["no-temperature"]),
        (50.0, {"yield_at": TABLE}, []),
        (None, {"covered": (0.0, 50.0)}, []),  # no table
    ],
)
def test_a_case_without_temperature_on_a_material_with_a_table_is_noted(
    temperature: float | None, given: dict[str, Any], expected: list[str]
) -> None:
    assert names(warm(temperature, **given)) == expected


PLAIN = [
    (50.0, {"ultimate": 450.0, "yield_at": TABLE}, 1.5, ["ultimate-temperature"]),
    (50.0, {"ultimate": 450.0, "yield_at": TABLE}, None, []),  # the ultimate is not asked
    (50.0, {"yield_at": TABLE}, 1.5, []),  # nor known
    (50.0, {"ultimate": 450.0, "yield_at": TABLE, "ultimate_at": TABLE}, 1.5, []),
    (50.0, {"ultimate": 450.0, "yield_at": TABLE, "covered": (0.0, 50.0)}, 1.5, []),  # the range vouches for it
    (50.1, {"ultimate": 450.0, "yield_at": TABLE, "covered": (0.0, 50.0)}, 1.5, ["ultimate-temperature"]),
    (101.0, {"ultimate": 450.0, "yield_at": TABLE}, 1.5, []),  # outside the table there is no margin
]


@pytest.mark.parametrize(("temperature", "given", "ultimate", "expected"), PLAIN)
def test_a_plain_ultimate_used_at_a_temperature_of_the_yield_table_is_noted(
    temperature: float, given: dict[str, Any], ultimate: float | None, expected: list[str]
) -> None:
    made = project(
        [point("P", {"A": axial(1.0)})],
        [case("A", temperature=temperature)],
        materials=[material(**given)],
        categories=[category("normal", 1.0, ultimate)],
    )
    assert names(made) == expected


ELASTIC = [
    (axial(301.0), {"ultimate": 450.0}, 1.0, True),
    (axial(300.0), {"ultimate": 450.0}, 1.0, False),  # at yield
    (axial(300.0 * (1 + 1e-10)), {"ultimate": 450.0}, 1.0, False),  # equal to it
    (axial(301.0), {"ultimate": 450.0}, None, False),  # the ultimate is not tested
    (axial(301.0), {}, 1.0, False),  # nor can be
    ([0, 0, 0, 160.0, 0, 0], {"ultimate": 450.0}, 1.0, True),  # by Tresca alone
    (axial(250.0), {"ultimate": 450.0, "shear_yield": 120.0}, 1.0, True),  # above Tresca's own strength
]


@pytest.mark.parametrize(("stress", "given", "ultimate", "noted"), ELASTIC)
def test_ultimate_tested_with_elastic_stress_above_yield_is_noted(
    stress: list[float], given: dict[str, Any], ultimate: float | None, noted: bool
) -> None:
    made = direct({"A": stress}, materials=[material(**given)], categories=[category("normal", 1.0, ultimate)])
    assert ("ultimate-elastic" in names(made)) is noted


def test_elastic_stress_is_compared_with_yield_without_any_factor() -> None:
    given = project(
        [point("P", {"A": axial(200.0)}, factor=2.0)],
        [case("A")],
        categories=[category("normal", 2.0, 2.0)],
        materials=[material(ultimate=450.0)],
    )
    assert "ultimate-elastic" not in names(given)


# All of them


def crowded() -> Project:
    """A point with every caution at once."""
    return project(
        [point("P", {"A": TENSE, "B": axial(500.0)}, source="", factor=0.9)],
        [case("A"), case("B", temperature=50.0)],
        materials=[material(ultimate=600.0, elongation=0.01, ultimate_at=TABLE, source="")],
        categories=[category("normal", 1.0, 1.0)],
        acknowledgements=[Acknowledgement("P", "elongation", "A. B.", "tested")],
    )


def test_blocking_cautions_come_first() -> None:
    found = of_point(compute(crowded()), 0)
    assert [caution.name for caution in found if caution.blocking] == list(CAUTION_NAMES)
    assert [caution.blocking for caution in found] == sorted((caution.blocking for caution in found), reverse=True)
    assert [caution.name for caution in found if not caution.blocking] == [
        "no-source-strength",
        "no-source-stress",
        "no-temperature",
        "ultimate-elastic",
    ]
    assert set(NOTE_NAMES).isdisjoint(CAUTION_NAMES)


def test_every_caution_says_why_in_one_line() -> None:
    texts = [caution.text for caution in of_point(compute(crowded()), 0)]
    assert len(set(texts)) == len(texts) == 8
    for words in texts:
        assert len(words) > 20
        assert words.isprintable()


def test_an_acknowledged_caution_stands_and_says_so() -> None:
    found = {caution.name: caution.acknowledged for caution in of_point(compute(crowded()), 0)}
    assert found["elongation"] is True
    assert [name for name, taken in found.items() if taken] == ["elongation"]


def test_an_acknowledgement_holds_for_its_point_alone() -> None:
    given = project(
        [point("P", {"A": axial(1.0)}), point("Q", {"A": axial(1.0)})],
        [case("A")],
        materials=[material(elongation=0.01)],
        acknowledgements=[Acknowledgement("Q", "elongation", "A. B.", "tested")],
    )
    table = compute(given)
    assert [of_point(table, row)[0].acknowledged for row in (0, 1)] == [False, True]
    assert tally(given, table.rating, table.envelope).standing == 1


def test_an_acknowledgement_of_a_caution_that_does_not_stand_takes_nothing_away() -> None:
    given = direct(
        {"A": axial(1.0)},
        materials=[material(elongation=0.01)],
        acknowledgements=[Acknowledgement("P", "temperature", "A. B.", "tested")],
    )
    table = compute(given)
    assert tally(given, table.rating, table.envelope).standing == 1


@pytest.mark.parametrize("seed", range(60))
def test_the_cautions_of_all_points_are_those_of_each(seed: int) -> None:
    table = compute(parse(random_project(seed)))
    flags = blocking_flags(table.project, table.rating, table.envelope) | note_flags(table)
    for row in range(table.shape[0]):
        assert {c.name for c in of_point(table, row)} == {name for name, flag in flags.items() if flag[row]}
    taken = [caution.blocking and not caution.acknowledged for caution in all_cautions(table)]
    assert tally(table.project, table.rating, table.envelope).standing == sum(taken)


def all_cautions(table: MarginTable) -> list[Caution]:
    return [caution for row in range(table.shape[0]) for caution in of_point(table, row)]


# Passing


def verdict_of(given: Project) -> tuple[bool, bool]:
    """Whether a project passes, and is complete."""
    table = compute(given)
    return passes(given, table.rating, table.envelope), complete(table.envelope, table.shape[1])


BRITTLE = [material(elongation=0.01)]
TAKEN = [Acknowledgement("P", "elongation", "A. B.", "tested")]

PASSING = [
    (direct({"A": axial(290.0)}), True, True),
    (direct({"A": axial(300.0)}), True, True),  # a margin of zero is no failure
    (direct({"A": axial(300.0 * (1 + 1e-10))}), True, True),  # nor one within 1e-9 of it
    (direct({"A": axial(301.0)}), False, True),
    (direct({"A": axial(0.0)}), True, True),  # no stress passes
    (direct({"A": axial(290.0)}, materials=BRITTLE), False, True),  # a caution blocks
    (direct({"A": axial(290.0)}, materials=BRITTLE, acknowledgements=TAKEN), True, True),
    (direct({"A": axial(290.0)}, materials=[material(source="")]), True, True),  # a note does not
    (direct({"A": axial(301.0)}, materials=BRITTLE, acknowledgements=TAKEN), False, True),
    (direct({"A": [0, 0, 0, 160.0, 0, 0]}), False, True),  # Tresca fails, von Mises does not
    (direct({"A": [0, 0, 0, 160.0, 0, 0]}, accept="von-mises"), True, True),
    (direct({"A": [0, 0, 0, 160.0, 0, 0]}, accept="tresca"), False, True),
    (project([point("P", {"A": axial(1.0)})], [case("A"), case("B")]), True, False),  # not complete
    (project([point("P")], [case("A")]), False, False),  # nothing known
    (project([point("P", {"A": axial(1.0)})], [case("A", check=False)]), False, False),  # nothing checked
    (project(cases=[case("A")]), False, False),  # no points
    (project(), False, False),
]


@pytest.mark.parametrize(("given", "passing", "whole"), PASSING)
def test_whether_a_project_passes_and_is_complete(given: Project, passing: bool, whole: bool) -> None:
    assert verdict_of(given) == (passing, whole)


def test_flags_are_one_for_each_point() -> None:
    given = project(
        [point("P", {"A": axial(1.0)}, material="brittle"), point("Q", {"A": axial(1.0)})],
        [case("A")],
        materials=[material(), material("brittle", elongation=0.01)],
    )
    table = compute(given)
    flags = blocking_flags(given, table.rating, table.envelope)
    assert list(flags) == list(CAUTION_NAMES)
    assert flags["elongation"].tolist() == [True, False]
    assert all(np.shape(flag) == (2,) for flag in flags.values())
