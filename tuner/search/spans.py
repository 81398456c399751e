"""Between which values does a sum lie once its first choices are fixed?

For each free position the best choice is taken given the fixed ones; pair terms among free positions enter
by the best partner of each choice. The span therefore holds every completion, and is exact where free
positions do not couple. Where a counting limit leaves only a few more groups to place (the budget), only
that many free positions may move away from their cheapest choice.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import IntArray
from tuner.search.space import CountLimit
from tuner.search.tables import FixedSum, Int32, Int64

ROWS_AT_ONCE = 4096
"""Prefixes per step, so that (prefixes x free choices) arrays stay within a few MiB."""

Whole = NDArray[np.int64]


class Budget:
    """A limit of the kind 'at most so many groups': every choice weighs 0 or 1."""

    def __init__(self, limit: CountLimit) -> None:
        self.weights = limit.weights
        self.high = limit.high

    def left(self, index: IntArray) -> Int64:
        """How many more may be placed, shape (n, depth) -> (n,); negative where the limit is broken
        already.
        """
        used = np.zeros(len(index), dtype=np.int64)
        for p in range(index.shape[1]):
            used += self.weights[p][index[:, p]]
        return self.high - used


def find_budget(limits: Sequence[CountLimit]) -> Budget | None:
    """The tightest limit that can serve as a budget, or None."""
    fit = [
        limit
        for limit in limits
        if all(len(w) and w.min() == 0 and w.max() <= 1 for w in limit.weights)
        and any(w.max() for w in limit.weights)
    ]
    return Budget(min(fit, key=lambda limit: limit.high)) if fit else None


class SumSpan:
    """Lowest and highest value of a `FixedSum` over the completions of prefixes of length `depth`."""

    def __init__(self, table: FixedSum, depth: int, budget: Budget | None) -> None:
        self.table = table
        self.depth = depth
        free = table.unary[depth:]
        widths = [len(t) for t in free]
        self._ends = np.cumsum([0, *widths]).astype(np.intp)
        self._own = np.concatenate(free).astype(np.int32) if free else np.zeros(0, dtype=np.int32)
        self._low, self._high = self._own.copy(), self._own.copy()
        for (p, _), pair in table.pair.items():
            if p >= depth:
                at = slice(self._ends[p - depth], self._ends[p - depth + 1])
                self._low[at] += pair.min(axis=1)
                self._high[at] += pair.max(axis=1)
        self._cross = {p: self._cross_table(p) for p in range(depth) if self._couples(p)}
        self._next_low, self._next_high = self._next_partners()
        self._free_of_cost = None
        if budget is not None and free:
            self._free_of_cost = np.concatenate([w == 0 for w in budget.weights[depth:]])

    def _couples(self, p: int) -> bool:
        return any(a == p and b >= self.depth for a, b in self.table.pair)

    def _cross_table(self, p: int) -> Int32:
        """Pair terms of each choice at fixed position p with every choice at the free positions, side by
        side.
        """
        parts = []
        for q in range(self.depth, len(self.table.unary)):
            empty = np.zeros((len(self.table.unary[p]), len(self.table.unary[q])), dtype=np.int32)
            parts.append(self.table.pair.get((p, q), empty))
        return np.concatenate(parts, axis=1)

    def _next_partners(self) -> tuple[Whole, Whole]:
        """Of each choice at the next position: least and greatest sum of its pair terms with later
        positions.
        """
        if self.depth >= len(self.table.unary):
            return np.zeros(0, dtype=np.int64), np.zeros(0, dtype=np.int64)
        low = np.zeros(len(self.table.unary[self.depth]), dtype=np.int64)
        high = low.copy()
        for (p, _), pair in self.table.pair.items():
            if p == self.depth:
                low += pair.min(axis=1)
                high += pair.max(axis=1)
        return low, high

    def fixed(self, index: IntArray) -> Int64:
        """The part that is fixed, shape (n, depth) -> (n,)."""
        total = np.full(len(index), self.table.base, dtype=np.int64)
        for p in range(self.depth):
            total += self.table.unary[p][index[:, p]]
        for (p, q), pair in self.table.pair.items():
            if q < self.depth:
                total += pair[index[:, p], index[:, q]]
        return total

    def shift(self, index: IntArray) -> Int32 | None:
        """What the fixed choices add to every free choice, shape (n, free choices); None where nothing
        couples.
        """
        if not self._cross:
            return None
        total = np.zeros((len(index), len(self._own)), dtype=np.int32)
        for p, table in self._cross.items():
            total += table[index[:, p]]
        return total

    def range(self, index: IntArray, left: Int64 | None) -> tuple[Int64, Int64]:
        """Lowest and highest total of every row, (n, depth) -> two of (n,); `left` is the budget of each
        row.
        """
        lows, highs = np.empty(len(index), dtype=np.int64), np.empty(len(index), dtype=np.int64)
        for start in range(0, len(index), ROWS_AT_ONCE):
            at = slice(start, start + ROWS_AT_ONCE)
            budget = None if left is None else left[at]
            rows, shift = index[at], self.shift(index[at])
            lows[at] = _spent(*self._least(shift, len(rows), 0), budget)
            highs[at] = -_spent(*self._least(shift, len(rows), 0, negative=True), budget)
        fixed = self.fixed(index)
        return fixed + lows, fixed + highs

    def children(self, index: IntArray, left: Int64 | None) -> tuple[Int64, Int64]:
        """Lowest and highest total of every row with each choice at the next position: two of (n, choices).

        `left`, shape (n, choices), is the budget after that choice.
        """
        shift = self.shift(index)
        width = int(self._ends[1])
        own = self.fixed(index)[:, None] + self._own[:width]
        if shift is not None:
            own = own + shift[:, :width]
        lows = _spent(*self._least(shift, len(index), 1), left)
        highs = _spent(*self._least(shift, len(index), 1, negative=True), left)
        if lows.ndim == 1:
            lows, highs = lows[:, None], highs[:, None]
        return own + self._next_low + lows, own + self._next_high - highs

    def _least(
        self, shift: Int32 | None, n: int, first: int, *, negative: bool = False
    ) -> tuple[Whole, Whole | None]:
        """Least value at every free position from `first` on, over all choices and over those that cost no
        budget.
        """
        start = int(self._ends[first])
        bounds = (self._ends[first:-1] - start).astype(np.intp)
        values = (-self._high if negative else self._low)[start:]
        if len(values) == 0:
            return np.zeros((n, 0), dtype=np.int64), None
        if shift is not None:
            moved = values - shift[:, start:] if negative else values + shift[:, start:]
        else:
            moved = values[None, :]
        least = np.minimum.reduceat(moved, bounds, axis=1).astype(np.int64)
        if self._free_of_cost is None:
            return np.broadcast_to(least, (n, least.shape[1])), None
        costly = ~self._free_of_cost[start:]
        cheap = np.minimum.reduceat(np.where(costly, np.iinfo(np.int32).max, moved), bounds, axis=1)
        shape = (n, least.shape[1])
        return np.broadcast_to(least, shape), np.broadcast_to(cheap.astype(np.int64), shape)


def _spent(least: Whole, cheap: Whole | None, left: Int64 | None) -> Int64:
    """Least sum over positions when only `left` of them may leave their cheap choice; (n,) or (n, choices)
    as `left`.
    """
    if cheap is None or left is None:
        return np.asarray(least.sum(axis=1))
    gains = np.sort(np.minimum(least - cheap, 0), axis=1)
    totals = np.concatenate((np.zeros((len(gains), 1), dtype=np.int64), np.cumsum(gains, axis=1)), axis=1)
    totals += cheap.sum(axis=1)[:, None]
    moves = np.clip(left, 0, gains.shape[1])
    if left.ndim == 1:
        return np.asarray(totals[np.arange(len(totals)), moves])
    return np.asarray(np.take_along_axis(totals, moves, axis=1))
