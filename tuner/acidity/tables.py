"""What does the pKa of a whole substitution space look like?

The acidity model is linear in its parameters and couples at most two positions at a time. So over all
patterns of one core both the pKa and its variance are sums of one- and two-position look-ups, and a whole
space is evaluated by broadcasting, without a loop over analogs.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.integer]
Pair = tuple[int, int]


@dataclass(frozen=True)
class PairwiseSum:
    """f(a) = base + sum_p unary[p][a_p] + sum_{p<q} pair[p, q][a_p, a_q].

    Parameters
    ----------
    base : float
    unary : tuple of arrays, one per position, shape (n_choices_p,)
    pair : mapping (p, q), p < q -> array of shape (n_choices_p, n_choices_q); absent pairs are zero
    """

    base: float
    unary: tuple[FloatArray, ...]
    pair: Mapping[Pair, FloatArray]

    def at(self, index: IntArray) -> FloatArray:
        """Values (unit of the tables) of analogs: shape (n_analogs, n_positions) -> (n_analogs,)."""
        total = np.full(index.shape[0], self.base)
        for p, table in enumerate(self.unary):
            total += table[index[:, p]]
        for (p, q), table in self.pair.items():
            total += table[index[:, p], index[:, q]]
        return total

    def grid(self, axes: tuple[IntArray, ...]) -> FloatArray:
        """Values (unit of the tables) over the product of `axes`, one array of choices per position;
        shape (len(axes[0]), ...).
        """
        n = len(axes)
        total = np.full(tuple(len(a) for a in axes), self.base)
        for p, table in enumerate(self.unary):
            total += table[axes[p]].reshape([-1 if d == p else 1 for d in range(n)])
        for (p, q), table in self.pair.items():
            shape = [len(axes[d]) if d in (p, q) else 1 for d in range(n)]
            total += table[np.ix_(axes[p], axes[q])].reshape(shape)
        return total


@dataclass(frozen=True)
class CoreTables:
    """pKa (in the brief's medium) and its variance over one core's space; choices as in the matching core
    space.
    """

    pka: PairwiseSum
    variance: PairwiseSum
    dpka_dt_intercept: float  # dpKa'/dT = intercept + slope * pKa', per kelvin
    dpka_dt_slope: float
