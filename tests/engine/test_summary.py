"""The report of a project as plain data."""

from __future__ import annotations

import json
import math
from dataclasses import replace
from typing import Any

import pytest

from engine.margins import compute
from engine.project import Project
from engine.sections import Section
from engine.store import parse
from engine.summary import NotComputed, cells, figure, never_govern, report

from ..random_projects import random_project
from .builders import axial, case, category, direct, loads, material, point, project, shear

POINT_KEYS = {"name", "verdict", "governing", "tresca", "von-mises", "missing", "cautions"}
KEYS = {"format", "title", "revision", "accept", "passes", "complete", "counts", "governing", "points", "never-govern"}


def reported(given: Project, with_cells: bool = False) -> dict[str, Any]:
    return report(compute(given), with_cells)


def winch() -> Project:
    """Two points, one of which lacks a case; both theories name different cases at the first."""
    return project(
        [
            point("P", {"A": shear(95.0), "B": axial(180.0), "C": axial(0.0)}),
            point("Q", {"A": axial(330.0), "B": axial(10.0)}),
        ],
        [case("A"), case("B"), case("C")],
        materials=[material(elongation=0.01)],
    )


def test_a_report_has_the_keys_that_scripts_rely_on() -> None:
    found = reported(winch())
    assert set(found) == KEYS
    assert set(reported(winch(), with_cells=True)) == KEYS | {"cells"}
    assert all(set(of_point) == POINT_KEYS for of_point in found["points"])
    assert set(found["governing"]) == {"point", "case", "limit", "theory", "margin"}
    assert set(found["points"][0]["governing"]) == {"case", "limit", "theory", "margin"}
    assert set(found["points"][0]["tresca"]) == {"case", "limit", "margin"}
    assert set(found["points"][0]["cautions"][0]) == {"name", "text", "blocking", "acknowledged"}


def test_a_report_says_how_the_project_stands() -> None:
    found = reported(replace(winch(), settings=replace(winch().settings, revision="C")))
    assert (found["format"], found["title"], found["revision"], found["accept"]) == (1, "Invented", "C", "both")
    assert (found["passes"], found["complete"]) == (False, False)
    assert found["counts"] == {"clear": 1, "thin": 0, "split": 0, "short": 1, "no-data": 0}


def test_the_governing_cell_of_the_project_names_its_point() -> None:
    found = reported(winch())["governing"]
    assert found.pop("margin") == pytest.approx(300 / 330 - 1)
    assert found == {"point": "Q", "case": "A", "limit": "yield", "theory": "both"}


def test_each_theory_names_its_own_governing_case() -> None:
    found = reported(winch())["points"][0]
    assert (found["tresca"]["case"], found["von-mises"]["case"]) == ("A", "B")
    assert found["governing"]["theory"] == "tresca"
    assert found["von-mises"]["margin"] == pytest.approx(300 / 180 - 1)


def test_cases_without_data_are_named_point_by_point_once_each() -> None:
    given = project(
        [point("P", {"A": axial(1.0)}), point("Q", {"A": axial(1.0), "B": axial(1.0)})],
        [case("A"), case("B")],
        categories=[category("normal", 1.0, 1.0)],
        materials=[material(ultimate=450.0)],
    )
    assert [found["missing"] for found in reported(given)["points"]] == [["B"], []]


def test_cautions_are_listed_with_their_point() -> None:
    found = reported(winch())["points"][1]["cautions"]
    assert [(c["name"], c["blocking"], c["acknowledged"]) for c in found] == [("elongation", True, False)]


@pytest.mark.parametrize(
    ("margin", "expected"),
    [
        (0.25, {"margin": 0.25}),
        (-1.0, {"margin": -1.0}),
        (math.inf, {"margin": None, "no-stress": True}),
        (math.nan, {"margin": None, "no-data": True}),
    ],
)
def test_a_margin_that_is_no_number_is_null_with_its_reason(margin: float, expected: dict[str, Any]) -> None:
    assert figure(margin) == expected


def test_a_point_without_data_has_nothing_that_governs() -> None:
    found = reported(project([point("P")], [case("A")]))
    assert found["points"][0]["governing"] == {
        "case": None,
        "limit": None,
        "theory": None,
        "margin": None,
        "no-data": True,
    }
    assert found["points"][0]["tresca"] == {"case": None, "limit": None, "margin": None, "no-data": True}
    assert found["governing"]["point"] is None
    assert found["points"][0]["verdict"] == "no-data"


def test_a_point_without_stress_is_governed_by_no_stress() -> None:
    found = reported(direct({"A": axial(0.0)}))["points"][0]
    assert found["governing"] == {"case": "A", "limit": "yield", "theory": "both", "margin": None, "no-stress": True}
    assert found["verdict"] == "clear"


# Never governing


NEVER = [
    ({"A": axial(100.0), "B": axial(50.0)}, ["B"]),
    ({"A": axial(100.0), "B": axial(100.0 * (1 - 1e-11))}, []),  # within 1e-9 of the least
    ({"A": axial(100.0), "B": axial(100.0 * (1 - 1e-8))}, ["B"]),
    ({"A": shear(95.0), "B": axial(180.0)}, []),  # by either theory
    ({"A": axial(0.0), "B": axial(50.0)}, ["A"]),  # no stress governs nothing
    ({"A": axial(0.0), "B": axial(0.0)}, []),  # unless there is no other
]


@pytest.mark.parametrize(("stresses", "never"), NEVER)
def test_a_case_that_nowhere_equals_a_least_margin_never_governs(
    stresses: dict[str, list[float]], never: list[str]
) -> None:
    assert never_govern(compute(direct(stresses))) == never


def test_a_case_without_data_never_governs() -> None:
    given = project([point("P", {"A": axial(1.0)}), point("Q")], [case("A"), case("B")])
    assert never_govern(compute(given)) == ["B"]


def test_a_case_that_governs_one_point_alone_governs() -> None:
    rows = [{"A": axial(100.0), "B": axial(50.0)}] * 3 + [{"A": axial(1.0), "B": axial(2.0)}]
    given = project([point(f"P{i}", row) for i, row in enumerate(rows)], [case("A"), case("B")])
    assert never_govern(compute(given)) == []


def test_a_case_may_govern_by_its_ultimate_limit() -> None:
    given = project(
        [point("P", {"A": axial(100.0), "B": axial(90.0)})],
        [case("A"), case("B", category="both")],
        categories=[category(), category("both", 1.0, 2.0)],
        materials=[material(ultimate=450.0)],
    )
    assert never_govern(compute(given)) == ["A"]


def test_cases_that_are_not_checked_are_not_spoken_of() -> None:
    given = project([point("P", {"A": axial(1.0), "B": axial(9.0)})], [case("A"), case("B", check=False)])
    assert never_govern(compute(given)) == []


# Cells


def test_a_cell_is_listed_for_each_point_case_and_limit_that_is_asked() -> None:
    given = project(
        [point("P", {"A": axial(100.0), "B": axial(50.0)}), point("Q")],
        [case("A", category="both"), case("B"), case("C", check=False)],
        categories=[category(), category("both", 1.0, 2.0)],
        materials=[material(ultimate=450.0)],
    )
    found = list(cells(compute(given)))
    keys = [(cell["point"], cell["case"], cell["limit"]) for cell in found]
    assert keys == [
        ("P", "A", "yield"),
        ("P", "A", "ultimate"),
        ("P", "B", "yield"),
        ("Q", "A", "yield"),
        ("Q", "A", "ultimate"),
        ("Q", "B", "yield"),
    ]
    assert found[1]["tresca"] == {"equivalent": 100.0, "margin": 1.25}
    assert found[3]["von-mises"] == {"equivalent": None, "margin": None, "no-data": True}


def test_a_known_equivalent_is_kept_where_only_the_strength_is_missing() -> None:
    hot = material(yield_at=((0.0, 300.0), (100.0, 200.0)))
    given = project([point("P", {"A": axial(100.0)})], [case("A", temperature=500.0)], materials=[hot])
    found = next(cells(compute(given)))
    assert found["tresca"] == {"equivalent": 100.0, "margin": None, "no-data": True}


def test_numbers_are_printed_in_full() -> None:
    found = next(cells(compute(direct({"A": axial(0.1 + 0.2)}))))
    assert found["tresca"]["equivalent"] == 0.1 + 0.2


@pytest.mark.parametrize("seed", range(20))
def test_a_report_is_json_without_bare_words(seed: int) -> None:
    found = reported(parse(random_project(seed)), with_cells=True)
    assert json.loads(json.dumps(found, allow_nan=False)) == found


# What is not computed yet


def test_a_point_on_a_section_is_refused_by_name() -> None:
    on = replace(point("P"), section="S", at=(0.0, 0.0))
    with pytest.raises(NotComputed, match=r"point P: .*not computed yet"):
        reported(project([on], [case("A")], sections=[Section("S", "round")]))


@pytest.mark.parametrize("sense", ["reversible", "optional"])
def test_a_load_with_a_sense_is_refused_by_name(sense: Any) -> None:
    with pytest.raises(NotComputed, match=f'load gust: sense "{sense}" is not computed yet'):
        reported(project(loads=loads("gust", sense=sense)))


def test_a_section_that_no_point_uses_is_no_hindrance() -> None:
    assert reported(project([point("P", {"A": axial(1.0)})], [case("A")], sections=[Section("S", "round")]))["passes"]
