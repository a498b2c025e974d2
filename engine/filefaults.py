"""What is wrong in a project file, with line and key path: the errors that `store.load` raises."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from engine.reading import Fault, Path, clean
from engine.spans import Spans

SHOWN = 20
"""Most faults that the text of an error lists."""
LONGEST = 400
"""Most characters of one fault's text."""
_BARE = re.compile(r"[A-Za-z0-9_-]+")


@dataclass(frozen=True, slots=True)
class FileFault:
    """One thing that is wrong in a file."""

    line: int | None
    """Line, from 1; None where no line is to blame."""
    path: str
    """Key path as shown, places from 1: `point[2].per-load.haul[3]`; empty for the file as a whole."""
    message: str
    """What was found and what was expected."""

    def text(self, name: str) -> str:
        """The fault in one line, without control characters."""
        place = name if self.line is None else f"{name}:{self.line}"
        what = f"{self.path}: {self.message}" if self.path else self.message
        return clean(_short(f"{place}: {what}"))


class ProjectError(Exception):
    """A file cannot be read as a project; `faults` holds everything that is wrong in it, by line."""

    def __init__(self, name: str, faults: Iterable[FileFault]) -> None:
        """name: the file as messages call it."""
        self.name = name
        self.faults = tuple(sorted(faults, key=lambda fault: fault.line or 0))
        super().__init__(name, self.faults)

    def __str__(self) -> str:
        lines = [fault.text(self.name) for fault in self.faults[:SHOWN]]
        more = len(self.faults) - SHOWN
        return "\n".join([*lines, f"... and {more} more"] if more > 0 else lines)


def path_text(path: Sequence[str | int]) -> str:
    """A key path as messages show it: places from 1, and quotes around a key that TOML quotes."""
    words: list[str] = []
    for step in path:
        if isinstance(step, int):
            words.append(f"[{step + 1}]")
        else:
            words.append(("." if words else "") + _key(step))
    return "".join(words)


def _key(name: str) -> str:
    short = name if len(name) <= 40 else f"{name[:37]}..."
    return short if _BARE.fullmatch(name) else f'"{clean(short)}"'


def _short(text: str) -> str:
    return text if len(text) <= LONGEST else f"{text[: LONGEST - 3]}..."


def located(faults: Iterable[Fault], spans: Spans) -> list[FileFault]:
    """Faults of a document with their lines: that of the key, of the list's element, or of the table that lacks it."""
    return [FileFault(_line(fault.path, spans), path_text(fault.path), fault.message) for fault in faults]


def _line(path: Path, spans: Spans) -> int:
    return spans.find(path).line if path else 1
