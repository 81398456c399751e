"""Counts of patterns and molecules, against listing them all."""

from __future__ import annotations

import numpy as np
import pytest

from tests.search.synthetic import every_row, random_group, random_limits, random_steps
from tuner.search.counting import count_by_steps, count_patterns, within_limits
from tuner.search.space import CountLimit
from tuner.search.symmetry import canonical_form, cycles, is_canonical


@pytest.mark.parametrize("seed", range(60))
def test_counts_equal_a_list_of_all_patterns(seed):
    rng = np.random.default_rng(seed)
    n = int(rng.integers(1, 5))
    group = random_group(rng, n)
    orbit = [min(p[k] for p in group) for k in range(n)]
    sizes = {o: int(rng.integers(1, 5)) for o in sorted(set(orbit))}
    shape = tuple(sizes[o] for o in orbit)
    limits = random_limits(rng, shape, group)
    rows = every_row(shape)
    inside = rows[within_limits(rows, limits)]
    distinct = {min(tuple(int(row[q]) for q in g) for g in group) for row in inside}
    assert count_patterns(shape, limits, group) == (len(inside), len(distinct))
    assert int(is_canonical(inside, group).sum()) == len(distinct)
    assert {tuple(row) for row in canonical_form(inside, group).tolist()} == distinct


@pytest.mark.parametrize("seed", range(20))
def test_a_prefix_is_refused_only_if_all_its_completions_are(seed):
    rng = np.random.default_rng(seed)
    group = random_group(rng, 4)
    rows = every_row((3,) * 4)
    canonical = {tuple(row) for row in rows[is_canonical(rows, group)].tolist()}
    for depth in range(1, 4):
        prefixes = every_row((3,) * depth)
        kept = is_canonical(prefixes, group)
        for prefix, keep in zip(prefixes.tolist(), kept, strict=True):
            alive = any(row[:depth] == tuple(prefix) for row in canonical)
            assert keep or not alive


def test_numbers_beyond_machine_words_stay_exact():
    before, after = count_patterns((1000,) * 9, (), (tuple(range(9)), tuple(reversed(range(9)))))
    assert before == 10**27
    assert after == (10**27 + 10**15) // 2


def test_exactly_one_handle_out_of_two_positions():
    weights = (np.array([0, 0, 1]), np.array([0, 0, 1]))
    limit = CountLimit("exactly one handle", weights, 1, 1)
    assert count_patterns((3, 3), (limit,), ((0, 1), (1, 0))) == (4, 2)


@pytest.mark.parametrize("seed", range(20))
def test_patterns_by_steps_equal_a_list(seed):
    rng = np.random.default_rng(seed)
    shape = tuple(int(n) for n in rng.integers(1, 6, int(rng.integers(1, 4))))
    table = random_steps(rng, shape, (tuple(range(len(shape))),))
    found = table.at(every_row(shape))
    listed = {int(s): int((found == s).sum()) for s in np.unique(found)}
    assert count_by_steps(table) == (listed if len(table.ways) == 1 else {})


def test_cycles_of_a_rotation():
    assert cycles((1, 2, 0, 3)) == [(0, 1, 2), (3,)]
