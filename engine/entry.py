"""What a person types in a numeric cell: arithmetic, then perhaps a unit.

Python's own grammar gives precedence and brackets (`ast`, never evaluated as code): `-2**2` is -4.
The value is an exact fraction, rounded once at the end, so that what was typed in decimals comes out in decimals:
0.1+0.2 is 0.3, 1.1*3 kN is 3300 N. Only a power can grow without measure; where it has no exact value of modest size
it is computed in floats, so that no entry takes long.
"""

import ast
import operator
import re
from collections.abc import Callable, Sequence
from fractions import Fraction

from engine.figures import number_text
from engine.units import Kind, UnitError, UnitSystem, convert, described, find, quoted

LONGEST = 200
"""Characters of one entry."""
DEEPEST = 30
"""Brackets inside each other."""
_EXACT_BITS = 4096  # the size of an exact power; with the length of an entry it bounds every value and all time
_AWAITING = ("+", "-", "*", "/", "**", "//", "(")
_OPEN = "a bracket is not closed"
_NUMBER = r"(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
_ARITHMETIC = re.compile(rf"(?:{_NUMBER}|[-+*/() ])*")
_TOKEN = re.compile(rf"{_NUMBER}|\*\*|//|[-+*/()]")
_SAME_AS = str.maketrans({"−": "-", "×": "*", "·": "*", "⋅": "*"})
_BETWEEN = "spaces or ; between numbers"
_READ = "only numbers, + - * / ( ) ** and a unit at the end are read"
_HINTS = {
    "^": "for a power type **, as in 2**3",
    "_": "nothing stands between the digits of a number",
    "'": "nothing stands between the digits of a number",
    "=": "leave out the =",
    "–": "for minus type -",
    "—": "for minus type -",
    "÷": "to divide type /",
    ":": "one number is expected here",
    ";": "one number is expected here",
}


class EntryError(ValueError):
    """An entry that is not read; the message tells the person who typed it why."""


def parse(text: str, kind: Kind | None = None, system: UnitSystem | None = None, difference: bool = False) -> float:
    """The finite value of an entry, in the system's unit of `kind`.

    A unit at the end counts for the whole entry and is converted; a bare number is in the system's unit already.
    Without `kind` or `system` no unit is read. `difference`: a difference of temperatures, converted without offset.
    Raises EntryError.
    """
    arithmetic, unit = _split(_cleaned(text))
    tokens = _TOKEN.findall(arithmetic)
    if not unit:
        return _rounded(_evaluated(tokens))
    _check_unit(tokens, unit)
    if kind is None or system is None:
        raise EntryError(f"no unit is expected here, a number only: {described(unit)}")
    value = _evaluated(tokens, before_unit=True)
    try:
        return convert(value, unit, kind, system, difference)
    except UnitError as fault:
        raise EntryError(str(fault)) from None


def parse_row(text: str, count: int, kind: Kind | None = None, system: UnitSystem | None = None) -> tuple[float, ...]:
    """`count` entries between spaces or semicolons, none with a space inside.

    Raises EntryError naming the entry that is wrong, or how many were expected.
    """
    _refuse_marks(text, _BETWEEN)
    parts = _parts(text)
    if len(parts) != count:
        numbers = "1 number is" if count == 1 else f"{count} numbers are"
        raise EntryError(f"{numbers} expected, {len(parts)} found: {_BETWEEN}, no space inside one")
    return tuple(_named(f"number {n} of {count}", part, kind, system) for n, part in enumerate(parts, start=1))


def parse_pairs(text: str, system: UnitSystem | None = None) -> tuple[tuple[float, float], ...]:
    """Temperature and strength pairs as typed for a table, `20:345 100:318`, temperatures strictly rising.

    Units are read with a system: the project's, or one that is converted. Raises EntryError naming the pair.
    """
    _refuse_marks(text, _BETWEEN)
    pairs: list[tuple[float, float]] = []
    for n, part in enumerate(_parts(re.sub(r"\s*:\s*", ":", text)), start=1):
        sides = part.split(":")
        if len(sides) != 2:
            raise EntryError(f"pair {n}: temperature:strength is expected, as in 20:345, not {quoted(part)}")
        temperature = _named(f"temperature of pair {n}", sides[0], "temperature", system)
        strength = _named(f"strength of pair {n}", sides[1], "stress", system)
        if pairs and temperature <= pairs[-1][0]:
            before = number_text(pairs[-1][0])
            raise EntryError(f"pair {n}: temperatures must rise, {number_text(temperature)} comes after {before}")
        pairs.append((temperature, strength))
    return tuple(pairs)


def _parts(text: str) -> list[str]:
    """The entries of a row. An empty place between two semicolons stays, to be refused: missing is never zero."""
    if not text.strip():
        raise EntryError("nothing was typed")
    return re.split(r"\s*;\s*|\s+", text.strip())


def _named(name: str, text: str, kind: Kind | None, system: UnitSystem | None) -> float:
    """An entry of a row, its errors headed by its place."""
    try:
        return parse(text, kind, system)
    except EntryError as fault:
        raise EntryError(f"{name}: {fault}") from None


def _cleaned(text: str) -> str:
    """One kind of space, minus and times."""
    if len(text) > LONGEST:
        raise EntryError(f"too long: at most {LONGEST} characters")
    _refuse_marks(text)
    cleaned = " ".join(text.split()).translate(_SAME_AS)
    if not cleaned:
        raise EntryError("nothing was typed")
    return cleaned


def _refuse_marks(text: str, advice: str = "nothing between thousands") -> None:
    """Marks that have no meaning anywhere in an entry, but one that a person may expect."""
    if "," in text:
        raise EntryError(f"a comma is not read: type a point for decimals, as in 1.5, and {advice}")
    if "%" in text:
        raise EntryError("percent is not read: type 0.05 for 5 %")


def _split(text: str) -> tuple[str, str]:
    """The arithmetic and the unit after it; the first letter begins the unit."""
    found = _ARITHMETIC.match(text)
    arithmetic = found.group() if found else ""
    rest = text[len(arithmetic) :]
    if rest and not (rest[0].isalpha() or rest[0] in "°℃℉"):
        raise EntryError(f"{quoted(rest[0])} is not read: {_HINTS.get(rest[0], _READ)}")
    return arithmetic, rest


def _check_unit(tokens: Sequence[str], unit: str) -> None:
    """Refuse letters that are not the unit of a whole entry: names, functions, units in the midst, odd numbers."""
    if tokens.count("(") > tokens.count(")") and ")" not in unit:
        raise EntryError(_OPEN)
    if find(unit):
        if not tokens:
            raise EntryError(f"a number is missing before {unit}")
        return
    goes_on = re.search(r"[-+*/(]\s*[0-9.(]|\)", unit)
    if goes_on and any(find(unit[:end]) for end in range(1, len(unit))):
        raise EntryError("a unit stands once, at the very end, and counts for all before it: (2 + 3) kN")
    if goes_on or not tokens or tokens[-1] in _AWAITING:
        word = re.split(r"[^\w°]", unit)[0]
        raise EntryError(f"{quoted(word)} is not read: no names and no functions, {_READ}")
    _check_number_form(tokens[-1], unit)


def _check_number_form(last: str, rest: str) -> None:
    """Forms of number that a programming language has and an entry has not."""
    if rest in ("j", "J"):
        raise EntryError("complex numbers are not read")
    if last == "0" and re.fullmatch(r"[xXoObB][0-9a-fA-F_]+", rest):
        raise EntryError(f"{quoted(last + rest)} is not read: decimal numbers only")
    if re.fullmatch(r"[eE][+-]?", rest):
        raise EntryError("the exponent is missing after e, as in 1.2e3")
    if "_" in rest:
        raise EntryError(f'"_" is not read: {_HINTS["_"]}')


def _check_tokens(tokens: Sequence[str]) -> None:
    """Refuse, in words, the slips that Python's parser would only call a syntax error."""
    depth = 0
    for before, token in zip(["", *tokens], tokens, strict=False):
        depth += (token == "(") - (token == ")")
        if depth < 0:
            raise EntryError("a bracket is closed that was not opened")
        if depth > DEEPEST:
            raise EntryError(f"too many brackets inside each other: at most {DEEPEST}")
        _check_neighbours(before, token)
    if depth:
        raise EntryError(_OPEN)
    if tokens[-1] in _AWAITING:
        raise EntryError(f"unfinished: a number is missing after {tokens[-1]}")


def _check_neighbours(before: str, token: str) -> None:
    if token == "//":
        raise EntryError("// is not read: to divide type /")
    if before == "(" and token == ")":
        raise EntryError("nothing stands between the brackets")
    if _is_number(before) and _is_number(token):
        raise EntryError(f"{before} and {token} stand side by side: one number has no space inside")
    if (before == ")" or _is_number(before)) and (token == "(" or _is_number(token)):
        raise EntryError(f"an operator is missing between {before} and {token}")


def _is_number(token: str) -> bool:
    return token[:1].isdigit() or token[:1] == "."


def _evaluated(tokens: Sequence[str], before_unit: bool = False) -> Fraction:
    """The value of the arithmetic, which before a unit may not be a bare sum. Raises EntryError."""
    _check_tokens(tokens)
    source = " ".join(re.sub(r"^0+(?=[0-9])", "", token) for token in tokens)  # 007 is a number to a person
    try:
        tree = ast.parse(source, mode="eval").body
        # A node that starts at the first column is not in brackets as a whole.
        if before_unit and _is_sum(tree) and tree.col_offset == 0:
            raise EntryError("a unit counts for all before it: put the sum in brackets, (2 + 3) kN")
        return _value(tree, source)
    except SyntaxError:
        raise EntryError("a number is missing, or two operators stand side by side") from None
    except ZeroDivisionError:
        raise EntryError("division by zero") from None
    except (RecursionError, MemoryError):
        raise EntryError("too much stands inside each other: type a shorter entry") from None


def _is_sum(node: ast.expr) -> bool:
    return isinstance(node, ast.BinOp) and isinstance(node.op, ast.Add | ast.Sub)


def _value(node: ast.expr, source: str) -> Fraction:
    """The value of a node; numbers are read from their own text, whose decimals a float would lose."""
    match node:
        case ast.Constant(col_offset=start, end_col_offset=end):
            return _number(source[start:end])
        case ast.UnaryOp(op=ast.UAdd(), operand=operand):
            return _value(operand, source)
        case ast.UnaryOp(op=ast.USub(), operand=operand):
            return -_value(operand, source)
        case ast.BinOp(left=left, op=sign, right=right) if type(sign) in _OPERATIONS:
            return _OPERATIONS[type(sign)](_value(left, source), _value(right, source))
    raise EntryError(f"this is not read: {_READ}")


def _number(text: str) -> Fraction:
    """A typed number. It is tried as a float first: the fraction of 1e999999999 would fill the memory."""
    if not re.search("[1-9]", text.lower().partition("e")[0]):
        return Fraction(0)
    size = float(text)
    if size in (0.0, float("inf")):
        raise EntryError(f"{text} is too {'small' if size == 0 else 'large'} a number")
    return Fraction(text)


def _power(base: Fraction, exponent: Fraction) -> Fraction:
    """Exact for whole exponents while it stays small, a float otherwise."""
    if exponent.denominator == 1 and _bits(base) * abs(exponent.numerator) <= _EXACT_BITS:
        return Fraction(base**exponent.numerator)
    try:
        result = _rounded(base) ** _rounded(exponent)
    except OverflowError:
        raise EntryError("the result is too large") from None
    if isinstance(result, complex):
        raise EntryError("a broken power of a negative number is not a real number")
    if result == 0 and base != 0:
        raise EntryError("the result is too small")
    return Fraction(result)


_OPERATIONS: dict[type[ast.operator], Callable[[Fraction, Fraction], Fraction]] = {
    ast.Add: operator.add,
    ast.Sub: operator.sub,
    ast.Mult: operator.mul,
    ast.Div: operator.truediv,
    ast.Pow: _power,
}


def _bits(value: Fraction) -> int:
    return value.numerator.bit_length() + value.denominator.bit_length()


def _rounded(value: Fraction) -> float:
    """The nearest float; a value that no float can hold is refused, not turned into infinity or zero."""
    try:
        result = float(value)
    except OverflowError:
        raise EntryError("the result is too large") from None
    if result == 0 and value != 0:
        raise EntryError("the result is too small")
    return result
