"""Random edits of a project: of every kind, on every key, among them many that are refused."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from random import Random
from typing import Any

from engine.edits import Acknowledge, Edit, Insert, Move, Refusal, Remove, Rename, Set, Withdraw, apply
from engine.project import KINDS, Kind, Project
from engine.schema import Codec

NAMES = ("x", "ü ber", "a.b", 'q"q', "it's", "P 1", "#1", "Z9")
TEXTS = ("", "new text", "l1\nl2", 'say "x"', "C:\\dir", "\ttab")
NUMBERS = (0.0, 1.0, 12.5, -3.25, 1e-7, 12000.0, 1e20, 3, 0.1)
TABLES = ([[20, 300.0]], [[20.0, 210.0], [60.0, 200.0], [100.0, 190.0]], [[0, 1], [20, 300.0], [100, 250], [300, 200]])
FACTORS = (1.5, {"tresca": 1.5, "von-mises": 1.5}, {"tresca": 1.25, "von-mises": 1.5}, 2)
KEYS: dict[str, tuple[str, ...]] = {
    "project": ("title", "revision", "notes", "thin", "components", "accept"),
    "category": ("label", "yield", "ultimate", "loads"),
    "material": ("yield", "ultimate", "range", "yield-at", "source", "elongation"),
    "load": ("label", "unit", "sense"),
    "case": ("label", "temperature", "loads", "loads.", "loads.", "combine.", "check"),
    "section": ("not-felt", "resultants", "d"),
    "point": ("label", "factor", "temperature", "source", "not-felt", "per-load.", "stress.", "stress", "kt"),
}
"""Keys to set; with a point, one in the table of it."""


def edited(project: Project, seed: int, count: int) -> tuple[Project, list[Edit]]:
    """A project after as many random edits, without those that were refused."""
    chance = Random(seed)
    done: list[Edit] = []
    for _ in range(count):
        edit = _Drawn(project, chance).edit()
        try:
            project = apply(project, edit)
        except Refusal:
            continue
        done.append(edit)
    return project, done


@dataclass(frozen=True)
class _Drawn:
    """What is drawn for one edit."""

    project: Project
    """Before the edit."""
    chance: Random
    """The only source of chance."""

    def edit(self) -> Edit:
        """Any edit."""
        kinds = ("project", "acknowledge", *KINDS, "case", "case", "point", "point")
        kind = self.chance.choice(kinds)
        if kind == "acknowledge":
            return self.signed()
        if kind == "project" or self.chance.random() > 0.45:
            return self.set(kind)
        return self.structural(self.chance.choice([kind for kind in KINDS if self.project.names(kind)]))

    def signed(self) -> Edit:
        """A caution taken on, or taken back."""
        given = self.project.acknowledgements
        if given and self.chance.random() < 0.5:
            one = self.chance.choice(given)
            return Withdraw(one.point, one.caution)
        caution = self.chance.choice(["elongation", "temperature"])
        return Acknowledge(self.name("point"), caution, "x y", "because", self.chance.choice([None, 0]))

    def structural(self, kind: Kind) -> Edit:
        """A part renamed, removed, moved or added."""
        name = self.name(kind)
        document = {**Codec().write(kind, self.project.find(kind, name)), "name": self.chance.choice(NAMES)}
        place = self.chance.randrange(6)
        edits: Sequence[Edit] = (
            Rename(kind, name, self.chance.choice(NAMES)),
            Remove(kind, name),
            Move(kind, name, place),
            Insert(kind, place, document),
        )
        return self.chance.choice(edits)

    def name(self, kind: Kind) -> str:
        """The name of some part; one that is not there, where there is none."""
        return self.chance.choice(self.project.names(kind) or ("none",))

    def set(self, kind: str) -> Edit:
        """One key given a value, or taken out."""
        key, dot, _ = self.chance.choice(KEYS[kind]).partition(".")
        inner: Kind = "load" if key in ("loads", "per-load") else "case"
        path = (key, self.name(inner)) if dot else (key,)
        name = "" if kind == "project" else self.name(kind)  # type: ignore[arg-type]
        gone = self.chance.random() < 0.2
        return Set(kind, name, path, None if gone else self.value(kind, key, bool(dot)))

    def value(self, kind: str, key: str, inner: bool) -> Any:
        """A value for a key; for one in a table, a number or a row."""
        if inner:
            return self.row() if key in ("per-load", "stress") else self.number()
        options: dict[str, Callable[[], Any]] = {
            "yield": lambda: self.chance.choice(FACTORS) if kind == "category" else self.chance.choice([345.0, 235, 1]),
            "ultimate": lambda: self.chance.choice(FACTORS) if kind == "category" else 470.5,
            "loads": lambda: self.chance.choice(["design", "characteristic"]) if kind == "category" else self.loads(),
            "temperature": lambda: self.chance.choice([20.0, 60, self.by_case()]) if kind == "point" else 20,
            "not-felt": lambda: self.chance.choice(["rest", [], [self.name("load")], list(self.project.names("load"))]),
            "resultants": lambda: {key: self.loads() for key in self.chance.sample(["N", "Mz", "T"], 2)},
            "stress": lambda: {name: self.row() for name in self.project.names("case") if self.chance.random() < 0.5},
        }
        return options[key]() if key in options else self.chance.choice(PLAIN.get(key, TEXTS))

    def number(self) -> float:
        """Any number."""
        return self.chance.choice(NUMBERS)

    def row(self) -> list[float]:
        """Any row of stress."""
        return [self.number() for _ in range(6)]

    def loads(self) -> dict[str, float]:
        """Magnitudes of some loads."""
        return {name: self.number() for name in self.project.names("load") if self.chance.random() < 0.5}

    def by_case(self) -> dict[str, float]:
        """Temperatures of some cases."""
        return {name: 30.0 for name in self.project.names("case") if self.chance.random() < 0.5}


PLAIN: dict[str, Sequence[Any]] = {
    "thin": (0.2, 0, 0.1),
    "components": ("zz xx yy xy yz zx", "xx yy zz xy yz zx"),
    "accept": ("both", "tresca", "von-mises"),
    "range": ([-20.0, 100.0], [20, 20]),
    "yield-at": TABLES,
    "elongation": (0.2, 1, 0.03),
    "unit": ("", "N"),
    "sense": ("fixed", "reversible"),
    "check": (True, False),
    "d": (60.0, 61, 72.5),
    "factor": (1.0, 1.25, {"yield": 1.2, "ultimate": 1.0}, {"yield": 1.2}),
    "kt": ({"Mz": 1.5}, {"Mz": 1.7, "N": 2.0}, {}),
}
"""Values of the keys that have the same for every kind; a key that is not here is a text."""
