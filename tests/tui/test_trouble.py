"""Cells in trouble: which, in which order, and where the next one is."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from engine import store
from engine.edits import Set
from engine.envelope import VERDICTS
from engine.margins import compute
from engine.table import MarginTable
from tui.document import Document
from tui.trouble import Trouble, verdicts_of_cells

from .app_tools import DEMO, demo_copy

CLEAR = """format = 1
[project]
title = "Nothing in trouble"
units = "mm-N-MPa"
components = "xx yy zz xy yz zx"
accept = "both"
thin = 0.1
[[category]]
name = "normal"
yield = 1.5
[[material]]
name = "S355"
yield = 345.0
[[case]]
name = "LC01"
category = "normal"
[[point]]
name = "P01"
material = "S355"
[point.stress]
LC01 = [100.0, 0, 0, 0, 0, 0]
"""


def walked(table: MarginTable, step: int, start: tuple[int, int] = (-1, -1)) -> list[tuple[int, int]]:
    """The cells met from a place on, until the first one comes again."""
    trouble, found, place = Trouble(), [], start
    while True:
        nearest = trouble.beside(table, *place, step)
        assert nearest is not None
        place = nearest[:2]
        if place in found:
            return found
        found.append(place)


def test_cells_come_worst_kind_first_and_in_the_order_of_the_sheet() -> None:
    table = compute(store.load(DEMO))
    codes = verdicts_of_cells(table)
    cells = walked(table, 1)
    kinds = [VERDICTS[codes[cell]] for cell in cells]
    order = ["short", "split", "thin", "no-data"]
    assert kinds == sorted(kinds, key=order.index)
    assert set(kinds) == set(order)
    for kind in order:
        same = [cell for cell, found in zip(cells, kinds, strict=True) if found == kind]
        assert same == sorted(same)
    assert len(cells) == np.count_nonzero(codes != VERDICTS.index("clear"))


def test_backwards_the_same_cells_come_the_other_way_round() -> None:
    table = compute(store.load(DEMO))
    assert walked(table, -1) == walked(table, 1)[::-1]


def test_the_next_one_is_numbered_among_all_of_them() -> None:
    table = compute(store.load(DEMO))
    trouble = Trouble()
    first = trouble.beside(table, -1, -1, 1)
    assert first is not None
    assert first[2] == 1
    second = trouble.beside(table, *first[:2], 1)
    assert second is not None
    assert second[2:] == (2, first[3])
    assert trouble.beside(table, *first[:2], -1) == trouble.beside(table, -1, -1, -1)


def test_from_a_cell_without_trouble_one_comes_to_the_worst() -> None:
    table = compute(store.load(DEMO))
    assert verdicts_of_cells(table)[0, 2] == VERDICTS.index("clear")
    assert Trouble().beside(table, 0, 2, 1) == Trouble().beside(table, -1, -1, 1)


def test_no_cell_in_trouble_is_none() -> None:
    assert Trouble().beside(compute(store.parse(CLEAR)), 0, 0, 1) is None


def test_a_project_without_cells_has_none() -> None:
    bare = CLEAR.partition("[[point]]")[0]
    assert Trouble().beside(compute(store.parse(bare)), 0, 0, 1) is None


def test_after_an_edit_the_cells_are_found_anew(tmp_path: Path) -> None:
    document, trouble = Document.open(demo_copy(tmp_path)), Trouble()
    before = trouble.beside(document.table, -1, -1, 1)
    document.commit(Set("case", "LC09", ("loads", "haul"), 60000.0))
    after = trouble.beside(document.table, -1, -1, 1)
    assert before is not None
    assert after is not None
    assert after[3] < before[3]
