"""The cell under the cursor, its multiplication written out: the number is never just a number."""

from __future__ import annotations

import math
import textwrap

import numpy as np

from engine import criteria
from engine.envelope import TOLERANCE, Governing, controls
from engine.figures import margin_text, number_text, stress_text
from engine.influence import why_missing
from engine.material import LIMITS, THEORIES
from engine.units import SYSTEMS

from .document import Document
from .palette import Runs
from .words import THEORY, governing_case

_LABEL = 10


def cell_lines(document: Document, row: int, column: int, limits: list[int]) -> list[Runs]:
    """Title, both theories, and what governs the point: four lines."""
    points, cases = document.table.shape
    if row >= points or column >= cases:
        return [[("", "plain")]]
    limit = _limit(document, row, column, limits)
    return [
        _title(document, row, column),
        *_theories(document, row, column, limit),
        point_line(document, row),
    ]


def _limit(document: Document, row: int, column: int, limits: list[int]) -> int:
    """The limit with the lesser accepted margin in the cell; among equals the first."""
    at, chosen = np.array([row]), np.array([column])
    accepted = [THEORIES.index(name) for name in document.project.settings.accepted]
    least = [np.fmin.reduce(document.table.margins(at, chosen, i)[accepted, 0, 0]) for i in limits]
    known = [i for i, value in enumerate(least) if not math.isnan(value)]
    asked = [i for i, limit in enumerate(limits) if document.table.rating.asked[limit, column]]
    best = min(known, key=lambda i: least[i]) if known else (asked or [0])[0]
    return limits[best]


def _title(document: Document, row: int, column: int) -> Runs:
    project, table = document.project, document.table
    point, case = project.points[row], project.cases[table.of_case[column]]
    degrees = float(table.rating.temperature[table.rating.of_point[row], column])
    unit = SYSTEMS[project.settings.units].temperature
    words = [case.category, "" if math.isnan(degrees) else f"{number_text(degrees)} {unit}", point.material, case.label]
    return [
        (f" {'Here':<{_LABEL}}", "dim"),
        (f"{point.name} x {case.name}", "governs"),
        ("   " + "  ".join(word for word in words if word), "plain"),
    ]


def _theories(document: Document, row: int, column: int, limit: int) -> list[Runs]:
    table = document.table
    equivalent = table.values[:, row, column]
    if np.isnan(equivalent).any():
        case = document.project.cases[table.of_case[column]]
        why = why_missing(document.project.points[row], case, document.project.loads, table.sets)
        return [[(f" {'No data':<{_LABEL}}", "dim"), (f"? {why}", "nodata")], [("", "plain")]]
    margins = table.margins(np.array([row]), np.array([column]), limit)[:, 0, 0]
    verdicts = controls(float(margins[0]), float(margins[1]))
    place = _shear_place(document, row, column)
    works = [_work(document, row, column, limit, i) for i in range(len(THEORIES))]
    lines: list[Runs] = []
    for i, name in enumerate(THEORIES):
        margin = float(margins[i])
        controlling = "controls" if verdicts == name else ("equal" if verdicts == "both" and i == 0 else "")
        words = [_said(margin), controlling, place if i else ""]
        role = _role(margin, document.project.settings.thin)
        lines.append(
            [
                (f" {THEORY[name]:<{_LABEL}}", "dim"),
                (f"{works[i]:<{max(map(len, works)) + 1}}", "plain"),
                (f"{margin_text(margin):>6}  ", role),
                (", ".join(word for word in words if word), "plain"),
            ]
        )
    return lines


def _work(document: Document, row: int, column: int, limit: int, theory: int) -> str:
    """ "187.5 x 1.25 x 1.00 of 225.0 yield": equivalent, required factor, point factor, strength."""
    rating, table = document.table.rating, document.table
    if not rating.asked[limit, column]:
        return f"{LIMITS[limit]} is not asked for in this category"
    strength = float(rating.strength[limit, theory, rating.of_point[row], column])
    equivalent = stress_text(float(table.values[theory, row, column]))
    factor = f"{_factor_text(rating.required[limit, theory, column])} x {_factor_text(rating.factor[limit, row])}"
    if math.isnan(strength):
        return f"{equivalent} x {factor}, no {LIMITS[limit]} strength known"
    return f"{equivalent} x {factor} of {stress_text(strength)} {LIMITS[limit]}"


def _factor_text(factor: float) -> str:
    """Two decimals, or as many as it has: a factor is multiplied by hand, so it is never rounded."""
    return f"{factor:.2f}" if round(factor, 2) == factor else number_text(factor)


def _said(margin: float) -> str:
    return "fails" if margin < -TOLERANCE else ""


def _role(margin: float, thin: float) -> str:
    if margin < -TOLERANCE:
        return "short"
    return "thin" if margin < thin - TOLERANCE else "plain"


def _shear_place(document: Document, row: int, column: int) -> str:
    """Whether the absolute maximum shear lies in the xy plane."""
    stress = document.table.stress(row, column)
    if not float(criteria.max_shear(stress)):
        return ""
    return "shear in plane" if bool(criteria.shear_in_plane(stress)) else "shear out of plane"


def point_line(document: Document, row: int) -> Runs:
    """What governs the point under each theory; said where the theories name different cases."""
    envelope = document.table.envelope
    by = [envelope.by_theory(row, name) for name in THEORIES]
    label = f" {'Point':<{_LABEL}}"
    if not by[0].known:
        return [(label, "dim"), ("nothing is known of it yet", "nodata")]
    margins = [margin_text(found.margin) for found in by]
    missing = int(envelope.missing[row])
    lacking = f"; {missing} without data" if missing else ""
    if (by[0].case, by[0].limit) == (by[1].case, by[1].limit):
        text = f"both theories name {_cell(document, by[0])}: {margins[0]} Tresca, {margins[1]} von Mises"
        return [(label, "dim"), (text + lacking, "plain")]
    text = f"Tresca names {_cell(document, by[0])} {margins[0]}, von Mises {_cell(document, by[1])} {margins[1]}"
    return [(label, "dim"), (text + lacking, "governs")]


def _cell(document: Document, found: Governing) -> str:
    return f"{governing_case(document.project, found)} {LIMITS[found.limit]}"


def governs_line(document: Document) -> Runs:
    """What governs the project, in words."""
    envelope, project = document.table.envelope, document.project
    found = envelope.of_project()
    label = f" {'Governs':<{_LABEL}}"
    if not found.known:
        return [(label, "dim"), ("nothing: no margin is known yet", "nodata")]
    point = project.points[found.point]
    at = np.array([found.point]), np.array([found.case])
    margins = document.table.margins(*at, found.limit)[:, 0, 0]
    text = f"{point.name} in {governing_case(project, found)}, {LIMITS[found.limit]}: "
    words = "no stress" if math.isinf(found.margin) else said(float(margins[0]), float(margins[1]))
    return [(label, "dim"), (text, "governs"), (words, "plain")]


def said(tresca: float, von_mises: float) -> str:
    """Both margins, and which theory fails where only one does."""
    numbers = f"{margin_text(tresca)} Tresca, {margin_text(von_mises)} von Mises"
    fails = [name for name, m in zip(THEORIES, (tresca, von_mises), strict=True) if m < -TOLERANCE]
    if len(fails) != 1:
        return numbers
    told = [f"{THEORY[name]} {'fails' if name in fails else 'passes'}" for name in THEORIES]
    return f"{told[0]} {margin_text(tresca)}, {told[1]} {margin_text(von_mises)}"


def said_lines(label: str, text: str, width: int = 80) -> list[Runs]:
    """A longer text under a label, wrapped."""
    lines = textwrap.wrap(text, max(width - _LABEL - 4, 20)) or [""]
    heads = [label, *[""] * (len(lines) - 1)]
    return [[(f" {head:<{_LABEL}} ", "dim"), (line, "plain")] for head, line in zip(heads, lines, strict=True)]
