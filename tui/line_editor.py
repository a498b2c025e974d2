"""One line of text being typed: the keys of an editor on plain data, so that keys are taken in the order they come."""

from __future__ import annotations

from dataclasses import dataclass, replace

LONGEST = 2000
"""Characters that one line takes."""


@dataclass(frozen=True, slots=True)
class LineEditor:
    """A text and the cursor in it."""

    text: str = ""
    """What was typed."""
    cursor: int = 0
    """Place of the cursor, 0 to the length of the text."""

    def insert(self, typed: str) -> LineEditor:
        """The editor after typing or pasting; only the first line of a paste, without control characters."""
        line = "".join(c for c in typed.split("\n")[0].split("\r")[0] if c.isprintable() or c == " ")
        line = line[: max(0, LONGEST - len(self.text))]
        return LineEditor(self.text[: self.cursor] + line + self.text[self.cursor :], self.cursor + len(line))

    def key(self, key: str) -> LineEditor | None:
        """The editor after a key that is not a character; None where the key means nothing here."""
        before, after = self.text[: self.cursor], self.text[self.cursor :]
        match key:
            case "left":
                return replace(self, cursor=max(0, self.cursor - 1))
            case "right":
                return replace(self, cursor=min(len(self.text), self.cursor + 1))
            case "home" | "ctrl+a":
                return replace(self, cursor=0)
            case "end" | "ctrl+e":
                return replace(self, cursor=len(self.text))
            case "backspace" | "ctrl+h":
                return LineEditor(before[:-1] + after, max(0, self.cursor - 1))
            case "delete" | "ctrl+d":
                return LineEditor(before + after[1:], self.cursor)
            case "ctrl+u":
                return LineEditor(after, 0)
            case "ctrl+k":
                return LineEditor(before, self.cursor)
            case "ctrl+w":
                kept = before.rstrip().rpartition(" ")
                head = kept[0] + kept[1]
                return LineEditor(head + after, len(head))
        return None
