"""Add, duplicate, rename, delete and move parts: asked for in the last line, done as edits."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import Any

from engine.edits import CODEC, Batch, Edit, Insert, Move, Refusal, Rename, Set
from engine.entry import EntryError, parse
from engine.project import Kind, Project
from engine.reading import Plain, did_you_mean
from engine.references import uses
from engine.removal import removal
from engine.units import SYSTEMS

from .dialogs import Question
from .entry_line import Request
from .sheet import Axis, WorkSheet
from .stress_sheet import StressSheet

Ask = tuple[str, str, Callable[[str], Plain], str]
"""(key of the file, what is asked, reader of the entry, text to begin with); None read leaves the key out."""


class PartActions:
    """Mixed into the desk: actions on the part that the cursor's row or column is."""

    # what the desk gives
    document: Any
    sheet: WorkSheet
    grid: Any
    line: Any
    commit: Callable[[Edit], str | None]
    refuse: Callable[[str], None]
    go_to: Callable[[Axis, str], None]
    app: Any

    def _kind(self, axis: Axis) -> Kind | None:
        kind = self.sheet.row_kind if axis == "row" else self.sheet.column_kind
        if kind is None:
            self.refuse(f"a {axis} of this sheet is not a part of its own")
        return kind

    def _name_at(self, axis: Axis) -> str:
        """Name of the part under the cursor; empty where there is none."""
        row, column = self.grid.cursor
        rows, columns = self.sheet.size()
        kind = self.sheet.row_kind if axis == "row" else self.sheet.column_kind
        if (axis == "row" and row >= rows) or (axis == "column" and column >= columns) or kind is None:
            return ""
        name = self.sheet.row_name(row) if axis == "row" else self.sheet.column_name(column)
        return name if name in self.document.project.names(kind) else ""

    # ---- adding

    def action_add(self, axis: Axis = "row") -> None:
        """Add a part after the one under the cursor."""
        kind = self._kind(axis)
        if kind is not None:
            self.add(kind, axis)

    def add(self, kind: Kind, axis: Axis = "row") -> None:
        """Ask for what a new part needs and add it."""
        project: Project = self.document.project
        needs = {"point": "material", "case": "category"}.get(kind)
        if needs and not project.names(needs):  # type: ignore[arg-type]
            where = "F5, then a" if needs == "material" else "F8, then a"
            self.refuse(f"a {kind} needs a {needs}, and there is none yet: {where}")
            return
        self._ask_next(kind, axis, {}, [("name", f"name of the new {kind}", _required, ""), *self._asks(kind, project)])

    def _asks(self, kind: Kind, project: Project) -> list[Ask]:
        system = SYSTEMS[project.settings.units]
        match kind:
            case "material":
                strength = partial(parse, kind="stress", system=system)
                return [
                    ("yield", f"yield or proof strength ({system.stress})", strength, ""),
                    (
                        "ultimate",
                        f"ultimate strength ({system.stress}), or empty: not known",
                        lambda text: strength(text) if text.strip() else None,
                        "",
                    ),
                ]
            case "category":
                return [
                    ("yield.tresca", "required factor against yield, Tresca", parse, ""),
                    ("yield.von-mises", "required factor against yield, von Mises", parse, ""),
                ]
            case "load":
                units = f"{system.force}, {system.moment}, {system.stress} ..."
                return [
                    (
                        "unit",
                        f"its unit: {units}, or empty for a plain multiplier",
                        lambda text: text.strip() or None,
                        "",
                    )
                ]
            case "section":
                return [
                    ("d", f"diameter of the round ({system.length})", partial(parse, kind="length", system=system), "")
                ]
            case _:
                return self._asks_needed(kind, project)

    def _asks_needed(self, kind: Kind, project: Project) -> list[Ask]:
        """The category of a case or the material of a point, where there is a choice: margins hang on it."""
        key: Kind = "material" if kind == "point" else "category"
        names = project.names(key)
        if len(names) < 2:
            return []

        def named(text: str) -> str:
            if text.strip() not in names:
                raise Refusal(f"no {key} is named so{did_you_mean(text.strip(), names)}")
            return text.strip()

        near = self._near(kind)
        return [(key, f"its {key}", named, getattr(near, key) if near is not None else "")]

    def _ask_next(self, kind: Kind, axis: Axis, given: dict[str, Plain], asks: list[Ask]) -> None:
        key, label, reader, initial = asks[0]

        def submit(text: str) -> str | None:
            try:
                value = reader(text)
            except ValueError as error:
                return str(error)
            if key == "name" and value in self.document.project.names(kind):
                return f"there is a {kind} of that name already"
            answers = given | ({} if value is None else {key: value})
            if len(asks) > 1:
                self._ask_next(kind, axis, answers, asks[1:])
                return None
            return self._insert(kind, axis, answers)

        self.line.ask(Request(label, initial, submit))

    def _insert(self, kind: Kind, axis: Axis, answers: dict[str, Plain]) -> str | None:
        why = self.commit(Insert(kind, self._place_after(kind, axis), self._document(kind, answers)))
        if why is None:
            self.go_to(axis, str(answers["name"]))
        return why

    def _document(self, kind: Kind, answers: dict[str, Plain]) -> dict[str, Plain]:
        project: Project = self.document.project
        if kind == "category":
            factors = {"tresca": answers["yield.tresca"], "von-mises": answers["yield.von-mises"]}
            return {"name": answers["name"], "yield": factors}
        if kind == "section":
            return answers | {"shape": "round"}
        if kind in {"point", "case"}:
            key: Kind = "material" if kind == "point" else "category"
            return {key: project.names(key)[0]} | answers
        return answers

    def _near(self, kind: Kind) -> Any:
        """The part of that kind under the cursor, else the last one, else None."""
        parts = self.document.project.of(kind)
        for axis in ("row", "column"):
            own = self.sheet.row_kind if axis == "row" else self.sheet.column_kind
            if own == kind and self._name_at(axis):
                return self.document.project.find(kind, self._name_at(axis))
        return parts[-1] if parts else None

    def _place_after(self, kind: Kind, axis: Axis) -> int:
        own = self.sheet.row_kind if axis == "row" else self.sheet.column_kind
        name = self._name_at(axis) if own == kind else ""
        project: Project = self.document.project
        return project.index(kind, name) + 1 if name else len(project.of(kind))

    # ---- the part under the cursor

    def _part(self, axis: Axis) -> tuple[Kind, str] | None:
        kind = self._kind(axis)
        if kind is None:
            return None
        name = self._name_at(axis)
        if not name:
            self.refuse("there is nothing under the cursor to do that to")
            return None
        return kind, name

    def action_duplicate(self, axis: Axis = "row") -> None:
        """Copy the part under the cursor under another name."""
        part = self._part(axis)
        if part is None:
            return
        kind, name = part

        def submit(text: str) -> str | None:
            new = text.strip()
            if not new:
                return "a name is needed"
            why = self.commit(_duplicate(self.document.project, kind, name, new))
            if why is None:
                self.go_to(axis, new)
            return why

        self.line.ask(Request(f"name of the copy of {name}", f"{name} copy", submit))

    def action_rename(self, axis: Axis = "row") -> None:
        """Give the part under the cursor another name, everywhere."""
        part = self._part(axis)
        if part is None:
            return
        kind, name = part

        def submit(text: str) -> str | None:
            new = text.strip()
            return None if new == name else self.commit(Rename(kind, name, new))

        self.line.ask(Request(f"rename {kind} {name} to", name, submit))

    def action_delete(self, axis: Axis = "row") -> None:
        """Delete the part under the cursor; asks where others refer to it."""
        if isinstance(self.sheet, StressSheet) and axis == "row":
            self._delete_row(self.sheet)
            return
        part = self._part(axis)
        if part is None:
            return
        kind, name = part
        try:
            edit = removal(self.document.project, kind, name)
        except Refusal as error:
            self.refuse(str(error))
            return
        users = [] if kind == "point" else uses(self.document.project, kind, name)
        if not users:
            self._commit_or_refuse(edit)
            return
        listed = "\n".join(f"  {user}" for user in users[:8]) + (
            f"\n  and {len(users) - 8} more" if len(users) > 8 else ""
        )
        text = f"{kind} {name} is referred to by:\n{listed}\nDeleting it takes those away too. Undo brings all back."
        options = [("y", "delete", f"delete {name} and these references")]
        self.app.push_screen(Question(text, options), lambda answer: self._commit_or_refuse(edit) if answer else None)

    def _delete_row(self, sheet: StressSheet) -> None:
        edit = sheet.removal(self.grid.cursor[0])
        if edit is None:
            self.refuse("there is no row here to take away")
        else:
            self._commit_or_refuse(edit)

    def _commit_or_refuse(self, edit: Edit) -> None:
        why = self.commit(edit)
        if why is not None:
            self.refuse(why)

    def action_shift(self, axis: Axis, step: int) -> None:
        """Move the part under the cursor by one place."""
        part = self._part(axis)
        if part is None:
            return
        kind, name = part
        place = self.document.project.index(kind, name) + step
        if not 0 <= place < len(self.document.project.of(kind)):
            self.refuse("it stands at the end already")
            return
        self._commit_or_refuse(Move(kind, name, place))
        self.go_to(axis, name)


def _required(text: str) -> str:
    name = text.strip()
    if not name:
        raise EntryError("a name is needed")
    return name


def _duplicate(project: Project, kind: Kind, name: str, new: str) -> Edit:
    """A copy after the original; of a case with the stress rows that points give for it."""
    document = CODEC.write(kind, project.find(kind, name)) | {"name": new}
    insert = Insert(kind, project.index(kind, name) + 1, document)
    steps: list[Edit] = [insert]
    if kind == "case":
        for point in project.points:
            row = point.stress.get(name)
            if row is not None:
                steps.append(Set("point", point.name, ("stress", new), row.tolist()))
    return insert if len(steps) == 1 else Batch(tuple(steps), f"duplicate {kind} {name} as {new}")
