"""Values of parts as text, and back."""

from __future__ import annotations

import pytest

from engine.edits import CODEC, Refusal
from engine.entry import EntryError
from engine.reading import Plain
from engine.units import SYSTEMS
from tui.fields import Field, Form, fitting, plain_from, plain_of, text_of

MM = SYSTEMS["mm-N-MPa"]


def field(form: Form, kind: str | None = None) -> Field:
    return Field(("key",), "key", form, kind=kind)  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("value", "form", "text"),
    [
        (None, "text", ""),  # absent
        ("S355", "text", "S355"),
        (345.0, "number", "345"),  # as a person types it
        (0.0021, "number", "0.0021"),
        (3, "number", "3"),
        (True, "flag", "yes"),
        (False, "flag", "no"),
        ([[20, 345.0], [100, 318.5]], "pairs", "20:345 100:318.5"),
        ([-20.0, 80.0], "pair", "-20 80"),
        ([1, 2, 3, 4, 5, 6], "row", "1 2 3 4 5 6"),
        (["wind", "dead load"], "names", "wind, dead load"),
        ("rest", "names", "rest"),
        ({"LC01": 1.0, "LC 13": 0.5}, "table", 'LC01 = 1, "LC 13" = 0.5'),
        ({'a "b"': 1.0}, "table", '"a \\"b\\"" = 1'),
        ({"a": [1], "b": [2]}, "count", "2"),
        ({}, "count", ""),
    ],
)
def test_values_are_shown_as_a_person_types_them(value: Plain, form: Form, text: str) -> None:
    assert text_of(value, form) == text


@pytest.mark.parametrize(
    ("value", "form"),
    [
        ("S355", "text"),
        (345.0, "number"),
        (-1.25e-7, "number"),
        (True, "flag"),
        (False, "flag"),
        ([[20.0, 345.0], [100.0, 318.5]], "pairs"),
        ([-20.0, 80.0], "pair"),
        ([1.0, 2.0, 3.0, 4.0, 5.0, 6.0], "row"),
        (["wind", "dead load"], "names"),
        ("rest", "names"),
        ({"LC01": 1.0, "LC 13": 0.5, 'a "b"': 2.0, "荷重": -1.0, "x.y": 3.0}, "table"),
    ],
)
def test_what_is_shown_reads_back_as_the_same_value(value: Plain, form: Form) -> None:
    assert plain_from(text_of(value, form), field(form), MM) == value


@pytest.mark.parametrize("form", ["text", "number", "flag", "pairs", "pair", "row", "names", "table"])
@pytest.mark.parametrize("text", ["", "   "])
def test_an_empty_entry_means_that_the_key_goes(form: Form, text: str) -> None:
    assert plain_from(text, field(form), MM) is None


@pytest.mark.parametrize(
    ("text", "kind", "value"),
    [
        ("345", "stress", 345.0),
        ("50 ksi", "stress", 344.737864659),  # common practice: 1 ksi is 6.894757 MPa
        ("1.5*230", "stress", 345.0),
        ("212 degF", "temperature", 100.0),
        ("1.5", None, 1.5),
    ],
)
def test_numbers_take_arithmetic_and_units(text: str, kind: str | None, value: float) -> None:
    assert plain_from(text, field("number", kind), MM) == pytest.approx(value, rel=1e-9)


@pytest.mark.parametrize("text", ["Yes", "y", "TRUE", "yes "])
def test_a_flag_is_said_in_several_ways(text: str) -> None:
    assert plain_from(text, field("flag"), MM) is True


@pytest.mark.parametrize(
    ("form", "text", "why"),
    [
        ("number", "abc", "not read"),
        ("number", "1,5", "comma"),
        ("number", "3 kN", "no unit is expected"),  # a plain number
        ("flag", "maybe", "expected yes or no"),
        ("pair", "1", "2 numbers are expected"),
        ("pair", "1 2 3", "2 numbers are expected"),
        ("row", "1 2 3", "6 numbers are expected"),
        ("pairs", "20 345", "temperature:strength"),
        ("pairs", "100:3 20:4", "must rise"),
        ("table", "LC01 =", "name = number"),
        ("table", "LC 13 = 0.5", "quotes"),  # a name with a blank needs them
        ("table", "LC01 = 1, LC01 = 2", "name = number"),  # twice
        ("table", "1 +", "unfinished"),  # a number, not a table
        ("count", "3", "sheet of its own"),
    ],
)
def test_what_cannot_be_read_is_refused_in_plain_words(form: Form, text: str, why: str) -> None:
    with pytest.raises((EntryError, Refusal)) as refused:
        plain_from(text, field(form), MM)
    assert why in str(refused.value)


def test_plain_values_are_found_at_their_path() -> None:
    category = CODEC.read("category", {"name": "normal", "yield": {"tresca": 1.5, "von-mises": 1.4}})
    assert plain_of("category", category, ("yield", "von-mises")) == 1.4
    assert plain_of("category", category, ("ultimate", "tresca")) is None
    assert plain_of("category", category, ("label",)) is None


@pytest.mark.parametrize(
    ("value", "room", "text"),
    [
        (345.0, 8, "345"),
        (-127.83421, 8, "-127.834"),  # rounded to what fits, as a person would
        (127.83429, 8, "127.8343"),
        (344.7378646584, 8, "344.7379"),  # 50 ksi in MPa
        (1234567.89, 8, "1234568"),
        (0.000123456789, 8, "0.000123"),
        (-1.23456e-300, 8, "-1e-300"),
        (12345678901.0, 8, "1.235e10"),
        (1 / 3, 12, "0.3333333333"),
        (-1.23456e-300, 3, "-1.23456e-300"),  # no room for any: the grid says ###
    ],
)
def test_a_number_is_rounded_to_the_room_it_has_and_never_cut(value: float, room: int, text: str) -> None:
    assert fitting(value, room) == text
