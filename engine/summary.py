"""The state of a whole project as plain data: what `hexlipse check --json` prints."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import Any

import numpy as np

from engine import cautions
from engine.cells import blocks
from engine.envelope import TOLERANCE, VERDICTS, Governing
from engine.material import LIMITS, THEORIES
from engine.project import Project
from engine.schema import FORMAT
from engine.table import MarginTable


class NotComputed(ValueError):
    """The project needs a stress that this program does not compute yet."""


def refuse_uncomputed(project: Project) -> None:
    """Raises NotComputed where a section or a load's sense would have to be computed; never a wrong number."""
    for point in project.points:
        if point.section:
            raise NotComputed(f"point {point.name}: stress from a section is not computed yet")
    for load in project.loads:
        if load.sense != "fixed":
            raise NotComputed(f'load {load.name}: sense "{load.sense}" is not computed yet')


def never_govern(table: MarginTable) -> list[str]:
    """Names of the checked cases whose margins are nowhere within 1e-9 of a point's least, by either theory."""
    points, cases = table.shape
    governs = np.zeros(cases, dtype=bool)
    for rows in blocks(points, cases):
        least = table.envelope.least[:, rows] + TOLERANCE
        for limit in table.rating.limits:
            margins = table.margins(slice(rows[0], rows[-1] + 1), slice(None), limit)
            with np.errstate(invalid="ignore"):
                governs |= (margins <= least[:, :, None]).any(axis=(0, 1))
    return [case.name for case, used in zip(table.project.checked, governs, strict=True) if not used]


def figure(margin: float) -> dict[str, Any]:
    """A margin for JSON: null where it is not a number, with the reason beside it."""
    if math.isnan(margin):
        return {"margin": None, "no-data": True}
    if math.isinf(margin):
        return {"margin": None, "no-stress": True}
    return {"margin": margin}


def governing(project: Project, found: Governing, with_point: bool = False, with_theory: bool = True) -> dict[str, Any]:
    """A governing cell for JSON."""
    document: dict[str, Any] = {}
    if with_point:
        document["point"] = project.points[found.point].name if found.known else None
    document["case"] = project.checked[found.case].name if found.known else None
    document["limit"] = LIMITS[found.limit] if found.known else None
    if with_theory:
        document["theory"] = found.theory
    return document | figure(found.margin)


def point_report(table: MarginTable, row: int) -> dict[str, Any]:
    """One point for JSON."""
    project, envelope = table.project, table.envelope
    missing = np.flatnonzero(table.missing(slice(row, row + 1), slice(None))[0])
    return {
        "name": project.points[row].name,
        "verdict": VERDICTS[envelope.verdicts()[row]],
        "governing": governing(project, envelope.of_point(row)),
        **_by_theory(table, row),
        "missing": [project.checked[column].name for column in missing],
        "cautions": [
            {"name": c.name, "text": c.text, "blocking": c.blocking, "acknowledged": c.acknowledged}
            for c in cautions.of_point(table, row)
        ],
    }


def _by_theory(table: MarginTable, row: int) -> dict[str, Any]:
    found = [(theory, table.envelope.by_theory(row, theory)) for theory in THEORIES]
    return {str(theory): governing(table.project, cell, with_theory=False) for theory, cell in found}


def cells(table: MarginTable) -> Iterator[dict[str, Any]]:
    """Every cell for JSON: one object a point, case and limit that is asked."""
    project, rating = table.project, table.rating
    for row, point in enumerate(project.points):
        margins = [
            table.margins(slice(row, row + 1), slice(None), limit)[:, 0].tolist() for limit in range(len(LIMITS))
        ]
        values = table.values[:, row].tolist()
        for column, case in enumerate(project.checked):
            for i, limit in enumerate(LIMITS):
                if rating.asked[i, column]:
                    by_theory: dict[str, Any] = {
                        theory: {"equivalent": _number(values[j][column]), **figure(margins[i][j][column])}
                        for j, theory in enumerate(THEORIES)
                    }
                    yield {"point": point.name, "case": case.name, "limit": limit, **by_theory}


def _number(value: float) -> float | None:
    return value if math.isfinite(value) else None


def report(table: MarginTable, with_cells: bool = False) -> dict[str, Any]:
    """The whole report for JSON. Raises NotComputed where a part of the project is not computed yet."""
    project, envelope = table.project, table.envelope
    refuse_uncomputed(project)
    points, cases = table.shape
    document: dict[str, Any] = {
        "format": FORMAT,
        "title": project.settings.title,
        "revision": project.settings.revision,
        "accept": project.settings.accept,
        "passes": cautions.passes(project, table.rating, envelope),
        "complete": cautions.complete(envelope, cases),
        "counts": envelope.counts(),
        "governing": governing(project, envelope.of_project(), with_point=True),
        "points": [point_report(table, row) for row in range(points)],
        "never-govern": never_govern(table),
    }
    if with_cells:
        document["cells"] = list(cells(table))
    return document
