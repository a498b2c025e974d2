"""The kernel: the equivalent stresses of Tresca and von Mises, the principal stresses and the greatest shears.

Both equivalents are worked from differences of stresses; no mean is subtracted and no eigenvalue solver called.
With d = (xx - yy, yy - zz, zz - xx), s = (xy, yz, zx), and i, j, k running cyclically:

    K   = 3 J2 = 3 sum s_i^2 - sum d_j d_k                     von Mises = sqrt(K)
    f_i = d_j d_k + s_i^2
    M   = d0 d1 d2 + sum d_i s_i^2
    A_i = s_i f_i - s_k (s_k s_i + d_j s_j)
    B_i = s_i f_i - s_j (s_i s_j - d_k s_k)
    D   = M^2 + 4 sum (A_i B_i + 4 (A_i - B_i)^2)

D is the discriminant 4 J2^3 - 27 J3^2 of the principal stresses, made as the Gram determinant of I, S and S^2: a sum
of squares, for 4 A B + 16 (A - B)^2 = (A + B)^2 + 15 (A - B)^2 (that the discriminant is a sum of squares is E. E.
Kummer's, 1843). So nothing cancels where two principal stresses nearly coincide, and uniaxial stress, the commonest
of all, is exactly there. Tresca is the largest root t of t^3 - K t = sqrt(D), which is well conditioned:
t = w von Mises, where w^3 - w = y = sqrt(D) / von Mises^3.

A plane state (zz = yz = zx = 0) takes a shorter way by the mean c and the radius R of Mohr's circle:
Tresca = max(2 R, |c| + R), von Mises = sqrt(c^2 + 3 R^2).

Stress arrays are component-first, (6, ...), as in engine.stress, tension positive. Every result has the unit of the
stress. A state that holds a NaN or an infinity gives NaN and touches no other state. What a state gives does not
depend, to the last bit, on the states beside it: every step is one correctly rounded operation per state.
"""

import threading
from collections import deque
from collections.abc import Callable, Iterable, Iterator, Sequence
from concurrent.futures import ThreadPoolExecutor
from functools import cache
from typing import Any, NamedTuple

import numpy as np
from numpy import add, divide, multiply, sqrt, subtract
from numpy.typing import ArrayLike, NDArray

from .stress import Floats, state_array, tensor

BLOCK = 40_008
"""States worked on at a time: enough to hide the cost of a NumPy call, few enough for the cache. Not a multiple of a
memory page, or all work rows would compete for the same places in the cache."""

LEAST, MOST = 1e-45, 1e45
"""Von Mises stresses between which the sixth powers in D neither vanish nor overflow."""

ROOT = tuple(
    np.array(pair).reshape(2, 1)
    for pair in (
        (1.572624328025048, 3.1452486560504633),
        (8.07027898811952, 18.499494468201302),
        (13.793540907778594, 38.31645401603888),
        (8.960687242110927, 33.31939391161381),
        (1.8193199781182536, 11.226722628198713),
        (0.04367001126549273, 1.0),
    )
)
"""Ascending coefficients of p and q, side by side: 1 + y p(y)/q(y) is the largest root w of w^3 - w = y for y in
[0, 2/sqrt(27)], within 9e-17 of its size; a minimax fit made at 60 digits."""

HALF, THREE, FOUR = np.array(0.5), np.array(3.0), np.array(4.0)
"""Arrays without axes: a Python number costs half as much again as the NumPy call it is given to."""

IN_PLANE = 1e-9
"""Relative difference within which the in-plane shear is the greatest shear there is."""

PLANE_ROWS = (0, 1, 3)
"""Rows xx, yy, xy of a stress array: all there is in a plane state."""

CYCLE = ((0, 1, 2), (1, 2, 0), (2, 0, 1))

Form = Callable[[Floats, Floats, Floats], None]
"""A way from parts (rows, n) of n states to their Tresca and von Mises stresses (n,), written into the last two."""


def equivalents(stress: ArrayLike, *, threads: int = 1) -> tuple[Floats, Floats]:
    """Tresca's and von Mises' equivalent stress, each of shape (...), of `stress`, shape (6, ...).

    `threads` is the greatest number of threads to work on blocks of states. A single state, shape (6,), gives two
    scalars. An equivalent stress beyond the largest float is infinite. ValueError for a first axis that is not 6
    long or fewer than one thread.
    """
    if threads < 1:
        raise ValueError(f"threads is {threads}, expected at least 1")
    states = state_array(stress)
    flat = states.reshape(6, -1)
    tresca, von_mises = np.empty((2, flat.shape[1]))
    if threads == 1 or flat.size == 0:
        equivalents_into(flat, tresca, von_mises)
    else:
        _in_threads(threads, flat, tresca, von_mises)
    shape = states.shape[1:]
    return tresca.reshape(shape)[()], von_mises.reshape(shape)[()]


def equivalents_into(stress: Floats, tresca: Floats, von_mises: Floats) -> None:
    """Write both equivalent stresses of `stress`, float64 of shape (6, n), into two arrays of shape (n,).

    Runs in the calling thread, in work rows that the thread keeps, so a caller that streams its states pays for no
    allocation. ValueError where shapes do not fit each other.
    """
    if stress.ndim != 2 or stress.shape[0] != 6:
        raise ValueError(f"stress has shape {stress.shape}, expected (6, n)")
    n = stress.shape[1]
    if tresca.shape != (n,) or von_mises.shape != (n,):
        raise ValueError(f"results have shapes {tresca.shape} and {von_mises.shape}, expected ({n},)")
    _blocks(deque(range(0, n, BLOCK)), BLOCK, stress, tresca, von_mises)


def principals(stress: ArrayLike) -> Floats:
    """The three principal stresses, shape (3, ...), largest first, of `stress`, shape (6, ...).

    Exact for a state without shear. For showing, not for the equivalents: near-equal principals lose digits here.
    ValueError for a first axis that is not 6 long.
    """
    states = state_array(stress)
    finite = np.isfinite(states).all(axis=0)
    solved = np.linalg.eigvalsh(tensor(np.where(finite, states, 0.0)))
    typed = np.sort(np.moveaxis(states[:3], 0, -1), axis=-1)
    unsheared = (states[3:] == 0.0).all(axis=0)
    values = np.where(unsheared[..., np.newaxis], typed, solved)
    values[~finite] = np.nan
    return np.moveaxis(values[..., ::-1], -1, 0)


def max_shear(stress: ArrayLike) -> Floats:
    """The absolute maximum shear stress, half of Tresca's equivalent, shape (...), of `stress`, shape (6, ...)."""
    shear: Floats = equivalents(stress)[0] * 0.5
    return shear


def in_plane_shear(stress: ArrayLike) -> Floats:
    """The greatest shear in the xy plane, sqrt(((xx - yy) / 2)^2 + xy^2), shape (...), of `stress`, shape (6, ...)."""
    states = state_array(stress)
    with np.errstate(all="ignore"):
        shear = np.hypot(states[0] * 0.5 - states[1] * 0.5, states[3])
    return np.where(np.isfinite(states[[0, 1, 3]]).all(axis=0), shear, np.nan)[()]


def shear_in_plane(stress: ArrayLike) -> NDArray[np.bool_]:
    """Whether the absolute maximum shear lies in the xy plane, shape (...), of `stress`, shape (6, ...).

    True where the in-plane shear equals it within 1e-9, so also where there is no shear at all; False for a state
    that is not finite.
    """
    inside: Any = max_shear(stress) <= in_plane_shear(stress) * (1.0 + IN_PLANE)
    return inside  # type: ignore[no-any-return]


class _Triple(NamedTuple):
    """Three rows of n numbers, x, y, z or cyclic, under two names; a row is cheaper kept than sliced each time."""

    whole: Floats
    rows: tuple[Floats, Floats, Floats]


def _triple(whole: Floats) -> _Triple:
    first, second, third = whole
    return _Triple(whole, (first, second, third))


class _Room:
    """The work rows for n states."""

    TRIPLES, SINGLES = 5, 3

    def __init__(self, store: Floats, n: int) -> None:
        self.n = n
        rows = store[: (3 * self.TRIPLES + self.SINGLES) * n].reshape(-1, n)
        self.d, self.f, self.ss, self.plus, self.minus = (_triple(rows[3 * i : 3 * i + 3]) for i in range(self.TRIPLES))
        self.K, self.y, self.term = rows[3 * self.TRIPLES :]


class _Work(threading.local):
    """What one thread keeps: rows to calculate in, and rows to gather the states of a mixed block in."""

    def __init__(self) -> None:
        self._store = _aligned((3 * _Room.TRIPLES + _Room.SINGLES) * BLOCK)
        self._room = _Room(self._store, 1)
        self.gathered = _aligned(8 * BLOCK).reshape(8, BLOCK)
        self.flags = np.empty((2, BLOCK), dtype=np.bool_)

    def room(self, n: int) -> _Room:
        """The work rows cut to n states, lying end to end so that three are one run of memory."""
        if self._room.n != n:
            self._room = _Room(self._store, n)
        return self._room


def _aligned(n: int) -> Floats:
    """Room for n numbers that starts on a cache line."""
    room = np.empty(n + 8)
    skip = -room.ctypes.data % 64 // 8
    return room[skip : skip + n]


_WORK = _Work()


def _in_threads(threads: int, stress: Floats, tresca: Floats, von_mises: Floats) -> None:
    n = stress.shape[1]
    step = min(BLOCK, -(-n // threads))
    starts = deque(range(0, n, step))
    pool = _pool(threads)
    for done in [pool.submit(_blocks, starts, step, stress, tresca, von_mises) for _ in range(threads)]:
        done.result()


@cache
def _pool(threads: int) -> ThreadPoolExecutor:
    """Threads that stay, so that their work rows do too."""
    return ThreadPoolExecutor(threads, thread_name_prefix="criteria")


def _blocks(starts: deque[int], step: int, stress: Floats, tresca: Floats, von_mises: Floats) -> None:
    """The blocks of `step` states at `starts` until none is left; several threads may take from the same `starts`."""
    with np.errstate(all="ignore"):  # what overflows or is no number is found and repaired after
        for start in _taken(starts):
            part = slice(start, start + step)
            _block(stress[:, part], tresca[part], von_mises[part])


def _taken(starts: deque[int]) -> Iterator[int]:
    while True:
        try:
            yield starts.popleft()
        except IndexError:  # asking first would leave time for another thread to take the last
            return


def _block(stress: Floats, tresca: Floats, von_mises: Floats) -> None:
    """At most BLOCK states, each by the form that is its own whatever the block holds besides."""
    is_plane, is_zero = _WORK.flags[:, : stress.shape[1]]
    np.equal(stress[2], 0.0, out=is_plane)
    if is_plane.any():
        for shear in stress[4:]:
            is_plane &= np.equal(shear, 0.0, out=is_zero)
    plane = np.count_nonzero(is_plane)
    if plane == 0:
        _general(stress, tresca, von_mises)
    elif plane == is_plane.size:
        _plane(stress, tresca, von_mises)
    else:
        for form, chosen in ((_plane, np.flatnonzero(is_plane)), (_general, np.flatnonzero(~is_plane))):
            _gathered(form, chosen, stress, tresca, von_mises)


def _gathered(form: Form, chosen: NDArray[np.intp], stress: Floats, tresca: Floats, von_mises: Floats) -> None:
    """The states at `chosen` by `form`, brought together first."""
    rows = _WORK.gathered[:, : chosen.size]
    for component in PLANE_ROWS if form is _plane else range(6):
        np.take(stress[component], chosen, out=rows[component], mode="clip")  # other modes would copy `out`
    form(rows[:6], rows[6], rows[7])
    tresca[chosen], von_mises[chosen] = rows[6], rows[7]


def _general(stress: Floats, tresca: Floats, von_mises: Floats) -> None:
    room = _WORK.room(stress.shape[1])
    _differences(stress, room.d.whole)
    _from_differences(room, _triple(stress[3:]), tresca, von_mises)
    bad = _out_of_range(von_mises)
    if bad.size:
        parts, scale = _parts(stress[:, bad])
        _repair(_general_form, parts, bad, tresca, von_mises)
        tresca[bad] *= scale
        von_mises[bad] *= scale


def _plane(stress: Floats, tresca: Floats, von_mises: Floats) -> None:
    _plane_form((stress[0], stress[1], stress[3]), tresca, von_mises)
    bad = _out_of_range(von_mises)
    if bad.size:
        parts = np.stack([stress[row, bad] for row in PLANE_ROWS])
        _repair(_plane_form, parts, bad, tresca, von_mises)


def _out_of_range(von_mises: Floats) -> NDArray[np.intp]:
    """Where squares or sixth powers were not safe, or there is no stress, or the state is not finite."""
    if von_mises.min() > LEAST and von_mises.max() < MOST:  # not so if one is NaN
        return np.empty(0, dtype=np.intp)
    return np.flatnonzero(~((von_mises > LEAST) & (von_mises < MOST)))


def _parts(stress: Floats) -> tuple[Floats, Floats]:
    """Differences and shears, (6, n), of states of any size, and the scale (n,) by which results must be multiplied.

    The difference of two finite stresses can be twice the largest float; only such states are halved first. Halving
    others could cost a tiny shear its last digit, and a shear however tiny is all that counts beside equal normals.
    """
    scale = np.where(np.isinf(_differences(stress)).any(axis=0), 2.0, 1.0)
    shrunk = stress / scale
    return np.concatenate([_differences(shrunk), shrunk[3:]]), scale


def _differences(stress: Floats, out: Floats | None = None) -> Floats:
    """xx - yy, yy - zz, zz - xx: row i is the difference of the two axes that shear i joins."""
    d = np.empty((3, stress.shape[1])) if out is None else out
    xx, yy, zz = stress[:3]
    subtract(xx, yy, d[0])
    subtract(yy, zz, d[1])
    subtract(zz, xx, d[2])
    return d


def _repair(form: Form, parts: Floats, where: NDArray[np.intp], tresca: Floats, von_mises: Floats) -> None:
    """Work the states at `where` again from their `parts`, (rows, n), each scaled by its own power of two.

    One scale for a whole block would be silently wrong for the smaller of its states.
    """
    tresca[where] = von_mises[where] = 0.0
    stressed = parts.any(axis=0)  # no stress or a hydrostatic one, the commonest reason to come here, is done
    where, parts = where[stressed], parts[:, stressed]
    if where.size:
        tresca[where], von_mises[where] = _in_own_scale(form, parts)


def _in_own_scale(form: Form, parts: Floats) -> tuple[Floats, Floats]:
    size = np.abs(parts).max(axis=0)
    exponent = np.frexp(size)[1]
    tresca, von_mises = np.empty((2, size.size))
    form(np.ldexp(parts, -exponent), tresca, von_mises)
    for result in (tresca, von_mises):
        np.ldexp(result, exponent, out=result)
        result[~np.isfinite(size)] = np.nan
    return tresca, von_mises


def _plane_form(parts: Iterable[Floats], tresca: Floats, von_mises: Floats) -> None:
    xx, yy, xy = parts
    room = _WORK.room(tresca.size)
    c, R, RR = room.K, room.y, room.term
    add(xx, yy, c)
    multiply(c, HALF, c)
    subtract(xx, yy, R)
    multiply(R, HALF, R)
    multiply(R, R, R)
    multiply(xy, xy, RR)
    add(R, RR, RR)
    sqrt(RR, R)
    _plane_tresca(c, R, tresca)
    multiply(c, c, c)
    multiply(RR, THREE, RR)
    add(c, RR, c)
    sqrt(c, von_mises)


def _plane_tresca(c: Floats, R: Floats, tresca: Floats) -> None:
    """The largest of 2 R, |c + R| and |c - R|: the third principal stress is zero. R is used up."""
    np.absolute(c, tresca)
    add(tresca, R, tresca)
    add(R, R, R)
    np.maximum(tresca, R, out=tresca)


def _general_form(parts: Floats, tresca: Floats, von_mises: Floats) -> None:
    room = _WORK.room(tresca.size)
    room.d.whole[...] = parts[:3]
    _from_differences(room, _triple(parts[3:]), tresca, von_mises)


def _from_differences(room: _Room, s: _Triple, tresca: Floats, von_mises: Floats) -> None:
    """Both equivalents from the differences in `room.d`, which are used up, and the shears `s`.

    The third argument of each operation is where its result goes: most rows hold one quantity after another, since
    a result written over an argument costs the least.
    """
    K, y = room.K, room.y
    _products(room, s)
    _three_j2(room.f.rows, room.ss.rows, K)
    _discriminant(room, s, y)
    sqrt(y, y)
    sqrt(K, von_mises)
    multiply(K, von_mises, K)
    divide(y, K, y)  # 0/0 for a state without deviator, which is repaired to 0
    _largest_root(y, von_mises, tresca, room)


def _products(room: _Room, s: _Triple) -> None:
    """d_j d_k into `f`, s_i^2 into `ss`, s_j s_k into `minus`."""
    _cyclic(room.d, room.f)
    multiply(s.whole, s.whole, room.ss.whole)
    _cyclic(s, room.minus)


def _cyclic(factors: _Triple, out: _Triple) -> None:
    for i, j, k in CYCLE:
        multiply(factors.rows[j], factors.rows[k], out.rows[i])


def _three_j2(dd: Sequence[Floats], ss: Sequence[Floats], K: Floats) -> None:
    add(ss[0], ss[1], K)
    add(K, ss[2], K)
    multiply(K, THREE, K)
    for row in dd:
        subtract(K, row, K)


def _discriminant(room: _Room, s: _Triple, D: Floats) -> None:
    d, f, ss, plus, minus = room.d, room.f, room.ss, room.plus, room.minus
    add(f.whole, ss.whole, f.whole)
    _triple_terms(room, D)
    multiply(D, D, D)
    multiply(d.whole, s.whole, d.whole)
    multiply(f.whole, s.whole, f.whole)
    add(minus.whole, d.whole, plus.whole)
    subtract(minus.whole, d.whole, minus.whole)
    _paired_terms(room, s)
    multiply(f.whole, f.whole, f.whole)
    total = f.rows[0]
    add(total, f.rows[1], total)
    add(total, f.rows[2], total)
    multiply(total, FOUR, total)
    for row in plus.rows:
        add(total, row, total)
    multiply(total, FOUR, total)
    add(D, total, D)


def _triple_terms(room: _Room, M: Floats) -> None:
    """d0 f0 + d1 s1^2 + d2 s2^2, which is d0 d1 d2 + sum d_i s_i^2."""
    d, ss, term = room.d.rows, room.ss.rows, room.term
    multiply(d[0], room.f.rows[0], M)
    for i in (1, 2):
        multiply(d[i], ss[i], term)
        add(M, term, M)


def _paired_terms(room: _Room, s: _Triple) -> None:
    """A_i - B_i into `f`, which holds s_i f_i, and A_i B_i into `plus`, in whatever order.

    `plus` and `minus` hold s_j s_k + d_i s_i and s_j s_k - d_i s_i.
    """
    for i, j, k in CYCLE:
        sf, A, B = room.f.rows[i], room.plus.rows[j], room.minus.rows[k]
        multiply(A, s.rows[k], A)
        subtract(sf, A, A)
        multiply(B, s.rows[j], B)
        subtract(sf, B, B)
        subtract(A, B, sf)
        multiply(A, B, A)


def _largest_root(y: Floats, von_mises: Floats, tresca: Floats, room: _Room) -> None:
    """von Mises (1 + y p(y)/q(y)): never below von Mises, as nothing in it is negative."""
    both, (p, q, _) = room.f.whole[:2], room.f.rows
    multiply(y, ROOT[-1], both)
    for pair in ROOT[-2:0:-1]:
        add(both, pair, both)
        multiply(both, y, both)
    add(both, ROOT[0], both)
    multiply(p, y, p)
    divide(p, q, p)
    multiply(p, von_mises, p)
    add(p, von_mises, tresca)
