"""The few questions that need a box: each has a way out that loses nothing, and that is the default."""

from __future__ import annotations

from collections.abc import Sequence
from typing import ClassVar

from rich.text import Text
from textual import events
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.containers import Vertical, VerticalScroll
from textual.screen import ModalScreen
from textual.widgets import Static

from .palette import visible

Options = Sequence[tuple[str, str, str]]
"""(key, answer, what it does)."""


class Question(ModalScreen[str]):
    """A text and a few one-key answers; escape gives the empty answer."""

    DEFAULT_CSS = """
    Question { align: center middle; }
    Question > Vertical { width: 72; max-width: 96%; height: auto; max-height: 90%; padding: 0 1; }
    Question > Vertical { border: round $foreground; }
    Question Static { width: 1fr; height: auto; }
    """
    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("escape,ctrl+c", "answer('')", "leave it", id="question.leave", tooltip="Change nothing"),
    ]

    def __init__(self, text: str, options: Options, leave: str = "leave it as it is") -> None:
        super().__init__()
        self._text, self._options, self._leave = text, tuple(options), leave

    def compose(self) -> ComposeResult:
        lines = [Text("\n".join(visible(line) for line in self._text.splitlines())), Text("")]
        for key, _, words in (*self._options, ("esc", "", self._leave)):
            lines.append(Text.assemble((f" {key:<6}", "bold"), visible(words)))
        with Vertical():
            yield Static(Text("\n").join(lines), markup=False)

    def on_key(self, event: events.Key) -> None:
        if not self.is_current:
            return  # a second key typed before this box was gone: it must not close what stands below
        for key, answer, _ in self._options:
            if event.key == key or (event.character or "") == key:
                event.stop()
                self.dismiss(answer)
                return

    def action_answer(self, answer: str) -> None:
        """Close with an answer."""
        self.dismiss(answer)


class Page(ModalScreen[None]):
    """A page of text to read: help, a file's errors, the caution."""

    DEFAULT_CSS = """
    Page { align: center middle; }
    Page > VerticalScroll { width: 78; max-width: 98%; height: auto; max-height: 96%; padding: 0 1; }
    Page > VerticalScroll { border: round $foreground; }
    Page Static { width: 1fr; height: auto; }
    """
    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("escape,enter,q,question_mark,f1,ctrl+c", "close", "close", id="page.close", tooltip="Close this page"),
        Binding("down", "scroll(1)", show=False, id="page.down", tooltip="Further down"),
        Binding("up", "scroll(-1)", show=False, id="page.up", tooltip="Further up"),
        Binding("pagedown,space", "scroll(10)", show=False, id="page.page-down", tooltip="A page down"),
        Binding("pageup", "scroll(-10)", show=False, id="page.page-up", tooltip="A page up"),
    ]

    def __init__(self, text: Text) -> None:
        super().__init__()
        self._text = text

    def compose(self) -> ComposeResult:
        with VerticalScroll(can_focus=False) as area:
            area.border_subtitle = "esc closes, arrows and page keys move"
            yield Static(self._text, markup=False)

    def action_scroll(self, lines: int) -> None:
        """Move the text."""
        for area in self.query(VerticalScroll):  # none while the page is still being made
            area.scroll_relative(y=lines, animate=False, immediate=True)

    def action_close(self) -> None:
        """Close the page."""
        self.dismiss(None)
