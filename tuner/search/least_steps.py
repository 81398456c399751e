"""How few steps can an analog take whose first choices are fixed, with so many further groups?"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import IntArray
from tuner.search.spans import Budget
from tuner.search.tables import Int64, SpaceTables
from tuner.synthesis.records import NO_ROUTE

Counts = NDArray[np.uint8]


class LeastSteps:
    """Minima of a dense step table over its last axes, kept apart by the number of further groups."""

    def __init__(self, tables: SpaceTables, budget: Budget) -> None:
        self._class_of = tables.steps.class_of
        minima: list[Counts] = [tables.steps.counts[..., None]]
        for p in reversed(range(len(tables.shape))):
            weights = budget.weights[p]
            empty = np.unique(self._class_of[p][weights == 0])
            filled = np.unique(self._class_of[p][weights > 0])
            minima.append(_without_last_axis(minima[-1], empty, filled))
        self._minima = minima[::-1]

    def at(self, index: IntArray) -> Int64:
        """Shape (n, depth) -> (n, further groups from 0 to all free positions)."""
        depth = index.shape[1]
        classes = tuple(self._class_of[p][index[:, p]] for p in range(depth))
        found = self._minima[depth][classes] if depth else self._minima[0]
        return np.broadcast_to(found, (len(index), found.shape[-1])).astype(np.int64)

    def children(self, index: IntArray) -> Int64:
        """The same with each choice at the next position, shape (n, depth) -> (n, choices, further
        groups).
        """
        depth = index.shape[1]
        classes = tuple(self._class_of[p][index[:, p]][:, None] for p in range(depth))
        found = self._minima[depth + 1][(*classes, self._class_of[depth][None, :])]
        shape = (len(index), len(self._class_of[depth]), found.shape[-1])
        return np.broadcast_to(found, shape).astype(np.int64)


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
