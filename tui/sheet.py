"""What every sheet that a person works in can do beside being drawn: say where one is, and turn entries into edits."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from engine.edits import Edit
from engine.project import Kind

from .document import Document
from .grid import Cell
from .palette import Runs

Axis = Literal["row", "column"]


@dataclass(frozen=True, slots=True)
class Opening:
    """What Enter on a cell leads to."""

    sheet: str
    """Key of a sheet; empty: none, only the message."""
    row: str = ""
    """Name of the row to go to there."""
    column: str = ""
    """Name of the column to go to there."""
    subject: str = ""
    """What the sheet is about, where it is about one part: the name of a point."""
    message: str = ""
    """Why, in a line."""


class WorkSheet:
    """Base of all sheets: an empty read-only one. Subclasses say what differs."""

    key = ""
    """Name in actions."""
    title = ""
    """Name on the screen."""
    row_kind: Kind | None = None
    """Kind of part that a row is, where rows can be added, renamed, moved and deleted."""
    column_kind: Kind | None = None
    """Likewise for columns."""

    def __init__(self, document: Document) -> None:
        self.document = document

    @property
    def gone(self) -> bool:
        """Whether the part that the sheet is about is there no longer, under this name."""
        return False

    # ---- drawing (see grid.Sheet)

    def size(self) -> tuple[int, int]:
        return 0, 0

    def width(self, column: int) -> int:
        return 10

    def header(self, column: int) -> Cell:
        return Cell(self.column_name(column), "head")

    def frozen_header(self, room: int) -> Runs:
        return [(self.title, "head")]

    def frozen_width(self, room: int) -> int:
        return min(24, room // 3)

    def frozen(self, row: int, room: int) -> Runs:
        return [(self.row_name(row), "plain")]

    def cells(self, row: int, columns: Sequence[int]) -> list[Cell]:
        return [Cell("") for _ in columns]

    def footers(self) -> int:
        return 0

    def footer(self, index: int, columns: Sequence[int]) -> list[Cell]:
        return []

    def footer_frozen(self, index: int, room: int) -> Runs:
        return []

    def empty(self) -> str:
        return ""

    # ---- where one is

    def row_name(self, row: int) -> str:
        """Name of a row's part."""
        return ""

    def column_name(self, column: int) -> str:
        """Name of a column's part."""
        return ""

    def at(self, row: int, column: int) -> tuple[str, str] | None:
        """Names of the row and the column of a cell; None where there is no such cell (any more)."""
        rows, columns = (0, 0) if self.gone else self.size()
        return (self.row_name(row), self.column_name(column)) if row < rows and column < columns else None

    def row_called(self, name: str) -> int:
        """Row of a name; -1 where there is none."""
        rows, _ = self.size()
        return next((i for i in range(rows) if self.row_name(i) == name), -1)

    def column_called(self, name: str) -> int:
        """Column of a name; -1 where there is none."""
        _, columns = self.size()
        return next((i for i in range(columns) if self.column_name(i) == name), -1)

    def shows(self) -> str:
        """What the cells show, for the third line."""
        return self.title

    def here(self, row: int, column: int) -> list[Runs]:
        """Lines about the cell under the cursor."""
        return []

    # ---- working

    def numeric(self, row: int, column: int) -> bool:
        """Whether a digit typed here starts an entry."""
        return False

    def prompt(self, row: int, column: int) -> str:
        """What an entry here is asked for, with its unit; empty where a cell cannot be edited."""
        return ""

    def initial(self, row: int, column: int) -> str:
        """The text that Enter starts an entry with."""
        return ""

    def edit(self, row: int, column: int, text: str) -> Edit | None:
        """The edit that an entry means; None where it changes nothing. Raises Refusal, EntryError or UnitError."""
        return None

    def opens(self, row: int, column: int) -> Opening | None:
        """What Enter leads to where the cell itself is not edited."""
        return None


def name_runs(pairs: Sequence[tuple[str, str]]) -> Runs:
    """Runs from (text, role) pairs, a blank between."""
    found: Runs = []
    for text, role in pairs:
        found += [(text, role), (" ", "plain")]
    return found
