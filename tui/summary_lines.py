"""The three lines at the top: whether the project passes, its points by verdict, and where in it one is."""

from __future__ import annotations

from collections.abc import Sequence

from rich.cells import cell_len
from rich.text import Text
from textual.widgets import Static

from engine.envelope import Verdict
from engine.figures import margin_text
from engine.material import LIMITS

from .document import State
from .palette import MARKS, VERDICT_ROLES, Palette, visible
from .texts import fitted
from .words import VERDICT, governing_case, plural

_ORDER: tuple[Verdict, ...] = ("short", "split", "thin", "no-data", "clear")
_ACCEPTED = {"both": "accepted: both theories", "tresca": "accepted: Tresca", "von-mises": "accepted: von Mises"}


class SummaryLines(Static):
    """Three lines of text; the engine has computed all of it."""

    DEFAULT_CSS = "SummaryLines { height: 3; }"

    def __init__(self, palette: Palette, ascii_only: bool = False) -> None:
        super().__init__("", markup=False)
        self._palette, self._ascii = palette, ascii_only

    def tell(
        self, state: State, dirty: bool, notes: int, shows: str, where: Sequence[str], typing: bool = False
    ) -> None:
        """Show a state.

        where: the longest that fits is shown; typing: the state is what an open entry would make of the project.
        """
        width = max(self.size.width, 40)
        lines = [
            self._first(state, dirty, width, typing),
            self._second(state, notes, width, typing),
            self._third(shows, where, width),
        ]
        self.update(Text("\n").join(fitted(line, width, self._ascii) for line in lines), layout=False)

    def _first(self, state: State, dirty: bool, width: int, typing: bool) -> Text:
        settings = state.project.settings
        title = f"{settings.title}  rev {settings.revision}" if settings.revision else settings.title
        outcome = self._outcome(state, typing)
        accepted = Text(_ACCEPTED[settings.accept], self._palette.style("dim"))
        room = width - outcome.cell_len - accepted.cell_len - 8
        name = Text(visible(title), self._palette.style("here"))
        name.truncate(max(room, 8), overflow="ellipsis")
        name.append(" *" if dirty else "", self._palette.style("here"))
        return self._spread(name, accepted, width, outcome)

    def _outcome(self, state: State, typing: bool) -> Text:
        role = "plain here" if state.passes and state.complete else "short here"
        fails = "FAILS BY CAUTION" if state.margins_pass else "FAILS"
        words = f"{'PASSES' if state.passes else fails}, {'COMPLETE' if state.complete else 'INCOMPLETE'}"
        return Text(("would be: " if typing else "") + words, self._palette.style(role))

    def _second(self, state: State, notes: int, width: int, typing: bool) -> Text:
        counts = state.envelope.counts()
        line = Text(" ")
        for verdict in _ORDER:
            role = VERDICT_ROLES[verdict] if counts[verdict] else "dim"
            mark = f" {MARKS[verdict]}".rstrip()
            line.append(f"{counts[verdict]} {VERDICT[verdict]}{mark}", self._palette.style(role))
            line.append("  ", self._palette.style("plain"))
        line.rstrip()
        room = width - line.cell_len - 3
        if typing:
            return self._spread(line, self._fitting(self._worst(state), room, "here"), width)
        role = "short" if state.cautions.standing else "dim"
        return self._spread(line, self._fitting(self._cautions(state, notes), room, role), width)

    @staticmethod
    def _cautions(state: State, notes: int) -> list[str]:
        """How many cautions stand, longest wording first."""
        noted, taken, standing = plural(notes, "note"), state.cautions.acknowledged, state.cautions.standing
        if standing:
            blocks = plural(standing, "caution blocks", "cautions block")
            short = f"{standing} {'blocks' if standing == 1 else 'block'}"
            return [f"{blocks}, {noted}", f"cautions: {short}, {noted}", f"{short}, {noted}", short]
        if taken:
            return [
                f"{plural(taken, 'caution')} acknowledged, {noted}",
                f"{taken} acknowledged, {noted}",
                f"{taken} ack., {noted}",
            ]
        return [f"no caution blocks, {noted}", f"no caution, {noted}", noted]

    @staticmethod
    def _worst(state: State) -> list[str]:
        """The governing cell that would be, longest wording first."""
        found = state.envelope.of_project()
        if not found.known:
            return ["nothing known"]
        point = visible(state.project.points[found.point].name)
        margin, case = margin_text(found.margin), governing_case(state.project, found)
        return [
            f"worst {margin} {point} {case} {LIMITS[found.limit]}",
            f"{margin} {point[:10]} {case}",
            f"worst {margin}",
        ]

    def _third(self, shows: str, where: Sequence[str], width: int) -> Text:
        left = Text(visible(shows), self._palette.style("dim"))
        return self._spread(left, self._fitting(where, width - left.cell_len - 4, "dim"), width)

    def _fitting(self, wordings: Sequence[str], room: int, role: str) -> Text:
        """The first wording that fits, else none."""
        found = next((words for words in wordings if cell_len(visible(words)) <= room), "")
        return Text(visible(found), self._palette.style(role))

    def _spread(self, left: Text, right: Text, width: int, middle: Text | None = None) -> Text:
        """Left, middle and right of one line; the right gives way where there is no room."""
        line = Text(" ", self._palette.style("plain"), no_wrap=True)
        line.append_text(left) if not left.plain.startswith(" ") else line.append_text(left[1:])
        if middle is not None:
            gap = max(2, (width - middle.cell_len) // 2 - line.cell_len)
            line.append(" " * gap)
            line.append_text(middle)
        gap = width - line.cell_len - right.cell_len - 1
        if gap >= 1:
            line.append(" " * gap)
            line.append_text(right)
        return line
