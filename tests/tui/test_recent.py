"""The first screen where no file was named."""

from __future__ import annotations

from pathlib import Path

import pytest

from tui import state
from tui.desk import Desk
from tui.dialogs import Page
from tui.recent import Recent
from tui.starter import Starter

from .app_tools import demo_copy, opened, written
from .small_projects import BRITTLE


async def test_without_recent_projects_it_says_so_and_offers_a_new_one(tmp_path: Path) -> None:
    async with opened(None) as hand:
        assert isinstance(hand.app.screen, Recent)
        assert "No project was opened here before." in hand.text
        assert "start a new project" in hand.text
        await hand.press("enter", "down", "up")
        assert isinstance(hand.app.screen, Recent)
        await hand.press("n")
        assert isinstance(hand.app.screen, Starter)
        await hand.press("escape")
        assert hand.app.return_code == 0


async def test_recent_projects_are_opened_by_arrows_and_enter(tmp_path: Path) -> None:
    first, second = demo_copy(tmp_path, "first.toml"), written(tmp_path, BRITTLE, "second.toml")
    state.remember(first)
    state.remember(second)
    async with opened(None) as hand:
        assert hand.text.index("second.toml") < hand.text.index("first.toml")
        await hand.press("down", "enter")
        await hand.until(lambda: isinstance(hand.app.screen, Desk), "the desk")
        assert hand.document.path == first
    assert state.recent() == [first, second]


async def test_a_file_is_opened_by_its_name(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    demo_copy(tmp_path)
    monkeypatch.chdir(tmp_path)
    async with opened(None) as hand:
        await hand.press("o")
        for name in ("none.toml", "", ".", "x" * 300, "~nobody/x", "a\x00b"):
            await hand.press("ctrl+u")
            await hand.enter(name)
            assert hand.message == "there is no such file", name
        await hand.press("ctrl+u")
        await hand.enter("winch.toml")
        await hand.until(lambda: isinstance(hand.app.screen, Desk), "the desk")


async def test_an_entry_can_be_dropped_and_the_list_has_the_keys_again(tmp_path: Path) -> None:
    state.remember(demo_copy(tmp_path))
    async with opened(None) as hand:
        await hand.press("o", *"nqo", "escape")
        assert isinstance(hand.app.screen, Recent)
        await hand.press("down", "enter")
        await hand.until(lambda: isinstance(hand.app.screen, Desk), "the desk")


@pytest.mark.parametrize("key", ["q", "escape", "ctrl+q"])
async def test_it_can_be_left(key: str) -> None:
    async with opened(None) as hand:
        await hand.press(key)
        assert hand.app.return_code == 0


async def test_a_recent_project_that_broke_meanwhile_is_shown_as_such(tmp_path: Path) -> None:
    path = demo_copy(tmp_path)
    state.remember(path)
    async with opened(None) as hand:
        path.write_text("format = 1\n")
        await hand.press("enter")
        await hand.until(lambda: isinstance(hand.app.screen, Page), "the page of faults")
        assert "winch.toml" in hand.text
        await hand.press("escape")
        assert hand.app.return_code == 2


async def test_names_of_recent_projects_do_nothing_to_the_screen(tmp_path: Path) -> None:
    state.remember(demo_copy(tmp_path, "[b]x\x1b[31m.toml"))
    async with opened(None) as hand:
        assert "[b]x␛[31m.toml" in hand.text
        assert "\x1b" not in hand.text


async def test_a_new_unnamed_project_asks_for_its_name_when_saved(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    async with opened(None) as hand:
        await hand.press("n")
        await hand.enter("Winch", "1", "S355", "345", "", "normal", "1.5", "1.5", "1", "0.1", "LC01", "P01")
        await hand.press("ctrl+r")
        assert hand.message == "this project has no file to read again"
        await hand.press("ctrl+s")
        assert "save as" in hand.lines[-1]
        await hand.enter("first")
        assert hand.message == "saved first.toml"
        assert not hand.document.dirty
    assert state.recent() == [tmp_path / "first.toml"]


async def test_leaving_a_new_unnamed_project_can_name_it_save_it_and_leave(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    written(tmp_path, BRITTLE, "taken.toml")
    async with opened(None) as hand:
        await hand.press("n")
        await hand.enter("Winch", "1", "S355", "345", "", "normal", "1.5", "1.5", "1", "0.1", "LC01", "P01")
        await hand.press("ctrl+q")
        await hand.press("s")
        await hand.enter("taken")
        await hand.press("escape")  # not over another file
        assert hand.app.return_code is None
        await hand.press("ctrl+q")
        await hand.press("s")
        await hand.enter("first")
        await hand.until(lambda: hand.app.return_code == 0, "leaving")
    assert (tmp_path / "first.toml").is_file()
    assert (tmp_path / "taken.toml").read_text() == BRITTLE
