"""How good can an analog be whose first choices are fixed? Admissible bounds: never worse than the best
completion.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import FloatArray, IntArray
from tuner.search.evaluate import standard_error
from tuner.search.probability import hit_bound
from tuner.search.space import CountLimit
from tuner.search.spans import SumSpan, find_budget
from tuner.search.standing import Standing
from tuner.search.symmetry import is_canonical
from tuner.search.tables import FixedSum, Goal, Int64, SpaceTables, in_ph

Mask = NDArray[np.bool_]

SCORE_SLACK = 1e-9
"""Scores closer than this are not told apart when a bound decides: rounding can never lose an analog."""


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

    def children(self, index: IntArray) -> Int64:
        """The same with each choice at the next position, shape (n, depth) -> (n, choices)."""
        depth = index.shape[1]
        classes = tuple(self._class_of[p][index[:, p]][:, None] for p in range(depth))
        found = self._minima[depth + 1][(*classes, self._class_of[depth][None, :])]
        return np.asarray(found, dtype=np.int64)


@dataclass(frozen=True)
class Bounds:
    """Bounds of prefixes, arrays of one shape. `offset` in whole numbers; `possible` is False where no
    completion is within the limits.
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
        good = self.possible & (self.score + SCORE_SLACK >= standing.score_floor())
        other = self.possible & ~good
        if other.any():
            ceiling = standing.offset_ceiling(self.steps[other], self.mass[other])
            good[other] = self.offset[other] // standing.resolution < ceiling
        return good

    def row(self, row: int) -> Bounds:
        """The bounds of one prefix."""
        at = slice(row, row + 1)
        return Bounds(*(getattr(self, name)[at] for name in Bounds.__dataclass_fields__))


class SpaceBounds:
    """Bounds for prefixes of every depth of one core's space, and for all their children at once."""

    def __init__(self, tables: SpaceTables, goal: Goal) -> None:
        self.tables = tables
        self.goal = goal
        self._budget = find_budget(tables.limits)
        self._spans: dict[tuple[str, int], SumSpan] = {}

    @cached_property
    def _least_steps(self) -> LeastSteps:
        return LeastSteps(self.tables)

    def _span(self, name: str, table: FixedSum, depth: int) -> SumSpan:
        key = (name, depth)
        if key not in self._spans:
            self._spans[key] = SumSpan(table, depth, self._budget)
        return self._spans[key]

    def pka_span(self, index: IntArray) -> tuple[Int64, Int64]:
        """Lowest and highest pKa' (whole numbers) of the completions of prefixes, shape (n, depth) -> two
        of (n,).
        """
        left = None if self._budget is None else self._budget.left(index)
        return self._span("pka", self.tables.pka, index.shape[1]).range(index, left)

    def at(self, index: IntArray) -> Bounds:
        """Bounds of the prefixes in `index`, shape (n, depth); non-canonical prefixes are not possible."""
        depth = index.shape[1]
        left = None if self._budget is None else self._budget.left(index)

        def span(name: str, table: FixedSum) -> tuple[Int64, Int64]:
            return self._span(name, table, depth).range(index, left)

        possible = is_canonical(index, self.tables.symmetry)
        for limit in self.tables.limits:
            possible &= _limit_possible(limit, index)
        return self._bounds(span, possible, self._least_steps.at(index))

    def children(self, index: IntArray) -> Bounds:
        """Bounds of every prefix with every choice at the next position, arrays of shape (n, choices)."""
        depth = index.shape[1]
        left = None
        if self._budget is not None:
            left = self._budget.left(index)[:, None] - self._budget.weights[depth]

        def span(name: str, table: FixedSum) -> tuple[Int64, Int64]:
            return self._span(name, table, depth).children(index, left)

        possible = np.ones((len(index), self.tables.shape[depth]), dtype=np.bool_)
        for limit in self.tables.limits:
            possible &= _limit_possible_children(limit, index)
        return self._bounds(span, possible, self._least_steps.children(index))

    def _bounds(self, span: Span, possible: Mask, steps: Int64) -> Bounds:
        """Put the spans of all quantities together."""
        tables, goal = self.tables, self.goal
        main = offset = _distance(span("pka", tables.pka), goal.target)
        for n, condition in enumerate(tables.conditions):
            low, high = span(f"condition {n}", condition.pka)
            possible &= (high >= condition.low) & (low <= condition.high)
            if condition.centre is not None:
                offset = np.maximum(offset, _distance((low, high), condition.centre))
        mass, flags = span("mass", tables.mass)[0], span("flags", tables.flags)[0]
        sd_low, sd_high = (standard_error(v, tables.variance.unit) for v in span("variance", tables.variance))
        possible &= (steps <= goal.max_steps) & (mass <= goal.mass_ceiling) & (sd_low <= goal.max_pka_sd)
        costs = goal.costs(steps, mass, flags)
        best_hit = hit_bound(in_ph(main), goal.tolerance, sd_low, sd_high)
        return Bounds(possible, offset, steps, mass, sd_low, sd_high, costs, best_hit - costs)


Span = Callable[[str, FixedSum], tuple[Int64, Int64]]


def _limit_possible(limit: CountLimit, index: IntArray) -> Mask:
    """False where a counting limit is broken whatever follows, shape (n, depth) -> (n,)."""
    depth = index.shape[1]
    total = np.zeros(len(index), dtype=np.int64)
    for p in range(depth):
        total += limit.weights[p][index[:, p]]
    return _reachable(limit, total, depth)


def _limit_possible_children(limit: CountLimit, index: IntArray) -> Mask:
    """The same with each choice at the next position, shape (n, depth) -> (n, choices)."""
    depth = index.shape[1]
    total = np.zeros(len(index), dtype=np.int64)
    for p in range(depth):
        total += limit.weights[p][index[:, p]]
    return _reachable(limit, total[:, None] + limit.weights[depth], depth + 1)


def _reachable(limit: CountLimit, total: Int64, depth: int) -> Mask:
    least = sum(int(w.min()) for w in limit.weights[depth:])
    most = sum(int(w.max()) for w in limit.weights[depth:])
    return np.asarray((total + most >= limit.low) & (total + least <= limit.high))


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
