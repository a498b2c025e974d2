"""The Margins sheet: its numbers against the demo's hand checks, what it can show, and where Enter leads."""

from __future__ import annotations

import pytest

from engine import store
from engine.edits import Set
from tui.document import Document
from tui.margins_sheet import MarginsSheet, Show

from .app_tools import DEMO
from .small_projects import BRITTLE, EMPTY, NO_STRESS, ONLY_CASES, ONLY_POINTS, UNCOMPUTED

POINTS = {name: i for i, name in enumerate(f"P{n:02d}" for n in range(1, 13))}
CASES = {name: i for i, name in enumerate(f"LC{n:02d}" for n in range(1, 19))}


def opened(text: str | None = None) -> MarginsSheet:
    return MarginsSheet(Document(store.load(DEMO) if text is None else store.parse(text), None))


def shown(sheet: MarginsSheet, point: str, case: str) -> tuple[str, str]:
    """Number and mark of a cell."""
    cell = sheet.cells(POINTS[point], [CASES[case]])[0]
    return cell.text.strip(), cell.mark


def words(runs: list[tuple[str, str]]) -> str:
    return "".join(text for text, _ in runs)


def here(sheet: MarginsSheet, point: str, case: str) -> list[str]:
    return [words(runs) for runs in sheet.here(POINTS[point], CASES[case])]


HAND = [
    # From the head of the demo file, worked by hand: margin by Tresca, by von Mises; the mark of the cell
    ("P01", "LC01", "+0.47", "+0.63", " "),  # 225 / (1.5 x 102) - 1; von Mises 91.54
    ("P02", "LC01", "+0.00", "+0.04", "~"),  # zero exactly, and zero is not a failure
    ("P02", "LC09", "-0.04", "+0.00", "/"),  # 225 / (1.25 x 187.5) - 1 = -0.040; +0.006 is shown as +0.00
    ("P03", "LC09", "+0.06", "+0.23", "~"),  # 225 / (1.25 x 168.75) - 1 = 0.0667
    ("P04", "LC07", "-0.22", "-0.09", "X"),  # 142 / (1.5 x 120) - 1 = -0.211 is shown as -0.22, never as -0.21
    ("P09", "LC01", "+0.53", "+0.60", " "),  # 345 / (1.5 x 1.25 x 120) - 1
    ("P01", "LC05", "inf", "inf", " "),  # the side pull is not felt: no stress
    ("P12", "LC10", ".", ".", "?"),  # no row
    ("P11", "LC14", ".", ".", "?"),  # 350 degC is outside the table of its material
]


@pytest.mark.parametrize(("point", "case", "tresca", "mises", "mark"), HAND)
def test_margins_are_those_worked_by_hand(point: str, case: str, tresca: str, mises: str, mark: str) -> None:
    sheet = opened()
    assert shown(sheet, point, case) == (tresca, mark)  # the worse of both is Tresca's here
    sheet.show = Show("tresca")
    assert shown(sheet, point, case) == (tresca, mark)
    sheet.show = Show("von-mises")
    assert shown(sheet, point, case) == (mises, mark)


def test_where_one_theory_is_accepted_the_worse_is_that_one() -> None:
    sheet = opened()
    sheet.document.commit(Set("project", "", ("accept",), "von-mises"))
    assert shown(sheet, "P02", "LC09") == ("+0.00", "/")
    assert sheet.shows() == "margin: von Mises, all limits"


def test_keys_go_through_theories_limits_and_quantities_and_come_round() -> None:
    show = Show()
    theories, limits, quantities = [], [], []
    for _ in range(5):
        theories.append(show.theory)
        limits.append(show.limit)
        quantities.append(show.quantity)
        show = show.next_theory().next_limit().next_quantity()
    assert theories == ["least", "tresca", "von-mises", "difference", "least"]
    assert limits == ["all", "yield", "ultimate", "all", "yield"]
    assert quantities == ["margin", "utilisation", "equivalent", "margin", "utilisation"]


@pytest.mark.parametrize(
    ("show", "text", "says"),
    [
        (Show(), "-0.04", "margin: worse of both theories, all limits"),
        (Show("tresca"), "-0.04", "margin: Tresca, all limits"),
        (Show("von-mises"), "+0.00", "margin: von Mises, all limits"),
        (Show("difference"), "-0.05", "margin: Tresca less von Mises, all limits"),  # -0.0400 - 0.0063, rounded down
        (Show(limit="ultimate"), "+0.33", "margin: worse of both theories, ultimate"),  # 400 / (1.6 x 187.5) - 1
        (Show(quantity="utilisation"), "1.05", "utilisation: worse of both theories, all limits"),  # 234.4 / 225, up
        (Show("von-mises", "yield", "utilisation"), "1.00", "utilisation: von Mises, yield"),  # 0.9937, rounded up
        (Show(quantity="equivalent"), "187.5", "equivalent stress in MPa: worse of both theories"),
        (Show("von-mises", quantity="equivalent"), "178.9", "equivalent stress in MPa: von Mises"),
        (Show("difference", quantity="equivalent"), "8.636", "equivalent stress in MPa: Tresca less von Mises"),
    ],
)
def test_a_cell_shows_what_the_third_line_says(show: Show, text: str, says: str) -> None:
    sheet = opened()
    sheet.show = show
    assert shown(sheet, "P02", "LC09")[0] == text
    assert sheet.shows() == says


def test_a_limit_that_is_not_asked_for_lacks_no_data() -> None:
    sheet = opened(BRITTLE)
    assert sheet.cells(0, [0])[0].mark == " "
    for show, text in (
        (Show(limit="ultimate"), "-"),
        (Show(limit="ultimate", quantity="utilisation"), "-"),
        (Show(limit="ultimate", quantity="equivalent"), "10.00"),
    ):
        sheet.show = show
        cell = sheet.cells(0, [0])[0]
        assert (cell.text.strip(), cell.mark) == (text, " ")
    sheet.show = Show(limit="ultimate")
    foot = sheet.footer(0, [0])[0]
    assert (foot.text.strip(), foot.mark) == ("-", " ")


def test_without_stress_there_is_nothing_to_compare_and_nothing_missing() -> None:
    sheet = opened()
    sheet.show = Show("difference")
    assert shown(sheet, "P01", "LC05") == ("-", " ")
    assert shown(sheet, "P12", "LC10") == (".", "?")
    sheet.show = Show("difference", quantity="utilisation")
    assert shown(sheet, "P01", "LC05") == ("+0.00", " ")


@pytest.mark.parametrize("quantity", ["margin", "utilisation", "equivalent"])
@pytest.mark.parametrize("theory", ["least", "tresca", "von-mises", "difference"])
def test_a_cell_without_data_shows_a_dot_and_its_mark_whatever_is_shown(theory: str, quantity: str) -> None:
    sheet = opened()
    sheet.show = Show(theory, "all", quantity)  # type: ignore[arg-type]
    assert shown(sheet, "P12", "LC10") == (".", "?")


def test_the_row_under_the_grid_is_the_least_of_each_column() -> None:
    sheet = opened()
    columns = list(range(18))
    foot = sheet.footer(0, columns)
    assert (foot[CASES["LC09"]].text.strip(), foot[CASES["LC09"]].mark) == ("-0.04", "/")
    assert (foot[CASES["LC07"]].text.strip(), foot[CASES["LC07"]].mark) == ("-0.29", "X")
    numbers = [[cell.text.strip() for cell in sheet.cells(row, columns)] for row in range(12)]
    for column in columns:
        known = [float(row[column]) for row in numbers if row[column] not in {"inf", "."}]
        assert float(foot[column].text) == min(known), column
    assert words(sheet.footer_frozen(0, 80)).strip() == "least in case"
    sheet.show = Show(quantity="utilisation")
    assert words(sheet.footer_frozen(0, 80)).strip() == "most used in case"
    assert sheet.footer(0, [CASES["LC09"]])[0].text.strip() == "1.05"
    sheet.show = Show(quantity="equivalent")
    assert sheet.footer(0, [0])[0].text.strip() == ""


def test_the_governing_cell_of_a_row_is_bold() -> None:
    roles = [cell.role for cell in opened().cells(POINTS["P01"], range(18))]
    assert [i for i, role in enumerate(roles) if "governs" in role] == [CASES["LC09"]]


@pytest.mark.parametrize("room", [80, 120, 200])
def test_the_left_block_says_least_margin_case_limit_and_theory(room: int) -> None:
    sheet = opened()
    for row in range(12):
        line = words(sheet.frozen(row, room))
        assert line[: sheet.frozen_width(room)].rstrip() == line.rstrip(), "something is cut"
    assert words(sheet.frozen(POINTS["P02"], room)).split()[-5:] == ["-0.04", "/", "LC09", "yield", "Tresca"]
    assert words(sheet.frozen(POINTS["P06"], room)).split()[-4:] == ["+0.12", "LC04", "yield", "both"]
    assert len(words(sheet.frozen_header(room)).rstrip()) <= sheet.frozen_width(room)


def test_here_writes_the_multiplication_out_so_that_it_can_be_followed() -> None:
    title, tresca, mises, point = here(opened(), "P02", "LC09")
    assert "P02 shaft at bearing x LC09" in title
    assert "occasional" in title
    assert "20 degC" in title
    assert " ".join(tresca.split()) == "Tresca 187.5 x 1.25 x 1.00 of 225.0 yield -0.04 fails, controls"
    assert " ".join(mises.split()) == "von Mises 178.9 x 1.25 x 1.00 of 225.0 yield +0.00 shear in plane"
    assert "both theories name LC09 yield" in point


def test_here_says_where_the_theories_name_different_cases() -> None:
    line = here(opened(), "P05", "LC01")[-1]
    assert "Tresca names LC05 yield +0.21, von Mises LC09 yield +0.22" in line


def test_here_shows_a_factor_with_all_its_digits() -> None:
    sheet = opened()
    sheet.document.commit(Set("category", "occasional", ("yield", "tresca"), 1.155))
    assert "x 1.155 x" in here(sheet, "P02", "LC09")[1]


@pytest.mark.parametrize(
    ("point", "case", "says"),
    [
        ("P12", "LC10", "no row for LC10"),
        ("P11", "LC14", "no yield strength known"),
    ],
)
def test_here_says_why_there_is_no_margin(point: str, case: str, says: str) -> None:
    assert any(says in line for line in here(opened(), point, case))


def test_here_says_out_of_plane_where_the_third_principal_sets_tresca() -> None:
    assert "shear out of plane" in here(opened(), "P04", "LC07")[2]


def test_enter_on_a_linear_cell_leads_to_the_loads_of_its_case_and_says_so() -> None:
    opening = opened().opens(POINTS["P01"], CASES["LC09"])
    assert opening is not None
    assert (opening.sheet, opening.row) == ("loads", "LC09")
    assert "linear" in opening.message


def test_enter_on_a_direct_cell_leads_to_the_points_row_of_its_case_and_says_so() -> None:
    opening = opened().opens(POINTS["P12"], CASES["LC09"])
    assert opening is not None
    assert (opening.sheet, opening.row, opening.subject) == ("stress", "LC09", "P12 bed anchor FE")
    assert "direct:" in opening.message


def test_enter_on_a_point_of_a_section_leads_nowhere_and_says_why() -> None:
    opening = opened(UNCOMPUTED).opens(0, 0)
    assert opening is not None
    assert opening.sheet == ""
    assert "not computed yet" in opening.message


def test_a_project_that_is_not_computed_yet_shows_no_number() -> None:
    cell = opened(UNCOMPUTED).cells(0, [0])[0]
    assert (cell.text.strip(), cell.mark) == (".", "?")


@pytest.mark.parametrize(
    ("text", "size", "says"),
    [
        (EMPTY, (0, 0), ["Press a", "A (shift and a)"]),
        (ONLY_CASES, (0, 1), ["no check point yet", "Press a"]),
        (ONLY_POINTS, (1, 0), ["No load case", "Press A"]),
    ],
)
def test_an_empty_sheet_says_what_to_press(text: str, size: tuple[int, int], says: list[str]) -> None:
    sheet = opened(text)
    assert sheet.size() == size
    assert all(part in sheet.empty() for part in says)
    assert sheet.opens(0, 0) is None


def test_a_point_without_stress_is_without_data() -> None:
    sheet = opened(NO_STRESS)
    assert sheet.cells(0, [0])[0].mark == "?"
    assert words(sheet.frozen(0, 80)).split() == ["P01", ".", "?", "."]
