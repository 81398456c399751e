"""How good can an analog be whose first choices are fixed? Admissible bounds: never worse than the best
completion.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import FloatArray, IntArray
from tuner.search.evaluate import standard_error
from tuner.search.probability import hit_bound
from tuner.search.standing import Standing
from tuner.search.symmetry import is_canonical
from tuner.search.tables import PKA_UNIT, FixedSum, Goal, Int32, Int64, SpaceTables

Mask = NDArray[np.bool_]

SCORE_SLACK = 1e-9
"""Scores closer than this are not told apart when a bound decides, so that rounding can never lose an
analog.
"""

ROWS_AT_ONCE = 4096


class SumRange:
    """Lowest and highest value of a `FixedSum` once the first `depth` choices are fixed.

    For each free position the best choice is taken given the fixed ones; pair terms among free positions
    enter by the best partner of each choice. The range therefore holds every completion, and is exact where
    free positions do not couple.
    """

    def __init__(self, table: FixedSum, depth: int) -> None:
        self.table = table
        self.depth = depth
        free = table.unary[depth:]
        self._starts = np.cumsum([0, *(len(t) for t in free)])[:-1].astype(np.intp)
        self._low = (
            np.concatenate([t.astype(np.int64) for t in free]) if free else np.zeros(0, dtype=np.int64)
        )
        self._high = self._low.copy()
        for (p, _), pair in table.pair.items():
            if p >= depth:
                at = slice(self._starts[p - depth], self._starts[p - depth] + len(table.unary[p]))
                self._low[at] += pair.min(axis=1)
                self._high[at] += pair.max(axis=1)
        self._cross = {p: self._cross_table(p) for p in range(depth) if self._couples(p)}

    def _couples(self, p: int) -> bool:
        return any(a == p and b >= self.depth for a, b in self.table.pair)

    def _cross_table(self, p: int) -> Int32:
        """Pair terms of each choice at fixed position p with every choice at the free positions, side by
        side.
        """
        parts = []
        for q in range(self.depth, len(self.table.unary)):
            width = len(self.table.unary[q])
            empty = np.zeros((len(self.table.unary[p]), width), dtype=np.int32)
            parts.append(self.table.pair.get((p, q), empty))
        return np.concatenate(parts, axis=1)

    def fixed(self, index: IntArray) -> Int64:
        """The part that is fixed, shape (n, depth) -> (n,)."""
        total = np.full(len(index), self.table.base, dtype=np.int64)
        for p in range(self.depth):
            total += self.table.unary[p][index[:, p]]
        for (p, q), pair in self.table.pair.items():
            if q < self.depth:
                total += pair[index[:, p], index[:, q]]
        return total

    def range(self, index: IntArray) -> tuple[Int64, Int64]:
        """Lowest and highest total of every row, shape (n, depth) -> two of (n,)."""
        fixed = self.fixed(index)
        if not len(self._starts):
            return fixed, fixed.copy()
        if not self._cross:
            low = np.minimum.reduceat(self._low, self._starts).sum()
            high = np.maximum.reduceat(self._high, self._starts).sum()
            return fixed + low, fixed + high
        lows, highs = np.empty_like(fixed), np.empty_like(fixed)
        for at in _slices(len(index)):
            shift = np.zeros((len(index[at]), len(self._low)), dtype=np.int32)
            for p, table in self._cross.items():
                shift += table[index[at, p]]
            lows[at] = np.minimum.reduceat(shift + self._low.astype(np.int32), self._starts, axis=1).sum(
                axis=1
            )
            highs[at] = np.maximum.reduceat(shift + self._high.astype(np.int32), self._starts, axis=1).sum(
                axis=1
            )
        return fixed + lows, fixed + highs


def _slices(n: int) -> Iterator[slice]:
    for start in range(0, n, ROWS_AT_ONCE):
        yield slice(start, min(n, start + ROWS_AT_ONCE))


class LeastSteps:
    """Least step count of any completion, for every depth: minima of the dense table over its last axes."""

    def __init__(self, tables: SpaceTables) -> None:
        self._class_of = tables.steps.class_of
        minima = [tables.steps.counts]
        for _ in tables.shape:
            minima.append(minima[-1].min(axis=-1))
        self._minima = minima[::-1]

    def at(self, index: IntArray) -> Int64:
        """Shape (n, depth) -> (n,)."""
        depth = index.shape[1]
        if depth == 0:
            return np.full(len(index), int(self._minima[0]), dtype=np.int64)
        classes = tuple(self._class_of[p][index[:, p]] for p in range(depth))
        return np.asarray(self._minima[depth][classes], dtype=np.int64)


@dataclass(frozen=True)
class Bounds:
    """Bounds of prefixes, arrays of shape (n,). `offset` in whole numbers; `possible` is False where no
    completion is canonical and within the limits.
    """

    possible: Mask
    offset: Int64
    steps: Int64
    mass: Int64
    sd_low: FloatArray
    sd_high: FloatArray
    costs: FloatArray
    score: FloatArray

    def useful(self, standing: Standing) -> Mask:
        """True where a completion could still enter the front or the best N."""
        ceiling = standing.offset_ceiling(self.steps, self.mass)
        for_front = self.offset // standing.resolution < ceiling
        return self.possible & (for_front | (self.score + SCORE_SLACK >= standing.score_floor()))


class SpaceBounds:
    """Bounds for prefixes of every depth of one core's space."""

    def __init__(self, tables: SpaceTables, goal: Goal) -> None:
        self.tables = tables
        self.goal = goal
        self._ranges: dict[tuple[str, int], SumRange] = {}

    @cached_property
    def _least_steps(self) -> LeastSteps:
        return LeastSteps(self.tables)

    def _range(self, name: str, table: FixedSum, index: IntArray) -> tuple[Int64, Int64]:
        key = (name, index.shape[1])
        if key not in self._ranges:
            self._ranges[key] = SumRange(table, index.shape[1])
        return self._ranges[key].range(index)

    def at(self, index: IntArray) -> Bounds:
        """Bounds of the prefixes in `index`, shape (n, depth)."""
        tables, goal = self.tables, self.goal
        offset = _distance(self._range("pka", tables.pka, index), goal.target)
        main = offset
        possible = is_canonical(index, tables.symmetry) & self._limits_possible(index)
        for n, condition in enumerate(tables.conditions):
            low, high = self._range(f"condition {n}", condition.pka, index)
            possible &= (high >= condition.low) & (low <= condition.high)
            if condition.centre is not None:
                offset = np.maximum(offset, _distance((low, high), condition.centre))
        steps = self._least_steps.at(index)
        mass = self._range("mass", tables.mass, index)[0]
        flags = self._range("flags", tables.flags, index)[0]
        variances = self._range("variance", tables.variance, index)
        sd_low, sd_high = (standard_error(v, tables.variance.unit) for v in variances)
        possible &= (steps <= goal.max_steps) & (mass <= goal.mass_ceiling) & (sd_low <= goal.max_pka_sd)
        costs = goal.costs(steps, mass, flags)
        best_hit = hit_bound(main * PKA_UNIT, goal.tolerance, sd_low, sd_high)
        return Bounds(possible, offset, steps, mass, sd_low, sd_high, costs, best_hit - costs)

    def _limits_possible(self, index: IntArray) -> Mask:
        """False where a counting limit is broken whatever follows."""
        depth = index.shape[1]
        good = np.ones(len(index), dtype=np.bool_)
        for limit in self.tables.limits:
            total = np.zeros(len(index), dtype=np.int64)
            for p in range(depth):
                total += limit.weights[p][index[:, p]]
            least = sum(int(w.min()) for w in limit.weights[depth:])
            most = sum(int(w.max()) for w in limit.weights[depth:])
            good &= (total + most >= limit.low) & (total + least <= limit.high)
        return good


def _distance(span: tuple[Int64, Int64], centre: int) -> Int64:
    """Least distance of `centre` from each span."""
    low, high = span
    return np.maximum(0, np.maximum(low - centre, centre - high))


def seed_rows(shape: Sequence[int], most: int = 200_000) -> Int64:
    """Patterns with at most two choices other than the first of their position, as a first standing; at
    most `most`.

    Examples
    --------
    >>> seed_rows((2, 2)).tolist()
    [[0, 0], [1, 0], [0, 1], [1, 1]]
    """
    places = [(p, k) for p, n in enumerate(shape) for k in range(1, n)]
    singles = np.zeros((len(places) + 1, len(shape)), dtype=np.int64)
    for row, (p, k) in enumerate(places, start=1):
        singles[row, p] = k
    first, second = np.triu_indices(len(places), 1)
    position = np.array([p for p, _ in places], dtype=np.int64)
    apart = position[first] != position[second] if len(places) else np.zeros(0, dtype=np.bool_)
    first, second = first[apart][:most], second[apart][:most]
    return np.concatenate((singles, singles[first + 1] + singles[second + 1]))
