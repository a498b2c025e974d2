"""TOML text to plain values by tomllib, every failure put into plain words with its line and key path."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator
from typing import Any

from engine.filefaults import FileFault, path_text
from engine.reading import Path, clean
from engine.spans import BOM, Statement, begun, deeper

DEEPEST = 64
"""Lists in lists beyond it are what a message about nesting points at."""

_AT = re.compile(r"\(at line (\d+), column (\d+)\)$")
_DIGITS = re.compile(r"[0-9][0-9_]{4299,}")
_WORD = re.compile(r".[^\s,\]}#]*")
_PLAIN = (
    ("Expected '=' after a key", "found {word}, expected = and a value after the key"),
    ("Cannot overwrite a value", "found this a second time, expected each key once"),
    ("Cannot declare", "found this table a second time, expected each table once"),
    ("Cannot mutate immutable", "found more of a table or list that was complete, expected all of it in one place"),
    ("Cannot redefine namespace", "found more of a table that was complete, expected all of it in one place"),
    ("Duplicate inline table key", "found a key a second time in one {{ }}, expected each key once"),
    ("Unclosed array", "found {word} in a list, expected , or ]"),
    ("Unclosed inline table", "found {word} in a {{ }} table, expected , or }}"),
    ("Unterminated string", "found {word} in a text, expected its closing quotes"),
    ("Expected ']]' at the end", "found {word} after the name of a list of tables, expected ]]"),
    ("Expected ']' at the end", "found {word} after the name of a table, expected ]"),
    ("Expected newline or end", "found {word} after the value, expected a new line"),
    ("Invalid initial character for a key", "found {word}, expected a key (in quotes, if it has spaces or signs)"),
    ("Invalid statement", "found {word}, expected key = value, [table] or [[table]]"),
    ("Unescaped '\\'", "found a backslash that begins no escape, expected \\\\ for a backslash, or the text in '...'"),
    ("Invalid hex value", "found {word}, expected the digits of a character's number after \\u or \\U"),
    ("Escaped character is not", "found the number of no character after \\u or \\U, expected one of Unicode"),
    ("Invalid date or datetime", "found {word}, a date that does not exist, expected one that does"),
    ("Invalid value", 'found {word}, expected a number, "text" in quotes, true, false, a [list] or a {{ table }}'),
    ("Illegal character '\\n'", "found the end of the line in a text, expected its closing quote"),
    ("Found invalid character '\\n'", "found the end of the line in a text, expected its closing quote"),
    ("Illegal character", "found {word}, a control character, expected none in a text"),
    ("Found invalid character", "found {word}, a control character, expected none"),
    ("Expected \"'", "found {word} in a text, expected its closing quotes"),
    ("Expected '\"", "found {word} in a text, expected its closing quotes"),
)


class TomlError(ValueError):
    """A text is not TOML; `fault` says where and why."""

    def __init__(self, fault: FileFault) -> None:
        super().__init__(fault.message)
        self.fault = fault


def plain(text: str) -> dict[str, Any]:
    """The document of a text, which may begin with a byte order mark. Raises TomlError, and nothing else."""
    bare = text.removeprefix(BOM)
    try:
        return tomllib.loads(bare)
    except tomllib.TOMLDecodeError as error:
        raise TomlError(_syntax(bare.replace("\r\n", "\n"), str(error))) from None
    except (RecursionError, MemoryError):
        raise TomlError(_nesting(bare)) from None
    except ValueError:
        raise TomlError(_digits(bare)) from None


def _syntax(text: str, complaint: str) -> FileFault:
    """tomllib's complaint about a text whose newlines are all \\n."""
    at = _AT.search(complaint)
    line, column = (int(at[1]), int(at[2])) if at else (text.count("\n") + 1, 0)
    offset = _offset(text, line, column) if at else len(text)
    path, begun = _around(text, offset)
    message = _in_words(complaint, _word(text, offset))
    if begun is not None and begun < line:
        message += f" (it begins in line {begun})"
    return FileFault(line, path_text(path), message)


def _offset(text: str, line: int, column: int) -> int:
    start = 0
    for _ in range(line - 1):
        start = text.index("\n", start) + 1
    return start + column - 1


def _word(text: str, offset: int) -> str:
    if offset >= len(text):
        return "the end of the file"
    if text[offset] == "\n":
        return "the end of the line"
    match = _WORD.match(text, offset)
    return f'"{clean(match.group()[:30])}"' if match else "nothing"


def _in_words(complaint: str, word: str) -> str:
    for beginning, message in _PLAIN:
        if complaint.startswith(beginning):
            return message.format(word=word)
    return f"{clean(_AT.sub('', complaint)).strip()}, expected TOML"


def _paths(text: str) -> Iterator[tuple[Path, Statement]]:
    """Every statement with its path, of broken text as many as can be told."""
    counts: dict[str, int] = {}
    table: Path = ()
    for statement in begun(text):
        names = tuple(part.name for part in statement.keys)
        if statement.brackets and names:
            table = _header_path(names, statement.brackets == 2, counts)
            yield table, statement
        else:
            yield (*table, *names), statement


def _header_path(names: tuple[str, ...], many: bool, counts: dict[str, int]) -> Path:
    """counts: of each top-level list of tables, how many came before; one more for a new one."""
    if many and len(names) == 1:
        counts[names[0]] = counts.get(names[0], 0) + 1
    place = counts.get(names[0], 0)
    return (names[0], place - 1, *names[1:]) if place else names


def _around(text: str, offset: int) -> tuple[Path, int | None]:
    """Path and first line of the statement that an offset falls in, or else the path of its table alone."""
    table: Path = ()
    path: Path = ()
    last: Statement | None = None
    for keys, statement in _paths(text):
        if statement.start >= offset:
            break
        path, last = keys, statement
        table = keys if statement.brackets else table
    if last is None or "\n" in text[last.end : offset]:
        return table, None
    return path, text.count("\n", 0, last.start) + 1


def _nesting(text: str) -> FileFault:
    message = f"found lists or tables too deep in one another, expected no more than {DEEPEST} deep"
    for path, statement in _paths(text):
        if deeper(text, statement.value, DEEPEST):
            return FileFault(text.count("\n", 0, statement.start) + 1, path_text(path), message)
    return FileFault(None, "", message)


def _digits(text: str) -> FileFault:
    message = "found a whole number of thousands of digits, expected one that a computer's number can hold"
    for path, statement in _paths(text):
        if _DIGITS.search(text, statement.value, statement.end):
            return FileFault(text.count("\n", 0, statement.start) + 1, path_text(path), message)
    return FileFault(None, "", message)
