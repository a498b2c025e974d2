"""The last word on what reaches a terminal that shows ASCII only."""

from __future__ import annotations

from rich.segment import Segment
from textual.color import Color
from textual.filter import LineFilter

from .palette import plain_ascii

_DRAWN = str.maketrans(
    {**dict.fromkeys("▔▁", "-"), **dict.fromkeys("▂▃▄▅▆▇", "#"), **dict.fromkeys("▏▎▍▌▋▊▉▐▕", "|"), "🔎": "> "}
)
"""What the stock widgets draw with: edges, bars, and one icon of two cells."""


class AsciiFilter(LineFilter):
    """Whatever any widget draws, those that are not ours too, in ASCII and in as many cells as before."""

    def apply(self, segments: list[Segment], background: Color) -> list[Segment]:
        """The segments of a line in ASCII."""
        return [Segment(plain_ascii(text.translate(_DRAWN)), style, control) for text, style, control in segments]
