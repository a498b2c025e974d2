"""Saving, saving under another name, reading again and leaving: no edit is lost without a question."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

from rich.text import Text

from engine.edits import Refusal
from engine.store import ProjectError, SaveError

from . import state
from .dialogs import Page, Question
from .entry_line import Request
from .palette import visible
from .words import plural


class FileActions:
    """Mixed into the desk."""

    document: Any
    line: Any
    app: Any
    say: Callable[[str], None]
    refuse: Callable[[str], None]
    refresh_all: Callable[..., None]

    def action_save(self) -> None:
        """Write the file."""
        if self.document.path is None:
            self.action_save_as()
        else:
            self.save()

    def save(self, path: Path | None = None) -> str | None:
        """Write the file; why not, or None."""
        try:
            target = self.document.save(path)
        except (SaveError, Refusal) as error:
            self.refuse(f"not saved: {error}")
            return str(error)
        state.remember(target)
        self.refresh_all()
        self.say(f"saved {target.name}")
        return None

    def action_save_as(self) -> None:
        """Write the file under another name, and work on in that one."""
        start = str(self.document.path) if self.document.path else ""

        def submit(text: str) -> str | None:
            if not text.strip():
                return "a file name is needed"
            path = Path(text.strip()).expanduser()
            if path.suffix != ".toml":
                path = path.with_name(path.name + ".toml")
            if path.exists() and path != self.document.path:
                self._ask_overwrite(path)
                return None
            return self.save(path)

        self.line.ask(Request("save as", start, submit))

    def _ask_overwrite(self, path: Path) -> None:
        text = f"{path.name} exists already. The file before it is kept as {path.name}~."
        options = [("o", "yes", f"overwrite {path.name}")]
        self.app.push_screen(Question(text, options), lambda answer: self.save(path) if answer else None)

    def action_reload(self) -> None:
        """Read the file again."""
        if self.document.path is None:
            self.refuse("this project has no file to read again")
        elif self.document.dirty:
            text = "There are edits that the file does not hold. Reading it again drops them, and the undo history."
            options = [("r", "yes", "read the file again and drop the edits")]
            self.app.push_screen(Question(text, options), lambda answer: self._reload() if answer else None)
        else:
            self._reload()

    def _reload(self) -> None:
        try:
            self.document.reload()
        except ProjectError as error:
            self.app.push_screen(Page(error_text(error)))
            return
        self.refresh_all(structure=True)
        self.say("read again from the file")

    def action_leave(self) -> None:
        """Leave the program; asks while edits are unsaved."""
        if not self.document.dirty:
            self.app.exit(return_code=0)
            return
        count = len(self.document.history.done)
        what = f"{plural(count, 'edit')} not saved" if count else "this project is not saved"
        options = [("s", "save", "save, then leave"), ("l", "leave", "leave without saving: the edits are lost")]
        self.app.push_screen(Question(what.capitalize() + ".", options, "stay"), self._leave)

    def _leave(self, answer: str | None) -> None:
        if answer == "leave":
            self.app.exit(return_code=0)
        elif answer == "save" and self.document.path is None:
            self.action_save_as()
        elif answer == "save" and self.save() is None:
            self.app.exit(return_code=0)


def error_text(error: ProjectError) -> Text:
    """A file's faults for a page."""
    return Text(
        "This file cannot be used as it stands:\n\n" + "\n".join(visible(line) for line in str(error).splitlines())
    )
