"""What stress may reach: strength over required factor, by point, case, limit and theory."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from engine.frozen import Array, FrozenMap
from engine.loads import Case
from engine.material import LIMITS, THEORIES, strengths
from engine.project import Point, Project


class Rating:
    """Strengths and factors of a project's cells. Points that share material and temperature share a class.

    Arrays by limit and theory stand in the order of LIMITS and THEORIES.
    """

    __slots__ = ("allowable", "asked", "classes", "factor", "of_point", "required", "strength", "temperature")

    required: Array
    """(2, 2, cases): required factors; NaN where a limit is not asked."""
    asked: npt.NDArray[np.bool_]
    """(2, cases): whether the case's category asks for the limit."""
    strength: Array
    """(2, 2, classes, cases), stress unit; NaN where not known."""
    allowable: Array
    """(2, 2, classes, cases): strength over required factor; NaN where not known or not asked."""
    temperature: Array
    """(classes, cases); NaN where not given."""
    of_point: npt.NDArray[np.intp]
    """(points,): class of each."""
    factor: Array
    """(2, points): point factors by limit."""

    def __init__(self, project: Project) -> None:
        cases = project.checked
        self._set_required(project, cases)
        plain = np.array([np.nan if c.temperature is None else c.temperature for c in cases], dtype=np.float64)
        self.classes: dict[tuple[str, float | FrozenMap[float] | None], int] = {}
        self._set_points(project.points)
        self.temperature = np.empty((len(self.classes), len(cases)))
        self.strength = np.empty((2, 2, len(self.classes), len(cases)))
        materials = {material.name: material for material in project.materials}
        for (name, given), row in self.classes.items():
            self.temperature[row] = _cell_temperature(given, plain, cases)
            found = strengths(materials[name], self.temperature[row])
            for i, limit in enumerate(LIMITS):
                for j, theory in enumerate(THEORIES):
                    self.strength[i, j, row] = found[limit][theory]
        self.allowable = self.strength / self.required[:, :, None, :]

    def _set_required(self, project: Project, cases: Sequence[Case]) -> None:
        found = np.full((len(project.categories), 2, 2), np.nan)
        for place, category in enumerate(project.categories):
            for i, limit in enumerate(LIMITS):
                factors = category.required(limit)
                if factors is not None:
                    found[place, i] = factors.tresca, factors.von_mises
        place_of = {category.name: i for i, category in enumerate(project.categories)}
        of_case = np.array([place_of[case.category] for case in cases], dtype=np.intp)
        self.required = np.ascontiguousarray(found[of_case].transpose(1, 2, 0))
        self.asked = ~np.isnan(self.required[:, 0])

    def _set_points(self, points: Sequence[Point]) -> None:
        classes = self.classes
        keys = [(point.material, point.temperature) for point in points]
        self.of_point = np.array([classes.setdefault(key, len(classes)) for key in keys], dtype=np.intp)
        self.factor = np.array(
            [[p.factor.yield_ for p in points], [p.factor.ultimate for p in points]], dtype=np.float64
        )

    @property
    def limits(self) -> list[int]:
        """Places in LIMITS of those that any case asks for; yield always is."""
        return [0, 1] if self.asked[1].any() else [0]


def _cell_temperature(given: float | FrozenMap[float] | None, plain: Array, cases: Sequence[Case]) -> Array:
    """The point's temperature, else the case's, by case."""
    if given is None:
        return plain
    if isinstance(given, FrozenMap):
        return np.array([given.get(case.name, plain[i]) for i, case in enumerate(cases)], dtype=np.float64)
    return np.full_like(plain, given)
