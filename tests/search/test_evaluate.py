"""Rows and blocks give the same numbers as plain sums over the look-up tables."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from tests.search.synthetic import every_row, random_goal, random_tables
from tuner.acidity.tables import PairwiseSum
from tuner.errors import SearchError
from tuner.search.blocks import BlockPlan, inner_start
from tuner.search.evaluate import evaluate_rows, removed_by
from tuner.search.tables import MASS_UNIT, PKA_UNIT, Goal, fixed_sum


@pytest.mark.parametrize("seed", range(40))
def test_blocks_equal_rows(seed):
    rng = np.random.default_rng(seed)
    tables, goal = random_tables(rng, conditions=seed % 2 == 0), random_goal(rng)
    plan = BlockPlan(tables, int(rng.choice([4, 30, 2**20])))
    rows = evaluate_rows(tables, goal, every_row(tables.shape))
    parts = [plan.evaluate(prefix, goal) for prefix in plan.prefixes(np.arange(plan.count)).tolist()]
    for name, values in (
        ("pka", rows.pka_values), ("sd", rows.sd), ("hit", rows.hit), ("steps", rows.steps),
        ("mass", rows.mass_values), ("offset", rows.offset_values),
    ):  # fmt: skip
        whole = np.concatenate([getattr(part, name).ravel() for part in parts])
        assert np.array_equal(whole, values), name


@pytest.mark.parametrize("seed", range(20))
def test_whole_numbers_equal_the_float_tables_to_their_unit(seed):
    rng = np.random.default_rng(seed)
    shape = tuple(int(n) for n in rng.integers(1, 5, 3))
    unary = tuple(rng.normal(0, 1, n) for n in shape)
    pair = {(p, q): rng.normal(0, 0.3, (shape[p], shape[q])) for p in range(3) for q in range(p + 1, 3)}
    exact = PairwiseSum(7.0, unary, pair)
    rows = every_row(shape)
    found = fixed_sum(exact, PKA_UNIT).at(rows) * PKA_UNIT
    assert np.allclose(found, exact.at(rows), atol=7 * PKA_UNIT / 2, rtol=0)  # seven roundings of half a unit


def test_score_is_hit_probability_less_what_steps_and_mass_cost():
    goal = Goal(7.0, 0.2, step_costs=0.1, hundred_g_mol_costs=0.04, reference_mass_g_mol=100.0)
    costs = goal.costs(np.array([2]), np.array([round(150.0 / MASS_UNIT)]), np.array([0]))
    assert costs[0] == pytest.approx(2 * 0.1 + 0.5 * 0.04, abs=1e-12)  # worked by hand


def test_tables_that_are_no_numbers_are_refused():
    with pytest.raises(SearchError, match="not a number"):
        fixed_sum(PairwiseSum(0.0, (np.array([0.0, np.nan]),), {}), PKA_UNIT)


def test_sums_that_could_overflow_are_refused():
    with pytest.raises(SearchError, match="too large"):
        fixed_sum(PairwiseSum(0.0, (np.array([0.0, 1e6]),), {}), PKA_UNIT)


def test_inner_positions_fill_a_block_but_are_never_none():
    assert inner_start((10, 10, 10), 100) == 1
    assert inner_start((10, 5000), 100) == 1
    assert inner_start((10, 10), 1000) == 0


def test_removed_by_counts_each_limit_alone():
    tables = random_tables(np.random.default_rng(5))
    goal = replace(random_goal(np.random.default_rng(5)), max_steps=1)
    rows = every_row(tables.shape)
    steps = tables.steps.at(rows)
    removed = removed_by(tables, goal, rows)
    assert removed["no route from the shelf"] == int((steps == 255).sum())
    assert removed["more than 1 steps"] == int(((steps > 1) & (steps < 255)).sum())


def test_evaluation_leaves_its_arguments_alone():
    tables, goal = random_tables(np.random.default_rng(1)), random_goal(np.random.default_rng(1))
    rows = every_row(tables.shape)
    rows.setflags(write=False)
    before = rows.copy()
    evaluate_rows(tables, goal, rows)
    assert np.array_equal(rows, before)
