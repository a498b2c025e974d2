"""A project survives its file, and a file survives its save."""

from __future__ import annotations

import errno
import os
import stat
import tomllib
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings

from engine import atomic, store
from engine.edits import Set, apply
from engine.frozen import StressRows
from engine.project import Project
from engine.schema import PARTS, Codec
from engine.store import SaveError, load, parse, read, render, save, saved_text

from .any_project import projects
from .hand_files import FILES, WINCH

CHANGE = Set("case", "LC01", ("loads", "haul"), 13500.0)


@pytest.fixture
def winch(tmp_path: Path) -> Path:
    """A project file on the disk."""
    path = tmp_path / "winch.toml"
    path.write_bytes(WINCH.encode())
    return path


# Round trip


def test_the_file_with_every_key_has_every_key() -> None:
    document = tomllib.loads(WINCH)
    codec = Codec()
    for kind in PARTS:
        tables = document[kind] if isinstance(document[kind], list) else [document[kind]]
        assert {key.name for key in codec.keys(kind)} <= {key for table in tables for key in table}


@pytest.mark.parametrize("name", list(FILES))
def test_written_afresh_a_project_reads_the_same(name: str) -> None:
    project = parse(FILES[name])
    text = render(project)
    assert parse(text).same(project)
    assert render(parse(text)) == text


def test_a_fresh_file_has_the_keys_in_the_order_of_the_format_and_a_line_for_each_row() -> None:
    text = render(parse(WINCH))
    assert text.startswith('format = 1\n\n[project]\ntitle = "Slipway winch"\nrevision = "B"\nunits = "mm-N-MPa"\n')
    point = text[text.index('name = "P02"') :]
    assert point.startswith(
        'name = "P02"\n'
        'material = "S355 16-40"\n'
        "factor = { yield = 1.1, ultimate = 1.2 }\n"
        "temperature = { LC01 = 40.0 }\n"
        'source = "run 12, node 4711"\n'
        'not-felt = ["wind"]\n'
        "[point.per-load]\n"
        "haul = [0.0021, 0.0, 0.0, 0.0007, 0.0, 0.0]\n"
        "[point.stress]\n"
        "LC01 = [120.0, 0.0, 0.0, 35.0, 0.0, 0.0]\n"
        "\n[[point]]\n"
    )
    assert 'notes = """\nTwo lines,\nwith \\"quotes\\" in them."""\n' in text


def test_rows_stand_in_the_order_of_components_of_the_file() -> None:
    stress = parse(WINCH).points[1].stress.get("LC01")
    assert stress is not None
    assert stress.tolist() == [0.0, 120.0, 0.0, 35.0, 0.0, 0.0]


@settings(max_examples=30, deadline=None)
@given(projects())
def test_any_project_reads_as_it_was_written(project: Project) -> None:
    text = render(project)
    assert parse(text).same(project)
    assert saved_text(project) == text
    assert saved_text(project, text) == text


@settings(max_examples=30, deadline=None)
@given(projects(), projects())
def test_any_project_can_take_the_place_of_any_other(before: Project, after: Project) -> None:
    text = saved_text(after, render(before))
    assert parse(text).same(after)
    assert saved_text(after, text) == text


def test_what_reads_otherwise_is_never_written(winch: Path) -> None:
    project = parse(WINCH)
    rows = StressRows(["LC01"], [[float("nan")] * 6])
    with pytest.raises(SaveError):
        save(replace(project, points=(replace(project.points[1], stress=rows),)), winch)
    assert winch.read_text() == WINCH
    assert os.listdir(winch.parent) == ["winch.toml"]


def test_a_text_that_no_file_can_hold_is_told(winch: Path) -> None:
    project = parse(WINCH)
    with pytest.raises(SaveError, match="not saved"):
        save(replace(project, settings=replace(project.settings, title="\ud800")), winch)
    assert winch.read_text() == WINCH


def test_a_file_written_afresh_is_read_before_it_is_saved(winch: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(store, "render", lambda _: WINCH)  # says another project
    with pytest.raises(SaveError, match="no text that reads as this project"):
        save(apply(parse(WINCH), CHANGE), winch, like="")
    assert winch.read_text() == WINCH


def test_a_save_that_would_lose_the_hand_writes_afresh(monkeypatch: pytest.MonkeyPatch) -> None:
    project = apply(parse(WINCH), CHANGE)
    monkeypatch.setattr(store, "_kept", lambda *_: WINCH)  # says another project
    assert saved_text(project, WINCH) == render(project)


# Files


def test_a_save_gives_back_what_the_file_holds(winch: Path) -> None:
    project = apply(load(winch), CHANGE)
    text = save(project, winch)
    assert winch.read_bytes() == text.encode()
    assert load(winch).same(project)
    assert text == WINCH.replace("12000.0", "13500.0")


def test_the_text_is_read_with_its_own_line_ends(tmp_path: Path) -> None:
    path = tmp_path / "winch.toml"
    text = "\ufeff" + WINCH.replace("\n", "\r\n")
    path.write_bytes(text.encode())
    found = read(path)
    assert found.text == text
    assert found.path == path
    assert found.project.same(parse(WINCH))
    save(apply(found.project, CHANGE), path)
    assert path.read_bytes() == text.replace("12000.0", "13500.0").encode()


def test_the_file_before_is_kept(winch: Path) -> None:
    project = apply(load(winch), CHANGE)
    save(project, winch)
    assert (winch.parent / "winch.toml~").read_text() == WINCH
    save(parse(WINCH), winch)
    assert (winch.parent / "winch.toml~").read_text() == WINCH.replace("12000.0", "13500.0")
    assert sorted(os.listdir(winch.parent)) == ["winch.toml", "winch.toml~"]


def test_an_unchanged_save_leaves_the_file_and_the_one_before_alone(winch: Path) -> None:
    save(apply(load(winch), CHANGE), winch)
    before = winch.stat()
    save(load(winch), winch)
    assert winch.stat() == before
    assert (winch.parent / "winch.toml~").read_text() == WINCH


def test_where_links_are_not_to_be_had_the_file_before_is_copied(winch: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: Any) -> None:
        raise OSError(errno.EPERM, "no links here")

    monkeypatch.setattr(os, "link", refuse)
    save(apply(load(winch), CHANGE), winch)
    assert (winch.parent / "winch.toml~").read_text() == WINCH
    assert sorted(os.listdir(winch.parent)) == ["winch.toml", "winch.toml~"]


def test_the_file_is_there_at_every_moment(winch: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    seen: list[str] = []
    replaced = os.replace

    def watched(source: Any, target: Any) -> None:
        seen.append(winch.read_text())
        replaced(source, target)
        seen.append(winch.read_text())

    monkeypatch.setattr(os, "replace", watched)
    save(apply(load(winch), CHANGE), winch)
    assert [text == WINCH for text in seen] == [True, True, True, False]


@pytest.mark.parametrize(
    ("module", "name", "call"),
    [
        (os, "fsync", 1),  # the disk is full
        (os, "replace", 1),  # the file before cannot be kept
        (os, "replace", 2),  # the new file cannot take its place
        (os, "chmod", 1),  # its permissions cannot be copied
    ],
)
def test_a_failing_step_leaves_the_old_file_whole(
    winch: Path, monkeypatch: pytest.MonkeyPatch, module: Any, name: str, call: int
) -> None:
    project = apply(load(winch), CHANGE)
    genuine = getattr(module, name)
    calls: list[int] = []

    def fails(*args: Any, **kwargs: Any) -> Any:
        calls.append(1)
        if len(calls) == call:
            raise OSError(errno.ENOSPC, "No space left on device")
        return genuine(*args, **kwargs)

    monkeypatch.setattr(module, name, fails)
    with pytest.raises(SaveError) as caught:
        save(project, winch)
    told = f"{winch} was not saved: No space left on device; the file before is untouched"
    assert str(caught.value) == told
    assert winch.read_text() == WINCH
    assert set(os.listdir(winch.parent)) <= {"winch.toml", "winch.toml~"}
    monkeypatch.undo()
    save(project, winch)
    assert load(winch).same(project)
    assert (winch.parent / "winch.toml~").read_text() == WINCH


def test_an_interrupted_save_leaves_nothing_behind(winch: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def interrupt(*_: Any) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(os, "fsync", interrupt)
    with pytest.raises(KeyboardInterrupt):
        save(apply(load(winch), CHANGE), winch)
    assert os.listdir(winch.parent) == ["winch.toml"]
    assert winch.read_text() == WINCH


def test_a_folder_that_cannot_be_flushed_is_told_of_a_file_that_is_saved(
    winch: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    genuine = os.fsync

    def fails(handle: int) -> None:
        if stat.S_ISDIR(os.fstat(handle).st_mode):
            raise OSError(errno.EIO, "Input/output error")
        genuine(handle)

    monkeypatch.setattr(os, "fsync", fails)
    project = apply(load(winch), CHANGE)
    with pytest.raises(SaveError, match="is saved, but its folder could not be flushed"):
        save(project, winch)
    assert load(winch).same(project)


def test_the_file_and_its_folder_are_flushed(winch: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    folders: list[bool] = []
    monkeypatch.setattr(os, "fsync", lambda handle: folders.append(stat.S_ISDIR(os.fstat(handle).st_mode)))
    save(apply(load(winch), CHANGE), winch)
    assert folders == [False, True]


@pytest.mark.parametrize("mode", [0o600, 0o640, 0o664])
def test_permissions_are_kept(winch: Path, mode: int) -> None:
    winch.chmod(mode)
    save(apply(load(winch), CHANGE), winch)
    assert stat.S_IMODE(winch.stat().st_mode) == mode


def test_a_new_file_has_the_permissions_that_the_umask_leaves(tmp_path: Path) -> None:
    before = os.umask(0o027)
    try:
        save(parse(WINCH), tmp_path / "new.toml")
    finally:
        os.umask(before)
    assert stat.S_IMODE((tmp_path / "new.toml").stat().st_mode) == 0o640
    assert os.listdir(tmp_path) == ["new.toml"]


def test_a_symbolic_link_stays_one(winch: Path, tmp_path: Path) -> None:
    folder = tmp_path / "links"
    folder.mkdir()
    link = folder / "link.toml"
    link.symlink_to("../winch.toml")
    project = apply(load(link), CHANGE)
    save(project, link)
    assert link.is_symlink()
    assert load(winch).same(project)
    assert (tmp_path / "winch.toml~").read_text() == WINCH
    assert os.listdir(folder) == ["link.toml"]


def test_a_file_that_is_read_only_is_not_replaced(winch: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(os, "access", lambda path, mode: False)  # the superuser may write everything
    with pytest.raises(SaveError, match="read-only"):
        save(apply(load(winch), CHANGE), winch)
    assert winch.read_text() == WINCH


@pytest.mark.parametrize(
    ("name", "reason"),
    [
        ("", "it is a folder"),
        ("none/winch.toml", "No such file or directory"),
        ("x" * 300, "File name too long"),
        ("a\0b", "no file name"),
    ],
)
def test_a_place_that_cannot_be_written_is_told(tmp_path: Path, name: str, reason: str) -> None:
    with pytest.raises(SaveError, match=reason):
        save(parse(WINCH), f"{tmp_path}/{name}")


def test_a_file_that_is_no_project_is_written_afresh_and_kept(winch: Path) -> None:
    winch.write_text("not a project")
    save(parse(WINCH), winch)
    assert winch.read_text() == render(parse(WINCH))
    assert (winch.parent / "winch.toml~").read_text() == "not a project"


def test_the_hand_of_another_file_can_be_taken(tmp_path: Path) -> None:
    path = tmp_path / "copy.toml"
    path.write_text(FILES["bracket"])
    save(apply(parse(WINCH), CHANGE), path, like=WINCH)
    assert path.read_text() == WINCH.replace("12000.0", "13500.0")


def test_a_project_that_no_file_could_be_read_with_is_not_written(winch: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(store, "LARGEST", 100)
    with pytest.raises(SaveError, match="it would have"):
        save(parse(WINCH), winch)


def test_a_file_written_at_once_needs_no_project(tmp_path: Path) -> None:
    path = tmp_path / "any"
    atomic.replace_file(path, b"1")
    atomic.replace_file(path, b"2")
    assert (path.read_bytes(), (tmp_path / "any~").read_bytes()) == (b"2", b"1")
