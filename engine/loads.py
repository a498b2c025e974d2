"""Loads, cases and how combinations resolve to magnitudes."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np

from engine.frozen import Array, FrozenMap

Sense = Literal["fixed", "reversible", "optional"]
SENSES: tuple[Sense, ...] = ("fixed", "reversible", "optional")

VANISHES = 1e-12
"""A combined magnitude within this part of the sum of its parts' sizes is zero (DESIGN)."""


@dataclass(frozen=True, slots=True)
class Load:
    """One basic load with a magnitude per case."""

    name: str
    """Unique in the project."""
    label: str = ""
    """In words."""
    unit: str = ""
    """The project's unit of its kind; empty: a plain multiplier."""
    sense: Sense = "fixed"
    """Whether it acts as given, with either sign, or with and without."""


@dataclass(frozen=True, slots=True)
class Case:
    """A load case: magnitudes, a category, a temperature."""

    name: str
    """Unique in the project."""
    category: str
    """Name of a category."""
    label: str = ""
    """In words."""
    temperature: float | None = None
    """The project's temperature unit; None: not given."""
    loads: FrozenMap[float] = FrozenMap()
    """Magnitude by load; a load not named is zero."""
    combine: FrozenMap[float] = FrozenMap()
    """Factor by case: adds those cases' loads times the factor, through any depth."""
    check: bool = True
    """False: an ingredient of combinations, not a column of margins."""

    @property
    def acts(self) -> bool:
        """Whether it names a non-zero load of its own."""
        return any(self.loads.values())


class Cycle(ValueError):
    """Cases combine one another in a ring."""

    def __init__(self, names: Sequence[str]) -> None:
        super().__init__(" -> ".join(names))
        self.names = tuple(names)


def dependency_order(cases: Mapping[str, Case]) -> list[str]:
    """Names so that every ingredient comes before what combines it.

    Raises Cycle (with the ring's names, first one repeated at the end). Unknown ingredients are passed over.
    Iterative, so that a long chain of combinations needs no deep stack.
    """
    order: list[str] = []
    state: dict[str, int] = {}
    for start in cases:
        trail = [(start, iter(cases[start].combine))] if start not in state else []
        state.setdefault(start, 1)
        while trail:
            name, rest = trail[-1]
            for ingredient in rest:
                if ingredient not in cases:
                    continue
                if state.get(ingredient) == 1:
                    names = [entry[0] for entry in trail]
                    raise Cycle([*names[names.index(ingredient) :], ingredient])
                if ingredient not in state:
                    state[ingredient] = 1
                    trail.append((ingredient, iter(cases[ingredient].combine)))
                    break
            else:
                trail.pop()
                state[name] = 2
                order.append(name)
    return order


def users_of(cases: Iterable[Case]) -> dict[str, list[str]]:
    """Names of the cases that combine a case, by its name; a case that none combines is left out."""
    users: dict[str, list[str]] = {}
    for case in cases:
        for ingredient in case.combine:
            users.setdefault(ingredient, []).append(case.name)
    return users


def dependents(users: Mapping[str, Sequence[str]], changed: Iterable[str]) -> set[str]:
    """The changed names and all that combine one of them, through any depth."""
    found: set[str] = set()
    todo = list(changed)
    while todo:
        name = todo.pop()
        if name not in found:
            found.add(name)
            todo.extend(users.get(name, ()))
    return found


class LoadSets:
    """Resolved magnitudes of every case: what each load amounts to after combination."""

    __slots__ = ("cases", "columns", "magnitudes", "order", "place", "sizes", "users")

    def __init__(self, loads: Sequence[Load], cases: Sequence[Case]) -> None:
        """Raises Cycle where cases combine in a ring; KeyError where one names an unknown load or case."""
        self.cases = tuple(cases)
        self.place = {case.name: i for i, case in enumerate(cases)}
        self.order = [self.place[name] for name in dependency_order({case.name: case for case in cases})]
        self.magnitudes: Array = np.zeros((len(cases), len(loads)))
        """(cases, loads), load units; a sum that cancels to within rounding is exactly zero."""
        self.sizes: Array = np.zeros((len(cases), len(loads)))
        """(cases, loads): sums of the absolute values of the parts."""
        self.columns = {load.name: i for i, load in enumerate(loads)}
        self.users = users_of(cases)
        self._resolve(self.order)

    def _resolve(self, places: Iterable[int]) -> None:
        plain: dict[tuple[str, ...], list[int]] = {}
        combined = []
        for place in places:
            case = self.cases[place]
            if case.combine:
                combined.append(place)
            else:
                plain.setdefault(tuple(case.loads), []).append(place)
        for names, alike in plain.items():
            self._fill(names, alike)
        with np.errstate(over="ignore", invalid="ignore"):
            for place in combined:
                self.magnitudes[place], self.sizes[place] = self._resolved(self.cases[place])

    def _fill(self, names: tuple[str, ...], places: list[int]) -> None:
        """Magnitudes of cases that combine nothing and name the same loads, in one go."""
        self.magnitudes[places] = 0.0
        if names:
            columns = [self.columns[name] for name in names]
            values = [list(self.cases[place].loads.values()) for place in places]
            self.magnitudes[np.array(places)[:, None], columns] = values
        self.sizes[places] = np.abs(self.magnitudes[places])

    def updated(self, cases: Sequence[Case], changed: Sequence[int]) -> tuple[LoadSets, list[int]]:
        """The sets after some cases, at the places given, became others of the same names.

        Returns them and the places of all cases that may have changed, ingredients before what combines them.
        """
        new = object.__new__(LoadSets)
        new.cases, new.columns, new.place = tuple(cases), self.columns, self.place
        new.magnitudes, new.sizes = self.magnitudes.copy(), self.sizes.copy()
        if all(cases[i].combine == self.cases[i].combine for i in changed):
            new.order, new.users = self.order, self.users
        else:
            new.order = [self.place[name] for name in dependency_order({case.name: case for case in cases})]
            new.users = users_of(cases)
        reached = dependents(new.users, [cases[i].name for i in changed])
        affected = [self.place[name] for name in reached]
        if len(affected) > 1:
            affected = [place for place in new.order if cases[place].name in reached]
        new._resolve(affected)
        return new, affected

    def relabelled(self, cases: Sequence[Case]) -> LoadSets:
        """The sets of cases that differ in nothing that resolves: same names, loads and combinations."""
        new = object.__new__(LoadSets)
        new.cases, new.columns, new.place, new.order, new.users = (
            tuple(cases),
            self.columns,
            self.place,
            self.order,
            self.users,
        )
        new.magnitudes, new.sizes = self.magnitudes, self.sizes
        return new

    def reached(self, changed: Iterable[str]) -> set[str]:
        """Names of the cases given and of all that combine one of them."""
        return dependents(self.users, changed)

    def ingredients(self, places: Iterable[int]) -> list[int]:
        """The cases at the places and all that they combine through any depth, ingredients first."""
        found: set[int] = set()
        todo = list(places)
        while todo:
            place = int(todo.pop())
            if place not in found:
                found.add(place)
                todo += [self.place[name] for name in self.cases[place].combine]
        if not self.users:
            return sorted(found)
        return [place for place in self.order if place in found]

    def _resolved(self, case: Case) -> tuple[Array, Array]:
        """Magnitudes and sizes of a combination from its own loads and its already resolved ingredients."""
        total = np.zeros(len(self.columns))
        for name, value in case.loads.items():
            total[self.columns[name]] = value
        size = np.abs(total)
        for name, factor in case.combine.items():
            total = total + factor * self.magnitudes[self.place[name]]
            size = size + abs(factor) * self.sizes[self.place[name]]
        total[(np.abs(total) <= VANISHES * size) & np.isfinite(size)] = 0.0  # what overflowed is not zero
        return total, size
