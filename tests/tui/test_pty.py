"""The program through a real pseudo-terminal, as a person over SSH has it."""

from __future__ import annotations

import signal
from pathlib import Path

from engine import store

from .app_tools import DEMO, demo_copy, written
from .pty import Terminal
from .small_projects import BRITTLE
from .test_check import COMMAND

PYTHON_TRACE = "Traceback"


def hexlipse(path: Path, size: tuple[int, int] = (80, 24), *words: str, **env: str) -> Terminal:
    return Terminal([*COMMAND, *words, str(path)], size, env, path.parent)


def test_a_load_is_edited_the_governing_case_changes_and_the_file_differs_in_one_line(tmp_path: Path) -> None:
    path = demo_copy(tmp_path)
    with hexlipse(path) as terminal:
        terminal.until("FAILS, INCOMPLETE", "2 short X  1 split /", "? keys")
        assert terminal.row("P02").split()[4:9] == ["-0.04", "/", "LC09", "yield", "Tresca│"]
        terminal.press("f3")
        terminal.until("magnitudes; least")
        terminal.press(*["down"] * 8, *"60000")
        terminal.until("LC09 haul (N): 60000", "would be", "0 split /")
        terminal.press("enter")
        terminal.until("LC09 haul 75000 -> 60000", "rev B *")
        terminal.press("f2")
        terminal.until("point   ")
        assert terminal.row("P02").split()[4:9] == ["+0.00", "~", "LC01", "yield", "Tresca│"]
        terminal.press("ctrl+s")
        terminal.until("saved winch.toml")
        terminal.press("ctrl+q")
        assert terminal.ended() == 0
        assert PYTHON_TRACE not in terminal.text
    assert store.load(path).cases[8].loads["haul"] == 60000.0
    before, after = DEMO.read_text().splitlines(), path.read_text().splitlines()
    assert [pair for pair in zip(before, after, strict=True) if pair[0] != pair[1]] == [
        ("loads = { haul = 75000.0, dead = 1.0 }", "loads = { haul = 60000.0, dead = 1.0 }")
    ]
    assert (tmp_path / "winch.toml~").read_text() == DEMO.read_text()


def test_small_large_and_resized_screens_show_whole_columns(tmp_path: Path) -> None:
    with hexlipse(demo_copy(tmp_path)) as terminal:
        terminal.until("columns 1-3 of 18", "Governs", "? keys")
        assert terminal.row("P01").split()[-3:] == ["+0.47", "+0.47", "+3.41"]
        terminal.resize(200, 60)
        terminal.until("columns 1-14 of 18", "P02 shaft at bearing ")
        assert len(terminal.row("P01").split("│")[1].split()) == 14
        terminal.resize(80, 24)
        terminal.until("columns 1-3 of 18", "? keys", gone="columns 1-14")
        assert terminal.row("P01").split()[-3:] == ["+0.47", "+0.47", "+3.41"]


def test_an_unusable_file_shows_a_page_and_ends_with_two(tmp_path: Path) -> None:
    path = written(tmp_path, BRITTLE.replace("yield = 100.0", "yeild = 100.0"))
    with hexlipse(path) as terminal:
        terminal.until("cannot be used", 'did you mean "yield"')
        assert PYTHON_TRACE not in terminal.text
        terminal.press("q")
        assert terminal.ended() == 2
        assert PYTHON_TRACE not in terminal.text


def test_killed_while_it_saves_leaves_the_file_whole(tmp_path: Path) -> None:
    path = demo_copy(tmp_path)
    with hexlipse(path) as terminal:
        terminal.until("? keys")
        terminal.press("f3", *["down"] * 8, *"60000", "enter", "ctrl+s")
        terminal.until("60000")
        terminal.signal(signal.SIGKILL)
        assert terminal.ended() == -signal.SIGKILL
    assert store.load(path).cases[8].loads["haul"] in {60000.0, 75000.0}
    assert path.read_text() in {DEMO.read_text(), DEMO.read_text().replace("haul = 75000.0", "haul = 60000.0")}


def test_a_terminal_without_colour_that_knows_ascii_only_gets_nothing_else(tmp_path: Path) -> None:
    narrow = {"NO_COLOR": "1", "LC_ALL": "POSIX", "LANG": "POSIX", "PYTHONUTF8": "0", "PYTHONIOENCODING": "ascii"}
    with hexlipse(demo_copy(tmp_path), (80, 24), "--no-mouse", **narrow) as terminal:
        terminal.until("FAILS, INCOMPLETE", "P01 shaft midsp.", "-0.04 /", "? keys")
        colours = {cell.fg for line in terminal.screen.buffer.values() for cell in line.values()}
        assert all(colour == "default" or len({colour[:2], colour[2:4], colour[4:]}) == 1 for colour in colours), (
            colours
        )
        terminal.press("?")
        terminal.until("The Margins sheet")
        terminal.press("q", "ctrl+q")
        assert terminal.ended() == 0
        assert terminal.raw.isascii()
        assert b"\x1b[?1000h" not in terminal.raw  # the mouse is the terminal's
