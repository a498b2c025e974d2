"""The project file: read with every fault in it, written so that the hand of its author is kept.

A save changes the values that edits changed and nothing else: comments, order, spelling and line ends stay. Whatever
is about to be written is read first; where it does not say the same as the project, the file is written afresh.
"""

from __future__ import annotations

import os
import stat
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from typing import Any, NamedTuple, cast

import tomli_w

from engine.assembly import LISTS, assembled
from engine.atomic import SaveError, replace_file
from engine.fileblocks import Blocks
from engine.filefaults import FileFault, ProjectError, located
from engine.inplace import Hand
from engine.matching import Renames, matched, renames, wanted
from engine.project import Kind, Project
from engine.reading import Plain, Unreadable, clean
from engine.schema import FORMAT, Codec
from engine.spans import BOM, Spans
from engine.spelling import Spelling
from engine.tomltext import TomlError, plain

__all__ = [
    "FileFault",
    "ProjectError",
    "ProjectFile",
    "SaveError",
    "load",
    "parse",
    "read",
    "render",
    "save",
    "saved_text",
]

LARGEST = 16 * 1024 * 1024
"""Most bytes of a project file."""
REMEMBERED = LARGEST // 4
"""Most characters of a text whose document is kept in memory for the next save."""


@dataclass(frozen=True, slots=True)
class ProjectFile:
    """A project file as read."""

    path: Path
    """Where it stands."""
    text: str
    """All of it, with its own line ends and byte order mark."""
    project: Project
    """What it says."""


def load(path: str | os.PathLike[str]) -> Project:
    """The project of a file. Raises ProjectError with every fault found, each with line and key path."""
    return read(path).project


def read(path: str | os.PathLike[str]) -> ProjectFile:
    """A project file with its text. Raises ProjectError with every fault found, each with line and key path."""
    name = os.fspath(path)
    text = _decoded(_bytes(path, name), name)
    return ProjectFile(Path(path), text, parse(text, name))


def parse(text: str, name: str = "project") -> Project:
    """The project of a text. name: what messages call its file. Raises ProjectError with every fault found."""
    try:
        return _document_and_project(text)[1]
    except TomlError as error:
        raise ProjectError(name, [error.fault]) from None
    except Unreadable as error:
        raise ProjectError(name, located(error.faults, Spans(text))) from None


def _document_and_project(text: str) -> tuple[dict[str, Plain], Project]:
    """What a text holds. The last ones are remembered, for a save begins with what the one before ended with."""
    return _remembered(text) if len(text) <= REMEMBERED else _parsed(text)


def _parsed(text: str) -> tuple[dict[str, Plain], Project]:
    document = plain(text)
    return document, assembled(document)


_remembered = lru_cache(maxsize=2)(_parsed)


def _bytes(path: str | os.PathLike[str], name: str) -> bytes:
    try:
        kind = os.stat(path).st_mode
        if stat.S_ISDIR(kind):
            raise _whole(name, "found a folder, expected a project file")
        if not stat.S_ISREG(kind):
            raise _whole(name, "found no ordinary file, expected a project file")
        with open(path, "rb") as file:
            data = file.read(LARGEST + 1)
    except FileNotFoundError:
        raise _whole(name, "found no file of this name, expected a project file") from None
    except PermissionError:
        raise _whole(name, "found a file that may not be read, expected permission to read it") from None
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) else "the name is no file name"
        raise _whole(name, f"the file cannot be read: {clean(str(reason))}") from None
    if len(data) > LARGEST:
        raise _whole(name, f"found a file above {LARGEST // 1024**2} MB, expected a project file no larger than that")
    return data


def _whole(name: str, message: str) -> ProjectError:
    return ProjectError(name, [FileFault(None, "", message)])


def _decoded(data: bytes, name: str) -> str:
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        place = error.start - (data.rfind(b"\n", 0, error.start) + 1) + 1
        found = f"found the byte 0x{data[error.start]:02X} at place {place} of the line"
        raise ProjectError(name, [FileFault(line, "", f"{found}, expected UTF-8 text")]) from None


def save(project: Project, path: str | os.PathLike[str], like: str | None = None) -> str:
    """Writes a project to a file and gives the text that the file now holds.

    like: text of a project file whose hand is kept; None: that of the file at `path`, where it is one. The write is
    atomic, and the file before is kept as `path~`. Raises SaveError, in words for a person.
    """
    name = clean(os.fspath(path))
    if like is None and os.path.lexists(path):
        try:
            like = _decoded(_bytes(path, name), name)
        except ProjectError:
            like = None  # whatever it is, it has no hand to keep, and `path~` will hold it
    text = saved_text(project, like)
    try:
        data = text.encode("utf-8")
    except UnicodeEncodeError:
        raise SaveError(f"{name} was not saved: a text in the project has a character that no file can hold") from None
    if len(data) > LARGEST:
        size = f"{len(data) / 1024**2:.1f} MB"
        raise SaveError(f"{name} was not saved: it would have {size}, and above {LARGEST // 1024**2} MB none is read")
    replace_file(path, data)
    return text


def saved_text(project: Project, base: str | None = None) -> str:
    """The text of a project's file. base: text of its file before; what no edit touched stays as it was there.

    Raises SaveError if no text can be made that reads as the project.
    """
    kept = None if base is None else _kept(project, base)
    if kept is not None and _says(kept, project):
        return kept
    fresh = _rendered(project)
    if fresh is not None and _says(fresh, project):
        return fresh
    raise SaveError("not saved: no text that reads as this project could be made; this is a fault of the program")


def _says(text: str, project: Project) -> bool:
    try:
        return parse(text).same(project)
    except ProjectError:
        return False


def render(project: Project) -> str:
    """The text of a project's file, written afresh, every key in the order of the format."""
    codec = Codec(project.settings.components)
    spelling = Spelling(_quoted)
    entries = [spelling.lines([f"format = {FORMAT}"])]
    entries.append(spelling.entry("[project]", codec.write("project", project.settings)))
    for kind in LISTS:
        entries += [spelling.entry(f"[[{kind}]]", codec.write(kind, part)) for part in _parts(project, kind)]
    return "\n".join(entries)


def _rendered(project: Project) -> str | None:
    try:
        return render(project)
    except ValueError:  # a number that is not finite
        return None


def _quoted(text: str, over_lines: bool) -> str:
    return tomli_w.dumps({"k": text}, multiline_strings=over_lines)[len("k = ") : -1]


def _parts(project: Project, kind: str) -> Sequence[Any]:
    return project.acknowledgements if kind == "acknowledge" else project.of(cast(Kind, kind))


def _kept(project: Project, base: str) -> str | None:
    """The text of a file with the changes that make it say a project; None where it cannot be the start of one."""
    try:
        document, before = _document_and_project(base)
    except (TomlError, Unreadable):
        return None
    if before.same(project):
        return base
    try:
        return _Save(base, document, before, project).text()
    except (ValueError, LookupError):  # a hand that this cannot follow: the file is then written afresh
        return None


class _Match(NamedTuple):
    """The parts of one kind before and after."""

    old: Sequence[Any]
    new: Sequence[Any]
    found: list[int | None]
    """For each new part the place of the old one that it is."""


class _Save:
    """One save in place."""

    def __init__(self, base: str, document: Mapping[str, Plain], before: Project, after: Project) -> None:
        self._document, self._before, self._after = document, before, after
        self._mark = BOM if base.startswith(BOM) else ""
        self._newline = "\r\n" if "\r\n" in base[: base.find("\n") + 1] else "\n"
        body = base.removeprefix(BOM)
        self._ending = "" if body.endswith("\n") else self._newline
        self._spans = Spans(body + self._ending)
        self._spelling = Spelling(_quoted, self._newline)
        self._codec = Codec(after.settings.components)
        self._steady = before.settings.components == after.settings.components
        self._matches, self._renames = self._matched()
        self._hand = Hand(self._spans, self._spelling, self._renames)

    def _matched(self) -> tuple[dict[str, _Match], Renames]:
        matches: dict[str, _Match] = {}
        known: Renames = frozenset()
        for kind in LISTS:
            old, new = _parts(self._before, kind), _parts(self._after, kind)
            points = matches.get("point")
            moved = renames(*points) if kind == "acknowledge" and points else frozenset()
            matches[kind] = _Match(old, new, matched(old, new, moved))
            if kind != "acknowledge":
                known |= renames(*matches[kind])
        return matches, known

    def text(self) -> str:
        """The text after the save."""
        self._change("project", self._spans.root.children["project"], self._document["project"], self._after.settings)
        for kind in LISTS:
            self._change_parts(kind, self._matches[kind])
        changes = self._hand.finish()
        blocks = Blocks(self._spans.text, self._spans.statements, self._newline)
        for kind in LISTS:
            node = self._spans.root.children.get(kind)
            if node is None or node.kind == "tables":
                match = self._matches[kind]
                blocks.arrange(kind, len(match.old), self._order(kind, match), changes.applied)
        text = blocks.composed(changes.applied)
        return self._mark + (text.removesuffix(self._ending) if self._ending else text)

    def _change(self, kind: str, node: Any, raw: Mapping[str, Plain], part: Any) -> None:
        self._hand.table(node, (kind,), raw, wanted(self._codec, kind, raw, part))

    def _change_parts(self, kind: str, match: _Match) -> None:
        """Brings the new values into every entry of a kind that has some, wherever it will stand."""
        node = self._spans.root.children.get(kind)
        if node is None:
            return
        raw = self._document[kind]
        if node.kind == "array":
            pairs = zip(match.found, match.new, strict=True)
            new = [wanted(self._codec, kind, {} if i is None else raw[i], part) for i, part in pairs]
            self._hand.array(node, (kind,), raw, new)
            return
        for place, part in zip(match.found, match.new, strict=True):
            if place is not None and not (self._steady and _same(match.old[place], part)):
                self._change(kind, node.items[place], raw[place], part)

    def _order(self, kind: str, match: _Match) -> list[int | str]:
        pairs = zip(match.found, match.new, strict=True)
        return [self._entry(kind, part) if place is None else place for place, part in pairs]

    def _entry(self, kind: str, part: Any) -> str:
        return self._spelling.entry(f"[[{kind}]]", self._codec.write(kind, part))


def _same(old: Any, new: Any) -> bool:
    return old is new or (old.same(new) if hasattr(old, "same") else bool(old == new))
