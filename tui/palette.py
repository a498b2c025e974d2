"""What the screen draws with: roles as styles, the marks of verdicts, and text made safe and fitted to cells."""

from __future__ import annotations

import re
import unicodedata
from functools import reduce
from operator import add
from typing import Literal

from rich.cells import cell_len, set_cell_size
from rich.style import Style

Mode = Literal["colour", "ansi", "mono"]
Align = Literal["right", "left"]
Runs = list[tuple[str, str]]
"""Stretches of one line, each its text and its role."""

MARKS = {"clear": " ", "thin": "~", "split": "/", "short": "X", "no-data": "?"}
"""The mark beside a number, by verdict; colour is never the only sign."""

VERDICT_ROLES = {"clear": "plain", "thin": "thin", "split": "split", "short": "short", "no-data": "nodata"}
"""The role of a number, by verdict."""

BACKGROUND = "#121212"
# Every colour is one of the 256 fixed ones, so that a terminal without truecolour shows the same, greys one step
# darker. Against BACKGROUND grey is then 11:1, yellow 13:1, vermilion and dim grey 7.9:1; white on the selection 7:1.
_COLOUR = {
    "plain": Style(color="#d0d0d0", bgcolor=BACKGROUND),
    "dim": Style(color="#b2b2b2"),
    "thin": Style(color="#ffd700"),
    "trouble": Style(color="#ff875f"),
    "selected": Style(color="#ffffff", bgcolor="#005f87"),
}
# Sixteen colours are the terminal's own. A black ground is set, for yellow on a light theme's ground cannot be read;
# dim grey is left out, for it is too faint on nearly all of them.
_ANSI = {
    "plain": Style(color="white", bgcolor="black"),
    "dim": Style(),
    "thin": Style(color="bright_yellow"),
    "trouble": Style(color="bright_red"),
    "selected": Style(color="bright_white", bgcolor="blue"),
}
_MONO = {**dict.fromkeys(("plain", "dim", "thin", "trouble"), Style()), "selected": Style(underline=True)}
_COLOURS: dict[Mode, dict[str, Style]] = {"colour": _COLOUR, "ansi": _ANSI, "mono": _MONO}


def mode_for(color_system: str | None, no_color: bool) -> Mode:
    """The palette's mode for a terminal: its colour system as Rich names it, and whether NO_COLOR is set.

    To be asked before the App is made, which takes NO_COLOR out of the environment.
    """
    if no_color or color_system is None:
        return "mono"
    return "ansi" if color_system in ("standard", "windows") else "colour"


class Palette:
    """Styles by role, for one colour mode.

    Roles are plain, dim, head, thin, split, short, nodata, and the ones laid over them: here (the header and the name
    of the cursor's cell), governs, edited, selected, cursor. Several may be named, parted by blanks: "short governs".
    """

    def __init__(self, mode: Mode = "colour") -> None:
        base = _COLOURS[mode]
        self.mode: Mode = mode
        self._roles = {
            "plain": base["plain"],
            "dim": base["dim"],
            "head": base["dim"],
            "thin": base["thin"],
            "split": base["trouble"],
            "short": base["trouble"],
            "nodata": base["dim"],
            "here": Style(bold=True),
            "governs": Style(bold=True),
            "edited": Style(bold=True, underline=True),
            "selected": base["selected"],
            "cursor": Style(reverse=True),
        }
        self._styles: dict[str, Style] = {}

    def style(self, roles: str) -> Style:
        """The style of one role, or of several parted by blanks, the later over the earlier.

        Raises KeyError for a name that is no role. Equal names give the same object, so that runs merge cheaply.
        """
        style = self._styles.get(roles)
        if style is None:
            layers = [self._roles[role] for role in roles.split() or [roles]]
            style = self._styles[roles] = reduce(add, layers, self._roles["plain"])
        return style


SUBSTITUTE = "\N{REPLACEMENT CHARACTER}"
# Printable for Python, yet they take no cell, or join with their neighbour into a glyph of another width: fillers,
# joiners, variation selectors, the letters of flags, skin tones.
_UNSTEADY = re.compile(
    "[\u034f\u115f\u1160\u17b4\u17b5\u180b-\u180f\u3164\ufe00-\ufe0f\uffa0\U000e0100-\U000e01ef"
    "\U0001f1e6-\U0001f1ff\U0001f3fb-\U0001f3ff]"
)
_STACK = 3  # as many marks as any living script puts on one letter; more is a way to garble the screen


def _visible_character(character: str) -> str:
    """A character as it may be shown: itself, a blank, or a substitute."""
    code = ord(character)
    if code < 0x20:
        return chr(0x2400 + code)
    if code == 0x7F:
        return "\N{SYMBOL FOR DELETE}"
    if unicodedata.category(character) == "Zs":
        return " " * cell_len(character)
    return character if character.isprintable() and not _UNSTEADY.match(character) else SUBSTITUTE


def visible(text: str) -> str:
    """The text with each character that could act on the terminal or take no cell replaced by a visible one.

    Control characters, overrides of direction, line separators, zero-width characters, lone surrogates. Marks that
    stand on a letter stay, as far as a script needs them. Doing it twice changes nothing.
    """
    if text.isascii() and text.isprintable():
        return text
    shown: list[str] = []
    stacked = _STACK  # a mark at the start would stand on the neighbour's last letter
    for character in unicodedata.normalize("NFC", text):
        character = _visible_character(character)
        if cell_len(character):
            stacked = 0 if character.isalnum() else _STACK
        elif stacked == _STACK:
            character = SUBSTITUTE
        else:
            stacked += 1
        shown.append(character)
    return "".join(shown)


def cut(text: str, width: int, align: Align = "left") -> str:
    """A name in exactly `width` cells: padded, or cut with a mark at its end. Never for numbers."""
    if width <= 0:
        return ""
    text = visible(text)
    if cell_len(text) > width:
        text = set_cell_size(text, width - 1).rstrip() + "…"
    gap = " " * (width - cell_len(text))
    return gap + text if align == "right" else text + gap


def fit_number(text: str, width: int) -> str:
    """A number in exactly `width` cells, right-aligned; all `#` where it does not fit, for cut digits lie."""
    text = visible(text)
    used = cell_len(text)
    return "#" * max(width, 0) if used > width else " " * (width - used) + text


def fit_runs(runs: Runs, width: int) -> Runs:
    """The runs made visible, cut or padded to `width` cells in all, so that one bad run shifts nothing."""
    fitted: Runs = []
    for text, role in runs:
        text = visible(text)
        used = min(cell_len(text), width)
        fitted.append((set_cell_size(text, used), role))
        width -= used
    return [*fitted, (" " * width, "plain")]


_ASCII = {
    **dict.fromkeys("…·•", "."),
    **dict.fromkeys("×✕✗", "x"),
    **dict.fromkeys("─━═–—−‐‑", "-"),
    **dict.fromkeys("│┃║", "|"),
    **dict.fromkeys("┌┐└┘├┤┬┴┼╭╮╰╯", "+"),
    **dict.fromkeys("‘’′", "'"),
    **dict.fromkeys("“”″", '"'),
    **dict.fromkeys("█▓▒░", "#"),
    **dict(zip("→←↑↓≤≥°ßØøđłστµαβγ", "><^v<>osOodlstuabg", strict=True)),
}


def _ascii_character(character: str) -> str:
    if character.isascii():
        return character
    if character in _ASCII:
        return _ASCII[character]
    bare = "".join(part for part in unicodedata.normalize("NFKD", character) if part.isascii())
    width = cell_len(character)
    return bare if len(bare) == width else "?" * width


def plain_ascii(text: str) -> str:
    """The text in ASCII for a terminal that knows no more, each character in as many cells as before."""
    return text if text.isascii() else "".join(map(_ascii_character, text))
