"""Saves of edited files, and what they changed."""

from __future__ import annotations

import difflib

from engine.edits import Edit, apply
from engine.store import parse, saved_text


def after(text: str, *edits: Edit) -> str:
    """The file after edits and a save, which says what the edited project says."""
    project = parse(text)
    for edit in edits:
        project = apply(project, edit)
    new = saved_text(project, text)
    assert parse(new).same(project)
    return new


def lines(before: str, after: str) -> tuple[list[str], list[str]]:
    """Lines that went and lines that came."""
    diff = list(difflib.ndiff(before.split("\n"), after.split("\n")))
    return [line[2:] for line in diff if line[0] == "-"], [line[2:] for line in diff if line[0] == "+"]
