"""One line being typed: keys on plain data."""

from __future__ import annotations

import pytest

from tui.line_editor import LONGEST, LineEditor


def at(marked: str) -> LineEditor:
    """The editor of a text with its cursor at the bar."""
    return LineEditor(marked.replace("|", ""), marked.index("|"))


def marked(editor: LineEditor) -> str:
    return editor.text[: editor.cursor] + "|" + editor.text[editor.cursor :]


@pytest.mark.parametrize(
    ("key", "before", "after"),
    [
        ("left", "12|3", "1|23"),
        ("left", "|123", "|123"),  # stops at the start
        ("right", "12|3", "123|"),
        ("right", "123|", "123|"),  # stops at the end
        ("home", "12|3", "|123"),
        ("ctrl+a", "12|3", "|123"),
        ("end", "1|23", "123|"),
        ("ctrl+e", "1|23", "123|"),
        ("backspace", "12|3", "1|3"),
        ("ctrl+h", "12|3", "1|3"),  # what some terminals send for backspace
        ("backspace", "|123", "|123"),
        ("delete", "1|23", "1|3"),
        ("ctrl+d", "1|23", "1|3"),
        ("delete", "123|", "123|"),
        ("ctrl+u", "12|3", "|3"),
        ("ctrl+k", "1|23", "1|"),
        ("ctrl+w", "one two|", "one |"),
        ("ctrl+w", "one two  |", "one |"),  # blanks before the cursor go with the word
        ("ctrl+w", "one| two", "| two"),
        ("ctrl+w", "|one", "|one"),
    ],
)
def test_each_key_does_what_help_says(key: str, before: str, after: str) -> None:
    editor = at(before).key(key)
    assert editor is not None
    assert marked(editor) == after


@pytest.mark.parametrize("key", ["f5", "up", "tab", "ctrl+s", "enter", "escape", "a"])
def test_other_keys_mean_nothing_to_the_editor(key: str) -> None:
    assert at("1|2").key(key) is None


@pytest.mark.parametrize(
    ("typed", "after"),
    [
        ("4", "124|3"),
        ("45", "1245|3"),
        ("", "12|3"),
        ("4\n5", "124|3"),  # only the first line of a paste
        ("4\r\n5", "124|3"),
        ("\n45", "12|3"),  # the first line of this one is empty
        ("4\x1b[31m", "124[31m|3"),  # no control character gets in
        ("4\t5", "1245|3"),
        ("荷重", "12荷重|3"),
    ],
)
def test_typing_and_pasting_go_in_at_the_cursor(typed: str, after: str) -> None:
    assert marked(at("12|3").insert(typed)) == after


def test_a_line_takes_no_more_than_its_longest() -> None:
    editor = LineEditor().insert("x" * (LONGEST - 1)).insert("yz")
    assert len(editor.text) == LONGEST
    assert editor.text.endswith("xy")
    assert editor.cursor == LONGEST
    assert editor.insert("more") == editor
