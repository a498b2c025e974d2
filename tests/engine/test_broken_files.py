"""Every fault of a file is told in one line: file, line, key path, what was found, what was expected."""

from __future__ import annotations

import builtins
import os
import random
import unicodedata
from pathlib import Path
from typing import Any

import pytest

from engine import store
from engine.filefaults import FileFault
from engine.store import ProjectError, load, parse

SOUND = """\
format = 1

[project]
title = "Bracket"
units = "mm-N-MPa"
components = "xx yy zz xy yz zx"
accept = "both"
thin = 0.10

[[category]]
name = "normal"
yield = { tresca = 1.5, von-mises = 1.5 }

[[material]]
name = "steel"
yield = 345.0
elongation = 0.2
range = [-20, 80]
yield-at = [
  [20, 345.0],
  [100, 318.0],
]

[[load]]
name = "haul"
unit = "N"

[[load]]
name = "wind"

[[case]]
name = "LC01"
category = "normal"
temperature = 20.0
loads = { haul = 12000.0, wind = 800.0 }

[[case]]
name = "LC02"
category = "normal"
temperature = 20.0
combine = { LC01 = 1.1 }

[[section]]
name = "shaft"
shape = "round"
d = 60.0
[section.resultants]
Mz = { haul = 210.0 }

[[point]]
name = "P01"
material = "steel"
section = "shaft"
at = [30.0, 0.0]
kt = { Mz = 1.7 }
kt-limits = ["yield"]

[[point]]
name = "P02"
material = "steel"
factor = 1.15
not-felt = ["wind"]
[point.per-load]
haul = [0.5, 0, 0, 0.1, 0, 0]

[[acknowledge]]
point = "P02"
caution = "elongation"
by = "me"
reason = "tested"
"""

HERE = "@"
"""Stands in a broken file where the fault is, and is taken out before the file is read."""

AGAIN = '[[case]]\n@name = "LC01"\ncategory = "normal"\n\n[[section]]'

BROKEN = [
    # what TOML does not take
    ("yield = 345.0", "yield = 345.0@ MPa", "material[1].yield", 'found "MPa" after', "expected a new line", ""),
    ("thin = 0.10", "thin = 0@,10", "project.thin", 'found ",10" after the value', "expected a new line", ""),
    ('"Bracket"', '"Bracket@', "project.title", "found the end of the line", "expected its closing quote", ""),
    ('"tested"\n', '"""tested\n@', "acknowledge[1].reason", "found the end of the", "closing quotes", ""),
    ("0.1, 0, 0]", "0.1, 0, 0\n@wind = [1, 2]", "point[2].per-load.haul", 'found "wind"', "expected , or ]", ""),
    ("elongation = 0.2", "elongation@ 0.2", "material[1].elongation", 'found "0.2"', "expected = and", ""),
    ("elongation = 0.2", "elongation = @", "material[1].elongation", "found the end", "expected a number", ""),
    ('accept = "both"', "accept = @both", "project.accept", 'found "both"', '"text" in quotes', ""),
    ('accept = "both"', 'accept = "both"\n@accept = "both"', "project.accept", "a second time", "each key once", ""),
    ("[[case]]", "@[[case]", "case[1]", 'found "]"', "expected ]]", ""),
    ('"tested"', '@"C:\\dir"', "acknowledge[1].reason", "a backslash", "expected \\\\", ""),
    ("temperature = 20.0", "temperature = @2024-02-31", "case[1].temperature", "a date that", "one that does", ""),
    ("[project]", "[project]\n@[project]", "project", "a second time", "expected each table once", ""),
    ("[-20, 80]", "@" + "[" * 5000, "material[1].range", "too deep", "expected no more than 64", ""),
    ("thin = 0.10", "thin = @" + "1" * 5000, "project.thin", "thousands of digits", "that a computer's", ""),
    # the top of the file
    ("format = 1", "@", "", 'key "format" is missing', "expected format = 1", ""),
    ("format = 1", '@format = "1"', "format", 'found "1"', "expected the whole number 1", ""),
    ("format = 1", "@format = true", "format", "found true", "expected the whole number 1", ""),
    ("format = 1", "@format = 1.0", "format", "found 1.0", "expected the whole number 1", ""),
    ("format = 1", "@format = 0", "format", "found 0", "expected the whole number 1", ""),
    ("format = 1", "@format = 3", "format", "found 3", "this program reads format 1: a later", ""),
    ("[[acknowledge]]", "@[[acknowlege]]", "acknowlege", 'unknown key "acknowlege"', "expected one of", "acknowledge"),
    ("[[section]]", "@[section]", "section", "found [section]", "expected [[section]]", ""),
    ("[project]", "@[[project]]", "project", "found [[project]]", "expected [project]", ""),
    # keys
    ("elongation", "@elongaton", "material[1].elongaton", 'unknown key "elongaton"', "expected one of", "elongation"),
    ("material = ", "@materal = ", "point[1].materal", 'unknown key "materal"', "expected one of", "material"),
    ("tresca = 1.5", "@treska = 1.5", "category[1].yield.treska", 'unknown key "treska"', "expected one of", "tresca"),
    ("Mz = { haul", "@Mzz = { haul", "section[1].resultants.Mzz", 'unknown key "Mzz"', "expected one of N", "Mz"),
    ("kt = { Mz", "kt = { @MZ", "point[1].kt.MZ", 'unknown key "MZ"', "expected one of N", "Mz"),
    ("[point.per-load]", "@[point.per_load]", "point[2].per_load", 'unknown key "per_load"', "expected", "per-load"),
    ('[[case]]\nname = "LC01"', "@[[case]]", "case[1]", 'key "name" is missing', "missing from this [case]", ""),
    ("tresca = 1.5, ", "", "category[1].yield", 'key "tresca" is missing', "or a table", ""),
    # values
    ("thin = 0.10", "@thin = -0.1", "project.thin", "found -0.1", "expected a number at least 0", ""),
    ("thin = 0.10", "@thin = nan", "project.thin", "found nan", "finite", ""),
    ("thin = 0.10", "@thin = true", "project.thin", "found true", "expected a number", ""),
    ("yield = 345.0", "@yield = -345.0", "material[1].yield", "found -345.0", "expected a number above 0", ""),
    ("yield = 345.0", '@yield = "345"', "material[1].yield", 'found "345"', "expected a number above 0", ""),
    ("yield = 345.0", "@yield = 1" + "0" * 400, "material[1].yield", "very large", "can hold", ""),
    ("elongation = 0.2", "@elongation = 20", "material[1].elongation", "found 20", "at least 0 and at most 1", ""),
    ("elongation = 0.2", "@elongation = 2024-05-01", "material[1].elongation", "the date", "expected a number", ""),
    ("[-20, 80]", "@[80, -20]", "material[1].range", "80 before -20", "expected two", ""),
    ("[100, 318.0]", "@[20, 318.0]", "material[1].yield-at[2]", "20 after 20", "strictly ascending", ""),
    ("[100, 318.0]", "[100, @true]", "material[1].yield-at[2][2]", "found true", "expected a number", ""),
    ("[100, 318.0]", "@[100]", "material[1].yield-at[2]", "found a list of 1", "expected a pair", ""),
    ('"mm-N-MPa"', '@"mm-N-Mpa"', "project.units", 'found "mm-N-Mpa"', 'expected "mm-N-MPa"', "mm-N-MPa"),
    ('"both"', '@"bot"', "project.accept", 'found "bot"', 'expected "both", "tresca" or', "both"),
    ("xy yz zx", "@xy yz zy", "project.components", "zz xy yz zy", 'expected "xx yy zz xy yz zx"', ""),
    ("haul = 12000.0", '@haul = "12 kN"', "case[1].loads.haul", 'found "12 kN"', "expected a number", ""),
    ("{ haul = 12000.0, wind = 800.0 }", "@12000.0", "case[1].loads", "12000.0", "expected a table", ""),
    ("0.1, 0, 0]", "@0.1, 0]", "point[2].per-load.haul", "found a list of 5", "expected a row of 6 numbers", ""),
    ("[0.5, 0, 0,", '[0.5, @"0", 0,', "point[2].per-load.haul[2]", 'found "0"', "expected a number", ""),
    ('"round"', '@"rund"', "section[1].shape", 'found "rund"', 'expected "round"', "round"),
    ("factor = 1.15", "@factor = 0", "point[2].factor", "found 0", "expected a number above 0", ""),
    ('["wind"]', '@"rst"', "point[2].not-felt", 'found "rst"', 'or "rest"', "rest"),
    ('["yield"]', '[@"yeld"]', "point[1].kt-limits[1]", 'found "yeld"', 'expected "yield" or "ultimate"', "yield"),
    ('name = "P02"', '@name = " "', "point[2].name", 'found " "', "expected a name that is not empty", ""),
    # what the parts say about each other
    ('unit = "N"', '@unit = "kN"', "load[1].unit", 'found "kN"', "N", ""),
    ("wind = 800.0", "@wnd = 800.0", "case[1].loads.wnd", '"wnd"', "no load is named", "wind"),
    ("LC01 = 1.1", "@LC1 = 1.1", "case[2].combine.LC1", '"LC1"', "no case is named", "LC01"),
    ("LC01 = 1.1", "@LC02 = 1.1", "case[2].combine.LC02", "LC02 -> LC02", "in a ring", ""),
    ('category = "normal"', '@category = "nromal"', "case[1].category", '"nromal"', "no category", "normal"),
    ('material = "steel"', '@material = "steal"', "point[1].material", '"steal"', "no material", "steel"),
    ('section = "shaft"', '@section = "shift"', "point[1].section", '"shift"', "no section", "shaft"),
    ('["wind"]', '[@"win"]', "point[2].not-felt[1]", '"win"', "no load is named", "wind"),
    ('["wind"]', '["wind", @"haul"]', "point[2].not-felt[2]", '"haul" also has', "felt or not felt", ""),
    ("[[section]]", AGAIN, "case[3].name", '"LC01"', "expected each name once", ""),
    ('point = "P02"', '@point = "P20"', "acknowledge[1].point", '"P20"', "no point is named", "P02"),
    ('"elongation"', '@"elongaton"', "acknowledge[1].caution", 'found "elongaton"', "expected one of", "elongation"),
    ("at = [30.0, 0.0]\n", "", "point[1]", "has a section", "expected at = [y, z]", ""),
    ("temperature = 20.0\ncombine", "combine", "case[2]", "which has a temperature", "of its own", ""),
]


def _broken(old: str, new: str) -> tuple[str, int | None]:
    """The file with one fault, and the line of the mark in it."""
    assert old in SOUND
    text = SOUND.replace(old, new, 1)
    line = text.count("\n", 0, text.index(HERE)) + 1 if HERE in text else None
    return text.replace(HERE, ""), line


def _refused(text: str) -> ProjectError:
    with pytest.raises(ProjectError) as caught:
        parse(text, "winch.toml")
    return caught.value


def test_the_sound_file_is_read() -> None:
    assert parse(SOUND).names("point") == ("P01", "P02")


@pytest.mark.parametrize(("old", "new", "path", "found", "expected", "meant"), BROKEN)
def test_one_fault_is_told_in_full(old: str, new: str, path: str, found: str, expected: str, meant: str) -> None:
    text, line = _broken(old, new)
    error = _refused(text)
    told = [fault for fault in error.faults if found in fault.message]
    assert [fault.path for fault in told] == [path]
    assert expected in told[0].message
    assert (f'(did you mean "{meant}"?)' if meant else "did you mean") in told[0].message or not meant
    assert line is None or told[0].line == line
    lines = str(error).splitlines()
    assert len(lines) <= 2
    assert all(len(line) < 450 for line in lines)
    place = f"winch.toml:{told[0].line}: "
    assert any(line.startswith(f"{place}{path}: " if path else place) for line in lines)


@pytest.mark.parametrize(
    ("old", "new", "line"),
    [
        ("tresca = 1.5, ", "", 12),  # a key missing in an inline table: the table's line
        ("at = [30.0, 0.0]\n", "", 50),  # a key missing in an entry: its header
        ("temperature = 20.0\ncombine", "combine", 37),  # the combination, not its ingredient
        ('name = "LC01"\n', "", 31),  # the entry without a name
        ('title = "Bracket"\n', "", 3),  # [project] without a title
    ],
)
def test_what_is_missing_is_told_at_the_table_that_lacks_it(old: str, new: str, line: int) -> None:
    text, _ = _broken(old, new)
    assert _refused(text).faults[0].line == line


def test_a_list_that_does_not_end_says_where_it_begins() -> None:
    text, _ = _broken("0.1, 0, 0]", "0.1, 0, 0")
    assert "(it begins in line 64)" in str(_refused(text))


def test_a_project_table_is_needed() -> None:
    start, end = SOUND.index("[project]"), SOUND.index("[[category]]")
    error = _refused(SOUND[:start] + SOUND[end:])
    told = "winch.toml:1: table [project] is missing, expected one with title, units, accept and more"
    assert str(error) == told


def test_a_number_is_no_list_of_tables() -> None:
    error = _refused(SOUND[: SOUND.index("[[acknowledge]]")].replace("format = 1", "format = 1\nacknowledge = 3"))
    assert str(error) == "winch.toml:2: acknowledge: found 3, expected tables [[acknowledge]]"


def test_all_faults_are_told_by_line() -> None:
    text = SOUND.replace("thin = 0.10", "thin = true").replace("elongation = 0.2", "elongation = 20")
    text = text.replace("wind = 800.0", "wnd = 800.0").replace("0.1, 0, 0]", "0.1]")
    error = _refused(text.replace("xx yy zz xy yz zx", "xx"))
    assert [(fault.line, fault.path) for fault in error.faults] == [
        (6, "project.components"),
        (8, "project.thin"),
        (17, "material[1].elongation"),
        (35, "case[1].loads.wnd"),
        (64, "point[2].per-load.haul"),
    ]


def test_an_unreadable_part_is_no_reason_to_miss_its_name() -> None:
    text = SOUND.replace("yield = 345.0", "yield = 0")
    assert [fault.path for fault in _refused(text).faults] == ["material[1].yield"]


def test_of_many_faults_twenty_are_shown() -> None:
    cases = "".join(f'[[case]]\nname = "X{i}"\ncategory = "none"\n' for i in range(50))
    error = _refused(SOUND + cases)
    assert len(error.faults) == 50
    lines = str(error).splitlines()
    assert len(lines) == 21
    assert lines[-1] == "... and 30 more"


def test_a_later_format_is_refused_before_its_keys_are() -> None:
    error = _refused(SOUND.replace("format = 1", "format = 2").replace("thin", "new-key"))
    assert [fault.path for fault in error.faults] == ["format"]


def test_no_control_character_reaches_the_terminal() -> None:
    text = SOUND.replace("elongation = 0.2", '"\\u001b[31mred\\u202e" = 1')
    text = text.replace("wind = 800.0", '"\\u0007bell" = 800.0')
    shown = str(_refused(text))
    assert "red" in shown
    assert "bell" in shown
    assert all(c == "\n" or unicodedata.category(c) not in {"Cc", "Cf"} for c in shown)


def test_no_control_character_of_a_file_name_reaches_the_terminal(tmp_path: Path) -> None:
    with pytest.raises(ProjectError) as caught:
        load(tmp_path / "\x1b[2J.toml")
    assert "\x1b" not in str(caught.value)
    assert "[2J.toml" in str(caught.value)


def test_a_very_long_name_does_not_flood_the_terminal() -> None:
    text = SOUND.replace("wind = 800.0", "w" * 10_000 + " = 800.0")
    assert len(str(_refused(text))) < 500


@pytest.mark.parametrize("start", ["", "\ufeff"], ids=["plain", "byte order mark"])
@pytest.mark.parametrize("newline", ["\n", "\r\n"], ids=["lf", "crlf"])
def test_lines_are_counted_alike_in_every_kind_of_text(start: str, newline: str) -> None:
    for new, word in (("thin = true", "true"), ("thin = 1 MPa", '"MPa"'), ("thin = ", "the end of the line")):
        error = _refused(start + SOUND.replace("thin = 0.10", new).replace("\n", newline))
        assert [(fault.line, fault.path) for fault in error.faults] == [(8, "project.thin")]
        assert f"found {word}" in error.faults[0].message


# Files that are none


def _told(path: Path) -> FileFault:
    with pytest.raises(ProjectError) as caught:
        load(path)
    assert str(caught.value).startswith(str(path))
    (fault,) = caught.value.faults
    return fault


def test_a_missing_file_is_told(tmp_path: Path) -> None:
    fault = _told(tmp_path / "none.toml")
    assert (fault.line, "no file of this name" in fault.message) == (None, True)


def test_a_folder_is_told(tmp_path: Path) -> None:
    assert "found a folder, expected a project file" in _told(tmp_path).message


def test_what_may_not_be_read_is_told(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "secret.toml"
    path.write_text(SOUND)

    def refuse(*_: Any, **__: Any) -> None:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(builtins, "open", refuse)
    with pytest.raises(ProjectError, match="may not be read"):
        load(path)


def test_what_is_not_utf8_is_told_with_line_and_byte(tmp_path: Path) -> None:
    path = tmp_path / "latin.toml"
    path.write_bytes(SOUND.replace("Bracket", "Träger").encode("latin-1"))
    fault = _told(path)
    assert (fault.line, fault.message) == (4, "found the byte 0xE4 at place 12 of the line, expected UTF-8 text")


def test_a_file_that_is_too_large_is_not_read(tmp_path: Path) -> None:
    path = tmp_path / "large.toml"
    with path.open("wb") as file:
        file.truncate(store.LARGEST + 1)
    assert "found a file above 16 MB" in _told(path).message


def test_a_name_that_no_file_can_have_is_told() -> None:
    with pytest.raises(ProjectError, match="no file name"):
        load("a\0b.toml")


def test_a_pipe_is_told(tmp_path: Path) -> None:
    path = tmp_path / "pipe"
    os.mkfifo(path)
    assert "no ordinary file" in _told(path).message


def test_an_empty_file_says_what_is_missing() -> None:
    assert [fault.line for fault in _refused("").faults] == [1, 1]


def _outcome(text: str) -> str:
    """Whether a text is read or refused; whatever is told of it is fit for a terminal."""
    try:
        parse(text)
    except ProjectError as error:
        told = str(error)
    else:
        return "read"
    assert told
    assert all(c == "\n" or unicodedata.category(c) not in {"Cc", "Cf"} for c in told)
    return "refused"


def test_whatever_a_file_holds_it_is_read_or_refused() -> None:
    chance = random.Random(4)
    scraps = ["\0", '"', "'", "[", "]", "{", "}", "=", "\n", "\\", "\x1b[2J", ".", "-", "1e999", "#", "\r", '"""']
    outcomes = set()
    for _ in range(250):
        text = SOUND
        for _ in range(chance.randint(1, 3)):
            place, width = chance.randrange(len(text)), chance.choice([0, 0, 1, 2, 30])
            text = text[:place] + chance.choice(["", *scraps]) + text[place + width :]
        outcomes.add(_outcome(text))
    assert outcomes == {"read", "refused"}
