"""What does a space look like in a seeded sample: the backdrop of the trade-off picture, and what limits
remove where nothing is left?
"""

from __future__ import annotations

import numpy as np

from tuner.search.bounds import seed_rows
from tuner.search.counting import within_limits
from tuner.search.spans import budget_of
from tuner.search.symmetry import canonical_form
from tuner.search.tables import Int64, SpaceTables

EVERYTHING_UP_TO = 20_000
"""Spaces up to this size are listed whole."""


def sample_rows(tables: SpaceTables, n: int, seed: int) -> Int64:
    """Up to n different analogs of a space in canonical form, shape (m, positions), sorted.

    Small spaces are listed whole. In larger ones the number of groups is drawn evenly between none and as
    many as the limits allow, then their positions and choices, so that lightly substituted analogs are well
    represented.
    """
    if tables.size <= max(EVERYTHING_UP_TO, n):
        every = np.stack(np.unravel_index(np.arange(tables.size), tables.shape), axis=1).astype(np.int64)
        rows = every
    else:
        rows = _drawn(tables, n, np.random.default_rng([seed, tables.rank, 5]))
    canonical = np.unique(canonical_form(rows, tables.symmetry), axis=0)
    if tables.size <= EVERYTHING_UP_TO and len(canonical) <= n:
        return canonical
    rng = np.random.default_rng([seed, tables.rank, 7])
    chosen = rng.permutation(len(canonical))[:n]
    return canonical[np.sort(chosen)]


def _drawn(tables: SpaceTables, n: int, rng: np.random.Generator) -> Int64:
    """Random patterns, three times as many as asked for, those with few groups added."""
    positions = len(tables.shape)
    most = max(0, budget_of(tables.shape, tables.limits).high)
    count = 3 * n
    wanted = rng.integers(0, most + 1, count)
    order = np.argsort(rng.random((count, positions)), axis=1)
    filled = order < wanted[:, None]
    shape = np.array(tables.shape, dtype=np.int64)
    drawn = (rng.random((count, positions)) * shape).astype(np.int64)
    rows = np.where(filled, drawn, 0)
    few = seed_rows(tables.shape, n)
    return np.concatenate((rows, few[rng.permutation(len(few))[:n]]))


def admissible_share(tables: SpaceTables, rows: Int64) -> float:
    """Share of these rows that keep the counting limits (0 where there are none)."""
    return float(np.mean(within_limits(rows, tables.limits))) if len(rows) else 0.0
