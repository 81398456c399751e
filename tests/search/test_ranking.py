"""Layers, knee, diverse lists and stability, on cases that can be checked by eye."""

from __future__ import annotations

import numpy as np
import pytest

from tuner.search.ranking import composition, diverse_order, knee, layers, likeness
from tuner.search.stability import Constant, Pool, stability
from tuner.search.tables import Goal


def test_layers_peel_one_front_after_the_other():
    offset = np.array([0, 1, 2, 2, 3])
    steps = np.array([1, 0, 0, 1, 2])
    mass = np.array([5, 5, 5, 5, 5])
    assert layers(offset, steps, mass).tolist() == [1, 1, 2, 3, 4]


def test_equal_points_share_a_layer():
    assert layers(np.array([1, 1]), np.array([0, 0]), np.array([3, 3])).tolist() == [1, 1]


def test_knee_is_the_balanced_point_and_ignores_what_nobody_would_make():
    offset = np.array([0.00, 0.05, 0.20, 3.0])
    steps = np.array([4.0, 1.0, 0.0, 0.0])
    mass = np.array([300.0, 180.0, 150.0, 110.0])
    assert knee(offset, steps, mass, 0.2) == 1


def test_no_knee_where_everything_is_far():
    assert knee(np.array([3.0]), np.array([0.0]), np.array([100.0]), 0.2) == -1


def test_likeness_counts_shared_groups():
    counts = composition([["Cl", "Cl", "Me"], ["Cl", "Me"], ["OMe"], []])
    assert likeness(counts, 0).tolist() == pytest.approx([1.0, 2 / 3, 0.0, 0.0])
    assert likeness(counts, 3).tolist() == pytest.approx([0.0, 0.0, 0.0, 1.0])


def test_a_diverse_list_does_not_hold_forty_versions_of_one_compound():
    groups = [["core", "Cl"]] * 40 + [["core", "Br"], ["core", "NO2"], ["core", "CN"]]
    scores = np.concatenate((np.linspace(0.80, 0.79, 40), [0.75, 0.74, 0.73]))
    counts = composition(groups)
    assert diverse_order(scores, counts, 4).tolist() == [0, 40, 41, 42]
    assert diverse_order(scores, counts, 4, worth=0.0).tolist() == [0, 1, 2, 3]


def test_a_diverse_list_keeps_a_much_better_analog():
    counts = composition([["Cl"], ["Cl"], ["Br"]])
    assert diverse_order(np.array([0.9, 0.8, 0.3]), counts, 3).tolist() == [0, 1, 2]


def pool(pka, sd, steps, constants):
    n = len(pka)
    zero = np.zeros(n)
    return Pool(np.array(pka), np.array(sd), np.array(steps, float), zero + 150.0, zero, constants)


def test_stability_of_a_clear_winner_a_loser_and_a_pair():
    constants = [[Constant(("core", "a"), 0.05)]] * 4
    many = pool([7.0, 7.19, 6.8, 9.0], [0.1] * 4, [0, 1, 1, 1], constants)
    shares = stability(many, Goal(7.0, 0.2), 2, seed=1)
    assert shares[0] == 1.0
    assert shares[3] == 0.0
    assert shares[1] > shares[2] > 0.0


def test_the_same_seed_gives_the_same_shares():
    constants = [[Constant(("Cl", "meta"), 0.1)], [Constant(("Br", "meta"), 0.1)]]
    two = pool([7.1, 7.15], [0.15, 0.15], [1, 1], constants)
    first, again = (stability(two, Goal(7.0, 0.2), 1, seed=3) for _ in range(2))
    assert np.array_equal(first, again)
    assert not np.array_equal(first, stability(two, Goal(7.0, 0.2), 1, seed=4))


def test_a_shared_constant_moves_both_analogs_together():
    """Two analogs with one constant keep their order; with a constant each they sometimes change places."""
    shared = [[Constant("Cl", 0.3)], [Constant("Cl", 0.3)]]
    own = [[Constant("Cl", 0.3)], [Constant("Br", 0.3)]]
    goal = Goal(7.0, 0.2, step_costs=0.0)
    together = stability(pool([7.5, 7.52], [0.2, 0.2], [0, 0], shared), goal, 1, seed=1)
    apart = stability(pool([7.5, 7.52], [0.2, 0.2], [0, 0], own), goal, 1, seed=1)
    assert together[0] > 0.9  # they change places only where the shift carries both across the target
    assert apart[1] > 0.3
