"""Strengths by temperature, limit and theory."""

from __future__ import annotations

import math

import numpy as np
import pytest

from engine.material import Material, strengths, tabled_value, tresca_yield, ultimate_strength, yield_strength

from .builders import material

NAN = math.nan
TABLE = ((20.0, 300.0), (100.0, 260.0), (200.0, 200.0))

AT = [
    (20.0, 300.0),  # the first row, its end included
    (200.0, 200.0),  # the last row, its end included
    (100.0, 260.0),  # a row between
    (60.0, 280.0),  # half way
    (175.0, 215.0),  # three quarters of the way
    (19.999, NAN),  # below: never extrapolated
    (200.001, NAN),  # above
    (-1e9, NAN),
    (NAN, NAN),  # no temperature
]


def one(values: np.ndarray) -> float:
    """The single value of an array."""
    return float(values.item())


def same(found: float, expected: float) -> bool:
    """Equal, both unknown included."""
    return found == pytest.approx(expected, rel=1e-14, nan_ok=True)


@pytest.mark.parametrize(("temperature", "strength"), AT)
def test_a_table_is_linear_between_its_rows_and_says_nothing_outside(temperature: float, strength: float) -> None:
    assert same(one(tabled_value(TABLE, np.array([temperature]))), strength)


def test_a_table_is_read_at_any_shape_at_once() -> None:
    found = tabled_value(TABLE, np.array([[20.0, 60.0], [300.0, 200.0]]))
    assert np.array_equal(found, [[300.0, 280.0], [NAN, 200.0]], equal_nan=True)


def test_a_table_of_one_row_holds_at_its_temperature_alone() -> None:
    found = tabled_value(((20.0, 300.0),), np.array([19.0, 20.0, 21.0]))
    assert np.array_equal(found, [NAN, 300.0, NAN], equal_nan=True)


YIELDS = [
    (material(), 500.0, 300.0),  # no table: the plain value, whatever the range says
    (material(covered=(0.0, 50.0)), 500.0, 300.0),
    (material(), NAN, 300.0),
    (material(yield_at=TABLE), NAN, 300.0),  # a table, and no temperature: the plain value
    (material(yield_at=TABLE), 60.0, 280.0),
    (material(yield_at=TABLE), 201.0, NAN),  # outside the table
    (material(yield_at=TABLE, covered=(0.0, 500.0)), 201.0, NAN),  # a range does not stretch a table
]


@pytest.mark.parametrize(("given", "temperature", "strength"), YIELDS)
def test_yield_strength_at_temperature(given: Material, temperature: float, strength: float) -> None:
    assert same(one(yield_strength(given, np.array([temperature]))), strength)


HOT = ((20.0, 450.0), (120.0, 400.0))

ULTIMATES = [
    (material(), 20.0, NAN),  # not known
    (material(ultimate=450.0), 500.0, 450.0),  # no table at all: the plain value
    (material(ultimate=450.0), NAN, 450.0),
    (material(ultimate=450.0, ultimate_at=HOT), NAN, 450.0),  # no temperature: the plain value
    (material(ultimate=450.0, ultimate_at=HOT), 70.0, 425.0),
    (material(ultimate=450.0, ultimate_at=HOT), 121.0, NAN),
    (material(ultimate_at=HOT), 70.0, 425.0),  # a table without a plain value
    (material(ultimate_at=HOT), NAN, NAN),
    (material(ultimate=450.0, yield_at=TABLE), 60.0, 450.0),  # only yield tabled: the plain value inside its table
    (material(ultimate=450.0, yield_at=TABLE), 201.0, NAN),  # and nothing outside it
    (material(ultimate=450.0, yield_at=TABLE), NAN, 450.0),
    (material(ultimate=450.0, yield_at=TABLE, ultimate_at=HOT), 110.0, 405.0),  # each by its own table
    (material(ultimate=450.0, yield_at=((20.0, 300.0),), ultimate_at=HOT), 110.0, 405.0),
]


@pytest.mark.parametrize(("given", "temperature", "strength"), ULTIMATES)
def test_ultimate_strength_at_temperature(given: Material, temperature: float, strength: float) -> None:
    assert same(one(ultimate_strength(given, np.array([temperature]))), strength)


TRESCA = [
    (None, 300.0, 300.0),  # not measured: half the yield, as Tresca has it
    (150.0, 300.0, 300.0),  # measured at half the yield: the same
    (180.0, 300.0, 300.0),  # above half the yield: Tresca gains nothing
    (135.0, 300.0, 270.0),  # below half the yield: twice the shear yield
    (135.0, 200.0, 180.0),  # at temperature, in the same proportion
    (135.0, NAN, NAN),
]


@pytest.mark.parametrize(("shear_yield", "strength", "expected"), TRESCA)
def test_a_shear_yield_below_half_the_yield_lowers_trescas_strength(
    shear_yield: float | None, strength: float, expected: float
) -> None:
    found = tresca_yield(material(shear_yield=shear_yield), np.array([strength]))
    assert same(one(found), expected)


def test_a_measured_shear_yield_changes_neither_von_mises_nor_the_ultimate() -> None:
    found = strengths(material(ultimate=450.0, shear_yield=120.0), np.array([20.0]))
    by_name = {(limit, theory): one(value) for limit, theories in found.items() for theory, value in theories.items()}
    assert by_name == {
        ("yield", "tresca"): 240.0,
        ("yield", "von-mises"): 300.0,
        ("ultimate", "tresca"): 450.0,
        ("ultimate", "von-mises"): 450.0,
    }


@pytest.mark.parametrize(
    ("covered", "temperature", "expected"),
    [
        (None, 20.0, False),  # no range claims anything
        ((-20.0, 80.0), -20.0, True),  # ends included
        ((-20.0, 80.0), 80.0, True),
        ((-20.0, 80.0), 80.001, False),
        ((-20.0, 80.0), -20.001, False),
    ],
)
def test_a_range_covers_its_ends(covered: tuple[float, float] | None, temperature: float, expected: bool) -> None:
    assert material(covered=covered).covers(temperature) is expected


@pytest.mark.parametrize(
    ("given", "expected"),
    [(material(), False), (material(yield_at=TABLE), True), (material(ultimate_at=TABLE), True)],
)
def test_a_material_is_tabled_by_either_strength(given: Material, expected: bool) -> None:
    assert given.tabled is expected
