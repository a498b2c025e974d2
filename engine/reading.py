"""Readers of plain values (what TOML or an edit holds) into typed ones, and back. Nothing unreadable gets a default."""

from __future__ import annotations

import difflib
import math
import unicodedata
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from datetime import date, time
from itertools import pairwise
from typing import Any

import numpy as np

from engine.frozen import FrozenMap, StressRows

Path = tuple[str | int, ...]
Plain = Any
Reader = Callable[[Plain], Any]


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing that is wrong, and where."""

    path: Path
    """Keys and places (from 0), from the top of the file or from the part being read."""
    message: str
    """What was found and what was expected, in a sentence without a full stop."""

    def under(self, *path: str | int) -> Fault:
        """The same fault seen from further up."""
        return Fault((*path, *self.path), self.message)


class Unreadable(ValueError):
    """A value cannot be taken as it stands."""

    def __init__(self, *faults: Fault) -> None:
        super().__init__("; ".join(fault.message for fault in faults))
        self.faults = faults


def refuse(found: Plain, expected: str) -> Unreadable:
    """The error for one value."""
    return Unreadable(Fault((), f"found {shown(found)}, expected {expected}"))


def shown(value: Plain) -> str:
    """A value as a message quotes it: short, and without control characters."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return f'"{clean(value)[:40]}"' + ("..." if len(value) > 40 else "")
    if isinstance(value, Mapping):
        return "a table"
    if isinstance(value, list | tuple):
        return f"a list of {len(value)}"
    if isinstance(value, date | time):
        return f"the date or time {value}"
    if isinstance(value, int) and abs(value) >= 10**15:
        return "a very large whole number"
    return repr(value)


def clean(text: str) -> str:
    """Text with each control or formatting character replaced, so that a terminal may show it."""
    return "".join(
        "\N{REPLACEMENT CHARACTER}" if unicodedata.category(c) in {"Cc", "Cf", "Zl", "Zp", "Cs"} else c for c in text
    )


def did_you_mean(word: str, known: Iterable[str]) -> str:
    """' (did you mean "x"?)' where a known word is close, otherwise nothing."""
    spelt = {name.casefold(): name for name in known}
    close = [spelt[found] for found in difflib.get_close_matches(word.casefold(), spelt, n=1, cutoff=0.6)]
    return f' (did you mean "{clean(close[0])}"?)' if close else ""


def number(above: float = -math.inf, least: float = -math.inf, most: float = math.inf) -> Reader:
    """Reader of a finite number; `above` excludes its bound, `least` and `most` include theirs."""
    bounds = [f"above {above:g}"] if above > -math.inf else []
    bounds += [f"at least {least:g}"] if least > -math.inf else []
    bounds += [f"at most {most:g}"] if most < math.inf else []
    expected = "a number" + (f" {' and '.join(bounds)}" if bounds else "")

    def read(value: Plain) -> float:
        if isinstance(value, bool) or not isinstance(value, int | float):
            raise refuse(value, expected)
        try:
            found = float(value)
        except OverflowError:
            raise refuse(value, f"{expected} that a computer's number can hold") from None
        if not math.isfinite(found):
            raise refuse(value, f"{expected}, finite")
        if not (found > above and found >= least and found <= most):
            raise refuse(value, expected)
        return found + 0.0  # no negative zero: it would be written back as -0.0

    return read


def text(value: Plain) -> str:
    """Any text that a file can hold."""
    if not isinstance(value, str):
        raise refuse(value, "text in quotes")
    if any("\ud800" <= c <= "\udfff" for c in value):
        raise refuse(value, "text of whole characters")
    return value


def name(value: Plain) -> str:
    """A name: text, not empty, without control characters."""
    found = text(value)
    if not found.strip():
        raise refuse(value, "a name that is not empty")
    if any(unicodedata.category(c) in {"Cc", "Zl", "Zp", "Cs"} for c in found):
        raise refuse(value, "a name without control characters")
    return found


def flag(value: Plain) -> bool:
    """true or false."""
    if not isinstance(value, bool):
        raise refuse(value, "true or false")
    return value


def choice(*options: str) -> Reader:
    """Reader of one of a few words."""
    expected = (
        ", ".join(f'"{o}"' for o in options[:-1]) + f' or "{options[-1]}"' if len(options) > 1 else f'"{options[0]}"'
    )

    def read(value: Plain) -> str:
        if not isinstance(value, str):
            raise refuse(value, expected)
        if value not in options:
            raise refuse(value, expected + did_you_mean(value, options))
        return value

    return read


def many(item: Reader, expected: str, count: int | None = None) -> Reader:
    """Reader of a list, of a given length where one is asked, into a tuple; every bad item is a fault."""

    def read(value: Plain) -> tuple[Any, ...]:
        if not isinstance(value, list | tuple) or (count is not None and len(value) != count):
            raise refuse(value, expected)
        return tuple(_each(enumerate(value), item).values())

    return read


def mapping(item: Reader, expected: str, keys: Iterable[str] | None = None) -> Reader:
    """Reader of a table into a FrozenMap; with `keys`, no other key may stand in it."""
    known = None if keys is None else tuple(keys)

    def read(value: Plain) -> FrozenMap[Any]:
        if not isinstance(value, Mapping):
            raise refuse(value, expected)
        unknown = [key for key in value if known is not None and key not in known]
        if unknown and known is not None:
            raise Unreadable(*(Fault((key,), unknown_key(key, known)) for key in unknown))
        return FrozenMap(_each(value.items(), item))

    return read


def unknown_key(key: str, known: Iterable[str]) -> str:
    """Message for a key that the format does not have."""
    known = tuple(known)
    return f'unknown key "{clean(key)[:40]}", expected one of {", ".join(known)}{did_you_mean(key, known)}'


def _each(items: Iterable[tuple[Any, Plain]], item: Reader) -> dict[Any, Any]:
    """Each item read; all that fail are raised together, each under its key."""
    found: dict[Any, Any] = {}
    faults: list[Fault] = []
    for key, value in items:
        try:
            found[key] = item(value)
        except Unreadable as error:
            faults += [fault.under(key) for fault in error.faults]
    if faults:
        raise Unreadable(*faults)
    return found


def ascending(value: tuple[tuple[float, ...], ...]) -> tuple[tuple[float, ...], ...]:
    """The rows of a temperature table, refused where the temperatures do not rise strictly."""
    for place, (before, after) in enumerate(pairwise(value), 1):
        if not after[0] > before[0]:
            message = f"found temperature {after[0]:g} after {before[0]:g}, expected strictly ascending temperatures"
            raise Unreadable(Fault((place,), message))
    return value


def stress_rows(order: np.ndarray) -> Reader:
    """Reader of a table of stress rows whose numbers stand in a file's component order.

    order: (6,) places so that `row[order]` stands in the engine's order.
    """
    row = many(number(), "a row of 6 numbers", 6)

    def read(value: Plain) -> StressRows:
        if not isinstance(value, Mapping):
            raise refuse(value, "a table of rows of 6 numbers")
        rows = _each(value.items(), row)
        array = np.array(list(rows.values()), dtype=np.float64).reshape(-1, 6)
        return StressRows(rows, array[:, order])

    return read
