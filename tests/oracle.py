"""A second route to everything `hexlipse check --json --cells` prints, for files without sections and reversible loads.

Written from the design of the file format and of the command alone: nothing of `engine` or `tui` is imported, so that
an agreement of both means something. Slow and obvious on purpose: loops over plain dictionaries, LAPACK's eigenvalues
(60-digit ones where principal stresses nearly coincide) for Tresca, the plain formula for von Mises.
"""

from __future__ import annotations

import math
import tomllib
from dataclasses import dataclass
from itertools import pairwise
from pathlib import Path
from typing import Any

import mpmath
import numpy as np

Table = dict[str, Any]

TIE = 1e-9  # margins this close are equal, and this close to zero are zero
VANISHING = 1e-12  # a combined magnitude this small beside its parts is zero
THEORIES = ("tresca", "von-mises")
ORDER = ("xx", "yy", "zz", "xy", "yz", "zx")
VERDICTS = ("clear", "thin", "split", "short", "no-data")
BLOCKING = ("elongation", "hydrostatic-tension", "temperature", "factor-below-one")
NOTES = ("no-source-strength", "no-source-stress", "no-temperature", "ultimate-elastic", "ultimate-temperature")


@dataclass(frozen=True)
class Cell:
    """One point in one checked case at one limit; a theory's values are None where something needed is missing."""

    point: str
    """Name of the check point."""
    case: str
    """Name of the load case."""
    limit: str
    """`yield` or `ultimate`."""
    equivalent: dict[str, float | None]
    """Equivalent stress by theory, without any factor."""
    margin: dict[str, float | None]
    """Margin by theory; infinite where there is no stress."""

    @property
    def known(self) -> bool:
        """Whether the cell has its margins (both theories need the same data)."""
        return None not in self.margin.values()


def report(source: Path | str) -> Table:
    """The object that `check --json --cells` prints for a valid file.

    source: a path, or the text itself (a string with a line break is taken for text).
    Raises ValueError for sections and loads whose sense is not fixed.
    """
    project = read(source)
    cells = [cell for point in listed(project, "point") for cell in cells_of(project, point)]
    points = [point_report(project, point, cells) for point in listed(project, "point")]
    return {
        "format": project["format"],
        "title": project["project"].get("title", ""),
        "revision": project["project"].get("revision", ""),
        "accept": project["project"]["accept"],
        "passes": passes(project, points, cells),
        "complete": bool(cells) and all(cell.known for cell in cells),
        "counts": {verdict: sum(point["verdict"] == verdict for point in points) for verdict in VERDICTS},
        "governing": project_governing(project, cells),
        "points": points,
        "never-govern": never_govern(project, cells),
        "cells": [cell_report(cell) for cell in cells],
    }


def read(source: Path | str) -> Table:
    """The parsed file; refuses what this oracle cannot compute."""
    is_text = isinstance(source, str) and "\n" in source
    project = tomllib.loads(str(source)) if is_text else tomllib.loads(Path(source).read_bytes().decode())
    if project["format"] != 1:
        raise ValueError("not format 1")
    moving = [load["name"] for load in listed(project, "load") if load.get("sense", "fixed") != "fixed"]
    if moving or project.get("section") or any("section" in point for point in listed(project, "point")):
        raise ValueError("sections and reversible or optional loads are not computed here")
    return project


def listed(project: Table, kind: str) -> list[Table]:
    """All entries of a kind, in file order."""
    return list(project.get(kind, []))


def named(project: Table, kind: str, name: str) -> Table:
    """The entry of a kind that has this name."""
    return next(entry for entry in listed(project, kind) if entry["name"] == name)


def checked(project: Table) -> list[Table]:
    """The cases that are columns of margins, in file order."""
    return [case for case in listed(project, "case") if case.get("check", True)]


def accepted(project: Table) -> tuple[str, ...]:
    """The theories that must not fail."""
    accept: str = project["project"]["accept"]
    return THEORIES if accept == "both" else (accept,)


# Loads and stresses


def parts(project: Table, case: Table) -> list[tuple[float, Table]]:
    """The case itself and every case it adds at any depth, each with the product of the factors on the way."""
    found = [(1.0, case)]
    for name, factor in case.get("combine", {}).items():
        found += [(factor * inner, part) for inner, part in parts(project, named(project, "case", name))]
    return found


def magnitudes(project: Table, case: Table) -> dict[str, float]:
    """The loads that act in a case after combination; one that vanishes beside its parts does not act."""
    total: dict[str, float] = {}
    size: dict[str, float] = {}
    for factor, part in parts(project, case):
        for load, value in part.get("loads", {}).items():
            total[load] = total.get(load, 0.0) + factor * value
            size[load] = size.get(load, 0.0) + abs(factor * value)
    return {load: value for load, value in total.items() if abs(value) > VANISHING * size[load]}


def added(total: list[float], factor: float, row: list[float]) -> list[float]:
    """total + factor x row, component by component."""
    return [value + factor * more for value, more in zip(total, row, strict=True)]


def stress_row(project: Table, point: Table, case: Table) -> list[float] | None:
    """Six components in the order of the file, or None where something needed is missing."""
    return linear_row(project, point, case) if point.get("per-load") else direct_row(project, point, case)


def linear_row(project: Table, point: Table, case: Table) -> list[float] | None:
    """Stress of a point with unit-load rows: loads that act, and the direct rows of all parts as additions."""
    total = [0.0] * 6
    for factor, part in parts(project, case):
        if part["name"] in point.get("stress", {}):
            total = added(total, factor, point["stress"][part["name"]])
    not_felt = point.get("not-felt", [])
    for load, value in magnitudes(project, case).items():
        if load in point["per-load"]:
            total = added(total, value, point["per-load"][load])
        elif not_felt != "rest" and load not in not_felt:
            return None
    return total


def direct_row(project: Table, point: Table, case: Table) -> list[float] | None:
    """Stress of a point with direct rows only: its own row, else the sum over the ingredients of a pure combination."""
    if case["name"] in point.get("stress", {}):
        return list(point["stress"][case["name"]])
    if not case.get("combine") or any(case.get("loads", {}).values()):
        return None
    total = [0.0] * 6
    for name, factor in case["combine"].items():
        row = direct_row(project, point, named(project, "case", name))
        if row is None:
            return None
        total = added(total, factor, row)
    return total


def stress_of(project: Table, point: Table, case: Table) -> dict[str, float] | None:
    """Components by their names, or None where something needed is missing."""
    row = stress_row(project, point, case)
    return None if row is None else dict(zip(project["project"]["components"].split(), row, strict=True))


# The two theories


def equivalents(stress: dict[str, float]) -> dict[str, float]:
    """Both equivalents of one state; scaled by a power of two, so that no square overflows or vanishes."""
    exponent = math.frexp(max(abs(value) for value in stress.values()))[1]
    scaled = {name: math.ldexp(value, -exponent) for name, value in stress.items()}
    return {
        "tresca": math.ldexp(tresca(scaled), exponent),
        "von-mises": math.ldexp(von_mises(scaled), exponent),
    }


def tensor(stress: dict[str, float]) -> list[list[float]]:
    """The symmetric 3 x 3 of a state."""
    xx, yy, zz, xy, yz, zx = (stress[name] for name in ORDER)
    return [[xx, xy, zx], [xy, yy, yz], [zx, yz, zz]]


def tresca(stress: dict[str, float]) -> float:
    """Largest less least principal stress."""
    principals = np.linalg.eigvalsh(np.array(tensor(stress)))
    spread = float(principals[-1] - principals[0])
    if spread > 0.01 * float(np.abs(principals).max()):
        return spread
    with mpmath.workdps(60):  # nearly equal principals: LAPACK's error is of the size of the stress, not of the spread
        exact = mpmath.eigsy(mpmath.matrix(tensor(stress)), eigvals_only=True)
        return float(max(exact) - min(exact))


def von_mises(stress: dict[str, float]) -> float:
    """The distortion-energy equivalent, from differences."""
    xx, yy, zz, xy, yz, zx = (stress[name] for name in ORDER)
    normal = ((xx - yy) ** 2 + (yy - zz) ** 2 + (zz - xx) ** 2) / 2
    return math.sqrt(normal + 3 * (xy**2 + yz**2 + zx**2))


# Strengths and factors


def temperature_of(point: Table, case: Table) -> float | None:
    """The temperature of a cell: the point's, else the case's."""
    own = point.get("temperature")
    if isinstance(own, dict):
        own = own.get(case["name"])
    return case.get("temperature") if own is None else own


def between(rows: list[list[float]], temperature: float) -> float | None:
    """Linear between the rows of a table, its ends included; None outside."""
    for row_temperature, strength in rows:
        if row_temperature == temperature:
            return strength
    for (low, first), (high, second) in pairwise(rows):
        if low <= temperature <= high:
            return first + (second - first) * (temperature - low) / (high - low)
    return None


def covered(material: Table, temperature: float) -> bool:
    """Whether `range` says that the plain values hold."""
    return "range" in material and material["range"][0] <= temperature <= material["range"][1]


def yield_at(material: Table, temperature: float | None) -> float | None:
    """The yield strength at temperature."""
    if temperature is None or "yield-at" not in material:
        return float(material["yield"])
    return between(material["yield-at"], temperature)


def ultimate_at(material: Table, temperature: float | None) -> float | None:
    """The ultimate strength at temperature."""
    if temperature is not None and "ultimate-at" in material:
        return between(material["ultimate-at"], temperature)
    if yield_at(material, temperature) is None:
        return None
    return material.get("ultimate")


def strengths(material: Table, limit: str, temperature: float | None) -> dict[str, float] | None:
    """Strength by theory; a measured shear yield may lower Tresca's yield strength."""
    plain = yield_at(material, temperature) if limit == "yield" else ultimate_at(material, temperature)
    if plain is None:
        return None
    in_shear = math.inf
    if limit == "yield" and "shear-yield" in material:
        in_shear = 2 * material["shear-yield"] * plain / material["yield"]
    return {"tresca": min(plain, in_shear), "von-mises": plain}


def limits_of(project: Table, case: Table) -> list[str]:
    """The limits that a case's category asks for."""
    category = named(project, "category", case["category"])
    return ["yield", "ultimate"] if "ultimate" in category else ["yield"]


def required(project: Table, case: Table, limit: str) -> dict[str, float]:
    """Required factor by theory."""
    factor = named(project, "category", case["category"])[limit]
    return {theory: float(factor[theory] if isinstance(factor, dict) else factor) for theory in THEORIES}


def point_factor(point: Table, limit: str) -> float:
    """The extra factor on stress at a point."""
    factor = point.get("factor", 1.0)
    return float(factor.get(limit, 1.0) if isinstance(factor, dict) else factor)


# Cells


def cells_of(project: Table, point: Table) -> list[Cell]:
    """The cells of a point: checked cases in file order, yield before ultimate."""
    return [cell(project, point, case, limit) for case in checked(project) for limit in limits_of(project, case)]


def cell(project: Table, point: Table, case: Table, limit: str) -> Cell:
    """One cell, with its equivalents and margins by both theories."""
    material = named(project, "material", point["material"])
    strength = strengths(material, limit, temperature_of(point, case))
    stress = stress_of(project, point, case)
    unknown = dict.fromkeys(THEORIES)
    if strength is None or stress is None:
        return Cell(point["name"], case["name"], limit, unknown, unknown)
    equivalent = equivalents(stress)
    factor = required(project, case, limit)
    margin: dict[str, float | None] = {}
    for theory in THEORIES:
        loaded = factor[theory] * point_factor(point, limit) * equivalent[theory]
        margin[theory] = strength[theory] / loaded - 1 if loaded > 0 else math.inf
    return Cell(point["name"], case["name"], limit, dict(equivalent), margin)


def shown(margin: float | None) -> Table:
    """A margin as it is printed."""
    if margin is None:
        return {"margin": None, "no-data": True}
    if math.isinf(margin):
        return {"margin": None, "no-stress": True}
    return {"margin": margin}


def cell_report(cell: Cell) -> Table:
    """A cell as it is printed."""
    theories = {theory: {"equivalent": cell.equivalent[theory], **shown(cell.margin[theory])} for theory in THEORIES}
    return {"point": cell.point, "case": cell.case, "limit": cell.limit, **theories}


# Governing and verdicts


def worst(cell: Cell, theories: tuple[str, ...]) -> float:
    """The least margin of a known cell over some theories."""
    return min(margin for theory in theories if (margin := cell.margin[theory]) is not None)


def governs(cells: list[Cell], theories: tuple[str, ...]) -> Cell | None:
    """The first known cell whose margin equals the least of all; None where nothing is known."""
    known = [cell for cell in cells if cell.known]
    least = min((worst(cell, theories) for cell in known), default=math.inf)
    return next((cell for cell in known if worst(cell, theories) <= least + TIE), None)


def least_by(cells: list[Cell], theory: str) -> Table:
    """The governing case and limit by one theory."""
    first = governs(cells, (theory,))
    if first is None:
        return {"case": None, "limit": None, **shown(None)}
    return {"case": first.case, "limit": first.limit, **shown(first.margin[theory])}


def governing(cells: list[Cell], theories: tuple[str, ...]) -> Table:
    """The governing case, limit and theory among the accepted theories."""
    first = governs(cells, theories)
    if first is None:
        return {"case": None, "limit": None, "theory": None, **shown(None)}
    least = min(worst(cell, theories) for cell in cells if cell.known)
    equal = [theory for theory in theories if worst(first, (theory,)) <= least + TIE]
    theory = "both" if len(equal) == 2 else equal[0]
    return {"case": first.case, "limit": first.limit, "theory": theory, **shown(worst(first, theories))}


def project_governing(project: Table, cells: list[Cell]) -> Table:
    """The first point whose least equals the project's, with what governs it."""
    first = governs(cells, accepted(project))
    name = None if first is None else first.point
    return {"point": name, **governing([cell for cell in cells if cell.point == name], accepted(project))}


def verdict(project: Table, cells: list[Cell]) -> str:
    """The verdict of one point from its cells."""
    known = [cell for cell in cells if cell.known]
    if not known:
        return "no-data"
    least = {theory: min(worst(cell, (theory,)) for cell in known) for theory in THEORIES}
    failing = [theory for theory in THEORIES if least[theory] < -TIE]
    if failing:
        return "short" if len(failing) == 2 else "split"
    if len(known) < len(cells):
        return "no-data"
    below = min(least[theory] for theory in accepted(project)) < project["project"]["thin"] - TIE
    return "thin" if below else "clear"


def point_report(project: Table, point: Table, all_cells: list[Cell]) -> Table:
    """A point as it is printed."""
    cells = [cell for cell in all_cells if cell.point == point["name"]]
    missing = [cell.case for cell in cells if not cell.known]
    return {
        "name": point["name"],
        "verdict": verdict(project, cells),
        "governing": governing(cells, accepted(project)),
        **{theory: least_by(cells, theory) for theory in THEORIES},
        "missing": list(dict.fromkeys(missing)),
        "cautions": cautions(project, point),
    }


def never_govern(project: Table, cells: list[Cell]) -> list[str]:
    """The checked cases whose margin is nowhere equal to a point's least, by either theory."""
    ever: set[str] = set()
    for point in listed(project, "point"):
        known = [cell for cell in cells if cell.point == point["name"] and cell.known]
        for theory in THEORIES:
            least = min((worst(cell, (theory,)) for cell in known), default=math.inf)
            ever |= {cell.case for cell in known if worst(cell, (theory,)) <= least + TIE}
    return [case["name"] for case in checked(project) if case["name"] not in ever]


def passes(project: Table, points: list[Table], cells: list[Cell]) -> bool:
    """Whether nothing known fails by an accepted theory and every blocking caution is acknowledged."""
    margins = [worst(cell, accepted(project)) for cell in cells if cell.known]
    open_cautions = [
        caution
        for point in points
        for caution in point["cautions"]
        if caution["blocking"] and not caution["acknowledged"]
    ]
    return bool(margins) and min(margins) >= -TIE and not open_cautions


# Cautions


def cautions(project: Table, point: Table) -> list[Table]:
    """The cautions of a point, one of a name, blocking ones first; their texts are the program's own and left out."""
    found = of_the_point(project, point)
    for case in checked(project):
        found |= of_strength(project, point, case) | of_stress(project, point, case) | of_factors(project, point, case)
    taken = {entry["caution"] for entry in listed(project, "acknowledge") if entry["point"] == point["name"]}
    return [
        {"name": name, "text": "", "blocking": name in BLOCKING, "acknowledged": name in taken}
        for name in BLOCKING + NOTES
        if name in found
    ]


def of_the_point(project: Table, point: Table) -> set[str]:
    """Cautions that hold whatever the cases."""
    material = named(project, "material", point["material"])
    holds = {
        "elongation": material.get("elongation", 1.0) < 0.05,
        "no-source-strength": not material.get("source"),
        "no-source-stress": not point.get("source"),
    }
    return {name for name, true in holds.items() if true}


def of_factors(project: Table, point: Table, case: Table) -> set[str]:
    """A factor below 1 among those that a checked case uses."""
    factors = [point_factor(point, limit) for limit in limits_of(project, case)]
    for limit in limits_of(project, case):
        factors += required(project, case, limit).values()
    return {"factor-below-one"} if min(factors) < 1 else set()


def of_strength(project: Table, point: Table, case: Table) -> set[str]:
    """Cautions about the temperature of a cell, whether or not its stress is known."""
    material = named(project, "material", point["material"])
    temperature = temperature_of(point, case)
    if temperature is None:
        return {"no-temperature"} if "yield-at" in material or "ultimate-at" in material else set()
    if covered(material, temperature):
        return set()
    if "yield-at" not in material:
        return {"temperature"}
    plain = "ultimate-at" not in material and ultimate_at(material, temperature) is not None
    return {"ultimate-temperature"} if plain and "ultimate" in limits_of(project, case) else set()


def of_stress(project: Table, point: Table, case: Table) -> set[str]:
    """Cautions about the size of a known stress beside the yield strength."""
    material = named(project, "material", point["material"])
    temperature = temperature_of(point, case)
    strength = strengths(material, "yield", temperature)
    stress = stress_of(project, point, case)
    if strength is None or stress is None:
        return set()
    found = set()
    trace = stress["xx"] + stress["yy"] + stress["zz"]
    bound = 4 * strength["von-mises"] / max(required(project, case, "yield").values())
    if trace * point_factor(point, "yield") > bound * (1 + TIE):
        found.add("hydrostatic-tension")
    equivalent = equivalents(stress)
    above = any(equivalent[theory] > strength[theory] * (1 + TIE) for theory in THEORIES)
    tested = "ultimate" in limits_of(project, case) and strengths(material, "ultimate", temperature) is not None
    if above and tested:
        found.add("ultimate-elastic")
    return found
