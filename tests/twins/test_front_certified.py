"""Branch and bound equals going through every analog, on random small spaces with everything that can
occur.
"""

from __future__ import annotations

import numpy as np
import pytest

from tests.search.synthetic import every_row, large_tables, random_goal, random_tables
from tests.twins.test_front_exact import HUNDREDTH, TENTH, all_pairs_front, sorted_best
from tuner.errors import SearchError
from tuner.search.certified import search_certified
from tuner.search.evaluate import evaluate_admitted
from tuner.search.exact import Search, search_exact
from tuner.search.rows import join
from tuner.search.tables import Goal


def keys(rows):
    return [rows.key(i) for i in range(len(rows))]


@pytest.mark.parametrize("first", range(0, 240, 24))
def test_branch_and_bound_equals_brute_force(first):
    for seed in range(first, first + 24):
        rng = np.random.default_rng(10_000 + seed)
        count = int(rng.integers(1, 3))
        spaces = tuple(random_tables(rng, rank, conditions=seed % 3 == 0) for rank in range(count))
        goal = random_goal(rng)
        resolution = int(rng.choice([1, HUNDREDTH, TENTH]))
        best_n = int(rng.integers(1, 20))
        rows = join([evaluate_admitted(t, goal, every_row(t.shape)) for t in spaces])
        found = search_certified(Search(spaces, goal, best_n, resolution), workers=int(rng.integers(1, 3)))
        assert set(keys(found.front)) == all_pairs_front(rows, resolution), seed
        assert keys(found.best) == sorted_best(rows, best_n), seed


def test_both_searches_agree_on_a_larger_space_and_the_bound_looks_at_few():
    tables = large_tables(4, 40)
    search = Search((tables,), Goal(7.5, 0.2, max_steps=5), 100, HUNDREDTH)
    streamed, bounded = search_exact(search), search_certified(search)
    assert keys(streamed.front) == keys(bounded.front)
    assert keys(streamed.best) == keys(bounded.best)
    assert bounded.certificate.visited < tables.size / 50
    assert bounded.certificate.covered == tables.size


def test_a_search_that_would_not_end_says_what_to_tighten():
    search = Search((large_tables(6, 100),), Goal(6.0, 0.2), 200, HUNDREDTH)
    with pytest.raises(SearchError, match="100,000 patterns open; limit the number of substituents"):
        search_certified(search, most_prefixes=100_000)
