"""Which of several equal patterns stands for all of them? The lexicographically smallest under the core's
symmetry.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import IntArray

Permutation = tuple[int, ...]
Mask = NDArray[np.bool_]


def is_canonical(index: IntArray, symmetry: Sequence[Permutation]) -> Mask:
    """True where no symmetry operation gives a smaller row.

    Parameters
    ----------
    index : array of shape (n, k)
        Choices at the first k positions; with k below the number of positions a row is refused only if
        every completion of it is non-canonical.
    symmetry : sequence of permutations
        The whole group, as indices; `row[list(permutation)]` is the same molecule as `row`.

    Examples
    --------
    >>> import numpy as np
    >>> is_canonical(np.array([[0, 1], [1, 0], [1, 1]]), [(0, 1), (1, 0)]).tolist()
    [True, False, True]
    """
    n, known = index.shape
    canonical = np.ones(n, dtype=np.bool_)
    for permutation in symmetry:
        undecided = np.ones(n, dtype=np.bool_)
        for place, origin in enumerate(permutation[:known]):
            if origin >= known:
                break
            if origin == place:
                continue
            image, own = index[:, origin], index[:, place]
            canonical &= ~(undecided & (image < own))
            undecided &= image == own
    return canonical


def canonical_form(index: IntArray, symmetry: Sequence[Permutation]) -> NDArray[np.int64]:
    """The smallest equal row of each row, shape (n_analogs, n_positions)."""
    best = np.array(index, dtype=np.int64)
    for permutation in symmetry:
        image = np.asarray(index, dtype=np.int64)[:, list(permutation)]
        differs = image != best
        first = np.argmax(differs, axis=1)
        rows = np.arange(len(best))
        smaller = differs.any(axis=1) & (image[rows, first] < best[rows, first])
        best[smaller] = image[smaller]
    return best


def cycles(permutation: Permutation) -> list[tuple[int, ...]]:
    """The cycles of a permutation, each starting at its smallest member, in order.

    Examples
    --------
    >>> cycles((0, 2, 1))
    [(0,), (1, 2)]
    """
    seen: set[int] = set()
    found = []
    for start in range(len(permutation)):
        cycle = []
        at = start
        while at not in seen:
            seen.add(at)
            cycle.append(at)
            at = permutation[at]
        if cycle:
            found.append(tuple(cycle))
    return found
