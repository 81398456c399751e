"""In which order are candidates shown, and what marks them? Layers, knee, and a diverse choice.

The score is on a scale a chemist can check: it is the hit probability minus what steps, mass and flags
cost, each given in the brief as worth in hit probability ("one step more is worth 0.05"). See `tables.Goal`.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import FloatArray
from tuner.search.standing import front_rows
from tuner.search.tables import Int64

DIVERSITY_WORTH = 0.25
"""What likeness costs in a diverse list: an analog made of the same groups as one already listed must score
this much more (in hit probability) than an analog that shares nothing with the list. A convention, no
source."""


def layers(offset: Int64, steps: Int64, mass: Int64) -> Int64:
    """Non-dominated layer of each row: 1 for the front, 2 for the front of what is left, and so on.

    Rows with three equal objectives share a layer. Arrays of shape (n,), whole numbers, all to be made
    small.

    Examples
    --------
    >>> layers(np.array([0, 1, 1]), np.array([0, 0, 1]), np.array([5, 4, 5])).tolist()
    [1, 1, 2]
    """
    points, back = np.unique(np.stack([offset, steps, mass], axis=1), axis=0, return_inverse=True)
    layer = np.zeros(len(points), dtype=np.int64)
    left = np.arange(len(points))
    number = 0
    while len(left):
        number += 1
        o, s, m = points[left].T
        front = front_rows(o, s, m, np.arange(len(left)))
        layer[left[front]] = number
        left = np.delete(left, front)
    return np.asarray(layer[back.reshape(-1)], dtype=np.int64)


def knee(offset: FloatArray, steps: FloatArray, mass: FloatArray, tolerance: float) -> int:
    """Row of the front's knee: the point nearest to the ideal corner, each objective scaled to its range;
    -1 for none.

    Points farther from the target than twice the tolerance are left out, since they would stretch the scale
    of what nobody would make.

    Parameters
    ----------
    offset, steps, mass : arrays of shape (n,)
        pKa units, counts, g/mol.
    tolerance : float
        pKa units.
    """
    near = np.flatnonzero(offset <= 2.0 * tolerance)
    if not len(near):
        return -1
    distance = np.zeros(len(near))
    for values in (np.asarray(v, dtype=np.float64)[near] for v in (offset, steps, mass)):
        spread = values.max() - values.min()
        if spread > 0:
            distance += ((values - values.min()) / spread) ** 2
    return int(near[np.argmin(distance)])


def composition(groups: Sequence[Sequence[str]]) -> FloatArray:
    """Count of each word in each list: shape (n_lists, n_words), words in sorted order.

    Examples
    --------
    >>> composition([["Cl", "Cl"], ["Me"]]).tolist()
    [[2.0, 0.0], [0.0, 1.0]]
    """
    words = sorted({word for listed in groups for word in listed})
    place = {word: n for n, word in enumerate(words)}
    counts = np.zeros((len(groups), len(words)))
    for row, listed in enumerate(groups):
        for word in listed:
            counts[row, place[word]] += 1.0
    return counts


def likeness(counts: FloatArray, row: int) -> FloatArray:
    """Shared groups over all groups (multiset Jaccard index) of every row with one row; two empty rows are
    alike (1).
    """
    shared = np.minimum(counts, counts[row]).sum(axis=1)
    either = np.maximum(counts, counts[row]).sum(axis=1)
    return np.asarray(np.where(either > 0, shared / np.maximum(either, 1.0), 1.0), dtype=np.float64)


def diverse_order(
    scores: FloatArray, counts: FloatArray, n: int, worth: float = DIVERSITY_WORTH
) -> NDArray[np.intp]:
    """Choose n rows one after the other, each the best after paying for its likeness to the nearest one
    chosen.

    Parameters
    ----------
    scores : array of shape (m,)
    counts : array of shape (m, n_words)
        Compositions (groups and core).
    n : int
    worth : float
        See `DIVERSITY_WORTH`; 0 gives the plain order.

    Returns
    -------
    array
        Row numbers in the order of choice; equal values are taken in the order given.
    """
    m = min(n, len(scores))
    nearest = np.zeros(len(scores))
    free = np.ones(len(scores), dtype=np.bool_)
    chosen = []
    for _ in range(m):
        value = np.where(free, scores - worth * nearest, -np.inf)
        best = int(np.argmax(value))
        chosen.append(best)
        free[best] = False
        nearest = np.maximum(nearest, likeness(counts, best))
    return np.array(chosen, dtype=np.intp)
