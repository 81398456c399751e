"""How many steps is every pattern of one core away from the shelf?

Breadth-first by levels over whole arrays of patterns. Only patterns that can be reached are held, as sorted whole numbers; from a real
shelf they are a thousandth of all patterns.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tuner.library.records import HYDROGEN_SHORT
from tuner.synthesis.alphabet import Alphabet
from tuner.synthesis.moves import MoveMaker, Rows
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
        n = len(self.alphabet.shorts)
        keys = np.zeros(len(rows), dtype=np.int64)
        for axis in range(rows.shape[1]):
            keys = keys * n + rows[:, axis]
        return keys

    def rows(self, keys: Keys) -> Rows:
        """The rows behind whole numbers."""
        n = len(self.alphabet.shorts)
        rows = np.zeros((len(keys), len(self.labels)), dtype=np.int16)
        rest = keys.copy()
        for axis in reversed(range(len(self.labels))):
            rest, rows[:, axis] = np.divmod(rest, n)
        return rows

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
    """Least step counts of the patterns that can be reached: sorted `keys[layer]` with their `counts[layer]`."""

    stage: Stage
    frame: Frame
    keys: tuple[Keys, ...]
    counts: tuple[NDArray[np.uint8], ...]

    def steps(self, pattern: Mapping[str, str], layer: int = FREE) -> int:
        """Least number of steps to a pattern; `NO_ROUTE` where there is none or a group is not on the lattice."""
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


class _Seen:
    """Patterns by key with the least count so far, for one layer."""

    def __init__(self) -> None:
        self.keys: Keys = np.zeros(0, dtype=np.int64)
        self.counts: NDArray[np.uint8] = np.zeros(0, dtype=np.uint8)

    def new_ones(self, keys: Keys, level: int) -> Keys:
        """Those of the keys that are not known with this count or a lower one; they are known from now on."""
        keys = np.unique(keys)
        if len(self.keys):
            at = np.minimum(np.searchsorted(self.keys, keys), len(self.keys) - 1)
            known = self.keys[at] == keys
            lower = known & (self.counts[at] > level)
            self.counts[at[lower]] = level
            fresh, improved = keys[~known], keys[lower]
        else:
            fresh, improved = keys, keys[:0]
        if len(fresh):
            place = np.searchsorted(self.keys, fresh)
            self.keys = np.insert(self.keys, place, fresh)
            self.counts = np.insert(self.counts, place, np.uint8(level))
        return np.union1d(fresh, improved)

    def at_level(self, level: int) -> Keys:
        """Keys whose count is this level."""
        return self.keys[self.counts == level]


def relax(
    stage: Stage,
    frame: Frame,
    start: Sequence[tuple[Mapping[str, str], int]] | tuple[Rows, NDArray[np.uint8]],
    max_steps: int,
) -> Lattice:
    """Least step counts from given ones by the rules of a stage.

    Parameters
    ----------
    start : patterns with their counts (0 for bottles), or rows with counts
    max_steps : int
        Longer ways are not looked for.

    Notes
    -----
    Every move costs one step, so levels in ascending order give the least counts.
    """
    maker = MoveMaker(stage, frame.labels, frame.nitrogen, frame.alphabet)
    layers = (FREE, PROTECTED) if stage.protection is not None else (FREE,)
    seen = {layer: _Seen() for layer in layers}
    rows, counts = _start_rows(frame, start)
    for level in np.unique(counts):
        seen[FREE].new_ones(frame.keys(rows[counts == level]), int(level))
    for level in range(max_steps):
        frontier = {layer: seen[layer].at_level(level) for layer in layers}
        for layer in layers:
            found = [frontier[other] for other in layers if other != layer]
            if len(frontier[layer]):
                for _, _, after in maker.outcomes(frame.rows(frontier[layer]), layer):
                    found.append(np.unique(frame.keys(after[maker.harmless(after)])))
            if any(len(keys) for keys in found):
                seen[layer].new_ones(np.concatenate(found), level + 1)
    return Lattice(stage, frame, tuple(seen[k].keys for k in layers), tuple(seen[k].counts for k in layers))


def _start_rows(
    frame: Frame, start: Sequence[tuple[Mapping[str, str], int]] | tuple[Rows, NDArray[np.uint8]]
) -> tuple[Rows, NDArray[np.uint8]]:
    """Rows and counts of the start, patterns off the lattice left out."""
    if isinstance(start, tuple) and len(start) == 2 and isinstance(start[0], np.ndarray):
        return start[0], np.asarray(start[1], dtype=np.uint8)
    rows, counts = [], []
    for pattern, steps in start:
        row = frame.row_of(pattern)  # type: ignore[arg-type]
        if row is not None:
            rows.append(row[0])
            counts.append(steps)
    shape = (len(rows), len(frame.labels))
    return np.array(rows, dtype=np.int16).reshape(shape), np.array(counts, dtype=np.uint8)


def as_pattern(pairs: Iterable[tuple[str, str]]) -> Pattern:
    """A pattern from its pairs, hydrogens left out."""
    return {label: short for label, short in pairs if short != HYDROGEN_SHORT}
