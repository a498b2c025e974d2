"""The desk by its keys: sheets, moving about, what the cells show, help, the palette, the first start."""

from __future__ import annotations

from collections.abc import AsyncIterator
from pathlib import Path

import pytest
from textual.binding import Binding
from textual.widgets import OptionList

from tui import state
from tui.app import Commands
from tui.desk import Desk
from tui.dialogs import Page, Question
from tui.entry_line import KEYS
from tui.grid import Grid
from tui.help import help_text, spelled
from tui.sheets import ORDER
from tui.words import CAUTION

from .app_tools import Hand, demo_copy, opened


@pytest.fixture
async def hand(tmp_path: Path) -> AsyncIterator[Hand]:
    """The demo on a screen of 80 x 24."""
    async with opened(demo_copy(tmp_path)) as found:
        yield found


# ---- the first look


async def test_the_state_of_the_project_is_said_without_a_key(hand: Hand) -> None:
    first, second, third, *_, last = hand.lines
    assert "Slipway winch  rev B" in first
    assert "FAILS, INCOMPLETE" in first
    assert "accepted: both theories" in first
    assert second.split("  ")[0:5] == [" 2 short X", "1 split /", "1 thin ~", "1 no data ?", "7 clear"]
    assert "1 blocks, 2 notes" in second
    assert "worse of both theories" in third
    assert "columns 1-3 of 18, worst: right" in third
    assert "? keys" in last
    assert "Governs" in hand.lines[-2]
    assert "P11 brake cyl bore in LC07, yield" in hand.lines[-2]


async def test_every_point_is_named_with_its_least_margin_case_and_theory(hand: Hand) -> None:
    assert hand.row("P02").split()[4:9] == ["-0.04", "/", "LC09", "yield", "Tresca│"]
    assert hand.row("least in case").split()[-4:] == ["~", "+0.00", "~", "+2.00"]


async def test_at_any_size_nothing_is_wider_than_the_screen(hand: Hand) -> None:
    for width, height in ((120, 40), (40, 12), (20, 6), (1, 1)):
        await hand.pilot.resize_terminal(width, height)
        for key in ("f3", "f2", "?", "escape"):
            await hand.press(key)
            assert len(hand.lines) <= height
            assert all(len(line) <= width for line in hand.lines)


async def test_a_resize_draws_anew(hand: Hand) -> None:
    await hand.pilot.resize_terminal(200, 60)
    await hand.settle()
    assert "columns 1-14 of 18" in hand.text
    assert "P01 shaft midspan " in hand.text
    await hand.pilot.resize_terminal(80, 24)
    await hand.settle()
    assert "columns 1-3 of 18" in hand.text
    assert len(hand.lines[2]) <= 80


# ---- sheets


async def test_a_function_key_opens_its_sheet(hand: Hand) -> None:
    for number, key, _ in reversed(ORDER):
        await hand.press(f"f{number}")
        assert hand.desk.sheet.key == key
        assert hand.lines[2].strip()


async def test_brackets_go_through_all_sheets_and_come_round(hand: Hand) -> None:
    met = []
    for _ in ORDER:
        met.append(hand.desk.sheet.key)
        await hand.press("]")
    assert met == [key for _, key, _ in ORDER]
    assert hand.desk.sheet.key == "margins"
    await hand.press("[")
    assert hand.desk.sheet.key == ORDER[-1][1]


async def test_a_sheet_is_found_as_it_was_left(hand: Hand) -> None:
    await hand.press("f3", *["down"] * 8, "right", "f2", "f3")
    assert hand.desk.grid.cursor == (8, 1)


async def test_from_a_points_rows_brackets_and_escape_lead_back(hand: Hand) -> None:
    for back, key in (("escape", "margins"), ("]", "loads"), ("[", ORDER[-1][1])):
        await hand.press("f2", "ctrl+home", *["down"] * 11, "enter")
        assert hand.desk.sheet.key == "stress"
        await hand.press(back)
        assert hand.desk.sheet.key == key


# ---- moving


async def test_moving_keys_move_and_the_cell_is_said_below(hand: Hand) -> None:
    for keys, place in (
        (["down"], (1, 0)),
        (["right"], (0, 1)),
        (["down", "down", "up"], (1, 0)),
        (["right", "right", "left"], (0, 1)),
        (["end"], (0, 17)),
        (["end", "home"], (0, 0)),
        (["ctrl+end"], (11, 17)),
        (["ctrl+end", "ctrl+home"], (0, 0)),
        (["pagedown"], (11, 0)),
        (["ctrl+end", "pageup"], (0, 17)),
    ):
        await hand.press("ctrl+home", *keys)
        assert hand.desk.grid.cursor == place, keys
        here = next(line for line in hand.lines if line.startswith(" Here"))
        assert f"P{place[0] + 1:02d}" in here
        assert f"LC{place[1] + 1:02d}" in here


async def test_shift_and_arrows_select(hand: Hand) -> None:
    await hand.press("down", "shift+down", "shift+right")
    assert tuple(hand.desk.grid.span) == (1, 2, 0, 1)


async def test_g_goes_to_the_governing_cell_from_any_sheet(hand: Hand) -> None:
    for sheet in ("f2", "f3", "f7"):
        await hand.press(sheet, "g")
        assert hand.desk.sheet.key == "margins"
        assert hand.desk.grid.cursor == (10, 6)
    assert "worst: in view" in hand.lines[2]


async def test_capital_g_goes_to_the_governing_cell_of_the_row(hand: Hand) -> None:
    await hand.press("down", "down", "G")
    assert hand.desk.grid.cursor == (2, 8)  # P03 in LC09
    await hand.press("f3", "G")
    assert "Margins sheet: F2" in hand.message


async def test_n_walks_through_the_cells_in_trouble_worst_first(hand: Hand) -> None:
    await hand.press("n")
    assert hand.desk.grid.cursor == (3, 6)  # P04 LC07, short
    assert hand.message == "cell in trouble 1 of 18"
    await hand.press("n")
    assert hand.desk.grid.cursor == (10, 6)  # P11 LC07, short
    await hand.press("n")
    assert hand.desk.grid.cursor == (1, 8)  # P02 LC09, split
    await hand.press("N", "N", "N")
    assert hand.message == "cell in trouble 18 of 18"
    assert hand.desk.grid.cursor == (11, 9)  # P12 LC10, without data
    await hand.press("f5", "n")
    assert hand.desk.sheet.key == "margins"


# ---- what the cells show


async def test_t_l_and_q_change_what_the_cells_show_and_the_third_line_says_it(hand: Hand) -> None:
    def says() -> str:
        return hand.lines[2].strip().split("  ")[0]

    await hand.press("down")
    assert hand.row("P02").endswith("+0.00 ~   +0.00 ~   +2.00")
    await hand.press("t", "t")
    assert says() == "margin: von Mises, all limits"
    assert hand.row("P02").endswith("+0.04 ~   +0.04 ~   +2.14")
    await hand.press("l", "l")
    assert says() == "margin: von Mises, ultimate"
    await hand.press("q")
    assert says() == "utilisation: von Mises, ultimate"
    await hand.press("q")
    assert says() == "equivalent stress in MPa: von Mises"
    await hand.press("t", "t", "l", "q")
    assert says() == "margin: worse of both theories, all limits"


async def test_elsewhere_these_keys_say_where_they_belong(hand: Hand) -> None:
    await hand.press("f3")
    for key in "tlq":
        await hand.press("escape", key)
        assert hand.message == "that is a key of the Margins sheet: F2"


# ---- Enter


async def test_enter_on_a_linear_cell_opens_the_loads_of_its_case_and_says_which(hand: Hand) -> None:
    await hand.press(*["right"] * 8, "enter")
    assert hand.desk.sheet.key == "loads"
    assert hand.desk.sheet.row_name(hand.desk.grid.cursor[0]) == "LC09"
    assert "linear: the loads of LC09 make the stress of P01 shaft midspan" in hand.lines[-1]


async def test_enter_on_a_direct_cell_opens_the_points_rows_and_says_which(hand: Hand) -> None:
    await hand.press(*["down"] * 11, *["right"] * 8, "enter")
    assert hand.desk.sheet.key == "stress"
    assert hand.desk.sheet.row_name(hand.desk.grid.cursor[0]) == "LC09"
    assert "direct: the stress of P12 bed anchor FE in LC09" in hand.lines[-1]


async def test_enter_on_the_rows_of_a_point_opens_them(hand: Hand) -> None:
    await hand.press("f4", "right", "right", "right", "enter")
    assert hand.desk.sheet.key == "per-load"
    assert "P01 shaft midspan: stress in MPa per unit of the load" in hand.lines[2]
    await hand.press("escape", "f4", "right", "enter")
    assert hand.desk.sheet.key == "stress"


# ---- help and the palette


async def test_the_page_of_keys_lists_every_binding_and_leads_back(hand: Hand) -> None:
    for key in ("?", "f1"):
        await hand.press(key)
        assert isinstance(hand.app.screen, Page)
        assert "The Margins sheet" in hand.text
        assert "esc closes" in hand.text
        await hand.press("escape")
        assert isinstance(hand.app.screen, Desk)


async def test_the_page_of_keys_scrolls_to_its_end(hand: Hand) -> None:
    await hand.press("?", *["pagedown"] * 10)
    assert "Local codes" in hand.text.replace("\n", " ")
    await hand.press(*["pageup"] * 10, "down", "down", "up")
    assert "F2 " in hand.text
    await hand.press("enter")
    assert isinstance(hand.app.screen, Desk)


def test_help_is_made_from_the_bindings(hand: Hand) -> None:
    text = help_text(hand.desk).plain
    for binding in (*Desk.BINDINGS, *Grid.BINDINGS):
        assert isinstance(binding, Binding)
        assert binding.id, binding
        assert binding.tooltip, binding
        assert any(
            line.split() == [*spelled(binding.key).split(), *binding.tooltip.split()] for line in text.splitlines()
        )
    for _, words in KEYS:
        assert words in text
    assert CAUTION in text


def test_no_key_is_bound_twice() -> None:
    keys = [key for binding in (*Desk.BINDINGS, *Grid.BINDINGS) for key in binding.key.split(",")]  # type: ignore[union-attr]
    assert len(keys) == len(set(keys))


async def test_the_palette_lists_every_command_by_a_plain_name(hand: Hand) -> None:
    await hand.press("ctrl+p")
    await hand.until(lambda: "To the governing cell" in hand.text or "The Margins sheet" in hand.text, "the palette")
    listed = "\n".join(str(option.prompt) for option in hand.app.screen.query_one(OptionList).options)
    for binding in Desk.BINDINGS:
        assert isinstance(binding, Binding)
        assert f"{binding.description}\n{binding.tooltip}" in listed


async def test_a_command_of_the_palette_does_what_its_key_does(hand: Hand) -> None:
    await hand.press("ctrl+p")
    await hand.type("governing cell")
    await hand.until(lambda: "To the governing cell of the project" in hand.text, "the command")
    await hand.press("enter")
    await hand.until(lambda: isinstance(hand.app.screen, Desk), "the desk")
    await hand.until(lambda: hand.desk.grid.cursor == (10, 6), "the governing cell")


async def test_enter_held_in_the_palette_runs_a_command_once(hand: Hand) -> None:
    await hand.press("ctrl+p")
    await hand.type("delete")
    await hand.until(lambda: "Delete the row's part" in hand.text, "the command")
    await hand.press("enter", "enter", "enter")
    await hand.until(lambda: hand.message == "delete point P01 shaft midspan", "the deletion")
    assert len(hand.document.history.done) == 1


async def test_escape_leaves_the_palette(hand: Hand) -> None:
    await hand.press("ctrl+p")
    await hand.until(lambda: "Search" in hand.text, "the palette")
    await hand.press("escape")
    await hand.until(lambda: isinstance(hand.app.screen, Desk), "the desk")


async def test_page_keys_in_a_palette_that_has_no_room_for_its_list_do_no_harm(hand: Hand) -> None:
    await hand.pilot.resize_terminal(40, 1)
    await hand.press("ctrl+p")
    assert isinstance(hand.app.screen, Commands)
    listed = hand.app.screen.query_one(OptionList)
    await hand.until(lambda: listed.option_count, "the palette")
    await hand.press("down", "pagedown", "pageup", "ctrl+end")
    assert isinstance(hand.app.screen, Commands)


# ---- the first start


async def test_the_first_start_shows_the_caution_and_remembers_that_it_was_read(
    tmp_path: Path, state_home: Path
) -> None:
    (state_home / "hexlipse" / "remembered.json").unlink()
    path = demo_copy(tmp_path)
    async with opened(path) as hand:
        assert isinstance(hand.app.screen, Question)
        words = " ".join(hand.text.replace("│", " ").split())
        assert CAUTION in words
        assert "buckling" in words
        await hand.press("x", "f3", "down")
        assert isinstance(hand.app.screen, Question)  # only an answer leads on
        await hand.press("enter")
        assert isinstance(hand.app.screen, Desk)
    assert state.caution_read()
    async with opened(path) as hand:
        assert isinstance(hand.app.screen, Desk)


async def test_the_first_start_can_be_left_and_asks_again(tmp_path: Path, state_home: Path) -> None:
    (state_home / "hexlipse" / "remembered.json").unlink()
    async with opened(demo_copy(tmp_path)) as hand:
        await hand.press("escape")
        assert hand.app.return_code == 0
    assert not state.caution_read()


async def test_enter_held_on_the_first_caution_closes_nothing_else(tmp_path: Path, state_home: Path) -> None:
    (state_home / "hexlipse" / "remembered.json").unlink()
    async with opened(demo_copy(tmp_path)) as hand:
        await hand.press("enter", "enter", "enter")
        assert isinstance(hand.app.screen, Desk)
