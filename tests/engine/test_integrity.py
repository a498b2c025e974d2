"""What must hold between the parts of a project."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from engine.frozen import FrozenMap
from engine.integrity import CAUTION_NAMES, MOST_HINTS, Names, faults, of_combinations, of_part
from engine.loads import Load
from engine.project import Acknowledgement, Project
from engine.sections import Section

from .builders import axial, case, category, loads, material, point, project

XY = ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0))


def whole() -> Project:
    """A project in which every part refers to others."""
    return project(
        [
            point("P", {"A": axial(1.0)}, per_load={"a": axial(1.0)}, not_felt=("b",), temperature={"B": 20.0}),
            replace(
                point("Q", per_load={"a": axial(1.0)}, not_felt="rest"),
                section="S",
                at=(1.0, 0.0),
                axes=XY,
                kt=FrozenMap({"N": 1.5}),
                kt_limits=("yield",),
            ),
        ],
        [case("A", {"a": 1.0}), case("B", combine={"A": 1.0})],
        [Load("a", unit="N"), Load("b")],
        sections=[Section("S", "round", FrozenMap({"d": 60.0}), ("b",), FrozenMap({"N": FrozenMap({"a": 1.0})}))],
        acknowledgements=[Acknowledgement("P", "elongation", "A. B.", "tested")],
    )


def changed(kind: str, place: int, **values: Any) -> Project:
    """The whole project with some attributes of one part changed, unchecked."""
    given = whole()
    parts = list(getattr(given, kind))
    parts[place] = replace(parts[place], **values)
    return replace(given, **{kind: tuple(parts)})


def test_a_project_that_holds_together_has_no_faults() -> None:
    assert faults(whole()) == []


BROKEN = [
    # names that nothing defines, each at its key
    (
        changed("cases", 0, category="normak"),
        ("case", 0, "category"),
        'no category is named "normak" (did you mean "normal"?)',
    ),
    (changed("cases", 0, loads=FrozenMap({"x": 1.0})), ("case", 0, "loads", "x"), 'no load is named "x"'),
    (changed("cases", 1, combine=FrozenMap({"Z": 1.0})), ("case", 1, "combine", "Z"), 'no case is named "Z"'),
    (changed("sections", 0, not_felt=("b", "x")), ("section", 0, "not-felt", 1), 'no load is named "x"'),
    (
        changed("sections", 0, resultants=FrozenMap({"T": FrozenMap({"x": 1.0})})),
        ("section", 0, "resultants", "T", "x"),
        'no load is named "x"',
    ),
    (changed("points", 0, material="brass"), ("point", 0, "material"), 'no material is named "brass"'),
    (changed("points", 0, not_felt=("x",)), ("point", 0, "not-felt", 0), 'no load is named "x"'),
    (
        changed("points", 0, per_load=point("x", per_load={"x": axial(1.0)}).per_load),
        ("point", 0, "per-load", "x"),
        'no load is named "x"',
    ),
    (
        changed("points", 0, stress=point("x", {"Z": axial(1.0)}).stress),
        ("point", 0, "stress", "Z"),
        'no case is named "Z"',
    ),
    (changed("points", 0, temperature=FrozenMap({"Z": 1.0})), ("point", 0, "temperature", "Z"), 'no case is named "Z"'),
    (changed("points", 1, section="R"), ("point", 1, "section"), 'no section is named "R"'),
    (changed("acknowledgements", 0, point="R"), ("acknowledge", 0, "point"), 'no point is named "R"'),
    # a load is felt or not felt
    (
        changed("points", 0, not_felt=("a", "b")),
        ("point", 0, "not-felt", 0),
        '"a" also has a per-load row: felt or not felt, not both',
    ),
    # units of the system
    (changed("loads", 0, unit="lbf"), ("load", 0, "unit"), 'found "lbf": '),
    # sections and axes
    (changed("points", 1, axes=None), ("point", 1), "has a section and rows of its own, expected axes"),
    (changed("points", 1, at=None), ("point", 1), "has a section, expected at = [y, z]"),
    (changed("points", 0, at=(0.0, 0.0)), ("point", 0, "at"), "at has a meaning only on a section"),
    (changed("points", 0, kt=FrozenMap({"N": 1.0})), ("point", 0, "kt"), "kt has a meaning only on a section"),
    (changed("points", 0, axes=XY), ("point", 0, "axes"), "axes has a meaning only on a section"),
    (changed("points", 1, kt=FrozenMap()), ("point", 1, "kt-limits"), "kt-limits has a meaning only beside kt"),
    # cautions
    (
        changed("acknowledgements", 0, caution="elongatio"),
        ("acknowledge", 0, "caution"),
        f'found "elongatio", expected one of {", ".join(CAUTION_NAMES)} (did you mean "elongation"?)',
    ),
    (
        changed("acknowledgements", 0, caution="no-source-stress"),
        ("acknowledge", 0, "caution"),
        'found "no-source-stress", expected one of',
    ),
]


@pytest.mark.parametrize(("given", "path", "message"), BROKEN)
def test_what_does_not_hold_is_said_where_it_stands(given: Project, path: tuple[Any, ...], message: str) -> None:
    found = faults(given)
    assert [fault.path for fault in found] == [path]
    assert found[0].message.startswith(message)


def test_a_point_with_a_section_and_no_rows_needs_no_axes() -> None:
    on = replace(point("P"), section="S", at=(0.0, 0.0))
    assert faults(project([on], sections=[Section("S", "round")])) == []


@pytest.mark.parametrize("kind", ["categories", "materials", "loads", "cases", "sections", "points"])
def test_each_name_stands_once_in_its_kind(kind: str) -> None:
    given = whole()
    parts = getattr(given, kind)
    found = faults(replace(given, **{kind: (*parts, parts[0])}))
    assert [fault.message for fault in found if "earlier" in fault.message] == [
        f'"{parts[0].name}" is the name of an earlier {found[0].path[0]} too, expected each name once'
    ]
    assert found[0].path[1:] == (len(parts), "name")


def test_parts_of_different_kinds_may_share_a_name() -> None:
    given = project(
        [point("x", material="x")],
        [case("x", {"x": 1.0}, category="x")],
        loads("x"),
        categories=[category("x")],
        materials=[material("x")],
    )
    assert faults(given) == []


def test_a_caution_is_acknowledged_once() -> None:
    given = whole()
    found = faults(replace(given, acknowledgements=given.acknowledgements * 2))
    assert [fault.path for fault in found] == [("acknowledge", 1)]
    assert "acknowledged twice" in found[0].message


@pytest.mark.parametrize("name", CAUTION_NAMES)
def test_every_caution_that_blocks_can_be_acknowledged(name: str) -> None:
    assert faults(project([point("P")], acknowledgements=[Acknowledgement("P", name, "A. B.", "tested")])) == []


def test_every_fault_is_found_at_once() -> None:
    given = changed("points", 0, material="brass", not_felt=("x",))
    given = replace(given, cases=(replace(given.cases[0], category="?"), *given.cases[1:]))
    assert [fault.path for fault in faults(given)] == [
        ("case", 0, "category"),
        ("point", 0, "material"),
        ("point", 0, "not-felt", 0),
    ]


def test_one_part_alone_is_looked_at_from_itself_down() -> None:
    given = whole()
    broken = replace(given.points[0], material="brass")
    found = of_part("point", broken, given, Names.in_project(given))
    assert [fault.path for fault in found] == [("material",)]
    assert of_part("material", given.materials[0], given, Names.in_project(given)) == []


def test_similar_names_are_looked_up_for_the_first_faults_only() -> None:
    names = Names.in_project(project(loads=loads("haul")))
    found = list(names.missing("load", [f"haul{i}" for i in range(MOST_HINTS + 5)]))
    assert all("did you mean" in fault.message for fault in found[:MOST_HINTS])
    assert not any("did you mean" in fault.message for fault in found[MOST_HINTS:])


# Combinations


RINGS = [
    ([case("A", combine={"A": 1.0})], ("case", 0, "combine", "A"), "A -> A"),
    ([case("A", combine={"B": 1.0}), case("B", combine={"A": 1.0})], ("case", 0, "combine", "B"), "A -> B -> A"),
    (
        [case("S", combine={"A": 1.0}), case("A", combine={"B": 0.0}), case("B", combine={"A": 1.0})],
        ("case", 1, "combine", "B"),
        "A -> B -> A",
    ),
]


@pytest.mark.parametrize(("cases", "path", "ring"), RINGS)
def test_a_ring_of_combinations_is_a_fault(cases: list[Any], path: tuple[Any, ...], ring: str) -> None:
    found = of_combinations(replace(project(), cases=tuple(cases)))
    assert [fault.path for fault in found] == [path]
    assert found[0].message == f"cases combine one another in a ring: {ring}"


WARM = [
    ([case("A", temperature=20.0), case("B", combine={"A": 1.0})], [1]),
    ([case("A", temperature=20.0), case("B", combine={"A": 1.0}, temperature=30.0)], []),
    ([case("A"), case("B", combine={"A": 1.0})], []),
    ([case("A", temperature=20.0), case("B", combine={"A": 0.0})], [1]),  # whatever the factor
    ([case("A", temperature=20.0, check=False), case("B", combine={"A": 1.0}, check=False)], [1]),
    # at any depth, and before what it combines in the file
    ([case("C", combine={"B": 1.0}), case("B", combine={"A": 1.0}), case("A", temperature=20.0)], [0, 1]),
    # of several ingredients one is enough
    ([case("A", temperature=20.0), case("B"), case("C", combine={"B": 1.0, "A": 1.0})], [2]),
]


@pytest.mark.parametrize(("cases", "places"), WARM)
def test_a_combination_without_temperature_of_which_an_ingredient_has_one_is_a_fault(
    cases: list[Any], places: list[int]
) -> None:
    found = of_combinations(replace(project(), cases=tuple(cases)))
    assert sorted(fault.path[1] for fault in found) == places
    assert all("expected a temperature of its own" in fault.message for fault in found)
