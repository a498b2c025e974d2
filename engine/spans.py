"""Where everything stands in a TOML text that tomllib has accepted: a scanner that keeps offsets.

tomllib decides what is valid and what a value is; this only finds where it is written, for the line of an error
and for changing one value in place. Nothing here recurses into the text: nested values are opened when asked for.
"""

from __future__ import annotations

import re
import tomllib
from bisect import bisect_right
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Literal, NamedTuple

BOM = "\ufeff"
Kind = Literal["scalar", "array", "inline", "table", "tables"]

_STRING = (
    r'"""(?:[^"\\]++|\\[\s\S]|"{1,2}+(?!"))*+"{3,5}+'
    r"|'''(?:[^']++|'{1,2}+(?!'))*+'{3,5}+"
    r'|"(?!"")(?:[^"\\\n]++|\\.)*+"'
    r"|'(?!'')[^'\n]*+'"
)
_DATE = r"\d{4}-\d\d-\d\d(?:[Tt ]\d\d:[0-9:.]++(?:[Zz]|[+-]\d\d:\d\d)?)?"
_SPACE = re.compile(r"(?:[ \t\r\n]++|#[^\n]*+)*+")
_BETWEEN = re.compile(r"(?:[ \t\r\n,]++|#[^\n]*+)*+")
_KEY = re.compile(r"""[A-Za-z0-9_-]++|"(?:[^"\\\n]++|\\.)*+"|'[^'\n]*+'""")
_DOT = re.compile(r"[ \t]*+\.[ \t]*+")
_EQUALS = re.compile(r"[ \t]*+=[ \t]*+")
_HEAD = re.compile(r"\[\[?+[ \t]*+")
_TAIL = re.compile(r"[ \t]*+\]\]?")
_FLAT = re.compile(r"""\[[^\[\]{}"'#]*+\]""")
_SCALAR = re.compile(rf"""{_STRING}|{_DATE}|[^\s,\[\]{{}}#"'=]++""")
_BRACKET = re.compile(rf"""(?:[^\[\]{{}}"'#]++|\#[^\n]*+|{_STRING})*+([\[\]{{}}])""")


class Span(NamedTuple):
    """A stretch of the text."""

    start: int
    """Offset of its first character."""
    end: int
    """Offset after its last."""


class Part(NamedTuple):
    """One part of a dotted key, as written."""

    name: str
    """What it says, unquoted."""
    start: int
    """Offset of its first character, quotes included."""
    end: int
    """Offset after its last."""


class Statement(NamedTuple):
    """An assignment (in a line of its own or in an inline table), a table header, or an element of an array."""

    brackets: int
    """0: an assignment or an element; 1: a [table] header; 2: a [[table]] header."""
    keys: tuple[Part, ...]
    """Its dotted key; empty for an element."""
    start: int
    """Offset of its first character."""
    value: int
    """Offset of the value's first character; of a header, that after it."""
    end: int
    """Offset after its last character, trailing comment excluded."""


class ScanError(ValueError):
    """The text is not TOML after all (tomllib would have refused it)."""

    def __init__(self, offset: int) -> None:
        super().__init__(f"no TOML at offset {offset}")
        self.offset = offset


def statements(text: str) -> Iterator[Statement]:
    """Every assignment and header that has lines of its own, in order. Raises ScanError where one does not end."""
    pos = _past(_SPACE, text, 1 if text.startswith(BOM) else 0)
    while pos < len(text):
        found = _header(text, pos) if text[pos] == "[" else _assignment(text, pos)
        yield found
        pos = _past(_SPACE, text, found.end)


def begun(text: str) -> Iterator[Statement]:
    """Every statement of a text that may be broken; at last the one that does not end, with its key if it has one."""
    pos = 1 if text.startswith(BOM) else 0
    try:
        for statement in statements(text):
            yield statement
            pos = statement.end
    except ScanError:
        yield _unfinished(text, _past(_SPACE, text, pos))


def _unfinished(text: str, pos: int) -> Statement:
    brackets = 2 if text.startswith("[[", pos) else int(text.startswith("[", pos))
    try:
        keys, after = _keys(text, _past(_HEAD, text, pos) if brackets else pos)
    except ScanError:
        keys, after = (), pos
    equals = _EQUALS.match(text, after)
    return Statement(brackets, keys, pos, after if equals is None else equals.end(), len(text))


def _past(pattern: re.Pattern[str], text: str, pos: int) -> int:
    match = pattern.match(text, pos)
    if match is None:
        raise ScanError(pos)
    return match.end()


def _header(text: str, pos: int) -> Statement:
    inner = _past(_HEAD, text, pos)
    keys, after = _keys(text, inner)
    end = _past(_TAIL, text, after)
    return Statement(2 if text.startswith("[[", pos) else 1, keys, pos, end, end)


def _assignment(text: str, pos: int) -> Statement:
    keys, after = _keys(text, pos)
    value = _past(_EQUALS, text, after)
    return Statement(0, keys, pos, value, value_end(text, value))


def _keys(text: str, pos: int) -> tuple[tuple[Part, ...], int]:
    parts: list[Part] = []
    while True:
        match = _KEY.match(text, pos)
        if match is None:
            raise ScanError(pos)
        parts.append(Part(_unquoted(match.group()), pos, match.end()))
        dot = _DOT.match(text, match.end())
        if dot is None:
            return tuple(parts), match.end()
        pos = dot.end()


def _unquoted(word: str) -> str:
    if word[0] not in "\"'":
        return word
    if "\\" not in word or word[0] == "'":
        return word[1:-1]
    try:
        return str(tomllib.loads(f"k = {word}")["k"])
    except tomllib.TOMLDecodeError:
        return word[1:-1]


def value_end(text: str, pos: int) -> int:
    """Offset after the value that starts at `pos`."""
    if text[pos : pos + 1] not in ("[", "{"):
        return _past(_SCALAR, text, pos)
    flat = _FLAT.match(text, pos)
    if flat is not None:
        return flat.end()
    *_, (_, end) = _brackets(text, pos)
    return end


def _brackets(text: str, pos: int) -> Iterator[tuple[int, int]]:
    """From a bracket to the one that closes it: how many are open after each, and the offset there."""
    depth = 0
    while True:
        match = _BRACKET.match(text, pos)
        if match is None:
            raise ScanError(pos)
        depth += 1 if match.group(1) in "[{" else -1
        pos = match.end()
        yield depth, pos
        if depth == 0:
            return


def deeper(text: str, pos: int, limit: int) -> bool:
    """Whether lists and tables stand more than `limit` deep in one another in what starts at `pos`."""
    try:
        return text[pos : pos + 1] in ("[", "{") and any(depth > limit for depth, _ in _brackets(text, pos))
    except ScanError:
        return False


def _members(text: str, start: int, keyed: bool) -> list[Statement]:
    """The elements of an array, or the assignments of an inline table, that opens at `start`."""
    found: list[Statement] = []
    pos = _past(_BETWEEN, text, start + 1)
    while text[pos : pos + 1] not in ("]", "}"):
        member = _assignment(text, pos) if keyed else Statement(0, (), pos, pos, value_end(text, pos))
        found.append(member)
        pos = _past(_BETWEEN, text, member.end)
    return found


class Node:
    """One key or element: a value as written, or a table that headers and dotted keys make up."""

    __slots__ = (
        "_children",
        "_items",
        "_members",
        "depth",
        "end",
        "header",
        "holder",
        "key",
        "kind",
        "latest",
        "start",
        "text",
    )

    kind: Kind
    """scalar, array and inline are written values; table is anything that headers or dotted keys make; tables is a
    list of [[table]]s."""
    start: int
    """Offset of the value's first character; of a table, that of the header or dotted key that first names it."""
    end: int
    """Offset after its last; of a table, that of the header or dotted key."""
    key: Part | None
    """Its name where first written; None for an element."""
    latest: Statement | None
    """The statement that writes it; of a table, the last one that adds a key to it, its header if none does."""
    header: Statement | None
    """Of a table, its header; None where it has none."""
    depth: int
    """Of a table that dotted keys make: how many parts of `latest`'s key lead to it; 0 for one with a header."""
    holder: Node | None
    """The array or inline table that it stands in; None where it has lines of its own."""

    def __init__(
        self, text: str, kind: Kind, span: Span, key: Part | None, latest: Statement | None, holder: Node | None = None
    ) -> None:
        self.text = text
        self.kind, self.key, self.latest, self.holder = kind, key, latest, holder
        self.start, self.end = span
        self.header = None
        self.depth = 0
        self._children: dict[str, Node] | None = {} if kind == "table" else None
        self._items: list[Node] | None = [] if kind == "tables" else None
        self._members: list[Statement] | None = None

    @property
    def members(self) -> list[Statement]:
        """Elements of an array, assignments of an inline table, in order; nothing for another kind."""
        if self._members is None:
            written = self.kind in ("array", "inline")
            self._members = _members(self.text, self.start, self.kind == "inline") if written else []
        return self._members

    @property
    def children(self) -> dict[str, Node]:
        """What stands under each name of a table or inline table; nothing for another kind."""
        if self._children is None:
            self._children = {}
            if self.kind == "inline":
                for member in self.members:
                    _assign(self, member, self)
        return self._children

    @property
    def items(self) -> list[Node]:
        """The elements of an array or of a list of tables; nothing for another kind."""
        if self._items is None:
            self._items = []
            if self.kind == "array":
                self._items = [_written(self.text, member, self) for member in self.members]
        return self._items

    def statements(self) -> list[Statement]:
        """Every statement that writes any of it, in order of the text."""
        if self.kind not in ("table", "tables"):
            return [] if self.latest is None else [self.latest]
        own = [] if self.header is None else [self.header]
        inner = [s for node in (*self.children.values(), *self.items) for s in node.statements()]
        return sorted([*own, *inner], key=lambda statement: statement.start)


def _written(text: str, statement: Statement, holder: Node | None) -> Node:
    """The node of a value as written."""
    opens = text[statement.value]
    kind: Kind = "array" if opens == "[" else "inline" if opens == "{" else "scalar"
    key = statement.keys[-1] if statement.keys else None
    return Node(text, kind, Span(statement.value, statement.end), key, statement, holder)


def _assign(table: Node, statement: Statement, holder: Node | None) -> None:
    """Puts an assignment's value where its dotted key says."""
    for depth, part in enumerate(statement.keys[:-1], 1):
        below = table.children.get(part.name)
        if below is None:
            below = Node(table.text, "table", Span(part.start, part.end), part, statement, holder)
            table.children[part.name] = below
        below.latest, below.depth = statement, depth
        table = below
    table.children[statement.keys[-1].name] = _written(table.text, statement, holder)


class _Builder:
    """Grows the tree, one statement after the other."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.root = Node(text, "table", Span(0, 0), None, None)
        self.current = self.root

    def take(self, statement: Statement) -> None:
        if statement.brackets:
            self.current = self._opened(statement)
            self.current.header = statement
        else:
            _assign(self.current, statement, None)
        self.current.latest = statement

    def _opened(self, statement: Statement) -> Node:
        node = self.root
        for part in statement.keys[:-1]:
            node = self._below(node, part)
        last = statement.keys[-1]
        span = Span(statement.start, statement.end)
        if statement.brackets == 1:
            table = self._below(node, last)
            table.start, table.end = span
            table.key, table.depth = last, 0
            return table
        tables = node.children.get(last.name)
        if tables is None:
            tables = node.children[last.name] = Node(self.text, "tables", span, last, None)
        tables.items.append(Node(self.text, "table", span, None, None))
        return tables.items[-1]

    def _below(self, node: Node, part: Part) -> Node:
        below = node.children.get(part.name)
        if below is None:
            below = Node(self.text, "table", Span(part.start, part.end), part, None)
            node.children[part.name] = below
        return below.items[-1] if below.kind == "tables" else below


@dataclass(frozen=True, slots=True)
class Place:
    """Where a key path is written."""

    key: Span | None
    """Its key; None for an element of a list."""
    value: Span
    """Its value; of a table, its header."""
    line: int
    """Line of the key (of the element, of the header), from 1."""
    column: int
    """Column of the same, in characters, from 1."""
    whole: bool
    """Whether all of the path was found; otherwise this is the part of it that was."""


class Spans:
    """The tree of a text, and the place of every key path in it."""

    def __init__(self, text: str) -> None:
        """text: as read, with its newlines and byte order mark. Raises ScanError where it is no TOML."""
        self.text = text
        self.statements = tuple(statements(text))
        builder = _Builder(text)
        for statement in self.statements:
            builder.take(statement)
        self.root = builder.root

    def find(self, path: Sequence[str | int]) -> Place:
        """The place of a path of keys and places (from 0), or of as much of its beginning as is written."""
        node, whole = self.root, True
        for step in path:
            below = _step(node, step)
            if below is None:
                whole = False
                break
            node = below
        key = None if node.key is None else Span(node.key.start, node.key.end)
        line, column = self.position(node.start if key is None else key.start)
        return Place(key, Span(node.start, node.end), line, column, whole)

    @cached_property
    def _line_starts(self) -> list[int]:
        return [0, *(match.end() for match in re.finditer("\n", self.text))]

    def position(self, offset: int) -> tuple[int, int]:
        """Line and column of an offset, both from 1; a byte order mark has no column."""
        line = bisect_right(self._line_starts, offset)
        start = self._line_starts[line - 1]
        marked = line == 1 and self.text.startswith(BOM)
        return line, max(1, offset - start + 1 - marked)


def _step(node: Node, step: str | int) -> Node | None:
    if isinstance(step, str):
        return node.children.get(step)
    return node.items[step] if 0 <= step < len(node.items) else None
