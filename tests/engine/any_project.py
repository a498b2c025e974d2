"""Hypothesis strategies of projects: odd names and texts, every key of the format now and then."""

from __future__ import annotations

from typing import Any

from hypothesis import strategies as st

from engine.assembly import assembled
from engine.material import LIMITS
from engine.project import Project
from engine.sections import RESULTANTS
from engine.stress import COMPONENTS
from engine.units import SYSTEMS

NUMBERS = st.one_of(st.floats(allow_nan=False, allow_infinity=False), st.integers(-(10**17), 10**17))
POSITIVE = st.floats(min_value=1e-300, max_value=1e300)
TEXTS = st.text(st.characters(exclude_categories=["Cs"]), max_size=12)
ODD = st.sampled_from(["a\r\nb", "\r", '"""', "'''", "\\", "\u2028", "\x7f\x85", "#", " x ", "\ufeff", "\n"])
NAMES = st.text(st.characters(exclude_categories=["Cs", "Cc", "Zl", "Zp"]), min_size=1, max_size=6).filter(str.strip)
ROWS = st.lists(NUMBERS, min_size=6, max_size=6)
WORDS = st.one_of(TEXTS, ODD)
FACTORS = st.one_of(POSITIVE, st.builds(lambda a, b: {"tresca": a, "von-mises": b}, POSITIVE, POSITIVE))
STOPS = st.lists(st.integers(-200, 900), min_size=1, max_size=4, unique=True).map(sorted)
TABLED = STOPS.map(lambda stops: [[stop, 300.0 - place] for place, stop in enumerate(stops)])
SENSE = st.sampled_from(["fixed", "reversible", "optional"])


@st.composite
def tables(draw: st.DrawFn, names: list[str], values: st.SearchStrategy[Any]) -> dict[str, Any]:
    """A table whose keys are some of the names."""
    return {name: draw(values) for name in names if draw(st.booleans())}


@st.composite
def parts(draw: st.DrawFn, needed: dict[str, Any], optional: dict[str, st.SearchStrategy[Any]]) -> dict[str, Any]:
    """A part with some of its optional keys."""
    chosen = draw(st.sets(st.sampled_from(sorted(optional)))) if optional else set()
    return {**needed, **{key: draw(optional[key]) for key in sorted(chosen)}}


@st.composite
def projects(draw: st.DrawFn) -> Project:
    """Any project: at least a category and a material, and up to three parts of each kind."""
    least = {"category": 1, "material": 1, "load": 0, "case": 0, "section": 0, "point": 0}
    names = {kind: draw(st.lists(NAMES, min_size=n, max_size=3, unique=True)) for kind, n in least.items()}
    signed = {"caution": "elongation", "by": draw(NAMES), "reason": draw(NAMES)}
    document = {
        "format": 1,
        "project": draw(_settings()),
        "category": [draw(_categories(name)) for name in names["category"]],
        "material": [draw(_materials(name)) for name in names["material"]],
        "load": [draw(parts({"name": name}, {"label": WORDS, "sense": SENSE})) for name in names["load"]],
        "case": [draw(_cases(names, names["case"][:place], name)) for place, name in enumerate(names["case"])],
        "section": [draw(_sections(names, name)) for name in names["section"]],
        "point": [draw(_points(names, name)) for name in names["point"]],
        "acknowledge": [{"point": name, **signed} for name in names["point"] if draw(st.booleans())],
    }
    return assembled(document)


@st.composite
def _settings(draw: st.DrawFn) -> dict[str, Any]:
    needed = {
        "title": draw(WORDS),
        "units": draw(st.sampled_from(sorted(SYSTEMS))),
        "components": " ".join(draw(st.permutations(COMPONENTS))),
        "accept": draw(st.sampled_from(["both", "tresca", "von-mises"])),
        "thin": draw(st.floats(0, 10)),
    }
    return draw(parts(needed, {"revision": WORDS, "notes": WORDS}))


@st.composite
def _categories(draw: st.DrawFn, name: str) -> dict[str, Any]:
    carried = st.sampled_from(["characteristic", "design"])
    needed = {"name": name, "yield": draw(FACTORS)}
    return draw(parts(needed, {"label": WORDS, "loads": carried, "ultimate": FACTORS}))


@st.composite
def _materials(draw: st.DrawFn, name: str) -> dict[str, Any]:
    optional = {
        "ultimate": POSITIVE,
        "shear-yield": POSITIVE,
        "elongation": st.floats(0, 1),
        "range": st.tuples(st.floats(-100, 0), st.floats(0, 100)).map(list),
        "yield-at": TABLED,
        "ultimate-at": TABLED,
        "source": WORDS,
    }
    return draw(parts({"name": name, "yield": draw(POSITIVE)}, optional))


def _cases(names: dict[str, list[str]], earlier: list[str], name: str) -> st.SearchStrategy[dict[str, Any]]:
    needed = {"name": name, "category": names["category"][0], "temperature": 20}
    loads = tables(names["load"], NUMBERS)
    return parts(needed, {"loads": loads, "combine": tables(earlier, NUMBERS), "check": st.booleans(), "label": TEXTS})


def _sections(names: dict[str, list[str]], name: str) -> st.SearchStrategy[dict[str, Any]]:
    resultants = st.dictionaries(st.sampled_from(RESULTANTS), tables(names["load"], NUMBERS), max_size=3)
    optional = {"resultants": resultants, "not-felt": st.just(names["load"])}
    return parts({"name": name, "shape": "round", "d": 60.0}, optional)


def _points(names: dict[str, list[str]], name: str) -> st.SearchStrategy[dict[str, Any]]:
    needed: dict[str, Any] = {"name": name, "material": names["material"][-1]}
    optional: dict[str, st.SearchStrategy[Any]] = {
        "label": TEXTS,
        "part": TEXTS,
        "source": ODD,
        "factor": st.one_of(POSITIVE, tables(list(LIMITS), POSITIVE)),
        "temperature": st.one_of(NUMBERS, tables(names["case"], NUMBERS)),
        "per-load": tables(names["load"], ROWS),
        "stress": tables(names["case"], ROWS),
    }
    if names["section"]:
        needed |= {"section": names["section"][0], "at": [1.5, -2], "axes": [[1, 0, 0], [0, 0, 1]]}
        optional |= {"not-felt": st.just("rest")}
    return parts(needed, optional)
