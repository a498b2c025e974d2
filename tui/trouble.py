"""The cells in trouble, worst kind first: short, split, thin, without data; each in the order of the sheet."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from engine.cells import blocks
from engine.envelope import VERDICTS, verdict_codes
from engine.table import MarginTable

_KINDS = ("short", "split", "thin", "no-data")


def verdicts_of_cells(table: MarginTable) -> npt.NDArray[np.int8]:
    """(points, cases): verdict of each cell over all limits, as places in VERDICTS."""
    points, cases = table.shape
    found = np.empty((points, cases), dtype=np.int8)
    settings = table.project.settings
    for rows in blocks(points, cases):
        run = slice(rows[0], rows[-1] + 1)
        margins = [table.margins(run, slice(None), limit) for limit in table.rating.limits]
        missing = table.missing(run, slice(None))
        found[run] = verdict_codes(np.fmin.reduce(margins, axis=0), missing, settings.accept, settings.thin)
    return found


class Trouble:
    """The cells in trouble of one table, found when first asked for."""

    def __init__(self) -> None:
        self._of: MarginTable | None = None
        self._cells: npt.NDArray[np.intp] = np.empty(0, dtype=np.intp)

    def _found(self, table: MarginTable) -> npt.NDArray[np.intp]:
        """Flat places of the cells, in order."""
        if self._of is not table:
            codes = verdicts_of_cells(table).reshape(-1)
            self._cells = np.concatenate([np.flatnonzero(codes == VERDICTS.index(kind)) for kind in _KINDS])
            self._of = table
        return self._cells

    def beside(self, table: MarginTable, row: int, column: int, step: int) -> tuple[int, int, int, int] | None:
        """Row, column, number and count of the next cell in trouble (step 1) or the one before (-1); None: none."""
        cells = self._found(table)
        if not len(cells):
            return None
        at = np.flatnonzero(cells == row * table.shape[1] + column)
        place = (int(at[0]) + step) % len(cells) if len(at) else (0 if step > 0 else len(cells) - 1)
        found = divmod(int(cells[place]), table.shape[1])
        return (*found, place + 1, len(cells))
