"""The Cautions sheet: every reason not to trust a margin, and who took the blocking ones on."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from engine import cautions
from engine.cautions import Caution
from engine.table import MarginTable

from .document import Document
from .grid import Cell
from .here import said_lines
from .palette import Runs, cut
from .sheet import WorkSheet


class CautionsSheet(WorkSheet):
    """One row a caution, blocking ones first."""

    key, title = "cautions", "Cautions"

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self._of: MarginTable | None = None
        self._rows: list[tuple[str, int]] = []

    def rows(self) -> list[tuple[str, int]]:
        """Name and point of each caution."""
        table = self.document.table
        if self._of is not table:
            flags = cautions.blocking_flags(table.project, table.rating, table.envelope) | cautions.note_flags(table)
            self._rows = [(name, int(row)) for name, raised in flags.items() for row in np.flatnonzero(raised)]
            self._of = table
        return self._rows

    def caution(self, row: int) -> Caution:
        """The caution of a row."""
        name, point = self.rows()[row]
        return next(found for found in cautions.of_point(self.document.table, point) if found.name == name)

    def point_name(self, row: int) -> str:
        """Name of the point of a row."""
        return self.document.project.points[self.rows()[row][1]].name

    def size(self) -> tuple[int, int]:
        return len(self.rows()), 3

    def width(self, column: int) -> int:
        return (21, 15, 200)[column]

    def header(self, column: int) -> Cell:
        return Cell(("caution", "state", "why")[column], "head", align="left")

    def row_name(self, row: int) -> str:
        return self.point_name(row)

    def column_name(self, column: int) -> str:
        return ("caution", "state", "why")[column]

    def frozen_width(self, room: int) -> int:
        return max(12, min(24, room // 4))

    def frozen_header(self, room: int) -> Runs:
        return [(" point", "head")]

    def frozen(self, row: int, room: int) -> Runs:
        return [(" ", "plain"), (cut(self.point_name(row), self.frozen_width(room) - 1), "plain")]

    def empty(self) -> str:
        return "No caution stands."

    def shows(self) -> str:
        return "Enter on a blocking caution: take it on, or back"

    def cells(self, row: int, columns: Sequence[int]) -> list[Cell]:
        found = self.caution(row)
        state = "acknowledged" if found.acknowledged else ("blocks" if found.blocking else "note")
        role = "short" if state == "blocks" else "plain"
        texts = (found.name, state, found.text)
        return [Cell(texts[c], role if c == 1 else "plain", align="left") for c in columns]

    def here(self, row: int, column: int) -> list[Runs]:
        if row >= len(self.rows()):
            return []
        found = self.caution(row)
        lines: list[Runs] = [
            [(f" {'Here':<10} ", "dim"), (f"{self.point_name(row)}: {found.name}", "governs")],
            *said_lines("why", found.text),
        ]
        for given in self.document.project.acknowledgements:
            if (given.point, given.caution) == (self.point_name(row), found.name):
                lines.append([(f" {'taken on':<10} ", "dim"), (f"by {given.by}: {given.reason}", "plain")])
        return lines
