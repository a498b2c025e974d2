"""Immutable containers that the parts of a Project are made of."""

from __future__ import annotations

from collections.abc import ItemsView, Iterable, Iterator, KeysView, Mapping, ValuesView
from typing import Generic, TypeVar

import numpy as np
import numpy.typing as npt

V = TypeVar("V")
Array = npt.NDArray[np.float64]


class FrozenMap(Mapping[str, V], Generic[V]):
    """A mapping that cannot change; keeps its order, compares without it (as TOML tables do)."""

    __slots__ = ("_items",)

    def __init__(self, items: Mapping[str, V] | Iterable[tuple[str, V]] = ()) -> None:
        self._items: dict[str, V] = dict(items)

    def __getitem__(self, key: str) -> V:
        return self._items[key]

    def __iter__(self) -> Iterator[str]:
        return iter(self._items)

    def __len__(self) -> int:
        return len(self._items)

    def __contains__(self, key: object) -> bool:
        return key in self._items

    # Mapping would look every key up anew; a project of many cases asks for these often.

    def keys(self) -> KeysView[str]:
        return self._items.keys()

    def values(self) -> ValuesView[V]:
        return self._items.values()

    def items(self) -> ItemsView[str, V]:
        return self._items.items()

    def __eq__(self, other: object) -> bool:
        return isinstance(other, FrozenMap) and self._items == other._items

    def __hash__(self) -> int:
        return hash(frozenset(self._items))

    def __repr__(self) -> str:
        return f"FrozenMap({self._items!r})"

    def renamed(self, old: str, new: str) -> FrozenMap[V]:
        """The same map with one key named anew, in its place; itself where the key is absent."""
        if old not in self._items:
            return self
        return FrozenMap((new if key == old else key, value) for key, value in self._items.items())


class StressRows:
    """Named rows of stress of one point, kept as one array.

    Not comparable by `==` (it holds an array): use `same()`.
    """

    __slots__ = ("_place", "array", "names")

    names: tuple[str, ...]
    """What each row belongs to: a load (stress per unit of it) or a case (stress), each once."""
    array: Array
    """(rows, 6), read-only, components in the engine's order, tension positive."""

    def __init__(self, names: Iterable[str] = (), array: npt.ArrayLike | None = None) -> None:
        self.names = tuple(names)
        rows = np.array(array if array is not None and self.names else np.empty((0, 6)), dtype=np.float64)
        if rows.shape != (len(self.names), 6):
            raise ValueError(f"{len(self.names)} names and an array of shape {rows.shape}")
        rows.setflags(write=False)
        self.array = rows
        self._place = {name: i for i, name in enumerate(self.names)}
        if len(self._place) != len(self.names):
            raise ValueError("a name stands twice")

    def __len__(self) -> int:
        return len(self.names)

    def __contains__(self, name: object) -> bool:
        return name in self._place

    def __iter__(self) -> Iterator[str]:
        return iter(self.names)

    def index(self, name: str) -> int:
        """Row of a name, -1 where it has none."""
        return self._place.get(name, -1)

    def get(self, name: str) -> Array | None:
        """The (6,) row of a name, or None."""
        place = self._place.get(name)
        return None if place is None else self.array[place]

    def same(self, other: StressRows) -> bool:
        """Whether the names have the same rows, in any order."""
        if self is other:
            return True
        if self.names == other.names:
            return np.array_equal(self.array, other.array)
        if set(self.names) != set(other.names):
            return False
        order = [other.index(name) for name in self.names]
        return np.array_equal(self.array, other.array[order])

    def put(self, name: str, row: npt.ArrayLike | None) -> StressRows:
        """The rows with one set (in its place, or at the end) or, with None, taken out."""
        place = self._place.get(name)
        if row is None:
            if place is None:
                return self
            keep = [i for i in range(len(self.names)) if i != place]
            return StressRows([self.names[i] for i in keep], self.array[keep])
        if place is None:
            return StressRows((*self.names, name), np.vstack([self.array, np.asarray(row, dtype=np.float64)[None]]))
        array = self.array.copy()
        array[place] = row
        return StressRows(self.names, array)

    def renamed(self, old: str, new: str) -> StressRows:
        """The same rows with one named anew; itself where the name is absent."""
        if old not in self._place:
            return self
        return StressRows([new if name == old else name for name in self.names], self.array)
