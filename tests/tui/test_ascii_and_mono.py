"""Without colour, and with ASCII only, every verdict can still be told, and nothing else reaches the screen."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest
from rich.style import Style

from engine import store
from tui import state
from tui.desk import Desk
from tui.dialogs import Page, Question
from tui.palette import MARKS, Palette

from .app_tools import DEMO, Hand, demo_copy, opened, written

FOREIGN = (
    DEMO.read_text(encoding="utf-8")
    .replace("P02 shaft at bearing", "P02 Wälzlager 荷重")
    .replace('title = "Slipway winch"', 'title = "Slipwinde — größte"')
    .replace("haul", "Zug°")
    .replace("Zug° =", '"Zug°" =')
    .replace("LC09", "Prüf9")
    .replace("Prüf9 =", '"Prüf9" =')
)
SHEETS = tuple(f"f{n}" for n in range(2, 11))


def styles(hand: Hand) -> Iterator[tuple[str, Style]]:
    """Every stretch of the screen with its style."""
    for strip in hand.app.screen._compositor.render_strips():
        for segment in strip:
            yield segment.text, segment.style or Style()


def test_every_verdict_has_a_mark_of_its_own_in_ascii() -> None:
    assert set(MARKS) == {"clear", "thin", "split", "short", "no-data"}
    assert len(set(MARKS.values())) == len(MARKS)
    assert all(len(mark) == 1 and mark.isascii() for mark in MARKS.values())


@pytest.mark.parametrize("mode", ["mono", "ansi", "colour"])
async def test_verdicts_are_told_by_their_marks_in_every_mode(tmp_path: Path, mode: str) -> None:
    async with opened(demo_copy(tmp_path), palette=Palette(mode)) as hand:  # type: ignore[arg-type]
        await hand.press("right", "right", "right", "right", "right", "right", "right", "right")
        assert hand.row("P01").endswith("+0.41")  # clear: nothing beside the number
        assert hand.row("P02").endswith("-0.04 /")
        assert hand.row("P03").endswith("+0.06 ~")
        assert " -0.22 X " in hand.row("P04")
        assert " +1.45 ? " in hand.row("P12")
        assert "2 short X  1 split /  1 thin ~  1 no data ?" in hand.lines[1]
        assert "FAILS, INCOMPLETE" in hand.lines[0]


async def test_without_colour_no_stretch_of_the_screen_has_one(tmp_path: Path) -> None:
    async with opened(demo_copy(tmp_path), palette=Palette("mono")) as hand:
        for key in (*SHEETS, "f2"):
            await hand.press(key)
            for text, style in styles(hand):
                for colour in (style.color, style.bgcolor):
                    assert colour is None or colour.is_default or grey(colour), (key, text, style)


def grey(colour: object) -> bool:
    """Whether a colour is one of grey."""
    triplet = getattr(colour, "triplet", None)
    return triplet is not None and triplet.red == triplet.green == triplet.blue


async def test_without_colour_the_cursor_is_still_seen(tmp_path: Path) -> None:
    async with opened(demo_copy(tmp_path), palette=Palette("mono")) as hand:
        await hand.press("down")
        reversed_ = [text for text, style in styles(hand) if style.reverse]
        assert [text.strip() for text in reversed_] == ["+0.00 ~"]


async def test_in_ascii_every_sheet_question_and_page_is_pure_ascii(tmp_path: Path) -> None:
    store.parse(FOREIGN)
    path = written(tmp_path, FOREIGN, "größte.toml")
    async with opened(path, palette=Palette("mono"), ascii_only=True) as hand:
        for sheet in SHEETS:
            for key in (sheet, "enter", "escape", "escape", "end"):
                await hand.press(key)
                assert hand.text.isascii(), (sheet, key, odd(hand))
        await hand.press("f2", "ctrl+home", "down", *["right"] * 8)
        assert (
            " P02 Walzlager ???? x Pruf9 " in hand.text
        )  # a wide character takes two cells, and so does its substitute
        assert "Pruf9" in hand.text
        await hand.press("r", *"äö")
        assert hand.text.isascii(), odd(hand)
        await hand.press("escape", "x", "ctrl+s")
        assert hand.message == "saved groste.toml"
        assert hand.text.isascii(), odd(hand)


async def test_in_ascii_questions_and_pages_are_too(tmp_path: Path) -> None:
    path = written(tmp_path, FOREIGN, "größte.toml")
    async with opened(path, palette=Palette("mono"), ascii_only=True) as hand:
        await hand.press("?")
        assert isinstance(hand.app.screen, Page)
        assert hand.text.isascii(), odd(hand)
        await hand.press("escape", *["right"] * 8, "X")
        assert isinstance(hand.app.screen, Question)
        assert hand.text.isascii(), odd(hand)
        await hand.press("escape")
        path.write_text("format = 1\n")
        await hand.press("ctrl+r")
        assert isinstance(hand.app.screen, Page)
        assert hand.text.isascii(), odd(hand)


async def test_in_ascii_the_first_screens_are_too(tmp_path: Path, state_home: Path) -> None:
    (state_home / "hexlipse" / "remembered.json").unlink()
    state.remember(written(tmp_path, FOREIGN, "größte.toml"))
    async with opened(None, palette=Palette("mono"), ascii_only=True) as hand:
        assert hand.text.isascii(), odd(hand)  # the caution
        await hand.press("enter")
        assert "toml" in hand.text
        assert hand.text.isascii(), odd(hand)  # the recent projects
        await hand.press("n", *"Größte", "enter")
        assert "Gro" in hand.text
        assert hand.text.isascii(), odd(hand)  # a new project


async def test_in_ascii_the_palette_of_commands_is_too(tmp_path: Path) -> None:
    async with opened(demo_copy(tmp_path), palette=Palette("mono"), ascii_only=True) as hand:
        await hand.press("ctrl+p")
        await hand.until(lambda: "The Margins sheet" in hand.text, "the palette")
        assert hand.text.isascii(), odd(hand)
        await hand.press("escape")
        await hand.until(lambda: isinstance(hand.app.screen, Desk), "the desk")


def odd(hand: Hand) -> str:
    """The lines that are not ASCII."""
    return "\n".join(line for line in hand.lines if not line.isascii())


async def test_with_all_characters_names_are_shown_as_they_are(tmp_path: Path) -> None:
    async with opened(written(tmp_path, FOREIGN)) as hand:
        assert "P02 Wälzlager…" in hand.text
        assert "Slipwinde — größte" in hand.lines[0]
        assert "│" in hand.text
