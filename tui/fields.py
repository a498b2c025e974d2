"""Fields of a part as a person sees and types them: text of a plain value, and plain value of an entry."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

import tomli_w

from engine.edits import CODEC, Refusal
from engine.entry import parse, parse_pairs, parse_row
from engine.figures import number_text
from engine.reading import Plain
from engine.units import Kind, UnitSystem

Form = Literal["text", "number", "flag", "pairs", "pair", "row", "table", "map", "names", "count"]


@dataclass(frozen=True, slots=True)
class Field:
    """One column of a sheet of parts."""

    path: tuple[str, ...]
    """Key of the file, and the key in its table."""
    head: str
    """Over the column."""
    form: Form = "text"
    """How it is typed."""
    width: int = 12
    """Cells, gap and mark included."""
    kind: Kind | None = None
    """Kind of unit of a number."""
    hint: str = ""
    """What an entry may be, for the prompt."""


def plain_of(kind: str, part: object, path: tuple[str, ...]) -> Plain:
    """Plain value of a part at a path, None where it is absent."""
    value: Plain = CODEC.write(kind, part)
    for word in path:
        value = value.get(word) if isinstance(value, Mapping) else None
    return value


def text_of(value: Plain, form: Form) -> str:
    """A plain value as a cell shows it and an entry starts with."""
    if value is None:
        return ""
    if form == "count":
        return str(len(value)) if value else ""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, int | float):
        return number_text(float(value))
    if isinstance(value, Mapping):
        return _table_text(value)
    if isinstance(value, list | tuple):
        return _list_text(value, form)
    return str(value)


def _table_text(value: Mapping[str, Plain]) -> str:
    """`LC01 = 1, "LC 13" = 0.5`: the inside of an inline table of the file."""
    return ", ".join(f"{_key(key)} = {text_of(item, 'text')}" for key, item in value.items())


def _key(key: str) -> str:
    return tomli_w.dumps({key: 0}).split(" = ")[0]


def _list_text(value: Plain, form: Form) -> str:
    if form == "pairs":
        return " ".join(f"{number_text(at)}:{number_text(strength)}" for at, strength in value)
    if form == "names":
        return ", ".join(str(name) for name in value)
    return " ".join(text_of(item, "text") for item in value)


def fitting(value: float, room: int) -> str:
    """A number as a person would type it where that fits, else rounded to what does: "Here" says it whole."""
    rounded = (number_text(float(f"{value:.{digits}g}")) for digits in range(15, 0, -1))
    text = number_text(value)
    return text if len(text) <= room else next((short for short in rounded if len(short) <= room), text)


def plain_from(text: str, field: Field, system: UnitSystem) -> Plain:
    """The plain value an entry means; None for an empty one: the key goes. Raises EntryError or Refusal."""
    text = text.strip()
    if not text:
        return None
    match field.form:
        case "text":
            return text
        case "number":
            return parse(text, field.kind, system) if field.kind else parse(text)
        case "flag":
            return _flag(text)
        case "pairs":
            return [list(pair) for pair in parse_pairs(text, system)]
        case "pair" | "row":
            return list(parse_row(text, 2 if field.form == "pair" else 6, field.kind, system if field.kind else None))
        case "names":
            return text if text == "rest" else [name.strip() for name in text.split(",") if name.strip()]
        case "table" if "=" not in text:
            return parse(text, field.kind, system) if field.kind else parse(text)
        case "table" | "map":
            return _table(text)
        case _:
            raise Refusal("this is edited in a sheet of its own: press Enter on it")


def _flag(text: str) -> bool:
    words = {"yes": True, "y": True, "true": True, "no": False, "n": False, "false": False}
    if text.lower() not in words:
        raise Refusal(f'found "{text[:20]}", expected yes or no')
    return words[text.lower()]


def _table(text: str) -> Plain:
    """`name = number, name = number` as in the file."""
    try:
        return tomllib.loads(f"table = {{ {text} }}")["table"]
    except tomllib.TOMLDecodeError:
        raise Refusal('expected name = number, name = number; a name with blanks in quotes: "LC 13" = 0.5') from None
