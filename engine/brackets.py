"""Members taken out of and put into arrays and inline tables, in place: commas, lines and comments as they stood."""

from __future__ import annotations

import re
from collections.abc import Iterator
from itertools import groupby

from engine.changes import Changes
from engine.spans import Node, Statement

_COMMA = re.compile(r"(?:[ \t\r\n]++|#[^\n]*+)*+,")
_REST = re.compile(r"[ \t]*+,?+[ \t]*+(?:#[^\n]*+)?+\r?\n")


class Members:
    """What is to go out of one array or inline table, and what into it."""

    def __init__(self, node: Node, newline: str) -> None:
        """node: an array or inline table; newline: that of the text."""
        self.node = node
        self._newline = newline
        self._gone: set[int] = set()
        self._fresh: dict[int, list[str]] = {}

    def take_out(self, member: Statement) -> None:
        """Takes one member out."""
        self._gone.add(self.node.members.index(member))

    def put_in(self, after: int, text: str) -> None:
        """Puts a new member after the one at a place; -1: before all."""
        self._fresh.setdefault(after, []).append(text)

    def write(self, changes: Changes) -> None:
        """Adds all of it to the changes of the text."""
        kept = [place for place in range(len(self.node.members)) if place not in self._gone]
        if not kept:
            self._write_whole(changes)
            return
        for run in self._runs():
            changes.replace(*self._stretch(changes.text, run, kept), "")
        for after, texts in sorted(self._fresh.items()):
            anchor = max((place for place in kept if place <= after), default=None)
            if anchor is None:
                self._write_before(changes, kept[0], texts)
            else:
                self._write_after(changes, anchor, texts)

    def _write_whole(self, changes: Changes) -> None:
        texts = ", ".join(text for _, texts in sorted(self._fresh.items()) for text in texts)
        table = f"{{ {texts} }}" if texts else "{}"
        new = f"[{texts}]" if self.node.kind == "array" else table
        changes.replace(self.node.start, self.node.end, new)

    def _runs(self) -> Iterator[list[int]]:
        """Members that go, neighbours together."""
        for _, run in groupby(enumerate(sorted(self._gone)), lambda pair: pair[1] - pair[0]):
            yield [place for _, place in run]

    def _stretch(self, text: str, run: list[int], kept: list[int]) -> tuple[int, int]:
        """What must go with a run: whole lines where it has lines to itself, otherwise one comma."""
        members = self.node.members
        first, last = members[run[0]], members[run[-1]]
        rest = _REST.match(text, last.end)
        if _indent(text, first) is not None and rest is not None:
            return _line_start(text, first.start), rest.end()
        if run[-1] + 1 < len(members):
            return first.start, members[run[-1] + 1].start
        return members[kept[-1]].end, last.end

    def _write_before(self, changes: Changes, place: int, texts: list[str]) -> None:
        member = self.node.members[place]
        indent = _indent(changes.text, member)
        between = ", " if indent is None else f",{self._newline}{indent}"
        changes.insert(member.start, "".join(text + between for text in texts))

    def _write_after(self, changes: Changes, place: int, texts: list[str]) -> None:
        member = self.node.members[place]
        indent = _indent(changes.text, member)
        rest = _REST.match(changes.text, member.end)
        if indent is None or rest is None:
            changes.insert(member.end, "".join(f", {text}" for text in texts))
            return
        comma = _COMMA.match(changes.text, member.end) is not None
        if not comma:
            changes.insert(member.end, ",")
        lines = f",{self._newline}{indent}".join(texts)
        changes.insert(rest.end(), f"{indent}{lines}{',' if comma else ''}{self._newline}")


def _line_start(text: str, offset: int) -> int:
    return text.rfind("\n", 0, offset) + 1


def _indent(text: str, member: Statement) -> str | None:
    """The blanks before a member that begins its line, None for one that does not."""
    before = text[_line_start(text, member.start) : member.start]
    return before if not before.strip() else None
