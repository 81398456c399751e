"""Between which values does a sum lie once its first choices are fixed and so many groups are to follow?

For each free position the best choice is taken given the fixed ones; pair terms among free positions enter
by the best partner of each choice. A span therefore holds every completion, and is exact where free
positions do not couple. Spans are kept apart by the number of further groups: steps, mass and error grow
with every group, so a prefix that needs two more groups to reach the target can be dropped although none and
one would be cheap.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import IntArray
from tuner.search.space import CountLimit
from tuner.search.tables import FixedSum, Int32, Int64

Whole = NDArray[np.int64]

FAR = 2**40
"""Sum of a completion that does not exist: far beyond anything that a table can add up to."""


class Budget:
    """Which choices count as groups (weight 1, else 0), and how many there may be."""

    def __init__(self, weights: Sequence[NDArray[np.int64]], high: int) -> None:
        self.weights = tuple(weights)
        self.high = high

    def left(self, index: IntArray) -> Int64:
        """How many more groups may be placed, shape (n, depth) -> (n,); negative where there are too many
        already.
        """
        used = np.zeros(len(index), dtype=np.int64)
        for p in range(index.shape[1]):
            used += self.weights[p][index[:, p]]
        return self.high - used


def budget_of(shape: Sequence[int], limits: Sequence[CountLimit]) -> Budget:
    """The tightest limit of the kind 'at most so many', or else any number of choices other than the
    first.
    """
    fit = [
        limit
        for limit in limits
        if all(len(w) and w.min() >= 0 and w.max() <= 1 for w in limit.weights)
        and sum(int(w.sum()) for w in limit.weights) * 2 > sum(shape)
    ]
    if fit:
        best = min(fit, key=lambda limit: limit.high)
        return Budget(best.weights, min(best.high, len(shape)))
    return Budget([(np.arange(n) > 0).astype(np.int64) for n in shape], len(shape))


@dataclass(frozen=True)
class Split:
    """Lowest and highest sums as own part (n, choices) plus rest by number of further groups (n, 0..m)."""

    own_low: Whole
    own_high: Whole
    rest_low: Whole
    rest_high: Whole

    def low(self) -> Whole:
        """Shape (n, choices, groups)."""
        return self.own_low[:, :, None] + self.rest_low[:, None, :]

    def high(self) -> Whole:
        """Shape (n, choices, groups)."""
        return self.own_high[:, :, None] + self.rest_high[:, None, :]


class SumSpan:
    """Spans of a `FixedSum` over the completions of prefixes of length `depth`."""

    def __init__(self, table: FixedSum, depth: int, budget: Budget) -> None:
        self.table = table
        self.depth = depth
        free = table.unary[depth:]
        self._ends = np.cumsum([0, *(len(t) for t in free)]).astype(np.intp)
        self._own = np.concatenate(free).astype(np.int32) if free else np.zeros(0, dtype=np.int32)
        self._low, self._high = self._own.copy(), self._own.copy()
        for (p, _), pair in table.pair.items():
            if p >= depth:
                at = slice(self._ends[p - depth], self._ends[p - depth + 1])
                self._low[at] += pair.min(axis=1)
                self._high[at] += pair.max(axis=1)
        self._group = (
            np.concatenate([w > 0 for w in budget.weights[depth:]]) if free else np.zeros(0, dtype=np.bool_)
        )
        self._cross = {p: self._cross_table(p) for p in range(depth) if self._couples(p)}
        self._next_low, self._next_high = self._next_partners()

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

    def prefixes(self, index: IntArray) -> Split:
        """Spans of the prefixes themselves: one 'choice' each."""
        fixed, shift = self.fixed(index)[:, None], self.shift(index)
        low, high = self._rest(shift, len(index), 0), self._rest(shift, len(index), 0, negative=True)
        return Split(fixed, fixed, low, -high)

    def children(self, index: IntArray) -> Split:
        """Spans of the prefixes with every choice at the next position."""
        shift = self.shift(index)
        own = self.fixed(index)[:, None] + self._own[: int(self._ends[1])]
        if shift is not None:
            own = own + shift[:, : int(self._ends[1])]
        low, high = self._rest(shift, len(index), 1), self._rest(shift, len(index), 1, negative=True)
        return Split(own + self._next_low, own + self._next_high, low, -high)

    def _rest(self, shift: Int32 | None, n: int, first: int, *, negative: bool = False) -> Whole:
        """Least sum over the free positions from `first` on, with exactly 0, 1, ... groups: shape (n,
        positions + 1).

        With `negative` the least sum of the negated values. A number of groups that cannot be gives at
        least `FAR`.
        """
        start = int(self._ends[first])
        bounds = (self._ends[first:-1] - start).astype(np.intp)
        values = (-self._high if negative else self._low)[start:]
        if len(values) == 0:
            return np.zeros((n, 1), dtype=np.int64)
        moved = values[None, :]
        if shift is not None:
            moved = values - shift[:, start:] if negative else values + shift[:, start:]
        group = self._group[start:]
        top = np.iinfo(np.int32).max
        empty = np.minimum.reduceat(np.where(group, top, moved), bounds, axis=1).astype(np.int64)
        filled = np.minimum.reduceat(np.where(group, moved, top), bounds, axis=1).astype(np.int64)
        empty[empty == top] = FAR
        filled[filled == top] = 3 * FAR
        more = np.sort(filled - empty, axis=1)
        totals = np.concatenate((np.zeros((len(more), 1), dtype=np.int64), np.cumsum(more, axis=1)), axis=1)
        totals += empty.sum(axis=1)[:, None]
        return np.broadcast_to(totals, (n, totals.shape[1]))


def total_span(split: Split, left: Int64) -> tuple[Int64, Int64]:
    """Lowest and highest total of every prefix over all numbers of further groups that the budget allows:
    two of (n,).
    """
    groups = np.arange(split.rest_low.shape[1])
    allowed = groups[None, :] <= np.maximum(left, 0)[:, None]
    low = np.where(allowed, split.rest_low, 4 * FAR).min(axis=1)
    high = np.where(allowed, split.rest_high, -4 * FAR).max(axis=1)
    return split.own_low[:, 0] + low, split.own_high[:, 0] + high
