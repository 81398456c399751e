"""Which predicted step does a printed constant belong to?

The books number the steps of a molecule in both directions: acids from the first proton on, diamines from
the strongest base on,
amphoteric compounds either way. So the printed steps of one compound are laid in ascending order beside the
predicted ones,
order kept, predicted steps left over where more are predicted than printed; among all such assignments the
one with the
smallest sum of differences counts. A label that names a group, such as pK(OH), only fits steps of such
groups.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from math import inf

GROUP_WORDS: dict[str, tuple[str, ...]] = {
    "OH": ("phenol", "hydroxyheteroarene"),
    "COOH": ("benzoic_acid", "aliphatic_acid"),
    "SO2NH": ("benzenesulfonamide", "sulfonamide"),
    "NH2": ("aniline", "aliphatic_amine"),
    "NH+": ("aniline", "aliphatic_amine"),
}
"""Words inside a label's brackets -> kinds of sites that they can mean."""


@dataclass(frozen=True, slots=True)
class Step:
    """One predicted step: pKa, its standard error, and the kind of site that mainly loses its proton."""

    pka: float
    sd: float
    kind: str


def kinds_meant(label: str) -> tuple[str, ...]:
    """Kinds of sites that a printed label can mean; empty where it names none.

    >>> kinds_meant("pK2(OH)"), kinds_meant("pKAH1")
    (('phenol', 'hydroxyheteroarene'), ())
    """
    inside = label[label.find("(") + 1 : label.rfind(")")] if "(" in label else ""
    word = inside.strip("-").replace("-", "")
    for name in sorted(GROUP_WORDS, key=len, reverse=True):
        if word.endswith(name):
            return GROUP_WORDS[name]
    return ()


def match_steps(printed: Sequence[tuple[str, float]], predicted: Sequence[Step]) -> list[int | None]:
    """Index of the predicted step for each printed value, None where none is left or none fits.

    Parameters
    ----------
    printed : sequence of (label, pKa), any order
    predicted : steps in ascending order

    Examples
    --------
    >>> steps = [Step(2.4, 0.1, "aniline"), Step(4.9, 0.1, "benzoic_acid")]
    >>> match_steps([("pKAH2", 4.87), ("pKAH1", 2.45)], steps)
    [1, 0]
    """
    order = sorted(range(len(printed)), key=lambda k: printed[k][1])

    @cache
    def best(p: int, s: int) -> tuple[int, float, tuple[int | None, ...]]:
        """(unmatched, cost, assignment) of printed p.. against predicted s.."""
        if p == len(order):
            return 0, 0.0, ()
        label, value = printed[order[p]]
        found: tuple[int, float, tuple[int | None, ...]] = (len(order) + 1, inf, ())
        left, cost, rest = best(p + 1, s)
        found = min(found, (left + 1, cost, (None, *rest)), key=lambda t: t[:2])
        wanted = kinds_meant(label)
        for k in range(s, len(predicted)):
            if wanted and predicted[k].kind not in wanted:
                continue
            left, cost, rest = best(p + 1, k + 1)
            found = min(found, (left, cost + abs(predicted[k].pka - value), (k, *rest)), key=lambda t: t[:2])
        return found

    assignment = best(0, 0)[2]
    result: list[int | None] = [None] * len(printed)
    for place, k in zip(order, assignment, strict=True):
        result[place] = k
    return result
