"""How many digits does a number deserve when people read it?"""

from __future__ import annotations

from math import floor, isfinite, log10

COARSE_SD = 0.25
"""From this standard error on a second decimal of a pKa says nothing."""

MISSING = "–"
SUPERSCRIPTS = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


def pka_decimals(sd: float) -> int:
    """Decimals of a pKa with this standard error.

    >>> pka_decimals(0.1), pka_decimals(0.6)
    (2, 1)
    """
    return 2 if not isfinite(sd) or sd < COARSE_SD else 1


def pka_text(value: float, sd: float) -> str:
    """A pKa with its standard error.

    >>> pka_text(6.4123, 0.1829), pka_text(6.4123, 0.62)
    ('6.41 ± 0.18', '6.4 ± 0.6')
    """
    if not isfinite(value):
        return MISSING
    n = pka_decimals(sd)
    return f"{value:.{n}f} ± {sd:.{n}f}" if isfinite(sd) else f"{value:.{n}f}"


def signed(value: float, decimals: int = 2) -> str:
    """A difference, in any unit, with its sign, and no sign for zero.

    >>> signed(0.213), signed(-0.2), signed(-0.001)
    ('+0.21', '−0.20', '0.00')
    """
    if not isfinite(value):
        return MISSING
    text = f"{abs(value):.{decimals}f}"
    if float(text) == 0.0:
        return text
    return ("+" if value > 0 else "−") + text


def percent(share: float) -> str:
    """A probability in per cent; never 0 or 100, which no model can promise.

    >>> percent(0.714), percent(0.9996), percent(0.001)
    ('71 %', '> 99 %', '< 1 %')
    """
    if not isfinite(share):
        return MISSING
    if share > 0.99:
        return "> 99 %"
    if share < 0.01:
        return "< 1 %"
    return f"{100.0 * share:.0f} %"


def count(number: int) -> str:
    """A number of things: in full up to ten million, then as a power of ten.

    >>> count(840_000_000), count(12_345)
    ('8.4 × 10⁸', '12,345')
    """
    if abs(number) < 10_000_000:
        return f"{number:,}"
    power = floor(log10(abs(number)))
    head = f"{number / 10**power:.1f}"
    if head.lstrip("-") == "10.0":
        head, power = head.replace("10.0", "1.0"), power + 1
    return f"{head} × 10{str(power).translate(SUPERSCRIPTS)}"


def mass(value: float) -> str:
    """A molar mass in g/mol, without the unit: a decision needs no fractions.

    >>> mass(267.07)
    '267'
    """
    return f"{value:.0f}" if isfinite(value) else MISSING


def drift(per_kelvin: float) -> str:
    """dpKa'/dT as pKa units per 10 K, without the unit.

    >>> drift(-0.0123)
    '−0.12'
    """
    return signed(10.0 * per_kelvin, 2)


def choices_in_words(positions: tuple[tuple[str, int], ...]) -> str:
    """Number of choices at each position, equal neighbours told together.

    >>> choices_in_words((("2", 27), ("3", 27), ("4'", 5)))
    "27 at 2, 3; 5 at 4'"
    """
    told: list[tuple[int, list[str]]] = []
    for label, number in positions:
        if told and told[-1][0] == number:
            told[-1][1].append(label)
        else:
            told.append((number, [label]))
    return "; ".join(f"{number} at {', '.join(labels)}" for number, labels in told)
