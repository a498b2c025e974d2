"""Adding, duplicating, renaming, deleting and moving parts by keys."""

from __future__ import annotations

from collections.abc import AsyncIterator
from pathlib import Path

import numpy as np
import pytest

from engine import store
from engine.margins import compute
from engine.project import Kind
from tui.desk import Desk
from tui.dialogs import Question

from .app_tools import DEMO, Hand, demo_copy, opened, written
from .small_projects import BRITTLE, EMPTY, NO_STRESS, UNCOMPUTED


@pytest.fixture
async def hand(tmp_path: Path) -> AsyncIterator[Hand]:
    """The demo on a screen of 80 x 24. Whatever was done to it, undoing it all leads back to the file."""
    async with opened(demo_copy(tmp_path)) as found:
        yield found
        while found.document.undo() is not None:
            pass
        assert found.project.same(store.load(DEMO))
        np.testing.assert_array_equal(found.document.table.values, compute(found.project).values)


def names(hand: Hand, kind: Kind) -> tuple[str, ...]:
    return hand.project.names(kind)


# ---- adding


ADDED: list[tuple[list[str], list[str], Kind, int]] = [
    # keys, answers, kind, place of the new part
    (["f2", "down", "a"], ["P99", ""], "point", 2),  # after the one under the cursor
    (["f2", "right", "A"], ["LC99", ""], "case", 2),
    (["f3", "down", "a"], ["LC99", ""], "case", 2),
    (["f3", "ctrl+home", "A"], ["wind", "N"], "load", 1),
    (["f3", "end", "A"], ["boost", ""], "load", 6),  # behind the loads: at the end; a plain multiplier
    (["f4", "a"], ["P99", ""], "point", 1),
    (["f5", "a"], ["42CrMo4", "900", "1100"], "material", 1),
    (["f6", "a"], ["A-A", "6 cm"], "section", 0),
    (["f8", "a"], ["test", "1.05", "1.1"], "category", 1),
    (["f10", "a"], ["wind", "MPa"], "load", 1),
]


async def test_a_part_is_asked_for_and_stands_after_the_one_under_the_cursor(hand: Hand) -> None:
    for keys, answers, kind, place in ADDED:
        await hand.press(*keys)
        await hand.enter(*answers)
        assert names(hand, kind)[place] == answers[0], keys
        assert hand.message == f"add {kind} {answers[0]}"
        assert hand.document.dirty
        await hand.undo_all()


async def test_a_unit_that_the_project_does_not_have_is_refused_and_can_be_typed_again(hand: Hand) -> None:
    await hand.press("f10", "a")
    await hand.enter("wind", "kN")
    assert "counts forces in N" in hand.message
    await hand.press("ctrl+u")
    await hand.enter("N")
    assert hand.project.loads[1].unit == "N"


async def test_the_cursor_goes_to_what_was_added(hand: Hand) -> None:
    await hand.press("down", "right", "a")
    await hand.enter("P99", "")
    assert hand.desk.grid.cursor == (2, 1)
    await hand.press("A")
    await hand.enter("LC99", "")
    assert hand.desk.grid.cursor == (2, 2)
    assert "P99 x LC99" in hand.text


async def test_a_new_point_or_case_is_asked_for_material_and_category_beginning_with_its_neighbours(hand: Hand) -> None:
    await hand.press(*["down"] * 3, *["right"] * 8, "a")
    await hand.enter("P99")
    assert hand.desk.line.text == "1.4301 plate"
    await hand.enter("")
    await hand.press("A")
    await hand.enter("LC99")
    assert hand.desk.line.text == "occasional"
    await hand.press("ctrl+u")
    await hand.enter("sometimes")
    assert "no category is named so" in hand.message
    await hand.press("ctrl+u")
    await hand.enter("occasional")
    assert hand.project.points[4].material == "1.4301 plate"
    assert hand.project.cases[9].category == "occasional"


async def test_no_factor_of_a_new_category_is_assumed(hand: Hand) -> None:
    await hand.press("f8", "a")
    await hand.enter("test", "")
    assert "nothing was typed" in hand.message
    await hand.enter("1.1", "0")
    assert hand.desk.line.typing
    await hand.press("ctrl+u")
    await hand.enter("1.2")
    found = hand.project.categories[1]
    assert (found.yield_.tresca, found.yield_.von_mises, found.ultimate) == (1.1, 1.2, None)


async def test_a_name_must_be_given_and_be_new(hand: Hand) -> None:
    for answer in ("", "   ", "P02 shaft at bearing", " P02 shaft at bearing "):
        await hand.press("a")
        await hand.enter(answer)
        assert hand.desk.line.typing
        assert "name" in hand.message
        await hand.press("escape")
        assert not hand.desk.line.typing
    assert not hand.document.dirty


async def test_what_must_come_first_is_said(tmp_path: Path) -> None:
    point = "a point needs a material, and there is none yet: F5, then a"
    case = "a case needs a category, and there is none yet: F8, then a"
    async with opened(written(tmp_path, EMPTY)) as hand:
        for keys, says in ((("f2", "a"), point), (("f2", "A"), case), (("f3", "a"), case), (("f4", "a"), point)):
            await hand.press(*keys)
            assert hand.message == says
            assert not hand.desk.line.typing


async def test_from_an_empty_project_to_a_margin_by_keys(tmp_path: Path) -> None:
    async with opened(written(tmp_path, EMPTY)) as hand:
        assert "There is no check point yet" in hand.text
        await hand.press("f5", "a")
        await hand.enter("S355", "345", "")
        await hand.press("f8", "a")
        await hand.enter("normal", "1.5", "1.5")
        await hand.press("f2", "a")
        await hand.enter("P01")
        await hand.press("A")
        await hand.enter("LC01")
        await hand.press("enter", "enter")
        await hand.enter("115 0 0 0 0 0")
        assert "PASSES, COMPLETE" in hand.lines[0]
        await hand.press("escape")
        assert hand.row("P01").split()[1] == "+1.00"  # 345 / (1.5 x 115) - 1


# ---- duplicating


async def test_a_duplicate_stands_after_its_original(hand: Hand) -> None:
    for keys, kind, original in (
        (["d"], "point", "P01 shaft midspan"),
        (["D"], "case", "LC01"),
        (["f3", "d"], "case", "LC01"),
        (["f3", "D"], "load", "haul"),
        (["f5", "d"], "material", "S275 100-150"),
        (["f8", "d"], "category", "normal"),
        (["f10", "d"], "load", "haul"),
    ):
        await hand.press(*keys)
        assert hand.desk.line.text == f"{original} copy"
        await hand.press("enter")
        assert names(hand, kind)[:2] == (original, f"{original} copy"), keys
        await hand.undo_all()


async def test_a_duplicated_case_takes_the_stress_rows_of_its_original_along(hand: Hand) -> None:
    await hand.press(*["right"] * 8, "D", "enter")
    row = hand.project.points[11].stress.get("LC09 copy")
    assert row is not None
    assert row.tolist() == [112.5, 37.5, 0, 0, 0, 0]
    assert hand.message == "duplicate case LC09 as LC09 copy"


async def test_a_duplicate_needs_a_name_of_its_own(hand: Hand) -> None:
    await hand.press("d", "ctrl+u")
    await hand.enter("P02 shaft at bearing")
    assert 'there is a point named "P02 shaft at bearing" already' in hand.message
    await hand.press("ctrl+u", "enter")
    assert "a name is needed" in hand.message
    await hand.press("escape")


# ---- renaming


async def test_a_part_is_renamed_everywhere_and_no_number_changes(hand: Hand) -> None:
    before = hand.document.table.values.copy()
    for keys, kind in (
        (["r"], "point"),
        (["R"], "case"),
        (["f3", "r"], "case"),
        (["f3", "R"], "load"),
        (["f5", "r"], "material"),
        (["f8", "r"], "category"),
        (["f10", "r"], "load"),
    ):
        old = names(hand, kind)[0]
        await hand.press(*keys, "ctrl+u")
        await hand.enter("new name")
        assert names(hand, kind)[0] == "new name"
        assert hand.message == f"rename {kind} {old} -> new name"
        assert f'"{old}"' not in store.render(hand.project)
        np.testing.assert_array_equal(hand.document.table.values, before)
        await hand.undo_all()


async def test_renaming_to_the_same_name_is_no_edit_and_to_a_taken_one_is_refused(hand: Hand) -> None:
    await hand.press("r", "enter")
    assert not hand.document.dirty
    await hand.press("r", "ctrl+u")
    await hand.enter("P02 shaft at bearing")
    assert "already" in hand.message
    await hand.press("ctrl+u", "enter")
    assert "not empty" in hand.message
    await hand.press("escape")
    assert not hand.document.dirty


# ---- deleting


async def test_a_point_is_deleted_at_once_and_comes_back_by_undo(hand: Hand) -> None:
    await hand.press("down", "x")
    assert hand.message == "delete point P02 shaft at bearing"
    assert "P02 shaft at bearing" not in names(hand, "point")
    await hand.press("u")
    assert names(hand, "point")[1] == "P02 shaft at bearing"
    assert hand.row("P02").split()[4] == "-0.04"


async def test_where_others_refer_to_a_part_its_deletion_is_asked_about(hand: Hand) -> None:
    for keys, kind, name, reference in (
        (["f2", "X"], "case", "LC01", "case LC15 (combine)"),
        (["f3", "X"], "load", "haul", "case LC02 (loads)"),
        (["f3", "x"], "case", "LC01", "point P12 bed anchor FE (stress)"),
        (["f10", "x"], "load", "haul", "case LC01 (loads)"),
    ):
        await hand.press(*keys)
        assert isinstance(hand.app.screen, Question)
        assert f"{kind} {name} is referred to by" in hand.text
        assert reference in hand.text
        await hand.press("escape")
        assert isinstance(hand.app.screen, Desk)
        assert not hand.document.dirty
        await hand.press(keys[-1])
        await hand.press("y")
        assert name not in names(hand, kind)
        await hand.undo_all()


async def test_what_is_needed_is_not_deleted_and_it_is_said_by_whom(hand: Hand) -> None:
    for sheet, kind in (("f5", "material"), ("f8", "category")):
        name = names(hand, kind)[0]
        await hand.press(sheet, "x")
        assert hand.message.startswith(f"{kind} {name} is used by")
        assert names(hand, kind)[0] == name


async def test_a_held_key_answers_one_question_only(hand: Hand) -> None:
    await hand.press("X")
    await hand.press("y", "y", "y")
    assert isinstance(hand.app.screen, Desk)
    assert len(hand.document.history.done) == 1


async def test_on_a_points_rows_x_takes_the_row_away(tmp_path: Path) -> None:
    async with opened(written(tmp_path, BRITTLE)) as hand:
        await hand.press("enter", "x")
        assert hand.project.points[0].stress.names == ()
        assert "1 no data" in hand.lines[1]
        await hand.press("x")
        assert hand.message == "there is no row here to take away"
        await hand.press("u")
        assert "0 no data" in hand.lines[1]


# ---- moving


MOVED: list[tuple[list[str], Kind, list[int]]] = [
    # keys, kind, the first three places before
    (["down", "ctrl+up"], "point", [1, 0, 2]),
    (["ctrl+down"], "point", [1, 0, 2]),
    (["ctrl+right"], "case", [1, 0, 2]),
    (["right", "right", "ctrl+left"], "case", [0, 2, 1]),
    (["f3", "ctrl+home", "ctrl+down"], "case", [1, 0, 2]),
    (["f3", "ctrl+home", "ctrl+right"], "load", [1, 0, 2]),
    (["f5", "ctrl+down", "ctrl+down"], "material", [1, 2, 0]),
    (["f8", "down", "ctrl+up"], "category", [1, 0, 2]),
]


async def test_a_part_moves_and_the_cursor_with_it(hand: Hand) -> None:
    for keys, kind, order in MOVED:
        before = names(hand, kind)
        await hand.press(*keys)
        assert names(hand, kind)[:3] == tuple(before[i] for i in order), keys
        assert hand.message.startswith(f"move {kind} ")
        moved = hand.message.removeprefix(f"move {kind} ").split(" to place")[0]
        place = hand.desk.grid.cursor["ctrl+left" in keys or "ctrl+right" in keys]
        assert names(hand, kind)[place] == moved
        await hand.undo_all()


async def test_at_the_end_nothing_moves(hand: Hand) -> None:
    for keys in (["ctrl+up"], ["ctrl+left"], ["ctrl+end", "ctrl+down"], ["ctrl+right"]):
        await hand.press("escape", *keys)
        assert hand.message == "it stands at the end already", keys
    assert not hand.document.dirty


# ---- where a row or a column is no part


async def test_where_rows_or_columns_are_no_parts_it_is_said(hand: Hand) -> None:
    for sheet in ("f7", "f9"):
        await hand.press(sheet)
        for key in ("a", "d", "r", "x", "ctrl+up", "A", "D", "R", "X", "ctrl+left"):
            await hand.press("escape", key)
            assert "is not a part of its own" in hand.message, (sheet, key)
    assert not hand.document.dirty


async def test_behind_the_loads_there_is_no_part_to_do_it_to(hand: Hand) -> None:
    await hand.press("f3", "end")
    for key in ("D", "R", "X", "ctrl+left", "ctrl+right"):
        await hand.press(key)
        assert hand.message == "there is nothing under the cursor to do that to"


async def test_sections_and_reversible_loads_are_kept_and_shown_without_numbers(tmp_path: Path) -> None:
    path = written(tmp_path, UNCOMPUTED)
    async with opened(path) as hand:
        assert "1 no data" in hand.lines[1]
        assert "section is not computed yet" in hand.text
        await hand.press("f6", "r", "ctrl+u")
        await hand.enter("B-B")
        await hand.press("ctrl+s")
    saved = store.load(path)
    assert saved.sections[0].name == saved.points[0].section == "B-B"
    assert saved.loads[1].sense == "reversible"


async def test_an_unfinished_addition_changes_nothing(tmp_path: Path) -> None:
    path = written(tmp_path, NO_STRESS)
    async with opened(path) as hand:
        await hand.press("f5", "a")
        await hand.enter("42CrMo4")
        await hand.press(*"9", "escape")
        assert hand.project.names("material") == ("S355",)
        assert not hand.document.dirty
