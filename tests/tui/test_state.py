"""What the program remembers between runs."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from tui import state

from .app_tools import written


def remembered(home: Path) -> Path:
    return home / "hexlipse" / "remembered.json"


def test_the_state_folder_is_the_users_xdg_one(state_home: Path) -> None:
    assert state.folder() == state_home / "hexlipse"


@pytest.mark.parametrize("base", ["", "relative/folder"])
def test_without_a_usable_xdg_folder_it_lies_in_the_home(
    base: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("XDG_STATE_HOME", base)
    monkeypatch.setenv("HOME", str(tmp_path))
    assert state.folder() == tmp_path / ".local" / "state" / "hexlipse"


def test_the_last_project_stands_first_and_each_once(tmp_path: Path) -> None:
    paths = [written(tmp_path, "", f"{name}.toml") for name in "abc"]
    for path in (*paths, paths[0]):
        state.remember(path)
    assert [path.name for path in state.recent()] == ["a.toml", "c.toml", "b.toml"]


def test_no_more_than_twelve_are_remembered(tmp_path: Path) -> None:
    for number in range(state.RECENT + 3):
        state.remember(written(tmp_path, "", f"{number}.toml"))
    assert len(state.recent()) == state.RECENT == 12
    assert state.recent()[0].name == "14.toml"


def test_a_project_that_is_gone_is_not_offered(tmp_path: Path) -> None:
    path = written(tmp_path, "")
    state.remember(path)
    path.unlink()
    assert state.recent() == []


def test_a_relative_path_is_remembered_in_full(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    written(tmp_path, "")
    monkeypatch.chdir(tmp_path)
    state.remember(Path("project.toml"))
    monkeypatch.chdir("/")
    assert state.recent() == [tmp_path.resolve() / "project.toml"]


@pytest.mark.parametrize(
    "content",
    [
        "",  # nothing
        "{",  # not JSON
        "[1, 2]",  # not an object
        '{"recent": 3}',  # not a list
        '{"recent": [1, null, {}]}',  # not paths
        '{"recent": ["' + "x" * 5000 + '"]}',  # a name that no file system takes
        '{"recent": ["a\\u0000b"]}',  # nor this one
        "\udcff".encode("utf-8", "surrogateescape").decode("latin-1"),  # not UTF-8
    ],
)
def test_an_unreadable_memory_is_an_empty_one(content: str, state_home: Path) -> None:
    remembered(state_home).write_text(content, encoding="latin-1")
    assert state.recent() == []
    assert state.caution_read() is False


def test_a_memory_that_cannot_be_written_stops_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    blocked = written(tmp_path, "a file where the folder should be", "blocked")
    monkeypatch.setenv("XDG_STATE_HOME", str(blocked))
    state.mark_caution_read()
    state.remember(written(tmp_path, ""))
    assert state.caution_read() is False
    assert state.recent() == []


def test_the_caution_is_remembered_beside_the_projects(tmp_path: Path, state_home: Path) -> None:
    remembered(state_home).unlink()
    assert state.caution_read() is False
    state.remember(written(tmp_path, ""))
    state.mark_caution_read()
    assert state.caution_read() is True
    assert set(json.loads(remembered(state_home).read_text(encoding="utf-8"))) == {"recent", "caution-read"}
