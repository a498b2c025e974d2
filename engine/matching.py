"""Which part of a project is which part of its file, and what each table of the file is to say."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import replace
from typing import Any

from engine.frozen import StressRows
from engine.project import Acknowledgement, Point
from engine.reading import Plain, Unreadable
from engine.schema import Codec

MANY = 100
"""Beyond as many parts without their like, renamed ones are told by their place alone."""

Renames = frozenset[tuple[str, str]]


def matched(old: Sequence[Any], new: Sequence[Any], renames: Renames = frozenset()) -> list[int | None]:
    """For each new part the place of the old one that it is: of the same name, or else renamed.

    A part was renamed if an old one without its like says the same but for the name, or if just one old and one new
    part are left and stand between the same others. renames: names of points, for acknowledgements.
    """
    follow = dict(renames)
    places = {_identity(part, follow): place for place, part in enumerate(old)}
    found = [places.get(_identity(part, {})) for part in new]
    gone = [place for place in range(len(old)) if place not in set(found)]
    fresh = [place for place in range(len(new)) if found[place] is None]
    if len(gone) * len(fresh) <= MANY * MANY:
        for place in fresh:
            found[place] = next((i for i in gone if _says_the_same(old[i], new[place])), None)
            gone = [i for i in gone if i != found[place]]
        fresh = [place for place in fresh if found[place] is None]
    if len(gone) == len(fresh) == 1 and _between_the_same(gone[0], fresh[0], found, len(old)):
        found[fresh[0]] = gone[0]
    return found


def _identity(part: Any, follow: Mapping[str, str]) -> Any:
    if isinstance(part, Acknowledgement):
        return follow.get(part.point, part.point), part.caution
    return part.name


def _says_the_same(old: Any, new: Any) -> bool:
    """Whether two parts differ in nothing but the name."""
    if isinstance(old, Acknowledgement):
        return False
    renamed = replace(old, name=new.name)
    return renamed.same(new) if isinstance(renamed, Point) else bool(renamed == new)


def _between_the_same(old: int, new: int, found: Sequence[int | None], count: int) -> bool:
    before = found[new - 1] if new else -1
    after = found[new + 1] if new + 1 < len(found) else count
    return before == old - 1 or after == old + 1


def renames(old: Sequence[Any], new: Sequence[Any], found: Iterable[int | None]) -> Renames:
    """(old, new) names of the parts of one kind that another name was given."""
    pairs = zip(found, new, strict=True)
    return frozenset((old[i].name, part.name) for i, part in pairs if i is not None and old[i].name != part.name)


def wanted(codec: Codec, kind: str, raw: Mapping[str, Plain], part: Any) -> dict[str, Plain]:
    """What a table of the file is to say so that it reads as a part, as close to what it says now as can be.

    codec: of the part's project. A key that says the part's value already, in whatever way, stays as it is.
    """
    document = codec.write(kind, part)
    keys = {key.name: key for key in codec.keys(kind)}
    found: dict[str, Plain] = {}
    for name, value in raw.items():
        key = keys.get(name)
        if key is None:
            found.update({name: document[name]} if name in document else {})
            continue
        says = _Says(key.read, getattr(part, key.attribute))
        if says(value):
            found[name] = value
        elif name in document:
            found[name] = _fitting(value, document[name], says)
    return {**found, **{name: value for name, value in document.items() if name not in found}}


class _Says:
    """Whether a plain value reads as a given one."""

    def __init__(self, read: Callable[[Plain], Any], value: Any) -> None:
        self._read = read
        self._value = value

    def __call__(self, plain: Plain) -> bool:
        try:
            found = self._read(plain)
        except Unreadable:
            return False
        if isinstance(found, StressRows):
            return found.same(self._value)
        return bool(found == self._value)


def _fitting(old: Plain, new: Plain, says: Callable[[Plain], bool]) -> Plain:
    """A value in the shape of the old one where such a one says the same, otherwise `new`.

    One number for a table of equal ones and the other way round; a table without keys that the old one left out.
    """
    candidates: list[Plain] = []
    if isinstance(old, Mapping) and isinstance(new, Mapping):
        candidates = [{key: new[key] for key in old if key in new}]
    elif isinstance(old, Mapping) and isinstance(new, float):
        candidates = [dict.fromkeys(old, new)]
    elif isinstance(old, int | float) and isinstance(new, Mapping):
        candidates = list(new.values())[:1]
    return next((value for value in candidates if says(value)), new)
