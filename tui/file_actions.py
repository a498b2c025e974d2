"""Saving, saving under another name, reading again and leaving: no edit is lost without a question."""

from __future__ import annotations

import os
from collections.abc import Callable
from pathlib import Path
from typing import Any

from rich.text import Text

from engine.edits import Refusal
from engine.store import ProjectError, SaveError

from . import state
from .dialogs import Page, Question
from .document import Saving
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
    run_worker: Callable[..., Any]
    _saving = False

    def action_save(self) -> None:
        """Write the file."""
        if self.document.path is None:
            self.action_save_as()
        else:
            self._save_here()

    def _save_here(self, then: Callable[[], None] | None = None) -> None:
        """Write under the document's own name; asks where somebody else changed the file meanwhile."""
        if not self.document.changed_underneath():
            self.save(then=then)
            return
        name = self.document.path.name
        text = f"{name} was changed by somebody else since it was read here. The file as it is now is kept as {name}~."
        options = [("o", "yes", "overwrite it with what is on this screen")]
        self.app.push_screen(Question(text, options), lambda answer: self.save(then=then) if answer else None)

    def save(self, path: Path | None = None, then: Callable[[], None] | None = None) -> str | None:
        """Write the file, and then go on; why not, or None. A large file is written in a thread of its own."""
        try:
            saving = self.document.begin_save(path)
            if not saving.large:
                self._saved(saving, saving.write(), then)
                return None
        except (SaveError, Refusal) as error:
            why = self._why_not(error)
            self.refuse(why)
            return why
        if self._saving:
            self.refuse("the last save is still being written")
            return None
        self._saving = True
        self.say("saving ...")
        self.run_worker(lambda: self._write(saving, then), thread=True, group="save")
        return None

    def _write(self, saving: Saving, then: Callable[[], None] | None) -> None:
        try:
            text = saving.write()
        except SaveError as error:
            self.app.call_from_thread(self._not_saved, self._why_not(error))
            return
        self.app.call_from_thread(self._saved, saving, text, then)

    @staticmethod
    def _why_not(error: Exception) -> str:
        """Why nothing was saved, the reason first: the path before it may be longer than the line."""
        return f"not saved: {str(error).rpartition(' was not saved: ')[2]}"

    def _not_saved(self, why: str) -> None:
        self._saving = False
        self.refuse(why)

    def _saved(self, saving: Saving, text: str, then: Callable[[], None] | None) -> None:
        self._saving = False
        self.document.finish_save(saving, text)
        state.remember(saving.target)
        self.refresh_all()
        self.say(f"saved {saving.target.name}")
        if then is not None:
            then()

    def action_save_as(self) -> None:
        """Write the file under another name, and work on in that one."""
        self._ask_name()

    def _ask_name(self, then: Callable[[], None] | None = None) -> None:
        start = str(self.document.path) if self.document.path else ""

        def submit(text: str) -> str | None:
            if not text.strip():
                return "a file name is needed"
            path = Path(os.path.expanduser(text.strip()))
            if not path.name or os.path.isdir(path):
                return "that is a folder: a file name is needed"
            if path.suffix != ".toml":
                path = path.with_name(path.name + ".toml")
            if os.path.exists(path) and path != self.document.path:
                self._ask_overwrite(path, then)
                return None
            return self.save(path, then)

        self.line.ask(Request("save as", start, submit))

    def _ask_overwrite(self, path: Path, then: Callable[[], None] | None) -> None:
        text = f"{path.name} exists already. The file before it is kept as {path.name}~."
        options = [("o", "yes", f"overwrite {path.name}")]
        self.app.push_screen(Question(text, options), lambda answer: self.save(path, then) if answer else None)

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
        count = self.document.history.unsaved
        what = f"{plural(count, 'edit')} not saved" if count else "this project is not saved"
        options = [("s", "save", "save, then leave"), ("l", "leave", "leave without saving: the edits are lost")]
        self.app.push_screen(Question(what.capitalize() + ".", options, "stay"), self._leave)

    def _leave(self, answer: str | None) -> None:
        if answer == "leave":
            self.app.exit(return_code=0)
        elif answer == "save" and self.document.path is None:
            self._ask_name(then=lambda: self.app.exit(return_code=0))
        elif answer == "save":
            self._save_here(then=lambda: self.app.exit(return_code=0))


def error_text(error: ProjectError) -> Text:
    """A file's faults for a page."""
    return Text(
        "This file cannot be used as it stands:\n\n" + "\n".join(visible(line) for line in str(error).splitlines())
    )
