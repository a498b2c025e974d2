"""Texts of small projects: from nothing but its settings to one with a part of every kind."""

from __future__ import annotations

EMPTY = """format = 1

[project]
title = "Bare"
units = "mm-N-MPa"
components = "xx yy zz xy yz zx"
accept = "both"
thin = 0.1
"""
CATEGORY = """
[[category]]
name = "normal"
yield = 1.5
"""
MATERIAL = """
[[material]]
name = "S355"
yield = 345.0
"""
LOAD = """
[[load]]
name = "haul"
unit = "N"
"""
CASE = """
[[case]]
name = "LC01"
category = "normal"
"""
POINT = """
[[point]]
name = "P01"
material = "S355"
"""
ONLY_CASES = EMPTY + CATEGORY + CASE
ONLY_POINTS = EMPTY + MATERIAL + POINT
NO_STRESS = EMPTY + CATEGORY + MATERIAL + LOAD + CASE + POINT
"""A cell, but nothing that makes a stress."""
NOT_CHECKED = NO_STRESS.replace('category = "normal"\n', 'category = "normal"\ncheck = false\n')
"""A case that is only an ingredient."""
SECTION = """
[[section]]
name = "A-A"
shape = "round"
d = 60.0
[section.resultants]
Mz = { haul = 210.0 }
"""
REVERSIBLE = """
[[load]]
name = "wind"
unit = "N"
sense = "reversible"
"""
UNCOMPUTED = (
    EMPTY + CATEGORY + MATERIAL + LOAD + REVERSIBLE
    + CASE.rstrip() + "\nloads = { haul = 1000.0, wind = 1.0 }\n" + SECTION
    + POINT.rstrip() + '\nsection = "A-A"\nat = [30.0, 0.0]\n'
)  # fmt: skip
"""Stress by a section and a load of changing sign, which are kept and not computed yet."""
BRITTLE = """format = 1

[project]
title = "Two cautions"
units = "mm-N-MPa"
components = "xx yy zz xy yz zx"
accept = "both"
thin = 0.1

[[category]]
name = "normal"
yield = 1.5

[[material]]
name = "EN-GJL"
yield = 100.0
elongation = 0.01

[[case]]
name = "LC01"
category = "normal"

[[point]]
name = "P01"
material = "EN-GJL"
source = "invented"
[point.stress]
LC01 = [10.0, 0, 0, 0, 0, 0]
"""
"""One blocking caution, one note."""


def huge_names(name: str) -> str:
    """A project all of whose parts have the same long name."""
    spoken = f'"{name}"'
    text = NO_STRESS.rstrip() + f"\nnot-felt = [{spoken}]\n[point.stress]\n{spoken} = [1.0, 0, 0, 0, 0, 0]\n"
    for old in ("normal", "S355", "haul", "LC01", "P01"):
        text = text.replace(f'"{old}"', spoken)
    return text


def square(points: int, cases: int) -> str:
    """A linear project of that size with one load, its margins all different."""
    parts = [EMPTY, CATEGORY, MATERIAL, LOAD]
    parts += [
        f'[[case]]\nname = "LC{i:03d}"\ncategory = "normal"\nloads = {{ haul = {1000 + i}.0 }}\n' for i in range(cases)
    ]
    parts += [
        f'[[point]]\nname = "P{i:03d}"\nmaterial = "S355"\n[point.per-load]\nhaul = [0.{1000 + i}, 0, 0, 0.01, 0, 0]\n'
        for i in range(points)
    ]
    return "\n".join(parts)
