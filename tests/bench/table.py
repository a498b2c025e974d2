"""All margins of a 1,000 x 1,000 project, and of what an edit touches."""

from __future__ import annotations

import tracemalloc
from collections.abc import Callable, Iterator
from dataclasses import replace
from statistics import median
from time import perf_counter

import numpy as np

from engine import edits
from engine.edits import Edit, Set
from engine.frozen import FrozenMap, StressRows
from engine.loads import Case, Load
from engine.margins import MarginTable, compute
from engine.material import Material
from engine.project import Category, Factors, Point, Project, Settings

from .timing import Row, duration, in_turns, median_ratio

POINTS, CASES, LOADS = 1000, 1000, 12
EDITS = 25


def big_project() -> Project:
    """Invented numbers: three materials, two categories, every point feels every load, case 500 governs nothing yet."""
    draw = np.random.default_rng(7)
    loads = tuple(Load(f"load {i}") for i in range(LOADS))
    categories = (
        Category("normal", Factors(1.5, 1.5), Factors(2.0, 2.0)),
        Category("rare", Factors(1.25, 1.25), Factors(1.6, 1.6)),
    )
    materials = tuple(Material(f"metal {i}", 200.0 + 60.0 * i, 420.0 + 50.0 * i, range=(-20, 100)) for i in range(3))
    magnitudes = draw.normal(size=(CASES, LOADS))
    cases = tuple(
        Case(
            f"case {i}",
            categories[i % 2].name,
            temperature=20.0,
            loads=FrozenMap(zip((load.name for load in loads), row.tolist(), strict=True)),
        )
        for i, row in enumerate(magnitudes)
    )
    names = [load.name for load in loads]
    points = tuple(
        Point(f"point {i}", materials[i % 3].name, per_load=StressRows(names, draw.normal(size=(LOADS, 6)) * 12))
        for i in range(POINTS)
    )
    return Project(
        Settings("big", "mm-N-MPa", "both", 0.1),
        categories=categories,
        materials=materials,
        loads=loads,
        cases=cases,
        points=points,
    )


def lapack_way(project: Project) -> float:
    """The plain way to the same least margin: stresses by a product, eigenvalues by LAPACK, every margin formed."""
    table = MarginTable(replace(project, cases=project.cases[:1]))
    rating = MarginTable(replace(project, points=project.points[:3])).rating
    magnitudes = np.array([[case.loads[load.name] for load in project.loads] for case in project.cases])
    least = np.inf
    for row in range(0, POINTS, 20):
        stress = np.matmul(table.influence.per_load[:, row : row + 20], magnitudes.T).reshape(6, -1)
        full = np.empty((stress.shape[1], 3, 3))
        for place, (i, j) in enumerate(((0, 0), (1, 1), (2, 2), (0, 1), (1, 2), (0, 2))):
            full[:, i, j] = full[:, j, i] = stress[place]
        principal = np.linalg.eigvalsh(full)
        tresca = (principal[:, 2] - principal[:, 0]).reshape(20, CASES)
        a, b, c = principal.T
        mises = np.sqrt(0.5 * ((a - b) ** 2 + (b - c) ** 2 + (c - a) ** 2)).reshape(20, CASES)
        classes = np.arange(row, row + 20) % 3
        for limit in range(2):
            for theory, equivalent in ((0, tresca), (1, mises)):
                margins = rating.allowable[limit, theory][classes] / equivalent - 1.0
                least = min(least, float(margins.min(axis=1).min()))
    return least


def _edited(project: Project, make: Callable[[int], Edit]) -> list[float]:
    """Times of computing and governing again after each of a run of edits, the edits themselves apart."""
    table, taken = compute(project), []
    for turn in range(EDITS):
        project = edits.apply(project, make(turn))
        start = perf_counter()
        table = compute(project, table)
        table.envelope.of_project()
        table.envelope.counts()
        taken.append(perf_counter() - start)
    return taken


def _relieved(project: Project) -> list[float]:
    """Times of governing again when the case that governed every point is relieved."""
    names = [load.name for load in project.loads]
    worst = Set("case", "case 500", ("loads",), dict.fromkeys(names, 40.0))
    mild = Set("case", "case 500", ("loads",), dict.fromkeys(names, 0.01))
    table, taken = compute(project), []
    for _ in range(EDITS):
        project = edits.apply(project, worst)
        table = compute(project, table)
        assert (table.envelope.case == 500).mean() > 0.9
        project = edits.apply(project, mild)
        start = perf_counter()
        table = compute(project, table)
        table.envelope.of_project()
        table.envelope.counts()
        taken.append(perf_counter() - start)
    return taken


def _peak_bytes_per_cell(project: Project) -> float:
    tracemalloc.start()
    table = compute(project)
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    points, cases = table.shape
    return peak / (points * cases)


def rows() -> Iterator[Row]:
    """The lines of this section."""
    project = big_project()
    plain, whole = in_turns(5, lambda: lapack_way(project), lambda: compute(project))
    ratio = median_ratio(plain, whole)
    yield Row("all margins, 1,000 x 1,000, 12 loads", duration(whole), f"LAPACK {duration(plain)}", ratio, "over 10")
    full = median(whole)
    runs: list[tuple[str, list[float], str]] = [
        (
            "one load in one case",
            _edited(project, lambda i: Set("case", f"case {i}", ("loads", "load 3"), 0.1 * i)),
            "over 100",
        ),
        (
            "one point",
            _edited(project, lambda i: Set("point", f"point {i}", ("per-load", "load 3"), [1.0 * i, 2, 3, 4, 5, 6])),
            "over 50",
        ),
        ("a case that governed everywhere, relieved", _relieved(project), "over 40"),
        ("a material", _edited(project, lambda i: Set("material", "metal 1", ("yield",), 250.0 + i)), "over 5"),
    ]
    for what, taken, goal in runs:
        yield Row(
            f"again after a change of {what}", duration(taken), f"all {duration(whole)}", full / median(taken), goal
        )
    yield Row("peak memory, bytes a cell", f"{_peak_bytes_per_cell(project):.1f}", "", None, "at most 50")
