"""Shown numbers: margins down, utilisations up, stresses to the nearest, and nothing that flatters."""

import math
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from engine.figures import (
    TOLERANCE,
    margin_text,
    margin_texts,
    number_text,
    percent_text,
    stress_text,
    utilisation_text,
)

INF, NAN = math.inf, math.nan

MARGINS = [
    (0.0, 2, "+0.00"),
    (-0.0, 2, "+0.00"),  # never -0.00
    (-0.001, 2, "-0.01"),  # a failure never shows as zero
    (-2e-9, 2, "-0.01"),
    (-1e-9, 2, "+0.00"),  # equal to zero, the tolerance included
    (-1e-10, 2, "+0.00"),
    (1e-10, 2, "+0.00"),
    (0.0099999, 2, "+0.00"),
    (0.01 - 1e-10, 2, "+0.01"),
    (0.4699999, 2, "+0.46"),
    (0.47, 2, "+0.47"),
    (0.47 - 1e-12, 2, "+0.47"),  # noise of floating point
    (0.47 - 2e-9, 2, "+0.46"),
    (0.29, 2, "+0.29"),  # 0.29 * 100 is 28.999999999999996
    (1.15 - 1.0, 2, "+0.15"),  # 0.1499999999999999
    (-0.29, 2, "-0.29"),
    (-0.29 - 1e-12, 2, "-0.29"),
    (-0.291, 2, "-0.30"),
    (-1.0, 2, "-1.00"),
    (-0.07, 2, "-0.07"),
    (3.419, 2, "+3.41"),
    (12.345, 2, "+12.34"),
    (98.999, 2, "+98.99"),
    (99.0, 2, "+99.00"),
    (99.0 + 1e-10, 2, "+99.00"),  # above 99 by no more than the tolerance
    (99.0 - 1e-10, 2, "+99.00"),
    (99.0001, 2, ">99"),
    (1e300, 2, ">99"),
    (1e308, 2, ">99"),
    (-99.0, 2, "-99.00"),
    (-99.5, 2, "<-99"),  # no margin is below -1, yet nothing must break
    (-1e308, 2, "<-99"),
    (INF, 2, "inf"),
    (-INF, 2, "-inf"),
    (NAN, 2, "."),
    (0.4699999, 3, "+0.469"),
    (-0.0001, 3, "-0.001"),
    (0.0625, 3, "+0.062"),
    (-0.0001, 0, "-1"),
    (1.99, 0, "+1"),
    (0.1234567, 6, "+0.123456"),
]


@pytest.mark.parametrize(("margin", "decimals", "text"), MARGINS)
def test_a_margin_is_rounded_down(margin, decimals, text):
    assert margin_text(margin, decimals) == text


@pytest.mark.parametrize(("margin", "decimals", "text"), MARGINS)
def test_many_margins_are_shown_as_one_is(margin, decimals, text):
    assert margin_texts([margin], decimals) == [text]


def test_two_decimals_are_the_default():
    assert margin_text(0.123) == "+0.12"
    assert margin_texts(np.array([0.123])) == ["+0.12"]
    assert utilisation_text(0.123) == "0.13"


@st.composite
def near_steps(draw, low=-1.0, high=99.0):
    """A number at, near or within noise of one that can be shown, with its decimals."""
    decimals = draw(st.sampled_from([2, 3]))
    step = draw(st.integers(int(low * 10**decimals), int(high * 10**decimals)))
    off = draw(st.sampled_from([0.0, 1e-9, 1e-12, 1e-8, 1e-10]) | st.floats(0.0, 3e-9))
    return step / 10**decimals + draw(st.sampled_from([off, -off])), decimals


ANY = st.tuples(st.floats(-1.0, 99.0), st.integers(0, 4))


@given(near_steps() | ANY)
@example((0.47 - 1e-9, 2))
def test_a_shown_margin_never_flatters_and_is_near(drawn):
    margin, decimals = drawn
    shown = margin_text(margin, decimals)
    if shown.startswith(">"):
        assert margin - 99 > TOLERANCE
        return
    assert float(shown) - margin <= TOLERANCE  # the difference of two near floats is exact
    assert Fraction(margin) - Fraction(shown) < Fraction(1, 10**decimals) + Fraction(1, 10**9)
    assert shown[0] in "+-"
    assert not (shown[0] == "-" and float(shown) == 0)


@given(near_steps() | ANY)
def test_a_margin_shown_as_negative_is_a_failure_and_no_other_is(drawn):
    margin, decimals = drawn
    assert margin_text(margin, decimals).startswith("-") == (margin < -TOLERANCE)


@given(st.lists(near_steps().map(lambda drawn: drawn[0]) | st.floats(), max_size=40), st.integers(0, 4))
def test_the_array_form_agrees_with_the_scalar_form(margins, decimals):
    assert margin_texts(margins, decimals) == [margin_text(margin, decimals) for margin in margins]


def test_the_array_form_takes_any_shape_in_reading_order():
    assert margin_texts(np.array([[0.5, -0.5], [np.inf, np.nan]])) == ["+0.50", "-0.50", "inf", "."]
    assert margin_texts(np.zeros((0, 3))) == []


def test_the_array_form_leaves_its_array_alone():
    margins = np.array([0.125, np.nan])
    margins.flags.writeable = False
    assert margin_texts(margins) == ["+0.12", "."]


@pytest.mark.parametrize("decimals", [-1, 7])
@pytest.mark.parametrize("show", [margin_text, utilisation_text, lambda u, d: margin_texts([u], d)])
def test_decimals_finer_than_the_tolerance_are_refused(show, decimals):
    with pytest.raises(ValueError, match="0 to 6 expected"):
        show(0.5, decimals)


UTILISATIONS = [
    (1.0, 2, "1.00"),
    (1.0000001, 2, "1.01"),  # above 1 fails, and shows that it does
    (1.0 + 1e-10, 2, "1.00"),  # equal to 1
    (1.0 - 1e-10, 2, "1.00"),
    (0.999, 2, "1.00"),  # rounded up, yet no more than 1
    (0.961, 2, "0.97"),
    (0.96, 2, "0.96"),
    (0.29, 2, "0.29"),
    (0.57, 2, "0.57"),  # 0.57 * 100 is 56.99999999999999
    (0.07, 2, "0.07"),  # 0.07 * 100 is 7.000000000000001
    (0.0, 2, "0.00"),  # no stress
    (-0.0, 2, "0.00"),
    (1e-12, 2, "0.00"),
    (1e-8, 2, "0.01"),
    (1.0401, 3, "1.041"),
    (99.0, 2, "99.00"),
    (99.1, 2, ">99"),
    (INF, 2, "inf"),
    (NAN, 2, "."),
]


@pytest.mark.parametrize(("utilisation", "decimals", "text"), UTILISATIONS)
def test_a_utilisation_is_rounded_up(utilisation, decimals, text):
    assert utilisation_text(utilisation, decimals) == text


@given(near_steps(low=0.0))
def test_a_shown_utilisation_never_flatters_and_is_near(drawn):
    utilisation, decimals = drawn
    shown = utilisation_text(utilisation, decimals)
    if shown.startswith(">"):
        assert utilisation - 99 > TOLERANCE
        return
    assert utilisation - float(shown) <= TOLERANCE
    assert Fraction(shown) - Fraction(utilisation) < Fraction(1, 10**decimals) + Fraction(1, 10**9)


PERCENTS = [
    (-0.04, "4 %"),
    (-0.0401, "5 %"),
    (-0.07, "7 %"),  # 0.07 * 100 is 7.000000000000001
    (-0.29, "29 %"),
    (-0.001, "1 %"),  # a failure is never 0 %
    (-1e-10, "1 %"),
    (0.0, "1 %"),
    (0.12, "12 %"),  # the size, whatever the sign
    (-1.0, "100 %"),
    (NAN, "."),
    (INF, "inf"),
]


@pytest.mark.parametrize(("margin", "text"), PERCENTS)
def test_a_percentage_is_a_whole_one_rounded_up(margin, text):
    assert percent_text(margin) == text


STRESSES = [
    (187.5, "187.5"),
    (187.46, "187.5"),  # to the nearest
    (187.44, "187.4"),
    (-187.46, "-187.5"),
    (345.0, "345.0"),
    (12345.7, "12345.7"),
    (12345.67, "12345.7"),
    (1234567.8, "1234567.8"),  # nine characters
    (-1234567.8, "-1234568"),  # would be ten: the decimal goes first
    (12345678.9, "12345679"),
    (345e6, "345000000"),  # pascals
    (-345e6, "-3.450e8"),
    (2.1e11, "2.100e11"),
    (99.996, "100.0"),  # carried over to another size
    (99.96, "99.96"),
    (12.0, "12.00"),
    (0.1234, "0.1234"),
    (0.12344, "0.1234"),
    (0.00123456, "0.001235"),
    (0.0001234, "0.0001234"),
    (-0.0001234, "-1.234e-4"),
    (1e-10, "1.000e-10"),
    (-1.23456e-101, "-1.2e-101"),  # digits go where nothing else can
    (1e308, "1.000e308"),
    (0.0, "0.000"),
    (-0.0, "0.000"),
    (NAN, "."),
    (INF, "inf"),
]


@pytest.mark.parametrize(("value", "text"), STRESSES)
def test_a_stress_is_shown_to_the_nearest(value, text):
    assert stress_text(value) == text


def test_more_digits_of_a_stress_can_be_had_while_they_fit():
    assert stress_text(12.345678, digits=6) == "12.3457"
    assert stress_text(-12345.678, digits=8) == "-12345.68"


@given(st.floats(-1e300, 1e300), st.integers(2, 6))
def test_a_shown_stress_fits_its_column_and_is_near(value, digits):
    shown = stress_text(value, digits)
    assert len(shown) <= 9
    assert not (shown.startswith("-") and float(shown) == 0)
    kept = min(digits, 4 if 1e-9 < abs(value) < 1e99 else 2)  # what sign, point and exponent leave room for
    assert float(shown) == pytest.approx(value, rel=0.51 * 10.0 ** (1 - kept), abs=1e-300)


NUMBERS = [
    (12000.0, "12000"),
    (0.0021, "0.0021"),
    (1e21, "1e21"),
    (-5.0, "-5"),
    (0.0, "0"),
    (-0.0, "0"),
    (1.5, "1.5"),
    (0.1 + 0.2, "0.30000000000000004"),  # the shortest that is this float
    (1.35, "1.35"),
    (345000000.0, "345000000"),
    (2.1e11, "2.1e11"),
    (-1e9, "-1e9"),
    (1234567890.0, "1234567890"),  # shorter than 1.23456789e9
    (1230000000.0, "1.23e9"),
    (1234567890.5, "1234567890.5"),
    (1e-5, "1e-5"),
    (0.0001, "0.0001"),
    (1.25e-7, "1.25e-7"),
    (5e-324, "5e-324"),
    (1.7976931348623157e308, "1.7976931348623157e308"),
    (np.float64(12000.0), "12000"),  # as it comes out of an array
    (NAN, "."),
    (INF, "inf"),
]


@pytest.mark.parametrize(("value", "text"), NUMBERS)
def test_a_number_is_written_as_a_person_would_type_it(value, text):
    assert number_text(value) == text


@given(st.floats(allow_nan=False, allow_infinity=False))
def test_a_written_number_reads_back_as_itself(value):
    text = number_text(value)
    assert float(text) == value
    assert len(text) <= len(repr(value))
