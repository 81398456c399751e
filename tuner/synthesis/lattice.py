"""How many steps is every pattern of one core away from the shelf?

Breadth-first by levels over whole arrays of patterns. Only patterns that can be reached are held, as sorted
whole numbers; from a real shelf they are a thousandth of all patterns.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tuner.library.records import HYDROGEN_SHORT
from tuner.synthesis.alphabet import Alphabet
from tuner.synthesis.moves import MoveMaker, Rows, key_weights
from tuner.synthesis.records import NO_ROUTE
from tuner.synthesis.setting import FREE, PROTECTED, Pattern, Stage

Keys = NDArray[np.int64]


@dataclass(frozen=True)
class Frame:
    """The positions of a lattice and the alphabet they share; turns rows into whole numbers and back."""

    labels: tuple[str, ...]
    nitrogen: tuple[bool, ...]
    alphabet: Alphabet

    def keys(self, rows: Rows) -> Keys:
        """One whole number per row."""
        weights = key_weights(len(self.labels), len(self.alphabet.shorts))
        return np.asarray(rows.astype(np.int64) @ np.array(weights, dtype=np.int64))

    def rows(self, keys: Keys) -> Rows:
        """The rows behind whole numbers."""
        n = len(self.alphabet.shorts)
        rows = np.zeros((len(keys), len(self.labels)), dtype=np.int16)
        rest = keys.copy()
        for axis in reversed(range(len(self.labels))):
            rest, rows[:, axis] = np.divmod(rest, n)
        return rows

    def holding(self, wanted: Mapping[str, frozenset[str]]) -> tuple[NDArray[np.bool_], ...]:
        """For each position, over the alphabet: whether the group is one of those named for its label."""
        return tuple(
            self.alphabet.holds(wanted.get(label, frozenset((HYDROGEN_SHORT,)))) for label in self.labels
        )

    def row_of(self, pattern: Mapping[str, str]) -> Rows | None:
        """The row of a pattern, shape (1, n_positions); None where it is not on the lattice."""
        if any(label not in self.labels for label in pattern):
            return None
        found = [self.alphabet.index.get(pattern.get(label, HYDROGEN_SHORT), -1) for label in self.labels]
        return None if -1 in found else np.array([found], dtype=np.int16)

    def pattern_of(self, row: NDArray[np.int16]) -> Pattern:
        """The pattern of one row, hydrogens left out."""
        named = zip(self.labels, (self.alphabet.shorts[k] for k in row), strict=True)
        return {label: short for label, short in named if short != HYDROGEN_SHORT}


@dataclass(frozen=True)
class Lattice:
    """Least step counts of what can be reached: sorted `keys[layer]` with their `counts[layer]`."""

    stage: Stage
    frame: Frame
    keys: tuple[Keys, ...]
    counts: tuple[NDArray[np.uint8], ...]

    def steps(self, pattern: Mapping[str, str], layer: int = FREE) -> int:
        """Least number of steps to a pattern; `NO_ROUTE` where there is none or a group is not on the
        lattice.
        """
        row = self.frame.row_of(pattern)
        if row is None or layer >= len(self.keys) or not len(self.keys[layer]):
            return NO_ROUTE
        key = self.frame.keys(row)[0]
        at = int(np.searchsorted(self.keys[layer], key))
        found = at < len(self.keys[layer]) and self.keys[layer][at] == key
        return int(self.counts[layer][at]) if found else NO_ROUTE

    def reached(self) -> tuple[Rows, NDArray[np.uint8]]:
        """All patterns with a free reporting group that can be reached, with their counts."""
        return self.frame.rows(self.keys[FREE]), self.counts[FREE]


class _Sparse:
    """Patterns by key with the least count so far, for one layer, as sorted arrays."""

    def __init__(self) -> None:
        self.keys: Keys = np.zeros(0, dtype=np.int64)
        self.counts: NDArray[np.uint8] = np.zeros(0, dtype=np.uint8)
        self._waiting: dict[int, list[Keys]] = {}

    def note(self, keys: Keys, level: int) -> None:
        """Hold this count for keys that are not known with it or a lower one.

        They wait until the level is asked for: one merge for a level, since each costs the whole array.
        """
        self._waiting.setdefault(level, []).append(keys)

    def _merge(self) -> None:
        """Take in what waits, lower counts first."""
        waiting, self._waiting = self._waiting, {}
        for level in sorted(waiting):
            self._take_in(np.unique(np.concatenate(waiting[level])), level)

    def _take_in(self, keys: Keys, level: int) -> None:
        at = np.minimum(np.searchsorted(self.keys, keys), max(len(self.keys) - 1, 0))
        known = self.keys[at] == keys if len(self.keys) else np.zeros(len(keys), dtype=bool)
        if known.any():
            self.counts[at[known]] = np.minimum(self.counts[at[known]], np.uint8(level))
        fresh = keys[~known]
        place = np.searchsorted(self.keys, fresh)
        self.keys = np.insert(self.keys, place, fresh)
        self.counts = np.insert(self.counts, place, np.uint8(level))

    def unknown(self, keys: Keys, level: int) -> Keys:
        """Those of the keys that could gain by this count, each once."""
        keys = np.unique(keys)
        if not len(self.keys):
            return keys
        at = np.minimum(np.searchsorted(self.keys, keys), len(self.keys) - 1)
        fresh: Keys = keys[(self.keys[at] != keys) | (self.counts[at] > level)]
        return fresh

    def at_level(self, level: int) -> Keys:
        """Keys whose count is this level."""
        self._merge()
        here: Keys = self.keys[self.counts == level]
        return here

    def listed(self) -> tuple[Keys, NDArray[np.uint8]]:
        """All keys in order, with their counts."""
        self._merge()
        return self.keys, self.counts


class _Dense:
    """The same with one byte for each pattern of a small lattice."""

    def __init__(self, size: int) -> None:
        self.counts: NDArray[np.uint8] = np.full(size, NO_ROUTE, dtype=np.uint8)

    def note(self, keys: Keys, level: int) -> None:
        """Hold this count for keys that are not known with it or a lower one."""
        self.counts[keys[self.counts[keys] > level]] = level

    def unknown(self, keys: Keys, level: int) -> Keys:
        """Those of the keys that could gain by this count; some may come twice."""
        return keys[self.counts[keys] > level]

    def at_level(self, level: int) -> Keys:
        """Keys whose count is this level."""
        return np.asarray(np.flatnonzero(self.counts == level), dtype=np.int64)

    def listed(self) -> tuple[Keys, NDArray[np.uint8]]:
        """All keys in order, with their counts."""
        keys: Keys = np.flatnonzero(self.counts < NO_ROUTE)
        return keys, self.counts[keys]


LARGEST_DENSE = 100_000_000
"""Patterns of a lattice up to which every one gets a byte; more are held as sorted keys of those that are
reached.
"""
FEW_STARTS = 8
"""From so few starts little is reached, and looking through all bytes would take longer."""
AT_ONCE = 200_000
"""Patterns that the rules look at together; bounds the memory."""

Wanted = Sequence[NDArray[np.bool_]]
"""For each position, over the alphabet: whether the group may stand there in the end."""


def relax(
    stage: Stage,
    frame: Frame,
    start: Sequence[tuple[Mapping[str, str], int]],
    max_steps: int,
    wanted: Wanted | None = None,
) -> Lattice:
    """Least step counts from given ones by the rules of a stage.

    Parameters
    ----------
    start : patterns with their counts (0 for bottles)
    max_steps : int
        Longer ways are not looked for.
    wanted : optional
        Only patterns of these groups matter in the end; what cannot become one of them in time is dropped.

    Notes
    -----
    Every move costs one step, so levels in ascending order give the least counts.
    """
    maker = MoveMaker(stage, frame.labels, frame.nitrogen, frame.alphabet)
    layers = (FREE, PROTECTED) if stage.protection is not None else (FREE,)
    size = len(frame.alphabet.shorts) ** len(frame.labels)
    dense = size <= LARGEST_DENSE and len(start) > FEW_STARTS
    seen = [_Dense(size) if dense else _Sparse() for _ in layers]
    for steps, rows in _start_rows(frame, start, max_steps).items():
        seen[FREE].note(frame.keys(rows), steps)
    for level in range(max_steps):
        frontier = [seen[layer].at_level(level) for layer in layers]
        for layer in layers:
            for keys in np.array_split(frontier[layer], len(frontier[layer]) // AT_ONCE + 1):
                _spread(maker, frame, keys, layer, seen, level + 1, _Timely(wanted, max_steps - level - 1))
    listed = [layer.listed() for layer in seen]
    return Lattice(stage, frame, tuple(keys for keys, _ in listed), tuple(counts for _, counts in listed))


def _start_rows(
    frame: Frame, start: Sequence[tuple[Mapping[str, str], int]], max_steps: int
) -> dict[int, Rows]:
    """Rows of the starting patterns by their counts, lowest first."""
    found: dict[int, list[Rows]] = {}
    for pattern, steps in start:
        row = frame.row_of(pattern)
        if row is not None and steps <= max_steps:
            found.setdefault(steps, []).append(row)
    return {steps: np.concatenate(found[steps]) for steps in sorted(found)}


@dataclass(frozen=True)
class _Timely:
    """Which patterns can still become wanted ones? One step removes at most one kind of group that is not
    wanted.
    """

    wanted: Wanted | None
    left: int  # steps that are left

    def __call__(self, rows: Rows, layer: int) -> NDArray[np.bool_]:
        left = self.left - (layer != FREE)
        if self.wanted is None or left > 1 or not len(rows):
            return np.full(len(rows), left >= 0)
        foreign = np.stack([~self.wanted[axis][rows[:, axis]] for axis in range(rows.shape[1])], axis=1)
        if left < 1:
            return np.asarray(~foreign.any(axis=1) & (left == 0))
        most = np.where(foreign, rows, -1).max(axis=1)
        return np.asarray((~foreign | (rows == most[:, None])).all(axis=1))


def _spread(
    maker: MoveMaker,
    frame: Frame,
    keys: Keys,
    layer: int,
    seen: Sequence[_Sparse | _Dense],
    level: int,
    timely: _Timely,
) -> None:
    """Note what one step makes of some patterns."""
    if not len(keys):
        return
    rows = frame.rows(keys)
    if len(seen) > 1:
        other = PROTECTED if layer == FREE else FREE
        ready = maker.may_switch(rows, layer) & timely(rows, other)
        seen[other].note(seen[other].unknown(keys[ready], level), level)
    for _, at, change in maker.moves(rows, layer):
        fresh = seen[layer].unknown(keys[at] + change, level)
        if len(fresh):
            made = frame.rows(fresh)
            seen[layer].note(fresh[maker.harmless(made) & timely(made, layer)], level)


def as_pattern(pairs: Iterable[tuple[str, str]]) -> Pattern:
    """A pattern from its pairs, hydrogens left out."""
    return {label: short for label, short in pairs if short != HYDROGEN_SHORT}
