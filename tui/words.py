"""Phrases of the screen and the command that name parts of the model."""

from __future__ import annotations

from engine.envelope import Controls, Governing, Verdict
from engine.material import LIMITS, Limit, Theory
from engine.project import Project

THEORY: dict[str, str] = {"tresca": "Tresca", "von-mises": "von Mises", "both": "both theories"}
SHORT_THEORY: dict[str, str] = {"tresca": "Tresca", "von-mises": "Mises", "both": "both"}
SHORT_LIMIT: dict[str, str] = {"yield": "yield", "ultimate": "ult."}
VERDICT: dict[Verdict, str] = {
    "clear": "clear",
    "thin": "thin",
    "split": "split",
    "short": "short",
    "no-data": "no data",
}
CAUTION = (
    "A margin is only as good as its loads, its stresses and its material data. "
    "Local codes and a licensed engineer decide."
)


def theory(name: Theory | Controls) -> str:
    """A theory in full."""
    return THEORY[name]


def governing_case(project: Project, found: Governing) -> str:
    """Name of the governing case; a dot where nothing is known."""
    return project.checked[found.case].name if found.known else "."


def limit_word(place: int) -> Limit:
    """The limit at a place of LIMITS."""
    return LIMITS[place]


def plural(count: int, one: str, many: str = "") -> str:
    """ "1 edit", "3 edits"."""
    return f"{count} {one if count == 1 else many or one + 's'}"
