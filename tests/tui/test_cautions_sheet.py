"""The Cautions sheet, and taking a blocking one on by name with a reason, or back."""

from __future__ import annotations

from pathlib import Path

import pytest

from engine import store
from engine.edits import Acknowledge, Set
from tui.cautions_sheet import CautionsSheet
from tui.document import Document

from .app_tools import DEMO, opened, written
from .small_projects import BRITTLE, EMPTY


def rows(sheet: CautionsSheet) -> list[tuple[str, str, str]]:
    """Point, caution and state of each row."""
    found = []
    for row in range(sheet.size()[0]):
        name, state, _ = sheet.cells(row, range(3))
        found.append((sheet.row_name(row), name.text, state.text))
    return found


def test_blocking_cautions_stand_before_notes() -> None:
    sheet = CautionsSheet(Document(store.load(DEMO), None))
    assert rows(sheet) == [
        ("P10 brake rod eye", "temperature", "blocks"),
        ("P04 brake cyl outer", "ultimate-temperature", "note"),
        ("P11 brake cyl bore", "ultimate-temperature", "note"),
    ]


def test_each_says_why_with_its_numbers() -> None:
    sheet = CautionsSheet(Document(store.load(DEMO), None))
    words = "\n".join("".join(text for text, _ in runs) for runs in sheet.here(0, 0))
    assert "no table and no range of S355 16-40 covers 350 in LC14, 150 in LC07" in " ".join(words.split())


def test_the_rows_follow_the_project() -> None:
    document = Document(store.parse(BRITTLE), None)
    sheet = CautionsSheet(document)
    assert rows(sheet) == [("P01", "elongation", "blocks"), ("P01", "no-source-strength", "note")]
    document.commit(Acknowledge("P01", "elongation", "XY", "compression only"))
    assert rows(sheet)[0][2] == "acknowledged"
    document.commit(Set("material", "EN-GJL", ("elongation",), 0.2))
    assert rows(sheet) == [("P01", "no-source-strength", "note")]
    document.commit(Set("material", "EN-GJL", ("source",), "invented"))
    assert sheet.size()[0] == 0
    assert sheet.here(0, 0) == []


def test_a_project_without_cautions_says_so() -> None:
    assert CautionsSheet(Document(store.parse(EMPTY), None)).empty() == "No caution stands."


async def test_a_caution_is_taken_on_by_name_with_a_reason_saved_and_taken_back(tmp_path: Path) -> None:
    path = written(tmp_path, BRITTLE)
    async with opened(path) as hand:
        assert "FAILS" in hand.lines[0]
        assert "1 caution blocks" in hand.lines[1]
        await hand.press("f9", "enter")
        assert "taken on by (initials)" in hand.lines[-1]
        await hand.enter("XY")
        assert "reason" in hand.lines[-1]
        await hand.enter("in compression; checked by test")
        assert "PASSES" in hand.lines[0]
        assert "by XY: in compression; checked by test" in hand.text
        await hand.press("ctrl+s")
        saved = store.load(path).acknowledgements
        assert [(a.point, a.caution, a.by, a.reason) for a in saved] == [
            ("P01", "elongation", "XY", "in compression; checked by test")
        ]
        await hand.press("enter")
        await hand.press("escape")
        assert "PASSES" in hand.lines[0]
        assert "1 caution acknowledged" in hand.text or "1 acknowledged" in hand.text
        await hand.press("enter")
        await hand.press("w")
        assert "FAILS BY CAUTION" in hand.lines[0]
        assert hand.message == "withdraw the acknowledgement of elongation at P01"
        await hand.press("u")
        assert "PASSES" in hand.lines[0]


@pytest.mark.parametrize("answers", [("",), ("  ",), ("XY", ""), ("XY", "   ")])
async def test_neither_name_nor_reason_may_be_missing(tmp_path: Path, answers: tuple[str, ...]) -> None:
    async with opened(written(tmp_path, BRITTLE)) as hand:
        await hand.press("f9", "enter")
        await hand.enter(*answers)
        assert ("a reason is needed" if len(answers) == 2 else "initials are needed") in hand.lines[-1]
        await hand.press("escape")
        assert hand.project.acknowledgements == ()
        assert not hand.document.dirty


async def test_a_note_cannot_be_taken_on(tmp_path: Path) -> None:
    async with opened(written(tmp_path, BRITTLE)) as hand:
        await hand.press("f9", "down", "enter")
        assert hand.message == "a note blocks nothing: there is nothing to take on"
        assert not hand.document.dirty
