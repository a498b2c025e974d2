"""Every change to a project, as data: applied, taken back, said in a line, refused."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from engine import integrity
from engine.edits import (
    Acknowledge,
    Batch,
    Edit,
    Insert,
    Move,
    Refusal,
    Remove,
    Rename,
    Set,
    Withdraw,
    apply,
    describe,
    inverse,
    value_text,
)
from engine.frozen import FrozenMap
from engine.loads import Load
from engine.project import KINDS, PLURAL, Acknowledgement, Point, PointFactor, Project
from engine.sections import Section
from engine.store import parse, render

from ..random_projects import random_project
from .builders import axial, case, category, material, point, project, random_step, shear
from .hand_files import FILES

ROW = [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]


def base() -> Project:
    """A project with some of everything."""
    section = Section(
        "S", "round", FrozenMap({"d": 60.0}), ("wind",), FrozenMap({"N": FrozenMap({"haul": 1.0}), "Vy": FrozenMap()})
    )
    return project(
        [
            point("P1", {"LC1": axial(5.0)}, per_load={"haul": axial(1.0)}, not_felt=("wind",)),
            point("P2", {"LC1": shear(5.0), "LC2": axial(2.0)}, factor=(1.2, 1.0), temperature={"LC1": 50.0}),
            replace(point("P3"), section="S", at=(30.0, 0.0), kt=FrozenMap({"Mz": 1.5})),
            point("P4", factor=1.15, temperature=20.0),
            point("P5", temperature={}),
        ],
        [
            case("LC1", {"haul": 12000.0, "wind": 800.0}),
            case("LC2", {"haul": 1.0}, temperature=20.0),
            case("LC3", combine={"LC1": 1.1}),
        ],
        [Load("haul", "Rope pull", "N"), Load("wind"), Load("spare")],
        categories=[category("normal", 1.5, (2.0, 1.9)), category("rare", 1.25)],
        materials=[material(ultimate=450.0, yield_at=((20.0, 300.0), (100.0, 280.0))), material("spare")],
        sections=[section],
        acknowledgements=[Acknowledgement("P1", "elongation", "A. B.", "tested")],
    )


APPLIED: list[tuple[Edit, str, str]] = [
    # the edit, what it is called, and which kinds of parts it changes
    (Set("case", "LC1", ("loads", "haul"), 13500.0), "LC1 haul 12000 -> 13500", "case"),
    (Set("case", "LC2", ("loads", "wind"), 5), "LC2 wind nothing -> 5", "case"),
    (Set("case", "LC1", ("loads", "wind"), None), "LC1 wind 800 -> nothing", "case"),
    (Set("case", "LC3", ("combine", "LC1"), 1.35), "LC3 LC1 1.1 -> 1.35", "case"),
    (Set("case", "LC1", ("loads",), {"haul": 1.0}), "LC1 loads {haul 12000, wind 800} -> {haul 1}", "case"),
    (Set("case", "LC2", ("temperature",), None), "LC2 temperature 20 -> nothing", "case"),
    (Set("case", "LC1", ("category",), "rare"), 'LC1 category "normal" -> "rare"', "case"),
    (Set("case", "LC1", ("check",), False), "LC1 check nothing -> no", "case"),
    (Set("case", "LC1", ("label",), "Full haul"), 'LC1 label nothing -> "Full haul"', "case"),
    (
        Set("point", "P1", ("per-load", "haul"), ROW),
        "P1 per-load haul [1, 0, 0, 0, 0, 0] -> [1, 2, 3, 4, 5, 6]",
        "point",
    ),
    (Set("point", "P1", ("per-load", "spare"), ROW), "P1 per-load spare nothing -> [1, 2, 3, 4, 5, 6]", "point"),
    (Set("point", "P2", ("stress", "LC1"), None), "P2 stress LC1 [0, 0, 0, 5, 0, 0] -> nothing", "point"),
    (Set("point", "P2", ("stress",), {"LC3": ROW}), "P2 stress {", "point"),
    (Set("point", "P1", ("not-felt",), "rest"), 'P1 not-felt ["wind"] -> "rest"', "point"),
    (Set("point", "P1", ("factor",), 1.25), "P1 factor nothing -> 1.25", "point"),
    (Set("point", "P2", ("factor", "ultimate"), 1.5), "P2 factor ultimate 1 -> 1.5", "point"),
    (Set("point", "P1", ("factor", "yield"), 1.5), "P1 factor yield nothing -> 1.5", "point"),
    (Set("point", "P2", ("temperature", "LC2"), 60.0), "P2 temperature LC2 nothing -> 60", "point"),
    (Set("point", "P1", ("temperature", "LC2"), 60.0), "P1 temperature LC2 nothing -> 60", "point"),
    (Set("point", "P5", ("temperature", "LC2"), 60.0), "P5 temperature LC2 nothing -> 60", "point"),
    (Set("point", "P2", ("temperature",), 30), "P2 temperature {LC1 50} -> 30", "point"),
    (Set("point", "P3", ("kt", "T"), 1.7), "P3 kt T nothing -> 1.7", "point"),
    (Set("point", "P3", ("at",), [0, 30]), "P3 at [30, 0] -> [0, 30]", "point"),
    (Set("material", "steel", ("yield",), 235.5), "steel yield 300 -> 235.5", "material"),
    (Set("material", "steel", ("range",), [-20, 80]), "steel range nothing -> [-20, 80]", "material"),
    (Set("material", "steel", ("yield-at",), None), "steel yield-at [[20, 300], [100, 280]] -> nothing", "material"),
    (Set("category", "normal", ("yield",), 1.6), "normal yield {tresca 1.5, von-mises 1.5} -> 1.6", "category"),
    (Set("category", "normal", ("yield", "tresca"), 1.6), "normal yield tresca 1.5 -> 1.6", "category"),
    (
        Set("category", "normal", ("ultimate",), None),
        "normal ultimate {tresca 2, von-mises 1.9} -> nothing",
        "category",
    ),
    (Set("section", "S", ("d",), 72.5), "S d 60 -> 72.5", "section"),
    (Set("section", "S", ("resultants", "N", "haul"), 2.0), "S resultants N haul 1 -> 2", "section"),
    (Set("section", "S", ("resultants", "T", "haul"), 140), "S resultants T haul nothing -> 140", "section"),
    (Set("section", "S", ("resultants", "Vy", "haul"), 1), "S resultants Vy haul nothing -> 1", "section"),
    (Set("load", "haul", ("unit",), None), 'haul unit "N" -> nothing', "load"),
    (Set("load", "wind", ("sense",), "reversible"), 'wind sense nothing -> "reversible"', "load"),
    (Set("project", "", ("thin",), 0.2), "thin 0.1 -> 0.2", ""),
    (Set("project", "", ("components",), "zz xx yy xy yz zx"), 'components "xx yy zz', ""),
    (Insert("case", 1, {"name": "new", "category": "rare"}), "add case new", "case"),
    (Insert("point", 99, {"name": "new", "material": "spare"}), "add point new", "point"),
    (Insert("material", 0, {"name": "new", "yield": 5}), "add material new", "material"),
    (Remove("load", "spare"), "delete load spare", "load"),
    (Remove("point", "P2"), "delete point P2", "point"),
    (Remove("case", "LC3"), "delete case LC3", "case"),
    (Rename("load", "haul", "pull"), "rename load haul -> pull", "load case section point"),
    (Rename("case", "LC1", "LC 1"), "rename case LC1 -> LC 1", "case point"),
    (Rename("point", "P1", "A"), "rename point P1 -> A", "point"),
    (Rename("point", "P1", "P1"), "rename point P1 -> P1", ""),
    (Move("case", "LC1", 2), "move case LC1 to place 3", "case"),
    (Move("point", "P3", 0), "move point P3 to place 1", "point"),
    (Move("load", "wind", 99), "move load wind to place 100", "load"),
    (Acknowledge("P2", "temperature", "C. D.", "seen"), "acknowledge temperature at P2", ""),
    (Acknowledge("P2", "temperature", "C. D.", "seen", 0), "acknowledge temperature at P2", ""),
    (Withdraw("P1", "elongation"), "withdraw the acknowledgement of elongation at P1", ""),
    (
        Batch((Set("case", "LC1", ("loads", "haul"), 1.0), Set("case", "LC1", ("loads", "haul"), 2.0)), "twice"),
        "twice",
        "case",
    ),
    (
        Batch((Rename("load", "haul", "pull"), Set("case", "LC1", ("loads", "pull"), 2.0)), "both"),
        "both",
        "load case section point",
    ),
    (Batch((), "nothing at all"), "nothing at all", ""),
]
IDS = [f"{type(edit).__name__} {text[:40]}" for edit, text, _ in APPLIED]


@pytest.mark.parametrize("edit", [edit for edit, _, _ in APPLIED], ids=IDS)
def test_the_inverse_restores_the_project_before(edit: Edit) -> None:
    before = base()
    after = apply(before, edit)
    assert integrity.faults(after) == []
    back = inverse(before, edit)
    assert apply(after, back).same(before)
    assert apply(apply(after, back), edit).same(after)
    assert apply(before, inverse(after, back)).same(after)


@pytest.mark.parametrize("edit", [edit for edit, text, _ in APPLIED if "at all" not in text and "P1 -> P1" not in text])
def test_an_edit_changes_the_project(edit: Edit) -> None:
    assert not apply(base(), edit).same(base())


@pytest.mark.parametrize(("edit", "text"), [(edit, text) for edit, text, _ in APPLIED], ids=IDS)
def test_an_edit_is_said_in_one_line(edit: Edit, text: str) -> None:
    said = describe(base(), edit)
    assert said.startswith(text)
    assert text.endswith(("{", "zz")) or said == text
    assert said.isprintable()


@pytest.mark.parametrize("edit", [edit for edit, _, _ in APPLIED], ids=IDS)
def test_the_project_given_is_untouched(edit: Edit) -> None:
    before = base()
    text, arrays = render(before), [part.stress.array.tobytes() for part in before.points]
    apply(before, edit)
    inverse(before, edit)
    assert render(before) == text
    assert [part.stress.array.tobytes() for part in before.points] == arrays


@pytest.mark.parametrize(("edit", "kinds"), [(edit, kinds) for edit, _, kinds in APPLIED], ids=IDS)
def test_kinds_that_an_edit_does_not_touch_are_the_same_objects(edit: Edit, kinds: str) -> None:
    before = base()
    after = apply(before, edit)
    for kind in KINDS:
        if kind not in kinds.split():
            old, new = before.of(kind), after.of(kind)
            assert all(a is b for a, b in zip(old, new, strict=True))
    settings_touched = isinstance(edit, Set) and edit.kind == "project"
    assert settings_touched or after.settings is before.settings


@pytest.mark.parametrize("edit", [edit for edit, _, _ in APPLIED if isinstance(edit, Set) and edit.kind != "project"])
def test_a_set_value_changes_its_own_part_alone(edit: Set) -> None:
    before = base()
    after = apply(before, edit)
    for old, new in zip(getattr(before, PLURAL[edit.kind]), getattr(after, PLURAL[edit.kind]), strict=True):  # type: ignore[index]
        assert (new is old) is (old.name != edit.name)


def test_a_set_row_leaves_the_other_rows_as_they_are() -> None:
    after = apply(base(), Set("point", "P2", ("stress", "LC1"), ROW))
    assert after.points[1].stress.names == ("LC1", "LC2")
    assert after.points[1].stress.array.tolist() == [ROW, axial(2.0)]


def test_rows_of_an_edit_stand_in_the_order_of_the_engine_whatever_that_of_the_file() -> None:
    turned = apply(base(), Set("project", "", ("components",), "zx yz xy zz yy xx"))
    after = apply(turned, Set("point", "P2", ("stress", "LC1"), ROW))
    assert after.points[1].stress.array[0].tolist() == ROW
    back = inverse(turned, Set("point", "P2", ("stress", "LC1"), ROW))
    assert isinstance(back, Set)
    assert back.value == shear(5.0)


# Members of a value that is no table


@pytest.mark.parametrize(("path", "value"), [(("factor", "yield"), 1.5), (("temperature", "LC1"), 60.0)])
def test_a_member_is_never_set_at_the_cost_of_the_rest_of_a_value(path: tuple[str, str], value: float) -> None:
    before = base()  # P4 has one factor for both limits, and one temperature for all cases
    edit = Set("point", "P4", path, value)
    try:
        after = apply(before, edit)
    except Refusal:
        return
    assert after.points[3].factor in (PointFactor(1.5, 1.15), PointFactor(1.15, 1.15))
    assert apply(after, inverse(before, edit)).same(before)


# Places


@pytest.mark.parametrize(
    ("index", "order"),
    [
        (0, "new LC1 LC2 LC3"),
        (1, "LC1 new LC2 LC3"),
        (3, "LC1 LC2 LC3 new"),
        (99, "LC1 LC2 LC3 new"),
        (-5, "new LC1 LC2 LC3"),
    ],
)
def test_a_part_is_added_at_its_place(index: int, order: str) -> None:
    after = apply(base(), Insert("case", index, {"name": "new", "category": "rare"}))
    assert after.names("case") == tuple(order.split())


@pytest.mark.parametrize(
    ("index", "order"),
    [(0, "LC1 LC2 LC3"), (1, "LC2 LC1 LC3"), (2, "LC2 LC3 LC1"), (99, "LC2 LC3 LC1"), (-5, "LC1 LC2 LC3")],
)
def test_a_part_is_moved_to_its_place(index: int, order: str) -> None:
    assert apply(base(), Move("case", "LC1", index)).names("case") == tuple(order.split())


def test_a_removed_part_comes_back_at_its_place() -> None:
    before = base()
    back = inverse(before, Remove("load", "spare"))
    assert back == Insert("load", 2, {"name": "spare"})
    back = inverse(before, Withdraw("P1", "elongation"))
    assert back == Acknowledge("P1", "elongation", "A. B.", "tested", 0)


# Refusals


REFUSED: list[tuple[Edit, str]] = [
    # names
    (Set("case", "LC9", ("loads", "haul"), 1.0), 'no case is named "LC9"'),
    (Set("thing", "LC1", ("label",), "x"), 'there is no kind of part called "thing"'),
    (Set("acknowledge", "", ("by",), "x"), 'there is no kind of part called "acknowledge"'),
    (Set("case", "LC1", ("name",), "x"), "a name is changed by renaming"),
    (Set("case", "LC1", ("lable",), "x"), 'a case has no "lable"'),
    (Set("point", "P1", ("per_load", "haul"), ROW), 'a point has no "per_load"'),
    (Set("case", "LC1", ("loads", "hual"), 1.0), 'loads.hual: no load is named "hual" (did you mean "haul"?)'),
    (Set("case", "LC1", ("category",), "x"), 'category: no category is named "x"'),
    (Set("point", "P1", ("stress", "LC9"), ROW), 'stress.LC9: no case is named "LC9"'),
    (Set("point", "P1", ("material",), "x"), 'material: no material is named "x"'),
    (Remove("case", "LC9"), 'no case is named "LC9"'),
    (Rename("case", "LC9", "x"), 'no case is named "LC9"'),
    (Move("case", "LC9", 0), 'no case is named "LC9"'),
    (Rename("thing", "x", "y"), 'there is no kind of part called "thing"'),  # type: ignore[arg-type]
    (Insert("thing", 0, {}), 'there is no kind of part called "thing"'),  # type: ignore[arg-type]
    (Rename("project", "", "x"), 'there is no kind of part called "project"'),  # type: ignore[arg-type]
    (Move("project", "", 0), 'there is no kind of part called "project"'),  # type: ignore[arg-type]
    (Remove("project", ""), 'there is no kind of part called "project"'),  # type: ignore[arg-type]
    # values
    (Set("case", "LC1", ("loads", "haul"), math.nan), "found nan, expected a number, finite"),
    (Set("case", "LC1", ("loads", "haul"), math.inf), "found inf, expected a number, finite"),
    (Set("case", "LC1", ("loads", "haul"), "12"), 'found "12", expected a number'),
    (Set("case", "LC1", ("loads", "haul"), True), "found true, expected a number"),
    (Set("case", "LC1", ("loads", "haul"), 10**400), "that a computer's number can hold"),
    (Set("case", "LC1", ("check",), 1), "check: found 1, expected true or false"),
    (Set("point", "P1", ("per-load", "haul"), ROW[:5]), "found a list of 5, expected a row of 6 numbers"),
    (Set("point", "P1", ("factor",), 0), "factor: found 0, expected a number above 0"),
    (Set("point", "P1", ("not-felt",), "rets"), '(did you mean "rest"?)'),
    (Set("material", "steel", ("yield",), -1.0), "yield: found -1.0, expected a number above 0"),
    (
        Set("material", "steel", ("elongation",), 1.5),
        "elongation: found 1.5, expected a number at least 0 and at most 1",
    ),
    (
        Set("material", "steel", ("range",), [80, 20]),
        "range: found 80 before 20, expected two temperatures, the lower first",
    ),
    (Set("material", "steel", ("yield-at",), [[20, 300], [20, 290]]), "expected strictly ascending temperatures"),
    (Set("material", "steel", ("yield-at",), []), "found an empty list"),
    (Set("project", "", ("accept",), "vonmises"), '(did you mean "von-mises"?)'),
    (Set("project", "", ("components",), "xx yy"), 'found "xx yy", expected "xx yy zz xy yz zx" in any order'),
    # what must be there
    (Set("material", "steel", ("yield",), None), 'key "yield" is missing from this [material]'),
    (Set("case", "LC1", ("category",), None), 'key "category" is missing from this [case]'),
    (Set("category", "normal", ("yield", "tresca"), None), 'key "tresca" is missing'),
    (Set("section", "S", ("d",), None), 'key "d" is missing: a round section has d'),
    # what must hold
    (Set("case", "LC1", ("combine", "LC3"), 1.0), "cases combine one another in a ring: LC1 -> LC3 -> LC1"),
    (Set("case", "LC1", ("combine", "LC1"), 1.0), "cases combine one another in a ring: LC1 -> LC1"),
    (Set("case", "LC3", ("combine", "LC2"), 1.0), '"LC3" combines "LC2", which has a temperature'),
    (Set("case", "LC1", ("temperature",), 20.0), '"LC3" combines "LC1", which has a temperature'),
    (Insert("case", 0, {"name": "x", "category": "rare", "combine": {"LC2": 1}}), '"x" combines "LC2", which has'),
    (Set("point", "P1", ("not-felt",), ["haul"]), '"haul" also has a per-load row: felt or not felt, not both'),
    (Set("point", "P3", ("stress", "LC1"), ROW), "has a section and rows of its own, expected axes"),
    (Set("point", "P3", ("at",), None), "has a section, expected at = [y, z]"),
    (Set("load", "haul", ("unit",), "lbf"), 'unit: found "lbf"'),
    (Set("project", "", ("units",), "in-lbf-psi"), 'unit: found "N"'),
    # names already taken, parts in use
    (Insert("case", 0, {"name": "LC1", "category": "rare"}), 'there is a case named "LC1" already'),
    (Rename("case", "LC1", "LC2"), 'there is a case named "LC2" already'),
    (Rename("case", "LC1", ""), 'found "", expected a name that is not empty'),
    (Rename("case", "LC1", "a\nb"), "expected a name without control characters"),
    (Remove("case", "LC1"), "case LC1 is used by case LC3 (combine)"),
    (Remove("load", "haul"), "load haul is used by case LC1 (loads)"),
    (Remove("material", "steel"), "material steel is used by point P1 (material)"),
    (Remove("point", "P1"), "point P1 is used by acknowledgement of elongation at P1"),
    (Insert("point", 0, {"name": "x"}), 'key "material" is missing from this [point]'),
    (Insert("point", 0, {"name": "x", "material": "?"}), 'material: no material is named "?"'),
    (Insert("point", 0, {"name": "x", "material": "steel", "colour": 1}), 'unknown key "colour"'),
    # acknowledgements
    (Acknowledge("P1", "elongation", "C. D.", "again"), "elongation at P1 is acknowledged already"),
    (Acknowledge("P9", "elongation", "C. D.", "x"), 'point: no point is named "P9"'),
    (Acknowledge("P1", "elongatio", "C. D.", "x"), '(did you mean "elongation"?)'),
    (Acknowledge("P1", "temperature", "", "x"), "expected a name that is not empty"),
    (Acknowledge("P1", "temperature", "C. D.", ""), "expected a name that is not empty"),
    (Withdraw("P1", "temperature"), "temperature at P1 is not acknowledged"),
    # one bad step refuses the whole
    (Batch((Set("case", "LC1", ("loads", "haul"), 1.0), Remove("case", "LC9")), "x"), 'no case is named "LC9"'),
]


@pytest.mark.parametrize(("edit", "why"), REFUSED)
def test_a_refusal_says_why_in_plain_words(edit: Edit, why: str) -> None:
    before = base()
    text = render(before)
    with pytest.raises(Refusal) as error:
        apply(before, edit)
    assert why in str(error.value)
    assert str(error.value).isprintable()
    assert render(before) == text


NOWHERE: list[Edit] = [
    Set("case", "LC9", ("loads", "haul"), 1.0),
    Set("case", "LC1", ("lable",), "x"),
    Remove("case", "LC9"),
    Move("case", "LC9", 0),
    Withdraw("P1", "temperature"),
    Batch((Remove("case", "LC9"),), "x"),
    Set("case", "LC1", (), "x"),
    Remove("project", ""),  # type: ignore[arg-type]
    Move("project", "", 0),  # type: ignore[arg-type]
]


@pytest.mark.parametrize("edit", NOWHERE)
def test_what_does_not_apply_has_no_inverse(edit: Edit) -> None:
    with pytest.raises(Refusal):
        inverse(base(), edit)


# Words


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (None, "nothing"),
        (True, "yes"),
        (False, "no"),
        (12000.0, "12000"),
        (0.1 + 0.2, "0.30000000000000004"),
        ("a\x1b[31mb", '"a�[31mb"'),  # no control characters reach a terminal
        ("x" * 50, '"' + "x" * 40 + '"...'),
        ([1.0, [2.5, "a"]], '[1, [2.5, "a"]]'),
        ({"a": 1.0, "b": {"c": True}}, "{a 1, b {c yes}}"),
        ({}, "{}"),
    ],
)
def test_a_value_is_said_shortly(value: Any, text: str) -> None:
    assert value_text(value) == text


def test_names_are_said_without_formatting_characters() -> None:
    turned = "a\u202eb"  # would turn the rest of the line around
    given = apply(base(), Rename("case", "LC1", turned))
    for edit in (Set("case", turned, ("label",), "x"), Remove("case", turned), Rename("case", turned, turned + "c")):
        assert describe(given, edit).isprintable()
    with pytest.raises(Refusal) as error:
        apply(given, Remove("case", turned))
    assert str(error.value).isprintable()


# Histories


@settings(max_examples=40, deadline=None)
@given(seed=st.integers(0, 2**32), of_project=st.one_of(st.sampled_from(sorted(FILES)), st.integers(0, 10_000)))
def test_any_history_can_be_undone_to_its_start_and_done_again(seed: int, of_project: str | int) -> None:
    start = parse(FILES[of_project] if isinstance(of_project, str) else random_project(of_project))
    now, states, history = start, [], []
    for step in range(40):
        after, done = random_step(now, seed + step)
        for edit in done:
            assert describe(now, edit).isprintable()
            assert integrity.faults(after) == []
            states.append((now, inverse(now, edit)))
            history.append(edit)
        now = after
    end = now
    for before, back in reversed(states):
        now = apply(now, back)
        assert now.same(before)
    assert now.same(start)
    for edit in history:
        now = apply(now, edit)
    assert now.same(end)


def test_points_compare_by_all_their_fields() -> None:
    given: Point = base().points[1]
    assert given.same(replace(given))
    changes: dict[str, Any] = {
        "label": "x",
        "stress": given.stress.put("LC1", ROW),
        "temperature": None,
        "at": (1.0, 2.0),
    }
    for name, value in changes.items():
        assert not given.same(replace(given, **{name: value}))


def test_projects_compare_by_all_their_parts_in_order() -> None:
    given = base()
    assert given.same(replace(given, points=tuple(replace(one) for one in given.points)))
    for kind in KINDS:
        parts = given.of(kind)
        assert not given.same(replace(given, **{PLURAL[kind]: parts[1:]}))  # type: ignore[arg-type]
        assert len(parts) < 2 or not given.same(replace(given, **{PLURAL[kind]: parts[::-1]}))  # type: ignore[arg-type]
    assert not given.same(replace(given, acknowledgements=()))
    assert not given.same(replace(given, settings=replace(given.settings, notes="x")))


def test_the_parts_of_a_project_are_found_by_name() -> None:
    given = base()
    assert given.find("case", "LC2") is given.cases[1]
    assert given.index("point", "P3") == 2
    assert given.names("load") == ("haul", "wind", "spare")
    assert [name for kind, part in given.entities() if kind == "section" for name in [part.name]] == ["S"]
    for find in (given.find, given.index):
        with pytest.raises(KeyError):
            find("case", "P3")
    assert np.shape(given.points[2].stress.array) == (0, 6)
