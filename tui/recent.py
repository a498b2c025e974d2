"""The first screen where no file was named: recent projects, and a new one."""

from __future__ import annotations

import os
from collections.abc import Sequence
from pathlib import Path
from typing import ClassVar

from rich.text import Text
from textual import events
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.screen import Screen
from textual.widgets import OptionList, Static
from textual.widgets.option_list import Option

from .entry_line import EntryLine, Request
from .palette import Palette, visible


class Recent(Screen["Path | str | None"]):
    """Gives a path to open, "new" for a new project, or None to leave."""

    DEFAULT_CSS = """
    Recent > #head { height: auto; padding: 1 2; }
    Recent > OptionList { height: 1fr; border: none; padding: 0 2; background: transparent; }
    """
    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("n", "new", "new project", id="recent.new", tooltip="Start a new project"),
        Binding("o", "type", "open by name", id="recent.open", tooltip="Type the name of a file to open"),
        Binding("escape,q,ctrl+q", "leave", "leave", id="recent.leave", tooltip="Leave the program"),
    ]

    def __init__(self, paths: Sequence[Path], palette: Palette) -> None:
        super().__init__()
        self._palette = palette
        self._paths = tuple(paths)

    def compose(self) -> ComposeResult:
        head = Text.assemble(("Hexlipse", "bold"), "   margins of safety by Tresca and von Mises\n")
        for key, words in (("n", "start a new project"), ("o", "open a file by its name"), ("q", "leave")):
            head.append_text(Text.assemble((f"\n  {key} ", "bold"), f"  {words}"))
        head.append("\n\n")
        head.append("Recent projects: arrows and Enter" if self._paths else "No project was opened here before.")
        yield Static(head, id="head", markup=False)
        options = [
            Option(Text(f"{visible(path.name):<30} {visible(str(path.parent))}"), id=str(i))
            for i, path in enumerate(self._paths)
        ]
        yield OptionList(*options, compact=True)
        yield EntryLine(self._palette)

    def on_mount(self) -> None:
        self.query_one(OptionList).focus()

    def on_option_list_option_selected(self, event: OptionList.OptionSelected) -> None:
        event.stop()
        self.dismiss(self._paths[event.option_index])

    def take_key(self, event: events.Key) -> bool:
        """Let an open entry have a key."""
        return self.query_one(EntryLine).take_key(event)

    def _entry_over(self, taken: bool) -> None:
        self.query_one(OptionList).focus()

    def take_paste(self, text: str) -> bool:
        """Let an open entry have a paste."""
        return self.query_one(EntryLine).take_paste(text)

    def action_new(self) -> None:
        """Start a new project."""
        self.dismiss("new")

    def action_type(self) -> None:
        """Ask for a file name."""

        def submit(text: str) -> str | None:
            path = Path(os.path.expanduser(text.strip()))
            if not os.path.isfile(path):
                return "there is no such file"
            self.dismiss(path)
            return None

        self.query_one(OptionList).blur()
        self.query_one(EntryLine).ask(Request("open", "", submit, closed=self._entry_over))

    def action_leave(self) -> None:
        """Leave the program."""
        self.dismiss(None)
