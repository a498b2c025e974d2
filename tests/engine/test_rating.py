"""What stress may reach in each cell."""

from __future__ import annotations

import math

import numpy as np
import pytest

from engine.project import Point, Project
from engine.rating import Rating

from .builders import axial, case, category, material, point, project

NAN = math.nan
HOT = material("hot", 300.0, 450.0, yield_at=((20.0, 300.0), (120.0, 200.0)))


def rated(given: Project) -> Rating:
    return Rating(given)


def of_point(given: Point, *temperatures: float | None) -> Rating:
    """The rating of one point of the material `hot` in a case for each temperature: A, B, C."""
    cases = [case(name, temperature=at) for name, at in zip("ABC", temperatures, strict=False)]
    return Rating(project([given], cases, materials=[HOT]))


def test_required_factors_are_those_of_the_cases_category_by_limit_and_theory() -> None:
    categories = [category("normal", (1.5, 1.4), (2.0, 1.9)), category("rare", 1.25)]
    rating = rated(project(cases=[case("A"), case("B", category="rare")], categories=categories))
    assert np.array_equal(rating.required[:, :, 0], [[1.5, 1.4], [2.0, 1.9]])
    assert np.array_equal(rating.required[:, :, 1], [[1.25, 1.25], [NAN, NAN]], equal_nan=True)
    assert rating.asked.tolist() == [[True, True], [True, False]]


def test_only_checked_cases_are_rated() -> None:
    rating = rated(project(cases=[case("A", check=False), case("B")]))
    assert rating.required.shape == (2, 2, 1)


@pytest.mark.parametrize(("ultimate", "limits"), [(None, [0]), (2.0, [0, 1])])
def test_a_limit_that_no_case_asks_for_is_left_out(ultimate: float | None, limits: list[int]) -> None:
    assert rated(project(cases=[case("A")], categories=[category(ultimate=ultimate)])).limits == limits


OWN = [
    (None, [20.0, NAN, 120.0]),  # none of its own: the case's hold
    (70.0, [70.0, 70.0, 70.0]),  # a number: all of them
    ({"B": 70.0}, [20.0, 70.0, 120.0]),  # a map: the cases named
    ({}, [20.0, NAN, 120.0]),
]


@pytest.mark.parametrize(("own", "expected"), OWN)
def test_the_temperature_of_a_cell_is_the_points_else_the_cases(
    own: float | dict[str, float] | None, expected: list[float]
) -> None:
    rating = of_point(point("P", material="hot", temperature=own), 20.0, None, 120.0)
    assert np.array_equal(rating.temperature[rating.of_point[0]], expected, equal_nan=True)


def test_the_strength_of_a_cell_is_that_at_its_temperature() -> None:
    rating = of_point(point("P", material="hot"), 70.0, None, 121.0)
    assert np.array_equal(rating.strength[0, :, 0], [[250.0, 300.0, NAN]] * 2, equal_nan=True)
    assert np.array_equal(rating.strength[1, :, 0], [[450.0, 450.0, NAN]] * 2, equal_nan=True)


def test_what_stress_may_reach_is_strength_over_required_factor() -> None:
    rating = rated(
        project(
            [point("P")],
            [case("A")],
            categories=[category("normal", (1.5, 1.25), 2.0)],
            materials=[material(ultimate=450.0)],
        )
    )
    assert np.allclose(rating.allowable[:, :, 0, 0], [[200.0, 240.0], [225.0, 225.0]], rtol=1e-15)


def test_a_shear_yield_below_half_the_yield_makes_the_strength_of_tresca_alone() -> None:
    rating = rated(project([point("P")], [case("A")], materials=[material(ultimate=450.0, shear_yield=120.0)]))
    assert rating.strength[:, :, 0, 0].tolist() == [[240.0, 300.0], [450.0, 450.0]]


def test_a_limit_that_is_not_asked_has_nothing_that_stress_may_reach() -> None:
    rating = rated(project([point("P")], [case("A")], materials=[material(ultimate=450.0)]))
    assert np.isnan(rating.allowable[1]).all()
    assert not np.isnan(rating.strength[1]).any()


def test_points_of_the_same_material_and_temperature_share_their_strengths() -> None:
    points = [
        point("P", {"A": axial(1.0)}),
        point("Q", material="hot"),
        point("R", factor=2.0),  # a factor makes no class of its own
        point("S", temperature=50.0),
        point("T", temperature={"A": 50.0}),
        point("U", temperature={"A": 50.0}),
    ]
    rating = rated(project(points, [case("A")], materials=[material(), HOT]))
    assert rating.of_point.tolist() == [0, 1, 0, 2, 3, 3]
    assert rating.strength.shape == (2, 2, 4, 1)
