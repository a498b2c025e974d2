"""The oracle itself, against hand checks and the rules one by one; and the projects that are drawn for it."""

from __future__ import annotations

import re
import tomllib
from pathlib import Path
from typing import Any

import pytest

from .oracle import BLOCKING, NOTES, THEORIES, VERDICTS, equivalents, report
from .random_projects import large_project, random_project

Table = dict[str, Any]

HEAD = """format = 1
project.title = "T"
project.revision = "A"
project.units = "mm-N-MPa"
project.components = "xx yy zz xy yz zx"
project.accept = "both"
project.thin = 0.1
"""
NORMAL = '[[category]]\nname = "normal"\nloads = "design"\nyield = 1.5\n'
STEEL = '[[material]]\nname = "steel"\nyield = 240.0\nsource = "s"\n'
A = '[[case]]\nname = "A"\ncategory = "normal"\n'
B = A.replace('"A"', '"B"')
POINT = '[[point]]\nname = "P"\nmaterial = "steel"\nsource = "s"\n'

# The invented winch: round numbers that a pocket calculator follows.
WINCH = (
    HEAD
    + """
[[category]]
name = "normal"
yield = 1.5
[[category]]
name = "occasional"
yield = { tresca = 1.25, von-mises = 1.25 }
[[material]]
name = "S275"
yield = 225.0
[[material]]
name = "S355"
yield = 345.0
[[material]]
name = "1.4301"
yield = 210.0
yield-at = [[20, 210.0], [100, 157.0], [150, 142.0], [200, 127.0]]
[[load]]
name = "haul"
[[load]]
name = "side"
[[load]]
name = "brake"
[[case]]
name = "LC01"
category = "normal"
loads = { haul = 60000.0 }
[[case]]
name = "LC05"
category = "normal"
loads = { side = 9500.0 }
[[case]]
name = "LC07"
category = "normal"
temperature = 150.0
loads = { haul = 40000.0, brake = 12.0 }
[[case]]
name = "LC09"
category = "occasional"
loads = { haul = 75000.0 }
[[point]]
name = "P01"
material = "S275"
not-felt = "rest"
per-load = { haul = [0.0008, 0, 0, 0.00075, 0, 0] }
[[point]]
name = "P02"
material = "S275"
not-felt = "rest"
per-load = { haul = [0.002, 0, 0, 0.00075, 0, 0] }
[[point]]
name = "P03"
material = "S275"
not-felt = "rest"
per-load = { haul = [0, 0, 0, 0.001125, 0, 0] }
[[point]]
name = "P04"
material = "1.4301"
not-felt = "rest"
per-load = { brake = [5, 10, 0, 0, 0, 0] }
[[point]]
name = "P05"
material = "S355"
not-felt = "rest"
per-load = { haul = [0.003, 0, 0, 0, 0, 0], side = [0, 0, 0, 0.01, 0, 0] }
[[point]]
name = "P09"
material = "S355"
factor = 1.25
not-felt = "rest"
per-load = { haul = [0.0016, 0, 0, 0.0006, 0, 0] }
[[point]]
name = "P11"
material = "1.4301"
not-felt = "rest"
per-load = { brake = [5, 10, -1, 0, 0, 0] }
"""
)


def row(*values: float) -> str:
    """A row of six, filled up with zeros."""
    return str([*values, *[0.0] * (6 - len(values))])


def direct(**rows: str) -> str:
    """A point with these direct rows."""
    return POINT + "stress = { " + ", ".join(f"{case} = {values}" for case, values in rows.items()) + " }\n"


def only(text: str) -> Table:
    """The report of the one point of a project."""
    points: list[Table] = report(HEAD + text)["points"]
    assert len(points) == 1
    return points[0]


def names(point: Table) -> list[str]:
    """The cautions of a point."""
    return [caution["name"] for caution in point["cautions"]]


def margins(text: str) -> dict[str, float | None]:
    """Von Mises margins by case and limit."""
    return {f"{cell['case']} {cell['limit']}": cell["von-mises"]["margin"] for cell in report(HEAD + text)["cells"]}


@pytest.mark.parametrize(
    ("point", "case", "equivalent", "by_tresca", "by_von_mises"),
    [
        ("P01", "LC01", 102.0, 0.471, 0.639),  # bending 48 and torsion 45
        ("P02", "LC01", 150.0, 0.000, 0.048),  # bending 120 and torsion 45: zero by Tresca
        ("P02", "LC09", 187.5, -0.040, 0.006),  # 150 and 56.25, required 1.25
        ("P03", "LC09", 168.75, 0.067, 0.232),  # torsion alone
        ("P04", "LC07", 120.0, -0.211, -0.089),  # 60 and 120 at the free surface, 142 at 150 degC
        ("P05", "LC05", 190.0, 0.211, 0.398),  # shear 95
        ("P05", "LC09", 225.0, 0.227, 0.227),  # tension 225
        ("P09", "LC01", 120.0, 0.533, 0.607),  # 96 and 36 with a point factor of 1.25
        ("P11", "LC07", 132.0, -0.283, -0.173),  # 60, 120 and the pressure 12 on the surface
    ],
)
def test_the_hand_checks_of_the_winch_are_met(
    point: str, case: str, equivalent: float, by_tresca: float, by_von_mises: float
) -> None:
    (cell,) = [cell for cell in report(WINCH)["cells"] if (cell["point"], cell["case"]) == (point, case)]
    assert cell["tresca"]["equivalent"] == pytest.approx(equivalent, rel=1e-12)
    assert cell["tresca"]["margin"] == pytest.approx(by_tresca, abs=5.1e-4)
    assert cell["von-mises"]["margin"] == pytest.approx(by_von_mises, abs=5.1e-4)


def test_the_winch_has_the_verdicts_and_the_governing_cells_of_its_hand_checks() -> None:
    result = report(WINCH)
    verdicts = {point["name"]: point["verdict"] for point in result["points"]}
    expected = {"P01": "clear", "P02": "split", "P03": "thin", "P04": "short", "P05": "clear", "P09": "clear"}
    assert verdicts == {**expected, "P11": "short"}
    assert result["counts"] == {"clear": 3, "thin": 1, "split": 1, "short": 2, "no-data": 0}
    assert {key: result["governing"][key] for key in ("point", "case", "theory")} == {
        "point": "P11", "case": "LC07", "theory": "tresca"
    }  # fmt: skip
    fairlead = result["points"][4]
    assert (fairlead["tresca"]["case"], fairlead["von-mises"]["case"]) == ("LC05", "LC09")
    assert (result["passes"], result["complete"]) == (False, True)


@pytest.mark.parametrize(
    ("stress", "by_tresca", "by_von_mises"),
    [
        ((1.0, 0, 0, 0, 0, 0), 1.0, 1.0),  # uniaxial
        ((0, 0, 0, 1.0, 0, 0), 2.0, 3**0.5),  # pure shear
        ((4.0, 2.0, 0, 0, 0, 0), 4.0, 12**0.5),  # biaxial of one sign: out of plane
        ((1e9 + 1, 1e9, 1e9, 0, 0, 0), 1.0, 1.0),  # a small deviator on a large mean
        ((1e9, 1e9, 1e9, 0, 0.5, 0), 1.0, 0.75**0.5),  # the same in shear
        ((1e9 + 1, 1e9 + 1, 1e9 + 1, 1, 1, 1), 3.0, 3.0),  # tension 3 along the diagonal, on that mean
        ((7.0, 7.0, 7.0, 0, 0, 0), 0.0, 0.0),  # hydrostatic
        ((0, 0, 0, 0, 0, 0), 0.0, 0.0),  # nothing
        ((0, 1e200, 0, 0, 0, 1e200), 2e200, 2e200),  # too large to square; principals 1, 1, -1
        ((0, 3e-200, 0, 0, 0, 0), 3e-200, 3e-200),  # too small to square
    ],
)
def test_equivalents_of_known_states(stress: tuple[float, ...], by_tresca: float, by_von_mises: float) -> None:
    values = equivalents(dict(zip(("xx", "yy", "zz", "xy", "yz", "zx"), stress, strict=True)))
    assert values["tresca"] == pytest.approx(by_tresca, rel=1e-14)
    assert values["von-mises"] == pytest.approx(by_von_mises, rel=1e-14)


def test_rows_are_read_in_the_order_that_the_file_says() -> None:
    text = HEAD.replace("xx yy zz xy yz zx", "zx xy zz yy xx yz") + NORMAL + STEEL + A + direct(A=row(0, 0, 0, 60, 20))
    (cell,) = report(text)["cells"]
    assert cell["von-mises"]["equivalent"] == pytest.approx(2800**0.5)
    (sheared,) = report(text.replace("[0, 0, 0, 60, 20", "[30, 0, 0, 0, 0"))["cells"]
    assert sheared["tresca"]["equivalent"] == pytest.approx(60)


LINEAR = POINT + f"per-load = {{ f = {row(1)} }}\n"
LOADS = '[[load]]\nname = "f"\n[[load]]\nname = "g"\n'


@pytest.mark.parametrize(
    ("cases", "point", "expected"),
    [
        # a load that acts and is not named
        (A + "loads = { f = 80, g = 1 }\n", LINEAR, {"A yield": None}),
        # named as not felt, one by one or as the rest
        (A + "loads = { f = 80, g = 1 }\n", LINEAR + 'not-felt = ["g"]\n', {"A yield": 1.0}),
        (A + "loads = { f = 80, g = 1 }\n", LINEAR + 'not-felt = "rest"\n', {"A yield": 1.0}),
        # a load of zero does not act, nor one that vanishes in combination (3 x 0.1 is not 0.3)
        (A + "loads = { f = 80, g = 0 }\n", LINEAR, {"A yield": 1.0}),
        (
            A + "check = false\nloads = { f = 80, g = 0.1 }\n" + B + "combine = { A = 3 }\nloads = { g = -0.3 }\n",
            LINEAR,
            {"B yield": -1 / 3},
        ),
        # direct rows of a linear point are additions, through combinations too; their absence adds nothing
        (A + "loads = { f = 60 }\n" + B + "combine = { A = 2 }\n", LINEAR + f"stress = {{ A = {row(20)} }}\n",
         {"A yield": 1.0, "B yield": 0.0}),
        # an empty per-load table leaves a point direct-only
        (A + "loads = { f = 80 }\n", POINT + f"per-load = {{}}\nstress = {{ A = {row(80)} }}\n", {"A yield": 1.0}),
        # direct-only: own row first, else the sum of a pure combination at any depth
        (A + B + "combine = { A = 2 }\n", direct(A=row(40), B=row(80)), {"A yield": 3.0, "B yield": 1.0}),
        (A + B + "combine = { A = 2 }\n", direct(A=row(40)), {"A yield": 3.0, "B yield": 1.0}),
        (A + B + "combine = { A = 2 }\nloads = { f = 0 }\n", direct(A=row(40)), {"A yield": 3.0, "B yield": 1.0}),
        # direct-only: a load of its own, or an ingredient without a row, leaves a combination without data
        (A + B + "combine = { A = 2 }\nloads = { f = 1 }\n", direct(A=row(40)), {"A yield": 3.0, "B yield": None}),
        (A + "check = false\n" + B + "combine = { A = 2 }\n", POINT, {"B yield": None}),
        (A + B + "combine = { A = 0 }\n", POINT, {"A yield": None, "B yield": None}),
    ],
)  # fmt: skip
def test_stress_of_a_case(cases: str, point: str, expected: dict[str, float | None]) -> None:
    assert margins(NORMAL + STEEL + LOADS + cases + point) == pytest.approx(expected, abs=1e-12)


@pytest.mark.parametrize(
    ("rows", "verdict", "missing"),
    [
        ({"A": row(100), "B": row(100)}, "clear", []),
        ({"A": row(150), "B": row(100)}, "thin", []),  # +0.067
        ({"A": row(160), "B": row(100)}, "thin", []),  # a zero margin is no failure
        ({"A": row(160 * (1 + 1e-10)), "B": row(100)}, "thin", []),  # nor is one within 1e-9 of zero
        ({"A": row(160 * (1 + 1e-8)), "B": row(100)}, "short", []),
        ({"A": row(240 / 1.65), "B": row(1)}, "clear", []),  # just `thin` is not below it
        ({"A": row(0, 0, 0, 85), "B": row(0)}, "split", []),  # Tresca -0.059, von Mises +0.087
        ({"A": row(0, 0, 0, 85)}, "split", ["B"]),  # split before no-data
        ({"B": row(150)}, "no-data", ["A"]),  # no-data before thin
        ({"B": row(161)}, "short", ["A"]),  # short before no-data
        ({"A": row(), "B": row()}, "clear", []),
        ({}, "no-data", ["A", "B"]),
    ],
)
def test_verdict_of_a_point(rows: dict[str, str], verdict: str, missing: list[str]) -> None:
    point = only(NORMAL + STEEL + A + B + direct(**rows))
    assert (point["verdict"], point["missing"]) == (verdict, missing)


@pytest.mark.parametrize(("accept", "verdict"), [("both", "thin"), ("tresca", "thin"), ("von-mises", "clear")])
def test_thin_is_judged_by_the_accepted_theories(accept: str, verdict: str) -> None:
    text = HEAD.replace("both", accept) + NORMAL + STEEL + A + direct(A=row(0, 0, 0, 75))  # +0.067 and +0.232
    (point,) = report(text)["points"]
    assert point["verdict"] == verdict
    assert point["governing"]["theory"] == ("von-mises" if accept == "von-mises" else "tresca")


def test_among_equals_the_first_case_and_yield_govern_and_both_theories_are_named() -> None:
    both = NORMAL + "ultimate = 1.875\n" + STEEL + "ultimate = 300.0\n"
    governing = only(both + A + B + direct(B=row(0, -80), A=row(80)))["governing"]
    assert governing == {"case": "A", "limit": "yield", "theory": "both", "margin": pytest.approx(1.0)}


def test_a_margin_within_a_billionth_of_the_least_governs_if_it_comes_first() -> None:
    point = only(NORMAL + STEEL + A + B + direct(A=row(80 * (1 - 1e-10)), B=row(80)))
    assert (point["governing"]["case"], point["tresca"]["case"]) == ("A", "A")
    later = only(NORMAL + STEEL + A + B + direct(A=row(80 * (1 - 1e-8)), B=row(80)))
    assert (later["governing"]["case"], later["von-mises"]["case"]) == ("B", "B")


def test_a_lesser_ultimate_margin_governs() -> None:
    category = NORMAL + "ultimate = { tresca = 2.0, von-mises = 2.5 }\n"
    point = only(category + STEEL + "ultimate = 300.0\n" + A + direct(A=row(60)))
    assert point["governing"] == {"case": "A", "limit": "ultimate", "theory": "von-mises", "margin": pytest.approx(1.0)}
    assert point["tresca"] == {"case": "A", "limit": "ultimate", "margin": pytest.approx(1.5)}


def test_measured_shear_yield_lowers_tresca_at_temperature_too() -> None:
    steel = STEEL + "shear-yield = 90.0\nyield-at = [[0, 240.0], [100, 200.0]]\n"
    (cell,) = report(HEAD + NORMAL + steel + A + "temperature = 50\n" + direct(A=row(110)))["cells"]
    assert cell["tresca"]["margin"] == pytest.approx(0.0, abs=1e-12)  # 2 x 90 x 220 / 240 = 165
    assert cell["von-mises"]["margin"] == pytest.approx(1 / 3)


def test_an_infinite_margin_governs_only_where_all_are_infinite() -> None:
    stressed = only(NORMAL + STEEL + A + B + direct(A=row(), B=row(40)))
    assert stressed["governing"]["case"] == "B"
    idle = report(HEAD + NORMAL + STEEL + A + B + direct(A=row(), B=row(7, 7, 7)))
    assert idle["governing"] == {
        "point": "P", "case": "A", "limit": "yield", "theory": "both", "margin": None, "no-stress": True
    }  # fmt: skip
    assert idle["cells"][0]["tresca"] == {"equivalent": 0.0, "margin": None, "no-stress": True}
    assert (idle["passes"], idle["complete"], idle["never-govern"]) == (True, True, [])


def test_what_is_not_known_is_null_and_neither_passes_nor_is_complete() -> None:
    result = report(HEAD + NORMAL + STEEL + A + POINT)
    nothing = {"case": None, "limit": None, "margin": None, "no-data": True}
    assert result["governing"] == {"point": None, "theory": None, **nothing}
    assert result["points"][0]["tresca"] == nothing
    assert result["cells"][0]["von-mises"] == {"equivalent": None, "margin": None, "no-data": True}
    assert (result["passes"], result["complete"]) == (False, False)


def test_without_a_checked_case_a_point_has_no_data_and_the_project_is_not_complete() -> None:
    result = report(HEAD + NORMAL + STEEL + A + "check = false\n" + direct(A=row(1)))
    assert (result["points"][0]["verdict"], result["points"][0]["missing"]) == ("no-data", [])
    assert (result["passes"], result["complete"], result["cells"]) == (False, False, [])


def test_a_case_that_governs_by_one_theory_somewhere_is_not_named_as_never_governing() -> None:
    cases = "".join(A.replace('"A"', f'"{name}"') for name in "ABCD")
    rows = {"A": row(60), "B": row(0, 0, 0, 32), "C": row(60 * (1 - 1e-10)), "D": row(59)}
    assert report(HEAD + NORMAL + STEEL + cases + direct(**rows))["never-govern"] == ["D"]


ULTIMATE = NORMAL + "ultimate = 2.0\n"
TABLE = "yield-at = [[0, 240.0], [100, 200.0]]\n"
ULTIMATE_TABLE = "ultimate-at = [[0, 480.0], [200, 400.0]]\n"


@pytest.mark.parametrize(
    ("material", "temperature", "yields", "ultimate", "found"),
    [
        ("ultimate = 480\n", None, 240, 480, []),  # plain
        ("", None, 240, None, []),  # ultimate asked for and not given
        ("ultimate = 480\n", 20, 240, 480, ["temperature"]),  # nothing covers the temperature
        ("ultimate = 480\nrange = [20, 50]\n", 20, 240, 480, []),  # ends of a range included
        ("ultimate = 480\nrange = [20, 50]\n", 50.5, 240, 480, ["temperature"]),
        ("ultimate = 480\n" + TABLE, 25, 230, 480, ["ultimate-temperature"]),
        ("ultimate = 480\nrange = [0, 30]\n" + TABLE, 25, 230, 480, []),
        (TABLE, 25, 230, None, []),
        ("ultimate = 480\n" + TABLE, 100, 200, 480, ["ultimate-temperature"]),  # ends of a table included
        ("ultimate = 480\n" + TABLE, 100.5, None, None, []),  # never extrapolated
        ("ultimate = 480\n" + TABLE, None, 240, 480, ["no-temperature"]),
        ("ultimate = 480\n" + ULTIMATE_TABLE, None, 240, 480, ["no-temperature"]),
        ("ultimate = 480\nyield-at = [[25, 230]]\nrange = [0, 30]\n", 25, 230, 480, []),  # a single row is its two ends
        ("ultimate = 480\n" + TABLE + ULTIMATE_TABLE, 50, 220, 460, []),
        ("ultimate = 480\n" + TABLE + ULTIMATE_TABLE, 150, None, 420, []),
        ("ultimate = 480\n" + TABLE + ULTIMATE_TABLE, -1, None, None, []),
        ("ultimate = 480\n" + ULTIMATE_TABLE, 50, 240, 460, ["temperature"]),
        ("ultimate = 480\nrange = [0, 60]\n" + ULTIMATE_TABLE, 50, 240, 460, []),
        ("ultimate = 480\nrange = [0, 600]\n" + ULTIMATE_TABLE, 500, 240, None, []),
    ],
)
def test_strengths_and_cautions_by_temperature(
    material: str, temperature: float | None, yields: float | None, ultimate: float | None, found: list[str]
) -> None:
    given = "" if temperature is None else f"temperature = {temperature}\n"
    text = ULTIMATE + STEEL + material + A + given + direct(A=row(10))
    expected = {"A yield": yields and yields / 15 - 1, "A ultimate": ultimate and ultimate / 20 - 1}
    assert margins(text) == pytest.approx(expected)
    assert names(only(text)) == found
    assert only(text)["missing"] == (["A"] if None in (yields, ultimate) else [])


def test_a_point_has_its_own_temperature_for_all_cases_or_for_some() -> None:
    text = NORMAL + STEEL + TABLE + A + "temperature = 50\n" + B + "temperature = 50\n" + direct(A=row(10), B=row(10))
    assert margins(text + "temperature = 100\n") == pytest.approx({"A yield": 37 / 3, "B yield": 37 / 3})
    assert margins(text + "temperature = { B = 100 }\n") == pytest.approx({"A yield": 41 / 3, "B yield": 37 / 3})


@pytest.mark.parametrize(
    ("text", "found"),
    [
        (NORMAL + STEEL + A + direct(A=row(10)), []),
        (NORMAL + STEEL + "elongation = 0.05\n" + A + direct(A=row(10)), []),
        (NORMAL + STEEL + "elongation = 0.049\n" + A + direct(A=row(10)), ["elongation"]),
        # 4 x 240 / 1.5 = 640 = sum of principals: not above it
        (NORMAL + STEEL + A + direct(A=row(220, 210, 210)), []),
        (NORMAL + STEEL + A + direct(A=row(220, 210, 210.1)), ["hydrostatic-tension"]),
        (NORMAL + STEEL + A + direct(A=row(-220, -210, -210.1)), []),
        (NORMAL + STEEL + A + direct(A=row(200, 200, 200)) + "factor = 1.1\n", ["hydrostatic-tension"]),
        (NORMAL + STEEL + A + direct(A=row(200, 200, 200)) + "factor = { yield = 1, ultimate = 2 }\n", []),
        (NORMAL.replace("1.5", "{ tresca = 1.5, von-mises = 2 }") + STEEL + A + direct(A=row(170, 170, 170)),
         ["hydrostatic-tension"]),
        (NORMAL + STEEL + A + direct(A=row(10)) + "factor = 0.9\n", ["factor-below-one"]),
        # a factor on a limit that no case asks for is not in use
        (NORMAL + STEEL + A + direct(A=row(10)) + "factor = { yield = 1, ultimate = 0.9 }\n", []),
        (NORMAL.replace("1.5", "{ tresca = 1, von-mises = 0.9 }") + STEEL + A + POINT, ["factor-below-one"]),
        (NORMAL + STEEL.replace('source = "s"\n', "") + A + POINT, ["no-source-strength"]),
        (NORMAL + STEEL + A + POINT.replace('source = "s"\n', ""), ["no-source-stress"]),
        (NORMAL + STEEL + A + "temperature = 20\ncheck = false\n" + POINT, []),
        # elastic stress at, and above, yield where ultimate is tested
        (ULTIMATE + STEEL + "ultimate = 900\n" + A + direct(A=row(240)), []),
        (ULTIMATE + STEEL + "ultimate = 900\n" + A + direct(A=row(0, 0, 0, 121)), ["ultimate-elastic"]),
        (ULTIMATE + STEEL + A + direct(A=row(250)), []),
        (NORMAL + STEEL + "ultimate = 900\n" + A + direct(A=row(250)), []),
        # the plain ultimate strength beside a table, where no case asks for it
        (NORMAL + STEEL + "ultimate = 900\n" + TABLE + A + "temperature = 50\n" + POINT, []),
    ],
)  # fmt: skip
def test_cautions_of_a_point(text: str, found: list[str]) -> None:
    assert names(only(text)) == found


def test_only_an_acknowledged_blocking_caution_lets_a_project_pass() -> None:
    text = HEAD + NORMAL + STEEL + "elongation = 0.01\n" + A + direct(A=row(10))
    acknowledged = text + '[[acknowledge]]\npoint = "P"\ncaution = "elongation"\nby = "N."\nreason = "r"\n'
    other = acknowledged.replace('"elongation"', '"temperature"')
    elsewhere = acknowledged.replace('point = "P"', 'point = "Q"')
    assert [report(each)["passes"] for each in (text, acknowledged, other, elsewhere)] == [False, True, False, False]
    assert report(acknowledged)["points"][0]["cautions"] == [
        {"name": "elongation", "text": "", "blocking": True, "acknowledged": True}
    ]


def test_a_project_passes_by_the_theory_it_accepts() -> None:
    text = HEAD + NORMAL + STEEL + A + direct(A=row(0, 0, 0, 85))
    by_accept = {accept: report(text.replace("both", accept))["passes"] for accept in ("both", *THEORIES)}
    assert by_accept == {"both": False, "tresca": False, "von-mises": True}


@pytest.mark.parametrize(
    "extra", ['[[section]]\nname = "s"\n', '[[load]]\nname = "r"\nsense = "reversible"\n', POINT + 'section = "s"\n']
)
def test_what_the_oracle_cannot_compute_it_refuses(extra: str) -> None:
    with pytest.raises(ValueError, match="not"):
        report(HEAD + extra)


def test_a_file_and_its_text_give_the_same_report(tmp_path: Path) -> None:
    path = tmp_path / "winch.toml"
    path.write_text(WINCH, encoding="utf-8")
    assert report(path) == report(str(path)) == report(WINCH)


# The projects that are drawn

KEYS = {
    "project": "title revision units components accept thin notes",
    "category": "name label loads yield ultimate",
    "material": "name yield ultimate shear-yield elongation range yield-at ultimate-at source",
    "load": "name label unit sense",
    "case": "name label category temperature loads combine check",
    "point": "name label part material factor temperature source not-felt per-load stress",
    "acknowledge": "point caution by reason",
}
REFERENCES = [("case", "category", "category"), ("point", "material", "material"), ("acknowledge", "point", "point")]
TABLES = [("case", "loads", "load"), ("case", "combine", "case"), ("point", "per-load", "load")]
TABLES += [("point", "stress", "case")]
KINDS_OF_ENTRIES = [kind for kind in KEYS if kind != "project"]


def faults(project: Table) -> list[str]:
    """Where a drawn project breaks the rules of the format."""
    kinds = {kind: project.get(kind, []) for kind in KINDS_OF_ENTRIES}
    known = {kind: [entry["name"] for entry in kinds[kind]] for kind in kinds if kind != "acknowledge"}
    found = [f"twice in {kind}" for kind in known if len(set(known[kind])) < len(known[kind])]
    for kind, entries in {**kinds, "project": [project["project"]]}.items():
        found += [f"{kind}: {key}" for entry in entries for key in entry if key not in KEYS[kind].split()]
    for kind, key, of in REFERENCES:
        found += [f"{kind}.{key}" for entry in kinds[kind] if entry[key] not in known[of]]
    for kind, key, of in TABLES:
        used = [name for entry in kinds[kind] for name in entry.get(key, {})]
        found += [f"{kind}.{key}.{name}" for name in used if name not in known[of]]
    cases = {case["name"]: case for case in kinds["case"]}
    found += [f"temperature of {name}" for name in cases if lacks_temperature(cases, name)]
    return found


def ingredients(cases: dict[str, Table], name: str, above: tuple[str, ...] = ()) -> list[Table]:
    """All ingredients of a case at any depth; a cycle is an error."""
    assert name not in above, "a cycle of combinations"
    below = list(cases[name].get("combine", {}))
    return [cases[part] for part in below] + [
        deeper for part in below for deeper in ingredients(cases, part, (*above, name))
    ]


def lacks_temperature(cases: dict[str, Table], name: str) -> bool:
    """Whether a combination has no temperature though an ingredient has one."""
    return "temperature" not in cases[name] and any("temperature" in part for part in ingredients(cases, name))


def test_drawn_projects_are_valid_and_the_same_for_the_same_seed() -> None:
    for seed in range(200):
        text = random_project(seed)
        assert faults(tomllib.loads(text)) == [], f"seed {seed}"
        assert text == random_project(seed)


def test_drawn_projects_show_every_verdict_caution_and_spelling() -> None:
    texts = [random_project(seed) for seed in range(120)]
    reports = [report(text) for text in texts]
    points = [point for each in reports for point in each["points"]]
    assert {point["verdict"] for point in points} == set(VERDICTS)
    assert {name for point in points for name in names(point)} == set(BLOCKING + NOTES)
    assert {point["governing"]["theory"] for point in points} == {"both", None, *THEORIES}
    assert {key for point in points for key in point["governing"]} >= {"no-stress", "no-data"}
    assert {(each["passes"], each["complete"]) for each in reports} == {(a, b) for a in (0, 1) for b in (0, 1)}
    spellings = [r"^\[\[ ", r"per-load\.", r"\[point\.stress\]", r"stress *= *\{", r"^load *= *\["]
    spellings += [r"\\u", r"'", r"\[ *# row", '"""', r"\r"]
    assert [s for s in spellings if not any(re.search(s, text, re.MULTILINE) for text in texts)] == []


def test_no_drawn_result_hangs_on_the_last_bits() -> None:
    for seed in range(120):
        result = report(random_project(seed))
        for theory in THEORIES:
            margins = [cell[theory]["margin"] for cell in result["cells"] if cell[theory]["margin"] is not None]
            assert max(margins, default=0.0) < 1e5, f"seed {seed}: a stress that should be zero is not"
            assert not [margin for margin in margins if 1e-11 < abs(margin) < 1e-7], f"seed {seed}: nearly zero"


def test_a_large_project_has_the_size_asked_for_and_is_whole() -> None:
    text = large_project(20, 30, 4, seed=1)
    assert faults(tomllib.loads(text)) == []
    result = report(text)
    assert (len(result["points"]), len({cell["case"] for cell in result["cells"]})) == (20, 30)
    assert (len(tomllib.loads(text)["load"]), result["complete"]) == (4, True)
    assert text == large_project(20, 30, 4, seed=1) != large_project(20, 30, 4, seed=2)
