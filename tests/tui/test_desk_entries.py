"""Typing over cells: what starts an entry, what is shown meanwhile, what ends it, undo and redo."""

from __future__ import annotations

from collections.abc import AsyncIterator
from pathlib import Path

import pytest

from engine.removal import removal

from .app_tools import Hand, demo_copy, opened, written
from .small_projects import NO_STRESS

FIRST_LOOK = " 2 short X  1 split /  1 thin ~  1 no data ?  7 clear"


@pytest.fixture
async def hand(tmp_path: Path) -> AsyncIterator[Hand]:
    """The demo on a screen of 80 x 24."""
    async with opened(demo_copy(tmp_path)) as found:
        yield found


def haul(hand: Hand, case: int = 9) -> float | None:
    """Magnitude of the rope pull in a case."""
    return hand.project.cases[case - 1].loads.get("haul")


# ---- taking


async def test_keys_typed_faster_than_the_screen_follows_arrive_whole(hand: Hand) -> None:
    for key in ("f3", *["down"] * 8, *"60000", "enter", "down", *"50000", "enter"):
        hand.app.simulate_key(key)
    await hand.settle()
    assert haul(hand) == 60000.0
    assert haul(hand, 10) == 50000.0


async def test_a_digit_sign_point_or_bracket_starts_an_entry(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8)
    for typed, value in (
        ("60000", 60000.0),
        ("1.35*42000", 56700.0),
        ("12 kN", 12000.0),
        ("-5", -5.0),
        ("+5.5", 5.5),
        (".5", 0.5),
        ("(1 + 2)*3", 9.0),
    ):
        await hand.type(typed)
        assert hand.desk.line.text == typed
        assert hand.lines[-1].startswith(f" LC09 haul (N): {typed}")
        await hand.press("enter")
        assert not hand.desk.line.typing
        assert haul(hand) == value
        assert "*" in hand.lines[0]


async def test_where_no_number_is_edited_digits_start_nothing(hand: Hand) -> None:
    for sheet in ("f2", "f6", "f9"):
        await hand.press(sheet, *"12.5")
        assert not hand.desk.line.typing


async def test_in_a_cell_of_text_only_enter_starts_an_entry(hand: Hand) -> None:
    await hand.press("f4", *"12")
    assert not hand.desk.line.typing
    await hand.press("enter")
    assert hand.desk.line.text == "S275 100-150"


async def test_enter_edits_the_cell_with_the_keys_of_a_line(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8, "enter")
    assert hand.desk.line.text == "75000"
    await hand.press("home", "delete", *"8", "left", "right", "end", "backspace", *"1", "enter")
    assert haul(hand) == 85001.0
    await hand.press("enter", "home", "right", "ctrl+k", "enter")
    assert haul(hand) == 8.0
    await hand.press("enter", "ctrl+u", *"7 kN", "ctrl+w", *"N", "enter")
    assert haul(hand) == 7.0
    await hand.press("enter", "ctrl+u", "enter")
    assert haul(hand) is None


async def test_a_paste_goes_into_an_open_entry_and_nowhere_else(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8)
    await hand.paste("60000")
    assert not hand.desk.line.typing
    await hand.press("enter", "ctrl+u")
    await hand.paste("60000\n90000\x1b[31m")
    assert hand.desk.line.text == "60000"
    await hand.press("enter")
    assert haul(hand) == 60000.0


async def test_letters_in_an_entry_are_letters_not_commands(hand: Hand) -> None:
    await hand.press("f4", "end", "enter", "ctrl+u", *"gGnNtlqaAdDrRxXuUS?[]")
    assert hand.desk.line.text == "gGnNtlqaAdDrRxXuUS?[]"
    await hand.press("escape")
    assert not hand.document.dirty


async def test_no_command_gets_past_an_open_entry(hand: Hand) -> None:
    await hand.press("f3", *"12")
    keys = ("f5", "ctrl+s", "ctrl+q", "ctrl+r", "ctrl+z", "down", "tab", "ctrl+up", "pagedown", "f1", "ctrl+end")
    await hand.press(*keys, *"3")
    assert hand.desk.line.text == "123"
    assert hand.desk.sheet.key == "loads"
    assert hand.desk.grid.cursor == (0, 0)


async def test_the_palette_does_not_open_over_an_entry(hand: Hand) -> None:
    await hand.press("f3", *"12", "ctrl+p", *"3")
    assert hand.desk.line.text == "123"


async def test_an_entry_whose_cell_has_moved_meanwhile_goes_nowhere(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8, *"60000")
    hand.document.commit(removal(hand.project, "case", "LC03"))  # as a long computation that ends now would
    hand.desk.refresh_all(structure=True)
    await hand.press("enter")
    assert hand.message == "this cell has moved since: esc, then type it again"
    await hand.press("backspace")
    assert [case.loads.get("haul") for case in hand.project.cases[7:9]] == [75000.0, 60000.0]
    await hand.press("escape", *"61000", "enter")
    assert hand.project.cases[hand.desk.grid.cursor[0]].loads["haul"] == 61000.0


async def test_an_entry_whose_cell_is_gone_goes_nowhere(hand: Hand) -> None:
    await hand.press("f3", "ctrl+end", "home", *"60")
    hand.document.commit(removal(hand.project, "case", "LC18"))
    hand.desk.refresh_all(structure=True)
    await hand.press(*"000", "enter")
    assert "has moved" in hand.message


async def test_a_click_elsewhere_does_not_change_where_an_entry_goes(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8, *"60000")
    await hand.pilot.click(offset=(50, 6))
    await hand.press("enter")
    assert haul(hand) == 60000.0


async def test_the_entry_over_a_combination_is_the_cases_own_part(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 14)
    assert "60000+" in hand.row("LC15").replace(" ", "")
    assert "own part" in hand.text
    await hand.press("enter")
    assert hand.desk.line.text == ""
    await hand.type("1000")
    await hand.press("enter")
    assert haul(hand, 15) == 1000.0
    assert "61000+" in hand.row("LC15").replace(" ", "")


# ---- refusing and dropping


async def test_a_refused_entry_says_why_and_keeps_the_text(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8)
    for typed, why in (
        ("5+", "a number is missing"),
        ("12 MPa", "a force in N is expected"),
        ("1,5", "type a point for decimals"),
        ("5 % ", "percent"),
        ("12 smoots", "smoots"),
    ):
        await hand.press(*typed, "enter")
        assert hand.desk.line.text == typed
        assert "Not taken" in hand.text
        assert why in " ".join(hand.text.split())
        await hand.press("backspace")
        assert "Not taken" not in hand.text
        await hand.press("escape")
    assert haul(hand) == 75000.0
    await hand.press(*"5+", "enter", *"1", "enter")
    assert haul(hand) == 6.0


@pytest.mark.parametrize("key", ["escape", "ctrl+c"])
async def test_escape_and_ctrl_c_drop_an_entry_and_everything_looks_as_before(hand: Hand, key: str) -> None:
    await hand.press("f3", *["down"] * 8)
    before = hand.lines[:-1]
    await hand.press(*"12345", key)
    assert not hand.desk.line.typing
    assert hand.lines[:-1] == before
    assert hand.message == "dropped; nothing was changed"
    assert not hand.document.dirty
    await hand.press(key)
    assert hand.app.is_running


async def test_an_entry_that_changes_nothing_is_no_edit(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8, *"75000", "enter", "enter", "enter")
    assert not hand.document.dirty
    assert not hand.desk.line.typing


# ---- looking ahead


async def test_while_typing_the_summary_shows_what_would_become(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8)
    assert hand.lines[1].startswith(FIRST_LOOK)
    await hand.press(*"90000")
    assert "would be: FAILS, INCOMPLETE" in hand.lines[0]
    # by hand at 90 kN: P02 225 / (1.25 x 225) - 1 short, P03 split, P05 345 / (1.25 x 270) - 1 thin; P04, P11 as before
    assert hand.lines[1].startswith(" 3 short X  1 split /  1 thin ~  1 no data ?  6 clear")
    assert "while typing" in hand.lines[2]
    assert hand.row("LC09").split()[1] == "-0.04"  # the grid itself is as before
    await hand.press("escape")
    assert hand.lines[1].startswith(FIRST_LOOK)
    assert "would be" not in hand.text


async def test_with_room_the_governing_cell_as_it_would_become_is_named(tmp_path: Path) -> None:
    async with opened(demo_copy(tmp_path), (120, 40)) as hand:
        await hand.press("f3", *["down"] * 8, *"200000")
        # 200 kN: P02 has 500 by Tresca, 225 / (1.25 x 500) - 1
        assert "-0.64 P02" in hand.lines[1]
        assert hand.lines[1].endswith("LC09 yield")


async def test_what_cannot_be_read_yet_shows_what_is(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8, *"90000")
    assert "would be" in hand.text
    await hand.press(*" k")
    assert "would be" not in hand.text
    assert hand.lines[1].startswith(FIRST_LOOK)
    await hand.press("backspace")
    assert "would be" in hand.text


async def test_a_project_that_would_pass_says_so(tmp_path: Path) -> None:
    path = written(tmp_path, NO_STRESS + "[point.stress]\nLC01 = [300.0, 0, 0, 0, 0, 0]\n")
    async with opened(path) as hand:
        assert "FAILS, COMPLETE" in hand.lines[0]
        await hand.press("enter", *"100")
        assert "would be: PASSES, COMPLETE" in hand.lines[0]
        assert "0 short X" in hand.lines[1]
        await hand.press("enter")
        assert "  PASSES, COMPLETE" in hand.lines[0]


async def test_any_number_that_moves_margins_is_looked_ahead_at(hand: Hand) -> None:
    for keys, typed in (
        (["f5", "enter", "ctrl+u"], "500"),  # a stronger shaft
        (["f8", "down"], "1"),  # a smaller factor for occasional cases
        (["f7", "down", "down", "down"], "0.5"),  # what counts as thin
        (["f4", "right"], "3"),  # a point factor
    ):
        await hand.press(*keys, *typed)
        assert "would be" in hand.lines[0]
        ahead = hand.lines[1].split("clear")[0]
        assert ahead != FIRST_LOOK.split("clear")[0], keys
        await hand.press("enter")
        assert hand.lines[1].split("clear")[0] == ahead, keys
        await hand.undo_all()


# ---- undo and redo


async def test_undo_and_redo_say_what_they_did(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8, *"60000", "enter")
    assert hand.message == "LC09 haul 75000 -> 60000"
    assert hand.row("LC09").split()[1] == "+0.20"
    await hand.press("u")
    assert hand.message == "undone: LC09 haul 75000 -> 60000"
    assert hand.row("LC09").split()[1:3] == ["-0.04", "/│"]
    assert haul(hand) == 75000.0
    assert not hand.document.dirty
    await hand.press("U")
    assert hand.message == "redone: LC09 haul 75000 -> 60000"
    assert haul(hand) == 60000.0
    await hand.press("U")
    assert hand.message == "there is nothing to redo"
    await hand.press("u", "u")
    assert hand.message == "there is nothing to undo"


async def test_the_governing_case_of_a_point_changes_with_its_load_and_back(hand: Hand) -> None:
    assert "LC09" in hand.row("P02")
    await hand.press("f3", *["down"] * 8, *"60000", "enter", "f2")
    assert hand.row("P02").split()[4:7] == ["+0.00", "~", "LC01"]
    await hand.press("u")
    assert hand.row("P02").split()[4:7] == ["-0.04", "/", "LC09"]


async def test_escape_clears_the_message(hand: Hand) -> None:
    await hand.press("u")
    assert hand.message == "there is nothing to undo"
    await hand.press("escape")
    assert "? keys" in hand.message


async def test_undoing_the_part_whose_rows_are_open_leads_back_to_the_margins(hand: Hand) -> None:
    await hand.press("ctrl+end", "r", "ctrl+u")
    await hand.enter("anchor")
    await hand.press("enter")
    assert hand.desk.sheet.key == "stress"
    await hand.press("u")
    assert hand.desk.sheet.key == "margins"
    assert "P12 bed anchor FE" in hand.project.names("point")
