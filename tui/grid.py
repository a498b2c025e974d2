"""The one grid that every sheet uses: it draws what is visible and moves the cursor; what it shows is the sheet's."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import groupby
from operator import itemgetter
from typing import ClassVar, NamedTuple, Protocol

from rich.segment import Segment
from textual import events
from textual.binding import Binding, BindingType
from textual.geometry import Region, clamp
from textual.message import Message
from textual.reactive import reactive
from textual.scroll_view import ScrollView
from textual.strip import Strip

from .palette import Align, Palette, Runs, cut, fit_number, fit_runs, plain_ascii

WHEEL = 3  # rows a notch of the wheel scrolls
FAR = 10**9  # further than any sheet reaches: a cursor sent there stops at the edge
HEADER = 1  # lines above the body


@dataclass(frozen=True, slots=True)
class Cell:
    """What a sheet says of one cell."""

    text: str
    """What it shows. A column of width w has w - 2 cells for it: one is a gap before it, one the mark after it."""
    role: str = "plain"
    """Roles of the palette, parted by blanks."""
    mark: str = " "
    """One character right after the text, for what colour must not say alone."""
    align: Align = "right"
    """Right: a number, shown whole or as `####`. Left: a name, cut with a mark. A header is always a name."""


class Sheet(Protocol):
    """What a grid shows. Rows and columns count from 0 and are those of the body, without header and footer."""

    def size(self) -> tuple[int, int]:
        """Rows and columns of the body; asked for often, so it must not count anything."""

    def width(self, column: int) -> int:
        """Cells of a column, gap and mark included; at least 3."""

    def header(self, column: int) -> Cell:
        """The head of a column."""

    def frozen_header(self, room: int) -> Runs:
        """The head of the left block, in all `frozen_width(room)` cells."""

    def frozen_width(self, room: int) -> int:
        """Cells of the left block when the whole grid has `room` cells; 0 for none."""

    def frozen(self, row: int, room: int) -> Runs:
        """The left block of a row, in all `frozen_width(room)` cells; its first run that is not blank is its name."""

    def cells(self, row: int, columns: Sequence[int]) -> list[Cell]:
        """The cells of a row in these columns: one gather for one visible line."""

    def footers(self) -> int:
        """How many rows stand under the body."""

    def footer(self, index: int, columns: Sequence[int]) -> list[Cell]:
        """The cells of a row under the body."""

    def footer_frozen(self, index: int, room: int) -> Runs:
        """The left block of a row under the body."""

    def empty(self) -> str:
        """What a sheet without rows or without columns says, in lines of its own; first of all what to press."""


class Span(NamedTuple):
    """A rectangle of cells, ends included."""

    top: int
    bottom: int
    left: int
    right: int


@dataclass(frozen=True, slots=True)
class _Place:
    """Where one is in a sheet."""

    cursor: tuple[int, int] = (0, 0)
    """Row and column."""
    anchor: tuple[int, int] | None = None
    """The other corner of the selection; None where nothing is selected."""
    top: int = 0
    """First visible row."""
    first: int = 0
    """First visible column."""

    def span(self) -> Span:
        (row, column), (other_row, other_column) = self.cursor, self.anchor or self.cursor
        return Span(*sorted((row, other_row)), *sorted((column, other_column)))


class _View(NamedTuple):
    """How the visible part lies on the screen, in cells from the grid's top left."""

    body: int
    """Where the body begins: the left block and its separator lie before it."""
    columns: dict[int, range]
    """Visible columns, each with the cells it takes across the screen."""
    rows: range
    """Visible rows."""
    footers: int
    """Visible rows under the body."""

    def region(self, span: Span) -> Region:
        """The visible part of a rectangle of cells; it may be empty."""
        top, bottom = max(span.top, self.rows.start), min(span.bottom, self.rows.stop - 1)
        chosen = [cells for column, cells in self.columns.items() if span.left <= column <= span.right]
        if top > bottom or not chosen:
            return Region()
        x, y = chosen[0].start, HEADER + top - self.rows.start
        return Region(x, y, chosen[-1].stop - x, bottom - top + 1)

    def pointed(self, x: int, y: int, cursor: tuple[int, int]) -> tuple[int, int]:
        """The cell at a place of the screen; off the body the cursor's row, its column, or both."""
        line = y - HEADER
        row = self.rows[line] if 0 <= line < len(self.rows) else cursor[0]
        return row, next((column for column, cells in self.columns.items() if x in cells), cursor[1])


def _drawn(cell: Cell, width: int, name: bool = False) -> str:
    """A cell in exactly `width` cells: a gap, the text, the mark. A number that does not fit becomes `####`."""
    if width < 3:
        return "#" * width
    room, is_name = width - 2, name or cell.align == "left"
    text = cut(cell.text, room, cell.align) if is_name else fit_number(cell.text, room)
    return f" {text}{cut(cell.mark, 1)}"


def _named(runs: Runs) -> Runs:
    """The runs of the cursor's row, its name made to stand out."""
    name = next((index for index, (text, _) in enumerate(runs) if text.strip()), None)
    return [(text, f"{role} here" if index == name else role) for index, (text, role) in enumerate(runs)]


def _over(cell: Cell, role: str) -> Cell:
    """The cell with one more role laid over its own; none if empty."""
    return replace(cell, role=f"{cell.role} {role}") if role else cell


@dataclass
class _GridMessage(Message):
    """What a grid tells."""

    grid: Grid
    """The grid it happened in."""

    @property
    def control(self) -> Grid:
        return self.grid


def _key(key: str, action: str, description: str, tooltip: str) -> Binding:
    return Binding(key, action, description, show=False, id=f"grid.{key.replace('+', '-')}", tooltip=tooltip)


class Grid(ScrollView, can_focus=True, inherit_bindings=False):
    """A virtual grid: frozen header and left block, cursor, selection, whole rows and whole columns."""

    ALLOW_SELECT = False
    DEFAULT_CSS = "Grid { height: 1fr; scrollbar-size: 0 0; overflow: hidden hidden; }"
    BINDINGS: ClassVar[list[BindingType]] = [
        _key("up", "move(-1, 0)", "Up", "To the row above"),
        _key("down", "move(1, 0)", "Down", "To the row below"),
        _key("left", "move(0, -1)", "Left", "To the column before"),
        _key("right", "move(0, 1)", "Right", "To the column after"),
        _key("shift+up", "move(-1, 0, True)", "Select up", "Extend the selection by the row above"),
        _key("shift+down", "move(1, 0, True)", "Select down", "Extend the selection by the row below"),
        _key("shift+left", "move(0, -1, True)", "Select left", "Extend the selection by the column before"),
        _key("shift+right", "move(0, 1, True)", "Select right", "Extend the selection by the column after"),
        _key("pageup", "page(-1)", "Page up", "Up by as many rows as are visible"),
        _key("pagedown", "page(1)", "Page down", "Down by as many rows as are visible"),
        _key("home", f"move(0, -{FAR})", "First column", "To the first column of this row"),
        _key("end", f"move(0, {FAR})", "Last column", "To the last column of this row"),
        _key("ctrl+home", f"move(-{FAR}, -{FAR})", "First cell", "To the first row and the first column"),
        _key("ctrl+end", f"move({FAR}, {FAR})", "Last cell", "To the last row and the last column"),
    ]

    palette: reactive[Palette] = reactive(Palette)
    """The styles to draw with."""
    ascii: reactive[bool] = reactive(False)
    """Whether the terminal shows ASCII only."""

    @dataclass
    class Moved(_GridMessage):
        """The cursor or the selection has changed."""

        row: int
        """The cursor's row."""
        column: int
        """The cursor's column."""

    @dataclass
    class Scrolled(_GridMessage):
        """Another part of the sheet is visible."""

        top: int
        """The first visible row."""
        first: int
        """The first visible column."""

    def __init__(
        self, sheet: Sheet, *, palette: Palette | None = None, ascii: bool = False, jump: int = 1, id: str | None = None
    ) -> None:
        """A grid on a sheet. `jump`: rows to scroll by when the cursor leaves the view; more of them on slow links."""
        super().__init__(id=id)
        self.set_reactive(Grid.palette, palette or Palette())
        self.set_reactive(Grid.ascii, ascii)
        self.jump = jump
        self.sheet: Sheet = sheet
        self._place = _Place()

    @property
    def cursor(self) -> tuple[int, int]:
        """Row and column of the cursor; (0, 0) in an empty sheet."""
        return self._place.cursor

    @property
    def span(self) -> Span:
        """The selected rectangle; the cursor's cell alone where nothing is selected."""
        return self._place.span()

    @property
    def top(self) -> int:
        """First visible row."""
        return self._place.top

    @property
    def first(self) -> int:
        """First visible column."""
        return self._place.first

    def visible_rows(self) -> range:
        """Rows of the body that are on the screen."""
        return self._view().rows

    def visible_columns(self) -> list[int]:
        """Columns of the body that are on the screen, each of them whole."""
        return list(self._view().columns)

    def cell_region(self, row: int, column: int) -> Region:
        """Where a cell is drawn, from the grid's top left; empty where it is not visible."""
        return self._view().region(Span(row, row, column, column))

    def show(self, sheet: Sheet) -> None:
        """Switch to another sheet. The cursor stays where it is as far as the sheet reaches; nothing is selected."""
        self.sheet = sheet
        self._become(replace(self._place, anchor=None), repaint=True)

    def sheet_changed(self, structure: bool = False) -> None:
        """Repaint, the sheet having changed; `structure`: rows or columns came, went or moved, so select nothing."""
        anchor = None if structure else self._place.anchor
        self._become(replace(self._place, anchor=anchor), repaint=True)

    def go(self, row: int, column: int, extend: bool = False) -> None:
        """Move the cursor, as near as the sheet allows, and scroll to see it; `extend` the selection or begin one."""
        anchor = (self._place.anchor or self._place.cursor) if extend else None
        self._become(replace(self._place, cursor=(row, column), anchor=anchor))

    def _body(self) -> int:
        """Where the body begins."""
        frozen = self.sheet.frozen_width(self.size.width)
        return clamp(frozen, 0, self.size.width - 1) + 1 if frozen > 0 else 0

    def _heights(self) -> tuple[int, int]:
        """How many rows of the body and how many under it fit; the body keeps one at least."""
        room = max(1, self.size.height - HEADER)
        footers = clamp(self.sheet.footers(), 0, room - 1)
        return room - footers, footers

    def _view(self) -> _View:
        """The visible part: the first column as far as there is room, the others only whole."""
        height, footers = self._heights()
        rows, columns = self.sheet.size() if all(self.sheet.size()) else (0, 0)
        x, seen = self._body(), dict[int, range]()
        for column in range(self.first, columns):
            end = x + self.sheet.width(column)
            if end > self.size.width and seen:
                break
            seen[column] = range(x, min(end, self.size.width))
            x = end
        return _View(self._body(), seen, range(self.top, max(self.top, min(rows, self.top + height))), footers)

    def _leftmost(self, column: int, floor: int) -> int:
        """The least first column, not below `floor`, from which `column` is wholly visible."""
        room = self.size.width - self._body() - self.sheet.width(column)
        while column > floor and (room := room - self.sheet.width(column - 1)) >= 0:
            column -= 1
        return column

    def _followed(self, place: _Place) -> _Place:
        """The place made to lie in the sheet, and scrolled so that the cursor is visible and no room is wasted."""
        rows, columns = self.sheet.size()
        if not rows or not columns:
            return _Place()
        row, column = cursor = clamp(place.cursor[0], 0, rows - 1), clamp(place.cursor[1], 0, columns - 1)
        anchor = place.anchor and (clamp(place.anchor[0], 0, rows - 1), clamp(place.anchor[1], 0, columns - 1))
        top, first = place.top, place.first
        if self.size:
            top = self._top_for(row, top, rows)
            first = column if column < first else self._leftmost(column, first)
            first = min(first, self._leftmost(columns - 1, 0))
        return _Place(cursor, anchor, top, first)

    def _top_for(self, row: int, top: int, rows: int) -> int:
        """The first visible row from which `row` is visible."""
        height = self._heights()[0]
        jump = clamp(self.jump, 1, max(1, height // 2))
        if not top <= row < top + height:
            top = row - jump + 1 if row < top else row - height + jump
        return clamp(top, 0, max(0, rows - height))

    # Changing place

    def _become(self, place: _Place, repaint: bool = False) -> None:
        """Take a place, as near as the sheet allows: repaint what differs, tell of it, park the terminal's cursor."""
        before, self._place = self._place, (place := self._followed(place))
        scrolled = (before.top, before.first) != (place.top, place.first)
        if repaint or scrolled:
            self.refresh()
        elif before != place:
            self.refresh(*filter(None, self._differing(before, place)))
        self._park()
        if scrolled:
            self.post_message(self.Scrolled(self, place.top, place.first))
        if (before.cursor, before.anchor) != (place.cursor, place.anchor):
            self.post_message(self.Moved(self, *place.cursor))

    def _differing(self, before: _Place, after: _Place) -> Iterator[Region]:
        """What two places of one view draw differently: cells, names of their rows, heads of their columns."""
        view = self._view()
        yield from (view.region(before.span()), view.region(after.span()))
        for row, column in (before.cursor, after.cursor):
            cell = view.region(Span(row, row, column, column))
            if before.cursor[0] != after.cursor[0]:
                yield Region(0, cell.y, view.body, 1)
            if before.cursor[1] != after.cursor[1]:
                yield Region(cell.x, 0, cell.width, HEADER)

    def _park(self) -> None:
        """Put the hidden terminal cursor on the cell, where screen readers and magnifiers look."""
        if self.has_focus and (cell := self.cell_region(*self.cursor)):
            self.app.cursor_position = self.content_region.offset + cell.offset

    def _scroll(self, delta: int, carry: bool) -> None:
        """Scroll by rows. `carry`: the cursor too, selecting nothing; else it moves only to stay in view."""
        height = self._heights()[0]
        top = clamp(self.top + delta, 0, max(0, self.sheet.size()[0] - height))
        row, column = self.cursor
        row = row + delta if carry else clamp(row, top, top + height - 1)
        anchor = None if carry else self._place.anchor
        self._become(_Place((row, column), anchor, top, self.first))

    def action_move(self, rows: int, columns: int, extend: bool = False) -> None:
        row, column = self.cursor
        self.go(row + rows, column + columns, extend)

    def action_page(self, pages: int) -> None:
        self._scroll(pages * self._heights()[0], carry=True)

    def on_click(self, event: events.Click) -> None:
        if (offset := event.get_content_offset(self)) is not None:
            self.go(*self._view().pointed(*offset, self.cursor), extend=event.shift)

    def on_mouse_scroll_down(self, event: events.MouseScrollDown) -> None:
        event.stop()
        self._scroll(WHEEL, carry=False)

    def on_mouse_scroll_up(self, event: events.MouseScrollUp) -> None:
        event.stop()
        self._scroll(-WHEEL, carry=False)

    def on_resize(self, _event: events.Resize) -> None:
        self._become(self._place, repaint=True)

    def on_focus(self, _event: events.Focus) -> None:
        self._park()

    # Painting

    def render_line(self, y: int) -> Strip:
        """One line of the screen."""
        if 0 in self.sheet.size():
            return self._strip(self._empty_runs(y))
        view, line = self._view(), y - HEADER
        if line < 0:
            return self._strip(self._header_runs(view))
        if line < len(view.rows):
            return self._strip(self._body_runs(view.rows[line], view))
        line -= len(view.rows)
        return self._strip(self._footer_runs(line, view) if line < view.footers else [])

    def _strip(self, runs: Runs) -> Strip:
        """The runs as a strip of the grid's width, neighbours of one style merged."""
        width = self.size.width
        styled = [(text, self.palette.style(role)) for text, role in fit_runs(runs, width) if text]
        segments = []
        for style, group in groupby(styled, key=itemgetter(1)):
            text = "".join(text for text, _ in group)
            segments.append(Segment(plain_ascii(text) if self.ascii else text, style))
        return Strip(segments, width)

    def _line(self, view: _View, left: Runs, cells: Iterable[Cell], name: bool = False) -> Runs:
        """Left block, separator and cells."""
        runs = [*fit_runs(left, view.body - 1), ("│", "head")] if view.body else []
        widths = map(len, view.columns.values())
        runs.extend((_drawn(cell, width, name), cell.role) for cell, width in zip(cells, widths, strict=True))
        return runs

    def _header_runs(self, view: _View) -> Runs:
        here = {self.cursor[1]: "here"}
        cells = (_over(self.sheet.header(column), here.get(column, "")) for column in view.columns)
        return self._line(view, self.sheet.frozen_header(self.size.width), cells, name=True)

    def _body_runs(self, row: int, view: _View) -> Runs:
        columns = list(view.columns)
        cells = self.sheet.cells(row, columns)
        left = self.sheet.frozen(row, self.size.width)
        laid = (_over(cell, self._laid_over(row, column)) for cell, column in zip(cells, columns, strict=True))
        return self._line(view, _named(left) if row == self.cursor[0] else left, laid)

    def _laid_over(self, row: int, column: int) -> str:
        """The role that cursor and selection lay over a cell."""
        if (row, column) == self.cursor:
            return "cursor"
        top, bottom, left, right = self.span
        return "selected" if top <= row <= bottom and left <= column <= right else ""

    def _footer_runs(self, index: int, view: _View) -> Runs:
        cells = self.sheet.footer(index, list(view.columns))
        return self._line(view, self.sheet.footer_frozen(index, self.size.width), cells)

    def _empty_runs(self, y: int) -> Runs:
        """A line of what an empty sheet says: at the left, half way down."""
        lines = self.sheet.empty().splitlines()
        line = y - max(0, (self.size.height - len(lines)) // 2)
        return [("  " + cut(lines[line], self.size.width - 4), "plain")] if 0 <= line < len(lines) else []
