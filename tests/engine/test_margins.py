"""Margins of whole projects: the formula, what is missing, what governs, and the table that holds them."""

from __future__ import annotations

import math
import warnings
from random import Random
from typing import Any

import numpy as np
import pytest

from engine import cells
from engine.edits import Set, apply
from engine.envelope import VERDICTS
from engine.margins import MarginTable, compute
from engine.material import LIMITS, THEORIES
from engine.project import Project
from engine.summary import report

from .builders import axial, case, category, direct, loads, material, point, project, shear

NAN, INF = math.nan, math.inf
ROOT3 = math.sqrt(3.0)
TABLED = material("steel", 300.0, 450.0, yield_at=((20.0, 300.0), (120.0, 200.0)))


def margin(given: Project, limit: str = "yield") -> dict[str, float]:
    """The only cell's margins by theory."""
    found: Any = compute(given).margin
    return {theory: float(found[limit][theory].item()) for theory in THEORIES}


def governing(given: Project, row: int = 0) -> dict[str, Any]:
    """Case, limit and theory that govern a point, over the accepted theories and by each."""
    table = compute(given)
    found = {"accepted": table.envelope.of_point(row)} | {t: table.envelope.by_theory(row, t) for t in THEORIES}
    names = given.checked
    return {key: (names[cell.case].name, LIMITS[cell.limit], cell.theory) for key, cell in found.items()}


# The formula


def test_a_margin_is_strength_over_factored_equivalent_less_one() -> None:
    given = project(
        [point("P", {"A": shear(40.0)}, factor=(1.25, 2.0))],
        [case("A")],
        categories=[category("normal", (1.5, 1.4), (2.0, 1.9))],
        materials=[material(yield_=300.0, ultimate=450.0)],
    )
    assert margin(given) == pytest.approx(
        {"tresca": 300 / (1.5 * 1.25 * 80) - 1, "von-mises": 300 / (1.4 * 1.25 * 40 * ROOT3) - 1}
    )
    ultimate = {"tresca": 450 / (2.0 * 2.0 * 80) - 1, "von-mises": 450 / (1.9 * 2.0 * 40 * ROOT3) - 1}
    assert margin(given, "ultimate") == pytest.approx(ultimate)


def test_an_equivalent_excludes_all_factors_and_is_the_same_for_both_limits() -> None:
    given = project(
        [point("P", {"A": shear(40.0)}, factor=(1.25, 2.0))], [case("A")], categories=[category("normal", 1.5, 2.0)]
    )
    table = compute(given)
    for limit in LIMITS:
        assert table.equivalent[limit]["tresca"].item() == 80.0
        assert table.equivalent[limit]["von-mises"].item() == pytest.approx(40.0 * ROOT3)


def test_margins_and_equivalents_are_points_by_checked_cases() -> None:
    given = project(
        [point("P", {"A": axial(1.0), "B": axial(100.0)}), point("Q", {"B": axial(50.0)})],
        [case("A", check=False), case("B"), case("C", combine={"A": 2.0})],
    )
    table = compute(given)
    assert np.array_equal(table.equivalent["yield"]["tresca"], [[100.0, 2.0], [50.0, NAN]], equal_nan=True)
    assert np.allclose(table.margin["yield"]["von-mises"], [[2.0, 149.0], [5.0, NAN]], equal_nan=True)
    assert list(table.margin["yield"]) == ["tresca", "von-mises"]


def test_a_margin_is_not_a_number_where_its_limit_is_not_asked() -> None:
    given = project(
        [point("P", {"A": axial(100.0), "B": axial(100.0)})],
        [case("A"), case("B", category="both")],
        categories=[category(), category("both", 1.0, 1.0)],
        materials=[material(ultimate=450.0)],
    )
    found = compute(given).margin["ultimate"]["tresca"]
    assert np.array_equal(found, [[NAN, 3.5]], equal_nan=True)


def test_no_stress_is_an_infinite_margin() -> None:
    assert margin(direct({"A": [80.0, 80.0, 80.0, 0, 0, 0]})) == {"tresca": INF, "von-mises": INF}


def test_with_equal_factors_tresca_never_has_the_greater_margin() -> None:
    chance = Random(1)
    stresses = {f"C{i}": [chance.gauss(0, 100) for _ in range(6)] for i in range(200)}
    found = compute(direct(stresses)).margin["yield"]
    assert (found["tresca"] <= found["von-mises"]).all()


def test_a_shear_yield_below_half_the_yield_makes_the_strength_of_tresca() -> None:
    given = direct({"A": axial(100.0)}, materials=[material(shear_yield=120.0)])
    assert margin(given) == pytest.approx({"tresca": 1.4, "von-mises": 2.0})


def test_that_strength_falls_with_the_yield_at_temperature() -> None:
    weak = material(shear_yield=120.0, yield_at=((20.0, 300.0), (120.0, 200.0)))
    given = project([point("P", {"A": axial(100.0)})], [case("A", temperature=120.0)], materials=[weak])
    assert margin(given) == pytest.approx({"tresca": 2 * 120 * 200 / 300 / 100 - 1, "von-mises": 1.0})


# Temperatures


TEMPERATURES = [
    (20.0, None, 2.0),  # the case's
    (70.0, None, 1.5),  # between two rows
    (None, None, 2.0),  # none: the plain value
    (120.0, 20.0, 2.0),  # the point's goes before the case's
    (None, 120.0, 1.0),
    (20.0, {"A": 120.0}, 1.0),  # a table by case
    (120.0, {}, 1.0),  # that does not name this case
    (120.1, None, NAN),  # outside: never extrapolated
    (20.0, 19.9, NAN),
]


@pytest.mark.parametrize(("of_case", "of_point", "expected"), TEMPERATURES)
def test_the_strength_is_that_at_the_temperature_of_the_cell(of_case: Any, of_point: Any, expected: float) -> None:
    given = project(
        [point("P", {"A": axial(100.0)}, temperature=of_point)], [case("A", temperature=of_case)], materials=[TABLED]
    )
    assert margin(given)["von-mises"] == pytest.approx(expected, nan_ok=True)
    assert compute(given).missing(slice(None), slice(None)).item() is math.isnan(expected)


def test_without_a_table_the_plain_value_serves_at_any_temperature() -> None:
    given = project(
        [point("P", {"A": axial(100.0)})], [case("A", temperature=900.0)], materials=[material(covered=(0.0, 50.0))]
    )
    assert margin(given)["tresca"] == pytest.approx(2.0)


# What is missing


def test_a_missing_stress_is_never_zero_stress() -> None:
    table = compute(project([point("P")], [case("A")]))
    assert math.isnan(table.equivalent["yield"]["tresca"].item())
    assert VERDICTS[table.envelope.verdicts()[0]] == "no-data"


@pytest.mark.parametrize(
    ("ultimate", "asked", "missing"),
    [
        (None, 2.0, [True, False]),  # asked, and the strength not known
        (450.0, 2.0, [False, False]),
        (None, None, [False, False]),  # not asked, so not missed
    ],
)
def test_a_cell_is_missing_if_any_limit_that_is_asked_lacks_its_strength(
    ultimate: float | None, asked: float | None, missing: list[bool]
) -> None:
    given = project(
        [point("P", {"A": axial(100.0), "B": axial(100.0)})],
        [case("A", category="both"), case("B")],
        categories=[category(), category("both", 1.0, asked)],
        materials=[material(ultimate=ultimate)],
    )
    table = compute(given)
    assert table.missing(slice(None), slice(None)).tolist() == [missing]
    assert table.envelope.missing.tolist() == [sum(missing)]


def test_what_is_known_of_a_cell_governs_though_another_limit_is_missing() -> None:
    given = direct({"A": axial(400.0)}, categories=[category("normal", 1.0, 2.0)])
    table = compute(given)
    assert VERDICTS[table.envelope.verdicts()[0]] == "short"
    assert governing(given)["accepted"] == ("A", "yield", "both")


def test_missing_cells_are_counted_whatever_the_verdict() -> None:
    given = project([point("P", {"A": axial(400.0)})], [case("A"), case("B"), case("C")])
    table = compute(given)
    assert VERDICTS[table.envelope.verdicts()[0]] == "short"
    assert table.envelope.missing.tolist() == [2]


def test_a_stress_too_large_for_a_number_is_no_data_and_no_tension() -> None:
    given = project([point("P", per_load={"a": axial(1e300)})], [case("A", {"a": 1e300})], loads("a"))
    table = compute(given)
    assert table.envelope.missing.tolist() == [1]
    assert math.isnan(margin(given)["tresca"])
    assert table.envelope.tension.tolist() == [0]


EXTREME = [
    axial(1e-320),  # a margin too large for a number
    axial(1.7e308),
    [1e308, 1e308, 1e308, 0, 0, 0],  # a sum too large
    [1e308, -1e308, 0, 1e308, 0, 0],
    [-1e308, -1e308, -1e308, 0, 0, 0],
]


@pytest.mark.parametrize("stress", EXTREME)
def test_no_number_makes_a_warning_that_would_reach_the_terminal(stress: list[float]) -> None:
    points = [point(name, {"A": stress, "B": axial(1.0), "C": axial(2.0)}, factor=1.5) for name in "PQR"]
    given = project(points, [case("A"), case("B"), case("C")])
    touching = [Set("point", "P", ("stress", "A"), axial(1.0)), Set("case", "A", ("combine",), {"B": 1.0})]
    touching += [Set("material", "steel", ("yield",), 310.0), Set("category", "normal", ("yield",), 1.1)]
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        table = compute(given)
        report(table, with_cells=True)
        for edit in touching:
            given = apply(given, edit)
            table = compute(given, table)
            report(table)


# Governing


def test_the_theories_may_name_different_governing_cases() -> None:
    given = direct({"shear": shear(95.0), "tension": axial(180.0)})
    found = governing(given)
    assert found["tresca"] == ("shear", "yield", "tresca")
    assert found["von-mises"] == ("tension", "yield", "von-mises")
    assert found["accepted"] == ("shear", "yield", "tresca")


def test_separate_factors_may_let_von_mises_control() -> None:
    given = direct({"A": shear(95.0)}, categories=[category("normal", (1.0, 1.5))])
    assert governing(given)["accepted"] == ("A", "yield", "von-mises")


def test_uniaxial_stress_is_governed_by_both() -> None:
    assert governing(direct({"A": axial(-180.0)}))["accepted"] == ("A", "yield", "both")


def test_the_ultimate_limit_may_govern() -> None:
    given = direct({"A": axial(180.0)}, categories=[category("normal", 1.0, 2.0)], materials=[material(ultimate=450.0)])
    assert governing(given)["accepted"] == ("A", "ultimate", "both")


def test_the_factor_of_a_category_decides_which_case_governs() -> None:
    given = project(
        [point("P", {"A": axial(100.0), "B": axial(120.0)})],
        [case("A"), case("B", category="rare")],
        categories=[category("normal", 1.5), category("rare", 1.0)],
    )
    assert governing(given)["accepted"][0] == "A"


def loop_governing(table: MarginTable, row: int, theory: str) -> tuple[int, int]:
    """The first case and limit within 1e-9 of the least margin, looked for cell by cell."""
    margins = [table.margin[limit][theory][row] for limit in LIMITS]  # type: ignore[index]
    known = [
        (case, i, m[case]) for case in range(table.shape[1]) for i, m in enumerate(margins) if not np.isnan(m[case])
    ]
    least = min((m for _, _, m in known), default=NAN)
    return next(((case, limit) for case, limit, m in known if m <= least + 1e-9), (-1, 0))


def of_width(cases: int, seed: int) -> Project:
    """Direct rows with repeated, missing, zero and nearly equal stresses."""
    chance = Random(seed)
    sizes = [0.0, 100.0, 150.0, 150.0 * (1 + 1e-10), 150.0]
    names = [f"C{i}" for i in range(cases)]

    def rows(choice: list[float]) -> dict[str, list[float]]:
        return {n: axial(chance.choice(choice)) for n in names if chance.random() < 0.9}

    points = [point("P", rows(sizes)), point("Q", rows([0.0])), point("R", rows(sizes[:2])), point("S")]
    points += [point(f"T{i}", {name: axial(149.0) for name in names} | {names[-1 - i]: axial(150.0)}) for i in range(2)]
    categories = [category("normal", 1.0, 1.5), category("rare", (1.0, 0.9))]
    made = [case(name, category=chance.choice(["normal", "rare"])) for name in names]
    return project(points, made, categories=categories, materials=[material(ultimate=440.0)])


@pytest.mark.parametrize("cases", [2, *(n * cells.GROUP + more for n in (1, 2, 4) for more in (-1, 0, 1)), 100])
def test_what_governs_is_found_across_groups_of_cases(cases: int) -> None:
    table = compute(of_width(cases, cases))
    for row in range(table.shape[0]):
        for theory in THEORIES:
            found = table.envelope.by_theory(row, theory)
            assert (found.case, found.limit) == loop_governing(table, row, theory)


@pytest.mark.parametrize("size", [1e-3, 1e-6, 1e-9, 1e-12, 1e-100])  # margins of 1e5 to 1e102
@pytest.mark.parametrize("factor", [1.0, 1.15, (1.2, 1.3)])
def test_what_governs_is_found_however_small_the_stresses(size: float, factor: Any) -> None:
    chance = Random(4)
    stresses = {f"C{i}": shear(size * chance.uniform(1.0, 2.0)) for i in range(70)}
    given = project(
        [point(f"P{i}", stresses, factor=factor) for i in range(3)],
        [case(name) for name in stresses],
        categories=[category("normal", (1.1, 1.3), 1.7)],
        materials=[material(ultimate=450.0)],
    )
    table = compute(given)
    for theory in THEORIES:
        found = table.envelope.by_theory(1, theory)
        worst = max(stresses, key=lambda name: stresses[name][3])
        assert given.checked[found.case].name == worst
        least = min(table.margin[limit][theory][1, found.case] for limit in LIMITS)
        assert table.margin[LIMITS[found.limit]][theory][1, found.case] == least
        assert found.margin == pytest.approx(least, rel=1e-12)


def test_group_least_margins_are_the_least_of_their_cases() -> None:
    table = compute(of_width(70, 5))
    for i, limit in enumerate(LIMITS):
        for j, theory in enumerate(THEORIES):
            for group, start in enumerate(range(0, 70, cells.GROUP)):
                with warnings.catch_warnings():
                    warnings.simplefilter("ignore")  # a row of nothing known
                    least = np.nanmin(table.margin[limit][theory][:, start : start + cells.GROUP], axis=1)
                assert np.array_equal(table.group_least[i, j, :, group], least, equal_nan=True)


# Hydrostatic tension


TENSION = [
    # strength 300, factor 1.5: the bound is 4 x 300 / 1.5 = 800
    ([266.0, 267.0, 267.0, 0, 0, 0], 1.0, 1.5, False),  # equal to the bound
    ([266.0, 267.0, 267.1, 0, 0, 0], 1.0, 1.5, True),
    ([266.0, 267.0, 267.1, 0, 0, 0], 0.9, 1.5, False),  # the point factor counts
    ([250.0, 250.0, 250.0, 0, 0, 0], 1.1, 1.5, True),
    ([-900.0, -900.0, -900.0, 0, 0, 0], 1.0, 1.5, False),  # compression
    ([266.0, 267.0, 267.1, 0, 0, 0], 1.0, (1.0, 1.5), True),  # the larger required factor of the two theories
    ([266.0, 267.0, 267.1, 0, 0, 0], 1.0, (1.5, 1.0), True),
    ([266.0, 267.0, 267.1, 0, 0, 0], 1.0, 1.4, False),
]


@pytest.mark.parametrize(("stress", "factor", "required", "tense"), TENSION)
def test_hydrostatic_tension_is_a_sum_of_principals_above_four_yields_over_the_factor(
    stress: list[float], factor: float, required: Any, tense: bool
) -> None:
    given = project([point("P", {"A": stress}, factor=factor)], [case("A")], categories=[category("normal", required)])
    table = compute(given)
    assert table.hydrostatic.item() is tense
    assert table.envelope.tension.tolist() == [int(tense)]


def test_hydrostatic_tension_takes_the_yield_at_temperature() -> None:
    rows = {"A": [270.0, 270.0, 270.0, 0, 0, 0], "B": [270.0, 270.0, 270.0, 0, 0, 0]}
    cases = [case("A", temperature=20.0), case("B", temperature=120.0)]
    assert compute(project([point("P", rows)], cases, materials=[TABLED])).hydrostatic.tolist() == [[False, True]]


def test_a_measured_shear_yield_does_not_lower_the_bound_of_hydrostatic_tension() -> None:
    rows = {"A": [390.0, 390.0, 390.0, 0, 0, 0]}
    assert not compute(direct(rows, materials=[material(shear_yield=100.0)])).hydrostatic.any()


# The table


def test_the_stress_of_a_cell_is_read_without_factors() -> None:
    given = project([point("P", {"A": axial(1.0), "B": shear(2.0)}, factor=1.5)], [case("A"), case("B")])
    table = compute(given)
    assert table.stress(0, 1).tolist() == shear(2.0)


def test_equivalents_cannot_be_written_through_the_view() -> None:
    view = compute(direct({"A": axial(1.0)})).equivalent["yield"]["tresca"]
    with pytest.raises(ValueError, match="read-only"):
        view[0, 0] = 5.0


def test_a_block_of_margins_is_a_part_of_all() -> None:
    table = compute(of_width(40, 2))
    rows, columns = np.array([4, 0]), np.array([39, 3, 7])
    for i, limit in enumerate(LIMITS):
        block = table.margins(rows, columns, i)
        for j, theory in enumerate(THEORIES):
            assert np.array_equal(block[j], table.margin[limit][theory][rows[:, None], columns], equal_nan=True)
    assert np.array_equal(table.missing(rows, columns), table.missing(slice(None), slice(None))[rows[:, None], columns])


@pytest.mark.parametrize(
    "given",
    [
        project(),  # nothing at all
        project([point("P", {"A": axial(1.0)})], [case("A", check=False)]),  # no checked case
        project(cases=[case("A"), case("B")]),  # no point
    ],
)
def test_a_table_without_cells_has_nothing_that_governs(given: Project) -> None:
    table = compute(given)
    assert table.margin["yield"]["tresca"].shape == table.shape
    assert not table.envelope.of_project().known
    assert set(table.envelope.missing.tolist()) <= {0}


def test_many_cells_on_two_threads_are_those_on_one(monkeypatch: pytest.MonkeyPatch) -> None:
    given = of_width(300, 7)
    monkeypatch.setattr(cells, "BLOCK", 300)
    alone = compute(given)
    monkeypatch.setattr(cells, "threads_for", lambda _: 2)
    shared = compute(given)
    assert np.array_equal(shared.values, alone.values, equal_nan=True)
    assert np.array_equal(shared.envelope.case, alone.envelope.case)
    assert np.array_equal(shared.group_least, alone.group_least, equal_nan=True)
    assert np.array_equal(shared.envelope.missing, alone.envelope.missing)


@pytest.mark.parametrize(("count", "threads"), [(cells.PARALLEL - 1, {1}), (cells.PARALLEL, {1, 2})])
def test_a_second_thread_is_taken_for_many_cells_only(count: int, threads: set[int]) -> None:
    assert cells.threads_for(count) in threads
