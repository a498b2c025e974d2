"""The Loads sheet: magnitudes and all else that a case says, edited in place."""

from __future__ import annotations

import pytest

from engine import store
from engine.edits import Refusal
from engine.entry import EntryError
from engine.reading import Plain
from engine.units import UnitError
from tui.document import Document
from tui.fields import plain_of
from tui.loads_sheet import CASE_FIELDS, LoadsSheet

from .app_tools import DEMO
from .small_projects import EMPTY, NOT_CHECKED, ONLY_CASES, square

LOADS = {name: i for i, name in enumerate(("haul", "hold", "side", "dead", "brake", "heat"))}
FIELDS = {field.path[0]: len(LOADS) + i for i, field in enumerate(CASE_FIELDS)}
CASES = {name: i for i, name in enumerate(f"LC{n:02d}" for n in range(1, 19))}


def opened(text: str | None = None) -> LoadsSheet:
    return LoadsSheet(Document(store.load(DEMO) if text is None else store.parse(text), None))


def typed(sheet: LoadsSheet, case: str, column: int, text: str) -> None:
    edit = sheet.edit(CASES[case], column, text)
    if edit is not None:
        sheet.document.commit(edit)


def magnitude(sheet: LoadsSheet, case: str, load: str) -> float | None:
    return sheet.document.project.cases[CASES[case]].loads.get(load)


def words(runs: list[tuple[str, str]]) -> str:
    return "".join(text for text, _ in runs)


@pytest.mark.parametrize(
    ("load", "text", "value"),
    [
        ("haul", "60000", 60000.0),
        ("haul", "1.35*42000", 56700.0),
        ("haul", "12 kN", 12000.0),
        ("haul", "(10 + 2) kN", 12000.0),
        ("haul", "0", 0.0),
        ("haul", "-5", -5.0),
        ("haul", "", None),  # not named any more: zero
        ("brake", "120 bar", 12.0),
        ("heat", "90 degF", 50.0),  # a difference of temperatures has no offset
        ("dead", "1.1", 1.1),  # a plain multiplier
    ],
)
def test_an_entry_becomes_the_magnitude(load: str, text: str, value: float | None) -> None:
    sheet = opened()
    typed(sheet, "LC09", LOADS[load], text)
    assert magnitude(sheet, "LC09", load) == value


@pytest.mark.parametrize(
    ("load", "text", "why"),
    [
        ("haul", "abc", "not read"),
        ("haul", "12 MPa", "a force"),
        ("haul", "1.2.3", "side by side"),
        ("dead", "1 kN", "no unit is expected"),
        ("haul", "1e999", "too large"),
        ("haul", "5 +", "number is missing"),
        ("haul", "2 + 3 kN", "brackets"),
    ],
)
def test_a_wrong_magnitude_is_refused_in_plain_words(load: str, text: str, why: str) -> None:
    sheet = opened()
    before = sheet.document.project
    with pytest.raises((EntryError, UnitError)) as refused:
        typed(sheet, "LC09", LOADS[load], text)
    assert why in str(refused.value)
    assert sheet.document.project is before


@pytest.mark.parametrize(
    ("case", "field", "text", "value"),
    [
        ("LC09", "category", "accident", "accident"),
        ("LC09", "temperature", "60", 60.0),
        ("LC09", "temperature", "212 degF", 100.0),
        ("LC09", "temperature", "", None),
        ("LC15", "combine", "LC01 = 1.1, LC13 = 1", {"LC01": 1.1, "LC13": 1.0}),
        ("LC15", "combine", "", None),
        ("LC09", "check", "no", False),
        ("LC09", "check", "yes", None),  # what an absent key means
        ("LC09", "label", "Overload test, repeated", "Overload test, repeated"),
        ("LC09", "label", "", None),
    ],
)
def test_every_field_of_a_case_can_be_changed(case: str, field: str, text: str, value: Plain) -> None:
    sheet = opened()
    typed(sheet, case, FIELDS[field], text)
    found = plain_of("case", sheet.document.project.cases[CASES[case]], (field,))
    assert found == (pytest.approx(value) if isinstance(value, float) else value)


@pytest.mark.parametrize(
    ("case", "field", "text", "why"),
    [
        ("LC09", "category", "ocasional", 'did you mean "occasional"'),
        ("LC09", "category", "", "missing"),
        ("LC09", "temperature", "warm", "not read"),
        ("LC15", "temperature", "", "a temperature of its own"),  # its ingredients have one
        ("LC15", "combine", "LC99 = 1", 'no case is named "LC99"'),
        ("LC15", "combine", "LC01", "expected name = number"),
        ("LC13", "combine", "LC15 = 1", "ring"),
        ("LC16", "combine", "LC16 = 1", "ring"),
        ("LC09", "check", "maybe", "yes or no"),
    ],
)
def test_a_wrong_field_is_refused_in_plain_words(case: str, field: str, text: str, why: str) -> None:
    sheet = opened()
    before = sheet.document.project
    with pytest.raises((EntryError, Refusal)) as refused:
        typed(sheet, case, FIELDS[field], text)
    assert why in str(refused.value)
    assert sheet.document.project is before


def test_every_field_of_a_case_is_tried_above() -> None:
    assert set(FIELDS) == {"category", "temperature", "combine", "check", "label"}


def test_enter_twice_on_any_cell_changes_nothing() -> None:
    sheet = opened()
    rows, columns = sheet.size()
    for row in range(rows):
        for column in range(columns):
            assert sheet.edit(row, column, sheet.initial(row, column)) is None, (row, column)


def test_a_head_names_the_load_with_its_unit_and_the_prompt_too() -> None:
    sheet = opened()
    assert sheet.header(LOADS["brake"]).text == "brake MPa"
    assert sheet.header(LOADS["dead"]).text == "dead"
    assert sheet.prompt(CASES["LC09"], LOADS["haul"]) == "LC09 haul (N)"
    assert sheet.prompt(CASES["LC09"], LOADS["dead"]) == "LC09 dead"
    assert sheet.prompt(CASES["LC09"], FIELDS["temperature"]) == "LC09 temperature (degC)"


def test_digits_start_an_entry_in_cells_of_numbers_only() -> None:
    sheet = opened()
    numeric = {name for name, column in (LOADS | FIELDS).items() if sheet.numeric(0, column)}
    assert numeric == {*LOADS, "temperature"}


def test_what_a_combination_makes_is_marked_and_written_out() -> None:
    sheet = opened()
    cell = sheet.cells(CASES["LC15"], [LOADS["haul"]])[0]
    assert (cell.text, cell.mark) == ("60000", "+")
    lines = [words(runs) for runs in sheet.here(CASES["LC17"], LOADS["side"])]
    assert any("1.2 x 2000 (LC02) = 2400" in line for line in lines)
    lines = [words(runs) for runs in sheet.here(CASES["LC01"], LOADS["side"])]
    assert any("not named in this case, so zero" in line for line in lines)


def test_a_sum_is_shown_without_the_noise_of_adding() -> None:
    text = square(1, 2) + '[[case]]\nname = "C"\ncategory = "normal"\ncombine = { LC000 = 1.1, LC001 = 1.1 }\n'
    sheet = opened(text.replace("haul = 1000.0", "haul = 12000.0"))
    assert 1.1 * 12000 + 1.1 * 1001 != 14301.1  # the noise
    assert sheet.cells(2, [0])[0].text == "14301.1"


def test_the_left_block_has_the_least_margin_in_each_case_with_its_mark() -> None:
    sheet = opened()
    assert words(sheet.frozen(CASES["LC09"], 80)).split() == ["LC09", "-0.04", "/"]
    assert words(sheet.frozen(CASES["LC07"], 80)).split() == ["LC07", "-0.29", "X"]
    typed(sheet, "LC09", LOADS["haul"], "60000")
    assert words(sheet.frozen(CASES["LC09"], 80)).split() == ["LC09", "+0.20"]


def test_a_case_that_is_not_checked_has_no_margin_and_says_so() -> None:
    sheet = opened(NOT_CHECKED)
    assert words(sheet.frozen(0, 80)).split() == ["LC01"]
    assert "not checked" in words(sheet.here(0, 0)[0])
    assert sheet.cells(0, [sheet.size()[1] - 2])[0].text == "no"


def test_a_case_without_loads_in_the_project_can_still_be_edited() -> None:
    sheet = opened(ONLY_CASES)
    assert sheet.size() == (1, len(CASE_FIELDS))
    assert words(sheet.frozen(0, 80)).split()[0] == "LC01"


def test_an_empty_sheet_says_what_to_press() -> None:
    sheet = opened(EMPTY)
    assert sheet.size() == (0, 0)
    assert "Press a" in sheet.empty()
