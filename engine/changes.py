"""Changes to a text, collected by offset and applied together, so that the offsets of all stay those of the text."""

from __future__ import annotations

from bisect import bisect_left
from itertools import islice
from operator import attrgetter
from typing import NamedTuple


class Change(NamedTuple):
    """A stretch of the text that is replaced."""

    start: int
    """Offset of its first character."""
    end: int
    """Offset after its last; equal to `start` for a pure insertion."""
    order: int
    """Of two at one offset, which was asked for first."""
    new: str
    """What stands there instead."""


class Overlap(ValueError):
    """Two changes touch the same characters."""


class Changes:
    """Replacements of stretches of one text."""

    def __init__(self, text: str) -> None:
        self.text = text
        self._found: list[Change] = []
        self._sorted = True

    def replace(self, start: int, end: int, new: str) -> None:
        """Puts `new` in place of a stretch."""
        self._found.append(Change(start, end, len(self._found), new))
        self._sorted = False

    def insert(self, at: int, new: str) -> None:
        """Puts `new` before the character at an offset."""
        self.replace(at, at, new)

    def applied(self, start: int, end: int) -> str:
        """The text of a stretch after all changes in it, an insertion at its end included and one at its start not.

        Raises Overlap where two of them touch the same characters.
        """
        self._sort()
        pieces: list[str] = []
        pos = start
        first = bisect_left(self._found, start, key=attrgetter("start"))
        for change in islice(self._found, first, None):
            if change.start > end or change.end > end:
                break
            if change.start == change.end == start:
                continue
            if change.start < pos:
                raise Overlap(f"two changes at offset {change.start}")
            pieces += [self.text[pos : change.start], change.new]
            pos = change.end
        return "".join([*pieces, self.text[pos:end]])

    def _sort(self) -> None:
        if not self._sorted:
            self._found.sort(key=lambda change: (change.start, change.end > change.start, change.order))
            self._sorted = True
