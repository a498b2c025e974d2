"""The whole program without a terminal: opened on a file, typed at, its screen read as lines of text."""

from __future__ import annotations

import asyncio
import shutil
import unicodedata
from collections.abc import AsyncIterator, Callable
from contextlib import asynccontextmanager
from pathlib import Path
from time import monotonic
from typing import cast

from textual import events
from textual.pilot import Pilot

from engine.project import Project
from tui.app import HexlipseApp
from tui.desk import Desk
from tui.document import Document
from tui.entry_line import EntryLine
from tui.palette import Palette

DEMO = Path(__file__).parents[2] / "projects" / "slipway-winch.toml"
PATIENCE = 10.0
"""Seconds until a condition that never comes is a failure."""
ROUNDS = 4
"""A key goes from the application to the grid, over the screen and back: that often all queues are emptied."""


def demo_copy(folder: Path, name: str = "winch.toml") -> Path:
    """The demo project under another name, to be written to."""
    return Path(shutil.copyfile(DEMO, folder / name))


def written(folder: Path, text: str, name: str = "project.toml") -> Path:
    """A file of this text."""
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return path


def key_event(key: str) -> events.Key:
    """The event that a terminal's driver makes of a key: "g", "ctrl+s", "escape", or one character of any kind."""
    if len(key) > 1 or key.isalnum():
        return events.Key(key, None)
    name = "space" if key == " " else unicodedata.name(key, "").lower().replace("-", "_").replace(" ", "_")
    return events.Key({"plus_sign": "plus", "hyphen_minus": "minus"}.get(name, name) or key, key)


class Hand:
    """A person before an open program."""

    def __init__(self, app: HexlipseApp, pilot: Pilot[None]) -> None:
        self.app, self.pilot = app, pilot

    @property
    def desk(self) -> Desk:
        """The desk, which must be the screen on top."""
        assert isinstance(self.app.screen, Desk), self.text
        return self.app.screen

    @property
    def document(self) -> Document:
        """The document on the desk below whatever stands on it."""
        return next(screen.document for screen in reversed(self.app.screen_stack) if isinstance(screen, Desk))

    @property
    def project(self) -> Project:
        """Its project."""
        return self.document.project

    @property
    def message(self) -> str:
        """What the last line says."""
        return self.app.screen.query_one(EntryLine).message

    @property
    def lines(self) -> list[str]:
        """The screen, without blanks at line ends."""
        return screen_text(self.app).splitlines()

    @property
    def text(self) -> str:
        """The same in one."""
        return screen_text(self.app)

    def row(self, name: str) -> str:
        """The line of the screen that begins with a name."""
        return next(line for line in self.lines if line.strip().startswith(name))

    async def settle(self) -> None:
        """Until all keys that were pressed have done what they do at once."""
        for _ in range(ROUNDS - 1):
            await self.pilot._wait_for_screen()  # what pause() does, without drawing each time
        await self.pilot.pause(0)

    async def press(self, *keys: str) -> None:
        """Press keys one right after the other, as fast as a paste; then let them be done."""
        for key in keys:
            self.app.post_message(key_event(key))
        await self.settle()

    async def type(self, text: str) -> None:
        """Type a text."""
        await self.press(*text)

    async def enter(self, *texts: str) -> None:
        """Type each text and take it with Enter."""
        for text in texts:
            await self.press(*text, "enter")

    async def paste(self, text: str) -> None:
        """Paste a text, as a terminal with bracketed paste gives it."""
        self.app.post_message(events.Paste(text))
        await self.settle()

    async def until(self, condition: Callable[[], object], what: str = "") -> None:
        """Wait until a condition holds; fails with the screen when it does not come."""
        deadline = monotonic() + PATIENCE
        while not condition():
            assert monotonic() < deadline, f"{what or 'this'} did not come:\n{self.text}"
            await asyncio.sleep(0.005)
        await self.settle()

    async def undo_all(self) -> None:
        """Take every edit back by its key, and come to the first cell of the Margins sheet."""
        await self.press(*"u" * len(self.document.history.done), "f2", "ctrl+home")
        assert not self.document.dirty, self.text

    async def entry(self, *keys: str, text: str) -> None:
        """Press keys that open an entry, clear it, type a text and take it."""
        await self.press(*keys, "ctrl+e", "ctrl+u")
        await self.enter(text)


def screen_text(app: HexlipseApp) -> str:
    """The screen as lines of text, without blanks at line ends."""
    strips = app.screen._compositor.render_strips()
    return "\n".join("".join(segment.text for segment in strip).rstrip() for strip in strips)


@asynccontextmanager
async def opened(
    path: Path | None,
    size: tuple[int, int] = (80, 24),
    palette: Palette | None = None,
    ascii_only: bool = False,
) -> AsyncIterator[Hand]:
    """The program started on a file, or on none. Whatever it raises while open is raised at the end."""
    app = HexlipseApp(path, palette, ascii_only)
    async with app.run_test(size=size) as pilot:
        hand = Hand(app, cast("Pilot[None]", pilot))
        await hand.settle()
        yield hand
