"""The `hexlipse` command: its options, and what it refuses before anything is drawn."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from types import ModuleType

import pytest

import tui
from tui import command
from tui.app import HexlipseApp
from tui.command import main
from tui.words import CAUTION

from .app_tools import DEMO, written
from .test_check import COMMAND, PASSING

Printed = Callable[..., tuple[int, str, str]]


@pytest.fixture(autouse=True)
def shown(monkeypatch: pytest.MonkeyPatch) -> list[tuple[HexlipseApp, bool]]:
    """The screens that were run, each with whether it takes the mouse; none is really opened."""
    found: list[tuple[HexlipseApp, bool]] = []
    monkeypatch.setattr(HexlipseApp, "run", lambda app, mouse=True: found.append((app, mouse)))
    return found


def at_a_terminal(monkeypatch: pytest.MonkeyPatch, term: str = "xterm-256color") -> None:
    """Make the streams those of a terminal."""
    monkeypatch.setattr(sys.stdin, "isatty", lambda: True)
    monkeypatch.setattr(sys.stdout, "isatty", lambda: True)
    monkeypatch.setenv("TERM", term)


@pytest.fixture
def run(capsys: pytest.CaptureFixture[str]) -> Printed:
    """Runs the command; gives back status, output and messages."""

    def running(*words: str) -> tuple[int, str, str]:
        with pytest.raises(SystemExit) as ended:
            main(list(words))
        printed = capsys.readouterr()
        return int(ended.value.code or 0), printed.out, printed.err

    return running


def test_help_says_what_it_is_for_and_carries_the_caution(run: Printed) -> None:
    for words in (["--help"], ["-h"], ["check", "--help"]):
        status, out, err = run(*words)
        assert (status, err) == (0, "")
        assert CAUTION in " ".join(out.split())
        assert "FILE" in out
    assert "Exit status: 0 passes" in " ".join(out.split())


def test_version_is_that_of_the_package(run: Printed) -> None:
    status, out, _ = run("--version")
    assert status == 0
    assert out.startswith("hexlipse ")
    try:
        installed = version("hexlipse")
    except PackageNotFoundError:
        installed = "(not installed)"
    assert out.strip() == f"hexlipse {installed}"


def test_the_version_is_said_where_nothing_is_installed(run: Printed, monkeypatch: pytest.MonkeyPatch) -> None:
    def missing(name: str) -> str:
        raise PackageNotFoundError(name)

    monkeypatch.setattr(command, "version", missing)
    assert run("--version")[1] == "hexlipse (not installed)\n"


def test_check_takes_its_options_in_any_order(run: Printed, tmp_path: Path) -> None:
    path = str(written(tmp_path, PASSING))
    assert run("check", path)[0] == 0
    assert run("check", "--json", path)[1].startswith("{")
    assert '"cells"' in run("check", path, "--cells", "--json")[1]
    assert run("check", str(DEMO))[0] == 1


@pytest.mark.parametrize(
    "words", [["check"], ["check", "a", "b"], ["check", "--jsn", "a"], ["--colour"], ["a.toml", "b.toml"]]
)
def test_a_wrong_call_ends_with_two_and_shows_how_it_is_called(run: Printed, words: list[str]) -> None:
    status, out, err = run(*words)
    assert (status, out) == (2, "")
    assert err.startswith("usage: hexlipse")


@pytest.mark.parametrize("words", [[], ["winch.toml"], ["--ascii", "--no-mouse", "winch.toml"]])
def test_without_a_terminal_the_screen_is_refused_with_a_way_out(
    run: Printed, shown: list[tuple[HexlipseApp, bool]], words: list[str]
) -> None:
    status, out, err = run(*words)
    assert (status, out, shown) == (2, "", [])
    assert "needs a terminal" in err
    assert "hexlipse check FILE" in err


@pytest.mark.parametrize("term", ["dumb", "", "unknown", None])
def test_a_terminal_that_cannot_place_text_is_refused(
    run: Printed, shown: list[tuple[HexlipseApp, bool]], monkeypatch: pytest.MonkeyPatch, term: str | None
) -> None:
    at_a_terminal(monkeypatch, term or "")
    if term is None:
        monkeypatch.delenv("TERM")
    status, out, err = run("winch.toml")
    assert (status, out, shown) == (2, "", [])
    assert "TERM" in err
    assert "hexlipse check FILE" in err


def test_on_a_terminal_the_screen_is_run_as_the_options_say(
    run: Printed, shown: list[tuple[HexlipseApp, bool]], monkeypatch: pytest.MonkeyPatch
) -> None:
    at_a_terminal(monkeypatch)
    assert run("winch.toml")[0] == 0
    assert run("--no-mouse", "--ascii")[0] == 0
    (first, mouse), (second, no_mouse) = shown
    assert (first._path, mouse) == (Path("winch.toml"), True)
    assert (second._path, second._ascii, no_mouse) == (None, True, False)


@pytest.mark.parametrize(("variable", "mode"), [("NO_COLOR", "mono"), ("TEXTUAL_NOTHING", "colour")])
def test_no_color_is_heeded(
    run: Printed, shown: list[tuple[HexlipseApp, bool]], monkeypatch: pytest.MonkeyPatch, variable: str, mode: str
) -> None:
    at_a_terminal(monkeypatch)
    monkeypatch.delenv("NO_COLOR", raising=False)
    monkeypatch.setenv(variable, "1")
    run("winch.toml")
    assert shown[0][0]._palette.mode == mode


@pytest.mark.parametrize(
    ("encoding", "whole"), [("utf-8", True), ("ascii", False), ("latin-1", False), ("none", False)]
)
def test_lines_are_drawn_only_where_the_real_stream_carries_them(
    monkeypatch: pytest.MonkeyPatch, encoding: str, whole: bool
) -> None:
    class Stream:
        pass

    stream = Stream()
    stream.encoding = encoding  # type: ignore[attr-defined]
    monkeypatch.setattr(sys, "__stdout__", stream)
    assert command._prints_lines() is whole


def test_packages_of_different_places_are_refused(
    run: Printed, monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    assert command.one_place() is None
    stray = ModuleType("engine")
    stray.__file__ = str(tmp_path / "engine" / "__init__.py")
    monkeypatch.setattr(command, "engine", stray)
    status, _, err = run("check", str(DEMO))
    assert status == 2
    assert "come from different places" in err
    assert str(tmp_path) in err


def test_as_a_program_it_runs_from_any_folder_without_writing_there(tmp_path: Path) -> None:
    ended = subprocess.run(
        [*COMMAND, "--version"], cwd=tmp_path, capture_output=True, timeout=60, stdin=subprocess.DEVNULL
    )
    assert ended.returncode == 0
    assert ended.stdout.startswith(b"hexlipse ")
    assert ended.stderr == b""
    assert [path.name for path in tmp_path.iterdir()] == ["state"]  # what the tests themselves remember


def test_the_start_imports_neither_scipy_nor_the_screen_for_a_check() -> None:
    code = (
        f"import sys; sys.path.insert(0, {str(Path(tui.__file__).parents[1])!r}); import tui.check; print(*sys.modules)"
    )
    ended = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, timeout=60)
    loaded = set(ended.stdout.split())
    assert "tui.check" in loaded
    assert not loaded & {"scipy", "textual", "tui.app", "tui.desk"}
