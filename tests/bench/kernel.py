"""The kernel against LAPACK's batched eigenvalues, the plain way to both equivalents, and against a memory copy."""

from collections.abc import Iterator

import numpy as np

from engine.criteria import equivalents
from engine.stress import tensor

from .timing import Action, Row, duration, in_turns, median_ratio

STATES = 2_000_000
ROUNDS = 5


def general_states() -> np.ndarray:
    return np.random.default_rng(0).normal(size=(6, STATES)) * 100


def plane_states() -> np.ndarray:
    stress = general_states()
    stress[[2, 4, 5]] = 0.0
    return stress


def mixed_states() -> np.ndarray:
    """Every other state plane: the worst case for telling them apart."""
    stress = general_states()
    stress[2, ::2] = stress[4, ::2] = stress[5, ::2] = 0.0
    return stress


def rows() -> Iterator[Row]:
    """Each kind of state, all ways in turns; the ratio is the median over the rounds."""
    yield from _compared("general", general_states(), {1: "at least 20", 2: "at least 35"})
    yield from _compared("plane", plane_states(), {1: "at least 20"})
    yield from _compared("half of them plane", mixed_states(), {1: ""})


def _compared(kind: str, stress: np.ndarray, goals: dict[int, str]) -> Iterator[Row]:
    """A row for each number of threads in `goals` against eigenvalues, then one for each against a copy."""
    matrices, target = tensor(stress), np.empty_like(stress)
    kernels = [_kernel(stress, threads) for threads in goals]
    eigen, copy, *ours = in_turns(
        ROUNDS, lambda: np.linalg.eigvalsh(matrices), lambda: np.copyto(target, stress), *kernels
    )
    for (threads, goal), times in zip(goals.items(), ours, strict=True):
        what = f"{kind}, {threads} thread{'s' if threads > 1 else ''}"
        yield Row(what, duration(times), f"eigvalsh {duration(eigen)}", median_ratio(eigen, times), goal)
        yield Row(what, duration(times), f"memory copy {duration(copy)}", median_ratio(copy, times), "")


def _kernel(stress: np.ndarray, threads: int) -> Action:
    return lambda: equivalents(stress, threads=threads)
