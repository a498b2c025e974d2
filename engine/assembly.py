"""From the plain document of a file to a Project: what stands at its top, then every part, then what must hold."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any, cast

from engine import integrity
from engine.integrity import Names
from engine.project import KINDS, PLURAL, Kind, Project, Settings
from engine.reading import Fault, Plain, Unreadable, refuse, shown, unknown_key
from engine.schema import FORMAT, Codec
from engine.stress import COMPONENTS, permutation

LISTS = (*KINDS, "acknowledge")
"""Keys at the top of the file that hold one table for each part, in the order in which they are written."""
TOP = ("format", "project", *LISTS)
"""Every key at the top of the file, in that order."""


class LaterFormat(Unreadable):
    """The file was written by a later version of this program."""


def assembled(document: Mapping[str, Plain]) -> Project:
    """The project of a document. Raises Unreadable with every fault, paths from the top of the file."""
    faults = [*_format(document), *_unknown(document)]
    draft = _Draft(document, faults)
    draft.read()
    if not faults and draft.settings is not None:
        project = draft.project(draft.settings)
        faults += integrity.faults(project)
        if not faults:
            return project
    else:
        faults += draft.loose_ends()
    raise Unreadable(*faults)


def _format(document: Mapping[str, Plain]) -> Iterator[Fault]:
    """The fault in `format`, if there is one; a later format is raised at once, for its keys are not known."""
    if "format" not in document:
        yield Fault((), f'key "format" is missing, expected format = {FORMAT} at the top of the file')
        return
    found = document["format"]
    if isinstance(found, bool) or not isinstance(found, int) or found < FORMAT:
        yield Fault(("format",), f"found {shown(found)}, expected the whole number {FORMAT}")
    elif found > FORMAT:
        message = f"found {shown(found)}, expected {FORMAT}: this file is format {shown(found)}, this program reads"
        raise LaterFormat(Fault(("format",), f"{message} format {FORMAT}: a later version wrote it"))


def _unknown(document: Mapping[str, Plain]) -> Iterator[Fault]:
    for key in document:
        if key not in TOP:
            yield Fault((key,), unknown_key(key, TOP))


@dataclass(slots=True)
class _Draft:
    """A project as far as it can be read."""

    document: Mapping[str, Plain]
    """Of the whole file."""
    faults: list[Fault]
    """What is wrong so far, paths from the top of the file."""
    settings: Settings | None = None
    """None where they cannot be read."""
    parts: dict[str, list[Any]] = field(default_factory=dict)
    """By kind; None for one that cannot be read."""

    def read(self) -> None:
        """Reads every part; what cannot be read is added to the faults."""
        codec = Codec(_components(self.document))
        if "project" not in self.document:
            self.faults.append(Fault((), "table [project] is missing, expected one with title, units, accept and more"))
        elif isinstance(self.document["project"], list):
            self.faults.append(Fault(("project",), "found [[project]], expected [project] once"))
        else:
            self.settings = self._part(codec, ("project",), self.document["project"])
        for kind in LISTS:
            tables = self._tables(kind)
            self.parts[kind] = [self._part(codec, (kind, place), table) for place, table in enumerate(tables)]

    def _tables(self, kind: str) -> list[Plain]:
        tables = self.document.get(kind, [])
        if isinstance(tables, list):
            return tables
        if isinstance(tables, Mapping):
            self.faults.append(Fault((kind,), f"found [{kind}], expected [[{kind}]], one for each {kind}"))
        else:
            self.faults += [fault.under(kind) for fault in refuse(tables, f"tables [[{kind}]]").faults]
        return []

    def _part(self, codec: Codec, path: tuple[str | int, ...], table: Plain) -> Any:
        try:
            return codec.read(str(path[0]), table)
        except Unreadable as error:
            self.faults += [fault.under(*path) for fault in error.faults]
            return None

    def project(self, settings: Settings) -> Project:
        """The project of all that could be read."""
        read = {kind: tuple(part for part in parts if part is not None) for kind, parts in self.parts.items()}
        lists = {PLURAL[kind]: read[kind] for kind in KINDS}
        return Project(settings, **lists, acknowledgements=read["acknowledge"])

    def loose_ends(self) -> list[Fault]:
        """What the readable parts say about others that cannot hold, whatever the unreadable ones were to say."""
        names = Names({kind: self._names(kind) for kind in KINDS})
        project = self.project(cast(Settings, self.settings))  # looked at for the units of loads alone
        found: list[Fault] = []
        for kind, parts in self.parts.items():
            for place, part in enumerate(parts):
                if part is not None and (kind != "load" or self.settings is not None):
                    found += [fault.under(kind, place) for fault in integrity.of_part(kind, part, project, names)]
        return found

    def _names(self, kind: Kind) -> frozenset[str]:
        tables = self.document.get(kind, [])
        tables = tables if isinstance(tables, list) else [tables]
        names = [table.get("name") for table in tables if isinstance(table, Mapping)]
        return frozenset(name for name in names if isinstance(name, str))


def _components(document: Mapping[str, Plain]) -> tuple[str, ...]:
    """The order of stress rows in the file; where it cannot be read (a fault of its own), the engine's."""
    table = document.get("project")
    order = table.get("components") if isinstance(table, Mapping) else None
    names = tuple(order.split()) if isinstance(order, str) else ()
    try:
        permutation(names)
    except ValueError:
        return COMPONENTS
    return names
