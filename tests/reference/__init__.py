"""Published check values: figures with their source and with how far the figure itself was seen (its mark)."""

import tomllib
from functools import cache
from pathlib import Path
from typing import Any

Check = dict[str, Any]


@cache
def _checks() -> dict[str, Check]:
    entries = tomllib.loads(Path(__file__).with_name("check_values.toml").read_text(encoding="utf-8"))["check"]
    return {entry["id"]: entry for entry in entries}


def check(id: str) -> Check:
    """The entry named `id`: inputs, expected, tolerance (absolute), source, mark, units; KeyError if there is none."""
    return _checks()[id]


def checks(topic: str) -> list[Check]:
    """All entries of a topic, such as "1 criteria"."""
    return [entry for entry in _checks().values() if entry["topic"] == topic]
