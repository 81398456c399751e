"""How is an analog of any core written as one row of whole numbers, and how are such rows varied?"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from tuner.search.rows import NO_CHOICE, Analogs
from tuner.search.symmetry import Permutation, canonical_form
from tuner.search.tables import Int64

START_FILLED = 0.4
"""Share of positions that bear a group at the start: analogs worth making are lightly substituted."""


class Chromosomes:
    """Rows (core, choice at position 1, 2 ...), filled with 0 behind a core's last position.

    Parameters
    ----------
    shapes : choices per position, for each core
    symmetries : the symmetry group of each core
    """

    def __init__(self, shapes: Sequence[Sequence[int]], symmetries: Sequence[Sequence[Permutation]]) -> None:
        self.shapes = [tuple(shape) for shape in shapes]
        self.symmetries = symmetries
        self.width = 1 + max(len(shape) for shape in self.shapes)
        self.choices = np.ones((len(shapes), self.width - 1), dtype=np.int64)
        for core, shape in enumerate(self.shapes):
            self.choices[core, : len(shape)] = shape

    def start(self, n: int, rng: np.random.Generator) -> Int64:
        """n random rows, most positions empty."""
        core = rng.integers(0, len(self.shapes), n)
        limits = self.choices[core]
        drawn = (rng.random(limits.shape) * limits).astype(np.int64)
        filled = rng.random(limits.shape) < START_FILLED
        return self.tidy(np.concatenate((core[:, None], np.where(filled, drawn, 0)), axis=1))

    def code(self, rows: Analogs) -> Int64:
        """Analogs as rows."""
        coded = np.zeros((len(rows), self.width), dtype=np.int64)
        coded[:, 0] = rows.core
        width = min(self.width - 1, rows.index.shape[1])
        coded[:, 1 : 1 + width] = np.where(rows.index == NO_CHOICE, 0, rows.index)[:, :width]
        return coded

    def tidy(self, coded: Int64) -> Int64:
        """Rows within the choices of their core, in canonical form, nothing behind the last position."""
        coded = np.array(coded, dtype=np.int64)
        coded[:, 0] %= len(self.shapes)
        coded[:, 1:] %= self.choices[coded[:, 0]]
        for core, shape in enumerate(self.shapes):
            mine = coded[:, 0] == core
            if mine.any():
                inner = canonical_form(coded[mine][:, 1 : 1 + len(shape)], self.symmetries[core])
                coded[mine, 1 : 1 + len(shape)] = inner
        return coded

    def cross(self, first: Int64, second: Int64, rng: np.random.Generator) -> Int64:
        """Children that take each choice from either parent at random, and the core of the first."""
        swap = rng.random(first.shape) < 0.5
        swap[:, 0] = False
        return self.tidy(np.where(swap, second, first))

    def move(self, coded: Int64, rng: np.random.Generator) -> Int64:
        """Each row with one change: a new group, an emptied position, two positions swapped, or another
        core.
        """
        coded = np.array(coded, dtype=np.int64)
        n, positions = len(coded), self.width - 1
        rows = np.arange(n)
        kind = rng.random(n)
        place = 1 + rng.integers(0, positions, n)
        other = 1 + rng.integers(0, positions, n)
        limit = self.choices[coded[:, 0], place - 1]
        drawn = (rng.random(n) * limit).astype(np.int64)
        own, its = coded[rows, place], coded[rows, other]
        coded[rows, place] = np.where(kind < 0.55, drawn, np.where(kind < 0.75, 0, own))
        swap = (kind >= 0.75) & (kind < 0.95)
        coded[rows[swap], place[swap]] = its[swap]
        coded[rows[swap], other[swap]] = own[swap]
        coded[:, 0] = np.where(kind >= 0.95, rng.integers(0, len(self.shapes), n), coded[:, 0])
        return self.tidy(coded)
