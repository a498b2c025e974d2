"""The terminal application: opens a project, starts a new one, asks where none is named."""

from __future__ import annotations

import os
from collections.abc import Iterable, Sequence
from contextlib import suppress
from functools import partial
from pathlib import Path
from typing import ClassVar

from rich.text import Text
from textual import events
from textual.app import App
from textual.await_complete import AwaitComplete
from textual.binding import Binding, BindingType
from textual.command import CommandPalette, DiscoveryHit, Hit, Hits, Provider
from textual.filter import LineFilter

from engine.store import ProjectError

from . import state
from .ascii_filter import AsciiFilter
from .desk import Desk
from .dialogs import Page, Question
from .document import Document
from .entry_line import EntryLine
from .file_actions import error_text
from .palette import Palette
from .recent import Recent
from .starter import Starter
from .words import CAUTION

FIRST_WORDS = (
    f"{CAUTION}\n\n"
    "Hexlipse computes margins against yield and ultimate by Tresca and von Mises from what it is given. "
    "It checks neither buckling, fatigue, fracture nor deflection."
)
"""What the first start says."""


class DeskCommands(Provider):
    """The palette of all commands, by a plain name."""

    _ran = False

    def _commands(self) -> Iterable[tuple[str, str, str]]:
        screen = self.screen
        for binding in type(screen).BINDINGS:
            if isinstance(binding, Binding):
                yield binding.description, binding.tooltip, binding.action

    async def _run(self, action: str) -> None:
        """Run one command, however often Enter comes before the palette is gone."""
        if not self._ran:
            self._ran = True
            await self.screen.run_action(action)

    async def discover(self) -> Hits:
        for name, text, action in self._commands():
            yield DiscoveryHit(name, partial(self._run, action), help=text)

    async def search(self, query: str) -> Hits:
        matcher = self.matcher(query)
        for name, text, action in self._commands():
            score = max(matcher.match(name), matcher.match(text))
            if score > 0:
                yield Hit(score, matcher.highlight(name), partial(self._run, action), help=text)


class Commands(CommandPalette):
    """The stock palette, which a page key pressed while its list is being filled would end the program from."""

    def _action_command_list(self, action: str) -> None:
        with suppress(KeyError):
            super()._action_command_list(action)

    def dismiss(self, result: None = None) -> AwaitComplete:
        """Close, once: Enter held would close the desk below too."""
        return super().dismiss(result) if self.is_current else AwaitComplete()


class HexlipseApp(App[None]):
    """The program on the screen."""

    TITLE = "Hexlipse"
    ENABLE_COMMAND_PALETTE = False  # by a binding of the desk, which comes in the order typed; the stock one overtakes
    COMMANDS: ClassVar = {DeskCommands}
    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("ctrl+q", "leave", "leave", show=False, id="app.leave", tooltip="Leave the program"),
        Binding("ctrl+c", "nothing", "drop", show=False, id="app.drop", tooltip="Nothing: ctrl+q leaves"),
    ]
    CSS = """
    Screen { background: #121212; color: #d0d0d0; }
    .-plain-ascii Question > Vertical, .-plain-ascii Page > VerticalScroll { border: ascii $foreground; }
    """

    def __init__(self, path: Path | None = None, palette: Palette | None = None, ascii_only: bool = False) -> None:
        super().__init__(ansi_color=palette is not None and palette.mode != "colour")
        self._path = path
        self._palette = palette or Palette()
        self._ascii = ascii_only
        self.animation_level = "none"
        self.set_class(ascii_only, "-plain-ascii")

    def get_line_filters(self) -> Sequence[LineFilter]:
        filters = super().get_line_filters()
        return [*filters, AsciiFilter()] if self._ascii else filters

    def on_mount(self) -> None:
        self.app_resume_signal.subscribe(self, lambda _: self.refresh())  # after fg the screen is blank
        if state.caution_read():
            self._begin()
            return
        options = [("enter", "read", "I have read this")]
        self.push_screen(Question(FIRST_WORDS, options, "leave the program"), self._read)

    def _read(self, answer: str | None) -> None:
        if not answer:
            self.exit(return_code=0)
            return
        state.mark_caution_read()
        self._begin()

    def _begin(self) -> None:
        if self._path is None:
            self.push_screen(Recent(state.recent(), self._palette), self._chosen)
        elif os.path.exists(self._path):
            self._open(self._path)
        else:
            self._ask_new(self._path)

    def _ask_new(self, path: Path) -> None:
        if not os.path.isdir(path.parent):
            self._stop(f"There is no folder {path.parent} to start {path.name} in.")
            return
        text = f"There is no file {path}."
        options = [("n", "new", f"start a new project in {path.name}")]
        self.push_screen(
            Question(text, options, "leave the program"), lambda answer: self._new(path if answer else None)
        )

    def _chosen(self, choice: Path | str | None) -> None:
        if choice is None:
            self.exit(return_code=0)
        elif isinstance(choice, str):
            self.push_screen(Starter(None, self._palette), self._started)
        else:
            self._open(choice)

    def _new(self, path: Path | None) -> None:
        if path is None:
            self.exit(return_code=0)
        else:
            self.push_screen(Starter(path, self._palette), self._started)

    def _started(self, document: Document | None) -> None:
        if document is None:
            self.exit(return_code=0)
        else:
            self._show(document)

    def _open(self, path: Path) -> None:
        try:
            document = Document.open(path)
        except ProjectError as error:
            self.push_screen(Page(error_text(error)), lambda _: self.exit(return_code=2))
            return
        state.remember(path)
        self._show(document)

    def _show(self, document: Document) -> None:
        self.switch_screen(Desk(document, self._palette, self._ascii)) if len(
            self.screen_stack
        ) > 1 else self.push_screen(Desk(document, self._palette, self._ascii))

    def _stop(self, text: str) -> None:
        self.push_screen(Page(Text(text)), lambda _: self.exit(return_code=2))

    def on_key(self, event: events.Key) -> None:
        """Every key that no widget took comes here, in the order typed.

        An open entry takes it before any binding sees it. Were the entry a focused widget, keys typed faster than the
        focus moves would still go to the grid, and "60000" could become "0".
        """
        take = getattr(self.screen, "take_key", None)
        if take is not None and take(event):
            event.prevent_default()
            event.stop()

    def on_paste(self, event: events.Paste) -> None:
        """A paste goes to an open entry, and nowhere else."""
        take = getattr(self.screen, "take_paste", None)
        if take is not None and take(event.text):
            event.stop()

    def action_command_palette(self) -> None:
        """Show all commands by their names; not over an open entry, whose cell a command could take away."""
        typing = any(line.typing for line in self.screen.query(EntryLine))
        if not typing and not isinstance(self.screen, CommandPalette):
            self.push_screen(Commands(id="--command-palette"))

    def action_leave(self) -> None:
        """Leave; a desk asks first."""
        self.exit(return_code=0)

    def action_nothing(self) -> None:
        """Keep the stock key from ending the program."""
