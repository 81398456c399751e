"""The streamed search equals going through every analog, on random small spaces with everything that can
occur.
"""

from __future__ import annotations

import numpy as np
import pytest

from tests.search.synthetic import every_row, random_goal, random_tables
from tuner.search.evaluate import evaluate_admitted
from tuner.search.exact import Search, search_exact
from tuner.search.rows import join
from tuner.search.tables import PKA_UNIT

HUNDREDTH = round(0.01 / PKA_UNIT)
TENTH = round(0.1 / PKA_UNIT)


def all_pairs_front(rows, resolution):
    """Non-dominated points by comparing every analog with every other; equal points are shown once, by the
    order rule.
    """
    points = np.stack([rows.offset // resolution, rows.steps, rows.mass], axis=1)
    kept = {}
    for i, point in enumerate(points):
        worse = np.all(points <= point, axis=1) & np.any(points < point, axis=1)
        if not worse.any():
            label = (int(rows.offset[i]), *rows.key(i))
            kept[tuple(point)] = min(kept.get(tuple(point), label), label)
    return {label[1:] for label in kept.values()}


def sorted_best(rows, n):
    """Keys of the n best by a plain sort."""
    listed = sorted(range(len(rows)), key=lambda i: (-rows.score[i], rows.key(i)))
    return [rows.key(i) for i in listed[:n]]


@pytest.mark.parametrize("first", range(0, 240, 24))
def test_streamed_search_equals_brute_force(first):
    for seed in range(first, first + 24):
        rng = np.random.default_rng(seed)
        count = int(rng.integers(1, 3))
        spaces = tuple(random_tables(rng, rank, conditions=seed % 3 == 0) for rank in range(count))
        goal = random_goal(rng)
        resolution = int(rng.choice([1, HUNDREDTH, TENTH]))
        best_n = int(rng.integers(1, 20))
        rows = join([evaluate_admitted(t, goal, every_row(t.shape)) for t in spaces])
        largest = int(rng.choice([4, 50, 2**20]))
        search = Search(spaces, goal, best_n, resolution, largest_block=largest)
        found = search_exact(search, workers=int(rng.integers(1, 3)))
        assert {found.front.key(i) for i in range(len(found.front))} == all_pairs_front(rows, resolution), (
            seed
        )
        assert [found.best.key(i) for i in range(len(found.best))] == sorted_best(rows, best_n), seed
