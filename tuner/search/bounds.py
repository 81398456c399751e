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
from tuner.search.least_steps import LeastSteps
from tuner.search.probability import hit_bound
from tuner.search.space import CountLimit
from tuner.search.spans import FAR, Split, SumSpan, budget_of, total_span
from tuner.search.standing import Standing
from tuner.search.symmetry import is_canonical
from tuner.search.tables import FixedSum, Goal, Int64, SpaceTables, in_ph

Mask = NDArray[np.bool_]
Spans = Callable[[str, FixedSum], Split]

SCORE_SLACK = 1e-9
"""Scores closer than this are not told apart when a bound decides: rounding can never lose an analog."""

FAR_HIT = 0.5
"""Outside the window no error makes a hit likelier than this."""


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
        good = self.possible & (self.score + SCORE_SLACK >= standing.score_floor())
        other = np.flatnonzero(self.possible & ~good)
        good[other] = standing.may_join_front(self.offset[other], self.steps[other], self.mass[other])
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
        self._budget = budget_of(tables.shape, tables.limits)
        self._spans: dict[tuple[str, int], SumSpan] = {}

    @cached_property
    def _least_steps(self) -> LeastSteps:
        return LeastSteps(self.tables, self._budget)

    def _span(self, name: str, table: FixedSum, depth: int) -> SumSpan:
        key = (name, depth)
        if key not in self._spans:
            self._spans[key] = SumSpan(table, depth, self._budget)
        return self._spans[key]

    def pka_span(self, index: IntArray) -> tuple[Int64, Int64]:
        """Lowest and highest pKa' (whole numbers) of the completions of prefixes, (n, depth) -> two of
        (n,).
        """
        split = self._span("pka", self.tables.pka, index.shape[1]).prefixes(index)
        return total_span(split, self._budget.left(index))

    def at(self, index: IntArray) -> Bounds:
        """Bounds of the prefixes in `index`, shape (n, depth), whatever the number of further groups."""
        tables, goal = self.tables, self.goal
        left = self._budget.left(index)

        def span(name: str, table: FixedSum) -> tuple[Int64, Int64]:
            return total_span(self._span(name, table, index.shape[1]).prefixes(index), left)

        main = offset = _distance(span("pka", tables.pka), goal.target)
        possible = is_canonical(index, tables.symmetry) & self._limits_possible(index)
        for n, condition in enumerate(tables.conditions):
            low, high = span(f"condition {n}", condition.pka)
            possible &= (high >= condition.low) & (low <= condition.high)
            if condition.centre is not None:
                offset = np.maximum(offset, _distance((low, high), condition.centre))
        steps = self._least_steps.at(index).min(axis=1)
        mass, flags = span("mass", tables.mass)[0], span("flags", tables.flags)[0]
        variances = span("variance", tables.variance)
        sd_low, sd_high = (standard_error(v, tables.variance.unit) for v in variances)
        possible &= (steps <= goal.max_steps) & (mass <= goal.mass_ceiling) & (sd_low <= goal.max_pka_sd)
        costs = goal.costs(steps, mass, flags)
        best_hit = hit_bound(in_ph(main), goal.tolerance, sd_low, sd_high)
        return Bounds(possible, offset, steps, mass, sd_low, sd_high, costs, best_hit - costs)

    def useful(self, index: IntArray, standing: Standing) -> Mask:
        """True for prefixes, shape (n, depth), of which a completion could still enter the front or the
        best N.
        """
        depth = index.shape[1]
        possible = is_canonical(index, self.tables.symmetry) & self._limits_possible(index)
        left = self._budget.left(index)[:, None]

        def spans(name: str, table: FixedSum) -> Split:
            return self._span(name, table, depth).prefixes(index)

        steps = self._least_steps.at(index)[:, None, :]
        return self._assess(spans, steps, possible[:, None], left, standing)[0][:, 0]

    def useful_children(self, index: IntArray, standing: Standing) -> tuple[Mask, FloatArray]:
        """The same for every prefix with every choice at the next position, and a bound of the score: (n,
        choices).
        """
        depth = index.shape[1]
        left = self._budget.left(index)[:, None] - self._budget.weights[depth]
        possible = np.ones((len(index), self.tables.shape[depth]), dtype=np.bool_)
        for limit in self.tables.limits:
            placed = _placed(limit, index)[:, None] + limit.weights[depth]
            possible &= _reachable(limit, placed, depth + 1)

        def spans(name: str, table: FixedSum) -> Split:
            return self._span(name, table, depth).children(index)

        return self._assess(spans, self._least_steps.children(index), possible, left, standing)

    def _limits_possible(self, index: IntArray) -> Mask:
        """False where a counting limit is broken whatever follows, shape (n, depth) -> (n,)."""
        good = np.ones(len(index), dtype=np.bool_)
        for limit in self.tables.limits:
            good &= _reachable(limit, _placed(limit, index), index.shape[1])
        return good

    def _assess(
        self, spans: Spans, steps: Int64, possible: Mask, left: Int64, standing: Standing
    ) -> tuple[Mask, FloatArray]:
        """Useful or not, and the bound of the score, for (n, choices) prefixes; arrays inside are by
        further groups.
        """
        tables, goal = self.tables, self.goal
        split = spans("pka", tables.pka)
        low, high = split.low(), split.high()
        main = offset = np.maximum(0, np.maximum(low - goal.target, goal.target - high))
        groups = np.arange(low.shape[2])
        open_ = possible[:, :, None] & (low < FAR // 2) & (groups <= left[:, :, None])
        for n, condition in enumerate(tables.conditions):
            there = spans(f"condition {n}", condition.pka)
            low, high = there.low(), there.high()
            open_ &= (high >= condition.low) & (low <= condition.high)
            if condition.centre is not None:
                away = np.maximum(low - condition.centre, condition.centre - high)
                offset = np.maximum(offset, away)
        mass = spans("mass", tables.mass).low()
        open_ &= (steps <= goal.max_steps) & (mass <= goal.mass_ceiling)
        flagged = any(t.any() for t in tables.flags.unary)
        flags = spans("flags", tables.flags).low() if flagged else np.zeros(1, dtype=np.int64)
        costs = goal.costs(steps, mass, flags)
        useful, score = self._by_score(spans("variance", tables.variance), main, costs, open_, standing)
        rest = np.nonzero(open_ & ~useful[:, :, None])
        joins = standing.may_join_front(offset[rest], np.broadcast_to(steps, offset.shape)[rest], mass[rest])
        useful[rest[0][joins], rest[1][joins]] = True
        return useful, score

    def _by_score(
        self, variance: Split, offset: Int64, costs: FloatArray, open_: Mask, standing: Standing
    ) -> tuple[Mask, FloatArray]:
        """Which prefixes could still enter the best N, and the bound of their score (minus infinity where
        none).
        """
        goal, unit = self.goal, self.tables.variance.unit
        floor = standing.score_floor() - SCORE_SLACK
        surest = standard_error(variance.own_low.min(axis=1)[:, None] + variance.rest_low, unit)
        cap = hit_bound(np.zeros(surest.shape), goal.tolerance, surest, surest)[:, None, :]
        cap = np.where(offset <= goal.half_width, cap, np.minimum(cap, FAR_HIT))
        n, k, groups = np.nonzero(open_ & (cap - costs >= floor))
        sd_low = standard_error(variance.own_low[n, k] + variance.rest_low[n, groups], unit)
        sd_high = standard_error(variance.own_high[n, k] + variance.rest_high[n, groups], unit)
        hit = hit_bound(in_ph(offset[n, k, groups]), goal.tolerance, sd_low, np.maximum(sd_low, sd_high))
        found = hit - costs[n, k, groups]
        found[sd_low > goal.max_pka_sd] = -np.inf
        score: FloatArray = np.full(offset.shape[:2], -np.inf)
        np.maximum.at(score, (n, k), found)
        useful = score >= floor if np.isfinite(floor) else open_.any(axis=2)
        return np.asarray(useful, dtype=np.bool_), score


def _placed(limit: CountLimit, index: IntArray) -> Int64:
    """What the fixed choices already count for a limit, shape (n, depth) -> (n,)."""
    total = np.zeros(len(index), dtype=np.int64)
    for p in range(index.shape[1]):
        total += limit.weights[p][index[:, p]]
    return total


def _reachable(limit: CountLimit, placed: Int64, depth: int) -> Mask:
    """False where a limit is broken whatever follows from `depth` on."""
    least = sum(int(w.min()) for w in limit.weights[depth:])
    most = sum(int(w.max()) for w in limit.weights[depth:])
    return np.asarray((placed + most >= limit.low) & (placed + least <= limit.high))


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
