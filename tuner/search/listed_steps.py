"""How few steps can an analog take whose first choices are fixed, where the makeable patterns are listed
one by one?
"""

from __future__ import annotations

from math import prod

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import IntArray
from tuner.search.spans import Budget
from tuner.search.tables import Int64
from tuner.synthesis.records import NO_ROUTE, ListedPart

Keys = NDArray[np.int64]
Counts = NDArray[np.uint8]

LARGEST_INDEX = 4_000_000
"""Prefixes up to which a dense index (4 bytes each) is kept; beyond, a prefix is found by bisection."""


class _Level:
    """Prefixes of one length that lead to something: sorted keys, and for each the minima by further
    groups.
    """

    def __init__(self, keys: Keys, minima: Counts, size: int) -> None:
        self.keys = keys
        missing = np.full((1, minima.shape[1]), NO_ROUTE, dtype=np.uint8)
        self.minima = np.concatenate((minima, missing))
        self._index: NDArray[np.int32] | None = None
        if size <= LARGEST_INDEX:
            self._index = np.full(size, len(keys), dtype=np.int32)
            self._index[keys] = np.arange(len(keys), dtype=np.int32)

    def at(self, wanted: Keys) -> Int64:
        """Minima of prefixes by key, shape (...) -> (..., groups); `NO_ROUTE` where a prefix leads
        nowhere.
        """
        if self._index is not None:
            return self.minima[self._index[wanted]].astype(np.int64)
        place = np.minimum(np.searchsorted(self.keys, wanted), len(self.keys) - 1)
        found = np.where(self.keys[place] == wanted, place, len(self.keys))
        return self.minima[found].astype(np.int64)


class ListedMinima:
    """Minima of one listed part for every number of its positions that are fixed."""

    def __init__(self, part: ListedPart, budget: Budget) -> None:
        self._positions = part.positions
        self._sizes = part.sizes
        keys, minima = part.keys, part.counts[:, None]
        levels = [_Level(keys, minima, prod(part.sizes))]
        for axis in reversed(range(len(part.sizes))):
            weights = budget.weights[part.positions[axis]]
            keys, minima = _shorter(keys, minima, part.sizes[axis], weights)
            levels.append(_Level(keys, minima, prod(part.sizes[:axis])))
        self._levels = levels[::-1]

    def _fixed(self, index: IntArray) -> tuple[int, Keys]:
        """How many of the part's positions the prefixes fix, and their keys."""
        depth = index.shape[1]
        keys = np.zeros(len(index), dtype=np.int64)
        fixed = 0
        for position, size in zip(self._positions, self._sizes, strict=True):
            if position < depth:
                keys = keys * size + index[:, position]
                fixed += 1
        return fixed, keys

    def at(self, index: IntArray) -> Int64:
        """(n, depth) -> (n, further groups)."""
        fixed, keys = self._fixed(index)
        return self._levels[fixed].at(keys)

    def children(self, index: IntArray) -> Int64:
        """(n, depth) -> (n, choices at the next position or 1, further groups)."""
        fixed, keys = self._fixed(index)
        if fixed == len(self._positions) or self._positions[fixed] != index.shape[1]:
            return self._levels[fixed].at(keys)[:, None, :]
        size = self._sizes[fixed]
        return self._levels[fixed + 1].at(keys[:, None] * size + np.arange(size))


def _shorter(keys: Keys, minima: Counts, size: int, weights: NDArray[np.int64]) -> tuple[Keys, Counts]:
    """Prefixes shorter by one position: the best last choice for every number of groups."""
    if not len(keys):
        return keys, np.zeros((0, minima.shape[1] + 1), dtype=np.uint8)
    shorter, choice = np.divmod(keys, size)
    grouped = weights[choice] > 0
    shifted = np.full((len(keys), minima.shape[1] + 1), NO_ROUTE, dtype=np.uint8)
    shifted[~grouped, :-1] = minima[~grouped]
    shifted[grouped, 1:] = minima[grouped]
    starts = np.flatnonzero(np.concatenate(([True], shorter[1:] != shorter[:-1])))
    return shorter[starts], np.minimum.reduceat(shifted, starts, axis=0)
