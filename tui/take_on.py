"""Taking a blocking caution on by name and reason, or back."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from engine.edits import Acknowledge, Edit, Withdraw

from .cautions_sheet import CautionsSheet
from .dialogs import Question
from .entry_line import Request


class TakeOnActions:
    """Mixed into the desk."""

    sheet: Any
    grid: Any
    line: Any
    app: Any
    commit: Callable[[Edit], str | None]
    say: Callable[[str], None]

    def take_on(self) -> None:
        """Acknowledge the caution under the cursor, or withdraw that."""
        sheet = self.sheet
        assert isinstance(sheet, CautionsSheet)
        row = self.grid.cursor[0]
        found, point = sheet.caution(row), sheet.point_name(row)
        if not found.blocking:
            self.say("a note blocks nothing: there is nothing to take on")
        elif found.acknowledged:
            self._ask_withdraw(Withdraw(point, found.name))
        else:
            self._ask_who(point, found.name)

    def _ask_withdraw(self, edit: Withdraw) -> None:
        text = f"{edit.caution} at {edit.point} is acknowledged. Withdrawing that drops the name and the reason given."
        options = [("w", "yes", "withdraw it: the caution blocks again")]
        self.app.push_screen(Question(text, options), lambda answer: self.commit(edit) if answer else None)

    def _ask_who(self, point: str, caution: str) -> None:
        def submit(text: str) -> str | None:
            if not text.strip():
                return "initials are needed"
            self._ask_why(point, caution, text.strip())
            return None

        self.line.ask(Request(f"{caution} at {point}: taken on by (initials)", "", submit))

    def _ask_why(self, point: str, caution: str, by: str) -> None:
        def submit(text: str) -> str | None:
            if not text.strip():
                return "a reason is needed"
            return self.commit(Acknowledge(point, caution, by, text.strip()))

        self.line.ask(Request("reason", "", submit))
