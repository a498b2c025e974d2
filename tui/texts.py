"""Rich texts fitted to a line of the screen."""

from __future__ import annotations

from rich.text import Text

from .palette import plain_ascii


def fitted(text: Text, width: int, ascii_only: bool) -> Text:
    """The text as one line of at most `width` cells, cut with a mark; in ASCII where the terminal knows no more."""
    text.no_wrap = True
    text.truncate(max(width, 1), overflow="ellipsis")
    if ascii_only:
        text.plain = plain_ascii(text.plain)  # each character keeps its width, so styles stay in place
    return text
