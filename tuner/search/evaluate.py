"""What are pKa', error, hit probability, steps, mass and score of analogs, given as rows of choices?"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import FloatArray, IntArray
from tuner.search.counting import within_limits
from tuner.search.probability import LEAST_SD, Interval, hit_probability
from tuner.search.rows import Analogs
from tuner.search.symmetry import is_canonical
from tuner.search.tables import PKA_UNIT, Condition, Goal, Int64, SpaceTables, in_ph
from tuner.synthesis.records import NO_ROUTE

Mask = NDArray[np.bool_]


def evaluate_rows(tables: SpaceTables, goal: Goal, index: IntArray) -> Analogs:
    """Evaluate analogs; no limit is applied.

    Parameters
    ----------
    tables : SpaceTables
    goal : Goal
    index : array of shape (n_analogs, n_positions)
        Choices per position.

    Returns
    -------
    Analogs
        One row per row of `index`, in its order. `offset` is the distance from the target, or the largest
        distance where the dye must switch in more than one medium.
    """
    pka = tables.pka.at(index)
    sd = standard_error(tables.variance.at(index), tables.variance.unit)
    offset = np.abs(pka - goal.target)
    intervals = [Interval(in_ph(pka), sd, goal.target_ph - goal.tolerance, goal.target_ph + goal.tolerance)]
    for condition in tables.conditions:
        interval, there = _interval(condition, index)
        intervals.append(interval)
        if condition.centre is not None:
            offset = np.maximum(offset, np.abs(there - condition.centre))
    hit = hit_probability(intervals)
    steps = tables.steps.at(index).astype(np.int64)
    mass, flags = tables.mass.at(index), tables.flags.at(index)
    return Analogs(
        core=np.full(len(index), tables.rank, dtype=np.int32),
        index=index.astype(np.int16),
        pka=pka,
        sd=sd,
        offset=offset,
        hit=hit,
        steps=steps,
        mass=mass,
        flags=flags,
        score=hit - goal.costs(steps, mass, flags),
    )


def standard_error(variance: IntArray, unit: float) -> FloatArray:
    """Standard error (pKa units) from whole numbers of variance."""
    return np.asarray(np.sqrt(np.maximum(variance * unit, LEAST_SD**2)), dtype=np.float64)


def _interval(condition: Condition, index: IntArray) -> tuple[Interval, Int64]:
    """The interval of a further target for these analogs, and their whole-number pKa' there."""
    pka = condition.pka.at(index)
    sd = standard_error(condition.variance.at(index), condition.variance.unit)
    return Interval(in_ph(pka), sd, condition.low * PKA_UNIT, condition.high * PKA_UNIT), pka


def keeps_conditions(tables: SpaceTables, index: IntArray) -> Mask:
    """True where the point estimate meets every further target of the brief."""
    good = np.ones(len(index), dtype=np.bool_)
    for condition in tables.conditions:
        pka = condition.pka.at(index)
        good &= (pka >= condition.low) & (pka <= condition.high)
    return good


def admitted(tables: SpaceTables, goal: Goal, rows: Analogs) -> Mask:
    """True for analogs that are canonical and within every limit that the tables can tell."""
    index = rows.index[:, : len(tables.shape)]
    good = (rows.steps <= goal.max_steps) & (rows.steps < NO_ROUTE) & (rows.mass <= goal.mass_ceiling)
    good &= rows.sd <= goal.max_pka_sd
    good &= is_canonical(index, tables.symmetry) & within_limits(index, tables.limits)
    return good & keeps_conditions(tables, index)


def evaluate_admitted(tables: SpaceTables, goal: Goal, index: IntArray) -> Analogs:
    """Evaluate analogs and keep those that are canonical and within the limits."""
    rows = evaluate_rows(tables, goal, index)
    return rows.take(admitted(tables, goal, rows))


def removed_by(tables: SpaceTables, goal: Goal, index: IntArray) -> dict[str, int]:
    """How many of these analogs each limit alone refuses; names of the limits as shown to the user."""
    rows = evaluate_rows(tables, goal, index)
    refused = {
        "no route from the shelf": rows.steps == NO_ROUTE,
        f"more than {goal.max_steps} steps": (rows.steps > goal.max_steps) & (rows.steps < NO_ROUTE),
        f"molar mass above {goal.max_molar_mass_g_mol:g} g/mol": rows.mass > goal.mass_ceiling,
        f"standard error above {goal.max_pka_sd:g}": rows.sd > goal.max_pka_sd,
    }
    for limit in tables.limits:
        refused[limit.name] = ~within_limits(index, (limit,))
    for condition in tables.conditions:
        pka = condition.pka.at(index)
        refused[condition.name] = (pka < condition.low) | (pka > condition.high)
    return {name: int(np.count_nonzero(mask)) for name, mask in refused.items()}
