"""Who refers to whom: renames that follow, and deletions that take references with them."""

from __future__ import annotations

from dataclasses import replace

import pytest

from engine import integrity
from engine.edits import Batch, Refusal, Remove, Rename, apply, inverse
from engine.frozen import FrozenMap
from engine.loads import Load
from engine.project import KINDS, Acknowledgement, Kind, Project
from engine.references import renamed_everywhere, uses
from engine.removal import removal
from engine.sections import Section

from .builders import axial, case, point, project


def whole() -> Project:
    """A project in which something refers to every part but the first case's like."""
    section = Section("S", "round", FrozenMap({"d": 60.0}), ("b",), FrozenMap({"N": FrozenMap({"a": 1.0})}))
    return project(
        [
            point("P", {"A": axial(1.0)}, per_load={"a": axial(1.0)}, not_felt=("b",), temperature={"A": 20.0}),
            replace(point("Q", not_felt="rest"), section="S", at=(1.0, 0.0)),
            point("R", {"B": axial(1.0)}),
        ],
        [case("A", {"a": 1.0}), case("B", {"b": 1.0}, {"A": 1.0}), case("C")],
        [Load("a"), Load("b"), Load("c")],
        sections=[section],
        acknowledgements=[Acknowledgement("P", "elongation", "A. B.", "tested")],
    )


USES: list[tuple[Kind, str, list[str]]] = [
    ("category", "normal", ["case A (category)", "case B (category)", "case C (category)"]),
    ("material", "steel", ["point P (material)", "point Q (material)", "point R (material)"]),
    ("load", "a", ["case A (loads)", "section S (resultants)", "point P (per-load)"]),
    ("load", "b", ["case B (loads)", "section S (resultants)", "point P (not-felt)"]),
    ("load", "c", []),  # "rest" names none
    ("case", "A", ["case B (combine)", "point P (stress)", "point P (temperature)"]),
    ("case", "B", ["point R (stress)"]),
    ("case", "C", []),
    ("section", "S", ["point Q (section)"]),
    ("point", "P", ["acknowledgement of elongation at P"]),
    ("point", "Q", []),
]


@pytest.mark.parametrize(("kind", "name", "expected"), USES)
def test_all_uses_of_a_part_are_listed_in_file_order(kind: Kind, name: str, expected: list[str]) -> None:
    assert uses(whole(), kind, name) == expected


@pytest.mark.parametrize(("kind", "name", "users"), USES)
def test_a_rename_is_followed_everywhere(kind: Kind, name: str, users: list[str]) -> None:
    before = whole()
    after = apply(before, Rename(kind, name, "new"))
    assert integrity.faults(after) == []
    assert uses(after, kind, name) == []
    assert len(uses(after, kind, "new")) == len(users)
    assert apply(after, Rename(kind, "new", name)).same(before)


@pytest.mark.parametrize(("kind", "name", "users"), USES)
def test_what_does_not_refer_to_a_renamed_part_stays_the_same_object(kind: Kind, name: str, users: list[str]) -> None:
    before = whole()
    after = renamed_everywhere(before, kind, name, "new")
    named = {tuple(user.split(" (")[0].split(" ", 1)) for user in users}
    for other in KINDS:
        for old, new in zip(before.of(other), after.of(other), strict=True):
            assert (new is old) is ((other, old.name) not in named)


def test_a_rename_changes_no_part_of_another_kind_with_the_same_name() -> None:
    given = project([point("x", {"x": axial(1.0)})], [case("x", {"x": 1.0})], [Load("x")])
    after = apply(given, Rename("load", "x", "y"))
    assert after.cases[0].name == "x"
    assert list(after.cases[0].loads) == ["y"]
    assert after.points[0].stress.names == ("x",)


def test_a_load_called_rest_is_no_keyword() -> None:
    given = project([point("P", not_felt=("rest",)), point("Q", not_felt="rest")], loads=[Load("rest")])
    assert uses(given, "load", "rest") == ["point P (not-felt)"]
    after = apply(given, Rename("load", "rest", "gust"))
    assert (after.points[0].not_felt, after.points[1].not_felt) == (("gust",), "rest")


# Removal


@pytest.mark.parametrize(("kind", "name"), [("load", "c"), ("case", "C"), ("point", "Q")])
def test_a_part_that_nothing_refers_to_is_simply_removed(kind: Kind, name: str) -> None:
    assert removal(whole(), kind, name) == Remove(kind, name)


@pytest.mark.parametrize(
    ("kind", "name", "why"),
    [
        (
            "category",
            "normal",
            "category normal is used by case A (category) and 2 more: give that another category first",
        ),
        (
            "material",
            "steel",
            "material steel is used by point P (material) and 2 more: give that another material first",
        ),
        ("section", "S", "section S is used by point Q (section): give that another section first"),
    ],
)
def test_what_others_need_is_not_removed_from_under_them(kind: Kind, name: str, why: str) -> None:
    with pytest.raises(Refusal) as error:
        removal(whole(), kind, name)
    assert str(error.value) == why


@pytest.mark.parametrize(
    ("kind", "name", "steps"),
    [
        ("load", "a", 4),  # loads, resultants, per-load, and the load
        ("load", "b", 4),  # loads, not-felt twice, and the load
        ("case", "A", 4),  # combine, stress, temperature, and the case
        ("case", "B", 2),
        ("point", "P", 2),  # its acknowledgement
    ],
)
def test_a_part_goes_with_all_references_to_it_as_one_step(kind: Kind, name: str, steps: int) -> None:
    before = whole()
    edit = removal(before, kind, name)
    assert isinstance(edit, Batch)
    assert len(edit.edits) == steps
    assert edit.label == f"delete {kind} {name} and {steps - 1} references to it"
    after = apply(before, edit)
    assert name not in after.names(kind)
    assert uses(after, kind, name) == []
    assert integrity.faults(after) == []
    assert apply(after, inverse(before, edit)).same(before)


def test_a_removed_load_takes_only_itself_out_of_lists_and_tables() -> None:
    given = whole()
    after = apply(given, removal(given, "load", "b"))
    assert after.points[0].not_felt == ()
    assert after.points[0].per_load.same(given.points[0].per_load)
    assert after.sections[0].not_felt == ()
    assert after.sections[0].resultants == given.sections[0].resultants
    assert after.points[1] is given.points[1]
    assert after.cases[0] is given.cases[0]


def test_a_removed_case_leaves_the_temperatures_of_other_cases() -> None:
    given = project([point("P", temperature={"A": 20.0, "B": 30.0})], [case("A"), case("B")])
    after = apply(given, removal(given, "case", "A"))
    assert after.points[0].temperature == FrozenMap({"B": 30.0})
    last = apply(after, removal(after, "case", "B"))
    assert last.points[0].temperature is None
