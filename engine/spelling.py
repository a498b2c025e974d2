"""How plain values, keys and whole entries are spelt in a project file: one line for each key and each row."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass

from engine.reading import Plain

WHOLE = 1e15
"""Whole numbers below it are written without a decimal point where one without stood before."""
SUBTABLES = ("resultants", "per-load", "stress")
"""Keys that an entry of its own lines writes as tables, a line for each row."""
_BARE = re.compile(r"[A-Za-z0-9_-]+")
_INTEGER = re.compile(r"[+-]?(?:0[box][0-9A-Fa-f_]+|[0-9_]+)")
_NO_LITERAL = re.compile(r"['\x00-\x08\x0a-\x1f\x7f]")


@dataclass(frozen=True, slots=True)
class Spelling:
    """The hand in which new text of one file is written."""

    quote: Callable[[str, bool], str]
    """TOML text of a string; with True over several lines where the string has them."""
    newline: str = "\n"
    """Between lines."""

    def key(self, name: str) -> str:
        """One part of a key."""
        return name if _BARE.fullmatch(name) else self.quote(name, False)

    def value(self, value: Plain) -> str:
        """Any value, in one line. ValueError for a number that is not finite."""
        if isinstance(value, str):
            return self.quote(value, False)
        if isinstance(value, Mapping):
            members = ", ".join(self.assignment(key, item) for key, item in value.items())
            return f"{{ {members} }}" if members else "{}"
        if isinstance(value, list | tuple):
            return f"[{', '.join(self.value(item) for item in value)}]"
        return number(value)

    def text(self, value: str) -> str:
        """A string; over several lines where it has them and nothing in it would be lost that way."""
        return self.quote(value, "\n" in value and "\r" not in value).replace("\n", self.newline)

    def assignment(self, key: str, value: Plain) -> str:
        """key = value, in one line."""
        return f"{self.key(key)} = {self.value(value)}"

    def line(self, key: str, value: Plain) -> str:
        """key = value, a string over several lines where it has them, without the newline at the end."""
        return f"{self.key(key)} = {self.text(value) if isinstance(value, str) else self.value(value)}"

    def like(self, old: str, value: Plain) -> str:
        """A value in place of an old text: a whole number stays one if it can, a string keeps its kind of quotes."""
        if isinstance(value, str):
            return self._string_like(old, value)
        if isinstance(value, float) and value.is_integer() and abs(value) < WHOLE and _INTEGER.fullmatch(old):
            return str(int(value))
        return self.value(value)

    def _string_like(self, old: str, value: str) -> str:
        if "\n" in value:
            return self.text(value)
        if old.startswith("'") and not _NO_LITERAL.search(value):
            return f"'{value}'"
        return self.value(value)

    def entry(self, header: str, document: Mapping[str, Plain]) -> str:
        """A whole table with its header ("[project]", "[[case]]"), every line ended."""
        word = header.strip("[]")
        own = [self.line(key, value) for key, value in document.items() if not subtable(key, value)]
        below = [f"{word}.{self.key(key)}" for key, value in document.items() if subtable(key, value)]
        rows = [value for key, value in document.items() if subtable(key, value)]
        tables = "".join(self.table(name, table) for name, table in zip(below, rows, strict=True))
        return self.lines([header, *own]) + tables

    def table(self, name: str, rows: Mapping[str, Plain]) -> str:
        """A table below an entry: its header, then a line for each row, every line ended."""
        return self.lines([f"[{name}]", *(self.line(key, row) for key, row in rows.items())])

    def lines(self, lines: Iterable[str]) -> str:
        """Lines, each ended."""
        return "".join(line + self.newline for line in lines)


def subtable(key: str, value: Plain) -> bool:
    """Whether an entry of its own lines writes a key as a table below it."""
    return key in SUBTABLES and isinstance(value, Mapping)


def number(value: Plain) -> str:
    """A number, or true or false; the shortest text that reads the same. ValueError if it is not finite."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if not math.isfinite(value):
        raise ValueError(f"{value} has no place in a project file")
    return repr(float(value)) if isinstance(value, float) else str(value)
