"""How few steps can an analog take whose first choices are fixed, with so many further groups?"""

from __future__ import annotations

from functools import reduce

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import IntArray
from tuner.search.listed_steps import ListedMinima
from tuner.search.spans import Budget
from tuner.search.tables import Int64, SpaceTables
from tuner.synthesis.records import NO_ROUTE, ListedPart, StepPart

Counts = NDArray[np.uint8]


class LeastSteps:
    """The least count of any completion, by further groups: over ways the least, over a way's parts the
    sum.
    """

    def __init__(self, tables: SpaceTables, budget: Budget) -> None:
        self._ways = [
            (way.constant, [_minima_of(part, budget) for part in way.parts]) for way in tables.steps.ways
        ]

    def at(self, index: IntArray) -> Int64:
        """Shape (n, depth) -> (n, further groups from 0 to all free positions)."""
        found = [_total(constant, [p.at(index) for p in parts]) for constant, parts in self._ways]
        return np.asarray(reduce(np.minimum, found))

    def children(self, index: IntArray) -> Int64:
        """The same with each choice at the next position, shape (n, depth) -> (n, choices, further
        groups).
        """
        found = [_total(constant, [p.children(index) for p in parts]) for constant, parts in self._ways]
        return np.asarray(reduce(np.minimum, found))


def _minima_of(part: StepPart | ListedPart, budget: Budget) -> _PartMinima | ListedMinima:
    """The minima of a part, tabulated or listed as the part is."""
    return ListedMinima(part, budget) if isinstance(part, ListedPart) else _PartMinima(part, budget)


class _PartMinima:
    """Minima of one part's table over its last axes, kept apart by the number of further groups."""

    def __init__(self, part: StepPart, budget: Budget) -> None:
        order = np.argsort(part.positions)
        self._positions = [part.positions[k] for k in order]
        self._class_of = [part.class_of[k] for k in order]
        minima: list[Counts] = [np.transpose(part.counts, order)[..., None]]
        for p in reversed(range(len(self._positions))):
            weights = budget.weights[self._positions[p]]
            empty = np.unique(self._class_of[p][weights == 0])
            filled = np.unique(self._class_of[p][weights > 0])
            minima.append(_without_last_axis(minima[-1], empty, filled))
        self._minima = minima[::-1]

    def _fixed(self, index: IntArray) -> list[NDArray[np.int64]]:
        """Classes of those of the part's positions that the prefixes fix."""
        depth = index.shape[1]
        pairs = zip(self._positions, self._class_of, strict=True)
        return [classes[index[:, p]] for p, classes in pairs if p < depth]

    def at(self, index: IntArray) -> Int64:
        """(n, depth) -> (n, further groups)."""
        fixed = self._fixed(index)
        found = self._minima[len(fixed)][tuple(fixed)]
        return np.broadcast_to(found, (len(index), found.shape[-1])).astype(np.int64)

    def children(self, index: IntArray) -> Int64:
        """(n, depth) -> (n, choices at the next position or 1, further groups)."""
        fixed = self._fixed(index)
        depth = index.shape[1]
        if len(fixed) == len(self._positions) or self._positions[len(fixed)] != depth:
            return self.at(index)[:, None, :]
        classes = tuple(c[:, None] for c in fixed)
        own = self._class_of[len(fixed)]
        found = self._minima[len(fixed) + 1][(*classes, own[None, :])]
        return np.broadcast_to(found, (len(index), len(own), found.shape[-1])).astype(np.int64)


def _total(constant: int, parts: list[Int64]) -> Int64:
    """Sums over parts: further groups are shared out among the parts in the best way."""
    total = parts[0]
    for more in parts[1:]:
        length = total.shape[-1] + more.shape[-1] - 1
        shape = np.broadcast_shapes(total.shape[:-1], more.shape[:-1])
        summed = np.full((*shape, length), NO_ROUTE, dtype=np.int64)
        for here in range(more.shape[-1]):
            at = slice(here, here + total.shape[-1])
            summed[..., at] = np.minimum(summed[..., at], total + more[..., here : here + 1])
        total = summed
    return np.where(total < NO_ROUTE, np.minimum(total + constant, NO_ROUTE), NO_ROUTE)


def _without_last_axis(counts: Counts, empty: NDArray[np.int64], filled: NDArray[np.int64]) -> Counts:
    """(..., classes, groups) -> (..., groups + 1): the best class of the last position, without or with a
    group there.
    """
    *outer, _, groups = counts.shape
    least = np.full((*outer, groups + 1), NO_ROUTE, dtype=np.uint8)
    if len(empty):
        least[..., :groups] = counts[..., empty, :].min(axis=-2)
    if len(filled):
        least[..., 1:] = np.minimum(least[..., 1:], counts[..., filled, :].min(axis=-2))
    return least
