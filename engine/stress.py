"""Stress as component arrays: their order, the tensor they stand for, and turning them to other axes.

Arrays are component-first, shape (6, ...), in the order of COMPONENTS, float64. Tension is positive; the shears
are tensor components (xy is tau_xy, not the engineering shear strain's twin), so xy is also yx.
"""

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]

COMPONENTS = ("xx", "yy", "zz", "xy", "yz", "zx")
"""The one order of stress components inside the engine."""

ROWS, COLUMNS = (0, 1, 2, 0, 1, 2), (0, 1, 2, 1, 2, 0)
"""Row and column of each component in the 3x3 tensor."""

SQUARE = 1e-6
"""How far from perpendicular two given directions may be; typed direction cosines are rarely exact."""


def state_array(stress: ArrayLike) -> Floats:
    """`stress` as a float64 array of shape (6, ...); ValueError if its first axis is not 6 long."""
    array = np.asarray(stress, dtype=np.float64)
    if array.ndim == 0 or array.shape[0] != len(COMPONENTS):
        raise ValueError(f"stress has shape {array.shape}, expected 6 components first: {' '.join(COMPONENTS)}")
    return array


def tensor(stress: ArrayLike) -> Floats:
    """The symmetric tensors, shape (..., 3, 3), of stress components, shape (6, ...); ValueError for another shape."""
    array = state_array(stress)
    result = np.empty((*array.shape[1:], 3, 3))
    for value, row, column in zip(array, ROWS, COLUMNS, strict=True):
        result[..., row, column] = value
        result[..., column, row] = value
    return result


def components(tensor: ArrayLike) -> Floats:
    """The components, shape (6, ...), of symmetric tensors, shape (..., 3, 3); ValueError for another shape.

    The shears are read above the diagonal or from its (z, x) corner; a tensor that is not symmetric is the caller's
    mistake and is not averaged away.
    """
    array = np.asarray(tensor, dtype=np.float64)
    if array.shape[-2:] != (3, 3):
        raise ValueError(f"tensor has shape {array.shape}, expected (..., 3, 3)")
    return np.stack([array[..., row, column] for row, column in zip(ROWS, COLUMNS, strict=True)])


def permutation(order: str | Sequence[str]) -> NDArray[np.intp]:
    """Positions of xx, yy, zz, xy, yz, zx in rows written in `order`, so that `row[permutation(order)]` is canonical.

    `order` is a text such as "xx yy zz xy yz zx" or a sequence of names. ValueError names the component that is
    unknown, doubled or missing.
    """
    names = order.split() if isinstance(order, str) else list(order)
    for name in names:
        if name not in COMPONENTS:
            raise ValueError(f"unknown stress component {name!r}, expected {' '.join(COMPONENTS)} in any order")
        if names.count(name) > 1:
            raise ValueError(f"stress component {name!r} is named {names.count(name)} times")
    missing = [name for name in COMPONENTS if name not in names]
    if missing:
        raise ValueError(f"stress component {', '.join(map(repr, missing))} is missing")
    return np.array([names.index(name) for name in COMPONENTS], dtype=np.intp)


def rotated(stress: ArrayLike, axes: ArrayLike) -> Floats:
    """The same stress, shape (6, ...), by components in other axes.

    `axes` is a rotation matrix, shape (3, 3), whose rows are the directions of the new axes in the old ones, as
    `frame` makes it. ValueError if it is no rotation within 1e-6.
    """
    turn = np.asarray(axes, dtype=np.float64)
    if turn.shape != (3, 3):
        raise ValueError(f"axes have shape {turn.shape}, expected (3, 3)")
    if not (np.abs(turn @ turn.T - np.eye(3)).max() <= SQUARE and np.linalg.det(turn) > 0.0):
        raise ValueError("axes are not three perpendicular unit directions of a right-handed frame")
    return components(turn @ tensor(stress) @ turn.T)


def frame(x: ArrayLike, y: ArrayLike) -> Floats:
    """The right-handed orthonormal axes, shape (3, 3) with a direction per row, of the x and y directions given.

    Lengths do not matter. ValueError if a direction is not three finite numbers, is zero, or if the two are not
    perpendicular within 1e-6; a smaller slant is taken out of y.
    """
    first, second = _unit(x, "x"), _unit(y, "y")
    slant = float(first @ second)
    if abs(slant) > SQUARE:
        raise ValueError(f"the x and y directions are not perpendicular (cosine {slant:.3g})")
    second = _unit(second - slant * first, "y")
    return np.stack([first, second, np.cross(first, second)])


def _unit(direction: ArrayLike, name: str) -> Floats:
    vector = np.asarray(direction, dtype=np.float64)
    if vector.shape != (3,):
        raise ValueError(f"the {name} direction has shape {vector.shape}, expected 3 numbers")
    if not np.isfinite(vector).all():
        raise ValueError(f"the {name} direction is not finite")
    largest = np.abs(vector).max()
    if largest == 0.0:
        raise ValueError(f"the {name} direction is zero")
    vector = vector / largest  # first, so that no square overflows or vanishes
    unit: Floats = vector / np.sqrt(vector @ vector)
    return unit


def mean(stress: ArrayLike) -> Floats:
    """The mean (hydrostatic) stress (xx + yy + zz) / 3, shape (...), of components, shape (6, ...)."""
    xx, yy, zz = state_array(stress)[:3] * 0.25  # a power of two: the sum of three large stresses stays finite
    third: Floats = (xx + yy + zz) / 3.0 * 4.0
    return third
