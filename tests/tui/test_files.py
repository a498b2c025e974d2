"""Saving, saving under another name, reading again and leaving, by keys: no edit is lost without a question."""

from __future__ import annotations

from collections.abc import AsyncIterator
from pathlib import Path

import pytest

from engine import store
from tui import document, state
from tui.app import HexlipseApp
from tui.desk import Desk
from tui.dialogs import Page, Question

from .app_tools import DEMO, Hand, demo_copy, opened, written
from .small_projects import BRITTLE

DEMO_TEXT = DEMO.read_text(encoding="utf-8")
EDITED = DEMO_TEXT.replace("haul = 75000.0", "haul = 60000.0")


@pytest.fixture
async def hand(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> AsyncIterator[Hand]:
    """The demo with one edit that its file does not hold, in a folder of its own."""
    monkeypatch.chdir(tmp_path)
    async with opened(demo_copy(tmp_path)) as found:
        await found.press("f3", *["down"] * 8, *"60000", "enter")
        yield found


def has_left(app: HexlipseApp) -> bool:
    return app.return_code == 0


# ---- saving


async def test_ctrl_s_writes_the_file_and_the_mark_of_edits_goes(hand: Hand, tmp_path: Path) -> None:
    assert "rev B *" in hand.lines[0]
    await hand.press("ctrl+s")
    assert hand.message == "saved winch.toml"
    assert "*" not in hand.lines[0]
    assert (tmp_path / "winch.toml").read_text() == EDITED
    assert (tmp_path / "winch.toml~").read_text() == DEMO_TEXT
    assert state.recent() == [tmp_path / "winch.toml"]
    await hand.press("u")
    assert "*" in hand.lines[0]


async def test_a_file_changed_by_somebody_else_is_not_overwritten_without_a_question(
    hand: Hand, tmp_path: Path
) -> None:
    path = tmp_path / "winch.toml"
    foreign = DEMO_TEXT.replace('revision = "B"', 'revision = "C"')
    path.write_text(foreign)
    await hand.press("ctrl+s")
    assert isinstance(hand.app.screen, Question)
    await hand.press("escape")
    assert path.read_text() == foreign
    assert hand.document.dirty
    await hand.press("ctrl+s")
    await hand.press("o")
    assert store.load(path).same(hand.project)
    assert (tmp_path / "winch.toml~").read_text() == foreign


async def test_a_save_that_fails_says_why_and_keeps_the_edits(hand: Hand, tmp_path: Path) -> None:
    path = tmp_path / "winch.toml"
    path.unlink()
    path.mkdir()
    await hand.press("ctrl+s")
    assert hand.message.startswith("not saved")
    assert "folder" in hand.message
    assert hand.document.dirty


async def test_a_large_file_is_written_beside_the_screen(hand: Hand, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(document, "LARGE_FILE", 10)
    await hand.press("ctrl+s")
    await hand.until(lambda: hand.message == "saved winch.toml", "the save")
    assert not hand.document.dirty
    assert hand.document.path is not None
    assert hand.document.path.read_text() == EDITED


async def test_a_large_computation_runs_beside_the_screen(hand: Hand, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(document, "LARGE", 10)
    await hand.press("u")
    await hand.until(lambda: hand.message == "undone: LC09 haul 75000 -> 60000", "the undo")
    assert not hand.document.dirty
    assert hand.row("LC09").split()[1] == "-0.04"


# ---- saving under another name


async def test_under_another_name_the_hand_is_kept_and_work_goes_on_there(hand: Hand, tmp_path: Path) -> None:
    await hand.press("S")
    assert hand.desk.line.text.endswith("winch.toml")
    await hand.press("ctrl+u")
    await hand.enter("other")
    assert hand.message == "saved other.toml"
    assert (tmp_path / "other.toml").read_text() == EDITED
    assert (tmp_path / "winch.toml").read_text() == DEMO_TEXT
    assert hand.document.path == Path("other.toml")
    assert not hand.document.dirty


async def test_an_existing_file_is_overwritten_only_after_a_question(hand: Hand, tmp_path: Path) -> None:
    written(tmp_path, BRITTLE, "other.toml")
    await hand.entry("S", text="other.toml")
    assert isinstance(hand.app.screen, Question)
    assert "other.toml exists already" in hand.text
    await hand.press("escape")
    assert (tmp_path / "other.toml").read_text() == BRITTLE
    assert hand.document.path == tmp_path / "winch.toml"
    await hand.entry("S", text="other.toml")
    await hand.press("o")
    assert (tmp_path / "other.toml").read_text() == EDITED
    assert (tmp_path / "other.toml~").read_text() == BRITTLE


async def test_a_name_that_cannot_be_written_is_refused_and_can_be_changed(hand: Hand, tmp_path: Path) -> None:
    written(tmp_path, "", "file.txt")
    for name in ("", "  ", "no such folder/x", "file.txt/x", "/", ".", "..", str(tmp_path), "~nobody/x", "x" * 300):
        await hand.entry("S", text=name)
        assert hand.desk.line.typing, name
        assert "needed" in hand.message or "not saved" in hand.message, name
        await hand.press("escape")
    assert hand.document.dirty
    await hand.entry("S", text="~")
    assert "folder" in hand.message
    assert sorted(path.name for path in tmp_path.iterdir()) == ["file.txt", "state", "winch.toml"]


# ---- reading again


async def test_without_edits_the_file_is_read_again_at_once(hand: Hand, tmp_path: Path) -> None:
    await hand.press("u")
    (tmp_path / "winch.toml").write_text(EDITED)
    await hand.press("ctrl+r")
    assert hand.message == "read again from the file"
    assert hand.row("LC09").split()[1] == "+0.20"


async def test_with_edits_reading_again_asks_first(hand: Hand) -> None:
    await hand.press("ctrl+r")
    assert isinstance(hand.app.screen, Question)
    await hand.press("escape")
    assert hand.document.dirty
    await hand.press("ctrl+r")
    await hand.press("r")
    assert not hand.document.dirty
    assert hand.row("LC09").split()[1] == "-0.04"
    await hand.press("u")
    assert hand.message == "there is nothing to undo"


@pytest.mark.parametrize("broken", [None, "format = 1\n[project]\ntitel = 3\n", "\x00", "format = 2\n"])
async def test_a_file_that_cannot_be_read_again_is_shown_and_everything_stays(
    hand: Hand, tmp_path: Path, broken: str | None
) -> None:
    path = tmp_path / "winch.toml"
    path.unlink() if broken is None else path.write_text(broken)
    await hand.press("ctrl+r")
    await hand.press("r")
    assert isinstance(hand.app.screen, Page)
    assert "winch.toml" in hand.text
    await hand.press("escape")
    assert isinstance(hand.app.screen, Desk)
    assert hand.document.dirty
    assert hand.row("LC09").split()[1] == "+0.20"


# ---- leaving


async def test_without_edits_one_leaves_at_once(hand: Hand) -> None:
    await hand.press("u", "ctrl+q")
    await hand.until(lambda: has_left(hand.app), "leaving")


async def test_with_edits_leaving_asks_and_staying_is_the_way_out(hand: Hand) -> None:
    await hand.press("ctrl+q")
    assert "1 edit not saved" in hand.text.lower()
    await hand.press("x", "down", "f3")
    assert isinstance(hand.app.screen, Question)
    await hand.press("escape")
    assert isinstance(hand.app.screen, Desk)
    await hand.press("ctrl+q")
    await hand.press("ctrl+c")
    assert isinstance(hand.app.screen, Desk)
    assert hand.app.return_code is None


async def test_leaving_can_save_first(hand: Hand, tmp_path: Path) -> None:
    await hand.press("ctrl+q")
    await hand.press("s")
    await hand.until(lambda: has_left(hand.app), "leaving")
    assert (tmp_path / "winch.toml").read_text() == EDITED


async def test_leaving_can_drop_the_edits(hand: Hand, tmp_path: Path) -> None:
    await hand.press("ctrl+q")
    await hand.press("l")
    await hand.until(lambda: has_left(hand.app), "leaving")
    assert (tmp_path / "winch.toml").read_text() == DEMO_TEXT
    assert not (tmp_path / "winch.toml~").exists()


async def test_where_saving_first_fails_one_stays(hand: Hand, tmp_path: Path) -> None:
    (tmp_path / "winch.toml").unlink()
    (tmp_path / "winch.toml").mkdir()
    await hand.press("ctrl+q")
    await hand.press("s")
    assert isinstance(hand.app.screen, Desk)
    assert hand.message.startswith("not saved")
    assert hand.app.return_code is None


# ---- what is opened


async def test_a_file_that_cannot_be_used_is_shown_with_line_and_key_and_ends_with_two(tmp_path: Path) -> None:
    path = written(tmp_path, BRITTLE.replace("elongation = 0.01", "elongation = 20"))
    async with opened(path) as hand:
        assert isinstance(hand.app.screen, Page)
        words = "".join(hand.text.replace("│", " ").split())  # a long path is broken anywhere
        line = BRITTLE[: BRITTLE.index("elongation")].count("\n") + 1
        assert f"project.toml:{line}:material[1].elongation:found20" in words
        assert "atmost1" in words
        await hand.press("enter")
        assert hand.app.return_code == 2


async def test_a_folder_a_foreign_file_and_a_name_without_a_folder_end_with_two(tmp_path: Path) -> None:
    (tmp_path / "binary.toml").write_bytes(b"\xff\xfe\x00")
    for path in (tmp_path, tmp_path / "binary.toml", tmp_path / "none" / "x.toml"):
        async with opened(path) as hand:
            assert isinstance(hand.app.screen, Page)
            await hand.press("escape")
            assert hand.app.return_code == 2


async def test_a_file_that_does_not_exist_is_offered_as_a_new_project(tmp_path: Path) -> None:
    async with opened(tmp_path / "new.toml") as hand:
        assert "There is no file" in hand.text
        assert "start a new project in new.toml" in hand.text
        await hand.press("escape")
        assert has_left(hand.app)
    assert not (tmp_path / "new.toml").exists()
