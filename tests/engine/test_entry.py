"""What is typed in a numeric cell: its value, or a message that an engineer can act on."""

import inspect
import math
import sys
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from engine.entry import DEEPEST, LONGEST, EntryError, parse, parse_pairs, parse_row
from engine.figures import number_text
from engine.units import SYSTEMS

MM, LBF = SYSTEMS["mm-N-MPa"], SYSTEMS["in-lbf-psi"]

NUMBERS = [
    ("12", 12.0),
    ("-5", -5.0),
    ("+5", 5.0),
    (".5", 0.5),
    ("5.", 5.0),
    ("1.2e3", 1200.0),
    ("1.2E-3", 0.0012),
    ("  7  ", 7.0),
    ("007", 7.0),  # leading zeros mean nothing
    ("0", 0.0),
    ("0e999999999", 0.0),
    ("5e-324", 5e-324),  # the least float
    ("2+3*4", 14.0),
    ("(2+3)*4", 20.0),
    ("2**3**2", 512.0),  # powers from the right
    ("-2**2", -4.0),  # the power first, then the sign
    ("(-2)**2", 4.0),
    ("(-2)**-1", -0.5),
    ("2**0.5", math.sqrt(2.0)),
    ("4**(1/2)", 2.0),
    ("0**0", 1.0),
    ("10/4", 2.5),
    ("1 - -1", 2.0),
    ("--5", 5.0),
    ("12/3/2", 2.0),
    ("1.35*4.2 + 1.5*0.8", 6.87),
    ("0.1+0.2", 0.3),  # decimals in, decimals out
    ("1.1*3", 3.3),
    ("1.1**2", 1.21),
    ("1.1**-2*1.21", 1.0),
    ("1e300*1e300/1e300", 1e300),  # only the result need fit
    ("9**99/9**98", 9.0),
    ("−5", -5.0),  # U+2212, as pasted
    ("2×3", 6.0),
    ("2·3", 6.0),
    ("2⋅3", 6.0),
    ("1+\t1", 2.0),
    ("2\u00a0*\u202f3", 6.0),  # spaces as pasted
    ("(" * DEEPEST + "1" + ")" * DEEPEST, 1.0),
    ("1+" * 99 + "1", 100.0),
    ("-" * (LONGEST - 1) + "1", -1.0),
    ("9" * LONGEST, float("9" * LONGEST)),
]


@pytest.mark.parametrize(("text", "value"), NUMBERS)
def test_arithmetic_has_its_value(text, value):
    assert parse(text) == value


# entry, kind, system, value
WITH_UNITS = [
    ("12 kN", "force", MM, 12000.0),
    ("12kN", "force", MM, 12000.0),
    ("1.2e3N", "force", MM, 1200.0),
    ("1e3 kN", "force", MM, 1e6),
    ("1.35*42 kN", "force", MM, 56700.0),
    ("(2+3)*4kN", "force", MM, 20000.0),
    ("(2+3) kN", "force", MM, 5000.0),  # the unit counts for all before it
    ("-(2+3) kN", "force", MM, -5000.0),
    ("1/2 kN", "force", MM, 500.0),
    ("−12 kN", "force", MM, -12000.0),
    ("1.001 kN", "force", MM, 1001.0),  # not 1000.9999999999999
    ("1.1*3 kN", "force", MM, 3300.0),
    ("25.4 mm", "length", LBF, 1.0),
    ("2.5 kN m", "moment", MM, 2.5e6),
    ("2.5 kN·m", "moment", MM, 2.5e6),
    ("12 N/mm^2", "stress", MM, 12.0),  # a unit may hold what arithmetic may not
    ("12 N/mm**2", "stress", MM, 12.0),
    ("36 ksi", "stress", LBF, 36000.0),
    ("5 in-lbf", "moment", LBF, 5.0),
    ("3 kN/m", "line-load", MM, 3.0),
    ("68 °F", "temperature", MM, 20.0),
    ("68 ℉", "temperature", MM, 20.0),
    ("293.15 K", "temperature", MM, 20.0),
    ("-40 degC", "temperature", LBF, -40.0),
    ("12", "force", MM, 12.0),  # a bare number is in the project's unit
    ("500+3", "force", MM, 503.0),
]


@pytest.mark.parametrize(("text", "kind", "system", "value"), WITH_UNITS)
def test_a_unit_at_the_end_is_converted(text, kind, system, value):
    assert parse(text, kind, system) == value


def test_a_temperature_difference_has_no_offset():
    assert parse("18 degF", "temperature", MM, difference=True) == 10.0
    assert parse("18 degF", "temperature", MM) != 10.0


COMMA = "a comma is not read: type a point for decimals, as in 1.5"
NAMES = "is not read: no names and no functions, only numbers, + - * / ( ) ** and a unit at the end are read"
ONLY = "is not read: only numbers, + - * / ( ) ** and a unit at the end are read"
SIDES = "a number is missing, or two operators stand side by side"
ONCE = "a unit stands once, at the very end, and counts for all before it: (2 + 3) kN"
BRACKETS = "a unit counts for all before it: put the sum in brackets, (2 + 3) kN"
PERCENT = "percent is not read: type 0.05 for 5 %"
DIGITS = '"_" is not read: nothing stands between the digits of a number'

# All read as a force in newtons.
REFUSED = [
    ("", "nothing was typed"),
    (" \t ", "nothing was typed"),
    ("1" * (LONGEST + 1), "too long: at most 200 characters"),
    ("1,5", f"{COMMA}, and nothing between thousands"),
    ("1,000.5", f"{COMMA}, and nothing between thousands"),
    ("12 000", "12 and 000 stand side by side: one number has no space inside"),
    ("1.2.3", "1.2 and .3 stand side by side: one number has no space inside"),
    ("5 %", PERCENT),
    ("5%*3", PERCENT),
    # names and what a programming language would read
    ("sin(3)", f'"sin" {NAMES}'),
    ("2 sin(3)", f'"sin" {NAMES}'),
    ("2*pi", f'"pi" {NAMES}'),
    ("(2+x)", f'"x" {NAMES}'),
    ("x", f'"x" {NAMES}'),
    ("True", f'"True" {NAMES}'),
    ("nan", f'"nan" {NAMES}'),
    ("inf", f'"inf" {NAMES}'),
    ("lambda: 3", f'"lambda" {NAMES}'),
    ("__import__('os')", DIGITS),
    ("os.system(1)", f'"os" {NAMES}'),
    ("3 if 1 else 2", 'unknown unit "if 1 else 2"; a force in N is expected here'),
    ("3 and 4", 'unknown unit "and 4"; a force in N is expected here'),
    ("'a'", '"\'" is not read: nothing stands between the digits of a number'),
    ('"a"', f"'\"' {ONLY}"),
    ("1<2", f'"<" {ONLY}'),
    ("1==1", '"=" is not read: leave out the ='),
    ("=5", '"=" is not read: leave out the ='),
    ("[1]", f'"[" {ONLY}'),
    ("1:2", '":" is not read: one number is expected here'),
    ("1;2", '";" is not read: one number is expected here'),
    ("~5", f'"~" {ONLY}'),
    ("5@5", f'"@" {ONLY}'),
    ("1_000", DIGITS),
    ("1_000 kN", DIGITS),
    ("1 k_N", DIGITS),
    ("0x1F", '"0x1F" is not read: decimal numbers only'),
    ("0b11", '"0b11" is not read: decimal numbers only'),
    ("0o7", '"0o7" is not read: decimal numbers only'),
    ("3j", "complex numbers are not read"),
    ("2+3J", "complex numbers are not read"),
    ("1e", "the exponent is missing after e, as in 1.2e3"),
    ("1.5e-", "the exponent is missing after e, as in 1.2e3"),
    ("2^3", '"^" is not read: for a power type **, as in 2**3'),
    ("5²", f'"²" {ONLY}'),
    ("–5", '"–" is not read: for minus type -'),  # an en dash, as some editors make of a minus
    ("6÷2", '"÷" is not read: to divide type /'),
    ("٣", f'"٣" {ONLY}'),  # a digit of another script
    # brackets and operators
    ("(2", "a bracket is not closed"),
    ("((2+3)*4", "a bracket is not closed"),
    ("(1.35*42 kN", "a bracket is not closed"),
    ("2)", "a bracket is closed that was not opened"),
    (")2(", "a bracket is closed that was not opened"),
    ("()", "nothing stands between the brackets"),
    ("2*()", "nothing stands between the brackets"),
    ("2+", "unfinished: a number is missing after +"),
    ("2**", "unfinished: a number is missing after **"),
    ("-", "unfinished: a number is missing after -"),
    ("12-N", "unfinished: a number is missing after -"),
    ("*5", SIDES),
    ("2*/3", SIDES),
    ("2* *3", SIDES),
    ("(2+)*3", SIDES),
    (".", f'"." {ONLY}'),
    ("7//2", "// is not read: to divide type /"),
    ("2(3)", "an operator is missing between 2 and ("),
    ("(2)(3)", "an operator is missing between ) and ("),
    ("(2)3", "an operator is missing between ) and 3"),
    ("(" * 31 + "1" + ")" * 31, "too many brackets inside each other: at most 30"),
    # results that are no number
    ("1/0", "division by zero"),
    ("1/(2-2)", "division by zero"),
    ("0**-1", "division by zero"),
    ("0**-0.5", "division by zero"),
    ("0/0 kN", "division by zero"),
    ("1e308*10", "the result is too large"),
    ("1e308*10 N", "the number is too large in N"),
    ("1e308 kN", "the number is too large in N"),
    ("9**9**9", "the result is too large"),
    ("9**9**9**9", "the result is too large"),
    ("(((1.1**9)**9)**9)**99", "the result is too large"),
    ("1e999", "1e999 is too large a number"),
    ("1e999999999", "1e999999999 is too large a number"),
    ("1e-999999999", "1e-999999999 is too small a number"),
    ("1e-300**5", "the result is too small"),
    ("1e-200*1e-200", "the result is too small"),
    ("0.5**9**9", "the result is too small"),
    ("(-8)**(1/3)", "a broken power of a negative number is not a real number"),
    # units
    ("kN", "a number is missing before kN"),
    ("12 kNm", "kN m is a moment; a force in N is expected here"),
    ("12 MPa", "MPa is a stress or pressure; a force in N is expected here"),
    ("12 KN", 'unknown unit "KN" (did you mean kN?); a force in N is expected here'),
    ("12 furlong", 'unknown unit "furlong"; a force in N is expected here'),
    ("12 kN*2", ONCE),
    ("12 kN + 3 kN", ONCE),
    ("(12 kN)", ONCE),
    ("(12 kN)*2", ONCE),
    ("500 + 3 kN", BRACKETS),  # 503 kN, or 3500 N? nobody is to guess
    ("5-3 kN", BRACKETS),
    ("(2)+(3) kN", BRACKETS),
    # nothing reaches the terminal raw
    ("5\x1b", rf'"\x1b" {ONLY}'),
    ("5 N\x1b[2J", r'unknown unit "N\x1b[2J"; a force in N is expected here'),
    ("\x00", rf'"\x00" {ONLY}'),
]


@pytest.mark.parametrize(("text", "message"), REFUSED)
def test_what_is_not_read_is_refused_with_the_reason(text, message):
    with pytest.raises(EntryError) as fault:
        parse(text, "force", MM)
    assert str(fault.value) == message


UNEXPECTED = [
    ("12 kN", None, None, "no unit is expected here, a number only: kN is a force"),
    ("12 kN", None, MM, "no unit is expected here, a number only: kN is a force"),
    ("12 kN", "force", None, "no unit is expected here, a number only: kN is a force"),
    ("500+3 kN", None, None, "no unit is expected here, a number only: kN is a force"),
    ("12 foo", None, None, 'no unit is expected here, a number only: unknown unit "foo"'),
    ("sin(3)", None, None, f'"sin" {NAMES}'),
]


@pytest.mark.parametrize(("text", "kind", "system", "message"), UNEXPECTED)
def test_a_unit_where_none_is_expected_is_refused(text, kind, system, message):
    with pytest.raises(EntryError) as fault:
        parse(text, kind, system)
    assert str(fault.value) == message


def test_an_entry_error_is_a_value_error():
    assert issubclass(EntryError, ValueError)


def test_deep_nesting_is_refused_however_little_stack_is_left():
    text = "-" * 190 + "1"
    assert parse(text) == 1.0
    limit = sys.getrecursionlimit()
    sys.setrecursionlimit(len(inspect.stack(0)) + 120)
    try:
        with pytest.raises(EntryError, match="too much stands inside each other"):
            parse(text)
    finally:
        sys.setrecursionlimit(limit)


# --- properties ------------------------------------------------------------------------------------------------


@given(st.floats(allow_nan=False, allow_infinity=False))
@example(-0.0)
@example(1.7976931348623157e308)
@example(5e-324)
def test_a_number_as_written_is_read_back_as_itself(value):
    assert parse(number_text(value)) == value
    assert parse(repr(value)) == value


def _operation(pairs):
    """Two operands and an operator, each with the value that fractions give it."""
    (left, x), sign, (right, y) = pairs
    value = {"+": x + y, "-": x - y, "*": x * y}[sign]
    return f"({left}){sign}({right})", value


decimals = st.decimals(-1000, 1000, places=3).map(lambda d: (str(d), Fraction(d)))
arithmetic = st.recursive(
    decimals, lambda inner: st.tuples(inner, st.sampled_from("+-*"), inner).map(_operation), max_leaves=5
).filter(lambda pair: len(pair[0]) <= LONGEST - 4)


@given(arithmetic)
def test_arithmetic_is_rounded_once_from_its_exact_value(pair):
    text, value = pair
    assert parse(text) == float(value)
    assert parse(f"({text})kN", "force", MM) == float(value * 1000)


ENTRY_LIKE = st.text(st.sampled_from("0123456789.eE+-*/() kNm%,_^°j×−"), max_size=30)


def _outcome(read, *arguments):
    """The numbers read, or the message of the refusal; any other exception is a failure of the test."""
    try:
        return read(*arguments)
    except EntryError as fault:
        return str(fault)


@given(ENTRY_LIKE | st.text(max_size=40), st.sampled_from(["force", "temperature", None]))
@example("9**9**9**9**9", None)
@example("(((((9**9)**9)**9)**9)**9)**-9", "force")
@example("1e-300/(1e-300**20)", None)
def test_any_text_is_a_finite_number_or_an_entry_error_in_printable_words(text, kind):
    for outcome in (_outcome(parse, text, kind, MM), _outcome(parse_row, text, 2, kind, MM)):
        if isinstance(outcome, str):
            assert outcome.isprintable()
        else:
            assert np.isfinite(outcome).all()


# --- rows ------------------------------------------------------------------------------------------------------

ROWS = [
    ("120 0 0 35 0 0", 6, (120.0, 0.0, 0.0, 35.0, 0.0, 0.0)),
    ("120;0;0;35;0;0", 6, (120.0, 0.0, 0.0, 35.0, 0.0, 0.0)),
    (" 120 ; 0\t0 ;35 0  0 ", 6, (120.0, 0.0, 0.0, 35.0, 0.0, 0.0)),
    ("-20 80", 2, (-20.0, 80.0)),
    ("1.5*80 0.12GPa", 2, (120.0, 120.0)),
    ("(1+2)/3", 1, (1.0,)),
]


@pytest.mark.parametrize(("text", "count", "values"), ROWS)
def test_a_row_is_as_many_entries_as_expected(text, count, values):
    assert parse_row(text, count, "stress", MM) == values


REFUSED_ROWS = [
    ("1 2", "6 numbers are expected, 2 found: spaces or ; between numbers, no space inside one"),
    ("1 2 3 4 5 6 MPa", "6 numbers are expected, 7 found: spaces or ; between numbers, no space inside one"),
    ("", "nothing was typed"),
    ("  ", "nothing was typed"),
    ("1,2,3,4,5,6", f"{COMMA}, and spaces or ; between numbers"),
    ("1 2 3 4 5 x", 'number 6 of 6: "x" ' + NAMES),
    ("1 2 3kN 4 5 6", "number 3 of 6: kN is a force; a stress or pressure in MPa is expected here"),
    ("1;;3;4;5;6", "number 2 of 6: nothing was typed"),  # an empty place is not a zero
    ("1;2;3;4;5;", "number 6 of 6: nothing was typed"),
    ("1 2 . 4 5 6", f'number 3 of 6: "." {ONLY}'),
    ("1 2 3 4 5 1/0", "number 6 of 6: division by zero"),
]


@pytest.mark.parametrize(("text", "message"), REFUSED_ROWS)
def test_a_row_that_is_not_read_says_which_number(text, message):
    with pytest.raises(EntryError) as fault:
        parse_row(text, 6, "stress", MM)
    assert str(fault.value) == message


def test_a_row_of_one_number_says_so():
    with pytest.raises(EntryError, match="1 number is expected, 2 found"):
        parse_row("1 2", 1)


# --- tables of temperature and strength -------------------------------------------------------------------------

TABLES = [
    ("20:345 100:318", ((20.0, 345.0), (100.0, 318.0))),
    ("20: 345; 100 :318", ((20.0, 345.0), (100.0, 318.0))),
    ("-196:500", ((-196.0, 500.0),)),
    ("68°F:0.345GPa 100:318", ((20.0, 345.0), (100.0, 318.0))),
]


@pytest.mark.parametrize(("text", "pairs"), TABLES)
def test_a_table_is_read_as_pairs(text, pairs):
    assert parse_pairs(text, MM) == pairs


REFUSED_TABLES = [
    ("", "nothing was typed"),
    ("20", 'pair 1: temperature:strength is expected, as in 20:345, not "20"'),
    ("20:345 100", 'pair 2: temperature:strength is expected, as in 20:345, not "100"'),
    ("20:345:3", 'pair 1: temperature:strength is expected, as in 20:345, not "20:345:3"'),
    ("20:345 20:318", "pair 2: temperatures must rise, 20 comes after 20"),
    ("20:345 100:318 60.5:330", "pair 3: temperatures must rise, 60.5 comes after 100"),
    ("100:318 212°F:317", "pair 2: temperatures must rise, 100 comes after 100"),
    ("20:345 100:", "strength of pair 2: nothing was typed"),
    (":345", "temperature of pair 1: nothing was typed"),
    ("20:345;;100:318", 'pair 2: temperature:strength is expected, as in 20:345, not ""'),
    ("20:345, 100:318", f"{COMMA}, and spaces or ; between numbers"),
    ("20:x", f'strength of pair 1: "x" {NAMES}'),
    ("20MPa:345", "temperature of pair 1: MPa is a stress or pressure; a temperature in degC is expected here"),
]


@pytest.mark.parametrize(("text", "message"), REFUSED_TABLES)
def test_a_table_that_is_not_read_says_which_pair(text, message):
    with pytest.raises(EntryError) as fault:
        parse_pairs(text, MM)
    assert str(fault.value) == message


def test_a_table_without_a_system_takes_plain_numbers_only():
    assert parse_pairs("20:345 100:318") == ((20.0, 345.0), (100.0, 318.0))
    with pytest.raises(EntryError, match="strength of pair 1: no unit is expected here"):
        parse_pairs("20:345MPa")
