"""`hexlipse check`: exit status, JSON by DESIGN, plain text into a pipe, and that nothing acts on the terminal."""

from __future__ import annotations

import errno
import io
import json
import os
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

import tui
from engine import store
from engine.edits import Acknowledge, Set, apply
from engine.envelope import VERDICTS
from engine.margins import compute
from tui import progress
from tui.check import run_check
from tui.progress import Progress

from .app_tools import DEMO, written
from .small_projects import BRITTLE, EMPTY, NO_STRESS, NOT_CHECKED, ONLY_CASES, ONLY_POINTS, REVERSIBLE, UNCOMPUTED

PASSING = BRITTLE.replace("elongation = 0.01", "elongation = 0.2")
COMMAND = [
    sys.executable,
    "-c",
    f"import sys; sys.path.insert(0, {str(Path(tui.__file__).parents[1])!r}); from tui.command import main; main()",
]
"""The command as its script runs it, whatever folder one is in."""


def plain(path: Path, capsys: pytest.CaptureFixture[str], **how: bool) -> tuple[int, str, str]:
    """Status, output and messages of a check that is not on a terminal."""
    status = run_check(str(path), **how)
    printed = capsys.readouterr()
    return status, printed.out, printed.err


def as_json(path: Path, capsys: pytest.CaptureFixture[str], cells: bool = False) -> dict[str, Any]:
    run_check(str(path), as_json=True, cells=cells)
    found: dict[str, Any] = json.loads(capsys.readouterr().out)
    return found


# ---- the exit status


@pytest.mark.parametrize(
    ("text", "status"),
    [
        (PASSING, 0),  # passes and is complete
        (PASSING.replace("[10.0, 0,", "[100.0, 0,"), 1),  # a margin below zero
        (PASSING.replace("[10.0, 0,", "[66.66666666666667, 0,"), 0),  # zero, and zero is no failure
        (BRITTLE, 1),  # a caution that blocks
        (NO_STRESS, 1),  # a cell without data
        (PASSING + '[[case]]\nname = "LC02"\ncategory = "normal"\n', 1),  # what is known passes, and not all is known
        (NOT_CHECKED, 1),  # no cell
        (EMPTY, 1),
        (ONLY_CASES, 1),
        (ONLY_POINTS, 1),
        (UNCOMPUTED, 2),  # a section
        (EMPTY + REVERSIBLE, 2),  # a load of changing sign
        ("", 2),
        ("format = 2\n", 2),  # of a later version
        (PASSING.replace("yield = 1.5", "yield = nan"), 2),
        ("x" * 100, 2),
    ],
)
def test_the_status_is_0_where_it_passes_1_where_not_and_2_for_unusable_input(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], text: str, status: int
) -> None:
    path = written(tmp_path, text)
    found, out, err = plain(path, capsys)
    assert found == status
    assert bool(out) == (status != 2)
    assert bool(err) == (status == 2)
    assert run_check(str(path), as_json=True, cells=True) == status


def test_an_acknowledged_caution_lets_it_pass(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = written(
        tmp_path, store.render(apply(store.parse(BRITTLE), Acknowledge("P01", "elongation", "XY", "tested")))
    )
    status, out, _ = plain(path, capsys)
    assert status == 0
    assert "PASSES, COMPLETE" in out
    assert "Caution, acknowledged: elongation" in out


@pytest.mark.parametrize(
    ("text", "says"),
    [(UNCOMPUTED, "point P01: stress from a section"), (EMPTY + REVERSIBLE, 'load wind: sense "reversible"')],
)
def test_what_is_not_computed_yet_is_named_and_never_a_number(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], text: str, says: str
) -> None:
    status, out, err = plain(written(tmp_path, text), capsys)
    assert (status, out) == (2, "")
    assert says in err
    assert "not computed yet" in err
    assert "project.toml" in err


def test_faults_of_a_file_say_file_line_key_found_and_expected(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = written(tmp_path, PASSING.replace("elongation = 0.2", "elongation = 20\nyeild = 3"))
    status, _, err = plain(path, capsys)
    assert status == 2
    first, second = err.splitlines()
    assert first.startswith(f"{path}:")
    assert "material[1].elongation: found 20" in first
    assert 'did you mean "yield"' in second


def test_a_folder_and_a_file_that_is_not_there_are_said(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    for path, says in ((tmp_path, "folder"), (tmp_path / "none.toml", "no file of this name")):
        status, out, err = plain(path, capsys)
        assert (status, out) == (2, "")
        assert says in err
        assert len(err.splitlines()) == 1


# ---- JSON


def test_json_has_the_keys_of_design(capsys: pytest.CaptureFixture[str]) -> None:
    found = as_json(DEMO, capsys)
    keys = "format title revision accept passes complete counts governing points never-govern"
    assert list(found) == keys.split()
    assert found["format"] == 1
    assert found["title"] == "Slipway winch"
    assert set(found["counts"]) == set(VERDICTS)
    assert list(found["governing"]) == ["point", "case", "limit", "theory", "margin"]
    for point in found["points"]:
        assert list(point) == ["name", "verdict", "governing", "tresca", "von-mises", "missing", "cautions"]
        assert list(point["governing"]) == ["case", "limit", "theory", "margin"]
        assert list(point["tresca"]) == list(point["von-mises"]) == ["case", "limit", "margin"]
        for caution in point["cautions"]:
            assert list(caution) == ["name", "text", "blocking", "acknowledged"]


def test_json_of_the_demo_is_what_its_head_works_out_by_hand(capsys: pytest.CaptureFixture[str]) -> None:
    found = as_json(DEMO, capsys)
    assert (found["passes"], found["complete"]) == (False, False)
    assert found["counts"] == {"clear": 7, "thin": 1, "split": 1, "short": 2, "no-data": 1}
    assert found["governing"]["point"] == "P11 brake cyl bore"
    assert found["governing"]["margin"] == pytest.approx(142 / (1.5 * 132) - 1, rel=1e-12)
    by_name = {point["name"][:3]: point for point in found["points"]}
    assert by_name["P02"]["verdict"] == "split"
    assert by_name["P02"]["tresca"]["margin"] == pytest.approx(-0.04, rel=1e-12)
    assert by_name["P05"]["tresca"]["case"] == "LC05"
    assert by_name["P05"]["von-mises"]["case"] == "LC09"
    assert by_name["P06"]["governing"]["theory"] == "both"
    assert by_name["P12"]["missing"] == ["LC10"]
    assert [caution["name"] for caution in by_name["P10"]["cautions"]] == ["temperature"]


def test_with_cells_every_cell_and_limit_is_there_in_full_precision(capsys: pytest.CaptureFixture[str]) -> None:
    found = as_json(DEMO, capsys, cells=True)
    assert len(found["cells"]) == 12 * 18 * 2
    table = compute(store.load(DEMO))
    for cell in found["cells"]:
        assert list(cell) == ["point", "case", "limit", "tresca", "von-mises"]
        row = table.project.names("point").index(cell["point"])
        column = [case.name for case in table.project.checked].index(cell["case"])
        for theory in ("tresca", "von-mises"):
            said = cell[theory]
            margin = table.margin[cell["limit"]][theory][row, column]  # type: ignore[index]
            if said["margin"] is not None:
                assert said["margin"] == margin
                assert said["equivalent"] == table.equivalent[cell["limit"]][theory][row, column]  # type: ignore[index]
            else:
                assert said.get("no-stress", False) == (margin == float("inf"))
                assert said.get("no-data", False) == (margin != margin)


def test_a_project_without_a_margin_is_valid_json_too(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    for text in (EMPTY, ONLY_CASES, ONLY_POINTS, NO_STRESS, NOT_CHECKED):
        found = as_json(written(tmp_path, text), capsys, cells=True)
        assert found["governing"] == {
            "point": None, "case": None, "limit": None, "theory": None, "margin": None, "no-data": True,
        }  # fmt: skip
        assert found["passes"] is False
        assert found["complete"] is False


# ---- plain text


def test_into_a_pipe_every_point_is_one_line_without_control_characters(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, err = plain(DEMO, capsys)
    assert (status, err) == (1, "")
    assert all(c.isprintable() or c == "\n" for c in out)
    lines = out.splitlines()
    assert lines[0] == "Slipway winch  rev B"
    assert lines[1].startswith("FAILS, INCOMPLETE   2 short X   1 split /   1 thin ~   1 no data ?   7 clear")
    assert lines[2] == "Governs: P11 brake cyl bore in LC07, yield, Tresca: -0.29"
    row = next(line for line in lines if line.startswith("P02"))
    assert " ".join(row.split()) == "P02 shaft at bearing -0.04 / LC09 yield Tresca -0.04 LC09 +0.00 LC09"
    assert "Caution, blocks: temperature: no table and no range of S355 16-40 covers 350 in LC14, 150 in LC07" in out
    assert "Cases that never govern: LC01" in out
    assert "licensed engineer" in " ".join(out.split())


def test_with_cells_every_cell_is_one_line(capsys: pytest.CaptureFixture[str]) -> None:
    _, out, _ = plain(DEMO, capsys, cells=True)
    cells = [" ".join(line.split()) for line in out.splitlines()]
    assert "P02 shaft at bearing LC09 yield 187.5 -0.04 178.9 +0.00" in cells
    assert "P02 shaft at bearing LC09 ultimate 187.5 +0.33 178.9 +0.39" in cells
    assert "P12 bed anchor FE LC10 yield . . . ." in cells
    assert "P01 shaft midspan LC05 yield 0.000 inf 0.000 inf" in cells


EVIL = "\u202eevil\u200b[red]\u00ad"


def test_names_that_could_act_on_a_terminal_are_refused_or_shown_harmless(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    refused = written(tmp_path, PASSING.replace('"P01"', r'"P\u001b[31m01"'), "refused.toml")
    status, out, err = plain(refused, capsys)
    assert (status, out) == (2, "")
    assert "control characters" in err
    shown = PASSING.replace('"P01"', f'"{EVIL}"').replace('"Two cautions"', r'"T\u001b[2J\u0007"')
    status, out, err = plain(written(tmp_path, shown), capsys, cells=True)
    assert status == 0
    for text in (out, err):
        assert all(c.isprintable() or c == "\n" for c in text)
    assert "evil" in out
    assert "[red]" in out  # and no markup of ours


def test_a_file_name_that_could_act_on_a_terminal_is_shown_harmless(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    for name in ("a\x1b[31m.toml", "b\n\r.toml"):
        for text in ("format = 1\n", UNCOMPUTED):
            _, out, err = plain(written(tmp_path, text, name), capsys)
            assert out == ""
            assert all(c.isprintable() or c == "\n" for c in err)


# ---- as a program


def test_a_reader_that_goes_away_ends_it_quietly_with_the_status_of_the_project(tmp_path: Path) -> None:
    path = written(tmp_path, PASSING)
    for how in ([], ["--json"]):
        read, write = os.pipe()
        os.close(read)
        ended = subprocess.run([*COMMAND, "check", str(path), *how], stdout=write, stderr=subprocess.PIPE, timeout=60)
        os.close(write)
        assert (ended.returncode, ended.stderr) == (0, b"")


class Full(io.StringIO):
    """An output on a disk that is full."""

    def __init__(self, path: Path) -> None:
        super().__init__()
        self._file = path.open("wb")

    def write(self, text: str) -> int:
        raise OSError(errno.ENOSPC, "No space left on device")

    def fileno(self) -> int:
        return self._file.fileno()


@pytest.mark.parametrize("as_json", [False, True])
def test_output_that_cannot_be_written_is_no_verdict(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch, as_json: bool
) -> None:
    monkeypatch.setattr(sys, "stdout", Full(tmp_path / "full"))
    assert run_check(str(written(tmp_path, PASSING)), as_json=as_json) == 2
    assert capsys.readouterr().err == "hexlipse: the output could not be written: No space left on device\n"


def test_a_name_that_the_encoding_lacks_is_marked_and_the_rest_is_said(tmp_path: Path) -> None:
    path = written(tmp_path, PASSING.replace('"P01"', '"Prüfpunkt 荷"'))
    narrow = os.environ | {"PYTHONIOENCODING": "ascii", "PYTHONUTF8": "0"}
    ended = subprocess.run([*COMMAND, "check", str(path)], capture_output=True, env=narrow, timeout=60)
    assert ended.returncode == 0
    assert b"Pr?fpunkt ?" in ended.stdout


# ---- progress


class Stream:
    """Where messages go, a terminal or not."""

    def __init__(self, terminal: bool) -> None:
        self.text, self._terminal = "", terminal

    def write(self, text: str) -> None:
        self.text += text

    def flush(self) -> None:
        return

    def isatty(self) -> bool:
        return self._terminal


def waited(stream: Stream, monkeypatch: pytest.MonkeyPatch) -> None:
    """Work that takes three times the patience."""
    monkeypatch.setattr(progress, "PATIENCE", 0.02)
    with Progress("computing margins", stream) as watched:  # type: ignore[arg-type]
        watched._done.wait(0.1)


def test_work_that_takes_longer_says_so_once_in_a_log(monkeypatch: pytest.MonkeyPatch) -> None:
    log = Stream(terminal=False)
    waited(log, monkeypatch)
    assert log.text == "computing margins ...\n"


def test_on_a_terminal_the_seconds_are_counted_and_wiped_away(monkeypatch: pytest.MonkeyPatch) -> None:
    terminal = Stream(terminal=True)
    waited(terminal, monkeypatch)
    assert terminal.text.startswith("\rcomputing margins: ")
    assert terminal.text.endswith(" \r")


def test_quick_work_says_nothing() -> None:
    log = Stream(terminal=True)
    with Progress("reading", log):  # type: ignore[arg-type]
        pass
    assert log.text == ""


def test_the_same_edits_give_the_same_check_as_a_saved_file(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edited = apply(store.load(DEMO), Set("case", "LC09", ("loads", "haul"), 60000.0))
    path = tmp_path / "edited.toml"
    store.save(edited, path)
    assert as_json(path, capsys)["counts"] == compute(edited).envelope.counts()
