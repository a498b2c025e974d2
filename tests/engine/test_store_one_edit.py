"""The diff of a save after one edit: the lines of that edit, and no other."""

from __future__ import annotations

import pytest

from engine import store
from engine.edits import Edit, Insert, Remove, Rename, Set, Withdraw
from engine.project import Project

from .hand_files import BRACKET, SCATTERED, SPOKEN, WINCH
from .kept import after, lines


@pytest.fixture(autouse=True)
def _never_afresh(monkeypatch: pytest.MonkeyPatch) -> None:
    """Fails a test in which the hand is given up and the file is written afresh."""

    def render(project: Project) -> str:
        raise AssertionError(f"{project.settings.title}: written afresh")

    monkeypatch.setattr(store, "render", render)


TRAILING = BRACKET.replace("[200, 300.0]   # hot, no comma", "[200, 300.0],")
FACTOR = "factor = 1.15                            # or { yield = 1.15, ultimate = 1.0 }"
ROW = [120.0, 0.0, 0.0, 36.0, 0.0, 0.0]


@pytest.mark.parametrize(
    ("text", "edit", "gone", "new"),
    [
        # an inline table: one number of it
        (
            WINCH,
            Set("case", "LC01", ("loads", "haul"), 13500.0),
            ["loads = { haul = 12000.0, wind = 800.0 } # in N"],
            ["loads = { haul = 13500.0, wind = 800.0 } # in N"],
        ),
        # a dotted key whose whole number stays one
        (BRACKET, Set("case", "LC 1", ("loads", "pull"), 13500.0), ["loads.pull = +12_000"], ["loads.pull = 13500"]),
        # a dotted key with blanks about its dot, and a comment
        (
            BRACKET,
            Set("case", "LC 1", ("loads", "side"), 0.5),
            ['loads . "side" = 8e2   # eight hundred'],
            ['loads . "side" = 0.5   # eight hundred'],
        ),
        # a table of its own, and a key that is not ASCII
        (BRACKET, Set("case", "two", ("loads", "Wärme"), 3.0), ['"Wärme" = 2.5'], ['"Wärme" = 3.0']),
        # a load that was not named: after the others, dotted as they are
        (BRACKET, Set("case", "LC 1", ("loads", "Wärme"), 1.0), [], ['loads."Wärme" = 1.0']),
        # an inline table with a member more, one with a member less, and one whose last member goes
        (
            WINCH,
            Set("point", "P01", ("kt",), {"Mz": 1.7, "T": 1.4, "N": 2.0}),
            ["kt = { Mz = 1.7, T = 1.4 }"],
            ["kt = { Mz = 1.7, T = 1.4, N = 2.0 }"],
        ),
        (
            WINCH,
            Set("case", "LC01", ("loads", "wind"), None),
            ["loads = { haul = 12000.0, wind = 800.0 } # in N"],
            ["loads = { haul = 12000.0 } # in N"],
        ),
        (WINCH, Set("case", "LC01", ("combine", "dead"), None), ["combine = { dead = 1.1 }"], []),
        # one element of a row over several lines with comments
        (
            BRACKET,
            Set("point", "P2", ("stress", "LC 1"), ROW),
            ["  35.5, 0, 0 ]    # shear"],
            ["  36.0, 0, 0 ]    # shear"],
        ),
        # the file's own order of components: one element of the row
        (
            WINCH,
            Set("point", "P02", ("stress", "LC01"), [0.0, 125.0, 0, 35.0, 0, 0]),
            ["LC01 = [120.0, 0, 0, 35.0, 0, 0]"],
            ["LC01 = [125.0, 0, 0, 35.0, 0, 0]"],
        ),
        # a row that goes
        (BRACKET, Set("point", "P2", ("stress", "two"), None), ["two = [1,2,3,4,5,6]"], []),
        # a table that goes, with all its rows, what stands between them and the blank line above
        (
            BRACKET,
            Set("point", "P2", ("stress",), None),
            BRACKET[BRACKET.index("\n[point.stress]") : BRACKET.index('[[point]]\nname = "P3"')].split("\n")[:-1],
            [],
        ),
        # a row that comes, into the table that is there
        (
            WINCH,
            Set("point", "P02", ("stress", "dead"), [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]),
            [],
            ["dead = [2.0, 1.0, 3.0, 4.0, 5.0, 6.0]"],
        ),
        # a table that comes
        (
            WINCH,
            Set("point", "P03", ("stress", "LC01"), [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]),
            [],
            ["[point.stress]", "LC01 = [2.0, 1.0, 3.0, 4.0, 5.0, 6.0]"],
        ),
        # a key that comes: after the last of the entry's own, above its tables
        (WINCH, Set("point", "P02", ("label",), "Weld toe"), [], ['label = "Weld toe"']),
        # a key that comes, indented as its neighbours
        (BRACKET, Set("category", "normal", ("label",), "N"), [], ['\tlabel = "N"']),
        # a key that goes, with the comment behind it
        (WINCH, Set("point", "P01", ("factor",), None), [FACTOR], []),
        # one number for both theories stays one
        (BRACKET, Set("category", "normal", ("yield",), 1.6), ["\tyield = 1.5"], ["\tyield = 1.6"]),
        # a table of one limit stays one where the other keeps its default
        (BRACKET, Set("point", "P1", ("factor",), {"yield": 1.2}), ["factor.yield = 1.15"], ["factor.yield = 1.2"]),
        # a table that a number can say stays a table
        (
            BRACKET,
            Set("category", "normal", ("ultimate",), 2.25),
            ["\tultimate = {tresca=2.0,von-mises=2}"],
            ["\tultimate = {tresca=2.25,von-mises=2.25}"],
        ),
        # a table of both limits stays one though a number would do
        (
            WINCH,
            Set("point", "P02", ("factor",), 1.25),
            ["factor = { yield = 1.1, ultimate = 1.2 }"],
            ["factor = { yield = 1.25, ultimate = 1.25 }"],
        ),
        # what says the default stays, though it need not be said
        (SPOKEN, Set("case", "a", ("temperature",), 20.0), [], ["temperature = 20.0"]),
        # a row appended to a list over several lines, whose last has no comma
        (
            BRACKET,
            Set("material", "steel", ("yield-at",), [[20, 345.0], [100, 318.0], [200, 300.0], [300, 280.0]]),
            ["    [200, 300.0]   # hot, no comma"],
            ["    [200, 300.0],   # hot, no comma", "    [300.0, 280.0]"],
        ),
        # one appended to a list over several lines that ends with a comma
        (
            TRAILING,
            Set("material", "steel", ("yield-at",), [[20, 345.0], [100, 318.0], [200, 300.0], [300, 280.0]]),
            [],
            ["    [300.0, 280.0],"],
        ),
        # one put before all others
        (
            BRACKET,
            Set("material", "steel", ("yield-at",), [[0, 350.0], [20, 345.0], [100, 318.0], [200, 300.0]]),
            [],
            ["    [0.0, 350.0],"],
        ),
        # the first taken out, with the remark behind it
        (
            BRACKET,
            Set("material", "steel", ("yield-at",), [[100, 318.0], [200, 300.0]]),
            ["    [20, 345.0],   # room"],
            [],
        ),
        # the last taken out
        (
            BRACKET,
            Set("material", "steel", ("yield-at",), [[20, 345.0], [100, 318.0]]),
            ["    [200, 300.0]   # hot, no comma"],
            [],
        ),
        # a row taken out of it; the remark above stays
        (
            BRACKET,
            Set("material", "steel", ("yield-at",), [[20, 345.0], [200, 300.0]]),
            ["    [100, 318.0],"],
            [],
        ),
        # a name taken out of a list over lines
        (
            BRACKET,
            Set("point", "P1", ("not-felt",), ["Wärme"]),
            ['not-felt = [ "side",   # no', '   "Wärme", ]'],
            ['not-felt = [ "Wärme", ]'],
        ),
        # text over several lines
        (
            BRACKET,
            Set("point", "P1", ("source",), "run 12,\nnode 4712"),
            ['node 4711"""'],
            ['node 4712"""'],
        ),
        # text in single quotes keeps them
        (BRACKET, Set("project", "", ("title",), "C:\\x"), ["project.title = 'Bracket'"], ["project.title = 'C:\\x'"]),
        # text that single quotes cannot hold
        (BRACKET, Set("project", "", ("title",), "it's"), ["project.title = 'Bracket'"], ['project.title = "it\'s"']),
        # a key of [project] written with dots
        (BRACKET, Set("project", "", ("revision",), "C"), [], ['project.revision = "C"']),
        # an entry written in an inline list
        (
            BRACKET,
            Set("load", "side", ("label",), "Side pull"),
            ['  { name = "side" , label = "S" },'],
            ['  { name = "side" , label = "Side pull" },'],
        ),
        # another number for a name in a table by case
        (
            BRACKET,
            Set("point", "P3", ("temperature", "two"), 61.0),
            ['temperature = { "LC 1" = 20, two = 60.0 }'],
            ['temperature = { "LC 1" = 20, two = 61.0 }'],
        ),
        # a table that headers of longer names make
        (
            BRACKET,
            Set("section", "A-A", ("resultants",), {"Mz": {"pull": 210.0}, "T": {"pull": 145.0}}),
            ["pull = 140.0 # arm"],
            ["pull = 145.0 # arm"],
        ),
        # a table far below its entry
        (
            SCATTERED,
            Set("point", "A", ("stress", "two"), [0.0] * 6),
            [],
            ["two = [0.0, 0.0, 0.0, 0.0, 0.0, 0.0]"],
        ),
        # a renamed load, everywhere it is named
        (
            BRACKET,
            Rename("load", "side", "quer, 1"),
            [
                '  { name = "side" , label = "S" },',
                'loads . "side" = 8e2   # eight hundred',
                'not-felt = [ "side",   # no',
            ],
            [
                '  { name = "quer, 1" , label = "S" },',
                'loads . "quer, 1" = 8e2   # eight hundred',
                'not-felt = [ "quer, 1",   # no',
            ],
        ),
        # a renamed point with an acknowledgement
        (WINCH, Rename("point", "P02", "P2"), ['name = "P02"', 'point = "P02"'], ['name = "P2"', 'point = "P2"']),
        # an entry that goes, with the comments that touch it
        (
            BRACKET,
            Remove("point", "P2"),
            BRACKET[BRACKET.index('name = "P2"') : BRACKET.index('name = "P3"')].split("\n"),
            [],
        ),
        # the last entry of its kind and of the file
        (WINCH, Withdraw("P02", "hydrostatic-tension"), ["", *WINCH[WINCH.index("[[ack") :].split("\n")[:-1]], []),
        # an entry that comes, with a blank line as between the others
        (
            WINCH,
            Insert("load", 2, {"name": "new load"}),
            [],
            ["", "[[load]]", 'name = "new load"'],
        ),
    ],
)
def test_an_edit_touches_its_own_lines_alone(text: str, edit: Edit, gone: list[str], new: list[str]) -> None:
    found_gone, found_new = lines(text, after(text, edit))
    assert sorted(found_gone) == sorted(gone)
    assert sorted(found_new) == sorted(new)
