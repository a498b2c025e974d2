"""`hexlipse check`: the margin summary as tables for a terminal, plain text for a pipe, or JSON."""

from __future__ import annotations

import json
import os
import sys
from io import TextIOWrapper
from typing import Any

from rich.box import SIMPLE_HEAD
from rich.console import Console
from rich.table import Table
from rich.text import Text

from engine import summary
from engine.figures import margin_text, stress_text
from engine.margins import compute
from engine.store import ProjectError, load
from engine.table import MarginTable

from .palette import MARKS, visible
from .progress import Progress
from .words import CAUTION, SHORT_THEORY, VERDICT, theory

PASSES, FAILS, UNUSABLE = 0, 1, 2
MOST_MISSING = 12
"""Cases without data that are named for one point."""
PIPE_WIDTH = 4000
"""Columns for a pipe: nothing is wrapped or cut there."""


def run_check(path: str, *, as_json: bool = False, cells: bool = False) -> int:
    """Print the summary of a project file; the exit status. Messages go to standard error."""
    try:
        with Progress("reading", sys.stderr):
            project = load(path)
        summary.refuse_uncomputed(project)
        with Progress("computing margins", sys.stderr):
            table = compute(project)
            report = summary.report(table, with_cells=cells)
    except (ProjectError, summary.NotComputed) as error:
        print("\n".join(visible(line) for line in f"{_head(error, path)}{error}".splitlines()), file=sys.stderr)
        return UNUSABLE
    if isinstance(sys.stdout, TextIOWrapper):
        sys.stdout.reconfigure(errors="replace")  # a name that this encoding lacks is no reason to say nothing
    try:
        if as_json:
            print(json.dumps(report, ensure_ascii=True, allow_nan=False))
        else:
            _print(report, table)
        if sys.stdout is not None:
            sys.stdout.flush()
    except BrokenPipeError:
        _write_nowhere()  # the reader went away: nothing is left to say, and nobody to say it to
    except OSError as error:
        _write_nowhere()
        print(f"hexlipse: the output could not be written: {error.strerror}", file=sys.stderr)
        return UNUSABLE
    return PASSES if report["passes"] and report["complete"] else FAILS


class _Console(Console):
    """A console that leaves a reader gone to `run_check`: Rich would end with status 1, which says that it fails."""

    def on_broken_pipe(self) -> None:
        raise BrokenPipeError


def _write_nowhere() -> None:
    """Keep the interpreter from writing what is left to the same place at its end."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def _head(error: Exception, path: str) -> str:
    return f"{path}: " if isinstance(error, summary.NotComputed) else ""


def _print(report: dict[str, Any], table: MarginTable) -> None:
    console = _Console(highlight=False, markup=False, emoji=False)
    if not console.is_terminal:
        console = _Console(highlight=False, markup=False, emoji=False, width=PIPE_WIDTH)
    width = console.width
    settings = table.project.settings
    revision = f"  rev {settings.revision}" if settings.revision else ""
    console.print(Text(visible(f"{settings.title}{revision}"), "bold"))
    console.print(_outcome(report))
    console.print(_governing_words(report["governing"]), width=width)
    console.print()
    console.print(_points(report, console.is_terminal), width=width)
    _print_cautions(console, report, width)
    _print_never_govern(console, report, width)
    if "cells" in report:
        console.print(_cells(report["cells"], console.is_terminal), width=width)
    console.print()
    console.print(
        Text(f"{_accepted(report)} Stresses in {settings.units.rsplit('-', 1)[1]}. {CAUTION}"), width=min(width, 100)
    )


def _print_never_govern(console: Console, report: dict[str, Any], width: int) -> None:
    """Cases that govern nothing; those with a cell without data apart, for nobody knows what that cell would do."""
    unknown = {case for point in report["points"] for case in point["missing"]}
    sure = [name for name in report["never-govern"] if name not in unknown]
    unsure = [name for name in report["never-govern"] if name in unknown]
    heads = ("Cases that never govern: ", "Cases that govern nothing known, but have cells without data: ")
    for head, names in zip(heads, (sure, unsure), strict=True):
        if names:
            console.print(Text(head + ", ".join(visible(name) for name in names)), width=width)
    for point in report["points"]:
        if point["missing"]:
            cases = ", ".join(visible(name) for name in point["missing"][:MOST_MISSING])
            more = len(point["missing"]) - MOST_MISSING
            words = f"No data: {visible(point['name'])} in {cases}" + (f" and {more} more" if more > 0 else "")
            console.print(Text(words), width=width)


def _accepted(report: dict[str, Any]) -> str:
    accept = report["accept"]
    return "Both theories must pass." if accept == "both" else f"{theory(accept)} must pass."


def _outcome(report: dict[str, Any]) -> Text:
    outcome = "PASSES" if report["passes"] else "FAILS"
    complete = "COMPLETE" if report["complete"] else "INCOMPLETE"
    counts = "   ".join(
        f"{report['counts'][verdict]} {VERDICT[verdict]} {MARKS[verdict]}".rstrip()
        for verdict in ("short", "split", "thin", "no-data", "clear")
    )
    return Text(f"{outcome}, {complete}   {counts}")


def _figure(found: dict[str, Any]) -> str:
    if found.get("no-stress"):
        return "inf"
    return "." if found["margin"] is None else margin_text(found["margin"])


def _governing_words(found: dict[str, Any]) -> Text:
    if found["case"] is None:
        return Text("Nothing governs: no margin is known.")
    where = f"{visible(found['point'])} in {visible(found['case'])}, {found['limit']}"
    return Text(f"Governs: {where}, {theory(found['theory'])}: {_figure(found)}")


def _plain_table(lines: bool) -> Table:
    return Table(
        box=SIMPLE_HEAD if lines else None, pad_edge=False, show_edge=False, padding=(0, 1, 0, 0), header_style="bold"
    )


def _points(report: dict[str, Any], lines: bool) -> Table:
    table = _plain_table(lines)
    table.add_column("point", overflow="fold")
    for head, justify in (("least", "right"), ("", "left"), ("in", "left"), ("limit", "left"), ("theory", "left")):
        table.add_column(head, justify=justify, no_wrap=head != "in", overflow="fold")  # type: ignore[arg-type]
    for head in ("Tresca", "in", "von Mises", "in", "missing"):
        table.add_column(
            head, justify="left" if head in {"in", "missing"} else "right", no_wrap=head != "in", overflow="fold"
        )
    for point in report["points"]:
        found, tresca, mises = point["governing"], point["tresca"], point["von-mises"]
        table.add_row(
            visible(point["name"]),
            _figure(found),
            MARKS[point["verdict"]].strip() or " ",
            visible(found["case"] or "."),
            found["limit"] or ".",
            SHORT_THEORY.get(found["theory"], "."),
            _figure(tresca),
            visible(tresca["case"] or "."),
            _figure(mises),
            visible(mises["case"] or "."),
            str(len(point["missing"]) or ""),
        )
    return table


def _print_cautions(console: Console, report: dict[str, Any], width: int) -> None:
    raised = [(point["name"], caution) for point in report["points"] for caution in point["cautions"]]
    blocking = [(name, caution) for name, caution in raised if caution["blocking"]]
    notes = [(name, caution) for name, caution in raised if not caution["blocking"]]
    console.print()
    _print_grouped(console, blocking, width)
    _print_grouped(console, notes, width)
    if raised:
        console.print()


def _print_grouped(console: Console, raised: list[tuple[str, dict[str, Any]]], width: int) -> None:
    """One line for all points that have the same caution for the same reason."""
    grouped: dict[str, list[str]] = {}
    for name, caution in raised:
        state = (
            ("Caution, acknowledged" if caution["acknowledged"] else "Caution, blocks")
            if caution["blocking"]
            else "Note"
        )
        grouped.setdefault(f"{state}: {caution['name']}: {caution['text']}", []).append(name)
    for words, points in grouped.items():
        where = ", ".join(points[:6]) + (f" and {len(points) - 6} more" if len(points) > 6 else "")
        console.print(Text(visible(f"{words} ({where})")), width=width)


def _cells(cells: list[dict[str, Any]], lines: bool) -> Table:
    table = _plain_table(lines)
    for head in ("point", "case", "limit"):  # where there is no room names are folded, never numbers cut
        table.add_column(head, no_wrap=head == "limit", overflow="fold")
    for head in ("Tresca", "margin", "von Mises", "margin"):
        table.add_column(head, justify="right", no_wrap=True)
    for cell in cells:
        tresca, mises = cell["tresca"], cell["von-mises"]
        table.add_row(
            visible(cell["point"]),
            visible(cell["case"]),
            cell["limit"],
            _stress(tresca["equivalent"]),
            _figure(tresca),
            _stress(mises["equivalent"]),
            _figure(mises),
        )
    return table


def _stress(value: float | None) -> str:
    return "." if value is None else stress_text(value)
