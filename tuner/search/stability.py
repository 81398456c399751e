"""Would the same analogs be listed if weights, constants and tolerance were a little different?

The ranking is repeated many times with every one of them moved at random; the stability of an analog is the
share of rankings in which it is among the first N. Constants move within their standard errors, and
together: a group's constant is the same in all analogs that bear it at a position of the same kind.
"""

from __future__ import annotations

from collections.abc import Hashable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import FloatArray
from tuner.search.probability import LEAST_SD, normal_share
from tuner.search.tables import Goal

DRAWS = 400
"""Rankings: the standard error of a share near one half is then 0.025."""

WEIGHT_SPREAD = 0.3
TOLERANCE_SPREAD = 0.2
"""Standard deviation of the natural logarithm of the costs and of the tolerance; conventions, no source."""


@dataclass(frozen=True)
class Constant:
    """One uncertain constant that an analog's pKa contains: what it is, and its standard error (pKa
    units).
    """

    key: Hashable
    sd: float


@dataclass(frozen=True)
class Pool:
    """Analogs to rank, arrays of shape (n,): pKa', its error, steps, molar mass (g/mol), what flags and the
    user's own objective cost (in hit probability), and the constants of each.
    """

    pka: FloatArray
    sd: FloatArray
    steps: FloatArray
    mass: FloatArray
    other_costs: FloatArray
    constants: Sequence[Sequence[Constant]]


def stability(pool: Pool, goal: Goal, top_n: int, seed: int, draws: int = DRAWS) -> FloatArray:
    """Share of rankings that keep each analog among the first `top_n`, shape (n,), 0 to 1.

    The same seed gives the same shares. An analog counts as kept where its score is at least the N-th best.
    """
    rng = np.random.default_rng([seed, 71])
    n = len(pool.pka)
    if n == 0:
        return np.zeros(0)
    shifts = _shifts(pool, rng, draws)
    weights = np.exp(rng.normal(0.0, WEIGHT_SPREAD, (draws, 2)))
    tolerance = goal.tolerance * np.exp(rng.normal(0.0, TOLERANCE_SPREAD, (draws, 1)))
    offset = pool.pka[None, :] + shifts - goal.target_ph
    sd = np.maximum(pool.sd, LEAST_SD)
    hit = normal_share((-tolerance - offset) / sd, (tolerance - offset) / sd)
    costs = weights[:, :1] * goal.step_costs * pool.steps
    costs = costs + weights[:, 1:] * goal.hundred_g_mol_costs * pool.mass / 100.0 + pool.other_costs
    score = hit - costs
    place = min(top_n, n) - 1
    floor = -np.partition(-score, place, axis=1)[:, place]
    return np.asarray((score >= floor[:, None]).mean(axis=0), dtype=np.float64)


def _shifts(pool: Pool, rng: np.random.Generator, draws: int) -> FloatArray:
    """Errors of the predicted pKa's, shape (draws, n): one draw per constant, shared by all analogs that
    contain it.
    """
    keys: dict[Hashable, int] = {}
    for listed in pool.constants:
        for constant in listed:
            keys.setdefault(constant.key, len(keys))
    lever: NDArray[np.float64] = np.zeros((len(keys), len(pool.pka)))
    for row, listed in enumerate(pool.constants):
        for constant in listed:
            lever[keys[constant.key], row] += constant.sd
    return np.asarray(rng.normal(size=(draws, len(keys))) @ lever, dtype=np.float64)
