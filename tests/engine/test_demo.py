"""The demo project, by the plain formulas that its head writes out."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import pytest

from engine.margins import MarginTable, compute
from engine.store import load
from engine.summary import report

DEMO = Path(__file__).parents[2] / "projects" / "slipway-winch.toml"
W, WT = math.pi * (120**4 - 70**4) / (32 * 120), math.pi * (120**4 - 70**4) / (16 * 120)
"""Section moduli of the drum shaft 120/70 mm, in bending and in torsion, mm3."""


@pytest.fixture(scope="module")
def table() -> MarginTable:
    """All margins of the demo."""
    return compute(load(DEMO))


@pytest.fixture(scope="module")
def points(table: MarginTable) -> dict[str, Any]:
    """The report of each point, by the first word of its name."""
    return {found["name"].split()[0]: found for found in report(table)["points"]}


def cell(table: MarginTable, point: str, case: str) -> tuple[float, float, float, float]:
    """Both equivalents and both yield margins of a cell, Tresca first."""
    row = [name.split()[0] for name in table.project.names("point")].index(point)
    column = [checked.name for checked in table.project.checked].index(case)
    both = [table.values[i, row, column] for i in (0, 1)] + list(table.margins([row], [column], 0)[:, 0, 0])  # type: ignore[arg-type]
    return both[0], both[1], both[2], both[3]


def test_the_round_section_moduli_of_the_head_are_right() -> None:
    assert pytest.approx(150_000, rel=2e-5) == W
    assert pytest.approx(300_000, rel=2e-5) == WT
    assert 60_000 * 120 / 150_000 == 48.0  # bending at midspan, MPa
    assert 60_000 * 225 / 300_000 == 45.0  # torsion
    assert 60_000 * 300 / 150_000 == 120.0  # bending at the bearing


ROOT = math.sqrt
HAND = [
    # point, case, Tresca, von Mises, and the margins of each as the head works them out
    ("P01", "LC01", ROOT(48**2 + 4 * 45**2), ROOT(48**2 + 3 * 45**2), 225 / (1.5 * 102) - 1, None),
    ("P02", "LC01", 150.0, ROOT(120**2 + 3 * 45**2), 0.0, None),
    ("P02", "LC09", 187.5, ROOT(150**2 + 3 * 56.25**2), 225 / (1.25 * 187.5) - 1, 225 / (1.25 * 178.9) - 1),
    ("P03", "LC09", 168.75, ROOT(3) * 84.375, 225 / (1.25 * 168.75) - 1, None),
    ("P04", "LC07", 120.0, ROOT(120**2 - 120 * 60 + 60**2), 142 / (1.5 * 120) - 1, 142 / (1.5 * 103.923) - 1),
    ("P05", "LC05", 190.0, ROOT(3) * 95, 345 / (1.5 * 190) - 1, None),
    ("P05", "LC09", 225.0, 225.0, 345 / (1.25 * 225) - 1, 345 / (1.25 * 225) - 1),
    ("P09", "LC01", ROOT(96**2 + 4 * 36**2), ROOT(96**2 + 3 * 36**2), 345 / (1.5 * 1.25 * 120) - 1, None),
    ("P11", "LC07", 120 - -12, ROOT((60**2 + 132**2 + 72**2) / 2), 142 / (1.5 * 132) - 1, None),
]


@pytest.mark.parametrize(("point", "case", "tresca", "von_mises", "by_tresca", "by_von_mises"), HAND)
def test_a_hand_check_of_the_head_is_met(
    table: MarginTable,
    point: str,
    case: str,
    tresca: float,
    von_mises: float,
    by_tresca: float,
    by_von_mises: float | None,
) -> None:
    found = cell(table, point, case)
    assert found[:2] == pytest.approx((tresca, von_mises), rel=1e-12)
    assert found[2] == pytest.approx(by_tresca, abs=1e-12)
    assert by_von_mises is None or found[3] == pytest.approx(by_von_mises, abs=5e-4)


HEAD = [
    ("P01", "LC01", "+0.470", None),
    ("P02", "LC09", "-0.040", "+0.006"),
    ("P03", "LC09", "+0.067", None),
    ("P04", "LC07", "-0.211", "-0.089"),
    ("P09", "LC01", "+0.533", None),
]


@pytest.mark.parametrize(("point", "case", "tresca", "von_mises"), HEAD)
def test_the_margins_written_in_the_head_are_those_computed(
    table: MarginTable, point: str, case: str, tresca: str, von_mises: str | None
) -> None:
    head = " ".join(line for line in DEMO.read_text(encoding="utf-8").splitlines() if line.startswith("#"))
    for margin, text in zip(cell(table, point, case)[2:], (tresca, von_mises), strict=True):
        if text is not None:
            assert text in head
            assert margin == pytest.approx(float(text), abs=1e-3)


def test_a_margin_of_exactly_zero_is_not_a_failure(table: MarginTable, points: dict[str, Any]) -> None:
    tresca, _, margin, _ = cell(table, "P02", "LC01")
    assert abs(margin) <= 1e-9
    assert 225 / (1.5 * 150) - 1 == 0.0
    assert tresca == pytest.approx(150.0, rel=1e-14)
    assert points["P02"]["tresca"]["case"] == "LC09"  # it is another case that fails


def test_the_theories_split_at_the_bearing(points: dict[str, Any]) -> None:
    assert points["P02"]["verdict"] == "split"
    assert points["P02"]["tresca"]["margin"] < 0 < points["P02"]["von-mises"]["margin"]


def test_the_theories_name_different_governing_cases_at_the_fairlead(points: dict[str, Any]) -> None:
    found = points["P05"]
    assert (found["tresca"]["case"], found["von-mises"]["case"]) == ("LC05", "LC09")
    assert found["governing"]["case"] == "LC05"
    assert found["governing"]["theory"] == "tresca"


def test_the_out_of_plane_shear_sets_tresca_at_the_brake_cylinder(table: MarginTable) -> None:
    tresca = cell(table, "P04", "LC07")[0]
    hoop, axial = 12.0 * 10, 12.0 * 5
    assert tresca == pytest.approx(hoop - 0.0)  # against the free surface
    assert tresca > 2 * ((hoop - axial) / 2)  # twice the greatest shear in the plane


VERDICTS = {
    "P01": "clear",
    "P02": "split",
    "P03": "thin",
    "P04": "short",
    "P05": "clear",
    "P09": "clear",
    "P11": "short",
    "P12": "no-data",
}


@pytest.mark.parametrize(("point", "verdict"), VERDICTS.items())
def test_a_point_has_the_verdict_that_the_head_announces(points: dict[str, Any], point: str, verdict: str) -> None:
    assert points[point]["verdict"] == verdict


def test_every_verdict_is_present(table: MarginTable) -> None:
    assert all(table.envelope.counts().values())
    assert sum(table.envelope.counts().values()) == 12


def test_the_points_of_the_demo_miss_what_the_head_says(points: dict[str, Any]) -> None:
    assert "LC10" in points["P12"]["missing"]
    assert "LC14" in points["P04"]["missing"]  # at 350 degC, outside the table of 1.4301
    assert points["P04"]["tresca"]["case"] == "LC07"


def test_no_range_vouches_for_the_rod_eye_beside_the_hot_brake(points: dict[str, Any]) -> None:
    blocking = [caution["name"] for caution in points["P10"]["cautions"] if caution["blocking"]]
    assert blocking == ["temperature"]


def test_a_combination_reaches_through_another(table: MarginTable) -> None:
    # LC18 = LC16 + 0.5 x LC13, LC16 = LC04 + 0.2 x LC05: at the fairlead 60 kN held and 1.9 kN sideways
    found = cell(table, "P05", "LC18")
    assert found[0] == pytest.approx(ROOT((0.003 * 60_000) ** 2 + 4 * (0.01 * 1_900) ** 2), rel=1e-12)


def test_the_project_fails_and_is_not_complete(table: MarginTable) -> None:
    found = report(table)
    assert (found["passes"], found["complete"]) == (False, False)
    assert found["governing"]["point"].startswith("P11")
    assert found["governing"]["case"] == "LC07"


def test_the_scenario_says_that_it_is_invented() -> None:
    text = DEMO.read_text(encoding="utf-8")
    assert "invented" in text.partition("\n")[0]
    assert "Invented example" in load(DEMO).settings.notes
