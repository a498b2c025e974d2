"""A new project, asked for step by step: only what a first margin needs, and no factor assumed."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import ClassVar

from rich.text import Text
from textual import events
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.screen import Screen
from textual.widgets import Static

from engine.edits import Insert, Refusal, apply
from engine.entry import parse
from engine.project import Project, Settings
from engine.reading import Plain, choice, name
from engine.stress import COMPONENTS
from engine.units import SYSTEMS

from .document import Document
from .entry_line import EntryLine, Request
from .palette import Palette, visible

_SYSTEMS = tuple(SYSTEMS)
_ACCEPTS = ("both", "tresca", "von-mises")


@dataclass(frozen=True, slots=True)
class Step:
    """One question."""

    key: str
    """Under which its answer is kept."""
    asks: str
    """What is asked."""
    reads: Callable[[str, dict[str, Plain]], Plain]
    """Entry and earlier answers to value; raises ValueError with what would be right."""
    helps: str
    """What an answer may be."""


def _numbered(options: tuple[str, ...]) -> Callable[[str, dict[str, Plain]], Plain]:
    def read(text: str, _: dict[str, Plain]) -> Plain:
        text = text.strip()
        if text.isdigit() and 1 <= int(text) <= len(options):
            return options[int(text) - 1]
        return choice(*options)(text)

    return read


def _name(text: str, _: dict[str, Plain]) -> Plain:
    return name(text.strip())


def _names(text: str, _: dict[str, Plain]) -> Plain:
    found = [name(word.strip()) for word in text.split(",")]
    if len(set(found)) < len(found):
        raise Refusal("each name once")
    return found


def _stress(text: str, answers: dict[str, Plain]) -> Plain:
    value = parse(text, "stress", SYSTEMS[answers["units"]])
    if value <= 0:
        raise Refusal("a strength is above 0")
    return value


def _stress_or_nothing(text: str, answers: dict[str, Plain]) -> Plain:
    return _stress(text, answers) if text.strip() else None


def _factor(text: str, _: dict[str, Plain]) -> Plain:
    value = parse(text)
    if value <= 0:
        raise Refusal("a factor is above 0")
    return value


def _thin(text: str, _: dict[str, Plain]) -> Plain:
    value = parse(text)
    if value < 0:
        raise Refusal("at least 0")
    return value


_OPTIONS = "   ".join(f"{i} {option}" for i, option in enumerate(_SYSTEMS, 1))
STEPS: tuple[Step, ...] = (
    Step("title", "Title of the project", _name, "what reports print"),
    Step("units", "Units", _numbered(_SYSTEMS), f"a number or a name: {_OPTIONS}"),
    Step("material", "Name of the material", _name, "as in its certificate or standard, with form and thickness band"),
    Step("yield", "Its yield or proof strength", _stress, "in the project's stress unit, or with one: 345, 50 ksi"),
    Step(
        "ultimate",
        "Its ultimate strength",
        _stress_or_nothing,
        "Enter alone: not known, not needed while only yield is asked",
    ),
    Step(
        "category",
        "Name of a category of cases",
        _name,
        "cases that share required factors: normal, occasional, test ...",
    ),
    Step(
        "tresca",
        "Its required factor against yield, Tresca",
        _factor,
        "from your code or specification; none is assumed",
    ),
    Step(
        "mises",
        "Its required factor against yield, von Mises",
        _factor,
        "from your code or specification; none is assumed",
    ),
    Step(
        "accept", "Which theory must pass", _numbered(_ACCEPTS), "a number or a name: 1 both   2 tresca   3 von-mises"
    ),
    Step("thin", "A margin below this is thin", _thin, "it passes, and is marked: 0.1, or 0 for no such mark"),
    Step("cases", "Names of the first load cases", _names, "with commas: LC01, LC02"),
    Step("points", "Names of the first check points", _names, "with commas: P01, P02"),
)


def built(answers: dict[str, Plain]) -> Project:
    """The project of the answers. Raises Refusal."""
    settings = Settings(answers["title"], answers["units"], answers["accept"], answers["thin"], components=COMPONENTS)
    project = Project(settings)
    material = {"name": answers["material"], "yield": answers["yield"]}
    if answers["ultimate"] is not None:
        material["ultimate"] = answers["ultimate"]
    factors = {"tresca": answers["tresca"], "von-mises": answers["mises"]}
    parts: list[Insert] = [
        Insert("material", 0, material),
        Insert("category", 0, {"name": answers["category"], "yield": factors}),
        *(
            Insert("case", i, {"name": case, "category": answers["category"]})
            for i, case in enumerate(answers["cases"])
        ),
        *(
            Insert("point", i, {"name": point, "material": answers["material"]})
            for i, point in enumerate(answers["points"])
        ),
    ]
    for part in parts:
        project = apply(project, part)
    return project


class Starter(Screen["Document | None"]):
    """Gives the new document, or None where it was given up."""

    DEFAULT_CSS = "Starter > #asked { height: 1fr; padding: 1 2; }"
    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("ctrl+q", "leave", "leave", id="starter.leave", tooltip="Give the new project up"),
    ]

    def __init__(self, path: Path | None, palette: Palette) -> None:
        super().__init__()
        self._path = path
        self._palette = palette
        self._answers: dict[str, Plain] = {}
        self._typed: list[str] = []

    def compose(self) -> ComposeResult:
        yield Static("", id="asked", markup=False)
        yield EntryLine(self._palette)

    def on_mount(self) -> None:
        self._ask()

    def _ask(self, initial: str = "") -> None:
        step = STEPS[len(self._typed)]
        where = visible(self._path.name) if self._path else "named when it is first saved"
        lines = [Text.assemble(("A new project", "bold"), f"   {where}"), Text("")]
        lines += [Text(f"  {STEPS[i].asks + ':':<46} {visible(typed) or '-'}") for i, typed in enumerate(self._typed)]
        lines += [
            Text(""),
            Text(f"  {step.asks}?  ({len(self._typed) + 1} of {len(STEPS)})", "bold"),
            Text(f"  {step.helps}"),
        ]
        lines += [Text(""), Text("  Enter takes the answer, esc goes back a step, ctrl+q gives up.", "dim")]
        self.query_one(Static).update(Text("\n").join(lines))
        self.query_one(EntryLine).ask(Request(step.asks, initial, self._submit, closed=self._entry_over))

    def _submit(self, text: str) -> str | None:
        step = STEPS[len(self._typed)]
        try:
            self._answers[step.key] = step.reads(text, self._answers)
        except ValueError as error:
            return str(error)
        self._typed.append(text.strip())
        if len(self._typed) < len(STEPS):
            self._ask()
            return None
        try:
            project = built(self._answers)
        except Refusal as error:
            self._typed.pop()
            return str(error)
        self.dismiss(Document(project, self._path))
        return None

    def _entry_over(self, taken: bool) -> None:
        if not taken:
            self._back()

    def take_key(self, event: events.Key) -> bool:
        """Let the open entry have a key; ctrl+q is left to the screen."""
        return event.key != "ctrl+q" and self.query_one(EntryLine).take_key(event)

    def take_paste(self, text: str) -> bool:
        """Let the open entry have a paste."""
        return self.query_one(EntryLine).take_paste(text)

    def _back(self) -> None:
        if not self._typed:
            self.dismiss(None)
            return
        self._ask(self._typed.pop())

    def action_leave(self) -> None:
        """Give up."""
        self.dismiss(None)
