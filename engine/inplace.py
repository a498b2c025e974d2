"""Values of a project file changed where they stand: the finest change that makes a table of the text say a new one.

Works on plain tables: what a table of the text says now, and what it is to say. Nothing else of the text changes.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from itertools import takewhile

from engine.brackets import Members
from engine.changes import Changes
from engine.reading import Plain
from engine.spans import Node, Spans, Statement
from engine.spelling import Spelling, subtable

Table = Mapping[str, Plain]


class Hand:
    """Collects the changes that bring new values into a text."""

    def __init__(self, spans: Spans, spelling: Spelling, renames: frozenset[tuple[str, str]]) -> None:
        """spans: of a text whose last line is ended; renames: (old, new) names of parts, of whatever kind."""
        self.text = spans.text
        self.changes = Changes(spans.text)
        self._spelling = spelling
        self._renames = renames
        self._order = {statement.start: place for place, statement in enumerate(spans.statements)}
        self._statements = spans.statements
        self._members: dict[int, Members] = {}

    def finish(self) -> Changes:
        """All changes; to be asked for once."""
        for members in self._members.values():
            members.write(self.changes)
        return self.changes

    def table(self, node: Node, path: tuple[str, ...], old: Table, new: Table) -> None:
        """Makes a table say `new`. path: its key from the top of the file, places of lists left out."""
        names = self._renamed(node, old, new)
        gone: dict[str, None] = {}
        for key, value in old.items():
            name = names.get(key, key)
            child = node.children[key]
            if name not in new or (child.kind == "table" and not isinstance(new[name], Mapping)):
                gone[key] = None
                continue
            if name != key and child.latest is not None:
                part = child.latest.keys[-1]
                self.changes.replace(part.start, part.end, self._spelling.key(name))
            self.value(child, (*path, key), value, new[name])
        self._take_out(node, gone)
        kept = {names.get(key, key) for key in old if key not in gone}
        for key, value in new.items():
            if key not in kept:
                self._put_in(node, path, key, value)

    def value(self, node: Node, path: tuple[str, ...], old: Plain, new: Plain) -> None:
        """Makes one value say `new`."""
        if old == new:
            return
        if isinstance(old, Mapping) and isinstance(new, Mapping):
            self.table(node, path, old, new)
        elif isinstance(old, list) and isinstance(new, list) and node.kind == "array":
            self.array(node, path, old, new)
        else:
            written = self._spelling.like(self.text[node.start : node.end], new)
            self.changes.replace(node.start, node.end, written)

    def array(self, node: Node, path: tuple[str, ...], old: list[Plain], new: list[Plain]) -> None:
        """Makes an array say `new`; of one that grows or shrinks what is alike at its beginning and end stays."""
        tail = 0
        if len(old) != len(new):
            pairs = zip(reversed(old), reversed(new), strict=False)
            tail = sum(1 for _ in takewhile(lambda pair: pair[0] == pair[1], pairs))
        both = min(len(old), len(new)) - tail
        for place in range(both):
            self.value(node.items[place], path, old[place], new[place])
        for place in range(both, len(old) - tail):
            self._container(node).take_out(node.members[place])
        for place in range(both, len(new) - tail):
            self._container(node).put_in(both - 1, self._spelling.value(new[place]))

    def _renamed(self, node: Node, old: Table, new: Table) -> dict[str, str]:
        """Keys that stay under another name: those that follow a part's new name, then any of equal value."""
        fresh = [key for key in new if key not in old]
        found: dict[str, str] = {}
        if not fresh:
            return found
        gone = [key for key in old if key not in new and node.children[key].kind != "table"]
        for matches in (lambda key, name: (key, name) in self._renames, lambda key, name: old[key] == new[name]):
            for key in [key for key in gone if key not in found]:
                name = next((name for name in fresh if matches(key, name)), None)
                if name is not None:
                    found[key] = name
                    fresh.remove(name)
        return found

    def _take_out(self, node: Node, keys: Iterable[str]) -> None:
        container = node if node.kind == "inline" else node.holder
        for key in keys:
            child = node.children[key]
            if container is not None:
                for statement in child.statements():
                    self._container(container).take_out(statement)
            elif child.kind == "table" and not child.depth:
                self._take_table(child)
            else:
                for statement in child.statements():
                    self.changes.replace(*self._lines(statement, statement), "")

    def _take_table(self, node: Node) -> None:
        """Takes a table with a header of its own out, with what stands between its lines and the blank lines above."""
        run: list[Statement] = []
        for statement in [*node.statements(), None]:
            if run and (statement is None or self._order[statement.start] != self._order[run[-1].start] + 1):
                start, end = self._lines(run[0], run[-1])
                self.changes.replace(self._above(start), end, "")
                run = []
            if statement is not None:
                run.append(statement)

    def _put_in(self, node: Node, path: tuple[str, ...], key: str, value: Plain) -> None:
        if node.kind == "inline":
            text = self._spelling.assignment(key, value)
            self._container(node).put_in(len(node.members) - 1, text)
        elif node.depth and node.latest is not None:
            self._put_dotted(node, node.latest, key, value)
        elif subtable(key, value) and len(path) == 1:
            name = ".".join(self._spelling.key(word) for word in (*path, key))
            self.changes.insert(self._end(node.statements()[-1]), self._spelling.table(name, value))
        elif node.header is None and path:
            name = ".".join(self._spelling.key(word) for word in path)
            self.changes.insert(self._end(node.statements()[-1]), self._spelling.table(name, {key: value}))
        else:
            self._put_line(node.latest, self._spelling.line(key, value))

    def _put_dotted(self, node: Node, latest: Statement, key: str, value: Plain) -> None:
        """Another key of a table that dotted keys make, dotted as its last one is."""
        prefix = self.text[latest.start : latest.keys[node.depth - 1].end]
        text = f"{prefix}.{self._spelling.assignment(key, value)}"
        if node.holder is None:
            self._put_line(latest, text)
        else:
            self._container(node.holder).put_in(node.holder.members.index(latest), text)

    def _put_line(self, after: Statement | None, line: str) -> None:
        at = 0 if after is None else self._end(after)
        indent = "" if after is None else self.text[self._start(after) : after.start]
        self.changes.insert(at, indent + line + self._spelling.newline)

    def _container(self, node: Node) -> Members:
        return self._members.setdefault(id(node), Members(node, self._spelling.newline))

    def _lines(self, first: Statement, last: Statement) -> tuple[int, int]:
        return self._start(first), self._end(last)

    def _start(self, statement: Statement) -> int:
        return self.text.rfind("\n", 0, statement.start) + 1

    def _end(self, statement: Statement) -> int:
        return self.text.index("\n", statement.end) + 1

    def _above(self, start: int) -> int:
        """Where the blank lines above a line begin."""
        while start:
            line = self.text.rfind("\n", 0, start - 1) + 1
            if self.text[line:start].strip():
                break
            start = line
        return start
