"""Stress rows of one point: by case as given directly, or per unit of each load."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

import numpy as np

from engine import criteria
from engine.edits import Edit, Refusal, Set
from engine.entry import parse, parse_row
from engine.figures import number_text, stress_text
from engine.frozen import Array, StressRows
from engine.project import Point
from engine.stress import COMPONENTS, permutation
from engine.units import SYSTEMS

from .document import Document
from .fields import fitting
from .grid import Cell
from .palette import Runs, cut
from .sheet import WorkSheet

Of = Literal["stress", "per-load"]


class StressSheet(WorkSheet):
    """Rows: cases or loads; columns: the six components, in the file's order."""

    def __init__(self, document: Document, of: Of, point: str) -> None:
        super().__init__(document)
        self.of, self.point_name, self.key = of, point, of
        self.title = f"{point}: stress {'by case' if of == 'stress' else 'per unit load'}"

    @property
    def point(self) -> Point:
        """The point whose rows these are. Raises KeyError when it is gone."""
        found = self.document.project.find("point", self.point_name)
        assert isinstance(found, Point)
        return found

    @property
    def gone(self) -> bool:
        return self.point_name not in self.document.project.names("point")

    @property
    def _rows(self) -> StressRows:
        return self.point.stress if self.of == "stress" else self.point.per_load

    @property
    def _order(self) -> tuple[str, ...]:
        return self.document.project.settings.components

    def size(self) -> tuple[int, int]:
        rows = len(self.document.project.cases if self.of == "stress" else self.document.project.loads)
        return rows, 6 if rows else 0

    def width(self, column: int) -> int:
        return 10

    def frozen_width(self, room: int) -> int:
        return min(24, room - 61)

    def row_name(self, row: int) -> str:
        return (self.document.project.cases if self.of == "stress" else self.document.project.loads)[row].name

    def column_name(self, column: int) -> str:
        return self._order[column]

    def empty(self) -> str:
        return "There is no load case yet: F3, then a." if self.of == "stress" else "There is no load yet: F3, then A."

    def shows(self) -> str:
        unit = SYSTEMS[self.document.project.settings.units].stress
        per = "" if self.of == "stress" else " per unit of the load"
        return f"{cut(self.point_name, 24).rstrip()}: stress in {unit}{per}, tension positive"

    def frozen_header(self, room: int) -> Runs:
        return [(" case" if self.of == "stress" else " load", "head")]

    def frozen(self, row: int, room: int) -> Runs:
        return [(" ", "plain"), (cut(self.row_name(row), self.frozen_width(room) - 1), "plain")]

    def cells(self, row: int, columns: Sequence[int]) -> list[Cell]:
        given = self._rows.get(self.row_name(row))
        if given is None:
            return [Cell(".", "dim") for _ in columns]
        room = self.width(0) - 2
        return [Cell(fitting(float(given[COMPONENTS.index(self._order[c])]), room)) for c in columns]

    def here(self, row: int, column: int) -> list[Runs]:
        name = self.row_name(row)
        given = self._rows.get(name)
        title: Runs = [(f" {'Here':<10} ", "dim"), (f"{self.point_name} {name} {self.column_name(column)}", "governs")]
        if given is None:
            text = "no row yet: type all six components, zeros too"
            return [title, [(f" {'row':<10} ", "dim"), (text, "nodata")]]
        whole = number_text(float(given[COMPONENTS.index(self._order[column])]))
        return [[*title, (f" = {whole}", "plain")], *self._state_lines(given)]

    def _state_lines(self, given: Array) -> list[Runs]:
        tresca, mises = (float(value) for value in criteria.equivalents(given))
        principals = "  ".join(stress_text(float(value)) for value in criteria.principals(given))
        return [
            [(f" {'principals':<10} ", "dim"), (principals, "plain")],
            [
                (f" {'equivalent':<10} ", "dim"),
                (f"Tresca {stress_text(tresca)}   von Mises {stress_text(mises)}", "plain"),
            ],
        ]

    # ---- working

    def numeric(self, row: int, column: int) -> bool:
        return True

    def prompt(self, row: int, column: int) -> str:
        unit = SYSTEMS[self.document.project.settings.units].stress
        name = f"{cut(self.point_name, 16).rstrip()} {self.row_name(row)}"
        if self.row_name(row) in self._rows:
            return f"{name} {self.column_name(column)} ({unit})"
        return f"{name} {' '.join(self._order)} ({unit})"

    def initial(self, row: int, column: int) -> str:
        given = self._rows.get(self.row_name(row))
        return "" if given is None else number_text(float(given[COMPONENTS.index(self._order[column])]))

    def edit(self, row: int, column: int, text: str) -> Edit | None:
        name = self.row_name(row)
        given = self._rows.get(name)
        if not text.strip():
            if given is None:
                return None
            raise Refusal("a component is a number; x takes the whole row away, and then its cell has no data")
        values = self._typed(text, given, column)
        if given is not None and np.array_equal(values, given):
            return None
        return Set("point", self.point_name, (self.of, name), values.tolist())

    def _typed(self, text: str, given: Array | None, column: int) -> Array:
        """The row that an entry means: one component of a row there is, or all six of any row.

        A missing component is never zero: a row that is not there yet is typed whole.
        """
        system = SYSTEMS[self.document.project.settings.units]
        if given is not None and len(text.replace(";", " ").split()) != len(COMPONENTS):
            values = given.copy()
            values[COMPONENTS.index(self._order[column])] = parse(text, "stress", system)
            return values
        row = parse_row(text, len(COMPONENTS), "stress", system)
        return np.array(row)[permutation(self._order)]

    def removal(self, row: int) -> Edit | None:
        """The edit that takes a row away."""
        name = self.row_name(row)
        return Set("point", self.point_name, (self.of, name), None) if name in self._rows else None
