"""How many analogs does a space hold, before and after symmetry, within its counting limits?

Exact whole numbers (Python integers), by dynamic programming over positions; no analog is visited.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import prod
from typing import Any

import numpy as np

from tuner.acidity.tables import IntArray
from tuner.search.space import CountLimit
from tuner.search.symmetry import Permutation, cycles
from tuner.synthesis.records import NO_ROUTE, ListedPart, StepPart, Steps

State = tuple[int, ...]


def count_patterns(
    shape: Sequence[int], limits: Sequence[CountLimit] = (), symmetry: Sequence[Permutation] = ()
) -> tuple[int, int]:
    """Number of patterns within the limits, before and after symmetry (Burnside's lemma).

    Parameters
    ----------
    shape : sequence of int
        Choices per position.
    limits : sequence of CountLimit
        Each must weigh symmetric positions alike.
    symmetry : sequence of permutations
        The whole group, identity included; empty means no symmetry.

    Examples
    --------
    >>> count_patterns((3, 3), (), ((0, 1), (1, 0)))
    (9, 6)
    """
    identity = tuple(range(len(shape)))
    before = _fixed_patterns(shape, limits, identity)
    group = tuple(symmetry) or (identity,)
    after = sum(_fixed_patterns(shape, limits, permutation) for permutation in group)
    return before, after // len(group)


def _fixed_patterns(shape: Sequence[int], limits: Sequence[CountLimit], permutation: Permutation) -> int:
    """Patterns within the limits that this operation maps onto themselves: one free choice per cycle."""
    states: dict[State, int] = {(0,) * len(limits): 1}
    for cycle in cycles(permutation):
        moves: dict[State, int] = {}
        for choice in range(shape[cycle[0]]):
            move = tuple(sum(int(limit.weights[p][choice]) for p in cycle) for limit in limits)
            moves[move] = moves.get(move, 0) + 1
        states = _added(states, moves)
    inside = (all(lim.low <= s <= lim.high for lim, s in zip(limits, state, strict=True)) for state in states)
    return sum(n for n, ok in zip(states.values(), inside, strict=True) if ok)


def _added(states: dict[State, int], moves: dict[State, int]) -> dict[State, int]:
    """All sums of a state and a move, with their multiplicities."""
    total: dict[State, int] = {}
    for state, n in states.items():
        for move, m in moves.items():
            key = tuple(a + b for a, b in zip(state, move, strict=True))
            total[key] = total.get(key, 0) + n * m
    return total


def within_limits(
    index: IntArray, limits: Sequence[CountLimit]
) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
    """True for the analogs that keep every counting limit; `index` of shape (n_analogs, n_positions)."""
    good = np.ones(len(index), dtype=np.bool_)
    for limit in limits:
        total = np.zeros(len(index), dtype=np.int64)
        for p, weights in enumerate(limit.weights):
            total += weights[index[:, p]]
        good &= (total >= limit.low) & (total <= limit.high)
    return good


def count_by_steps(steps: Steps) -> dict[int, int]:
    """Number of patterns for each step count, from the classes alone; limits and symmetry are not
    considered.

    Empty where there are several ways to the analogs, since then no class tells which is shorter.

    Examples
    --------
    >>> from tuner.synthesis.records import StepTable
    >>> count_by_steps(StepTable((np.array([0, 1, 1]),), np.array([0, 2], dtype=np.uint8)))
    {0: 1, 2: 2}
    """
    if len(steps.ways) != 1:
        return {}
    way = steps.ways[0]
    total = {way.constant: 1}
    for part in way.parts:
        found: dict[int, int] = {}
        for count, n in _part_histogram(part).items():
            for before, m in total.items():
                both = min(before + count, NO_ROUTE)
                found[both] = found.get(both, 0) + n * m
        total = found
    return dict(sorted(total.items()))


def _part_histogram(part: StepPart | ListedPart) -> dict[int, int]:
    """Number of choices of a part's positions for each of its counts."""
    if isinstance(part, ListedPart):
        listed = {int(count): int(n) for count, n in enumerate(np.bincount(part.counts)) if n}
        none = prod(part.sizes) - len(part.keys)
        return {**listed, NO_ROUTE: listed.get(NO_ROUTE, 0) + none} if none else listed
    weights = [
        np.bincount(classes, minlength=part.counts.shape[p]) for p, classes in enumerate(part.class_of)
    ]
    found: dict[int, int] = {}
    for count in np.unique(part.counts).tolist():
        number = 0
        for first, slab in zip(weights[0].tolist(), part.counts, strict=True):
            inside: Any = (slab == count).astype(np.int64)
            for weight in reversed(weights[1:]):
                inside = inside @ weight
            number += first * int(inside)
        if number:
            found[int(count)] = number
    return found
