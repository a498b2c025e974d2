"""A new project from nothing to a first margin by keys only; wrong answers; going back; giving up."""

from __future__ import annotations

from pathlib import Path

import pytest

from engine import store
from tui.entry_line import EntryLine
from tui.starter import STEPS, Starter

from .app_tools import Hand, opened

ANSWERS = ["Winch", "1", "S355 16-40", "345", "470", "normal", "1.5", "1.5", "both", "0.1", "LC01, LC02", "P01, P02"]


async def begin(hand: Hand) -> None:
    """From the question whether to start a new project to its first step."""
    await hand.press("n")
    assert isinstance(hand.app.screen, Starter)


def step(hand: Hand) -> int:
    """Which step is asked, from 1."""
    line = next(line for line in hand.lines if f"of {len(STEPS)})" in line)
    return int(line.rpartition("(")[2].split()[0])


async def test_from_nothing_to_a_first_margin_by_keys_only(tmp_path: Path) -> None:
    path = tmp_path / "winch.toml"
    async with opened(path) as hand:
        await begin(hand)
        assert "Title of the project" in hand.text
        await hand.enter(*ANSWERS)
        assert "Winch *" in hand.lines[0]  # it is no file yet
        await hand.until(lambda: "2 no data" in hand.lines[1], "the desk")
        await hand.press("enter")  # P01 x LC01: nothing gives its stress
        assert hand.desk.sheet.key == "stress"
        await hand.press("enter")
        await hand.enter("100 0 0 50 0 0")
        await hand.press("escape")
        # common practice: Tresca sqrt(100^2 + 4 x 50^2) = 141.4; 345 / (1.5 x 141.4) - 1
        assert hand.row("P01").split()[1] == "+0.62"
        await hand.press("ctrl+s")
        assert hand.message == "saved winch.toml"
        await hand.press("ctrl+q")
        assert hand.app.return_code == 0
    project = store.load(path)
    assert (project.settings.title, project.settings.units, project.settings.accept) == ("Winch", "mm-N-MPa", "both")
    assert project.materials[0].ultimate == 470.0
    assert project.names("case") == ("LC01", "LC02")
    assert project.names("point") == ("P01", "P02")


async def test_at_80_by_24_every_step_shows_its_question_its_help_and_the_keys(tmp_path: Path) -> None:
    async with opened(tmp_path / "winch.toml") as hand:
        await begin(hand)
        for place, answer in enumerate(ANSWERS, 1):
            assert step(hand) == place
            assert f"{STEPS[place - 1].asks}?" in hand.text
            assert STEPS[place - 1].helps in hand.text
            assert "Enter takes the answer, esc goes back a step, ctrl+q gives up." in hand.text
            assert hand.lines[-1].startswith(f" {STEPS[place - 1].asks}:")
            await hand.enter(answer)


async def test_nothing_is_assumed_for_factors_and_strength(tmp_path: Path) -> None:
    async with opened(tmp_path / "winch.toml") as hand:
        await begin(hand)
        for place, answer in enumerate(ANSWERS, 1):
            if STEPS[place - 1].key != "ultimate":  # the one that may be left out
                await hand.press("enter")
                assert step(hand) == place, f"{STEPS[place - 1].asks} was taken without an answer"
            await hand.enter(answer)
        assert hand.project.categories[0].yield_.tresca == 1.5


WRONG = {
    "title": [" "],
    "units": ["0", "5", "mm", "metric"],
    "material": ["  "],
    "yield": ["abc", "0", "-1", "3 kN", "1,5"],
    "ultimate": ["0", "x"],
    "category": [" "],
    "tresca": ["0", "-1.5", "1.5 MPa", "one"],
    "mises": ["0", "none"],
    "accept": ["4", "mises"],
    "thin": ["-0.1", "10 %"],
    "cases": ["LC01, LC01", "LC01,, LC02", ","],
    "points": ["P01, P01", " "],
}


async def test_a_wrong_answer_is_refused_kept_and_can_be_corrected(tmp_path: Path) -> None:
    assert set(WRONG) == {found.key for found in STEPS}
    async with opened(tmp_path / "winch.toml") as hand:
        await begin(hand)
        for place, answer in enumerate(ANSWERS, 1):
            for wrong in WRONG[STEPS[place - 1].key]:
                await hand.enter(wrong)
                assert step(hand) == place, wrong
                assert len(hand.message) > 5, wrong  # says why
                assert hand.app.screen.query_one(EntryLine).text == wrong  # and keeps the text
                await hand.press("ctrl+u")
            await hand.enter(answer)
        assert hand.project.settings.title == "Winch"


async def test_escape_goes_back_a_step_with_its_answer_and_at_the_first_gives_up(tmp_path: Path) -> None:
    path = tmp_path / "winch.toml"
    async with opened(path) as hand:
        await begin(hand)
        await hand.enter("Winch", "3")
        assert step(hand) == 3
        await hand.press("escape")
        assert step(hand) == 2
        assert hand.lines[-1].endswith(" 3")  # what was typed
        await hand.press("ctrl+u")
        await hand.enter("1", "S355")
        assert "yield" in hand.text
        await hand.press("escape", "escape", "escape")
        assert step(hand) == 1
        await hand.press("ctrl+u")
        await hand.enter("Slipway", "2", "S355", "345e6")
        await hand.press("escape", "escape", "escape", "escape")
        assert step(hand) == 1
        await hand.press("escape")
        assert hand.app.return_code == 0
    assert not path.exists()


async def test_the_units_chosen_hold_for_the_strength(tmp_path: Path) -> None:
    async with opened(tmp_path / "winch.toml") as hand:
        await begin(hand)
        await hand.enter(
            *ANSWERS[:1], "in-kip-ksi", "A36", "36", "", "normal", "1.67", "1.67", "tresca", "0", "LC", "P"
        )
        assert hand.project.settings.units == "in-kip-ksi"
        assert hand.project.materials[0].yield_ == 36.0
        assert hand.project.materials[0].ultimate is None
        assert hand.project.settings.accept == "tresca"


async def test_a_strength_with_another_unit_is_converted(tmp_path: Path) -> None:
    async with opened(tmp_path / "winch.toml") as hand:
        await begin(hand)
        await hand.enter(*ANSWERS[:3], "50 ksi", *ANSWERS[4:])
        assert hand.project.materials[0].yield_ == pytest.approx(344.7378646584)  # 1 ksi = 6.894757 MPa (NIST SP 811)


async def test_it_can_be_given_up_at_any_step(tmp_path: Path) -> None:
    path = tmp_path / "winch.toml"
    async with opened(path) as hand:
        await begin(hand)
        await hand.enter(*ANSWERS[:4])
        await hand.press(*"47", "ctrl+q")
        assert hand.app.return_code == 0
    assert not path.exists()


async def test_a_new_project_asks_before_it_is_lost(tmp_path: Path) -> None:
    async with opened(tmp_path / "winch.toml") as hand:
        await begin(hand)
        await hand.enter(*ANSWERS)
        await hand.press("ctrl+q")
        assert "not saved" in hand.text
        await hand.press("s")
        await hand.until(lambda: hand.app.return_code == 0, "leaving")
    assert store.load(tmp_path / "winch.toml").settings.title == "Winch"


async def test_a_paste_answers_a_step(tmp_path: Path) -> None:
    async with opened(tmp_path / "winch.toml") as hand:
        await begin(hand)
        await hand.paste("Pasted title\nand more")
        await hand.press("enter")
        assert step(hand) == 2
        assert "Pasted title" in hand.text
