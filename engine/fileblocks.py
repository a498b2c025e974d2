"""A project file as blocks of text, one for each entry with its comments, kept, moved, added and taken out whole."""

from __future__ import annotations

import re
from bisect import bisect_left
from collections import Counter, defaultdict
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, field
from itertools import pairwise

from engine.assembly import TOP
from engine.spans import Statement

Owner = tuple[str, int]
"""Kind and place among its kind of the entry that lines belong to; ("", 0): the keys above the first header."""
Order = Sequence["int | str"]
"""The entries of a kind as they are to stand: the place where one stood, or the text of a new one."""
HEAD: Owner = ("", 0)


@dataclass(slots=True)
class Block:
    """The lines of one entry, or a part of them where others stand between."""

    owner: Owner
    """Whose lines they are."""
    start: int
    """Offset of the first, comments directly above included."""
    end: int
    """Offset after the last, comments directly below included."""
    keep: bool = True
    """Whether it stays where it is."""
    before: list[str] = field(default_factory=list)
    """Texts of entries that come to stand above it."""
    after: list[str] = field(default_factory=list)
    """Texts of entries that come to stand below it."""


class Blocks:
    """The blocks of a text and what stands between them: blank lines, and comments that touch no entry."""

    def __init__(self, text: str, statements: Sequence[Statement], newline: str) -> None:
        """text: its last line ended."""
        self.text = text
        self._newline = newline
        self.blocks = _touching(text, _grouped(text, statements))
        edges = [0, *(edge for block in self.blocks for edge in (block.start, block.end)), len(text)]
        self._gaps = [text[a:b] for a, b in zip(edges[::2], edges[1::2], strict=True)]

    def arrange(self, kind: str, count: int, order: Order, rewritten: Callable[[int, int], str]) -> None:
        """Puts the entries of a kind into an order.

        count: how many the text has, all with headers of their own. rewritten: text of a stretch after its changes.
        """
        own = defaultdict(list)
        for block in self.blocks:
            if block.owner[0] == kind:
                own[block.owner[1]].append(block)
        staying = _longest_rise([item for item in order if isinstance(item, int)])
        for place in range(count):
            for block in own[place]:
                block.keep = place in staying
        anchor: Block | None = None
        first: list[str] = []
        for item in order:
            if isinstance(item, int) and item in staying:
                anchor = own[item][-1]
                continue
            new = item if isinstance(item, str) else "".join(rewritten(b.start, b.end) for b in own[item])
            (first if anchor is None else anchor.after).append(new)
        if staying:
            own[min(staying)][0].before += first
        elif count:
            own[count - 1][-1].after += first
        else:
            self._below_earlier(kind).after += first

    def _below_earlier(self, kind: str) -> Block:
        """The block below which the first entry of a kind goes."""
        earlier = ["", *TOP[: TOP.index(kind)]]
        return max(
            (block for block in self.blocks if block.owner[0] in earlier),
            key=lambda block: (earlier.index(block.owner[0]), block.start),
        )

    def composed(self, rewritten: Callable[[int, int], str]) -> str:
        """The whole text. rewritten: text of a stretch after its changes."""
        gaps = list(self._gaps)
        separators = Counter(self._between())
        found: list[str] = []
        for place, block in enumerate(self.blocks):
            own = [rewritten(block.start, block.end)] if block.keep else []
            pieces = [*block.before, *own, *block.after]
            if not pieces:
                self._close(gaps, place)
            separator = self._separator(block, separators)
            found += [gaps[place], separator.join(pieces)]
        return "".join([*found, gaps[-1]])

    @staticmethod
    def _close(gaps: list[str], place: int) -> None:
        """Takes the blank lines above a block that went; those below it where a comment stands above."""
        spare = place + 1 if gaps[place].strip() else place
        if not gaps[spare].strip():
            gaps[spare] = ""

    def _between(self) -> Iterator[tuple[str, str]]:
        """The blank lines above each block that has nothing else above it, with the kind if the two are of one kind."""
        for place, (upper, lower) in enumerate(pairwise(self.blocks), 1):
            if not self._gaps[place].strip():
                yield lower.owner[0] if lower.owner[0] == upper.owner[0] else "", self._gaps[place]

    def _separator(self, block: Block, seen: Counter[tuple[str, str]]) -> str:
        """The blank lines between entries, as most entries of that kind have them, or else most entries."""
        kinds = [(count, gap) for (kind, gap), count in seen.items() if kind == block.owner[0]]
        every = [(count, gap) for (_, gap), count in seen.items()]
        return max(kinds or every or [(0, self._newline)], key=lambda pair: pair[0])[1]


def _grouped(text: str, statements: Sequence[Statement]) -> list[Block]:
    """Statements of one entry that follow each other, as a block of whole lines."""
    counts: Counter[str] = Counter()
    owner = HEAD
    found = [Block(HEAD, 0, 0)]
    for statement in statements:
        if statement.brackets:
            word = statement.keys[0].name
            counts[word] += statement.brackets == 2 and len(statement.keys) == 1
            owner = (word, max(0, counts[word] - 1))
        end = text.index("\n", statement.end) + 1
        if found[-1].owner == owner:
            found[-1].end = end
        else:
            found.append(Block(owner, text.rfind("\n", 0, statement.start) + 1, end))
    return found


def _touching(text: str, blocks: list[Block]) -> list[Block]:
    """The blocks with the comments that touch them; one between two goes to the lower one."""
    for upper, lower in zip(blocks, [*blocks[1:], None], strict=True):
        until = len(text) if lower is None else lower.start
        lines = re.findall("[^\n]*\n", text[upper.end : until])
        remarks = [line.lstrip().startswith("#") for line in lines]
        above = len(lines) if lower is None else next((i for i in range(len(lines), 0, -1) if not remarks[i - 1]), 0)
        below = next((i for i in range(above) if not remarks[i]), above)
        if lower is not None:
            lower.start -= sum(map(len, lines[above:]))
        upper.end += sum(map(len, lines[:below]))
    return blocks


def _longest_rise(places: Sequence[int]) -> set[int]:
    """A longest part of a sequence of different numbers that rises: the entries that need not move."""
    ends: list[int] = []
    tails: list[int] = []
    before: dict[int, int | None] = {}
    for place in places:
        i = bisect_left(ends, place)
        before[place] = ends[i - 1] if i else None
        ends[i : i + 1] = [place]
    tails = ends[-1:]
    while tails and before[tails[-1]] is not None:
        tails.append(before[tails[-1]] or 0)
    return set(tails)
