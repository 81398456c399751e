"""How many analogs must be looked at as molecules before the list is full, and sure?"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from tuner.acidity.tables import FloatArray
from tuner.brief.records import Brief
from tuner.search.evolve import Evolution, search_evolutionary
from tuner.search.finalists import Finalist, Judge
from tuner.search.found import Found
from tuner.search.hypervolume import Box
from tuner.search.known import known_analogs
from tuner.search.molecules import smiles_of
from tuner.search.rows import Analogs, join, order_keys
from tuner.search.stages import Stages
from tuner.search.tables import Goal, SpaceTables

MOST_POOLED = 6000
"""Analogs that are looked at as molecules at most: about a quarter of a minute."""

DOOR_SLACK = 0.02
"""Scores of the look-up tables and of the molecule door may differ by this much before the pool is
widened.
"""

DIVERSE_POOL = 8
"""A diverse list of n is chosen from n times as many."""

MOLECULES = "building molecules"
JUDGED_AT_ONCE = 50

Searcher = Callable[[int], Found]
"""Runs the search for a number of rows of best score."""


@dataclass(frozen=True)
class Pooled:
    """What the search found, the finalists among it (best first), and what to say about the pooling."""

    found: Found
    finalists: list[Finalist]
    pooled: int
    evolved: int
    notes: tuple[str, ...]


def gather(
    brief: Brief, spaces: Sequence[SpaceTables], goal: Goal, judge: Judge, search: Searcher, stages: Stages
) -> Pooled:
    """Search, look at the best as molecules, and widen the search until the list is full and proven.

    The list is proven when its last row scores at least as high as anything that was not looked at could by
    the tables: what is decided on the molecule (penalised flags, further groups that ionise) lowers a
    score.
    """
    rows = brief.ranking.rows
    wanted = rows * DIVERSE_POOL if brief.ranking.diverse else rows
    n = min(MOST_POOLED, wanted + 50)
    evolved = no_rows = 0
    extra = [known_analogs(judge.rooms.space.spaces, spaces, goal, judge.rooms.measured)]
    while True:
        found = search(n)
        if len(extra) == 1 and _needs_evolution(brief):
            extra.append(_evolved(brief, spaces, goal, judge, found, stages))
            evolved = len(extra[1])
        pool = _distinct(join((found.best, found.front, *extra)))
        finalists = _judged(judge, pool, stages)
        everything = len(found.best) < n
        full = len(finalists) >= min(wanted, rows) and _proven(finalists, rows, found)
        if everything or full or n >= MOST_POOLED:
            break
        n = min(MOST_POOLED, 4 * n)
    no_rows = len(pool)
    notes = [] if everything or full else [_not_filled(finalists, rows)]
    return Pooled(found, finalists, no_rows, evolved, tuple(notes))


def _proven(finalists: Sequence[Finalist], rows: int, found: Found) -> bool:
    """Whether nothing beyond the pool can score above the last row, as far as the tables go."""
    last = min((one.score for one in finalists[:rows]), default=-np.inf)
    costly = any(one.other_costs > 0.0 for one in finalists[: 2 * rows])
    return last >= found.certificate.bound - (0.0 if costly else DOOR_SLACK)


def _not_filled(finalists: Sequence[Finalist], rows: int) -> str:
    """The note of a list that could not be filled or proven."""
    if len(finalists) < rows:
        return (
            f"only {len(finalists)} of the {MOST_POOLED:,} best analogs pass the limits on molecules "
            f"({rows} were asked for)"
        )
    return f"flags and the user's own objective were weighed for the {MOST_POOLED:,} best analogs only"


def _needs_evolution(brief: Brief) -> bool:
    """Whether an objective needs the whole molecule, or evolution is asked for."""
    return bool(brief.ranking.user_objective) or brief.search.method == "evolutionary"


def _judged(judge: Judge, pool: Analogs, stages: Stages) -> list[Finalist]:
    """The finalists of a pool, with progress."""
    for start in range(0, len(pool), JUDGED_AT_ONCE):
        stages.report(MOLECULES, start, len(pool))
        for row in range(start, min(len(pool), start + JUDGED_AT_ONCE)):
            judge.judge(pool, row)
    stages.report(MOLECULES, len(pool), len(pool))
    return judge.finalists(pool)


def _distinct(rows: Analogs) -> Analogs:
    """Every analog once, best score first, then in the order of cores and choices."""
    order = np.lexsort((*order_keys(rows), -rows.score))
    seen: set[tuple[int, ...]] = set()
    kept = []
    for row in order:
        key = rows.key(int(row))
        if key not in seen:
            seen.add(key)
            kept.append(row)
    return rows.take(np.array(kept, dtype=np.int64))


def _evolved(
    brief: Brief, spaces: Sequence[SpaceTables], goal: Goal, judge: Judge, found: Found, stages: Stages
) -> Analogs:
    """What evolution adds: the non-dominated analogs, the user's own objective included where there is
    one.
    """
    seeds = _distinct(join((found.front, found.best.take(np.arange(min(100, len(found.best)))))))
    user = judge.user
    low, high = _box(seeds, goal)

    def whole(rows: Analogs) -> FloatArray:
        if user is None:
            return np.zeros((len(rows), 0))
        space = judge.rooms.space.spaces
        return np.array(
            [[user(smiles_of(space[k[0]], k[1:]))] for k in (rows.key(n) for n in range(len(rows)))]
        )

    if user is not None:
        values = whole(seeds)
        values = values[np.isfinite(values)] if len(values) else values
        least, most = (float(values.min()), float(values.max())) if values.size else (0.0, 1.0)
        spread = max(most - least, 1e-9)
        low, high = np.append(low, least - spread), np.append(high, most + 0.1 * spread)
    result = search_evolutionary(
        spaces,
        goal,
        Box(low, high),
        evolution=Evolution(seed=brief.search.seed),
        whole=whole if user is not None else None,
        seeds=seeds,
        progress=stages.report,
    )
    return result.front


def _box(seeds: Analogs, goal: Goal) -> tuple[FloatArray, FloatArray]:
    """Ideal and reference point of offset, steps and mass."""
    mass = seeds.mass_values if len(seeds) else np.array([goal.reference_mass_g_mol])
    low = np.array([0.0, 0.0, float(mass.min())])
    high = np.array([2.0 * goal.tolerance, goal.max_steps + 1.0, float(mass.max()) + 100.0])
    return low, high
