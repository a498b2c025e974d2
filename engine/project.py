"""The immutable Project and its parts. An edit makes a new one that shares all that did not change."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field, fields
from typing import Literal

from engine.frozen import FrozenMap, StressRows
from engine.loads import Case, Load
from engine.material import Limit, Material, Theory
from engine.sections import Section
from engine.stress import COMPONENTS

Accept = Literal["both", "tresca", "von-mises"]
Carried = Literal["characteristic", "design"]
Rest = Literal["rest"]
Kind = Literal["category", "material", "load", "case", "section", "point"]
KINDS: tuple[Kind, ...] = ("category", "material", "load", "case", "section", "point")


@dataclass(frozen=True, slots=True)
class Settings:
    """What holds for the whole project."""

    title: str
    """Shown and printed."""
    units: str
    """Name of a unit system of engine.units."""
    accept: Accept
    """Which theory must have a margin of at least zero."""
    thin: float
    """A margin below this, though not below zero, is thin; at least 0."""
    revision: str = ""
    """Shown and printed."""
    components: tuple[str, ...] = COMPONENTS
    """Order of every stress row in the file; in memory rows stand in engine.stress.COMPONENTS."""
    notes: str = ""
    """Free text."""

    @property
    def accepted(self) -> tuple[Theory, ...]:
        """The theories whose margins decide."""
        return ("tresca", "von-mises") if self.accept == "both" else (self.accept,)


@dataclass(frozen=True, slots=True)
class Factors:
    """Required factors of one limit."""

    tresca: float
    """For maximum shear stress, above 0."""
    von_mises: float
    """For distortion energy, above 0."""

    def of(self, theory: Theory) -> float:
        """The factor of a theory."""
        return self.tresca if theory == "tresca" else self.von_mises


@dataclass(frozen=True, slots=True)
class Category:
    """A kind of case that shares its required factors."""

    name: str
    """Unique in the project."""
    yield_: Factors
    """Required against yield."""
    ultimate: Factors | None = None
    """Required against ultimate; None: not asked."""
    label: str = ""
    """In words."""
    loads: Carried | None = None
    """Whether case loads already carry partial factors ("design"); None: not said."""

    def required(self, limit: Limit) -> Factors | None:
        """The factors of a limit, None where it is not asked."""
        return self.yield_ if limit == "yield" else self.ultimate


@dataclass(frozen=True, slots=True)
class PointFactor:
    """Extra factor on stress at one point (fitting, weld, casting)."""

    yield_: float = 1.0
    """Against yield, above 0."""
    ultimate: float = 1.0
    """Against ultimate, above 0."""

    def of(self, limit: Limit) -> float:
        """The factor of a limit."""
        return self.yield_ if limit == "yield" else self.ultimate


@dataclass(frozen=True, eq=False, slots=True)
class Point:
    """A check point: a place on the part where stress is known. Holds arrays: compare with `same()`."""

    name: str
    """Unique in the project."""
    material: str
    """Name of a material."""
    label: str = ""
    """In words."""
    part: str = ""
    """Groups points; empty: none."""
    factor: PointFactor = PointFactor()
    """Extra factors on stress."""
    temperature: float | FrozenMap[float] | None = None
    """Overrides the cases' (a number: all of them; a map: the cases named); None: the cases' hold."""
    source: str = ""
    """Where the stresses come from."""
    section: str = ""
    """Name of a section that gives stress by formula; empty: none."""
    at: tuple[float, float] | None = None
    """y, z on the section, length unit."""
    kt: FrozenMap[float] = FrozenMap()
    """Stress-concentration factor by resultant."""
    kt_limits: tuple[Limit, ...] | None = None
    """Limits on which kt acts; None: all."""
    axes: tuple[tuple[float, ...], tuple[float, ...]] | None = None
    """x and y directions of the point's rows in the axes of its section; None: not said."""
    not_felt: tuple[str, ...] | Rest = ()
    """Loads that the point does not feel; "rest": all that per_load does not name."""
    per_load: StressRows = field(default_factory=StressRows)
    """Stress per unit of a load."""
    stress: StressRows = field(default_factory=StressRows)
    """Stress given directly for a case."""

    @property
    def linear(self) -> bool:
        """Whether loads make its stress (a direct row then adds to it); otherwise rows by case are all there is."""
        return bool(self.section) or len(self.per_load) > 0

    def same(self, other: Point) -> bool:
        """Whether all fields are equal."""
        return self is other or all(_alike(getattr(self, f.name), getattr(other, f.name)) for f in fields(self))


def _alike(a: object, b: object) -> bool:
    if isinstance(a, StressRows) and isinstance(b, StressRows):
        return a.same(b)
    return a == b


@dataclass(frozen=True, slots=True)
class Acknowledgement:
    """A blocking caution taken on by a person."""

    point: str
    """Name of the point."""
    caution: str
    """Name of the caution."""
    by: str
    """Who takes it on."""
    reason: str
    """Why it may be taken on."""


Entity = Category | Material | Load | Case | Section | Point


@dataclass(frozen=True, eq=False, slots=True)
class Project:
    """Everything a project file says. Holds arrays: compare with `same()`."""

    settings: Settings
    """The `[project]` table."""
    categories: tuple[Category, ...] = ()
    """In file order, as all that follow."""
    materials: tuple[Material, ...] = ()
    loads: tuple[Load, ...] = ()
    cases: tuple[Case, ...] = ()
    sections: tuple[Section, ...] = ()
    points: tuple[Point, ...] = ()
    acknowledgements: tuple[Acknowledgement, ...] = ()

    def of(self, kind: Kind) -> tuple[Entity, ...]:
        """All parts of a kind, in file order."""
        found: tuple[Entity, ...] = getattr(self, PLURAL[kind])
        return found

    def names(self, kind: Kind) -> tuple[str, ...]:
        """Names of all parts of a kind, in file order."""
        return tuple(entity.name for entity in self.of(kind))

    def find(self, kind: Kind, name: str) -> Entity:
        """The part of that name; KeyError where there is none."""
        for entity in self.of(kind):
            if entity.name == name:
                return entity
        raise KeyError(name)

    def index(self, kind: Kind, name: str) -> int:
        """Place of the part of that name; KeyError where there is none."""
        for place, entity in enumerate(self.of(kind)):
            if entity.name == name:
                return place
        raise KeyError(name)

    @property
    def checked(self) -> tuple[Case, ...]:
        """The cases that are columns of margins."""
        return tuple(case for case in self.cases if case.check)

    def entities(self) -> Iterator[tuple[Kind, Entity]]:
        """Every part with its kind."""
        for kind in KINDS:
            for entity in self.of(kind):
                yield kind, entity

    def same(self, other: Project) -> bool:
        """Whether both say the same, order of parts included."""
        if self is other:
            return True
        if (self.settings, self.acknowledgements) != (other.settings, other.acknowledgements):
            return False
        plain = ("categories", "materials", "loads", "cases", "sections")
        if any(getattr(self, name) != getattr(other, name) for name in plain):
            return False
        pairs = zip(self.points, other.points, strict=False)
        return len(self.points) == len(other.points) and all(a.same(b) for a, b in pairs)


PLURAL: dict[Kind, str] = {
    "category": "categories",
    "material": "materials",
    "load": "loads",
    "case": "cases",
    "section": "sections",
    "point": "points",
}
