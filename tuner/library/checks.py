"""Is this cell or key sound? Checks shared by every reader; each failure says place, fault and remedy."""

from __future__ import annotations

import math
from collections.abc import Iterable
from difflib import get_close_matches
from typing import NoReturn

from tuner.errors import LibraryError, TunerError

YES = "yes"
NO = "no"

CLOSE_ENOUGH = 0.6
"""Share of letters in common (difflib's ratio) from which a name is suggested; common practice, no source."""


def nearest(text: str, options: Iterable[str]) -> str:
    """A remedy that names the option closest to `text`, or the first options where none is close.

    >>> nearest("metoxy", ["methoxy", "nitro"])
    'did you mean "methoxy"?'
    """
    known = sorted(set(options))
    close = closest(text, known)
    if close:
        return f'did you mean "{close}"?'
    if not known:
        return "there is none to choose from"
    shown = ", ".join(known[:12])
    return f"known are {shown}" + (f" and {len(known) - 12} more" if len(known) > 12 else "")


def closest(text: str, options: Iterable[str]) -> str:
    """The option that is spelled most like `text`, case aside; "" where none is close.

    >>> closest("Bormine", ["bromine", "iodine"])
    'bromine'
    """
    folded: dict[str, str] = {}
    for option in sorted(set(options)):
        folded.setdefault(option.casefold(), option)
    close = get_close_matches(text.strip().casefold(), list(folded), n=1, cutoff=CLOSE_ENOUGH)
    return folded[close[0]] if close else ""


def number(text: str, place: str, low: float, high: float, error: type[TunerError] = LibraryError) -> float:
    """`text` as a finite number within [low, high]; `error` otherwise.

    >>> number("0.37", "row 2", -3, 3)
    0.37
    """
    try:
        value = float(text)
    except ValueError:
        remedy = "write a point as decimal sign" if "," in text else "write a plain number such as 0.37"
        raise error(f'"{text}" is not a number', place=place, remedy=remedy) from None
    return in_range(value, place, low, high, error)


def in_range(
    value: float, place: str, low: float, high: float, error: type[TunerError] = LibraryError
) -> float:
    """`value` (in the unit of the limits) where it is finite and within [low, high]; `error` otherwise."""
    if not math.isfinite(value) or not low <= value <= high:
        raise error(f"{value:g} is out of range", place=place, remedy=_range_words(low, high))
    return value


def _range_words(low: float, high: float) -> str:
    """What would be in range, in words."""
    if math.isinf(low) and math.isinf(high):
        return "a finite number is needed"
    if math.isinf(high):
        return f"it must be at least {low:g}"
    if math.isinf(low):
        return f"it must be at most {high:g}"
    return f"it must lie between {low:g} and {high:g}"


def one_of(text: str, options: Iterable[str], place: str, error: type[TunerError] = LibraryError) -> str:
    """`text` where it is one of `options`; `error` with the nearest option otherwise."""
    known = tuple(options)
    if text not in known:
        raise error(f'"{text}" is not known here', place=place, remedy=nearest(text, known))
    return text


def yes_or_no(text: str, place: str, error: type[TunerError] = LibraryError) -> bool:
    """True for `yes`, False for `no` or an empty cell; `error` otherwise."""
    if text in (YES, NO, ""):
        return text == YES
    raise error(f'"{text}" is neither yes nor no', place=place, remedy="write yes or no")


def fail(what: str, place: str, remedy: str, error: type[TunerError] = LibraryError) -> NoReturn:
    """Raise `error` with what is wrong, where, and what would be right."""
    raise error(what, place=place, remedy=remedy)
