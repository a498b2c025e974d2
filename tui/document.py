"""An open project: what it says, its margins, its history, its file. No widgets."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from engine import cautions, edits, store
from engine.cautions import Tally
from engine.edits import Edit, Refusal
from engine.envelope import Envelope
from engine.margins import compute
from engine.patch import Patch
from engine.project import Project
from engine.rating import Rating
from engine.table import MarginTable
from engine.touched import Touched, between

from .history import History, Step

LARGE = 400_000
"""Cells from which a computation afresh runs beside the screen rather than in its loop."""
LARGE_FILE = 5_000
"""Rows and entries from which a save is written beside the screen."""


@dataclass(frozen=True, eq=False, slots=True)
class State:
    """What the summary says of a project, for one that is or for one that a typed entry would make."""

    project: Project
    """The project."""
    envelope: Envelope
    """What governs in it."""
    passes: bool
    """Whether no margin and no caution keeps it from passing."""
    complete: bool
    """Whether no cell lacks anything."""
    cautions: Tally
    """Blocking cautions, standing and acknowledged."""
    margins_pass: bool
    """Whether the margins alone pass."""


def state_of(project: Project, rating: Rating, envelope: Envelope) -> State:
    """The summary of a computed project."""
    return State(
        project,
        envelope,
        cautions.passes(project, rating, envelope),
        cautions.complete(envelope, len(project.checked)),
        cautions.tally(project, rating, envelope),
        cautions.margins_pass(envelope),
    )


@dataclass(frozen=True, eq=False, slots=True)
class Pending:
    """A change whose project is known and whose margins may still have to be computed."""

    project: Project
    """The project after it."""
    text: str
    """It in a line, for when it is done."""
    record: Callable[[], None]
    """Moves the history on."""
    touched: Touched | None
    """What has to be computed; None: everything."""
    large: bool
    """Whether that is better done beside the screen than in its loop."""


@dataclass(frozen=True, eq=False, slots=True)
class Saving:
    """A save that was begun: the project is a consistent whole, whatever is edited while it is written."""

    project: Project
    """What is written."""
    target: Path
    """Where."""
    like: str | None
    """Text whose hand is kept: what the document was read from or last written as; None: it has none yet."""
    last: Step | None
    """The last step that it holds."""

    @property
    def large(self) -> bool:
        """Whether writing it is better done beside the screen."""
        size = sum(len(point.per_load) + len(point.stress) + 8 for point in self.project.points)
        return size + sum(len(case.loads) + 8 for case in self.project.cases) > LARGE_FILE

    def write(self) -> str:
        """Write the file and give its text. Raises store.SaveError."""
        return store.save(self.project, self.target, self.like)


class Document:
    """One project being worked on."""

    def __init__(self, project: Project, path: Path | None, text: str | None = None) -> None:
        """text: what the file holds; None: it does not exist yet, so that leaving would lose the project."""
        self.project = project
        self.path = path
        self._text = text
        self.table: MarginTable = compute(project)
        self.history = History(saved=None if text is None else 0)
        self._state: State | None = None
        self._notes: int | None = None

    @classmethod
    def open(cls, path: Path) -> Document:
        """The project of a file. Raises store.ProjectError."""
        found = store.read(path)
        return cls(found.project, path, found.text)

    @property
    def dirty(self) -> bool:
        """Whether there are edits that the file does not hold."""
        return self.history.dirty

    @property
    def state(self) -> State:
        """The summary of the project as it is."""
        if self._state is None:
            self._state = state_of(self.project, self.table.rating, self.table.envelope)
        return self._state

    @property
    def notes(self) -> int:
        """Cautions that do not block, point by point."""
        if self._notes is None:
            self._notes = sum(int(flags.sum()) for flags in cautions.note_flags(self.table).values())
        return self._notes

    # ---- looking ahead

    def preview(self, edit: Edit) -> State | None:
        """The summary that an edit would give; None where that takes longer than a key may. Raises Refusal."""
        project = edits.apply(self.project, edit)
        touched = between(self.table, project)
        if self._is_large(project, touched):
            return None
        made = self._made(project, touched)
        return state_of(project, made.rating, made.envelope)

    # ---- changing

    def begin(self, edit: Edit) -> Pending:
        """An edit applied to the project but not yet to the document. Raises Refusal; nothing has changed then."""
        project = edits.apply(self.project, edit)
        step = Step(edit, edits.inverse(self.project, edit), edits.describe(self.project, edit))
        return self._pending(project, step.text, lambda: self.history.commit(step))

    def begin_undo(self) -> Pending | None:
        """The last edit taken back, likewise; None where there is none."""
        if not self.history.done:
            return None
        step = self.history.done[-1]
        project = edits.apply(self.project, step.inverse)
        return self._pending(project, f"undone: {step.text}", self.history.took_back)

    def begin_redo(self) -> Pending | None:
        """The last edit taken back made again, likewise; None where there is none."""
        if not self.history.undone:
            return None
        step = self.history.undone[-1]
        project = edits.apply(self.project, step.edit)
        return self._pending(project, f"redone: {step.text}", self.history.did_again)

    def _pending(self, project: Project, text: str, record: Callable[[], None]) -> Pending:
        touched = between(self.table, project)
        return Pending(project, text, record, touched, self._is_large(project, touched))

    def _is_large(self, project: Project, touched: Touched | None) -> bool:
        cells = len(project.points) * len(project.checked) if touched is None else touched.cells(self.table.shape)
        return cells > LARGE

    def _made(self, project: Project, touched: Touched | None) -> Patch | MarginTable:
        return MarginTable(project) if touched is None else Patch(self.table, project, touched)

    def make(self, pending: Pending) -> Patch | MarginTable:
        """Compute what a pending change needs, changing nothing: this may run in a thread of its own."""
        return self._made(pending.project, pending.touched)

    def finish(self, pending: Pending, made: Patch | MarginTable | None = None) -> None:
        """Make the pending project the present one; what it needs is computed here unless it is given."""
        done = self.make(pending) if made is None else made
        self.table = done.apply() if isinstance(done, Patch) else done
        self.project = pending.project
        pending.record()
        self._state = self._notes = None

    def commit(self, edit: Edit) -> str:
        """Apply an edit for good and say it in a line. Raises Refusal; then nothing has changed."""
        pending = self.begin(edit)
        self.finish(pending)
        return pending.text

    def undo(self) -> str | None:
        """Take the last edit back and say it; None where there is none."""
        return self._done(self.begin_undo())

    def redo(self) -> str | None:
        """Make the last undone edit again and say it; None where there is none."""
        return self._done(self.begin_redo())

    def _done(self, pending: Pending | None) -> str | None:
        if pending is None:
            return None
        self.finish(pending)
        return pending.text

    # ---- the file

    def begin_save(self, path: Path | None = None) -> Saving:
        """What a save under the document's name, or another, will write. Raises Refusal where there is no name yet."""
        target = path or self.path
        if target is None:
            raise Refusal("this project has no file name yet: save it under one")
        return Saving(self.project, target, self._text, self.history.last)

    def changed_underneath(self) -> bool:
        """Whether the file no longer holds what was read from it or last written to it."""
        if self.path is None or self._text is None:
            return False
        try:
            return self.path.read_bytes() != self._text.encode("utf-8")
        except OSError:
            return False  # gone or unreadable: the save itself will say what is wrong

    def finish_save(self, saving: Saving, text: str) -> None:
        """The file holds what the save was begun with; the document goes by its name from now on."""
        self.path, self._text = saving.target, text
        self.history.mark_saved(saving.last)

    def save(self, path: Path | None = None) -> Path:
        """Write the file. Raises store.SaveError or Refusal; the edits stay."""
        saving = self.begin_save(path)
        self.finish_save(saving, saving.write())
        return saving.target

    def reload(self) -> None:
        """Read the file again; edits not saved and the history are gone. Raises store.ProjectError."""
        if self.path is None:
            raise Refusal("this project has no file to read again")
        found = store.read(self.path)
        self.project, self._text = found.project, found.text
        self.table, self.history = compute(found.project), History()
        self._state = self._notes = None
