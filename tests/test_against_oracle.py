"""The whole report against the oracle's, for random valid files in every spelling, and for the demo."""

from __future__ import annotations

from pathlib import Path

import pytest

from engine.edits import Set, apply
from engine.margins import compute
from engine.project import KINDS
from engine.store import load, parse, render
from engine.summary import NotComputed, report

from . import oracle
from .engine.builders import differences
from .engine.random_edits import edited
from .random_projects import large_project, random_project

DEMO = Path(__file__).parents[1] / "projects" / "slipway-winch.toml"


def disagreements(text: str) -> list[str]:
    """Where the engine and the oracle say something else about a file."""
    return differences(report(compute(parse(text)), with_cells=True), oracle.report(text))


@pytest.mark.parametrize("first", range(0, 150, 10))
def test_the_report_of_a_random_file_is_the_oracles(first: int) -> None:
    found = {seed: disagreements(random_project(seed)) for seed in range(first, first + 10)}
    assert {seed: lines for seed, lines in found.items() if lines} == {}


@pytest.mark.parametrize("first", range(1000, 1060, 10))
def test_the_report_after_random_edits_is_the_oracles_of_the_file_then_written(first: int) -> None:
    found = {}
    for seed in range(first, first + 10):
        project, table = parse(random_project(seed)), None
        for step in range(8):
            project, _ = edited(project, seed + step, 3) if any(map(project.of, KINDS)) else (project, [])
            table = compute(project, table)
        try:
            ours = report(table, with_cells=True) if table is not None else {}
        except NotComputed:
            continue
        found[seed] = differences(ours, oracle.report(render(project)))
    assert len(found) > 2  # the others got a load that is not computed yet
    assert {seed: lines for seed, lines in found.items() if lines} == {}


def test_the_report_of_a_larger_file_is_the_oracles() -> None:
    assert disagreements(large_project(21, 40, 4, seed=1)) == []


def test_the_report_of_the_demo_is_the_oracles() -> None:
    ours = report(compute(load(DEMO)), with_cells=True)
    assert differences(ours, oracle.report(DEMO)) == []


def test_a_difference_would_be_seen() -> None:
    text = large_project(5, 9, 3, seed=1)
    moved = apply(parse(text), Set("case", "LC0000", ("loads", "F000"), 1.0))
    assert differences(report(compute(moved), with_cells=True), oracle.report(text)) != []


@pytest.mark.soak
@pytest.mark.parametrize("first", range(0, 5000, 100))
def test_the_reports_of_five_thousand_random_files_are_the_oracles(first: int) -> None:
    found = {seed: disagreements(random_project(seed)) for seed in range(first, first + 100)}
    assert {seed: lines for seed, lines in found.items() if lines} == {}
