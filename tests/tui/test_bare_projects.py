"""Every key on every sheet of projects that lack something, have names of any length, or are large: nothing breaks."""

from __future__ import annotations

from pathlib import Path
from random import Random

import numpy as np
import pytest
from textual.binding import Binding

from engine import store
from engine.margins import compute
from tui.desk import Desk
from tui.dialogs import Page, Question
from tui.grid import Grid
from tui.sheets import ORDER

from .app_tools import DEMO, Hand, opened, written
from .small_projects import (
    BRITTLE,
    CATEGORY,
    EMPTY,
    LOAD,
    NO_STRESS,
    NOT_CHECKED,
    ONLY_CASES,
    ONLY_POINTS,
    UNCOMPUTED,
    huge_names,
    square,
)

BARE = {
    "title only": EMPTY,
    "only cases": ONLY_CASES,
    "only points": ONLY_POINTS,
    "not computed yet": UNCOMPUTED,
    "names of 300 wide letters": huge_names("荷" * 300),
}
MORE = {
    "no stress": NO_STRESS,
    "only a load and a category": EMPTY + CATEGORY + LOAD,
    "no case checked": NOT_CHECKED,
    "a caution": BRITTLE,
    "names that are marks": huge_names("[b]'\\\\\u202e"),
    "the demo": DEMO.read_text(encoding="utf-8"),
}
"""For the long form of these tests."""
BOUND = [key for b in (*Grid.BINDINGS, *Desk.BINDINGS) if isinstance(b, Binding) for key in b.key.split(",")]
OPENING = {"question_mark", "f1", "ctrl+p", "ctrl+q", "ctrl+r", "ctrl+s", "S", "x", "X"}
"""Keys that may put something on top of the desk, or touch the file."""
AT_ONCE = [key for key in BOUND if key not in OPENING | {"ctrl+z"} and not key.startswith("f")]
LEADING_AWAY = {"enter", "g", "G", "n", "N", "left_square_bracket", "right_square_bracket", "escape"}


async def back_to_the_desk(hand: Hand) -> None:
    """Out of whatever a key has opened, by the ways that lose nothing."""
    while isinstance(hand.app.screen, Page | Question) or hand.desk.line.typing:
        await hand.press("escape")


@pytest.mark.parametrize(
    "text",
    [*BARE.values(), *(pytest.param(text, marks=pytest.mark.soak) for text in MORE.values())],
    ids=[*BARE, *MORE],
)
async def test_every_key_on_every_sheet_does_no_harm(tmp_path: Path, text: str) -> None:
    path = written(tmp_path, text)
    before = store.load(path)
    async with opened(path) as hand:
        for number, _, _ in ORDER:
            burst = [f"f{number}", "end", *"5", "enter", "escape"]
            for key in AT_ONCE:
                burst += [key, "escape", f"f{number}"] if key in LEADING_AWAY else [key, "escape"]
            await hand.press(*burst, "x", "escape", "X")
            await back_to_the_desk(hand)
            assert all(len(line) <= 80 for line in hand.lines)
        for key in ("question_mark", "f1", "ctrl+r", "S", "ctrl+q"):
            if key != "ctrl+q" or hand.document.dirty:
                await hand.press(key)
                await back_to_the_desk(hand)
        np.testing.assert_array_equal(hand.document.table.values, compute(hand.project).values)
        while hand.document.undo() is not None:
            pass
        assert hand.project.same(before)


@pytest.mark.parametrize("name", ["title only", "not computed yet", "names that are marks"])
async def test_a_bare_project_is_saved_as_it_was_read(tmp_path: Path, name: str) -> None:
    path = written(tmp_path, text := (BARE | MORE)[name])
    async with opened(path, (200, 60)) as hand:
        await hand.press("f7", "down")
        await hand.entry("enter", text="Z")
        await hand.press("ctrl+s")
        assert hand.message == "saved project.toml"
    assert path.read_text(encoding="utf-8").replace('revision = "Z"\n', "") == text


async def test_a_name_of_any_length_leaves_the_entry_and_its_refusal_to_be_seen(tmp_path: Path) -> None:
    async with opened(written(tmp_path, huge_names("荷" * 300))) as hand:
        await hand.press("f3", *"12.5")
        assert "12.5" in hand.lines[-1]
        await hand.press(*" MPa", "enter")
        assert "a force in N is expected" in hand.text
        assert "2.5 MPa" in hand.lines[-1]


async def test_of_a_long_entry_the_part_at_the_cursor_is_seen_be_it_wide_or_not(tmp_path: Path) -> None:
    async with opened(written(tmp_path, NO_STRESS)) as hand:
        await hand.press("f4", *["right"] * 7, "enter")
        for typed in ("x" * 90, "荷重" * 35):
            await hand.press("end", "ctrl+u", *typed, *"end")
            assert hand.lines[-1].endswith("end"), typed
            await hand.press("home")
            assert hand.lines[-1].startswith(f" P01 label: {typed[:20]}")


async def test_what_names_hold_does_nothing_to_the_screen(tmp_path: Path) -> None:
    async with opened(written(tmp_path, huge_names("[red]\u202e\u200b{x}"))) as hand:
        for key in ("f2", "f3", "f4", "f9", "f10"):
            await hand.press(key)
            assert all(c.isprintable() for line in hand.lines for c in line)
        assert "[red]" in hand.text


async def test_a_project_of_300_by_300_opens_moves_and_is_edited(tmp_path: Path) -> None:
    async with opened(written(tmp_path, square(300, 300))) as hand:
        assert "worst: below and right" in hand.lines[2]
        await hand.press("g")
        assert hand.desk.grid.cursor == (299, 299)
        await hand.press(*["up"] * 40, *["pageup"] * 3, *["left"] * 20, "ctrl+home", "ctrl+end", "n", "N")
        await hand.press("f3", "ctrl+home", *"500000", "enter")
        await hand.until(lambda: "LC000 haul 1000 -> 500000" in hand.message, "the edit")
        assert hand.document.table.envelope.of_project().case == 0
        assert compute(hand.project).envelope.of_project().case == 0
        await hand.press("u", "f2", "ctrl+home", "x", "u")
        await hand.until(lambda: hand.message == "undone: delete point P000", "the undo")
        assert hand.project.same(store.parse(square(300, 300)))


@pytest.mark.soak
@pytest.mark.parametrize("seed", range(20))
async def test_any_keys_whatever_leave_a_table_as_computed_anew(tmp_path: Path, seed: int) -> None:
    random = Random(seed)
    texts = ["60000", "1.35*42", "12 kN", "-1", "P01", "LC01 = 1", "rest", "荷重", "", "both", "0", "(((", "1/0", "1 2"]
    path = written(tmp_path, random.choice([*BARE.values(), *MORE.values()]))
    async with opened(path, random.choice([(80, 24), (200, 60), (40, 10), (20, 6)])) as hand:
        for _ in range(80):
            keys = [random.choice(BOUND) for _ in range(random.choice([1, 1, 3]))]
            await hand.press(*([*random.choice(texts), "enter"] if random.random() < 0.3 else keys))
            if hand.app.return_code is not None:
                return
            assert any(isinstance(screen, Desk) for screen in hand.app.screen_stack)
        np.testing.assert_array_equal(hand.document.table.values, compute(hand.project).values)
