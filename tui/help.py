"""The page of keys, made from the bindings, so that it cannot drift from them."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

from rich.text import Text
from textual.binding import Binding, BindingType

from .entry_line import KEYS
from .grid import Grid
from .words import CAUTION

if TYPE_CHECKING:
    from .desk import Desk

_SPELLED = {
    "left_square_bracket": "[",
    "right_square_bracket": "]",
    "question_mark": "?",
    "pageup": "page up",
    "pagedown": "page down",
    "escape": "esc",
}


def spelled(keys: str) -> str:
    """Keys of a binding as a person reads them."""
    return " ".join(_SPELLED.get(key, key.upper() if _is_function(key) else key) for key in keys.split(","))


def _is_function(key: str) -> bool:
    return key.startswith("f") and key[1:].isdigit()


def _lines(bindings: Iterable[BindingType]) -> list[Text]:
    lines = []
    for binding in bindings:
        if isinstance(binding, Binding):
            lines.append(
                Text.assemble((f"  {spelled(binding.key):<12}", "bold"), binding.tooltip or binding.description)
            )
    return lines


def help_text(desk: Desk) -> Text:
    """All keys of the desk, the grid and an entry."""
    lines = [Text("Keys", "bold"), *_lines(desk.BINDINGS)]
    lines += [Text(""), Text("In the grid", "bold"), *_lines(Grid.BINDINGS)]
    lines += [
        Text(""),
        Text("In an entry", "bold"),
        *(Text.assemble((f"  {key:<16}", "bold"), words) for key, words in KEYS),
    ]
    lines += [
        Text("  a digit, sign, point or bracket starts an entry in a cell of numbers"),
        Text("  arithmetic is worked out (1.35*42), a unit at the end is converted (12 kN)"),
        Text("  Enter takes it; while typing the summary shows what the margins would become"),
        Text(""),
        Text("Marks", "bold"),
        Text("  X short: both theories fail     / split: one fails     ~ thin"),
        Text("  ? without data                  + a magnitude made by a combination"),
        Text(""),
        Text(CAUTION),
    ]
    return Text("\n").join(lines)
