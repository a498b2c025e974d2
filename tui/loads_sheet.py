"""The Loads sheet: cases x loads, and after the loads what else a case says."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from engine.edits import Edit, Set
from engine.entry import parse
from engine.envelope import VERDICTS, least_accepted, verdict_codes
from engine.figures import margin_text, number_text
from engine.loads import Case, Load
from engine.table import MarginTable
from engine.units import SYSTEMS, UnitSystem, kind_of_load_unit

from .document import Document
from .fields import Field, fitting, plain_from, plain_of, text_of
from .grid import Cell
from .palette import MARKS, VERDICT_ROLES, Runs, cut
from .sheet import WorkSheet

CASE_FIELDS = (
    Field(("category",), "category", width=13, hint="name of a category"),
    Field(("temperature",), "temp.", "number", 9, "temperature", "empty: not given"),
    Field(("combine",), "combine", "map", 26, hint="case = factor, case = factor; as in LC01 = 1.1, LC02 = 0.5"),
    Field(("check",), "check", "flag", 8, hint="yes, or no: only an ingredient of combinations"),
    Field(("label",), "label", width=30),
)


class LoadsSheet(WorkSheet):
    """Magnitudes of loads by case; typing over a cell edits it."""

    key, title = "loads", "Loads"
    row_kind, column_kind = "case", "load"

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self._least: dict[int, tuple[float, int]] = {}
        self._least_of: MarginTable | None = None

    @property
    def _loads(self) -> tuple[Load, ...]:
        return self.document.project.loads

    @property
    def _system(self) -> UnitSystem:
        return SYSTEMS[self.document.project.settings.units]

    def _case(self, row: int) -> Case:
        return self.document.project.cases[row]

    def _field(self, column: int) -> Field | None:
        place = column - len(self._loads)
        return CASE_FIELDS[place] if place >= 0 else None

    def size(self) -> tuple[int, int]:
        cases = len(self.document.project.cases)
        return cases, (len(self._loads) + len(CASE_FIELDS)) if cases else 0

    def width(self, column: int) -> int:
        field = self._field(column)
        return field.width if field else 11

    def row_name(self, row: int) -> str:
        return self._case(row).name

    def column_name(self, column: int) -> str:
        field = self._field(column)
        return field.path[0] if field else self._loads[column].name

    def header(self, column: int) -> Cell:
        field = self._field(column)
        if field:
            return Cell(field.head, "head", align="right" if field.form == "number" else "left")
        load = self._loads[column]
        return Cell(f"{load.name} {load.unit}".strip(), "head")

    def empty(self) -> str:
        return "There is no load case yet.\nPress a to add one; A (shift and a) adds a load."

    def shows(self) -> str:
        return "magnitudes; least: worst point in the case"

    # ---- drawing

    def cells(self, row: int, columns: Sequence[int]) -> list[Cell]:
        return [self._cell(row, column) for column in columns]

    def _cell(self, row: int, column: int) -> Cell:
        case, field = self._case(row), self._field(column)
        if field:
            text = text_of(plain_of("case", case, field.path), field.form)
            if field.path == ("check",):
                text = "yes" if case.check else "no"
            return Cell(text, align="right" if field.form == "number" else "left")
        own = case.loads.get(self._loads[column].name)
        if not case.combine:
            return Cell("" if own is None else fitting(own, self.width(column) - 2))
        total = float(self.document.table.sets.magnitudes[row, column])
        return Cell(fitting(total, self.width(column) - 2) if total or own is not None else "", "dim", "+")

    def frozen_width(self, room: int) -> int:
        return self._name_width(room) + 10

    def _name_width(self, room: int) -> int:
        return max(10, min(20, room // 7))

    def frozen_header(self, room: int) -> Runs:
        return [(f" {cut('case', self._name_width(room))}{'least':>7}  ", "head")]

    def frozen(self, row: int, room: int) -> Runs:
        least, code = self._case_least(row)
        name = cut(self.row_name(row), self._name_width(room))
        text = margin_text(least) if code >= 0 else ""
        verdict = VERDICTS[max(code, 0)]
        return [(" ", "plain"), (name, "plain"), (f"{text:>7} {MARKS[verdict]}", VERDICT_ROLES[verdict])]

    def _case_least(self, row: int) -> tuple[float, int]:
        """Least accepted margin in a case and its verdict; code -1 for a case that is not checked."""
        table = self.document.table
        if self._least_of is not table:
            self._least, self._least_of = {}, table
        if row not in self._least:
            column = int(np.searchsorted(table.of_case, row))
            checked = column < len(table.of_case) and table.of_case[column] == row
            self._least[row] = self._computed(column) if checked else (float("nan"), -1)
        return self._least[row]

    def _computed(self, column: int) -> tuple[float, int]:
        table, settings = self.document.table, self.document.project.settings
        at = np.array([column])
        if not table.shape[0]:
            return float("nan"), VERDICTS.index("no-data")
        margins = [table.margins(slice(None), at, i)[:, :, 0] for i in table.rating.limits]
        least = np.fmin.reduce(np.fmin.reduce(margins, axis=0), axis=1)
        lacking = table.missing(slice(None), at).any()
        code = verdict_codes(least[:, None], np.array([lacking]), settings.accept, settings.thin)
        return float(least_accepted(least, settings.accept)), int(code[0])

    # ---- where one is

    def here(self, row: int, column: int) -> list[Runs]:
        rows, columns = self.size()
        if row >= rows or column >= columns:
            return []
        case, field = self._case(row), self._field(column)
        words = [case.label, case.category, "" if case.check else "not checked: an ingredient of combinations"]
        title: Runs = [
            (f" {'Here':<10} ", "dim"),
            (f"{case.name} {self.column_name(column)}", "governs"),
            ("   " + "   ".join(word for word in words if word), "plain"),
        ]
        return [title, *(self._field_lines(case, field) if field else self._load_lines(row, column))]

    def _field_lines(self, case: Case, field: Field) -> list[Runs]:
        text = text_of(plain_of("case", case, field.path), field.form) or "not given"
        return [
            [(f" {field.path[0]:<10} ", "dim"), (text, "plain")],
            [(f" {'entry':<10} ", "dim"), (field.hint, "dim")],
        ]

    def _load_lines(self, row: int, column: int) -> list[Runs]:
        case, load = self._case(row), self._loads[column]
        unit = load.unit or "(no unit: a multiplier)"
        own = case.loads.get(load.name)
        lines: list[Runs] = [
            [(f" {'load':<10} ", "dim"), (f"{load.label or load.name}   {unit}   {load.sense}", "plain")],
            [(f" {'magnitude':<10} ", "dim"), (self._sum_text(case, column, own), "plain")],
        ]
        lines.append([(f" {'felt by':<10} ", "dim"), (self._felt_text(load), "plain")])
        return lines

    def _felt_text(self, load: Load) -> str:
        """Who feels a load, and who does not follow it because its stress is given by case."""
        points = self.document.project.points
        felt = f"{sum(load.name in point.per_load for point in points)} of {len(points)} points"
        direct = sum(not point.linear for point in points)
        follow = "follows" if direct == 1 else "follow"
        return f"{felt}; {direct} with stress given by case {follow} no load" if direct else felt

    def _sum_text(self, case: Case, column: int, own: float | None) -> str:
        if not case.combine:
            return number_text(own) if own is not None else "not named in this case, so zero"
        sets = self.document.table.sets
        parts = [f"{number_text(own)} (own)"] if own else []
        for name, factor in case.combine.items():
            value = float(sets.magnitudes[sets.place[name], column])
            if value:
                parts.append(f"{number_text(factor)} x {_clean_sum(value)} ({name})")
        total = float(sets.magnitudes[sets.place[case.name], column])
        return f"{' + '.join(parts) or '0'} = {_clean_sum(total)}; an entry here is the case's own part"

    # ---- working

    def numeric(self, row: int, column: int) -> bool:
        field = self._field(column)
        return field is None or field.form == "number"

    def prompt(self, row: int, column: int) -> str:
        field = self._field(column)
        unit = self._loads[column].unit if field is None else (self._system.unit(field.kind) if field.kind else "")
        return f"{self.row_name(row)} {self.column_name(column)}" + (f" ({unit})" if unit else "")

    def initial(self, row: int, column: int) -> str:
        case, field = self._case(row), self._field(column)
        if field:
            return text_of(plain_of("case", case, field.path), field.form)
        own = case.loads.get(self._loads[column].name)
        return "" if own is None else number_text(own)

    def edit(self, row: int, column: int, text: str) -> Edit | None:
        case, field = self._case(row), self._field(column)
        if field:
            value = plain_from(text, field, self._system)
            if field.path == ("check",) and value is True:
                value = None
            old = plain_of("case", case, field.path)
            return None if value == old else Set("case", case.name, field.path, value)
        load = self._loads[column]
        number = self._magnitude(text, load) if text.strip() else None
        if number == case.loads.get(load.name):
            return None
        return Set("case", case.name, ("loads", load.name), number)

    def _magnitude(self, text: str, load: Load) -> float:
        kind = kind_of_load_unit(load.unit, self._system)
        return parse(text, kind, self._system, difference=True) if kind else parse(text)


def _clean_sum(total: float) -> str:
    """A sum without the noise of adding: 1.1 x 12000 is 13200, not 13200.000000000002."""
    return number_text(float(f"{total:.12g}"))
