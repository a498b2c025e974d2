"""The grid on an invented sheet: what it draws, where keys lead, and that it asks for what is visible only."""

from __future__ import annotations

from collections.abc import AsyncIterator, Callable, Sequence
from contextlib import asynccontextmanager

import numpy as np
import pytest
from rich.cells import cell_len
from rich.color import ColorSystem
from rich.style import Style
from textual import events
from textual.app import App, ComposeResult
from textual.geometry import Region
from textual.pilot import Pilot

from tui.grid import Cell, Grid, Span
from tui.palette import MARKS, VERDICT_ROLES, Palette, Runs, cut, fit_number, mode_for, plain_ascii, visible

ROLES = ("plain", "dim", "head", "thin", "split", "short", "nodata")
NAME = 8  # cells of a name in the left block
WIDTHS = (8, 9, 10)  # of the columns, in turn


class Table:
    """An array as a sheet, which counts what it is asked for."""

    def __init__(self, values: np.ndarray, names: dict[int, str] | None = None, footers: int = 1) -> None:
        self.values = values
        self.names = names or {}
        self.heads: dict[int, str] = {}
        self.marks: dict[tuple[int, int], tuple[str, str]] = {}
        self.feet = footers
        self.gathered: list[tuple[int, tuple[int, ...]]] = []
        self.measured = 0

    def size(self) -> tuple[int, int]:
        rows, columns = self.values.shape
        return rows, columns

    def width(self, column: int) -> int:
        self.measured += 1
        return WIDTHS[column % len(WIDTHS)]

    def header(self, column: int) -> Cell:
        return Cell(self.heads.get(column, f"C{column}"), "head")

    def frozen_header(self, room: int) -> Runs:
        return [("name".ljust(self.frozen_width(room)), "head")]

    def frozen_width(self, room: int) -> int:
        return NAME if room < 60 else 2 * NAME

    def frozen(self, row: int, room: int) -> Runs:
        return [(cut(self.names.get(row, f"R{row}"), self.frozen_width(room)), "head")]

    def cells(self, row: int, columns: Sequence[int]) -> list[Cell]:
        self.gathered.append((row, tuple(columns)))
        return [self._cell(row, column) for column in columns]

    def _cell(self, row: int, column: int) -> Cell:
        role, mark = self.marks.get((row, column), ("plain", " "))
        return Cell(f"{self.values[row, column]:+.2f}", role, mark)

    def footers(self) -> int:
        return self.feet

    def footer(self, index: int, columns: Sequence[int]) -> list[Cell]:
        return [Cell(f"f{index}.{column}") for column in columns]

    def footer_frozen(self, index: int, room: int) -> Runs:
        return [(f"foot {index}".ljust(self.frozen_width(room)), "head")]

    def empty(self) -> str:
        return "No rows yet.\nPress a to add one."


def table(rows: int, columns: int, **more: int) -> Table:
    return Table(np.arange(rows * columns, dtype=float).reshape(rows, columns) % 90, **more)


class GridApp(App[None]):
    """Nothing but a grid, and a list of what it told."""

    def __init__(self, sheet: Table, **options: object) -> None:
        super().__init__()
        self.grid = Grid(sheet, **options)  # type: ignore[arg-type]
        self.told: list[tuple[str, int, int]] = []

    def compose(self) -> ComposeResult:
        yield self.grid

    def on_grid_moved(self, message: Grid.Moved) -> None:
        assert message.control is self.grid
        self.told.append(("moved", message.row, message.column))

    def on_grid_scrolled(self, message: Grid.Scrolled) -> None:
        assert message.control is self.grid
        self.told.append(("scrolled", message.top, message.first))


Opened = AsyncIterator[tuple[Pilot[None], Grid]]


@asynccontextmanager
async def opened(sheet: Table, size: tuple[int, int] = (50, 10), **options: object) -> Opened:
    """A grid on a sheet, on a screen of this size."""
    app = GridApp(sheet, **options)
    async with app.run_test(size=size) as pilot:
        yield pilot, app.grid


def screen(grid: Grid) -> list[str]:
    """What stands on the screen, as text."""
    return ["".join(segment.text for segment in strip) for strip in grid.screen._compositor.render_strips()]


def painted(grid: Grid) -> list[str]:
    """The grid's lines, drawn afresh."""
    return [grid.render_line(y).text for y in range(grid.size.height)]


def style_at(grid: Grid, region: Region, x: int = 1) -> Style | None:
    """The style at a cell of the screen."""
    strip = grid.render_line(region.y).crop(region.x + x, region.x + x + 1)
    return next(iter(strip)).style


async def keys(pilot: Pilot[None], *pressed: str) -> None:
    for key in pressed:
        pilot.app.simulate_key(key)
    await pilot.pause()


# Where 20 x 12 cells in a grid of 50 x 10 (8 rows of the body, 4 columns) lead from (5, 3), top 0 and first 0
KEYS = [
    *(("up", (4, 3), None), ("down", (6, 3), None)),
    *(("left", (5, 2), None), ("right", (5, 4), None), ("home", (5, 0), None), ("end", (5, 11), None)),
    *(("ctrl+home", (0, 0), None), ("ctrl+end", (19, 11), None)),
    *(("pageup", (0, 3), None), ("pagedown", (13, 3), None)),
    ("shift+up", (4, 3), (4, 5, 3, 3)),
    ("shift+down", (6, 3), (5, 6, 3, 3)),
    ("shift+left", (5, 2), (5, 5, 2, 3)),
    ("shift+right", (5, 4), (5, 5, 3, 4)),
]


@pytest.mark.parametrize(("key", "cursor", "span"), KEYS)
async def test_each_key_moves_the_cursor_and_keeps_it_visible(
    key: str, cursor: tuple[int, int], span: tuple[int, ...] | None
) -> None:
    async with opened(table(20, 12)) as (pilot, grid):
        grid.go(5, 3)
        await keys(pilot, key)
        row, column = cursor
        assert grid.cursor == cursor
        assert grid.span == (span or (row, row, column, column))
        assert row in grid.visible_rows()
        assert column in grid.visible_columns()
        assert pilot.app.cursor_position == grid.region.offset + grid.cell_region(*cursor).offset


def test_every_key_has_an_id_a_tooltip_and_stays_out_of_the_footer() -> None:
    bindings = list(Grid.BINDINGS)
    assert [binding.key for binding in bindings if not binding.tooltip or binding.show] == []
    assert len({binding.id for binding in bindings}) == len(bindings)
    assert set(Grid(table(1, 1))._bindings.key_to_bindings) == {key for key, _, _ in KEYS}


async def test_pages_move_view_and_cursor_together_and_stop_at_the_ends() -> None:
    async with opened(table(20, 3)) as (pilot, grid):
        grid.go(2, 0)
        seen = []
        for key in ("pagedown", "pagedown", "pagedown", "pageup", "pageup", "pageup"):
            await keys(pilot, key)
            seen.append((grid.top, grid.cursor[0]))
        assert seen == [(8, 10), (12, 18), (12, 19), (4, 11), (0, 3), (0, 0)]
        await keys(pilot, "up", "left")
        assert grid.cursor == (0, 0)


async def test_columns_are_shown_whole_or_not_at_all() -> None:
    async with opened(table(3, 12)) as (pilot, grid):
        assert grid.visible_columns() == [0, 1, 2, 3]  # 9 + 8 + 9 + 10 + 8 = 44, and C4 needs 9
        assert painted(grid)[0] == "name    │     C0       C1        C2      C3       "
        await keys(pilot, *["right"] * 4)
        assert grid.first == 1
        assert grid.visible_columns() == [1, 2, 3, 4]
        await keys(pilot, *["right"] * 7)
        assert grid.visible_columns() == [8, 9, 10, 11]


@pytest.mark.parametrize("width", range(12, 50))
async def test_at_any_width_each_number_is_whole_or_hashes(width: int) -> None:
    async with opened(table(3, 12), size=(width, 6)) as (pilot, grid):
        for key in ("home", "end"):
            await keys(pilot, key)
            for line, row in zip(painted(grid)[1:4], range(3), strict=True):
                shown = line.split("│")[1].split()
                wanted = [f"{grid.sheet.values[row, column]:+.2f}" for column in grid.visible_columns()]
                narrow = [text.strip("#") == "" for text in shown]
                assert shown == wanted or (len(wanted) == 1 and narrow == [True])
                assert cell_len(line) == width


async def test_a_mark_stands_in_the_last_cell_of_its_column_and_a_number_too_wide_is_hashes() -> None:
    sheet = table(2, 3)
    sheet.marks = {(0, 0): ("thin", "~"), (0, 1): ("short governs", "X")}
    sheet.values[1, 1] = 12345678.9
    async with opened(sheet) as (_, grid):
        assert painted(grid)[1] == "R0      │  +0.00~   +1.00X    +2.00               "
        assert painted(grid)[2] == "R1      │  +3.00  #######     +5.00               "


async def test_roles_show_as_the_palette_has_them_and_the_cursor_is_reversed() -> None:
    sheet = table(3, 3)
    sheet.marks = {(0, 0): ("thin", "~"), (0, 1): ("short governs", "X")}
    palette = Palette("ansi")
    async with opened(sheet, palette=palette) as (_, grid):
        wanted = {(0, 0): "thin cursor", (0, 1): "short governs", (1, 1): "plain"}
        assert [style_at(grid, grid.cell_region(*cell)) for cell in wanted] == list(map(palette.style, wanted.values()))
        assert style_at(grid, grid.cell_region(0, 0)).reverse
        assert len(list(grid.render_line(2))) == 1  # neighbours of one style are one segment


async def test_head_and_name_of_the_cursors_cell_stand_out() -> None:
    async with opened(table(3, 3)) as (_, grid):
        grid.go(2, 1)
        bold_heads = [bool(style_at(grid, Region(grid.cell_region(2, c).x, 0)).bold) for c in range(3)]
        bold_names = [bool(style_at(grid, Region(0, 1 + row), 0).bold) for row in range(3)]
        assert (bold_heads, bold_names) == ([False, True, False], [False, False, True])


@pytest.mark.parametrize(
    ("name", "shown"),
    [
        ("日本語", "日本語  "),  # two cells each
        ("日本語の軸", "日本語… "),  # a wide character that straddles the edge gives way to a blank
        ("Welle\u00a0é", "Welle é "),  # one cell each, the blank that does not break too
        ("Welle e\u0301", "Welle é "),  # the same, written as letter and mark
        ("a\x1b[31mb", "a␛[31mb "),  # a colour sequence
        ("a\nb\tc\x7f", "a␊b␉c␡  "),  # line end, tab, delete
        ("a\x85b\u2028c", "a�b�c   "),  # C1 and a line separator
        ("a\u202eb\u200bc", "a�b�c   "),  # override of direction, zero width
        ("❤\ufe0f 🇳🇴", "❤� ��   "),  # what joins into a glyph of another width
        ("much too long", "much to…"),  # cut with a mark
    ],
)
async def test_names_keep_their_cells_whatever_they_hold(name: str, shown: str) -> None:
    sheet = Table(np.zeros((2, 2)), names={0: name})
    sheet.heads[1] = name
    async with opened(sheet) as (_, grid):
        header, line, *_ = painted(grid)
        assert line.startswith(shown.rstrip())
        assert cell_len(line.split("│")[0]) == NAME
        assert cell_len(line) == cell_len(header) == 50
        assert all(text.isprintable() for text in painted(grid))


async def test_a_run_that_a_sheet_did_not_make_safe_is_made_so() -> None:
    class Careless(Table):
        def frozen(self, row: int, room: int) -> Runs:
            return [("\x1b]0;gone\x07 and much too long", "head")]

        def _cell(self, row: int, column: int) -> Cell:
            return Cell("\x1b[2J", "plain", "\x07 and more")

    async with opened(Careless(np.zeros((2, 2)))) as (_, grid):
        assert painted(grid)[1] == "␛]0;gone│   ␛[2J…    ␛[2J…" + " " * 24
        assert screen(grid)[1] == painted(grid)[1]


@pytest.mark.parametrize(
    ("rows", "key", "starts"),
    [
        (3, "ctrl+end", ["R0", "R1", "R2", "foot 0", "foot 1", "", "", "", ""]),  # right under the last row
        (7, "ctrl+end", ["R0", "R1", "R2", "R3", "R4", "R5", "R6", "foot 0", "foot 1"]),  # just fits
        (30, "ctrl+home", ["R0", "R1", "R2", "R3", "R4", "R5", "R6", "foot 0", "foot 1"]),  # on the last lines
        (30, "ctrl+end", ["R23", "R24", "R25", "R26", "R27", "R28", "R29", "foot 0", "foot 1"]),
    ],
)
async def test_the_footer_stands_under_the_body_and_on_the_screen(rows: int, key: str, starts: list[str]) -> None:
    async with opened(table(rows, 2, footers=2)) as (pilot, grid):
        await keys(pilot, key)
        assert [line[:7].strip() for line in screen(grid)] == ["name", *starts]
        assert painted(grid)[1 + starts.index("foot 1")].split("│")[1].split() == ["f1.0", "f1.1"]


@pytest.mark.parametrize("height", [1, 2, 3])
async def test_a_tiny_screen_keeps_the_cursors_row_before_the_footer(height: int) -> None:
    async with opened(table(30, 2, footers=3), size=(50, height)) as (pilot, grid):
        await keys(pilot, "down", "down", "ctrl+end", "pageup", "up")
        assert grid.cursor[0] in grid.visible_rows()
        if height > 1:
            assert painted(grid)[1].startswith(f"R{grid.cursor[0]}")


@pytest.mark.parametrize("shape", [(0, 5), (5, 0), (0, 0)])
async def test_an_empty_sheet_says_what_to_press_and_bears_every_key(shape: tuple[int, int]) -> None:
    async with opened(table(*shape)) as (pilot, grid):
        assert [line.rstrip() for line in painted(grid)][4:6] == ["  No rows yet.", "  Press a to add one."]
        await keys(pilot, *[key for key, _, _ in KEYS])
        await pilot.click(Grid, offset=(12, 3))
        await turn(pilot, True)
        grid.go(5, 5)
        grid.sheet_changed(structure=True)
        await pilot.pause()
        assert grid.cursor == (0, 0)
        assert grid.visible_rows() == range(0)
        assert pilot.app.told == []


async def test_the_cursor_is_kept_in_a_sheet_that_shrinks() -> None:
    sheet = table(30, 12)
    async with opened(sheet) as (pilot, grid):
        await keys(pilot, "ctrl+end", "shift+up")
        for rows, columns, cursor in ((12, 3, (11, 2)), (1, 1, (0, 0)), (0, 1, (0, 0))):
            sheet.values = np.zeros((rows, columns))
            assert len(painted(grid)) == 10  # not told yet, and no crash
            grid.sheet_changed()
            await pilot.pause()
            assert grid.cursor == cursor
            assert grid.span.bottom < max(rows, 1)
            assert len(grid.visible_rows()) == min(rows, 8)


async def test_data_keep_the_selection_structure_drops_it_and_another_sheet_clamps_the_cursor() -> None:
    async with opened(table(30, 12)) as (pilot, grid):
        await keys(pilot, "ctrl+end", "shift+up")
        grid.sheet_changed()
        assert grid.span == Span(28, 29, 11, 11)
        grid.sheet_changed(structure=True)
        assert grid.span == Span(28, 28, 11, 11)
        grid.go(29, 11, extend=True)
        grid.show(other := table(3, 2, footers=0))
        await pilot.pause()
        assert grid.sheet is other
        assert grid.span == Span(2, 2, 1, 1)
        assert screen(grid)[3].startswith("R2      │  +4.00    +5.00 ")
        grid.show(Table(np.ones((3, 2)), footers=0))  # no other place, but other numbers
        await pilot.pause()
        assert screen(grid)[3].startswith("R2      │  +1.00    +1.00 ")


async def test_resizing_keeps_the_cursor_visible_and_wastes_no_room() -> None:
    async with opened(table(30, 12), size=(100, 30)) as (pilot, grid):
        await keys(pilot, *["down"] * 25, *["right"] * 7)
        for size in ((40, 8), (13, 3), (60, 24), (200, 50)):
            await pilot.resize_terminal(*size)
            await pilot.pause()
            assert grid.cursor == (25, 7)
            assert 25 in grid.visible_rows()
            assert 7 in grid.visible_columns()
            assert pilot.app.cursor_position == grid.region.offset + grid.cell_region(25, 7).offset
        assert (grid.top, grid.first) == (0, 0)
        assert painted(grid)[1].startswith("R0              │ ")  # names have more room than at 50


async def test_a_selection_grows_shrinks_and_ends_with_a_plain_move() -> None:
    palette = Palette("mono")
    async with opened(table(9, 4), palette=palette, size=(50, 12)) as (pilot, grid):
        grid.go(3, 1)
        await keys(pilot, "shift+down", "shift+down", "shift+right")
        assert grid.span == Span(top=3, bottom=5, left=1, right=2)
        assert grid.cursor == (5, 2)
        cells = [(row, column) for row in range(9) for column in range(4)]
        underlined = [cell for cell in cells if style_at(grid, grid.cell_region(*cell)).underline]
        assert underlined == [(3, 1), (3, 2), (4, 1), (4, 2), (5, 1)]
        await keys(pilot, "shift+up", "shift+up", "shift+up", "shift+left")
        assert grid.span == Span(top=2, bottom=3, left=1, right=1)
        await keys(pilot, "left")
        assert grid.span == Span(2, 2, 0, 0)


def places(grid: Grid) -> dict[tuple[int, int], tuple[str, Style | None]]:
    """Every cell of the grid's screen as it would be drawn afresh."""
    lines = [[(letter, seg.style) for seg in grid.render_line(y) for letter in seg.text] for y in range(10)]
    return {(x, y): cell for y, line in enumerate(lines) for x, cell in enumerate(line)}


async def test_whatever_a_key_changes_on_the_screen_is_repainted(monkeypatch: pytest.MonkeyPatch) -> None:
    asked: list[Region] = []
    async with opened(table(30, 12)) as (pilot, grid):
        monkeypatch.setattr(grid, "refresh", lambda *regions: asked.extend(regions or [grid.size.region]))
        walk = ["down", "right", "shift+down", "shift+right", "shift+up", "left", "end", "pagedown", "shift+up"]
        for key in [*walk, "home", "ctrl+end", "shift+left", "shift+up", "shift+up", "right", "left", "ctrl+home"]:
            before = places(grid)
            asked.clear()
            await keys(pilot, key)
            changed = {place for place, cell in places(grid).items() if cell != before[place]}
            assert changed, key
            assert not [place for place in changed if not any(region.contains(*place) for region in asked)], key


async def test_messages_tell_of_moves_and_of_scrolling_and_of_nothing_else() -> None:
    async with opened(table(30, 12)) as (pilot, grid):
        told = pilot.app.told
        for act, wanted in (
            (lambda: grid.action_move(-1, 0), []),  # at the edge
            (lambda: grid.action_move(1, 0), [("moved", 1, 0)]),
            (lambda: grid.action_move(0, 1, True), [("moved", 1, 1)]),
            (lambda: grid.go(1, 1), [("moved", 1, 1)]),  # drops the selection
            (lambda: grid.go(1, 1), []),
            (lambda: grid.go(20, 11), [("scrolled", 13, 8), ("moved", 20, 11)]),
            (grid.sheet_changed, []),
        ):
            told.clear()
            act()
            await pilot.pause()
            assert told == wanted


async def test_a_click_moves_the_cursor_to_the_cell_the_row_or_the_column() -> None:
    async with opened(table(5, 12)) as (pilot, grid):
        # a cell; a name: its row; a head: its column; the footer: its column; right of the last column: the row
        pointed = {(28, 3): (2, 2), (2, 4): (3, 2), (12, 0): (3, 0), (30, 6): (3, 2), (48, 2): (1, 2)}
        for offset, cursor in pointed.items():
            await pilot.click(Grid, offset=offset)
            assert grid.cursor == cursor
        await pilot.click(Grid, offset=(12, 5), shift=True)
        assert grid.span == Span(1, 4, 0, 2)


async def test_the_wheel_scrolls_three_rows_and_moves_the_cursor_only_to_keep_it_visible() -> None:
    async with opened(table(30, 12)) as (pilot, grid):
        grid.go(4, 1)
        seen = []
        for down in (True, True, False, False, False):
            await turn(pilot, down)
            seen.append((grid.top, grid.cursor))
        assert seen == [(3, (4, 1)), (6, (6, 1)), (3, (6, 1)), (0, (6, 1)), (0, (6, 1))]


async def turn(pilot: Pilot[None], down: bool) -> None:
    """One notch of the wheel over the grid."""
    kind = events.MouseScrollDown if down else events.MouseScrollUp
    grid = pilot.app.query_one(Grid)
    grid.post_message(kind(grid, 12, 3, 0, 0, 0, False, False, False, 12, 3))
    await pilot.pause()


async def test_scrolling_by_several_rows_leaves_the_cursor_inside() -> None:
    async with opened(table(30, 3), jump=4) as (pilot, grid):
        await keys(pilot, *["down"] * 8)
        assert (grid.top, grid.cursor[0]) == (4, 8)
        await keys(pilot, *["up"] * 5)
        assert (grid.top, grid.cursor[0]) == (0, 3)
        await keys(pilot, "ctrl+end")
        assert grid.top == 22


async def test_ascii_mode_draws_nothing_but_ascii_in_the_same_cells() -> None:
    async with opened(Table(np.zeros((2, 2)), names={0: "Ærmel·µ, long", 1: "日本"}), ascii=True) as (_, grid):
        lines = painted(grid)
        assert all(line.isascii() and len(line) == 50 for line in lines)
        assert [line[: NAME + 1] for line in lines[:3]] == ["name    |", "?rmel.u.|", "????    |"]
        grid.ascii = False
        assert painted(grid)[0].startswith("name    │")


async def test_a_sheet_without_a_left_block_has_no_separator() -> None:
    class Bare(Table):
        def frozen_width(self, room: int) -> int:
            return 0

    async with opened(Bare(np.zeros((2, 2)))) as (_, grid):
        assert painted(grid)[1].rstrip() == "  +0.00    +0.00"


async def test_a_grid_may_be_moved_before_it_is_on_the_screen() -> None:
    app = GridApp(table(300, 12))
    app.grid.go(200, 9)
    async with app.run_test(size=(50, 10)) as pilot:
        await pilot.pause()
        assert app.grid.cursor == (200, 9)
        assert app.grid.visible_rows() == range(193, 201)
        assert app.grid.visible_columns() == [6, 7, 8, 9]


async def first_paint(rows: int, columns: int, act: Callable[[Grid], None]) -> tuple[int, int]:
    """Cells gathered and widths asked for in one full painting after `act`."""
    sheet = Table(np.broadcast_to(np.float64(1.0), (rows, columns)))
    async with opened(sheet, size=(80, 24)) as (pilot, grid):
        sheet.gathered.clear()
        sheet.measured = 0
        act(grid)
        await pilot.pause()
        shown_rows, shown_columns = set(grid.visible_rows()), tuple(grid.visible_columns())
        assert {row for row, _ in sheet.gathered} == shown_rows
        assert {asked for _, asked in sheet.gathered} == {shown_columns}
        assert len(sheet.gathered) == len(shown_rows)  # one gather for one line
        return sum(len(asked) for _, asked in sheet.gathered), sheet.measured


@pytest.mark.parametrize(
    "act",
    [
        lambda grid: grid.sheet_changed(),  # the first screen
        lambda grid: grid.go(10**6, 10**6),  # the far corner, in one leap
        lambda grid: grid.go(30, 15),  # the middle
    ],
)
async def test_painting_asks_for_visible_cells_only_however_large_the_sheet(act: Callable[[Grid], None]) -> None:
    small, large = await first_paint(50, 30, act), await first_paint(10_000, 1_000, act)
    assert abs(small[0] - large[0]) <= 22  # columns of other widths may meet the right edge
    assert large[1] <= small[1] + 60


async def test_a_cursor_key_repaints_its_two_lines_only() -> None:
    sheet = table(50, 30)
    async with opened(sheet, size=(80, 24)) as (pilot, _):
        await keys(pilot, "down")
        sheet.gathered.clear()
        await keys(pilot, "down")
        assert sorted(row for row, _ in sheet.gathered) == [1, 2]


def luminance(colour: tuple[int, int, int]) -> float:
    """WCAG 2.1, relative luminance."""
    parts = [part / 255 for part in colour]
    red, green, blue = (part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts)
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


@pytest.mark.parametrize("system", [ColorSystem.TRUECOLOR, ColorSystem.EIGHT_BIT])
@pytest.mark.parametrize("role", [*ROLES, "short governs here", "plain edited", "short selected", "thin cursor"])
def test_every_role_has_a_contrast_of_at_least_seven(role: str, system: ColorSystem) -> None:
    style = Palette("colour").style(role)
    assert style.color is not None
    assert style.bgcolor is not None
    pair = [colour.downgrade(system).get_truecolor() for colour in (style.color, style.bgcolor)]
    dark, light = sorted(luminance(tuple(colour)) for colour in pair)
    assert (light + 0.05) / (dark + 0.05) >= 7  # WCAG 2.1, 1.4.6


def test_only_trouble_has_a_colour_of_its_own() -> None:
    for mode in ("colour", "ansi"):
        palette = Palette(mode)
        fine, thin, split, short = (palette.style(VERDICT_ROLES[v]) for v in ("clear", "thin", "split", "short"))
        assert len({fine, thin, short}) == 3
        assert split == short
        assert all(style.bgcolor == fine.bgcolor for style in (thin, split, short))


def test_without_colour_marks_bold_underline_and_reverse_remain() -> None:
    palette = Palette("mono")
    assert all(palette.style(role).color is None and palette.style(role).bgcolor is None for role in ROLES)
    laid = [palette.style(f"short {role}") for role in ("governs", "edited", "selected", "cursor")]
    assert len(set(laid)) == 4
    assert len(set(MARKS.values())) == len(MARKS)
    assert MARKS.keys() == VERDICT_ROLES.keys()


@pytest.mark.parametrize("role", ["vermilion", "", "plain shrt"])
def test_an_unknown_role_is_an_error(role: str) -> None:
    with pytest.raises(KeyError):
        Palette().style(role)


def test_the_mode_follows_the_terminal_and_no_color_wins() -> None:
    systems = ("truecolor", "256", "standard", None)
    assert [mode_for(system, False) for system in systems] == ["colour", "colour", "ansi", "mono"]
    assert {mode_for(system, True) for system in systems} == {"mono"}


def test_no_character_reaches_the_terminal_raw_or_takes_no_cell() -> None:
    for character in map(chr, [*range(0x20000), *range(0xE0000, 0xE1000)]):  # all planes with letters or controls
        shown = visible(character)
        assert (shown.isprintable(), cell_len(shown) >= 1, visible(shown) == shown) == (True, True, True), character


def test_marks_stand_on_letters_only_and_no_more_than_three() -> None:
    assert cell_len(visible("a" + "\u0316" * 1000)) == 998  # the others take a cell each
    assert visible("ก้อน") == "ก้อน"
    assert visible("\u0316a")[0] == visible(" \u0316")[1] == "�"


@pytest.mark.parametrize("text", ["a…b", "1·2 × 3", "─│┼", "Ångström", "日本", "ﬁt", "σ ≤ 5°", "␛[0m", "−1"])
def test_ascii_takes_the_same_cells(text: str) -> None:
    plain = plain_ascii(text)
    assert plain.isascii()
    assert len(plain) == cell_len(text)


@pytest.mark.parametrize(
    ("text", "width", "cut_name", "number"),
    [
        ("+0.41", 7, "+0.41  ", "  +0.41"),
        ("+0.41", 5, "+0.41", "+0.41"),
        ("+10.41", 5, "+10.…", "#####"),  # a number is never cut
        ("xy", 1, "…", "#"),
        ("xy", 0, "", ""),
    ],
)
def test_names_are_cut_and_numbers_are_not(text: str, width: int, cut_name: str, number: str) -> None:
    assert cut(text, width) == cut_name
    assert fit_number(text, width) == number
