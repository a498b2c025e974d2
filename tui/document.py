"""An open project: what it says, its margins, its history, its file. No widgets."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from engine import cautions, edits, store
from engine.edits import Edit, Refusal
from engine.envelope import Envelope
from engine.margins import compute
from engine.patch import Patch
from engine.project import Project
from engine.rating import Rating
from engine.table import MarginTable

from .history import History, Step

LARGE = 400_000
"""Cells from which a computation afresh runs beside the screen rather than in its loop."""


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
    standing: int
    """Blocking cautions that nobody has acknowledged."""


def state_of(project: Project, rating: Rating, envelope: Envelope) -> State:
    """The summary of a computed project."""
    return State(
        project,
        envelope,
        cautions.passes(project, rating, envelope),
        cautions.complete(envelope, len(project.checked)),
        cautions.standing(project, rating, envelope),
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
    large: bool
    """Whether its margins are better computed beside the screen."""


def is_patchable(table: MarginTable, project: Project) -> bool:
    """Whether a later state of a project has the rows, columns and loads of a table, so that parts suffice."""
    old = table.project
    return (
        len(old.points) == len(project.points)
        and len(old.cases) == len(project.cases)
        and old.loads is project.loads
        and old.categories is project.categories
        and old.materials is project.materials
    )


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
        """The summary that an edit would give; None where that takes longer than a key. Raises Refusal."""
        project = edits.apply(self.project, edit)
        patch = Patch.between(self.table, project)
        if patch is not None:
            return state_of(project, patch.rating, patch.envelope)
        if len(project.points) * len(project.checked) > LARGE:
            return None
        table = MarginTable(project)
        return state_of(project, table.rating, table.envelope)

    # ---- changing

    def begin(self, edit: Edit) -> Pending:
        """An edit applied to the project but not yet to the document. Raises Refusal; nothing has changed then."""
        project = edits.apply(self.project, edit)
        step = Step(edit, edits.inverse(self.project, edit), edits.describe(self.project, edit))
        return Pending(project, step.text, lambda: self.history.commit(step), self._is_large(project))

    def begin_undo(self) -> Pending | None:
        """The last edit taken back, likewise; None where there is none."""
        if not self.history.done:
            return None
        step = self.history.done[-1]
        project = edits.apply(self.project, step.inverse)
        return Pending(project, f"undone: {step.text}", self.history.took_back, self._is_large(project))

    def begin_redo(self) -> Pending | None:
        """The last edit taken back made again, likewise; None where there is none."""
        if not self.history.undone:
            return None
        step = self.history.undone[-1]
        project = edits.apply(self.project, step.edit)
        return Pending(project, f"redone: {step.text}", self.history.did_again, self._is_large(project))

    def finish(self, pending: Pending, table: MarginTable | None = None) -> None:
        """Make the pending project the present one; its table is computed here unless one is given."""
        self.table = compute(pending.project, self.table) if table is None else table
        self.project = pending.project
        pending.record()
        self._state = self._notes = None

    def _is_large(self, project: Project) -> bool:
        """Whether computing the project's margins from here would hold the screen up."""
        cells = len(project.points) * len(project.checked)
        return cells > LARGE and not is_patchable(self.table, project)

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

    def save(self, path: Path | None = None) -> Path:
        """Write the file. Raises store.SaveError or Refusal (no file name yet); the edits stay."""
        target = path or self.path
        if target is None:
            raise Refusal("this project has no file name yet: save it under one")
        like = None if target == self.path else self._text
        self._text = store.save(self.project, target, like)
        self.path = target
        self.history.mark_saved()
        return target

    def reload(self) -> None:
        """Read the file again; edits not saved and the history are gone. Raises store.ProjectError."""
        if self.path is None:
            raise Refusal("this project has no file to read again")
        found = store.read(self.path)
        self.project, self._text = found.project, found.text
        self.table, self.history = compute(found.project), History()
        self._state = self._notes = None
