"""Units: exact factors, correctly rounded conversion, and refusals that say what would be right."""

from decimal import Decimal, localcontext
from fractions import Fraction

import pytest
import scipy.constants
from hypothesis import given
from hypothesis import strategies as st

from engine.units import SYSTEMS, Kind, UnitError, UnitSystem, convert, described, find, kind_of_load_unit, quoted

MM, M, LBF, KIP = (SYSTEMS[name] for name in ("mm-N-MPa", "m-N-Pa", "in-lbf-psi", "in-kip-ksi"))

# What a system counts in: length, force, moment, stress, temperature, line load.
KINDS: tuple[Kind, ...] = ("length", "force", "moment", "stress", "temperature", "line-load")
OWN_UNITS = {
    "mm-N-MPa": ("mm", "N", "N mm", "MPa", "degC", "N/mm"),
    "m-N-Pa": ("m", "N", "N m", "Pa", "degC", "N/m"),
    "in-lbf-psi": ("in", "lbf", "lbf in", "psi", "degF", "lbf/in"),
    "in-kip-ksi": ("in", "kip", "kip in", "ksi", "degF", "kip/in"),
}


@pytest.mark.parametrize("name", OWN_UNITS)
def test_each_system_names_its_unit_of_each_kind(name):
    assert tuple(SYSTEMS[name].unit(kind) for kind in KINDS) == OWN_UNITS[name]
    assert SYSTEMS[name].name == name


def test_there_are_these_four_systems_and_no_more():
    assert list(SYSTEMS) == list(OWN_UNITS)


@pytest.mark.parametrize("system", SYSTEMS.values(), ids=list(SYSTEMS))
def test_each_system_is_coherent(system: UnitSystem):
    """Moment, stress and line load are those that the system's own force and length make."""
    length, force = find(system.length).scale, find(system.force).scale
    assert find(system.moment).scale == force * length
    assert find(system.stress).scale == force / length**2
    assert find(system.line_load).scale == force / length


# --- factors ---------------------------------------------------------------------------------------------------

AGAINST_SCIPY = [
    ("in", scipy.constants.inch),
    ("ft", scipy.constants.foot),
    ("mm", scipy.constants.milli),
    ("cm", scipy.constants.centi),
    ("lbf", scipy.constants.lbf),
    ("kip", 1000 * scipy.constants.lbf),
    ("kgf", scipy.constants.kgf),
    ("kN", scipy.constants.kilo),
    ("MN", scipy.constants.mega),
    ("daN", scipy.constants.deka),
    ("bar", scipy.constants.bar),
    ("psi", scipy.constants.psi),
    ("ksi", 1000 * scipy.constants.psi),
    ("GPa", scipy.constants.giga),
    ("lbf in", scipy.constants.lbf * scipy.constants.inch),
    ("kip ft", 1000 * scipy.constants.lbf * scipy.constants.foot),
    ("lbf/ft", scipy.constants.lbf / scipy.constants.foot),
    ("kgf/cm2", scipy.constants.kgf / scipy.constants.centi**2),
]


@pytest.mark.parametrize(("unit", "size"), AGAINST_SCIPY)
def test_factors_agree_with_scipy(unit, size):
    assert float(find(unit).scale) == pytest.approx(size, rel=4e-16)


# NIST SP 811 (2008), Appendix B.8, seven digits as printed there. from memory
AGAINST_NIST = [
    ("in", "2.54E-02"),
    ("ft", "3.048E-01"),
    ("kgf", "9.80665E+00"),
    ("lbf", "4.448222E+00"),
    ("kip", "4.448222E+03"),
    ("lbf in", "1.129848E-01"),
    ("lbf ft", "1.355818E+00"),
    ("lbf/in", "1.751268E+02"),
    ("lbf/ft", "1.459390E+01"),
    ("lbf/ft2", "4.788026E+01"),
    ("psi", "6.894757E+03"),
    ("ksi", "6.894757E+06"),
    ("bar", "1.0E+05"),
    ("kgf/cm2", "9.80665E+04"),
    ("kgf/mm2", "9.80665E+06"),
]


@pytest.mark.parametrize(("unit", "printed"), AGAINST_NIST)
def test_factors_round_to_the_published_ones(unit, printed):
    assert f"{float(find(unit).scale):.6E}" == f"{float(printed):.6E}"


def test_the_pound_force_is_exact():
    # 0.45359237 kg x 9.80665 m/s2, both exact by definition
    assert find("lbf").scale == Fraction("4.4482216152605")


# value, unit, kind, system, result: what a person would get by hand
CONVERSIONS = [
    (12.0, "kN", "force", MM, 12000.0),
    (12.0, "N", "force", MM, 12.0),  # own unit: untouched
    (1.5, "MN", "force", MM, 1.5e6),
    (3.0, "daN", "force", MM, 30.0),
    (2.0, "kgf", "force", M, 19.6133),
    (1.0, "lbf", "force", MM, 4.4482216152605),
    (2500.0, "lbf", "force", KIP, 2.5),
    (1.25, "kip", "force", LBF, 1250.0),
    (Fraction("25.4"), "mm", "length", LBF, 1.0),  # the float 25.4 lies below 25.4 and would give the float below 1
    (25.4, "mm", "length", LBF, 1.0 - 2**-53),
    (1.0, "in", "length", MM, 25.4),
    (2.0, "ft", "length", KIP, 24.0),
    (2.0, "ft", "length", M, 0.6096),
    (30.0, "cm", "length", MM, 300.0),
    (0.75, "m", "length", MM, 750.0),
    (1.0, "N m", "moment", MM, 1000.0),
    (2.0, "kN m", "moment", MM, 2e6),
    (7.0, "kN mm", "moment", M, 7.0),
    (0.5, "MN m", "moment", M, 5e5),
    (3.0, "lbf ft", "moment", LBF, 36.0),
    (1.0, "kip ft", "moment", KIP, 12.0),
    (1.0, "kip in", "moment", LBF, 1000.0),
    (355.0, "MPa", "stress", M, 355e6),
    (0.21, "GPa", "stress", MM, 210.0),
    (345e6, "Pa", "stress", MM, 345.0),
    (250.0, "kPa", "stress", MM, 0.25),
    (16.0, "bar", "stress", MM, 1.6),
    (80.0, "N/mm2", "stress", MM, 80.0),
    (5.0, "kN/cm2", "stress", MM, 50.0),
    (36000.0, "psi", "stress", KIP, 36.0),
    (36.0, "ksi", "stress", LBF, 36000.0),
    (4.0, "kN/m", "line-load", MM, 4.0),
    (4.0, "N/mm", "line-load", M, 4000.0),
    (24.0, "lbf/ft", "line-load", LBF, 2.0),
    (6.0, "kip/ft", "line-load", KIP, 0.5),
    (212.0, "degF", "temperature", MM, 100.0),  # water boils
    (-40.0, "degC", "temperature", LBF, -40.0),  # where the scales meet
    (20.0, "degC", "temperature", KIP, 68.0),
    (293.15, "K", "temperature", MM, pytest.approx(20.0, abs=1e-13)),  # 293.15 is no float: its own error remains
    (0.0, "K", "temperature", MM, -273.15),
    (0.0, "K", "temperature", LBF, -459.67),
]


@pytest.mark.parametrize(("value", "unit", "kind", "system", "result"), CONVERSIONS)
def test_convert_gives_the_value_in_the_systems_unit(value, unit, kind, system, result):
    assert convert(value, unit, kind, system) == result


# A difference has no zero to shift: 18 degF are 10 K wide.
DIFFERENCES = [(18.0, "degF", MM, 10.0), (10.0, "K", MM, 10.0), (10.0, "degC", LBF, 18.0), (5.0, "degC", MM, 5.0)]


@pytest.mark.parametrize(("value", "unit", "system", "result"), DIFFERENCES)
def test_a_temperature_difference_converts_without_offset(value, unit, system, result):
    assert convert(value, unit, "temperature", system, difference=True) == result


def test_an_exact_fraction_converts_without_the_error_of_its_float():
    assert convert(1.001, "kN", "force", MM) == 1000.9999999999999  # the float 1.001 lies below 1.001
    assert convert(Fraction("1.001"), "kN", "force", MM) == 1001.0


@given(st.floats(min_value=1e-200, max_value=1e200))
def test_ksi_in_mpa_is_correctly_rounded(value):
    with localcontext() as context:  # a second route: 900-digit decimals, rounded once
        context.prec = 900
        exact = Decimal(value) * Decimal("0.45359237") * Decimal("9.80665") / Decimal("0.0254") ** 2 / 1000
    assert convert(value, "ksi", "stress", MM) == float(exact)


@given(st.floats(allow_nan=False, allow_infinity=False), st.sampled_from(KINDS), st.sampled_from(list(SYSTEMS)))
def test_a_systems_own_unit_changes_no_bit(value, kind, name):
    assert convert(value, SYSTEMS[name].unit(kind), kind, SYSTEMS[name]) == value


@given(st.floats(-1e6, 1e6), st.sampled_from(KINDS), st.sampled_from(list(SYSTEMS)), st.sampled_from(list(SYSTEMS)))
def test_there_and_back_is_the_same_value(value, kind, one, other):
    there = convert(value, SYSTEMS[one].unit(kind), kind, SYSTEMS[other])
    back = convert(there, SYSTEMS[other].unit(kind), kind, SYSTEMS[one])
    assert back == pytest.approx(value, rel=1e-15, abs=1e-12)  # abs: the offset of a temperature near zero


# --- spellings -------------------------------------------------------------------------------------------------

SPELLINGS = [
    ("N mm", ["N mm", "N.mm", "N*mm", "Nmm", "N-mm", "N·mm", "N⋅mm", " N mm ", "N · mm", "N  mm"]),
    ("kN m", ["kN m", "kNm", "kN.m", "kN-m"]),
    ("MPa", ["MPa", " MPa"]),
    ("N/mm2", ["N/mm2", "N/mm^2", "N/mm²", "N/mm**2", "N / mm2"]),
    ("N/mm", ["N/mm", "N /mm"]),
    ("degC", ["degC", "°C", "C", "℃", "deg C", "° C", "ºC"]),
    ("degF", ["degF", "°F", "F", "℉", "deg F"]),
    ("in", ["in", "inch"]),
    ("kip", ["kip", "kips"]),
    ("lbf in", ["lbf in", "in lbf", "in-lbf", "lbf-in", "inlbf", "lbfin", "lbf.in"]),
    ("kip ft", ["kip ft", "ft-kip", "kip-ft"]),
    ("lbf/in2", ["lbf/in2", "lbf/in^2"]),
]


@pytest.mark.parametrize(("name", "text"), [(name, text) for name, texts in SPELLINGS for text in texts])
def test_spellings_of_one_unit_are_that_unit(name, text):
    assert find(text).name == name


# Not units, or not these ones: nothing is guessed.
NO_UNITS = [
    "",
    " ",
    "kn",  # case counts
    "mN",  # millinewton, not meganewton, nor a newton metre turned round
    "m N",
    "mm N",
    "m m",  # not a millimetre
    "N m m",
    "M Pa",
    "mPa",
    "lb",  # a mass to some, a force to others
    "t",
    "N//mm",
    "N/-mm",
    "N..mm",
    "°-C",
    "-N",
    "N mm2",
    "MPa2",
    "N/mm3",
    "kN m/m",
]


@pytest.mark.parametrize("text", NO_UNITS)
def test_what_is_no_unit_is_not_guessed_at(text):
    assert find(text) is None


# --- units of loads --------------------------------------------------------------------------------------------

OF_LOADS = [
    ("", MM, None),  # a plain multiplier
    ("  ", MM, None),
    ("N", MM, "force"),
    ("N.mm", MM, "moment"),
    ("MPa", MM, "stress"),
    ("N/mm2", MM, "stress"),  # the same unit by another name
    ("N/mm", MM, "line-load"),
    ("mm", MM, "length"),
    ("°C", MM, "temperature"),
    ("Pa", M, "stress"),
    ("N/m2", M, "stress"),
    ("Nm", M, "moment"),
    ("lbf-in", LBF, "moment"),
    ("lbf/in2", LBF, "stress"),
    ("degF", KIP, "temperature"),
    ("kip/in", KIP, "line-load"),
]


@pytest.mark.parametrize(("unit", "system", "kind"), OF_LOADS)
def test_the_unit_of_a_load_tells_its_kind(unit, system, kind):
    assert kind_of_load_unit(unit, system) == kind


REFUSED_OF_LOADS = [
    ("kN", MM, "kN is a force; this project counts forces in N"),
    ("kNm", MM, "kN m is a moment; this project counts moments in N mm"),
    ("N m", MM, "N m is a moment; this project counts moments in N mm"),
    ("bar", MM, "bar is a stress or pressure; this project counts stresses and pressures in MPa"),
    ("MPa", M, "MPa is a stress or pressure; this project counts stresses and pressures in Pa"),
    ("lbf", KIP, "lbf is a force; this project counts forces in kip"),
    ("N", LBF, "N is a force; this project counts forces in lbf"),
    ("in", MM, "in is a length; this project counts lengths in mm"),
    ("N/m", MM, "N/m is a line load; this project counts line loads in N/mm"),
    ("K", MM, "K is a temperature; this project counts temperatures in degC"),  # same size, another zero
    ("degC", LBF, "degC is a temperature; this project counts temperatures in degF"),
    (
        "newton",
        MM,
        'unknown unit "newton"; a load of this project is in one of mm, N, N mm, MPa, degC, N/mm, or has an empty unit',
    ),
    (
        "mpa",
        MM,
        'unknown unit "mpa" (did you mean MPa?); '
        "a load of this project is in one of mm, N, N mm, MPa, degC, N/mm, or has an empty unit",
    ),
]


@pytest.mark.parametrize(("unit", "system", "message"), REFUSED_OF_LOADS)
def test_a_load_in_another_unit_is_refused_with_the_right_one(unit, system, message):
    with pytest.raises(UnitError) as fault:
        kind_of_load_unit(unit, system)
    assert str(fault.value) == message


# --- refusals of convert ---------------------------------------------------------------------------------------

REFUSED = [
    (1.0, "kN", "moment", MM, "kN is a force; a moment in N mm is expected here"),
    (1.0, "MPa", "line-load", MM, "MPa is a stress or pressure; a line load in N/mm is expected here"),
    (1.0, "kNn", "force", MM, 'unknown unit "kNn" (did you mean kN?); a force in N is expected here'),
    (1.0, "KN", "force", MM, 'unknown unit "KN" (did you mean kN?); a force in N is expected here'),
    (1.0, "lb", "force", LBF, 'unknown unit "lb" (did you mean lbf?); a force in lbf is expected here'),
    (1.0, "Mpa", "stress", M, 'unknown unit "Mpa" (did you mean MPa?); a stress or pressure in Pa is expected here'),
    (1.0, "furlong", "force", MM, 'unknown unit "furlong"; a force in N is expected here'),
    (1.0, "", "force", MM, 'unknown unit ""; a force in N is expected here'),
    (float("nan"), "N", "force", MM, "a finite number is expected before the unit"),
    (float("inf"), "N", "force", MM, "a finite number is expected before the unit"),
    (1e308, "kN", "force", MM, "the number is too large in N"),
    (5e-324, "Pa", "stress", MM, "the number is too small in MPa"),
]


@pytest.mark.parametrize(("value", "unit", "kind", "system", "message"), REFUSED)
def test_convert_refuses_and_says_what_is_expected(value, unit, kind, system, message):
    with pytest.raises(UnitError) as fault:
        convert(value, unit, kind, system)
    assert str(fault.value) == message


def test_a_unit_error_is_a_value_error():
    assert issubclass(UnitError, ValueError)


def test_described_names_what_a_unit_measures():
    assert described("N/mm^2") == "N/mm2 is a stress or pressure"
    assert described("ksj") == 'unknown unit "ksj" (did you mean ksi?)'


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("kN", '"kN"'),
        ("\x1b[2J", r'"\x1b[2J"'),  # nothing reaches the terminal raw
        ("a\nb", r'"a\nb"'),
        ('a"b', "'a\"b'"),
        ("°C", '"°C"'),
        ("\u202eN", r'"\u202eN"'),  # nor text that would turn the line round
        ("x" * 41, '"' + "x" * 37 + '..."'),
    ],
)
def test_a_quoted_text_is_short_and_without_control_characters(text, shown):
    assert quoted(text) == shown
