"""The desk: the one screen on which a project is worked on. Summary, grid, the cell here, the last line."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import ClassVar

from rich.cells import cell_len
from rich.text import Text
from textual import events
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.screen import Screen
from textual.widgets import Static

from engine.edits import Edit, Refusal
from engine.entry import EntryError
from engine.patch import Patch
from engine.table import MarginTable
from engine.units import UnitError

from .dialogs import Page
from .document import Document, Pending, State
from .entry_line import EntryLine, Request
from .file_actions import FileActions
from .grid import Grid
from .help import help_text
from .here import governs_line, said_lines
from .margins_sheet import MarginsSheet
from .palette import Palette, Runs, plain_ascii, visible
from .part_actions import PartActions
from .sheet import Axis, WorkSheet
from .sheets import ORDER, make_sheet
from .summary_lines import SummaryLines
from .take_on import TakeOnActions
from .texts import fitted
from .trouble import Trouble

HINTS = (
    "? keys",
    "g worst",
    "Enter open",
    "F3 loads",
    "ctrl+s save",
    "ctrl+q leave",
    "n trouble",
    "u undo",
    "t theory",
    "l limit",
    "q quantity",
    "a add",
    "F4 points",
    "F5 materials",
)
"""The keys that matter, as many as fit, those first that a newcomer needs."""
STARTS_ENTRY = "0123456789+-.("
SHOWN_REFUSALS = (Refusal, EntryError, UnitError)


def _key(key: str, action: str, description: str, tooltip: str, show: bool = False) -> Binding:
    return Binding(key, action, description, show=show, tooltip=tooltip, id=f"desk.{description.replace(' ', '-')}")


class Desk(PartActions, FileActions, TakeOnActions, Screen[None]):
    """One document's screen. It shows and edits; the engine computes."""

    CSS_PATH = "desk.tcss"
    BINDINGS: ClassVar[list[BindingType]] = [
        *(_key(f"f{n}", f"sheet('{key}')", title.lower(), f"The {title} sheet") for n, key, title in ORDER),
        _key("left_square_bracket", "sheet_beside(-1)", "sheet before", "The sheet before this one"),
        _key("right_square_bracket", "sheet_beside(1)", "sheet after", "The sheet after this one"),
        _key("enter", "enter", "edit or open", "Edit the cell, or open what stands behind it"),
        _key("g", "worst", "governing cell", "To the governing cell of the project"),
        _key("G", "worst_of_row", "governing of row", "To the governing cell of this row's point"),
        _key("n", "trouble(1)", "next trouble", "Next cell in trouble: short, then split, thin, no data"),
        _key("N", "trouble(-1)", "trouble before", "The cell in trouble before"),
        _key("t", "show('theory')", "theory", "Which theory the cells show"),
        _key("l", "show('limit')", "limit", "Which limit the cells show"),
        _key("q", "show('quantity')", "quantity", "Margin, utilisation or equivalent stress"),
        _key("a", "add", "add", "Add a row's part: a point, a case, a material ..."),
        _key("A", "add('column')", "add column", "Add a column's part: a case, a load"),
        _key("d", "duplicate", "duplicate", "Duplicate the row's part"),
        _key("D", "duplicate('column')", "duplicate column", "Duplicate the column's part"),
        _key("r", "rename", "rename", "Rename the row's part, everywhere"),
        _key("R", "rename('column')", "rename column", "Rename the column's part, everywhere"),
        _key("x", "delete", "delete", "Delete the row's part, or its stress row"),
        _key("X", "delete('column')", "delete column", "Delete the column's part"),
        _key("ctrl+up", "shift('row', -1)", "move row up", "Move the row up"),
        _key("ctrl+down", "shift('row', 1)", "move row down", "Move the row down"),
        _key("ctrl+left", "shift('column', -1)", "move column left", "Move the column to the left"),
        _key("ctrl+right", "shift('column', 1)", "move column right", "Move the column to the right"),
        _key("u", "undo", "undo", "Take the last edit back"),
        _key("U", "redo", "redo", "Make the edit taken back again"),
        _key("ctrl+s", "save", "save", "Write the file"),
        _key("S", "save_as", "save as", "Write the file under another name"),
        _key("ctrl+r", "reload", "read again", "Read the file again"),
        _key("ctrl+q", "leave", "leave", "Leave; asks while edits are unsaved"),
        _key("ctrl+z", "app.suspend_process", "suspend", "To the shell; fg comes back"),
        _key("ctrl+p", "app.command_palette", "commands", "All commands by their names"),
        _key("question_mark,f1", "help", "keys", "This page"),
        _key("escape", "quiet", "quiet", "Clear the message; back to the Margins sheet from a point's rows"),
    ]

    def __init__(self, document: Document, palette: Palette, ascii_only: bool = False) -> None:
        super().__init__()
        self.document = document
        self.palette = palette
        self._ascii = ascii_only
        self._sheets: dict[str, WorkSheet] = {}
        self._places: dict[str, tuple[int, int]] = {}
        self.sheet: WorkSheet = self._sheet("margins")
        self._trouble = Trouble()
        self._ahead: State | None = None
        self._not_taken = ""
        self._busy = False

    def compose(self) -> ComposeResult:
        yield SummaryLines(self.palette, self._ascii)
        yield Grid(self.sheet, palette=self.palette, ascii=self._ascii)
        yield Static("", id="rule", markup=False)
        yield Static("", id="here", markup=False)
        yield EntryLine(self.palette, self._ascii)

    @property
    def grid(self) -> Grid:
        """The grid."""
        return self.query_one(Grid)

    @property
    def line(self) -> EntryLine:
        """The last line."""
        return self.query_one(EntryLine)

    def on_mount(self) -> None:
        self.grid.focus()
        self.refresh_all()
        self._hint()

    def on_resize(self, _event: events.Resize) -> None:
        self.call_after_refresh(self._laid_out)

    def _laid_out(self) -> None:
        self.refresh_texts()
        if not self.line.typing:
            self._hint()

    # ---- showing

    def refresh_all(self, structure: bool = False) -> None:
        """Show the document anew."""
        if self.sheet.gone:
            self.action_sheet("margins")
        if structure:
            self._sheets = {
                key: sheet for key, sheet in self._sheets.items() if key in dict.fromkeys(k for _, k, _ in ORDER)
            }
        self.grid.sheet_changed(structure)
        self.refresh_texts()

    def refresh_texts(self) -> None:
        """Everything but the grid."""
        self._tell()
        row, column = self.grid.cursor
        rows, columns = self.sheet.size()
        lines = self.sheet.here(row, column) if row < rows and column < columns else []
        if self._not_taken:
            lines = said_lines("Not taken" if self.line.typing else "Not done", self._not_taken, self.size.width)
        lines = [*lines[:4], *([[("", "plain")]] * (4 - len(lines[:4]))), governs_line(self.document)]
        here = Text("\n").join(self._text(runs) for runs in lines)
        self.query_one("#here", Static).update(here, layout=False)  # heights are fixed: nothing to lay out anew
        rule = Text(self._plain("─" * max(self.size.width, 1)), self.palette.style("dim"))
        self.query_one("#rule", Static).update(rule, layout=False)

    def _plain(self, text: str) -> str:
        return plain_ascii(text) if self._ascii else text

    def _text(self, runs: Runs) -> Text:
        line = Text()
        for text, role in runs:
            line.append(visible(text), self.palette.style(role))
        return fitted(line, max(self.size.width, 20), self._ascii)

    def _tell(self) -> None:
        document, ahead = self.document, self._ahead
        typing = ahead is not None and self.line.typing
        shows = "while typing: what the margins would become" if typing else self.sheet.shows()
        state = ahead if ahead is not None and typing else document.state
        self.query_one(SummaryLines).tell(state, document.dirty, document.notes, shows, self._where(), typing)

    def _where(self) -> list[str]:
        """Where in the grid one is and where what governs lies off the screen, longest wording first."""
        rows, columns = self.sheet.size()
        seen_rows, seen = self.grid.visible_rows(), self.grid.visible_columns()
        if not rows or not columns or not seen:
            return []
        across = f"{seen[0] + 1}-{seen[-1] + 1} of {columns}"
        down = f"{seen_rows.start + 1}-{seen_rows.stop} of {rows}"
        worst = self._worst_side(seen_rows, seen)
        wordings = [
            f"rows {down}, columns {across}{worst}",
            f"columns {across}{worst}" if len(seen_rows) == rows else f"rows {down}{worst}",
        ]
        return [*wordings, worst.removeprefix(", ")] if worst else wordings

    def _worst_side(self, seen_rows: range, seen: list[int]) -> str:
        found = self.document.table.envelope.of_project()
        if not isinstance(self.sheet, MarginsSheet) or not found.known:
            return ""
        sides = []
        if found.point not in seen_rows:
            sides.append("above" if found.point < seen_rows.start else "below")
        if found.case not in seen:
            sides.append("left" if found.case < seen[0] else "right")
        return f", worst: {' and '.join(sides) or 'in view'}"

    def say(self, message: str) -> None:
        """Show the message of the last act."""
        self.line.say(self._plain(message))

    def refuse(self, message: str) -> None:
        """Show why something was not done; above the last line too where that is too short for it."""
        self.say(message)
        if cell_len(message) > self.size.width - 2:
            self._show_refusal(message)

    def _hint(self) -> None:
        shown: list[str] = []
        for words in HINTS:
            if sum(len(word) + 2 for word in (*shown, words)) < max(self.app.size.width, 40):
                shown.append(words)
        self.say("  ".join(shown))

    def on_grid_moved(self, _event: Grid.Moved) -> None:
        if not self.line.typing:
            self._not_taken = ""
        self.refresh_texts()

    def on_grid_scrolled(self, _event: Grid.Scrolled) -> None:
        self._tell()

    # ---- sheets

    def _sheet(self, key: str, subject: str = "") -> WorkSheet:
        name = f"{key}:{subject}" if subject else key
        if name not in self._sheets:
            self._sheets[name] = make_sheet(key, self.document, subject)
        return self._sheets[name]

    def action_sheet(self, key: str, subject: str = "") -> None:
        """Switch to a sheet; the cursor comes back to where it was there."""
        self._not_taken = ""
        self._places[self._key_of(self.sheet)] = self.grid.cursor
        self.sheet = self._sheet(key, subject)
        self.grid.show(self.sheet)
        self.grid.go(*self._places.get(self._key_of(self.sheet), (0, 0)))
        self.refresh_texts()
        self._hint()

    @staticmethod
    def _key_of(sheet: WorkSheet) -> str:
        return f"{sheet.key}:{getattr(sheet, 'point_name', '')}"

    def action_sheet_beside(self, step: int) -> None:
        """The sheet before or after this one."""
        keys = [key for _, key, _ in ORDER]
        place = keys.index(self.sheet.key) if self.sheet.key in keys else 0
        self.action_sheet(keys[(place + step) % len(keys)])

    def go_to(self, axis: Axis, name: str) -> None:
        """Move the cursor to a part of this sheet, if it is shown there."""
        place = self.sheet.row_called(name) if axis == "row" else self.sheet.column_called(name)
        if place >= 0:
            row, column = self.grid.cursor
            self.grid.go(*((place, column) if axis == "row" else (row, place)))

    # ---- moving

    def action_worst(self) -> None:
        """To the governing cell of the project."""
        self._to_governing(self.document.table.envelope.worst_point())

    def action_worst_of_row(self) -> None:
        """To the governing cell of the cursor's point."""
        if not isinstance(self.sheet, MarginsSheet):
            self.refuse("that is a key of the Margins sheet: F2")
        elif self.sheet.size()[0]:
            self._to_governing(self.grid.cursor[0])

    def _to_governing(self, point: int) -> None:
        found = self.document.table.envelope.of_point(point) if point >= 0 else None
        if found is None or not found.known:
            self.refuse("no margin is known yet")
            return
        self._to_margins(found.point, found.case)

    def _to_margins(self, row: int, column: int) -> None:
        if not isinstance(self.sheet, MarginsSheet):
            self.action_sheet("margins")
        self.grid.go(row, column)

    def action_trouble(self, step: int) -> None:
        """To the next cell in trouble, or the one before."""
        row, column = self.grid.cursor if isinstance(self.sheet, MarginsSheet) else (-1, -1)
        found = self._trouble.beside(self.document.table, row, column, step)
        if found is None:
            self.say("no cell is in trouble")
            return
        self._to_margins(found[0], found[1])
        self.say(f"cell in trouble {found[2]} of {found[3]}")

    def action_show(self, what: str) -> None:
        """Change what the cells show."""
        if not isinstance(self.sheet, MarginsSheet):
            self.refuse("that is a key of the Margins sheet: F2")
            return
        show = self.sheet.show
        self.sheet.show = {"theory": show.next_theory, "limit": show.next_limit, "quantity": show.next_quantity}[what]()
        self.refresh_all()

    # ---- entries

    def take_key(self, event: events.Key) -> bool:
        """Let an open entry have a key, or start one with it; whether it was taken (see HexlipseApp.on_key)."""
        if self.line.take_key(event):
            return True
        character = event.character or ""
        if not character or character not in STARTS_ENTRY:
            return False
        row, column = self.grid.cursor
        rows, columns = self.sheet.size()
        if row >= rows or column >= columns or not self.sheet.numeric(row, column):
            return False
        self._ask(character)
        return True

    def take_paste(self, text: str) -> bool:
        """Let an open entry have a paste; whether it was taken."""
        return self.line.take_paste(text)

    def action_enter(self) -> None:
        """Edit the cell, or open what stands behind it."""
        row, column = self.grid.cursor
        rows, columns = self.sheet.size()
        if row >= rows or column >= columns:
            self.say(self.sheet.empty().replace("\n", " ") or "there is nothing here")
        elif self.sheet.key == "cautions":
            self.take_on()
        elif self.sheet.prompt(row, column):
            self._ask(self.sheet.initial(row, column))
        else:
            self._open(row, column)

    def _open(self, row: int, column: int) -> None:
        opening = self.sheet.opens(row, column)
        if opening is None:
            self.say("this cell is not edited here")
            return
        if opening.sheet:
            self.action_sheet(opening.sheet, opening.subject)
            if opening.row:
                self.go_to("row", opening.row)
        if opening.message:
            self.say(opening.message)

    def _ask(self, initial: str) -> None:
        row, column = self.grid.cursor
        sheet = self.sheet
        place = sheet.at(row, column)

        def read(text: str) -> Edit | None:
            if sheet.at(row, column) != place:  # a computation that ended meanwhile took rows away or moved them
                raise Refusal("this cell has moved since: esc, then type it again")
            return sheet.edit(row, column, text)

        def submit(text: str) -> str | None:
            try:
                edit = read(text)
            except SHOWN_REFUSALS as error:
                return str(error)
            return None if edit is None else self.commit(edit)

        look_ahead = partial(self._look_ahead, read)
        prompt = sheet.prompt(row, column)
        self.line.ask(Request(prompt, initial, submit, look_ahead, self._show_refusal, self._entry_over))

    def _show_refusal(self, why: str) -> None:
        self._not_taken = why
        self.refresh_texts()

    def _look_ahead(self, read: Callable[[str], Edit | None], text: str) -> None:
        """While typing, the summary shows what the margins would become; an entry not yet readable shows what is."""
        try:
            edit = read(text)
            self._ahead = self.document.preview(edit) if edit is not None else self.document.state
        except SHOWN_REFUSALS:
            self._ahead = None
        if self._not_taken:
            self._show_refusal("")
        self._tell()

    def _entry_over(self, taken: bool) -> None:
        self._ahead, self._not_taken = None, ""
        self.refresh_texts()
        if not taken:
            self.say("dropped; nothing was changed")

    # ---- edits

    def commit(self, edit: Edit) -> str | None:
        """Commit an edit; why not, or None."""
        try:
            pending = self.document.begin(edit)
        except Refusal as error:
            return str(error)
        return self._carry_out(pending)

    def _carry_out(self, pending: Pending) -> str | None:
        if self._busy:
            return "the last change is still being computed"
        if not pending.large:
            self._finish(pending, None)
            return None
        self._busy = True
        self.say("computing the margins ...")

        def work() -> None:
            made = self.document.make(pending)
            self.app.call_from_thread(self._finish, pending, made)

        self.run_worker(work, thread=True, exclusive=True)
        return None

    def _finish(self, pending: Pending, made: Patch | MarginTable | None) -> None:
        self._busy = False
        self.document.finish(pending, made)
        self.refresh_all(structure=True)
        self.say(pending.text)

    def action_undo(self) -> None:
        """Take the last edit back."""
        self._back_or_again(self.document.begin_undo(), "there is nothing to undo")

    def action_redo(self) -> None:
        """Make the edit taken back again."""
        self._back_or_again(self.document.begin_redo(), "there is nothing to redo")

    def _back_or_again(self, pending: Pending | None, nothing: str) -> None:
        if pending is None:
            self.say(nothing)
            return
        why = self._carry_out(pending)
        if why is not None:
            self.refuse(why)

    def action_quiet(self) -> None:
        """Clear the message; from a point's rows back to the margins."""
        if self.sheet.key in {"stress", "per-load"}:
            self.action_sheet("margins")
        self._hint()

    def action_help(self) -> None:
        """Show the keys."""
        self.app.push_screen(Page(help_text(self)))
