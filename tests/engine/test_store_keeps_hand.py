"""A save changes what edits changed and nothing else of a file that somebody wrote by hand."""

from __future__ import annotations

import difflib
from typing import Any

import pytest

from engine import store
from engine.edits import Edit, Insert, Move, Remove, Rename, Set, Withdraw, apply, inverse
from engine.fileblocks import HEAD, Blocks
from engine.project import Project
from engine.spans import BOM, Spans
from engine.store import parse, saved_text

from ..random_projects import random_project
from .hand_files import BRACKET, FILES, SCATTERED, WINCH
from .random_edits import edited


@pytest.fixture(autouse=True)
def _never_afresh(monkeypatch: pytest.MonkeyPatch) -> None:
    """Fails a test in which the hand is given up and the file is written afresh."""

    def render(project: Project) -> str:
        raise AssertionError(f"{project.settings.title}: written afresh")

    monkeypatch.setattr(store, "render", render)


def _after(text: str, *edits: Edit) -> str:
    """The file after edits and a save, which says what the edited project says."""
    project = parse(text)
    for edit in edits:
        project = apply(project, edit)
    new = saved_text(project, text)
    assert parse(new).same(project)
    return new


def _lines(before: str, after: str) -> tuple[list[str], list[str]]:
    """Lines that went and lines that came."""
    diff = list(difflib.ndiff(before.split("\n"), after.split("\n")))
    return [line[2:] for line in diff if line[0] == "-"], [line[2:] for line in diff if line[0] == "+"]


FACTOR = "factor = 1.15                            # or { yield = 1.15, ultimate = 1.0 }"
ROW = [120.0, 0.0, 0.0, 36.0, 0.0, 0.0]


@pytest.mark.parametrize(
    ("text", "edit", "gone", "new"),
    [
        # an inline table: one number of it
        (
            WINCH,
            Set("case", "LC01", ("loads", "haul"), 13500.0),
            ["loads = { haul = 12000.0, wind = 800.0 } # in N"],
            ["loads = { haul = 13500.0, wind = 800.0 } # in N"],
        ),
        # a dotted key whose whole number stays one
        (BRACKET, Set("case", "LC 1", ("loads", "pull"), 13500.0), ["loads.pull = +12_000"], ["loads.pull = 13500"]),
        # a dotted key with blanks about its dot, and a comment
        (
            BRACKET,
            Set("case", "LC 1", ("loads", "side"), 0.5),
            ['loads . "side" = 8e2   # eight hundred'],
            ['loads . "side" = 0.5   # eight hundred'],
        ),
        # a table of its own, and a key that is not ASCII
        (BRACKET, Set("case", "two", ("loads", "Wärme"), 3.0), ['"Wärme" = 2.5'], ['"Wärme" = 3.0']),
        # a load that was not named: after the others, dotted as they are
        (BRACKET, Set("case", "LC 1", ("loads", "Wärme"), 1.0), [], ['loads."Wärme" = 1.0']),
        # an inline table with a member more, one with a member less, and one whose last member goes
        (
            WINCH,
            Set("point", "P01", ("kt",), {"Mz": 1.7, "T": 1.4, "N": 2.0}),
            ["kt = { Mz = 1.7, T = 1.4 }"],
            ["kt = { Mz = 1.7, T = 1.4, N = 2.0 }"],
        ),
        (
            WINCH,
            Set("case", "LC01", ("loads", "wind"), None),
            ["loads = { haul = 12000.0, wind = 800.0 } # in N"],
            ["loads = { haul = 12000.0 } # in N"],
        ),
        (WINCH, Set("case", "LC01", ("combine", "dead"), None), ["combine = { dead = 1.1 }"], []),
        # one element of a row over several lines with comments
        (
            BRACKET,
            Set("point", "P2", ("stress", "LC 1"), ROW),
            ["  35.5, 0, 0 ]    # shear"],
            ["  36.0, 0, 0 ]    # shear"],
        ),
        # the file's own order of components: one element of the row
        (
            WINCH,
            Set("point", "P02", ("stress", "LC01"), [0.0, 125.0, 0, 35.0, 0, 0]),
            ["LC01 = [120.0, 0, 0, 35.0, 0, 0]"],
            ["LC01 = [125.0, 0, 0, 35.0, 0, 0]"],
        ),
        # a row that goes
        (BRACKET, Set("point", "P2", ("stress", "two"), None), ["two = [1,2,3,4,5,6]"], []),
        # a row that comes, into the table that is there
        (
            WINCH,
            Set("point", "P02", ("stress", "dead"), [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]),
            [],
            ["dead = [2.0, 1.0, 3.0, 4.0, 5.0, 6.0]"],
        ),
        # a table that comes
        (
            WINCH,
            Set("point", "P03", ("stress", "LC01"), [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]),
            [],
            ["[point.stress]", "LC01 = [2.0, 1.0, 3.0, 4.0, 5.0, 6.0]"],
        ),
        # a key that comes: after the last of the entry's own, above its tables
        (WINCH, Set("point", "P02", ("label",), "Weld toe"), [], ['label = "Weld toe"']),
        # a key that comes, indented as its neighbours
        (BRACKET, Set("category", "normal", ("label",), "N"), [], ['\tlabel = "N"']),
        # a key that goes, with the comment behind it
        (WINCH, Set("point", "P01", ("factor",), None), [FACTOR], []),
        # one number for both theories stays one
        (BRACKET, Set("category", "normal", ("yield",), 1.6), ["\tyield = 1.5"], ["\tyield = 1.6"]),
        # a table of one limit stays one where the other keeps its default
        (BRACKET, Set("point", "P1", ("factor",), {"yield": 1.2}), ["factor.yield = 1.15"], ["factor.yield = 1.2"]),
        # a table that a number can say stays a table
        (
            BRACKET,
            Set("category", "normal", ("ultimate",), 2.25),
            ["\tultimate = {tresca=2.0,von-mises=2}"],
            ["\tultimate = {tresca=2.25,von-mises=2.25}"],
        ),
        # a row appended to a list over several lines, whose last has no comma
        (
            BRACKET,
            Set("material", "steel", ("yield-at",), [[20, 345.0], [100, 318.0], [200, 300.0], [300, 280.0]]),
            ["    [200, 300.0]   # hot, no comma"],
            ["    [200, 300.0],   # hot, no comma", "    [300.0, 280.0]"],
        ),
        # a row taken out of it; the remark above stays
        (
            BRACKET,
            Set("material", "steel", ("yield-at",), [[20, 345.0], [200, 300.0]]),
            ["    [100, 318.0],"],
            [],
        ),
        # a name taken out of a list over lines
        (
            BRACKET,
            Set("point", "P1", ("not-felt",), ["Wärme"]),
            ['not-felt = [ "side",   # no', '   "Wärme", ]'],
            ['not-felt = [ "Wärme", ]'],
        ),
        # text over several lines
        (
            BRACKET,
            Set("point", "P1", ("source",), "run 12,\nnode 4712"),
            ['node 4711"""'],
            ['node 4712"""'],
        ),
        # text in single quotes keeps them
        (BRACKET, Set("project", "", ("title",), "C:\\x"), ["project.title = 'Bracket'"], ["project.title = 'C:\\x'"]),
        # text that single quotes cannot hold
        (BRACKET, Set("project", "", ("title",), "it's"), ["project.title = 'Bracket'"], ['project.title = "it\'s"']),
        # a key of [project] written with dots
        (BRACKET, Set("project", "", ("revision",), "C"), [], ['project.revision = "C"']),
        # an entry written in an inline list
        (
            BRACKET,
            Set("load", "side", ("label",), "Side pull"),
            ['  { name = "side" , label = "S" },'],
            ['  { name = "side" , label = "Side pull" },'],
        ),
        # another number for a name in a table by case
        (
            BRACKET,
            Set("point", "P3", ("temperature", "two"), 61.0),
            ['temperature = { "LC 1" = 20, two = 60.0 }'],
            ['temperature = { "LC 1" = 20, two = 61.0 }'],
        ),
        # a table that headers of longer names make
        (
            BRACKET,
            Set("section", "A-A", ("resultants",), {"Mz": {"pull": 210.0}, "T": {"pull": 145.0}}),
            ["pull = 140.0 # arm"],
            ["pull = 145.0 # arm"],
        ),
        # a table far below its entry
        (
            SCATTERED,
            Set("point", "A", ("stress", "two"), [0.0] * 6),
            [],
            ["two = [0.0, 0.0, 0.0, 0.0, 0.0, 0.0]"],
        ),
        # a renamed load, everywhere it is named
        (
            BRACKET,
            Rename("load", "side", "quer, 1"),
            [
                '  { name = "side" , label = "S" },',
                'loads . "side" = 8e2   # eight hundred',
                'not-felt = [ "side",   # no',
            ],
            [
                '  { name = "quer, 1" , label = "S" },',
                'loads . "quer, 1" = 8e2   # eight hundred',
                'not-felt = [ "quer, 1",   # no',
            ],
        ),
        # a renamed point with an acknowledgement
        (WINCH, Rename("point", "P02", "P2"), ['name = "P02"', 'point = "P02"'], ['name = "P2"', 'point = "P2"']),
        # an entry that goes, with the comments that touch it
        (
            BRACKET,
            Remove("point", "P2"),
            BRACKET[BRACKET.index('name = "P2"') : BRACKET.index('name = "P3"')].split("\n"),
            [],
        ),
        # the last entry of its kind and of the file
        (WINCH, Withdraw("P02", "hydrostatic-tension"), ["", *WINCH[WINCH.index("[[ack") :].split("\n")[:-1]], []),
        # an entry that comes, with a blank line as between the others
        (
            WINCH,
            Insert("load", 2, {"name": "new load"}),
            [],
            ["", "[[load]]", 'name = "new load"'],
        ),
    ],
)
def test_an_edit_touches_its_own_lines_alone(text: str, edit: Edit, gone: list[str], new: list[str]) -> None:
    found_gone, found_new = _lines(text, _after(text, edit))
    assert sorted(found_gone) == sorted(gone)
    assert sorted(found_new) == sorted(new)


def test_where_new_things_stand() -> None:
    text = _after(
        WINCH,
        Set("point", "P02", ("label",), "Weld toe"),
        Set("point", "P01", ("stress", "LC01"), None),
        Insert("case", 0, {"name": "first", "category": "normal"}),
        Insert("case", 2, {"name": "third", "category": "normal"}),
    )
    label = 'not-felt = ["wind"]\nlabel = "Weld toe"\n[point.per-load]\n'
    assert label in text
    first = 'sense = "optional"\n\n[[case]]\nname = "first"\ncategory = "normal"\n\n[[case]]\nname = "dead"\n'
    third = 'check = false\n\n[[case]]\nname = "third"\ncategory = "normal"\n\n[[case]]\nname = "LC01"\n'
    assert first in text
    assert third in text


def test_the_first_entry_of_a_kind_comes_below_those_of_earlier_kinds() -> None:
    project = SCATTERED[SCATTERED.index("[project]") : SCATTERED.index("[point.per-load]")]
    text = f"format = 1\n{project}[[category]]\nname = 'c'\nyield = 1\n"
    case = "[[case]]\nname = 'one'\ncategory = 'c'\n"
    new = _after(f"{text}{case}", Insert("load", 0, {"name": "F"}))
    assert new == f"{text}[[load]]\nname = \"F\"\n{case}"


@pytest.mark.parametrize("name", list(FILES))
def test_an_unchanged_project_leaves_every_byte(name: str) -> None:
    text = FILES[name]
    assert saved_text(parse(text), text) == text


@pytest.mark.parametrize(
    ("text", "edit"),
    [
        (WINCH, Set("case", "LC01", ("loads", "haul"), 13500.0)),  # a number
        (WINCH, Set("point", "P01", ("label",), "x")),  # a text
        (WINCH, Rename("case", "LC01", "a b")),  # a name that needs quotes
        (WINCH, Rename("load", "haul", "pull")),  # a name in many places
        (WINCH, Move("point", "P03", 0)),  # an entry to the top of its kind
        (WINCH, Move("case", "dead", 1)),  # one down
        (WINCH, Insert("case", 1, {"name": "new", "category": "normal"})),  # between two
        (WINCH, Set("material", "S355 16-40", ("yield-at",), [[20, 345.0], [100, 318.0], [200, 300.0]])),  # a row
        (BRACKET, Insert("case", 2, {"name": "new", "category": "normal"})),  # below a comment
        (BRACKET, Set("case", "LC 1", ("loads", "Wärme"), 5.0)),  # a dotted key
    ],
)
@pytest.mark.parametrize("start", ["", BOM], ids=["plain", "byte order mark"])
@pytest.mark.parametrize("newline", ["\n", "\r\n"], ids=["lf", "crlf"])
def test_undone_after_a_save_the_file_is_as_it_was(text: str, edit: Edit, start: str, newline: str) -> None:
    text = start + text.replace("\n", newline)
    project = parse(text)
    after = apply(project, edit)
    saved = saved_text(after, text)
    assert saved != text
    assert saved_text(apply(after, inverse(project, edit)), saved) == text


@pytest.mark.parametrize("name", list(FILES))
def test_newlines_the_byte_order_mark_and_the_end_of_the_file_stay(name: str) -> None:
    text = FILES[name]
    project, done = edited(parse(text), 5, 25)
    assert len(done) > 10
    new = saved_text(project, text)
    assert new.startswith(BOM) == text.startswith(BOM)
    assert new.count("\r\n") == (new.count("\n") if "\r\n" in text else 0)
    assert new.endswith("\n") == text.endswith("\n")


def test_a_swap_of_names_keeps_what_each_says() -> None:
    swap = [Rename("point", "P01", "tmp"), Rename("point", "P02", "P01"), Rename("point", "tmp", "P02")]
    text = _after(WINCH, *swap)
    assert parse(text).names("point") == ("P02", "P01", "P03")


def test_a_renamed_entry_keeps_its_comments_though_it_changed_too() -> None:
    text = _after(WINCH, Rename("case", "LC01", "LC1"), Set("case", "LC1", ("loads", "haul"), 1.5))
    assert _lines(WINCH, text)[1] == [
        'name = "LC1"',
        "loads = { haul = 1.5, wind = 800.0 } # in N",
        "temperature = { LC1 = 40.0 }",
        "LC1 = [120.0, 0, 0, 35.0, 0, 0]",
    ]


def test_another_order_of_components_rewrites_the_rows() -> None:
    text = _after(WINCH, Set("project", "", ("components",), "xx yy zz xy yz zx"))
    assert "LC01 = [0.0, 120, 0, 35.0, 0, 0]" in text
    assert "# as the solver exports them" in text


def test_a_file_of_another_project_becomes_this_one() -> None:
    text = saved_text(parse(WINCH), BRACKET)
    assert parse(text).same(parse(WINCH))


# At random


def _untouched(before: Project, after: Project, text: str) -> list[str]:
    """The lines of every entry that edits did not touch, each entry's as one text."""
    spans = Spans(text if text.endswith("\n") else f"{text}\n")
    found: list[str] = []
    for block in Blocks(spans.text, spans.statements, "\n").blocks:
        kind, place = block.owner
        if block.owner == HEAD or kind == "project":
            continue
        parts: Any = before.acknowledgements if kind == "acknowledge" else before.of(kind)  # type: ignore[arg-type]
        others: Any = after.acknowledgements if kind == "acknowledge" else after.of(kind)  # type: ignore[arg-type]
        old = parts[place]
        if any(old.same(new) if kind == "point" else old == new for new in others):
            found.append(spans.text[block.start : block.end].removesuffix("\n"))
    return found


@pytest.mark.parametrize("seed", range(90))
def test_random_edits_of_random_files_keep_what_they_do_not_touch(seed: int) -> None:
    _check(random_project(1000 + seed), seed)


@pytest.mark.parametrize("name", list(FILES))
def test_random_edits_of_files_by_hand_keep_what_they_do_not_touch(name: str) -> None:
    for seed in range(15):
        _check(FILES[name], seed)


def _check(text: str, seed: int) -> None:
    text = text.removeprefix(BOM)
    before = parse(text)
    after, done = edited(before, seed, 1 + seed % 7)
    new = saved_text(after, text)
    assert parse(new).same(after), done
    if before.settings.components == after.settings.components:
        for lines in _untouched(before, after, text):
            assert lines in new, done
    back = saved_text(before, new)
    assert parse(back).same(before), done
    assert saved_text(after, new) == new
