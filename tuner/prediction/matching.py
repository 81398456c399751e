"""Which predicted step does a printed constant belong to?

The books number the steps of a molecule in both directions: acids from the first proton on, diamines from
the strongest base on, amphoteric compounds either way. So the printed steps of one compound are laid in
ascending order beside the predicted ones, order kept, predicted steps left over where more are predicted
than printed; among all such assignments the one with the smallest sum of differences counts. Two labels
with one number, as pK3 and pK3(-OH), are one step measured twice and go to the same predicted one, by their
mean. Names of groups in a label, as in pK(OH), are passed over: in a molecule with several sites a step
often belongs to two groups at once, and books name it after either.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from math import inf
from statistics import fmean


@dataclass(frozen=True, slots=True)
class Step:
    """One predicted step: pKa, its standard error, and the kind of site that mainly loses its proton."""

    pka: float
    sd: float
    kind: str


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
    groups = _same_step(printed)
    values = [fmean(printed[k][1] for k in group) for group in groups]
    order = sorted(range(len(groups)), key=lambda g: values[g])
    result: list[int | None] = [None] * len(printed)
    for place, k in zip(order, _assignment([values[g] for g in order], predicted), strict=True):
        for row in groups[place]:
            result[row] = k
    return result


def _same_step(printed: Sequence[tuple[str, float]]) -> list[list[int]]:
    """Numbers of the printed rows, those together that bear one step number."""
    groups: dict[str, list[int]] = {}
    for row, (label, _) in enumerate(printed):
        stem = re.match(r"pK(AH)?\d+", label)
        groups.setdefault(stem.group() if stem else f"row {row}", []).append(row)
    return list(groups.values())


def _assignment(values: Sequence[float], predicted: Sequence[Step]) -> tuple[int | None, ...]:
    """Index of the predicted step for each of the ascending values."""

    @cache
    def best(p: int, s: int) -> tuple[int, float, tuple[int | None, ...]]:
        """(unmatched, cost, assignment) of values p.. against predicted s.."""
        if p == len(values):
            return 0, 0.0, ()
        found: tuple[int, float, tuple[int | None, ...]] = (len(values) + 1, inf, ())
        left, cost, rest = best(p + 1, s)
        found = min(found, (left + 1, cost, (None, *rest)), key=lambda t: t[:2])
        for k in range(s, len(predicted)):
            left, cost, rest = best(p + 1, k + 1)
            here = abs(predicted[k].pka - values[p])
            found = min(found, (left, cost + here, (k, *rest)), key=lambda t: t[:2])
        return found

    return best(0, 0)[2]
