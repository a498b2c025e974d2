"""A save changes what edits changed and nothing else of a file that somebody wrote by hand."""

from __future__ import annotations

from typing import Any

import pytest

from engine import store
from engine.edits import Edit, Insert, Move, Remove, Rename, Set, apply, inverse
from engine.fileblocks import HEAD, Blocks
from engine.project import Project
from engine.spans import BOM, Spans
from engine.store import parse, saved_text

from ..random_projects import random_project
from .hand_files import BRACKET, FILES, SCATTERED, SPOKEN, WINCH
from .kept import after, lines
from .random_edits import edited


@pytest.fixture(autouse=True)
def _never_afresh(monkeypatch: pytest.MonkeyPatch) -> None:
    """Fails a test in which the hand is given up and the file is written afresh."""

    def render(project: Project) -> str:
        raise AssertionError(f"{project.settings.title}: written afresh")

    monkeypatch.setattr(store, "render", render)


B = '# about b\n# in two lines\n[[case]]\nname = "b"\ncategory = "c"\n# below b\n'


def test_an_entry_moves_with_the_comments_that_touch_it() -> None:
    assert after(SPOKEN, Move("case", "b", 3)) == SPOKEN.replace(f"\n{B}", "") + f"\n{B}"


def test_an_entry_goes_with_the_comments_that_touch_it() -> None:
    assert after(SPOKEN, Remove("case", "b")) == SPOKEN.replace(f"\n{B}", "")


def test_entries_renamed_together_keep_their_comments() -> None:
    renames = [Rename("case", "b", "x"), Rename("case", "c", "y"), Rename("case", "d", "z")]
    gone, new = lines(SPOKEN, after(SPOKEN, *renames))
    assert (gone, new) == (['name = "b"', 'name = "c"', 'name = "d"'], ['name = "x"', 'name = "y"', 'name = "z"'])
    moved = after(SPOKEN, *renames, Move("case", "y", 0))
    assert 'yield = 1.5\n[[case]]\ncategory = "c" # of c\nlabel = "C"\nname = "y"\n\n[[case]]\n' in moved


def test_all_acknowledgements_of_a_renamed_point_follow_it() -> None:
    second = WINCH[WINCH.index("[[ack") :].replace("hydrostatic-tension", "elongation # noted")
    text = WINCH + "\n" + second.replace('elongation # noted"', 'elongation" # noted')
    gone, new = lines(text, after(text, Rename("point", "P02", "P2")))
    assert gone == ['name = "P02"', 'point = "P02"', 'point = "P02"']
    assert new == ['name = "P2"', 'point = "P2"', 'point = "P2"']


def test_a_dotted_key_comes_below_the_last_of_its_table() -> None:
    text = after(BRACKET, Set("case", "LC 1", ("loads", "Wärme"), 1.0))
    assert 'loads . "side" = 8e2   # eight hundred\nloads."Wärme" = 1.0\n# a remark' in text


def test_text_over_several_lines_has_the_line_ends_of_the_file() -> None:
    text = after(WINCH.replace("\n", "\r\n"), Set("project", "", ("notes",), "three\nnew\nlines"))
    assert 'notes = """\r\nthree\r\nnew\r\nlines"""\r\n' in text


def test_where_new_things_stand() -> None:
    text = after(
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
    new = after(f"{text}{case}", Insert("load", 0, {"name": "F"}))
    assert new == f'{text}[[load]]\nname = "F"\n{case}'


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
    text = after(WINCH, *swap)
    assert parse(text).names("point") == ("P02", "P01", "P03")


def test_a_renamed_entry_keeps_its_comments_though_it_changed_too() -> None:
    text = after(WINCH, Rename("case", "LC01", "LC1"), Set("case", "LC1", ("loads", "haul"), 1.5))
    assert lines(WINCH, text)[1] == [
        'name = "LC1"',
        "loads = { haul = 1.5, wind = 800.0 } # in N",
        "temperature = { LC1 = 40.0 }",
        "LC1 = [120.0, 0, 0, 35.0, 0, 0]",
    ]


def test_another_order_of_components_rewrites_the_rows() -> None:
    text = after(WINCH, Set("project", "", ("components",), "xx yy zz xy yz zx"))
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
