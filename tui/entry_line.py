"""The last line: the message of the last act and the keys that matter, or an entry being typed."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from rich.cells import cell_len
from rich.text import Text
from textual import events
from textual.widgets import Static

from .line_editor import LineEditor
from .palette import Palette, cut, visible
from .texts import fitted

Submit = Callable[[str], str | None]
"""Takes the text; gives back why it is refused, or None."""
Change = Callable[[str], None]
KEYS = (
    ("enter", "Take what was typed"),
    ("esc, ctrl+c", "Drop what was typed"),
    ("left, right", "Move in the entry; home and end to its ends"),
    ("backspace", "Take the character before away; delete the one after"),
    ("ctrl+u, ctrl+k", "Take all before, all after the cursor away"),
    ("ctrl+w", "Take the word before away"),
)
"""Keys of an entry, for the page of keys."""


@dataclass(frozen=True, slots=True)
class Request:
    """An entry to ask for."""

    label: str
    """What is asked, with its unit."""
    initial: str
    """Text to begin with."""
    submit: Submit
    """Called on Enter; a refusal is shown and the text stays."""
    change: Change = lambda _: None
    """Called at each change of the text."""
    refused: Callable[[str], None] = lambda _: None
    """Called with why the entry was not taken, where there is more room to say it."""
    closed: Callable[[bool], None] = lambda _: None
    """Called when the entry is over; whether it was taken."""


class EntryLine(Static):
    """Message or entry. It never has the focus: the application hands it the keys while an entry is open."""

    DEFAULT_CSS = "EntryLine { height: 1; }"

    def __init__(self, palette: Palette, ascii_only: bool = False) -> None:
        super().__init__("", markup=False)
        self._palette, self._ascii = palette, ascii_only
        self._request: Request | None = None
        self._editor = LineEditor()
        self._why = ""
        self._message = ""

    @property
    def typing(self) -> bool:
        """Whether an entry is open."""
        return self._request is not None

    @property
    def text(self) -> str:
        """What was typed so far."""
        return self._editor.text

    @property
    def message(self) -> str:
        """The message shown, or the refusal of an open entry."""
        return self._why if self.typing else self._message

    def say(self, message: str) -> None:
        """Show a message; while an entry is open it waits until that is over."""
        self._message = message
        self._draw()

    def ask(self, request: Request) -> None:
        """Open an entry."""
        self._request = request
        self._editor = LineEditor(request.initial, len(request.initial))
        self._why = ""
        self._draw()
        if request.initial:
            request.change(request.initial)

    def take_key(self, event: events.Key) -> bool:
        """Let an open entry have a key; whether there was one. No key gets past it."""
        request = self._request
        if request is None:
            return False
        if event.key in {"escape", "ctrl+c"}:
            self._close(request, taken=False)
        elif event.key == "enter":
            self._submit(request)
        else:
            editor = self._editor.key(event.key)
            if editor is None and event.is_printable and event.character:
                editor = self._editor.insert(event.character)
            self._become(editor or self._editor)
        return True

    def take_paste(self, text: str) -> bool:
        """Let an open entry have a paste; whether there was one."""
        if self._request is None:
            return False
        self._become(self._editor.insert(text))
        return True

    def _become(self, editor: LineEditor) -> None:
        changed = editor.text != self._editor.text
        self._editor = editor
        if changed:
            self._why = ""
        self._draw()
        if changed and self._request is not None:
            self._request.change(editor.text)

    def _submit(self, request: Request) -> None:
        why = request.submit(self._editor.text)
        if why is not None:
            self._why = why
            request.refused(why)
            self._draw()
        elif self._request is request:
            self._close(request, taken=True)

    def _close(self, request: Request, taken: bool) -> None:
        self._request = None
        self._why = ""
        request.closed(taken)
        self._draw()

    # ---- drawing

    def _draw(self) -> None:
        width = max(self.app.size.width, 20)
        line = (
            self._entry(width)
            if self._request is not None
            else Text(f" {visible(self._message)}", self._palette.style("plain"))
        )
        self.update(fitted(line, width, self._ascii), layout=False)

    def _entry(self, width: int) -> Text:
        """Label, what was typed with the cursor in it, why it was refused; of a long text the part at the cursor."""
        assert self._request is not None
        asked = visible(self._request.label)
        label = f" {cut(asked, min(cell_len(asked), max(8, width - 18)))}: "
        why = f"  {visible(self._why)}" if self._why else ""
        room = max(8, width - cell_len(label) - min(cell_len(why), width // 2) - 1)
        editor = self._editor
        start = editor.cursor
        while start > 0 and cell_len(visible(editor.text[start - 1 : editor.cursor])) < room:
            start -= 1
        shown, after = editor.text[start : editor.cursor], editor.text[editor.cursor :]
        tail = max(0, room - len(shown))
        line = Text(label, self._palette.style("plain here"))
        line.append(visible(shown), self._palette.style("plain"))
        line.append(visible(after[:1]) or " ", self._palette.style("plain cursor"))
        line.append(visible(after[1:tail]), self._palette.style("plain"))
        line.append(why, self._palette.style("short"))
        return line
