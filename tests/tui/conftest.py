"""What the program remembers of its user stays in the folder of the test; the first caution counts as read."""

from __future__ import annotations

from pathlib import Path

import pytest

from tui import state


@pytest.fixture(autouse=True)
def state_home(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """The state folder of this test."""
    home = tmp_path / "state"
    monkeypatch.setenv("XDG_STATE_HOME", str(home))
    state.mark_caution_read()
    return home
