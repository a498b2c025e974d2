"""The scanner finds every key and value where it is written, in any spelling that tomllib takes."""

from __future__ import annotations

import json
import tomllib
from datetime import date, datetime, time
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from engine.spans import BOM, Node, ScanError, Spans, begun, statements

DOCUMENT = '''\
# a comment with [brackets], "quotes" and = signs
format = 1
when = 1979-05-27 07:32:00   # a date with a space
a.b."c d" = 'x # no comment'
[project]
title = "a \\" quote # and ] more"
notes = """
[[point]]
""" # the header above is text
[[ "point" ]]
name = 'P1'
row = [ 1, [2, "]"], # ]
  { x = 3, y.z = '}' },
  4 ]
[point.stress]
"L\\u0043 1" = [1, 2]
'L C' = """ends in two quotes"""""
[[point]]
name = """"quoted" start"""
kt = { T = 1.5, "M z" = [ 1 ] }
[point . 'per-load']
haul=[0.5,0,0]
[section.resultants.Mz]
haul = -1e-3
'''


@pytest.mark.parametrize(
    ("path", "value", "line", "column"),
    [
        (("format",), "1", 2, 1),  # plain
        (("when",), "1979-05-27 07:32:00", 3, 1),  # a date and time with a space between
        (("a", "b", "c d"), "'x # no comment'", 4, 5),  # dotted, the last part quoted
        (("a", "b"), "b", 4, 3),  # a table that only a dotted key makes: the key
        (("project",), "[project]", 5, 2),  # a table: its header, the line of its name
        (("project", "title"), '"a \\" quote # and ] more"', 6, 1),  # escapes, a hash and a bracket in text
        (("project", "notes"), '"""\n[[point]]\n"""', 7, 1),  # text over lines that looks like a header
        (("point", 0), '[[ "point" ]]', 10, 1),  # an element of a list of tables, quoted
        (("point", 0, "row", 1, 1), '"]"', 12, 16),  # an element of an element
        (("point", 0, "row", 2), "{ x = 3, y.z = '}' }", 13, 3),  # a table in a list, on its second line
        (("point", 0, "row", 2, "y", "z"), "'}'", 13, 14),  # a dotted key in it
        (("point", 0, "row", 3), "4", 14, 3),  # after a comment with a bracket
        (("point", 0, "stress", "LC 1", 1), "2", 16, 19),  # an escape in a key; a table of the last element
        (("point", 0, "stress", "L C"), '"""ends in two quotes"""""', 17, 1),  # a literal key
        (("point", 1, "name"), '""""quoted" start"""', 19, 1),  # four quotes at the beginning
        (("point", 1, "kt", "M z", 0), "1", 20, 27),  # a list in an inline table
        (("point", 1, "per-load", "haul", 0), "0.5", 22, 7),  # a header with spaces and quotes
        (("section", "resultants"), "resultants", 23, 10),  # a table that only a longer header makes
        (("section", "resultants", "Mz", "haul"), "-1e-3", 24, 1),  # no header above it
    ],
)
def test_a_path_is_found_where_it_is_written(path: tuple[str | int, ...], value: str, line: int, column: int) -> None:
    place = Spans(DOCUMENT).find(path)
    assert DOCUMENT[place.value.start : place.value.end] == value
    assert (place.line, place.column, place.whole) == (line, column, True)


@pytest.mark.parametrize(
    ("path", "key"),
    [
        (("a", "b", "c d"), '"c d"'),  # the last part alone
        (("point", 0, "stress", "LC 1"), '"L\\u0043 1"'),  # as written
        (("point", 1, "per-load"), "'per-load'"),  # in the header
        (("point", 1, "kt", "M z"), '"M z"'),  # in an inline table
    ],
)
def test_a_key_is_found_as_it_is_written(path: tuple[str | int, ...], key: str) -> None:
    span = Spans(DOCUMENT).find(path).key
    assert span is not None
    assert DOCUMENT[span.start : span.end] == key


@pytest.mark.parametrize(
    ("path", "line"),
    [
        (("point", 1, "material"), 18),  # a key that is missing: the table
        (("point", 7, "name"), 10),  # a table that is missing: the list's first
        (("point", 1, "kt", "N"), 20),  # missing in an inline table: the table's key
        (("point", 0, "row", 9), 12),  # beyond the end of a list: the list's key
        (("format", "x", 3), 2),  # below a number: the number's key
    ],
)
def test_of_a_path_that_is_not_there_its_beginning_is_found(path: tuple[str | int, ...], line: int) -> None:
    place = Spans(DOCUMENT).find(path)
    assert (place.line, place.whole) == (line, False)


@pytest.mark.parametrize(
    ("text", "column"),
    [
        (BOM + "format = 1\r\n", 1),  # a byte order mark has no column
        ("\r\n\r\n  format = 1", 3),  # no newline at the end
    ],
)
def test_offsets_are_those_of_the_text_as_read(text: str, column: int) -> None:
    place = Spans(text).find(("format",))
    assert text[place.value.start : place.value.end] == "1"
    assert (place.line, place.column) == (text.count("\n", 0, text.index("f")) + 1, column)


def test_crlf_is_no_part_of_a_value() -> None:
    text = "a = [\r\n  1,\r\n  2\r\n]\r\nb = x1\r\n".replace("x1", "'x'")
    spans = Spans(text)
    assert text[slice(*spans.find(("b",)).value)] == "'x'"
    assert [text[slice(*spans.find(("a", i)).value)] for i in (0, 1)] == ["1", "2"]


def test_deep_nesting_needs_no_deep_stack() -> None:
    text = "a = " + "[" * 20_000 + "]" * 20_000 + "\nb = 1\n"
    spans = Spans(text)
    assert spans.find(("a", *[0] * 3)).whole
    assert spans.find(("b",)).line == 2


def test_a_long_dotted_key_needs_no_deep_stack() -> None:
    names = ["k"] * 20_000
    assert Spans(".".join(names) + " = 1\n").find(names).whole


def test_what_is_no_toml_is_refused_where_it_begins() -> None:
    with pytest.raises(ScanError):
        Spans("a = 1\nb = [1, 2\nc = 3\n")


def test_of_broken_text_all_that_begins_is_told() -> None:
    found = [[part.name for part in statement.keys] for statement in begun('a = 1\n[t]\nb.c = """x\n')]
    assert found == [["a"], ["t"], ["b", "c"]]


def test_statements_know_what_kind_they_are() -> None:
    found = [(statement.brackets, statement.keys[-1].name) for statement in statements("a = [1]\n[b.c]\n[[d]]\n")]
    assert found == [(0, "a"), (1, "c"), (2, "d")]


# Any document

TEXTS = st.text(st.characters(exclude_categories=["Cs"]), max_size=8)
SPECIAL = st.sampled_from(['"', "'", '""', "''", "#", "[x]", "[[point]]", "{", "\\", "\n", "a = 1\n", "\r\n", ""])
BLANKS = st.sampled_from(["", " ", "\t", "  "])
BREAKS = st.sampled_from(["", " ", "\n", "\r\n  ", " # ] } \"' [\n", "\n\n# '''\n"])


@st.composite
def strings(draw: st.DrawFn) -> str:
    """A string in one of the four spellings."""
    text = "".join(draw(st.lists(st.one_of(TEXTS, SPECIAL), max_size=4)))
    basic = json.dumps(text, ensure_ascii=draw(st.booleans())).replace("\x7f", "\\u007f")
    if "\\ud" in basic:  # a pair of surrogates is no escape of TOML
        basic = json.dumps(text, ensure_ascii=False).replace("\x7f", "\\u007f")
    raw = all(c in "\n\t" or (c >= " " and c != "\x7f") for c in text)
    first, last = draw(st.sampled_from(["", "\n"])), draw(st.sampled_from(["", '"', '""', "'"]))
    spellings = [basic, '"""' + first + basic[1:-1] + last + '"""']
    if raw and "'" not in text and "\n" not in text:
        spellings.append(f"'{text}'")
    if raw and "'''" not in text and not text.endswith("'"):
        spellings.append(f"'''{text}'''")
    return draw(st.sampled_from(spellings))


def _spelt(value: Any) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    return value.isoformat(" ") if isinstance(value, datetime) else str(value)


SCALARS = st.one_of(
    st.integers(-(10**20), 10**20).map(str),
    st.sampled_from(["0x1F", "0b1", "1_000.5e-3", "+inf", "nan", "-0.0", "true", "12:30:00.5", "1979-05-27"]),
    st.floats(allow_nan=False, allow_infinity=False).map(_spelt),
    st.one_of(st.dates(), st.datetimes(), st.times()).map(_spelt),
    strings(),
)


@st.composite
def keys(draw: st.DrawFn, place: int) -> str:
    """One part of a key, different for different places, in one of its spellings."""
    odd = draw(st.one_of(TEXTS, SPECIAL)).replace("\n", "").replace("\r", "")
    name = f"k{place}"
    quoted = json.dumps(f"{odd}{name}", ensure_ascii=False).replace("\x7f", "\\u007f")
    return draw(st.sampled_from([name, name, f'"{name}"', f"'{name}.x'", quoted, f'"\\u006b{place}"']))


@st.composite
def inline_tables(draw: st.DrawFn, values: st.SearchStrategy[str]) -> str:
    """An inline table, its keys dotted now and then."""
    members = []
    for place in range(draw(st.integers(0, 3))):
        name = draw(keys(place)) + (".d" if draw(st.booleans()) else "")
        members.append(f"{draw(BLANKS)}{name}{draw(BLANKS)}={draw(BLANKS)}{draw(values)}{draw(BLANKS)}")
    return "{" + ",".join(members) + "}"


@st.composite
def arrays(draw: st.DrawFn, values: st.SearchStrategy[str]) -> str:
    """An array with line breaks and comments between its elements, and a comma at its end now and then."""
    items = [f"{draw(BREAKS)}{draw(values)}{draw(BREAKS)}" for _ in range(draw(st.integers(0, 3)))]
    comma = "," if items and draw(st.booleans()) else ""
    return f"[{','.join(items)}{comma}{draw(BREAKS)}]"


VALUES = st.recursive(SCALARS, lambda values: st.one_of(arrays(values), inline_tables(values)), max_leaves=6)


@st.composite
def documents(draw: st.DrawFn) -> str:
    """A document of tables, lists of tables with tables below them, and keys of all kinds."""
    lines = [draw(st.sampled_from(["", BOM]))]
    kinds = st.sampled_from(["[h{0}]", "[[l]]", "[[l]]", "[l.s{0}]", "[ h{0} . x ]"])
    headers = ["", *draw(st.lists(kinds, max_size=5))]
    listed = False
    for place, header in enumerate(headers):
        listed |= header == "[[l]]"
        if header and (listed or not header.startswith("[l")):
            lines.append(header.format(place))
        elif header:
            continue
        for key in range(draw(st.integers(0, 3))):
            name = draw(keys(10 * place + key)) + draw(st.sampled_from(["", "", f" . d{place}{key}"]))
            comment = draw(st.sampled_from(["", "# x", "  # \"'[", "\n\n# [x]"]))
            lines.append(f"{draw(BLANKS)}{name} = {draw(VALUES)}{comment}")
    text = lines[0] + draw(st.sampled_from(["\n", "\r\n"])).join(lines[1:])
    return text + draw(st.sampled_from(["", "\n"]))


def _compared(node: Node, value: Any, text: str) -> int:
    """Checks a node and all below it against tomllib's value; how many written values that were."""
    if node.kind in ("scalar", "array", "inline"):
        assert repr(tomllib.loads(f"v = {text[node.start : node.end]}")["v"]) == repr(value)
    if isinstance(value, dict):
        assert list(node.children) == list(value)
        return 1 + sum(_compared(node.children[key], inner, text) for key, inner in value.items())
    if isinstance(value, list):
        assert len(node.items) == len(value)
        return 1 + sum(_compared(item, inner, text) for item, inner in zip(node.items, value, strict=True))
    assert isinstance(value, str | int | float | date | time)
    return 1


@settings(max_examples=60, deadline=None)
@given(documents())
def test_every_value_of_any_document_is_found(text: str) -> None:
    document = tomllib.loads(text.removeprefix(BOM))
    assert _compared(Spans(text).root, document, text) >= 1
