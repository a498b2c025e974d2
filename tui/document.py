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


class Document:
    """One project being worked on."""

    def __init__(self, project: Project, path: Path | None, *, new: bool = False) -> None:
        """new: the file does not exist yet, so that leaving would lose the project."""
        self.project = project
        self.path = path
        self.table: MarginTable = compute(project)
        self.history = History(saved=None if new else 0)
        self._state: State | None = None
        self._notes: int | None = None

    @classmethod
    def open(cls, path: Path) -> Document:
        """The project of a file. Raises store.ProjectError."""
        return cls(store.load(path), path)

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

    def prepared(self, edit: Edit) -> tuple[Project, Step]:
        """The project after an edit and the step that records it. Raises Refusal; nothing is changed."""
        project = edits.apply(self.project, edit)
        step = Step(edit, edits.inverse(self.project, edit), edits.describe(self.project, edit))
        return project, step

    def is_large(self, project: Project) -> bool:
        """Whether computing the project's margins from here would hold the screen up."""
        cells = len(project.points) * len(project.checked)
        return cells > LARGE and not self._alike(project)

    def _alike(self, project: Project) -> bool:
        old = self.project
        return (
            (old.points is project.points or len(old.points) == len(project.points))
            and len(old.cases) == len(project.cases)
            and old.loads is project.loads
            and old.categories is project.categories
            and old.materials is project.materials
        )

    def adopt(self, project: Project, table: MarginTable | None = None) -> None:
        """Make a project the present one; its table is computed here unless one is given."""
        self.table = compute(project, self.table) if table is None else table
        self.project = project
        self._state = self._notes = None

    def commit(self, edit: Edit) -> str:
        """Apply an edit for good and say it in a line. Raises Refusal; then nothing has changed."""
        project, step = self.prepared(edit)
        self.adopt(project)
        self.history.commit(step)
        return step.text

    def undo(self) -> str | None:
        """Take the last edit back and say it; None where there is none."""
        if not self.history.done:
            return None
        step = self.history.done[-1]
        self.adopt(edits.apply(self.project, step.inverse))
        self.history.took_back()
        return step.text

    def redo(self) -> str | None:
        """Make the last undone edit again and say it; None where there is none."""
        if not self.history.undone:
            return None
        step = self.history.undone[-1]
        self.adopt(edits.apply(self.project, step.edit))
        self.history.did_again()
        return step.text

    # ---- the file

    def save(self, path: Path | None = None) -> Path:
        """Write the file. Raises store.SaveError or Refusal (no file name yet); the edits stay."""
        target = path or self.path
        if target is None:
            raise Refusal("this project has no file name yet: save it under one")
        base = self.path if self.path is not None and self.path.exists() else None
        store.save_as(self.project, target, base) if path is not None and base else store.save(self.project, target)
        self.path = target
        self.history.mark_saved()
        return target

    def reload(self) -> None:
        """Read the file again; edits not saved and the history are gone. Raises store.ProjectError."""
        if self.path is None:
            raise Refusal("this project has no file to read again")
        self.__init__(store.load(self.path), self.path)  # type: ignore[misc]


Computation = Callable[[], MarginTable]
