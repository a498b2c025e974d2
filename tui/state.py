"""What the program remembers of its user between runs: recent projects, and that the caution was read."""

from __future__ import annotations

import json
import os
from pathlib import Path

RECENT = 12
"""How many projects are remembered."""


def folder() -> Path:
    """The user's XDG state folder for this program."""
    base = os.environ.get("XDG_STATE_HOME", "")
    root = Path(base) if base and Path(base).is_absolute() else Path.home() / ".local" / "state"
    return root / "hexlipse"


def _read() -> dict[str, object]:
    try:
        found = json.loads((folder() / "remembered.json").read_text(encoding="utf-8"))
    except (OSError, ValueError):
        return {}
    return found if isinstance(found, dict) else {}


def _write(remembered: dict[str, object]) -> None:
    """Remembering is a courtesy: where the folder cannot be written the program works on without it."""
    try:
        folder().mkdir(parents=True, exist_ok=True)
        (folder() / "remembered.json").write_text(json.dumps(remembered), encoding="utf-8")
    except OSError:
        return


def recent() -> list[Path]:
    """Projects opened lately, the last one first, without those that are gone."""
    found = _read().get("recent", [])
    paths = [Path(p) for p in found if isinstance(p, str)] if isinstance(found, list) else []
    return [path for path in paths if os.path.isfile(path)]


def remember(path: Path) -> None:
    """Put a project at the head of the recent ones."""
    full = path.resolve()
    others = [str(other) for other in recent() if other != full]
    _write(_read() | {"recent": [str(full), *others][:RECENT]})


def caution_read() -> bool:
    """Whether the caution of the first start was read."""
    return bool(_read().get("caution-read", False))


def mark_caution_read() -> None:
    """The caution was read."""
    _write(_read() | {"caution-read": True})
