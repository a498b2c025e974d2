"""How numbers are shown: rounded so that what stands on the screen never flatters.

Margins are rounded down and utilisations up, with one tolerance: a number within 1e-9 of one that can be shown
counts as that one, so that the noise of floating point does not push an exact 0.47 to +0.46, and a margin of -1e-10
is zero, as it is everywhere in the program. A margin of +0.00 is therefore never a failure.
"""

import math

import numpy as np
import numpy.typing as npt

TOLERANCE = 1e-9
"""Margins (and utilisations) no further apart than this are equal."""
NO_DATA = "."
"""What stands for a number that is not known."""
LARGEST = 99
"""Margins and utilisations above it are shown as more than it."""
STRESS_WIDTH = 9
"""The most characters of a stress."""
_MOST_DECIMALS = 6
_PLAIN_BELOW = 1e9


def _scale(decimals: int) -> int:
    """Steps per one; more than six decimals would be finer than the tolerance can tell apart."""
    if not 0 <= decimals <= _MOST_DECIMALS:
        raise ValueError(f"decimals: 0 to {_MOST_DECIMALS} expected, {decimals} found")
    return int(10**decimals)


def _special(value: float) -> str | None:
    """The text of a number that is not shown by its digits."""
    if math.isnan(value):
        return NO_DATA
    if math.isinf(value):
        return "inf" if value > 0 else "-inf"
    if value - LARGEST > TOLERANCE:
        return f">{LARGEST}"
    if -LARGEST - value > TOLERANCE:
        return f"<-{LARGEST}"
    return None


def _floor(value: float, scale: int) -> int:
    """The step at or below value. The difference is exact where it decides, so no rounding blurs the tolerance."""
    step = math.floor(value * scale)
    return step + 1 if (step + 1) / scale - value <= TOLERANCE else step


def margin_text(margin: float, decimals: int = 2) -> str:
    """A margin with its sign, rounded down; `inf` without stress, `.` if unknown, `>99` above 99.

    A margin within 1e-9 of a value that can be shown is that value. Raises ValueError if decimals is not 0 to 6.
    """
    scale = _scale(decimals)
    return _special(margin) or f"{_floor(margin, scale) / scale:+.{decimals}f}"


def margin_texts(margins: npt.ArrayLike, decimals: int = 2) -> list[str]:
    """`margin_text` of every number of an array of any shape, in C order, for a screen full of cells at once."""
    scale = _scale(decimals)
    values = np.asarray(margins, dtype=np.float64).ravel()
    usual = np.abs(values) <= LARGEST  # false for nan too; the rest, tolerance and all, is left to the scalar form
    held = np.where(usual, values, 0.0)
    steps = np.floor(held * scale)
    steps += (steps + 1) / scale - held <= TOLERANCE  # adding, be it nothing, also makes 0.0 of -0.0
    shown = f"%+.{decimals}f"
    texts = [shown % step for step in (steps / scale).tolist()]
    for at in np.flatnonzero(~usual).tolist():
        texts[at] = _special(values.item(at)) or margin_text(values.item(at), decimals)
    return texts


def utilisation_text(utilisation: float, decimals: int = 2) -> str:
    """A utilisation rounded up, since above 1 fails; `.` if unknown, `inf`, `>99` above 99; tolerance as for margins.

    Raises ValueError if decimals is not 0 to 6.
    """
    scale = _scale(decimals)
    return _special(utilisation) or f"{-_floor(-utilisation, scale) / scale:.{decimals}f}"


def percent_text(margin: float) -> str:
    """By how much a margin misses, for a sentence: its size rounded up to a whole percent, at least `1 %`."""
    if not math.isfinite(margin):
        return _special(margin) or NO_DATA
    return f"{max(1, -_floor(-abs(margin), 100))} %"


def stress_text(value: float, digits: int = 4) -> str:
    """A stress or strength to the nearest: one decimal, or more where fewer than `digits` digits would be shown.

    At most 9 characters: decimals are dropped first, an exponent is written only where nothing else fits.
    `.` if unknown.
    """
    if not math.isfinite(value):
        return _special(value) or NO_DATA
    value += 0.0  # no -0.0
    exponent = int(f"{value:.{digits - 1}e}".partition("e")[2])
    decimals = max(1, digits - 1 - exponent)
    least = 0 if exponent >= 0 else decimals  # below one, decimals dropped would be digits lost
    while decimals >= least:
        text = f"{value:.{decimals}f}"
        if len(text) <= STRESS_WIDTH:
            return text
        decimals -= 1
    return _scientific(value, digits)


def _scientific(value: float, digits: int) -> str:
    """With an exponent and as many of the digits as fit the width."""
    texts = [_short_exponent(f"{value:.{decimals}e}") for decimals in range(digits - 1, -1, -1)]
    return next(text for text in texts if len(text) <= STRESS_WIDTH)


def _short_exponent(text: str) -> str:
    """1e+07 -> 1e7, 1.5e-05 -> 1.5e-5."""
    mantissa, _, exponent = text.partition("e")
    return f"{mantissa}e{int(exponent)}"


def number_text(x: float) -> str:
    """The shortest text that reads back as the same float, as a person would type it: 12000, 0.0021, 1e21.

    Plain digits below 1e9, beyond that the shorter of digits and exponent. `.` for nan, never -0.
    """
    if not math.isfinite(x):
        return _special(x) or NO_DATA
    text = repr(float(x) + 0.0).removesuffix(".0")
    if "e" in text:
        return _short_exponent(text)
    if abs(x) < _PLAIN_BELOW:
        return text
    return min(text, _with_exponent(text), key=len)


def _with_exponent(text: str) -> str:
    """Plain digits of a number of at least ten, as a mantissa and an exponent with the same digits."""
    sign, digits = ("-", text[1:]) if text.startswith("-") else ("", text)
    whole, _, part = digits.partition(".")
    rest = (whole[1:] + part).rstrip("0")
    return f"{sign}{whole[0]}{'.' if rest else ''}{rest}e{len(whole) - 1}"
