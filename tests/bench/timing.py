"""Timing in turns, and the table that shows it."""

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from statistics import median
from time import perf_counter

Action = Callable[[], object]


@dataclass(frozen=True)
class Row:
    """One line of the table."""

    what: str
    """What was measured."""
    figure: str
    """Its figure, with unit."""
    plain: str
    """The plain way it is compared with, and that way's figure."""
    ratio: float | None
    """How many times better the figure is than the plain way's; None where they are not compared."""
    goal: str
    """What it should be, in words; empty if there is none."""


def seconds(action: Action) -> float:
    """The time of one run."""
    start = perf_counter()
    action()
    return perf_counter() - start


def in_turns(rounds: int, *actions: Action) -> list[list[float]]:
    """The times of each action, in seconds, over `rounds` rounds after one that does not count.

    Each round runs every action once, so that what else the machine does falls on all of them alike.
    """
    for action in actions:
        action()
    taken = [[seconds(action) for action in actions] for _ in range(rounds)]
    return [list(times) for times in zip(*taken, strict=True)]


def median_ratio(plain: list[float], times: list[float]) -> float:
    """The median over the rounds of how many times longer the plain way took."""
    return median(slow / quick for slow, quick in zip(plain, times, strict=True))


def duration(times: list[float]) -> str:
    """The median time, in the unit that suits it."""
    value = median(times)
    for unit, scale in (("s", 1.0), ("ms", 1e-3)):
        if value >= scale:
            return f"{value / scale:.3g} {unit}"
    return f"{value * 1e6:.3g} us"


HEADINGS = ("what", "figure", "plain way", "ratio", "goal")


def print_rows(title: str, rows: Iterable[Row]) -> None:
    """Print a table, with a line for each row once all are measured."""
    lines = [HEADINGS, *(_cells(row) for row in rows)]
    widths = [max(len(line[column]) for line in lines) for column in range(len(HEADINGS))]
    print(f"\n{title}")
    for line in lines:
        print("  " + "  ".join(cell.ljust(width) for cell, width in zip(line, widths, strict=True)).rstrip())


def _cells(row: Row) -> tuple[str, ...]:
    ratio = "" if row.ratio is None else f"{row.ratio:.3g}"
    return row.what, row.figure, row.plain, ratio, row.goal
