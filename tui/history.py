"""Undo and redo without limit: edits with their inverses, never copies of a project."""

from __future__ import annotations

from dataclasses import dataclass, field

from engine.edits import Edit


@dataclass(frozen=True, slots=True)
class Step:
    """One committed edit."""

    edit: Edit
    """What was done."""
    inverse: Edit
    """What takes it back."""
    text: str
    """It in a line."""


@dataclass(slots=True)
class History:
    """The steps of a session, and which of them the file on disk holds."""

    done: list[Step] = field(default_factory=list)
    """Oldest first."""
    undone: list[Step] = field(default_factory=list)
    """The next one to redo last."""
    saved: int | None = 0
    """How many steps the file holds; None: a state that undo and redo can no longer reach."""

    @property
    def dirty(self) -> bool:
        """Whether the file does not hold what is on screen."""
        return self.saved != len(self.done)

    @property
    def unsaved(self) -> int:
        """How many steps lie between the file and the screen; all of them where the file's state is out of reach."""
        return len(self.done) if self.saved is None else abs(len(self.done) - self.saved)

    def commit(self, step: Step) -> None:
        """A new edit was made: what was undone before it is gone."""
        if self.saved is not None and self.saved > len(self.done):
            self.saved = None
        self.undone.clear()
        self.done.append(step)

    def took_back(self) -> None:
        """The last step was undone."""
        self.undone.append(self.done.pop())

    def did_again(self) -> None:
        """The last undone step was redone."""
        self.done.append(self.undone.pop())

    @property
    def last(self) -> Step | None:
        """The last step done."""
        return self.done[-1] if self.done else None

    def mark_saved(self, last: Step | None) -> None:
        """The file now holds the state after a step (None: before any), unless that state can be reached no more."""
        steps = [*self.done, *reversed(self.undone)]
        places = [0] if last is None else [i for i, step in enumerate(steps, 1) if step is last]
        self.saved = places[0] if places else None
