"""What is the best so far? The running front and the running best N, merged exactly and in any order.

Objectives, all to be made small: offset from the target (in whole steps of the resolution), reaction steps,
molar mass. Ties: analogs with three equal objectives are one point of the front, shown by the one with the
smaller exact offset, then by the order of cores and choices. Equal scores are ordered the same way.
"""

from __future__ import annotations

from threading import Lock
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from tuner.search.rows import Analogs, join, no_analogs, order_keys
from tuner.search.tables import Int64

NEVER = np.iinfo(np.int64).max
"""Offset of 'no point there yet'."""

Mask = NDArray[np.bool_]


def front_rows(offset: Int64, steps: Int64, mass: Int64, order: NDArray[np.intp]) -> NDArray[np.intp]:
    """Rows of the non-dominated points, one row for each distinct point.

    Parameters
    ----------
    offset, steps, mass : arrays of shape (n,)
        Whole numbers, all to be made small.
    order : array of shape (n,)
        Rows in the order in which equal points are preferred.

    Returns
    -------
    array
        Row numbers sorted by (steps, mass). One sort and one sweep: O(n log n).

    Examples
    --------
    >>> import numpy as np
    >>> front_rows(np.array([5, 1, 1]), np.array([0, 1, 1]), np.array([9, 9, 9]), np.arange(3)).tolist()
    [0, 1]
    """
    by = order[np.lexsort((offset[order], mass[order], steps[order]))]
    kept: list[NDArray[np.intp]] = []
    lower_mass, lower_offset = np.zeros(0, dtype=np.int64), np.zeros(0, dtype=np.int64)
    for level in np.unique(steps[by]):
        rows = by[steps[by] == level]
        own = np.concatenate(([NEVER], np.minimum.accumulate(offset[rows])[:-1]))
        place = np.searchsorted(lower_mass, mass[rows], side="right")
        below = np.concatenate(([NEVER], lower_offset))[place]
        good = rows[(offset[rows] < own) & (offset[rows] < below)]
        kept.append(good)
        lower_mass, lower_offset = _staircase(
            np.concatenate((lower_mass, mass[good])), np.concatenate((lower_offset, offset[good]))
        )
    return np.concatenate(kept) if kept else np.zeros(0, dtype=np.intp)


def _staircase(mass: Int64, offset: Int64) -> tuple[Int64, Int64]:
    """Points sorted by mass with the running least offset."""
    by = np.lexsort((offset, mass))
    return mass[by], np.minimum.accumulate(offset[by])


class Standing:
    """The running front and the running best N of a search; safe to share between threads.

    Parameters
    ----------
    best_n : int
        How many rows of best score to keep.
    resolution : int
        Whole numbers of `PKA_UNIT` that count as one step of the offset on the front.
    """

    def __init__(self, best_n: int, resolution: int = 1) -> None:
        self.best_n = best_n
        self.resolution = max(1, resolution)
        self.front = no_analogs()
        self.best = no_analogs()
        self._lock = Lock()
        self._stairs: list[tuple[Int64, Int64]] = []
        self._closest = np.zeros((0, 2), dtype=np.int64)

    def offer(self, rows: Analogs) -> None:
        """Take in evaluated analogs; symmetry duplicates and analogs beyond limits must have been left
        out.
        """
        if not len(rows):
            return
        front, best = self._front_of(rows), self._best_of(rows)
        with self._lock:
            self.front = self._front_of(join((self.front, front)))
            self.best = self._best_of(join((self.best, best)))
            self._stairs = self._new_stairs()
            self._closest = _closest_points(self._stairs)

    def merge(self, other: Standing) -> None:
        """Take in what another search found; the order of merging does not matter."""
        self.offer(other.front)
        self.offer(other.best)

    def score_floor(self) -> float:
        """Score that an analog must reach to enter the best N."""
        best = self.best
        if self.best_n <= 0:
            return float("inf")
        return float(best.score[-1]) if len(best) >= self.best_n else float("-inf")

    def offset_ceiling(self, steps: Int64, mass: Int64) -> Int64:
        """For analogs with at least these steps and masses: only offsets (in steps of the resolution)
        *below* the ceiling can still add to the front. Shape as `steps`; `NEVER` where anything can.
        """
        stairs = self._stairs
        ceiling = np.full(len(steps), NEVER, dtype=np.int64)
        if not stairs:
            return ceiling
        level = np.minimum(steps, len(stairs) - 1)
        for at in np.unique(level):
            rows = np.flatnonzero(level == at)
            strict = _least(stairs[at], mass[rows], "left")
            equal = _least(stairs[at], mass[rows], "right")
            beyond = steps[rows] > at  # more steps than any point so far
            fewer = np.where(beyond, equal, _least(stairs[at - 1], mass[rows], "right") if at else NEVER)
            kept = np.where(equal == NEVER, NEVER, equal + 1)
            ceiling[rows] = np.minimum(np.minimum(strict, fewer), kept)
        return ceiling

    def may_join_front(self, offset: Int64, steps: Int64, mass: Int64) -> Mask:
        """True where an analog with at least these whole-number objectives could add to the front; arrays
        (n,).
        """
        good = np.ones(len(offset), dtype=np.bool_)
        closest = self._closest
        if not len(closest) or not len(offset):
            return good
        whole = offset // self.resolution
        best = closest[np.minimum(steps, len(closest) - 1)]
        good &= (whole < best[:, 0]) | (mass <= best[:, 1])
        rest = np.flatnonzero(good)
        good[rest] = whole[rest] < self.offset_ceiling(steps[rest], mass[rest])
        return good

    def _front_of(self, rows: Analogs) -> Analogs:
        order = np.lexsort((*order_keys(rows), rows.offset))
        return rows.take(front_rows(rows.offset // self.resolution, rows.steps, rows.mass, order))

    def _best_of(self, rows: Analogs) -> Analogs:
        listed = rows.take(np.lexsort((*order_keys(rows), -rows.score)))
        return listed.take(np.flatnonzero(_first_of_each(listed))[: self.best_n])

    def _new_stairs(self) -> list[tuple[Int64, Int64]]:
        front = self.front
        offset = front.offset // self.resolution
        return [
            _staircase(front.mass[front.steps <= s], offset[front.steps <= s])
            for s in range(int(front.steps.max(initial=-1)) + 1)
        ]


def _closest_points(stairs: list[tuple[Int64, Int64]]) -> Int64:
    """For each number of steps: the least offset of any point with so many or fewer, and the least mass
    with it.
    """
    points = np.full((len(stairs), 2), NEVER, dtype=np.int64)
    for level, (mass, offset) in enumerate(stairs):
        if len(mass):
            points[level] = offset[-1], mass[np.searchsorted(-offset, -offset[-1])]
    return points


def _least(stair: tuple[Int64, Int64], mass: Int64, side: Literal["left", "right"]) -> Int64:
    """Least offset among the points of a staircase with mass below ("left") or up to ("right") the given."""
    place = np.searchsorted(stair[0], mass, side=side)
    return np.asarray(np.concatenate(([NEVER], stair[1]))[place], dtype=np.int64)


def _first_of_each(rows: Analogs) -> Mask:
    """True for the first row of each run of identical analogs (equal analogs stand side by side once
    sorted).
    """
    if len(rows) == 0:
        return np.zeros(0, dtype=np.bool_)
    same = (rows.core[1:] == rows.core[:-1]) & np.all(rows.index[1:] == rows.index[:-1], axis=1)
    return np.concatenate(([True], ~same))
