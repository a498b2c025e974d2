"""What governs, what controls, and verdicts: tolerances and the order of equals."""

from __future__ import annotations

import math
from typing import cast

import numpy as np
import pytest

from engine.envelope import VERDICTS, Envelope, Governing, accepted_rows, controls, least_accepted, verdict_codes
from engine.margins import compute
from engine.project import Accept, Category, Factors

from .builders import axial, case, material, point, project

NAN, INF = math.nan, math.inf
THIN = 0.1
NEAR, FAR = 0.9e-9, 1.8e-9
"""Differences within the tolerance of 1e-9, and beyond it though within twice."""
Pair = tuple[float, float]


def factors(margins: Pair) -> Factors:
    """Required factors that give these margins by (tresca, von-mises) to a stress of the size of the strength."""
    tresca, von_mises = (1.0 if math.isinf(margin) else 1.0 / (1.0 + margin) for margin in margins)
    return Factors(tresca, von_mises)


def envelope(*cases: Pair | None, accept: str = "both", ultimate: dict[int, Pair] | None = None) -> Envelope:
    """One point with these margins by (tresca, von-mises) in each case: infinite: no stress; None: no data."""
    more = ultimate or {}
    names = [str(place) for place in range(len(cases))]
    given = project(
        [
            point(
                "P", {name: axial(0.0 if INF in pair else 1.0) for name, pair in zip(names, cases, strict=True) if pair}
            )
        ],
        [case(name, category=name) for name in names],
        categories=[
            Category(name, factors(pair or (0.0, 0.0)), factors(more[place]) if place in more else None)
            for place, (name, pair) in enumerate(zip(names, cases, strict=True))
        ],
        materials=[material(yield_=1.0, ultimate=1.0)],
        accept=cast(Accept, accept),
        thin=THIN,
    )
    return compute(given).envelope


def cell(found: Governing) -> tuple[int, int, str | None]:
    """Case, limit and theory."""
    return found.case, found.limit, found.theory


# Verdicts


VERDICT_TABLE = [
    (0.5, 0.6, False, "both", "clear"),
    (THIN, THIN, False, "both", "clear"),  # at thin
    (THIN - NEAR, 0.5, False, "both", "clear"),  # equal to thin
    (THIN - FAR, 0.5, False, "both", "thin"),
    (0.5, THIN - FAR, False, "both", "thin"),  # either theory
    (0.0, 0.5, False, "both", "thin"),
    (-NEAR, 0.5, False, "both", "thin"),  # equal to zero is zero, and zero is no failure
    (-FAR, 0.5, False, "both", "split"),
    (0.5, -FAR, False, "both", "split"),  # the other theory fails
    (-FAR, -NEAR, False, "both", "split"),
    (-FAR, -FAR, False, "both", "short"),
    (-0.5, -0.4, True, "both", "short"),  # short goes before no-data
    (-0.5, 0.4, True, "both", "split"),  # split goes before no-data
    (0.05, 0.4, True, "both", "no-data"),  # no-data goes before thin
    (0.5, 0.4, True, "both", "no-data"),  # and before clear
    (NAN, NAN, True, "both", "no-data"),  # nothing known at all
    (NAN, NAN, False, "both", "no-data"),  # no cell at all
    (INF, INF, False, "both", "clear"),  # no stress anywhere
    (0.05, 0.4, False, "von-mises", "clear"),  # thin follows the accepted theory
    (0.4, 0.05, False, "von-mises", "thin"),
    (0.05, 0.4, False, "tresca", "thin"),
    (0.4, 0.05, False, "tresca", "clear"),
    (-0.1, 0.4, False, "von-mises", "split"),  # both theories are always shown
    (-0.1, -0.1, False, "tresca", "short"),
]


@pytest.mark.parametrize(("tresca", "von_mises", "missing", "accept", "verdict"), VERDICT_TABLE)
def test_the_verdict_of_a_point(tresca: float, von_mises: float, missing: bool, accept: str, verdict: str) -> None:
    least = np.array([[tresca], [von_mises]])
    codes = verdict_codes(least, np.array([missing]), cast(Accept, accept), THIN)
    assert [VERDICTS[code] for code in codes] == [verdict]


def test_no_margin_is_thin_where_thin_is_zero() -> None:
    assert verdict_codes(np.array([[0.0], [0.0]]), np.array([False]), "both", 0.0).tolist() == [VERDICTS.index("clear")]


def test_verdicts_take_the_least_known_margin_per_theory_from_different_cases() -> None:
    found = envelope((-0.1, 0.5), (0.5, -0.2))
    assert VERDICTS[found.verdicts()[0]] == "short"


def test_points_are_counted_by_verdict() -> None:
    given = project(
        [
            point(name, {"A": axial(stress)} if stress else {})
            for name, stress in zip("PQRST", (1, 290, 310, 400, 0), strict=True)
        ],
        [case("A")],
    )
    counts = compute(given).envelope.counts()
    assert counts == {"clear": 1, "thin": 1, "split": 0, "short": 2, "no-data": 1}


def test_without_points_every_count_is_zero() -> None:
    assert set(compute(project(cases=[case("A")])).envelope.counts().values()) == {0}


# Controls


@pytest.mark.parametrize(
    ("tresca", "von_mises", "expected"),
    [
        (0.1, 0.2, "tresca"),
        (0.2, 0.1, "von-mises"),
        (0.1, 0.1, "both"),
        (0.1, 0.1 + NEAR, "both"),  # equal within the tolerance
        (0.1, 0.1 + FAR, "tresca"),
        (0.1 + FAR, 0.1, "von-mises"),
        (INF, INF, "both"),  # no stress
        (INF, 5.0, "von-mises"),
        (NAN, NAN, None),  # nothing known
    ],
)
def test_the_theory_with_the_lesser_margin_controls(tresca: float, von_mises: float, expected: str | None) -> None:
    assert controls(tresca, von_mises) == expected


# What governs a point


@pytest.mark.parametrize(
    ("accept", "rows", "least"),
    [("both", [0, 1], [1.0, 2.0]), ("tresca", [0], [1.0, 4.0]), ("von-mises", [1], [3.0, 2.0])],
)
def test_least_follows_the_accepted_theories(accept: str, rows: list[int], least: list[float]) -> None:
    assert accepted_rows(cast(Accept, accept)) == rows
    assert least_accepted(np.array([[1.0, 4.0], [3.0, 2.0]]), cast(Accept, accept)).tolist() == least


def test_the_least_margin_governs_and_is_kept_per_theory() -> None:
    found = envelope((0.5, 0.4), (0.2, 0.3), (0.9, 0.1))
    assert cell(found.by_theory(0, "tresca")) == (1, 0, "tresca")
    assert cell(found.by_theory(0, "von-mises")) == (2, 0, "von-mises")
    assert cell(found.of_point(0)) == (2, 0, "von-mises")
    assert found.of_point(0).margin == pytest.approx(0.1)


@pytest.mark.parametrize(
    ("accept", "expected"),
    [("both", (2, 0, "von-mises")), ("tresca", (1, 0, "tresca")), ("von-mises", (2, 0, "von-mises"))],
)
def test_only_accepted_theories_govern(accept: str, expected: tuple[int, int, str]) -> None:
    assert cell(envelope((0.5, 0.4), (0.2, 0.3), (0.9, 0.1), accept=accept).of_point(0)) == expected


def test_the_least_of_both_limits_governs() -> None:
    found = envelope((0.5, 0.5), (0.3, 0.3), ultimate={0: (0.2, 0.4)})
    assert cell(found.of_point(0)) == (0, 1, "tresca")


GOVERNING = [
    # among equals the first in file order governs
    ([(0.2, 0.9), (0.1, 0.9), (0.1, 0.9)], {}, (1, 0, "tresca")),
    ([(0.1 + NEAR, 0.9), (0.1, 0.9)], {}, (0, 0, "tresca")),
    ([(0.1 + FAR, 0.9), (0.1, 0.9)], {}, (1, 0, "tresca")),
    # yield before ultimate in the same case, though the ultimate is less within the tolerance
    ([(0.1, 0.9)], {0: (0.1, 0.9)}, (0, 0, "tresca")),
    ([(0.1 + NEAR, 0.9)], {0: (0.1, 0.9)}, (0, 0, "tresca")),
    ([(0.1 + FAR, 0.9)], {0: (0.1, 0.9)}, (0, 1, "tresca")),
    # the earlier case goes before the earlier limit
    ([(0.9, 0.9), (0.1, 0.9)], {0: (0.1, 0.9)}, (0, 1, "tresca")),
    # equal theories in the governing cell
    ([(0.2, 0.2), (0.1, 0.1)], {}, (1, 0, "both")),
    ([(0.1, 0.1 + NEAR)], {}, (0, 0, "both")),
    ([(0.1, 0.1 + FAR)], {}, (0, 0, "tresca")),
    # equal theories in different cases: the first case governs, by its own theory
    ([(0.9, 0.1), (0.1, 0.9)], {}, (0, 0, "von-mises")),
    ([(0.1, 0.9), (0.9, 0.1)], {}, (0, 0, "tresca")),
    # equal theories at different limits of one case
    ([(0.1, 0.9)], {0: (0.9, 0.1)}, (0, 0, "tresca")),
    # a missing case governs nothing
    ([None, (0.3, 0.4)], {}, (1, 0, "tresca")),
    # no stress governs nothing beside any stress
    ([(INF, INF), (5.0, 6.0)], {}, (1, 0, "tresca")),
    # unless there is no other: then the first of them, by both
    ([None, (INF, INF), (INF, INF)], {}, (1, 0, "both")),
]


@pytest.mark.parametrize(("cases", "ultimate", "expected"), GOVERNING)
def test_what_governs_a_point(
    cases: list[Pair | None], ultimate: dict[int, Pair], expected: tuple[int, int, str]
) -> None:
    assert cell(envelope(*cases, ultimate=ultimate).of_point(0)) == expected


def test_nothing_governs_a_point_without_data() -> None:
    found = envelope(None, None).of_point(0)
    assert cell(found) == (-1, 0, None)
    assert not found.known
    assert math.isnan(found.margin)


def test_an_infinite_least_margin_is_known() -> None:
    found = envelope((INF, INF)).of_point(0)
    assert found.known
    assert math.isinf(found.margin)


def test_a_governing_margin_is_the_least_of_both_theories() -> None:
    assert envelope((0.1 + NEAR, 0.1)).of_point(0).margin == pytest.approx(0.1, abs=1e-12)


# What governs the project


@pytest.mark.parametrize(
    ("stresses", "worst"),
    [
        ([100.0, 200.0, 150.0], 1),
        ([100.0, 200.0, 200.0], 1),  # among equals the first
        ([200.0 * (1 - 1e-10), 200.0, 100.0], 0),  # equal within the tolerance
        ([200.0 * (1 - 4e-9), 200.0, 100.0], 1),
        ([None, 0.0, 100.0], 2),  # neither no data nor no stress
        ([None, 0.0, 0.0], 1),  # only no stress
        ([None, None], -1),
        ([], -1),
    ],
)
def test_the_first_point_with_the_least_margin_is_the_worst(stresses: list[float | None], worst: int) -> None:
    points = [point(f"P{i}", {} if stress is None else {"A": axial(stress)}) for i, stress in enumerate(stresses)]
    found = compute(project(points, [case("A")])).envelope
    assert found.worst_point() == worst
    assert found.of_project().point == worst
    assert found.of_project().known is (worst >= 0)


@pytest.mark.parametrize(("accept", "worst"), [("both", 1), ("tresca", 0), ("von-mises", 1)])
def test_the_worst_point_follows_the_accepted_theories(accept: str, worst: int) -> None:
    given = project(
        [point("P", {"A": axial(1.0)}, factor=1.0), point("Q", {"B": axial(1.0)})],
        [case("A", category="one"), case("B", category="two")],
        categories=[Category("one", factors((0.3, 0.9))), Category("two", factors((0.5, 0.2)))],
        materials=[material(yield_=1.0)],
        accept=cast(Accept, accept),
    )
    assert compute(given).envelope.worst_point() == worst


def test_decisive_margins_are_the_least_of_the_accepted_theories() -> None:
    assert envelope((0.5, 0.4)).decisive() == pytest.approx([0.4])
    assert envelope((0.5, 0.4), accept="tresca").decisive() == pytest.approx([0.5])
