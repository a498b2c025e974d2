"""The `hexlipse` command: opens the screen, or runs a headless job."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path

import engine
import tui

from .words import CAUTION

USAGE = 2
"""Exit status for input that cannot be used."""
STATUSES = "Exit status: 0 passes and is complete, 1 fails or is not complete, 2 the input cannot be used."


def one_place() -> str | None:
    """Why the two packages do not belong together, or None: a stray `engine` of another program must not compute."""
    here, there = (Path(package.__file__ or "").resolve().parent.parent for package in (tui, engine))
    if here == there:
        return None
    return f"the packages tui ({here}) and engine ({there}) come from different places; install hexlipse anew"


def _version() -> str:
    try:
        return version("hexlipse")
    except PackageNotFoundError:
        return "(not installed)"


def _check_parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="hexlipse check",
        description="Print the margin summary of a project file.",
        epilog=f"{STATUSES} {CAUTION}",
    )
    parser.add_argument("file", metavar="FILE", help="project file (TOML)")
    parser.add_argument("--json", action="store_true", help="print one JSON object")
    parser.add_argument("--cells", action="store_true", help="every cell as well")
    return parser


def _screen_parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="hexlipse",
        description="Margins of safety of ductile metal parts by Tresca and von Mises: check points x load cases.",
        epilog=f"hexlipse check FILE prints the margin summary (see hexlipse check --help). {CAUTION}",
    )
    parser.add_argument(
        "file",
        metavar="FILE",
        nargs="?",
        help="project file; one that does not exist is offered as a new one",
    )
    parser.add_argument("--ascii", action="store_true", help="draw with ASCII characters only")
    parser.add_argument("--no-mouse", action="store_true", help="leave the mouse to the terminal")
    parser.add_argument("--version", action="version", version=f"hexlipse {_version()}")
    return parser


def main(arguments: Sequence[str] | None = None) -> None:
    """Run the command and exit with its status."""
    words = list(sys.argv[1:] if arguments is None else arguments)
    why = one_place()
    if why is not None:
        print(f"hexlipse: {why}", file=sys.stderr)
        sys.exit(USAGE)
    if words[:1] == ["check"]:
        from .check import run_check

        given = _check_parser().parse_args(words[1:])
        sys.exit(run_check(given.file, as_json=given.json, cells=given.cells))
    given = _screen_parser().parse_args(words)
    sys.exit(_run_screen(given))


def _run_screen(given: argparse.Namespace) -> int:
    why = _unfit_terminal()
    if why is not None:
        print(f"hexlipse: {why}", file=sys.stderr)
        return USAGE
    from rich.console import Console

    from .app import HexlipseApp
    from .palette import Palette, mode_for

    mode = mode_for(Console().color_system, bool(os.environ.get("NO_COLOR")))
    ascii_only = given.ascii or not _prints_lines()
    app = HexlipseApp(Path(given.file) if given.file else None, Palette(mode), ascii_only)
    app.run(mouse=not given.no_mouse)
    return app.return_code or 0


def _unfit_terminal() -> str | None:
    if not (sys.stdin.isatty() and sys.stdout.isatty()):
        return "the screen needs a terminal; hexlipse check FILE prints the margins without one"
    if os.environ.get("TERM", "") in {"", "dumb", "unknown"}:
        return (
            "this terminal says that it cannot place text (TERM is empty or dumb); hexlipse check FILE needs no screen"
        )
    return None


def _prints_lines() -> bool:
    """Whether the real stream can carry the characters that the screen draws with."""
    stream = sys.__stdout__
    try:
        "─│…".encode(stream.encoding if stream is not None and stream.encoding else "ascii")
    except (UnicodeEncodeError, LookupError):
        return False
    return True
