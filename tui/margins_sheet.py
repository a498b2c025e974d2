"""The Margins sheet: check points x load cases, with what governs each point frozen at the left."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np
import numpy.typing as npt

from engine.envelope import VERDICTS, least_accepted, verdict_codes
from engine.figures import margin_text, margin_texts, stress_text, utilisation_text
from engine.frozen import Array
from engine.material import LIMITS

from .grid import Cell
from .here import cell_lines
from .palette import MARKS, VERDICT_ROLES, Runs, cut
from .sheet import Opening, WorkSheet
from .words import SHORT_LIMIT, SHORT_THEORY, governing_case

Theory = Literal["least", "tresca", "von-mises", "difference"]
Limit = Literal["all", "yield", "ultimate"]
Quantity = Literal["margin", "utilisation", "equivalent"]
_THEORIES: tuple[Theory, ...] = ("least", "tresca", "von-mises", "difference")
_LIMITS: tuple[Limit, ...] = ("all", "yield", "ultimate")
_QUANTITIES: tuple[Quantity, ...] = ("margin", "utilisation", "equivalent")
_SHOWN_THEORY: dict[Theory, str] = {
    "least": "worse",
    "tresca": "Tresca",
    "von-mises": "von Mises",
    "difference": "Tresca less von Mises",
}
_NOTHING = "-"
"""What a cell shows that has nothing to show, though nothing is missing: a limit not asked, no stress to compare."""
_SHOWN_LIMIT: dict[Limit, str] = {"all": "all limits", "yield": "yield", "ultimate": "ultimate"}


@dataclass(frozen=True, slots=True)
class Show:
    """What the cells show."""

    theory: Theory = "least"
    """The lesser over the accepted theories, one of them, or their difference."""
    limit: Limit = "all"
    """The lesser over the limits, or one."""
    quantity: Quantity = "margin"
    """The number."""

    def next_theory(self) -> Show:
        """The other theory."""
        return replace(self, theory=_THEORIES[(_THEORIES.index(self.theory) + 1) % len(_THEORIES)])

    def next_limit(self) -> Show:
        """The other limit."""
        return replace(self, limit=_LIMITS[(_LIMITS.index(self.limit) + 1) % len(_LIMITS)])

    def next_quantity(self) -> Show:
        """The other quantity."""
        return replace(self, quantity=_QUANTITIES[(_QUANTITIES.index(self.quantity) + 1) % len(_QUANTITIES)])

    def limits(self) -> list[int]:
        """Places in LIMITS of those shown."""
        return [0, 1] if self.limit == "all" else [LIMITS.index(self.limit)]


@dataclass(frozen=True, eq=False, slots=True)
class Block:
    """Numbers of some cells: margins by theory, the shown limits taken together, and their verdicts."""

    margins: Array
    """(2, ...) least margins by theory over the shown limits."""
    verdicts: npt.NDArray[np.int8]
    """(...) places in VERDICTS."""


class MarginsSheet(WorkSheet):
    """Margins of all cells; never edited here, Enter leads to what stands behind a cell."""

    key, title = "margins", "Margins"
    row_kind, column_kind = "point", "case"
    show = Show()

    def size(self) -> tuple[int, int]:
        return self.document.table.shape

    def width(self, column: int) -> int:
        return 10

    def row_name(self, row: int) -> str:
        return self.document.project.points[row].name

    def column_name(self, column: int) -> str:
        project = self.document.project
        return project.cases[int(self.document.table.of_case[column])].name

    def empty(self) -> str:
        points, cases = self.size()
        if not points:
            return (
                "There is no check point yet.\nPress a to add one"
                + ("" if cases else ", A (shift and a) to add a load case")
                + "."
            )
        return "No load case is checked yet.\nPress A (shift and a) to add one."

    def shows(self) -> str:
        show = self.show
        theory = self._worse() if show.theory == "least" else _SHOWN_THEORY[show.theory]
        if show.quantity == "equivalent":
            return f"equivalent stress in {self._unit()}: {theory}"
        what = "margin" if show.quantity == "margin" else "utilisation"
        return f"{what}: {theory}, {_SHOWN_LIMIT[show.limit]}"

    def _worse(self) -> str:
        return "worse of both theories" if self._both() else self._accepted()

    def _both(self) -> bool:
        return self.document.project.settings.accept == "both"

    def _accepted(self) -> str:
        return _SHOWN_THEORY[self.document.project.settings.accepted[0]]

    def _unit(self) -> str:
        return self.document.project.settings.units.rsplit("-", 1)[1]

    # ---- numbers

    def block(self, rows: slice, columns: Sequence[int]) -> Block:
        """Numbers of a block of cells, no more of them than asked for."""
        table, settings = self.document.table, self.document.project.settings
        chosen = np.array(columns, dtype=np.intp)
        margins = np.fmin.reduce([table.margins(rows, chosen, limit) for limit in self.show.limits()], axis=0)
        codes = verdict_codes(margins, table.missing(rows, chosen), settings.accept, settings.thin)
        return Block(margins, codes)

    def _chosen(self, margins: Array) -> Array:
        """One margin a cell, by the theory shown."""
        match self.show.theory:
            case "least":
                return least_accepted(margins, self.document.project.settings.accept)
            case "tresca" | "von-mises":
                return np.asarray(margins[0 if self.show.theory == "tresca" else 1])
            case _:
                with np.errstate(invalid="ignore"):
                    return np.asarray(margins[0] - margins[1])

    def _texts(self, row: slice, columns: Sequence[int], block: Block) -> list[str]:
        match self.show.quantity:
            case "margin":
                bare = np.asarray(np.isinf(block.margins).all(axis=0))[0] & (self.show.theory == "difference")
                texts = margin_texts(self._chosen(block.margins)[0])
                return [_NOTHING if none else text for text, none in zip(texts, bare, strict=True)]
            case "utilisation":
                with np.errstate(divide="ignore", invalid="ignore"):
                    used = 1.0 / (1.0 + block.margins)
                if self.show.theory == "difference":
                    return margin_texts((used[0] - used[1])[0])
                return [utilisation_text(float(u)) for u in (1.0 / (1.0 + self._chosen(block.margins)))[0]]
            case _:
                return self._equivalent_texts(row, columns, block)

    def _equivalent_texts(self, row: slice, columns: Sequence[int], block: Block) -> list[str]:
        values = self.document.table.values[:, row][:, 0, columns]
        match self.show.theory:
            case "difference":
                chosen = values[0] - values[1]
            case "least":
                lesser = np.argmin(np.where(np.isnan(block.margins[:, 0]), np.inf, block.margins[:, 0]), axis=0)
                if not self._both():
                    lesser[:] = 0 if self.document.project.settings.accept == "tresca" else 1
                chosen = values[lesser, np.arange(len(columns))]
            case theory:
                chosen = values[0 if theory == "tresca" else 1]
        return [stress_text(float(value)) for value in chosen]

    # ---- drawing

    def cells(self, row: int, columns: Sequence[int]) -> list[Cell]:
        run = slice(row, row + 1)
        block = self.block(run, columns)
        texts = self._texts(run, columns, block)
        governs = self.document.table.envelope.of_point(row).case
        return [
            self._cell(text, int(code), column == governs) if asked else self._not_asked(text)
            for text, code, column, asked in zip(texts, block.verdicts[0], columns, self._asked(columns), strict=True)
        ]

    def _asked(self, columns: Sequence[int]) -> npt.NDArray[np.bool_]:
        """Whether the categories of these cases ask for a limit that is shown: what nobody asks for lacks no data."""
        shown = self.document.table.rating.asked[self.show.limits()][:, list(columns)]
        return np.asarray(shown.any(axis=0))

    def _not_asked(self, text: str) -> Cell:
        return Cell(f"{text if self.show.quantity == 'equivalent' else _NOTHING} ", "dim")

    @staticmethod
    def _cell(text: str, code: int, governs: bool = False) -> Cell:
        verdict = VERDICTS[code]
        role = VERDICT_ROLES[verdict]
        return Cell(f"{text} ", f"{role} governs" if governs else role, MARKS[verdict])

    def header(self, column: int) -> Cell:
        return Cell(self.column_name(column), "head")

    def footers(self) -> int:
        return 1

    def footer(self, index: int, columns: Sequence[int]) -> list[Cell]:
        if self.show.quantity == "equivalent" or self.show.theory == "difference":
            return [Cell("") for _ in columns]
        block = self.block(slice(None), columns)
        settings = self.document.project.settings
        with np.errstate(invalid="ignore"):
            least = np.fmin.reduce(block.margins, axis=1)
        lacking = np.any(self.document.table.missing(slice(None), np.array(columns, dtype=np.intp)), axis=0)
        codes = verdict_codes(least, lacking, settings.accept, settings.thin)
        chosen = self._chosen(least)
        used = self.show.quantity == "utilisation"
        with np.errstate(divide="ignore"):
            texts = [utilisation_text(float(u)) for u in 1.0 / (1.0 + chosen)] if used else margin_texts(chosen)
        return [
            self._cell(text, int(code)) if asked else self._not_asked(text)
            for text, code, asked in zip(texts, codes, self._asked(columns), strict=True)
        ]

    def footer_frozen(self, index: int, room: int) -> Runs:
        if self.show.quantity == "equivalent" or self.show.theory == "difference":
            return [("", "dim")]
        return [(" most used in case" if self.show.quantity == "utilisation" else " least in case", "dim")]

    # ---- the left block

    def _name_width(self, room: int) -> int:
        return max(10, min(24, room // 5))

    def frozen_width(self, room: int) -> int:
        return self._name_width(room) + 30

    def frozen_header(self, room: int) -> Runs:
        name = cut("point", self._name_width(room))
        return [(f" {name} {'least':>6}   {'in':<6} {'limit':<5} theory ", "head")]

    def frozen(self, row: int, room: int) -> Runs:
        envelope, project = self.document.table.envelope, self.document.project
        found = envelope.of_point(row)
        verdict = VERDICTS[envelope.verdicts()[row]]
        name = cut(project.points[row].name, self._name_width(room))
        where = f"{cut(governing_case(project, found), 6)} {SHORT_LIMIT[LIMITS[found.limit]] if found.known else '':<5}"
        theory = SHORT_THEORY[found.theory] if found.theory else ""
        return [
            (" ", "plain"),
            (name, "plain"),
            (f" {margin_text(found.margin):>6} {MARKS[verdict]} ", VERDICT_ROLES[verdict]),
            (f"{where} {theory:<6} ", "dim"),
        ]

    # ---- working

    def here(self, row: int, column: int) -> list[Runs]:
        return cell_lines(self.document, row, column, self.show.limits())

    def opens(self, row: int, column: int) -> Opening | None:
        points, cases = self.size()
        if row >= points or column >= cases:
            return None
        point, case = self.document.project.points[row], self.column_name(column)
        if point.section:
            return Opening(
                "", message=f"{point.name} takes its stress from section {point.section}, which is not computed yet"
            )
        if point.linear:
            text = f"linear: the loads of {case} make the stress of {point.name}; edit them here"
            return Opening("loads", row=case, message=text)
        text = f"direct: the stress of {point.name} in {case} is given as this row"
        return Opening("stress", row=case, subject=point.name, message=text)
