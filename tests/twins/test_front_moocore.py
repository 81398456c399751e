"""Fronts, layers and hypervolumes against a general library for multi-objective sets."""

from __future__ import annotations

import numpy as np
import pytest

from tests.search.synthetic import every_row, random_goal, random_tables
from tuner.search.evaluate import evaluate_admitted
from tuner.search.exact import Search, search_exact
from tuner.search.hypervolume import Box, hypervolume
from tuner.search.ranking import layers
from tuner.search.rows import join
from tuner.search.standing import front_rows

moocore = pytest.importorskip("moocore")


def points(rows):
    return np.stack([rows.offset, rows.steps, rows.mass], axis=1).astype(float)


@pytest.mark.parametrize("first", range(0, 60, 20))
def test_searched_front_holds_the_library_s_non_dominated_points(first):
    for seed in range(first, first + 20):
        rng = np.random.default_rng(20_000 + seed)
        spaces = (random_tables(rng, 0), random_tables(rng, 1))
        goal = random_goal(rng)
        rows = join([evaluate_admitted(t, goal, every_row(t.shape)) for t in spaces])
        found = search_exact(Search(spaces, goal, 5), workers=1)
        if not len(rows):
            assert len(found.front) == 0
            continue
        every = points(rows)
        expected = {tuple(p) for p in every[moocore.is_nondominated(every)]}
        assert {tuple(p) for p in points(found.front)} == expected


@pytest.mark.parametrize("seed", range(20))
def test_front_and_layers_of_random_points(seed):
    rng = np.random.default_rng(seed)
    values = rng.integers(0, 8, (60, 3))
    front = front_rows(*values.T, np.arange(len(values)))
    expected = moocore.filter_dominated(np.unique(values, axis=0).astype(float))
    assert {tuple(p) for p in values[front]} == {tuple(p) for p in expected}
    distinct = np.unique(values, axis=0)
    ranks = moocore.pareto_rank(distinct.astype(float))
    ours = layers(*distinct.T)
    assert np.array_equal(ours, ranks + 1 - ranks.min())


@pytest.mark.parametrize("seed", range(5))
def test_hypervolume(seed):
    rng = np.random.default_rng(seed)
    spaces = (random_tables(rng, 0), random_tables(rng, 1), random_tables(rng, 2))
    rows = join([evaluate_admitted(t, random_goal(rng), every_row(t.shape)) for t in spaces])
    box = Box(np.array([0.0, 0.0, rows.mass_values.min()]), np.array([2.0, 6.0, 400.0]))
    values = np.stack([rows.offset_values, rows.steps, rows.mass_values], axis=1)
    scaled = (values - box.low) / (box.high - box.low)
    expected = moocore.hypervolume(scaled[np.all(scaled < 1, axis=1)], ref=np.ones(3))
    assert hypervolume(rows, None, box) == pytest.approx(expected, rel=1e-9)  # two sums in double precision
