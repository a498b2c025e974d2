"""An open project without a screen: edits, previews, undo, saving, reading again."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from engine import store
from engine.edits import Edit, Insert, Move, Refusal, Remove, Rename, Set
from engine.margins import compute
from engine.table import MarginTable
from tui import document as document_module
from tui.document import Document, State

from .app_tools import DEMO, demo_copy, written

HAUL = Set("case", "LC09", ("loads", "haul"), 60000.0)
EDITS: list[Edit] = [
    HAUL,  # one load of one case
    Set("case", "LC13", ("loads", "brake"), None),  # an ingredient of combinations
    Set("material", "S275 100-150", ("yield",), 235.0),
    Set("category", "occasional", ("yield", "tresca"), 1.0),
    Set("point", "P12 bed anchor FE", ("stress", "LC10"), [90.0, 30.0, 0.0, 20.0, 0.0, 0.0]),  # the missing row
    Set("project", "", ("accept",), "von-mises"),
    Set("project", "", ("thin",), 0.5),
    Set("case", "LC07", ("check",), False),  # one column fewer
    Insert("case", 3, {"name": "LC99", "category": "normal", "loads": {"haul": 80000.0}}),
    Insert("point", 0, {"name": "P00", "material": "S355 16-40"}),
    Remove("point", "P04 brake cyl outer"),
    Rename("load", "haul", "pull"),
    Move("case", "LC18", 0),
]


def texts(state: State) -> tuple[object, ...]:
    """What the summary says of a state."""
    found = state.envelope.of_project()
    governs = (found.point, found.case, found.limit, found.theory, found.margin)
    return state.envelope.counts(), state.passes, state.complete, state.cautions.standing, governs


def assert_fresh(table: MarginTable) -> None:
    """A table is what its project gives computed anew."""
    fresh = compute(table.project)
    np.testing.assert_array_equal(table.values, fresh.values)
    np.testing.assert_array_equal(table.envelope.least, fresh.envelope.least)
    np.testing.assert_array_equal(table.envelope.case, fresh.envelope.case)


@pytest.fixture
def winch(tmp_path: Path) -> Document:
    return Document.open(demo_copy(tmp_path))


def test_an_opened_project_is_clean_and_computed(winch: Document) -> None:
    assert not winch.dirty
    assert winch.table.project is winch.project
    assert winch.state.envelope.counts() == {"clear": 7, "thin": 1, "split": 1, "short": 2, "no-data": 1}
    assert (winch.state.passes, winch.state.complete, winch.state.cautions.standing, winch.notes) == (
        False,
        False,
        1,
        2,
    )


@pytest.mark.parametrize("edit", EDITS, ids=lambda edit: type(edit).__name__)
def test_a_preview_says_what_the_commit_then_makes_and_changes_nothing(winch: Document, edit: Edit) -> None:
    before, table = texts(winch.state), winch.table
    ahead = winch.preview(edit)
    assert ahead is not None
    assert winch.table is table
    assert not winch.dirty
    assert texts(winch.state) == before
    assert_fresh(table)
    winch.commit(edit)
    assert texts(winch.state) == texts(ahead)


@pytest.mark.parametrize("edit", EDITS, ids=lambda edit: type(edit).__name__)
def test_an_edit_its_undo_and_its_redo_leave_a_table_as_computed_anew(winch: Document, edit: Edit) -> None:
    first = winch.project
    text = winch.commit(edit)
    second = winch.project
    assert_fresh(winch.table)
    assert winch.undo() == f"undone: {text}"
    assert winch.project.same(first)
    assert not winch.dirty
    assert_fresh(winch.table)
    assert winch.redo() == f"redone: {text}"
    assert winch.project.same(second)
    assert winch.dirty
    assert_fresh(winch.table)


def test_the_state_follows_the_project(winch: Document) -> None:
    assert winch.state.envelope.counts()["split"] == 1
    winch.commit(HAUL)
    assert winch.state.envelope.counts()["split"] == 0
    assert winch.state is winch.state


def test_with_nothing_done_or_undone_undo_and_redo_say_none(winch: Document) -> None:
    assert winch.undo() is None
    assert winch.redo() is None


@pytest.mark.parametrize(
    "edit",
    [
        Set("case", "LC09", ("loads", "hall"), 1.0),  # no such load
        Set("case", "LC99", ("loads", "haul"), 1.0),  # no such case
        Set("material", "S355 16-40", ("yield",), -1.0),
        Remove("material", "S355 16-40"),  # in use
    ],
)
def test_a_refused_edit_changes_nothing(winch: Document, edit: Edit) -> None:
    project, table = winch.project, winch.table
    for attempt in (winch.preview, winch.commit):
        with pytest.raises(Refusal):
            attempt(edit)
    assert winch.project is project
    assert winch.table is table
    assert not winch.dirty


def test_only_a_large_computation_is_left_to_a_thread(winch: Document, monkeypatch: pytest.MonkeyPatch) -> None:
    added = Insert("point", 0, {"name": "P00", "material": "S355 16-40"})
    assert not winch.begin(added).large
    monkeypatch.setattr(document_module, "LARGE", 100)
    assert not winch.begin(HAUL).large  # one case of 12 points
    pending = winch.begin(added)  # 13 x 18
    assert pending.large
    assert winch.preview(added) is None
    winch.finish(pending, winch.make(pending))
    assert winch.project is pending.project
    assert winch.history.done[-1].text == "add point P00"
    assert_fresh(winch.table)


# ---- the file


def test_a_save_writes_the_edits_and_nothing_else(winch: Document) -> None:
    winch.commit(HAUL)
    assert winch.save() == winch.path
    assert not winch.dirty
    assert winch.path is not None
    before, after = DEMO.read_text().splitlines(), winch.path.read_text().splitlines()
    changed = [(a, b) for a, b in zip(before, after, strict=True) if a != b]
    assert changed == [("loads = { haul = 75000.0, dead = 1.0 }", "loads = { haul = 60000.0, dead = 1.0 }")]
    assert store.load(winch.path).same(winch.project)


def test_under_another_name_the_hand_of_the_old_file_is_kept_and_work_goes_on_there(
    winch: Document, tmp_path: Path
) -> None:
    winch.commit(HAUL)
    other = tmp_path / "other.toml"
    winch.save(other)
    assert winch.path == other
    assert not winch.dirty
    assert other.read_text() == DEMO.read_text().replace("haul = 75000.0", "haul = 60000.0")
    assert (tmp_path / "winch.toml").read_text() == DEMO.read_text()
    winch.undo()
    winch.save()
    assert other.read_text() == DEMO.read_text()


def test_over_a_foreign_file_the_hand_of_the_own_one_is_kept(winch: Document, tmp_path: Path) -> None:
    foreign = written(tmp_path, "something else\n", "foreign.toml")
    winch.save(foreign)
    assert foreign.read_text() == DEMO.read_text()
    assert (tmp_path / "foreign.toml~").read_text() == "something else\n"


def test_a_save_that_fails_keeps_name_and_edits(winch: Document, tmp_path: Path) -> None:
    winch.commit(HAUL)
    with pytest.raises(store.SaveError):
        winch.save(tmp_path / "no such folder" / "x.toml")
    assert winch.path == tmp_path / "winch.toml"
    assert winch.dirty


def test_a_project_without_a_name_is_dirty_and_asks_for_one(winch: Document, tmp_path: Path) -> None:
    unnamed = Document(winch.project, None)
    assert unnamed.dirty
    with pytest.raises(Refusal, match="no file name"):
        unnamed.save()
    with pytest.raises(Refusal, match="no file"):
        unnamed.reload()
    unnamed.save(tmp_path / "named.toml")
    assert not unnamed.dirty
    assert store.load(tmp_path / "named.toml").same(winch.project)


def test_what_is_edited_while_a_save_is_written_is_not_taken_for_saved(winch: Document) -> None:
    winch.commit(HAUL)
    saving = winch.begin_save()
    winch.commit(Set("project", "", ("revision",), "C"))
    winch.finish_save(saving, saving.write())
    assert winch.dirty
    assert store.load(saving.target).settings.revision == "B"
    winch.undo()
    assert not winch.dirty


def test_reading_again_drops_edits_and_history(winch: Document) -> None:
    winch.commit(HAUL)
    winch.reload()
    assert not winch.dirty
    assert winch.undo() is None
    assert winch.project.same(store.load(DEMO))
    assert_fresh(winch.table)


def test_reading_a_broken_file_again_keeps_everything(winch: Document) -> None:
    winch.commit(HAUL)
    project = winch.project
    assert winch.path is not None
    winch.path.write_text("format = 1\n")
    with pytest.raises(store.ProjectError):
        winch.reload()
    assert winch.project is project
    assert winch.dirty
    assert winch.undo() == "undone: LC09 haul 75000 -> 60000"
