"""How is a space cut into blocks, and what does a block hold?

A block fixes the choices at the first positions (the prefix) and spans all choices at the rest (the inner
positions). Its values follow by broadcasting: a few additions per analog, no index arrays.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from math import prod

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import FloatArray, IntArray
from tuner.search.evaluate import standard_error
from tuner.search.probability import Interval, hit_probability
from tuner.search.tables import PKA_UNIT, FixedSum, Goal, Int32, Int64, SpaceTables, in_ph
from tuner.synthesis.records import NO_ROUTE, ListedPart, StepPart, Steps

LARGEST_BLOCK = 2**20
"""Analogs per block at most: 4 MiB per whole-number array, a few of them stay in the cache of one core."""


def inner_start(shape: Sequence[int], largest: int = LARGEST_BLOCK) -> int:
    """First inner position: the inner positions are as many of the last ones as fit into a block (at least
    one).

    Examples
    --------
    >>> inner_start((100, 100, 100, 100))
    1
    """
    start = len(shape)
    while start > 0 and (start == len(shape) or prod(shape[start - 1 :]) <= largest):
        start -= 1
    return start


@dataclass(frozen=True)
class SumGrid:
    """A `FixedSum` split at the first inner position."""

    table: FixedSum
    start: int

    @cached_property
    def inner_pairs(self) -> Int32 | None:
        """Sum of the pair terms among inner positions, over the whole inner grid; None where there are
        none.
        """
        pairs = {key: t for key, t in self.table.pair.items() if key[0] >= self.start}
        if not pairs:
            return None
        rank = len(self.table.unary) - self.start
        total = np.zeros(tuple(len(t) for t in self.table.unary[self.start :]), dtype=np.int32)
        for (p, q), table in pairs.items():
            shape = [1] * rank
            shape[p - self.start], shape[q - self.start] = table.shape
            total += table.reshape(shape)
        return total

    def axes(self, prefix: Sequence[int]) -> tuple[int, list[Int32]]:
        """Constant and one vector per inner position, the prefix's pair terms included."""
        constant = self.table.base + sum(int(t[k]) for t, k in zip(self.table.unary, prefix, strict=False))
        vectors = [t.copy() for t in self.table.unary[self.start :]]
        for (p, q), table in self.table.pair.items():
            if q < self.start:
                constant += int(table[prefix[p], prefix[q]])
            elif p < self.start:
                vectors[q - self.start] += table[prefix[p]]
        return constant, vectors

    def values(self, prefix: Sequence[int], shift: int = 0) -> Int32:
        """Whole numbers over the inner grid, `shift` added; shape of the inner positions."""
        constant, vectors = self.axes(prefix)
        total: Int32 = np.asarray(constant + shift, dtype=np.int32)
        for vector in vectors[:-1]:
            total = total[..., None] + vector
        if self.inner_pairs is None:
            return np.asarray(total[..., None] + vectors[-1], dtype=np.int32)
        out = self.inner_pairs + total[..., None]
        out += vectors[-1]
        return np.asarray(out, dtype=np.int32)


@dataclass(frozen=True)
class BlockValues:
    """Every quantity of one block over its inner grid."""

    pka: FloatArray
    sd: FloatArray
    hit: FloatArray
    steps: np.ndarray[tuple[int, ...], np.dtype[np.uint8]]
    mass: FloatArray
    offset: FloatArray


def step_grid(steps: Steps, prefix: Sequence[int], inner_shape: Sequence[int]) -> NDArray[np.uint8]:
    """Step counts over the grid of the last positions, the first ones fixed: least over ways of sums of
    parts.
    """
    start = len(prefix)
    best = np.full(tuple(inner_shape), NO_ROUTE, dtype=np.uint8)
    for way in steps.ways:
        total = np.full([1] * len(inner_shape), way.constant, dtype=np.int16)
        for part in way.parts:
            total = total + _part_grid(part, prefix, start, len(inner_shape))
        np.minimum(best, np.minimum(total, NO_ROUTE).astype(np.uint8), out=best)
    return best


def _part_grid(
    part: StepPart | ListedPart, prefix: Sequence[int], start: int, n_inner: int
) -> NDArray[np.int16]:
    """One part over the inner grid, with axes of length 1 where it does not depend on a position."""
    if isinstance(part, ListedPart):
        return _listed_grid(part, prefix, start, n_inner)
    order = np.argsort(part.positions)
    counts = np.transpose(part.counts, order)
    positions = [part.positions[k] for k in order]
    class_of = [part.class_of[k] for k in order]
    fixed = tuple(int(c[prefix[p]]) for p, c in zip(positions, class_of, strict=True) if p < start)
    inner = [(p, c) for p, c in zip(positions, class_of, strict=True) if p >= start]
    grid = counts[fixed][np.ix_(*(c for _, c in inner))] if inner else counts[fixed]
    lengths = {p - start: len(c) for p, c in inner}
    return np.asarray(grid, dtype=np.int16).reshape([lengths.get(axis, 1) for axis in range(n_inner)])


def _listed_grid(part: ListedPart, prefix: Sequence[int], start: int, n_inner: int) -> NDArray[np.int16]:
    """The same for a part whose patterns are listed."""
    pairs = list(zip(part.positions, part.sizes, strict=True))
    inner = {p - start: size for p, size in pairs if p >= start}
    span = prod(inner.values())
    head = 0
    for p, size in pairs:
        head = head * size + int(prefix[p]) if p < start else head
    low, high = np.searchsorted(part.keys, [head * span, (head + 1) * span])
    grid = np.full(span, NO_ROUTE, dtype=np.int16)
    grid[part.keys[low:high] - head * span] = part.counts[low:high]
    return grid.reshape([inner.get(axis, 1) for axis in range(n_inner)])


class BlockPlan:
    """The blocks of one core's space, numbered in the lexicographic order of their prefixes."""

    def __init__(self, tables: SpaceTables, largest: int = LARGEST_BLOCK) -> None:
        self.tables = tables
        self.start = inner_start(tables.shape, largest)
        self.inner_shape = tables.shape[self.start :]
        self.inner_size = prod(self.inner_shape)
        self.count = prod(tables.shape[: self.start])
        self.pka = SumGrid(tables.pka, self.start)
        self.variance = SumGrid(tables.variance, self.start)
        self.mass = SumGrid(tables.mass, self.start)
        self.conditions = [SumGrid(c.pka, self.start) for c in tables.conditions]
        self.condition_variances = [SumGrid(c.variance, self.start) for c in tables.conditions]

    def prefixes(self, numbers: IntArray) -> Int64:
        """Prefix choices of these blocks, shape (n_blocks, n_prefix_positions)."""
        shape = self.tables.shape[: self.start]
        if not shape:
            return np.zeros((len(numbers), 0), dtype=np.int64)
        return np.stack(np.unravel_index(np.asarray(numbers), shape), axis=1).astype(np.int64)

    def rows(self, prefix: Sequence[int], inside: IntArray) -> Int64:
        """Full choice rows of the analogs at flat places `inside` of the inner grid."""
        inner = np.stack(np.unravel_index(np.asarray(inside), self.inner_shape), axis=1)
        outer = np.broadcast_to(np.asarray(prefix, dtype=np.int64), (len(inner), self.start))
        return np.concatenate((outer, inner), axis=1).astype(np.int64)

    def steps(self, prefix: Sequence[int]) -> np.ndarray[tuple[int, ...], np.dtype[np.uint8]]:
        """Step counts over the inner grid."""
        return step_grid(self.tables.steps, prefix, self.inner_shape)

    def evaluate(self, prefix: Sequence[int], goal: Goal) -> BlockValues:
        """Full evaluation of one block; the same numbers as `evaluate_rows` on its rows."""
        pka = self.pka.values(prefix)
        sd = standard_error(self.variance.values(prefix), self.tables.variance.unit)
        whole_offset = np.abs(pka - np.int32(goal.target))
        values = in_ph(pka)
        low, high = goal.target_ph - goal.tolerance, goal.target_ph + goal.tolerance
        intervals = [Interval(values, sd, low, high)]
        for n, condition in enumerate(self.tables.conditions):
            there = self.conditions[n].values(prefix)
            other = standard_error(self.condition_variances[n].values(prefix), condition.variance.unit)
            intervals.append(
                Interval(in_ph(there), other, condition.low * PKA_UNIT, condition.high * PKA_UNIT)
            )
            if condition.centre is not None:
                whole_offset = np.maximum(whole_offset, np.abs(there - np.int32(condition.centre)))
        return BlockValues(
            pka=values,
            sd=sd,
            hit=hit_probability(intervals),
            steps=self.steps(prefix),
            mass=np.asarray(self.mass.values(prefix) * self.tables.mass.unit, dtype=np.float64),
            offset=in_ph(whole_offset),
        )
