"""Sheets of parts: one row a part, one column a field, all of it edited in place."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from engine.edits import Edit, Set
from engine.project import Kind
from engine.units import SYSTEMS, UnitSystem

from .document import Document
from .fields import Field, fitting, plain_from, plain_of, text_of
from .grid import Cell
from .palette import Runs, cut
from .sheet import Opening, WorkSheet

POINT_FIELDS = (
    Field(("material",), "material", width=16, hint="name of a material"),
    Field(("factor",), "factor", "table", 9, hint="number, or yield = ..., ultimate = ..."),
    Field(("temperature",), "temp.", "table", 9, "temperature", "number, or case = number, ..."),
    Field(("per-load",), "loads", "count", 8, hint="Enter: stress per unit load"),
    Field(("stress",), "rows", "count", 7, hint="Enter: stress by case"),
    Field(("not-felt",), "not felt", "names", 12, hint='load names with commas, or "rest"'),
    Field(("part",), "part", width=14, hint="groups points"),
    Field(("label",), "label", width=24),
    Field(("source",), "source", width=28, hint="where the stresses come from"),
    Field(("section",), "section", width=16, hint="name of a section"),
    Field(("at",), "at y z", "pair", 14, "length", "y z"),
    Field(("kt",), "kt", "table", 16, hint="Mz = 1.7, T = 1.4"),
)
MATERIAL_FIELDS = (
    Field(("yield",), "yield", "number", 10, "stress", "above 0"),
    Field(("ultimate",), "ultimate", "number", 10, "stress", "above 0; empty: not known"),
    Field(("elongation",), "elong.", "number", 9, hint="0 to 1"),
    Field(("shear-yield",), "shear yld", "number", 11, "stress", "measured; empty: half the yield"),
    Field(("range",), "range", "pair", 12, "temperature", "lowest highest, for the plain values"),
    Field(("yield-at",), "yield at", "pairs", 26, hint="temperature:yield pairs, 20:345 100:318"),
    Field(("ultimate-at",), "ultimate at", "pairs", 20, hint="temperature:ultimate pairs"),
    Field(("source",), "source", width=36, hint="certificate or standard"),
)
CATEGORY_FIELDS = (
    Field(("yield", "tresca"), "yld Tresca", "number", 12, hint="required factor, above 0"),
    Field(("yield", "von-mises"), "yld Mises", "number", 11, hint="required factor, above 0"),
    Field(("ultimate", "tresca"), "ult Tresca", "number", 12, hint="a first one holds for both; empty: not asked"),
    Field(
        ("ultimate", "von-mises"),
        "ult Mises",
        "number",
        11,
        hint="a first one holds for both; empty: not asked",
    ),
    Field(("loads",), "loads are", width=16, hint="characteristic or design"),
    Field(("label",), "label", width=30),
)
LOAD_FIELDS = (
    Field(("unit",), "unit", width=8, hint="the project's unit of its kind, or empty"),
    Field(("sense",), "sense", width=12, hint="fixed, reversible or optional"),
    Field(("label",), "label", width=40),
)
SECTION_FIELDS = (
    Field(("shape",), "shape", width=10),
    Field(("d",), "d", "number", 10, "length"),
    Field(("not-felt",), "not felt", "names", 16),
    Field(("resultants",), "resultants", "count", 12),
)
SETTINGS_FIELDS = (
    Field(("title",), "title", hint="shown and printed"),
    Field(("revision",), "revision", hint="shown and printed"),
    Field(("accept",), "accept", hint="both, tresca or von-mises: which must pass"),
    Field(("thin",), "thin", "number", hint="a margin below this is thin"),
    Field(("units",), "units", hint="mm-N-MPa, m-N-Pa, in-lbf-psi or in-kip-ksi; numbers are not converted"),
    Field(("components",), "components", hint="order of stress rows in the file: xx yy zz xy yz zx"),
    Field(("notes",), "notes", hint="free text"),
)


class RecordSheet(WorkSheet):
    """All parts of one kind."""

    def __init__(self, document: Document, kind: Kind, key: str, title: str, fields: Sequence[Field]) -> None:
        super().__init__(document)
        self.row_kind, self.key, self.title, self.fields = kind, key, title, tuple(fields)

    @property
    def kind(self) -> Kind:
        """Kind of part that a row is."""
        assert self.row_kind is not None
        return self.row_kind

    @property
    def _parts(self) -> Sequence[Any]:
        return self.document.project.of(self.kind)

    @property
    def _system(self) -> UnitSystem:
        return SYSTEMS[self.document.project.settings.units]

    def size(self) -> tuple[int, int]:
        return len(self._parts), len(self.fields)

    def width(self, column: int) -> int:
        return self.fields[column].width

    def header(self, column: int) -> Cell:
        return Cell(self.fields[column].head, "head", align=self._align(column))

    def _align(self, column: int) -> Any:
        return "right" if self.fields[column].form in {"number", "count"} else "left"

    def row_name(self, row: int) -> str:
        return str(self._parts[row].name)

    def column_name(self, column: int) -> str:
        return self.fields[column].path[0]

    def frozen_header(self, room: int) -> Runs:
        return [(" " + cut(self.kind, self.frozen_width(room) - 1), "head")]

    def frozen(self, row: int, room: int) -> Runs:
        return [(" ", "plain"), (cut(self.row_name(row), self.frozen_width(room) - 1), "plain")]

    def empty(self) -> str:
        return f"There is no {self.kind} yet.\nPress a to add one."

    def shows(self) -> str:
        return self.title

    def text(self, row: int, column: int) -> str:
        """The whole text of a cell."""
        field = self.fields[column]
        return text_of(plain_of(self.kind, self._parts[row], field.path), field.form)

    def cells(self, row: int, columns: Sequence[int]) -> list[Cell]:
        return [self._cell(row, column) for column in columns]

    def _cell(self, row: int, column: int) -> Cell:
        field, text = self.fields[column], self.text(row, column)
        if field.form == "number" and text:
            text = fitting(float(plain_of(self.kind, self._parts[row], field.path)), field.width - 2)
        numeric = self._align(column) == "right" or (self.fields[column].form == "table" and "=" not in text)
        return Cell(text, align="right" if numeric else "left")

    def here(self, row: int, column: int) -> list[Runs]:
        if row >= len(self._parts):
            return []
        field = self.fields[column]
        text = self.text(row, column) or "not given"
        lines: list[Runs] = [
            [(f" {'Here':<10} ", "dim"), (f"{self.row_name(row)}   {self._label(row)}", "governs")],
            [
                (f" {'value':<10} ", "dim"),
                (f"{' '.join(field.path)}: {text} {self._unit(field) if text != 'not given' else ''}", "plain"),
            ],
        ]
        if field.hint:
            lines.append([(f" {'entry':<10} ", "dim"), (field.hint, "dim")])
        return lines

    def _label(self, row: int) -> str:
        return str(getattr(self._parts[row], "label", ""))

    def _unit(self, field: Field) -> str:
        return self._system.unit(field.kind) if field.kind else ""

    # ---- working

    def numeric(self, row: int, column: int) -> bool:
        return self.fields[column].form in {"number", "pairs", "pair", "table"}

    def prompt(self, row: int, column: int) -> str:
        field = self.fields[column]
        if field.form == "count":
            return ""
        unit = self._unit(field)
        return f"{self.row_name(row)} {' '.join(field.path)}" + (f" ({unit})" if unit else "")

    def initial(self, row: int, column: int) -> str:
        return self.text(row, column)

    def edit(self, row: int, column: int, text: str) -> Edit | None:
        if text == self.initial(row, column):
            return None  # as it stood: a load named "rest" must not turn into the word for all others
        field = self.fields[column]
        value = plain_from(text, field, self._system)
        old = plain_of(self.kind, self._parts[row], field.path)
        if value == old:
            return None
        return Set(self.kind, self.row_name(row), *_whole(field.path, value, old, self.kind, self._parts[row]))

    def opens(self, row: int, column: int) -> Opening | None:
        field = self.fields[column]
        if self.kind != "point" or field.form != "count":
            return None
        return Opening("per-load" if field.path == ("per-load",) else "stress", subject=self.row_name(row))


def _whole(path: tuple[str, ...], value: Any, old: Any, kind: str, part: Any) -> tuple[tuple[str, ...], Any]:
    """Path and value of an edit of one of two factors: a first one is taken for both, a removed one removes both."""
    if len(path) == 1:
        return path, value
    if value is None:
        return path[:1], None
    if old is None and plain_of(kind, part, path[:1]) is None:
        return path[:1], {"tresca": value, "von-mises": value}
    return path, value


class SettingsSheet(WorkSheet):
    """The project's settings, one a row."""

    key, title = "project", "Project"

    def size(self) -> tuple[int, int]:
        return len(SETTINGS_FIELDS), 1

    def width(self, column: int) -> int:
        return 50

    def header(self, column: int) -> Cell:
        return Cell("value", "head", align="left")

    def row_name(self, row: int) -> str:
        return SETTINGS_FIELDS[row].path[0]

    def column_name(self, column: int) -> str:
        return "value"

    def frozen_width(self, room: int) -> int:
        return 14

    def frozen_header(self, room: int) -> Runs:
        return [(" setting", "head")]

    def frozen(self, row: int, room: int) -> Runs:
        return [(" ", "plain"), (SETTINGS_FIELDS[row].head, "plain")]

    def text(self, row: int) -> str:
        """The whole text of a setting."""
        field = SETTINGS_FIELDS[row]
        return text_of(plain_of("project", self.document.project.settings, field.path), field.form)

    def cells(self, row: int, columns: Sequence[int]) -> list[Cell]:
        return [Cell(self.text(row), align="left") for _ in columns]

    def here(self, row: int, column: int) -> list[Runs]:
        return [
            [(f" {'Here':<10} ", "dim"), (SETTINGS_FIELDS[row].head, "governs")],
            [(f" {'entry':<10} ", "dim"), (SETTINGS_FIELDS[row].hint, "dim")],
        ]

    def numeric(self, row: int, column: int) -> bool:
        return SETTINGS_FIELDS[row].form == "number"

    def prompt(self, row: int, column: int) -> str:
        return SETTINGS_FIELDS[row].head

    def initial(self, row: int, column: int) -> str:
        return self.text(row)

    def edit(self, row: int, column: int, text: str) -> Edit | None:
        field = SETTINGS_FIELDS[row]
        value = plain_from(text, field, SYSTEMS[self.document.project.settings.units])
        if value is None and field.path == ("title",):
            value = ""
        if value == plain_of("project", self.document.project.settings, field.path):
            return None
        return Set("project", "", field.path, value)
