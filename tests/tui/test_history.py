"""Undo and redo, and whether the file holds what is on screen."""

from __future__ import annotations

import pytest

from engine.edits import Set
from tui.history import History, Step


def step(number: int) -> Step:
    return Step(
        Set("case", "LC01", ("temperature",), number), Set("case", "LC01", ("temperature",), 0), f"step {number}"
    )


def after(moves: str) -> History:
    """A history after moves: c commit, u undo, r redo, s save."""
    history = History()
    for number, move in enumerate(moves):
        match move:
            case "c":
                history.commit(step(number))
            case "u":
                history.took_back()
            case "r":
                history.did_again()
            case "s":
                history.mark_saved(history.last)
    return history


@pytest.mark.parametrize(
    ("moves", "dirty"),
    [
        ("", False),  # just read
        ("c", True),  # one edit
        ("cu", False),  # taken back: the file holds it
        ("cur", True),  # and made again
        ("cs", False),  # saved
        ("csu", True),  # the file holds an edit that was taken back
        ("csur", False),  # back at what was saved
        ("csuc", True),  # another edit in its place: as many steps, but not the saved ones
        ("csucu", True),  # the saved state can no longer be reached
        ("csucur", True),  # nor this way
        ("ccsuuc", True),  # likewise, two steps back
        ("ccsuucc", True),  # as many steps as were saved, and yet others
        ("csucs", False),  # saved anew
    ],
)
def test_dirty_says_whether_the_file_holds_what_is_on_screen(moves: str, dirty: bool) -> None:
    assert after(moves).dirty is dirty


def test_a_project_without_a_file_is_dirty_until_saved() -> None:
    history = History(saved=None)
    assert history.dirty
    history.mark_saved(history.last)
    assert not history.dirty


def test_a_new_edit_forgets_what_was_undone() -> None:
    history = after("ccuu")
    assert [s.text for s in history.undone] == ["step 1", "step 0"]
    history.commit(step(9))
    assert [s.text for s in history.done] == ["step 9"]
    assert history.undone == []


def test_undo_and_redo_keep_the_order() -> None:
    history = after("cccuu")
    history.did_again()
    assert [s.text for s in history.done] == ["step 0", "step 1"]
    assert [s.text for s in history.undone] == ["step 2"]


def test_a_save_that_ends_after_further_edits_holds_the_state_it_began_with() -> None:
    history = after("cc")
    begun = history.last
    history.commit(step(9))
    history.mark_saved(begun)
    assert history.dirty
    history.took_back()
    assert not history.dirty


def test_a_save_that_ends_after_its_state_was_undone_is_dirty_until_redone() -> None:
    history = after("cc")
    begun = history.last
    history.took_back()
    history.mark_saved(begun)
    assert history.dirty
    history.did_again()
    assert not history.dirty


def test_a_save_that_ends_after_its_state_is_out_of_reach_leaves_the_project_dirty() -> None:
    history = after("cc")
    begun = history.last
    history.took_back()
    history.commit(step(9))
    history.mark_saved(begun)
    assert history.dirty
