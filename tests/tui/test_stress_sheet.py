"""Stress rows of a point: typed, changed, taken away, in the component order of the file."""

from __future__ import annotations

import numpy as np
import pytest

from engine import store
from engine.edits import Refusal
from engine.entry import EntryError
from engine.stress import COMPONENTS
from tui.document import Document
from tui.stress_sheet import StressSheet

from .app_tools import DEMO
from .small_projects import BRITTLE, EMPTY, NO_STRESS, ONLY_POINTS

TURNED = BRITTLE.replace("xx yy zz xy yz zx", "zx yz xy zz yy xx").replace(
    "[10.0, 0, 0, 0, 0, 0]", "[1, 2, 3, 4, 5, 6]"
)


def opened(text: str, point: str = "P01", of: str = "stress") -> StressSheet:
    return StressSheet(Document(store.parse(text), None), of, point)  # type: ignore[arg-type]


def typed(sheet: StressSheet, row: int, column: int, text: str) -> list[float] | None:
    """The row, in the engine's order, after an entry."""
    edit = sheet.edit(row, column, text)
    if edit is not None:
        sheet.document.commit(edit)
    rows = sheet.point.stress if sheet.of == "stress" else sheet.point.per_load
    given = rows.get(sheet.row_name(row))
    return None if given is None else given.tolist()


def said(sheet: StressSheet, row: int, column: int) -> str:
    return "\n".join("".join(text for text, _ in runs) for runs in sheet.here(row, column))


@pytest.mark.parametrize(
    ("column", "text", "row"),
    [
        (0, "12", [12.0, 0, 0, 0, 0, 0]),
        (3, "-3.5", [10.0, 0, 0, -3.5, 0, 0]),
        (5, "1.35*42", [10.0, 0, 0, 0, 0, 56.7]),
        (1, "1 ksi", [10.0, pytest.approx(6.894757293168), 0, 0, 0, 0]),
        (2, "1 2 3 4 5 6", [1.0, 2, 3, 4, 5, 6]),  # a whole row, wherever the cursor is
        (2, "1; 2; 3; 4; 5; 6", [1.0, 2, 3, 4, 5, 6]),
        (0, "10", [10.0, 0, 0, 0, 0, 0]),
    ],
)
def test_an_entry_changes_one_component_or_the_whole_row(column: int, text: str, row: list[float]) -> None:
    assert typed(opened(BRITTLE), 0, column, text) == row


def test_a_row_that_is_not_there_is_typed_whole() -> None:
    sheet = opened(NO_STRESS)
    assert sheet.initial(0, 0) == ""
    assert "xx yy zz xy yz zx (MPa)" in sheet.prompt(0, 0)
    assert "no row yet" in said(sheet, 0, 0)
    with pytest.raises(EntryError, match="6 numbers are expected, 1 found"):
        typed(sheet, 0, 0, "12")
    assert typed(sheet, 0, 0, "12 0 0 3 0 0") == [12.0, 0, 0, 3, 0, 0]
    assert np.isfinite(sheet.document.table.values).all()


@pytest.mark.parametrize("text", ["abc", "1,5", "3 kN", "1 2 3", "", "1e400", "(1"])
def test_a_wrong_entry_is_refused(text: str) -> None:
    sheet = opened(BRITTLE)
    before = sheet.document.project
    with pytest.raises((EntryError, Refusal)):
        typed(sheet, 0, 0, text)
    assert sheet.document.project is before


def test_an_empty_entry_where_no_row_is_changes_nothing() -> None:
    assert opened(NO_STRESS).edit(0, 0, "  ") is None


def test_rows_stand_in_the_component_order_of_the_file() -> None:
    sheet = opened(TURNED)
    assert [sheet.column_name(c) for c in range(6)] == ["zx", "yz", "xy", "zz", "yy", "xx"]
    assert [cell.text for cell in sheet.cells(0, range(6))] == ["1", "2", "3", "4", "5", "6"]
    assert typed(sheet, 0, 5, "60") == [60.0, 5, 4, 3, 2, 1]
    assert typed(sheet, 0, 0, "7 8 9 10 11 12") == [12.0, 11, 10, 9, 8, 7]
    assert [sheet.initial(0, c) for c in range(6)] == ["7", "8", "9", "10", "11", "12"]
    assert tuple(reversed(COMPONENTS)) == ("zx", "yz", "xy", "zz", "yy", "xx")


def test_enter_twice_changes_nothing() -> None:
    for text in (BRITTLE, TURNED, NO_STRESS):
        sheet = opened(text)
        for column in range(6):
            assert sheet.edit(0, column, sheet.initial(0, column)) is None


def test_taking_a_row_away_leaves_its_cell_without_data() -> None:
    sheet = opened(BRITTLE)
    edit = sheet.removal(0)
    assert edit is not None
    sheet.document.commit(edit)
    assert sheet.removal(0) is None
    assert [cell.text for cell in sheet.cells(0, range(6))] == ["."] * 6
    assert sheet.document.state.envelope.counts()["no-data"] == 1
    sheet.document.undo()
    assert sheet.cells(0, [0])[0].text == "10"


def test_per_load_rows_are_those_of_the_loads_and_say_so() -> None:
    sheet = StressSheet(Document(store.load(DEMO), None), "per-load", "P04 brake cyl outer")
    assert [sheet.row_name(row) for row in range(sheet.size()[0])] == ["haul", "hold", "side", "dead", "brake", "heat"]
    assert [cell.text for cell in sheet.cells(4, range(6))] == ["5", "10", "0", "0", "0", "0"]
    assert "per unit of the load" in sheet.shows()
    assert "tension positive" in sheet.shows()


def test_a_long_number_is_rounded_in_its_column_and_whole_below() -> None:
    sheet = opened(BRITTLE.replace("[10.0,", "[-127.83421,"))
    assert sheet.cells(0, [0])[0].text == "-127.834"
    assert "xx = -127.83421" in said(sheet, 0, 0)
    assert sheet.initial(0, 0) == "-127.83421"
    assert sheet.edit(0, 0, "-127.83421") is None


def test_here_says_principals_and_both_equivalents_of_the_row() -> None:
    words = said(opened(BRITTLE.replace("[10.0, 0, 0, 0, 0, 0]", "[120.0, 0, 0, 45.0, 0, 0]")), 0, 0)
    # bending 120 with torsion 45 (head of the demo): sqrt(120^2 + 4 x 45^2) = 150, sqrt(120^2 + 3 x 45^2) = 143.1
    assert "Tresca 150.0" in words
    assert "von Mises 143.1" in words
    assert "135.0  0.000  -15.00" in words


@pytest.mark.parametrize(
    ("text", "of", "says"),
    [(ONLY_POINTS, "stress", "F3, then a"), (ONLY_POINTS, "per-load", "F3, then A")],
)
def test_without_cases_or_loads_it_says_what_to_press(text: str, of: str, says: str) -> None:
    sheet = opened(text, of=of)
    assert sheet.size() == (0, 0)
    assert says in sheet.empty()


def test_it_is_gone_when_its_point_is() -> None:
    assert not opened(BRITTLE).gone
    assert opened(EMPTY).gone
