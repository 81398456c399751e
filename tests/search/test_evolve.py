"""Evolution comes close to the exact front, is reproducible, keeps limits and sets failures aside."""

from __future__ import annotations

import numpy as np
import pytest

from tests.search.synthetic import large_tables, random_goal, random_tables
from tuner.search.evaluate import admitted
from tuner.search.evolve import Evolution, search_evolutionary
from tuner.search.exact import Search, search_exact
from tuner.search.hypervolume import Box, hypervolume, usual_box
from tuner.search.tables import Goal

TABLES = large_tables(4, 30)
GOAL = Goal(7.5, 0.2, max_steps=5)
BOX = usual_box(GOAL, 139.0, 450.0)


def keys(rows):
    return [rows.key(n) for n in range(len(rows))]


def test_comes_close_to_the_exact_hypervolume_with_a_small_share_of_the_evaluations():
    exact = search_exact(Search((TABLES,), GOAL, 1))
    found = search_evolutionary((TABLES,), GOAL, BOX, evolution=Evolution(seed=2))
    best = hypervolume(exact.front, None, BOX)
    assert 0.99 * best <= found.hypervolumes[-1] <= best + 1e-12
    assert found.evaluations < 0.02 * TABLES.size
    assert list(found.hypervolumes) == sorted(found.hypervolumes)


def test_the_same_seed_gives_the_same_front_and_no_global_state_is_touched():
    plan = Evolution(population=60, generations=20, seed=5)
    np.random.seed(11)
    before = np.random.get_state()[1].tolist()
    first = search_evolutionary((TABLES,), GOAL, BOX, evolution=plan)
    assert np.random.get_state()[1].tolist() == before
    assert keys(first.front) == keys(search_evolutionary((TABLES,), GOAL, BOX, evolution=plan).front)


@pytest.mark.parametrize("seed", range(5))
def test_everything_found_is_admissible(seed):
    rng = np.random.default_rng(seed)
    spaces = (random_tables(rng, 0, conditions=True), random_tables(rng, 1))
    goal = random_goal(rng)
    box = usual_box(goal, 50.0, 400.0)
    found = search_evolutionary(spaces, goal, box, evolution=Evolution(40, 10, seed=seed))
    for tables in spaces:
        mine = found.front.take(found.front.core == tables.rank)
        assert not len(mine) or admitted(tables, goal, mine).all()


def test_seeding_with_the_exact_front_starts_at_its_hypervolume():
    exact = search_exact(Search((TABLES,), GOAL, 1))
    plan = Evolution(population=100, generations=2, seed=1)
    found = search_evolutionary((TABLES,), GOAL, BOX, evolution=plan, seeds=exact.front)
    assert found.hypervolumes[0] == pytest.approx(hypervolume(exact.front, None, BOX), rel=1e-12)  # same set


def test_a_whole_molecule_objective_that_fails_sets_the_analog_aside():
    def whole(rows):
        bad = rows.index[:, 1] % 2 == 1
        return np.where(bad, np.nan, rows.mass_values / 100.0)[:, None]

    box = Box(np.append(BOX.low, 0.0), np.append(BOX.high, 5.0))
    found = search_evolutionary((TABLES,), GOAL, box, evolution=Evolution(60, 15, seed=1), whole=whole)
    assert len(found.front)
    assert (found.front.index[:, 1] % 2 == 0).all()
    assert np.isfinite(found.extra).all()
