"""Every change to a Project, as data: apply it, invert it, say it in a line.

Edits address parts by name and hold plain values in the file's own keys, so that a history and a journal are
lists of the same edits. Stress rows in them stand in the engine's component order.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any, cast

from engine import integrity
from engine.figures import number_text
from engine.frozen import StressRows
from engine.integrity import Names
from engine.project import PLURAL, Acknowledgement, Entity, Kind, Project
from engine.reading import Fault, Plain, Unreadable, clean, number, shown
from engine.references import renamed_everywhere, uses
from engine.schema import PARTS, Codec

CODEC = Codec()


class Refusal(ValueError):
    """An edit cannot be applied; the message says why, for a person."""


@dataclass(frozen=True, slots=True)
class Set:
    """Give one key of a part a value."""

    kind: str
    """A kind of part, or "project" for the settings."""
    name: str
    """Of the part; empty for the settings."""
    path: tuple[str, ...]
    """Key of the file, and where it holds a table the key in that: ("loads", "haul")."""
    value: Plain
    """Plain value as the file would hold it; None: the key is absent."""


@dataclass(frozen=True, slots=True)
class Insert:
    """Add a part."""

    kind: Kind
    """Kind of part."""
    index: int
    """Its place among its kind, from 0."""
    document: Mapping[str, Plain]
    """Its plain table."""


@dataclass(frozen=True, slots=True)
class Remove:
    """Take a part away that nothing refers to (see `engine.removal.removal` for one that something does)."""

    kind: Kind
    """Kind of part."""
    name: str
    """Of the part."""


@dataclass(frozen=True, slots=True)
class Rename:
    """Give a part another name, everywhere it is referred to."""

    kind: Kind
    """Kind of part."""
    old: str
    """Name before."""
    new: str
    """Name after."""


@dataclass(frozen=True, slots=True)
class Move:
    """Change the place of a part among its kind."""

    kind: Kind
    """Kind of part."""
    name: str
    """Of the part."""
    index: int
    """Its place afterwards, from 0."""


@dataclass(frozen=True, slots=True)
class Acknowledge:
    """Take a blocking caution on."""

    point: str
    """Name of the point."""
    caution: str
    """Name of the caution."""
    by: str
    """Who."""
    reason: str
    """Why."""
    index: int | None = None
    """Place among the acknowledgements; None: the end."""


@dataclass(frozen=True, slots=True)
class Withdraw:
    """Take an acknowledgement back."""

    point: str
    """Name of the point."""
    caution: str
    """Name of the caution."""


@dataclass(frozen=True, slots=True)
class Batch:
    """Several edits that are one step."""

    edits: tuple[Edit, ...]
    """In order."""
    label: str
    """What they do, in a few words."""


Edit = Set | Insert | Remove | Rename | Move | Acknowledge | Withdraw | Batch


def apply(project: Project, edit: Edit) -> Project:
    """The project after an edit, sharing all that did not change. Raises Refusal; the project given is untouched."""
    try:
        return _apply(project, edit)
    except Unreadable as error:
        raise Refusal(_sentence(error.faults[0])) from None


def _apply(project: Project, edit: Edit) -> Project:
    match edit:
        case Set():
            return _set(project, edit)
        case Insert():
            return _insert(project, edit)
        case Remove():
            return _remove(project, edit)
        case Rename():
            return _rename(project, edit)
        case Move():
            return _move(project, edit)
        case Acknowledge():
            return _acknowledge(project, edit)
        case Withdraw():
            return _withdraw(project, edit)
        case Batch():
            for step in edit.edits:
                project = _apply(project, step)
            return project


def inverse(project: Project, edit: Edit) -> Edit:
    """The edit that takes `edit` back, given the project before it. Raises Refusal where it does not apply."""
    match edit:
        case Set():
            return _inverse_set(project, edit)
        case Insert():
            return Remove(edit.kind, str(edit.document.get("name", "")))
        case Remove():
            _kind(edit.kind)
            document = CODEC.write(edit.kind, _part(project, edit.kind, edit.name))
            return Insert(edit.kind, project.index(edit.kind, edit.name), document)
        case Rename():
            return Rename(edit.kind, edit.new, edit.old)
        case Move():
            _kind(edit.kind)
            _part(project, edit.kind, edit.name)
            return replace(edit, index=project.index(edit.kind, edit.name))
        case Acknowledge():
            return Withdraw(edit.point, edit.caution)
        case Withdraw():
            place, given = _acknowledged(project, edit)
            return Acknowledge(given.point, given.caution, given.by, given.reason, place)
        case Batch():
            back: list[Edit] = []
            for step in edit.edits:
                back.append(inverse(project, step))
                project = apply(project, step)
            return Batch(tuple(reversed(back)), edit.label)


def _inverse_set(project: Project, edit: Set) -> Set:
    part = _part(project, edit.kind, edit.name)
    if len(edit.path) > 1:
        table = _plain(part, edit.kind, edit.path[:-1])
        if isinstance(table, Mapping) and not table:  # an empty table that was written out comes back as one
            return replace(edit, path=edit.path[:-1], value={})
    return replace(edit, value=_plain(part, edit.kind, edit.path))


def describe(project: Project, edit: Edit) -> str:
    """An edit in one line, given the project before it: "LC03 haul 12000 -> 13500"."""
    match edit:
        case Set():
            what = " ".join(clean(word) for word in (edit.name, *_spoken(edit.path)) if word)
            old = _plain(_part(project, edit.kind, edit.name), edit.kind, edit.path)
            return f"{what} {value_text(old)} -> {value_text(edit.value)}"
        case Insert():
            return f"add {edit.kind} {clean(str(edit.document.get('name', '')))}"
        case Remove():
            return f"delete {edit.kind} {clean(edit.name)}"
        case Rename():
            return f"rename {edit.kind} {clean(edit.old)} -> {clean(edit.new)}"
        case Move():
            return f"move {edit.kind} {clean(edit.name)} to place {edit.index + 1}"
        case Acknowledge():
            return f"acknowledge {edit.caution} at {clean(edit.point)}"
        case Withdraw():
            return f"withdraw the acknowledgement of {edit.caution} at {clean(edit.point)}"
        case Batch():
            return edit.label


def value_text(value: Plain) -> str:
    """A plain value as a line about an edit shows it."""
    if value is None:
        return "nothing"
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, int | float):
        return number_text(float(value))
    if isinstance(value, Mapping):
        return "{" + ", ".join(f"{clean(str(k))} {value_text(v)}" for k, v in value.items()) + "}"
    if isinstance(value, list | tuple):
        return "[" + ", ".join(value_text(v) for v in value) + "]"
    return shown(value)


def _spoken(path: tuple[str, ...]) -> tuple[str, ...]:
    """The path without the word that the member makes plain: a case's `loads haul` is its `haul`."""
    return path[1:] if len(path) > 1 and path[0] in {"loads", "combine"} else path


def _sentence(fault: Fault) -> str:
    where = ".".join(str(step) for step in fault.path)
    return f"{clean(where)}: {fault.message}" if where else fault.message


def _part(project: Project, kind: str, name: str) -> Any:
    if kind == "project":
        return project.settings
    if kind not in PLURAL:
        raise Refusal(f"there is no kind of part called {shown(kind)}")
    try:
        return project.find(kind, name)
    except KeyError:
        raise Refusal(f"no {kind} is named {shown(name)}") from None


def _with(project: Project, kind: Kind, parts: tuple[Entity, ...]) -> Project:
    return replace(project, **{PLURAL[kind]: parts})  # type: ignore[arg-type]


def _plain(part: Any, kind: str, path: tuple[str, ...]) -> Plain:
    """The plain value at a path, None where it is absent."""
    if not path:
        raise Refusal("an edit of nothing")
    document = part.dimensions if kind == "section" and path[0] in part.dimensions else None
    if document is not None:
        return document[path[0]]
    try:
        key = CODEC.key(kind, path[0])
    except KeyError:
        raise Refusal(f"a {kind} has no {shown(path[0])}") from None
    value = getattr(part, key.attribute)
    if len(path) == 1 and isinstance(value, StressRows):
        return key.write(value) if len(value) else None
    if len(path) == 2 and isinstance(value, StressRows):
        row = value.get(path[1])
        return None if row is None else row.tolist()
    written = CODEC.write(kind, part).get(path[0])
    return written if len(path) == 1 else _member(written, path[1:])


def _member(value: Plain, path: tuple[str, ...]) -> Plain:
    for word in path:
        value = value.get(word) if isinstance(value, Mapping) else None
    return value


def _set(project: Project, edit: Set) -> Project:
    part = _part(project, edit.kind, edit.name)
    if not edit.path or edit.path == ("name",):
        raise Refusal("a name is changed by renaming")
    changed = _changed(part, edit)
    if edit.kind == "project":
        return _settings_set(project, changed)
    kind = cast(Kind, edit.kind)
    after = _replaced(project, kind, part, changed)
    _hold(after, kind, changed)
    if kind == "case" and edit.path[0] in {"combine", "temperature"}:
        _hold_combinations(after)
    return after


def _changed(part: Any, edit: Set) -> Any:
    """The part with the new value, read as the file would be."""
    _plain(part, edit.kind, edit.path[:1])  # refuses a key that the kind does not have
    rows = getattr(part, edit.path[0].replace("-", "_"), None)
    if len(edit.path) == 2 and isinstance(rows, StressRows):
        key = CODEC.key(edit.kind, edit.path[0])
        row = None if edit.value is None else key.read({edit.path[1]: edit.value}).array[0]
        return replace(part, **{key.attribute: rows.put(edit.path[1], row)})
    if len(edit.path) == 2 and edit.path[0] in {"loads", "combine"} and edit.kind == "case":
        return _magnitude_set(part, edit)
    document = CODEC.write(edit.kind, part)
    _place(document, edit.path, edit.value)
    return CODEC.read(edit.kind, document)


def _place(table: dict[str, Plain], path: tuple[str, ...], value: Plain) -> None:
    """Set a value in a plain table, or take it away with None; a table in it that becomes empty goes too."""
    key, *rest = path
    if rest:
        inner = table.get(key, {})
        if not isinstance(inner, Mapping):
            raise Refusal(f"{clean(key)} is one value here, not a table: set it whole")
        changed = dict(inner)
        _place(changed, tuple(rest), value)
        value = changed or None
    if value is None:
        table.pop(key, None)
    else:
        table[key] = value


def _magnitude_set(part: Any, edit: Set) -> Any:
    """The commonest edit of all, without a way through the whole document."""
    items = dict(getattr(part, edit.path[0]))
    if edit.value is None:
        items.pop(edit.path[1], None)
    else:
        items[edit.path[1]] = number()(edit.value)
    return replace(part, **{edit.path[0]: type(getattr(part, edit.path[0]))(items)})


def _replaced(project: Project, kind: Kind, old: Entity, new: Entity) -> Project:
    parts = list(project.of(kind))
    parts[project.index(kind, old.name)] = new
    return _with(project, kind, tuple(parts))


def _settings_set(project: Project, settings: Any) -> Project:
    after = replace(project, settings=settings)
    if settings.units != project.settings.units:
        for load in after.loads:
            _hold(after, "load", load)
    return after


def _hold(project: Project, kind: str, part: Any) -> None:
    faults = integrity.of_part(kind, part, project, Names.in_project(project))
    if faults:
        raise Refusal(_sentence(faults[0]))


def _hold_combinations(project: Project) -> None:
    faults = integrity.of_combinations(project)
    if faults:
        raise Refusal(faults[0].message)


def _insert(project: Project, edit: Insert) -> Project:
    _kind(edit.kind)
    part = CODEC.read(edit.kind, edit.document)
    _free(project, edit.kind, part.name)
    parts = list(project.of(edit.kind))
    parts.insert(max(0, edit.index), part)
    after = _with(project, edit.kind, tuple(parts))
    _hold(after, edit.kind, part)
    if edit.kind == "case":
        _hold_combinations(after)
    return after


def _free(project: Project, kind: Kind, name: str) -> None:
    if name in project.names(kind):
        raise Refusal(f"there is a {kind} named {shown(name)} already")


def _kind(kind: str) -> None:
    if kind not in PLURAL:
        raise Refusal(f"there is no kind of part called {shown(kind)}")


def _remove(project: Project, edit: Remove) -> Project:
    _kind(edit.kind)
    part = _part(project, edit.kind, edit.name)
    users = uses(project, edit.kind, edit.name)
    if users:
        raise Refusal(f"{edit.kind} {clean(edit.name)} is used by {clean(users[0])}")
    return _with(project, edit.kind, tuple(other for other in project.of(edit.kind) if other is not part))


def _rename(project: Project, edit: Rename) -> Project:
    _kind(edit.kind)
    part = _part(project, edit.kind, edit.old)
    new = PARTS[edit.kind].keys[0].read(edit.new)
    if new == edit.old:
        return project
    _free(project, edit.kind, new)
    after = _replaced(project, edit.kind, part, replace(part, name=new))
    return renamed_everywhere(after, edit.kind, edit.old, new)


def _move(project: Project, edit: Move) -> Project:
    _kind(edit.kind)
    part = _part(project, edit.kind, edit.name)
    parts = [other for other in project.of(edit.kind) if other is not part]
    parts.insert(max(0, edit.index), part)
    return _with(project, edit.kind, tuple(parts))


def _acknowledge(project: Project, edit: Acknowledge) -> Project:
    document = {"point": edit.point, "caution": edit.caution, "by": edit.by, "reason": edit.reason}
    given: Acknowledgement = CODEC.read("acknowledge", document)
    _hold(project, "acknowledge", given)
    if any((a.point, a.caution) == (given.point, given.caution) for a in project.acknowledgements):
        raise Refusal(f"{given.caution} at {clean(given.point)} is acknowledged already")
    parts = list(project.acknowledgements)
    parts.insert(len(parts) if edit.index is None else edit.index, given)
    return replace(project, acknowledgements=tuple(parts))


def _acknowledged(project: Project, edit: Withdraw) -> tuple[int, Acknowledgement]:
    for place, given in enumerate(project.acknowledgements):
        if (given.point, given.caution) == (edit.point, edit.caution):
            return place, given
    raise Refusal(f"{clean(edit.caution)} at {clean(edit.point)} is not acknowledged")


def _withdraw(project: Project, edit: Withdraw) -> Project:
    place, _ = _acknowledged(project, edit)
    kept = project.acknowledgements[:place] + project.acknowledgements[place + 1 :]
    return replace(project, acknowledgements=kept)
