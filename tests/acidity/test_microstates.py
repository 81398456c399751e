"""Several ionising sites: macroscopic constants, shares of states, the pH of half ionisation."""

from __future__ import annotations

from itertools import permutations
from math import log10

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from tuner.acidity.microstates import Microstates, all_states, from_pairs, from_table

NUMERIC = 1e-9


def brute_alpha(states: Microstates, site: int, ph: float) -> float:
    """Ionised share of a site by plain powers, where they do not overflow."""
    weights = [
        10.0 ** (b - ph * k) for b, k in zip(states.log_beta, states.protonated.sum(axis=1), strict=True)
    ]
    lost = [w for w, s in zip(weights, states.protonated, strict=True) if s[site] == 0]
    return sum(lost) / sum(weights)


def test_a_single_site_is_a_single_constant() -> None:
    states = from_pairs(np.array([8.1]), np.zeros((1, 1)))
    assert states.macroscopic_pkas() == pytest.approx([8.1])
    assert states.transition_ph([0]) == pytest.approx(8.1, abs=NUMERIC)


@pytest.mark.parametrize("n", [2, 3, 4])
def test_statistical_factors_of_equal_independent_sites(n: int) -> None:
    # for n equal independent sites K_j = K (n - j + 1) / j (Adair), worked from the binomial coefficients
    pka = from_pairs(np.full(n, 6.0), np.zeros((n, n))).macroscopic_pkas()
    expected = [6.0 - log10((n - j + 1) / j) for j in range(1, n + 1)]
    np.testing.assert_allclose(pka, expected, atol=NUMERIC)


def test_far_apart_sites_keep_their_own_constants() -> None:
    states = from_pairs(np.array([3.0, 9.0]), np.zeros((2, 2)))
    np.testing.assert_allclose(states.macroscopic_pkas(), [3.0, 9.0], atol=1e-5)  # 10**-6 of overlap
    assert states.stepwise_site(0) == 0
    assert states.stepwise_site(1) == 1


def test_zwitterion_is_a_state_like_any_other() -> None:
    # an amino acid: acid 2.3 while the amine holds its proton, 4.3 while not; amine 9.8 beside a carboxylate
    coupling = np.array([[0.0, -2.0], [-2.0, 0.0]])
    states = from_pairs(np.array([4.3, 9.8]), coupling)
    np.testing.assert_allclose(states.macroscopic_pkas(), [2.3, 9.8], atol=1e-3)  # other path 10**-3.5
    assert list(states.dominant(6.0)) == [0, 1]


@given(
    intrinsic=st.lists(st.floats(-5, 14), min_size=1, max_size=5),
    strength=st.floats(-3, 3),
    ph=st.floats(-5, 15),
)
def test_alpha_equals_plain_sum(intrinsic: list[float], strength: float, ph: float) -> None:
    n = len(intrinsic)
    coupling = strength * (np.ones((n, n)) - np.eye(n))
    states = from_pairs(np.array(intrinsic), coupling)
    for site in range(n):
        assert states.alpha(site, np.array([ph]))[0] == pytest.approx(brute_alpha(states, site, ph), abs=1e-9)


@given(intrinsic=st.lists(st.floats(0, 14), min_size=2, max_size=4), seed=st.integers(0, 99))
def test_order_of_sites_does_not_matter(intrinsic: list[float], seed: int) -> None:
    n = len(intrinsic)
    coupling = np.random.default_rng(seed).normal(size=(n, n))
    coupling = coupling + coupling.T
    base = from_pairs(np.array(intrinsic), coupling).macroscopic_pkas()
    for order in list(permutations(range(n)))[:6]:
        chosen = list(order)
        other = from_pairs(np.array(intrinsic)[chosen], coupling[np.ix_(chosen, chosen)]).macroscopic_pkas()
        np.testing.assert_allclose(other, base, atol=NUMERIC)


@given(intrinsic=st.lists(st.floats(0, 14), min_size=1, max_size=4), seed=st.integers(0, 99))
def test_macroscopic_constants_reproduce_the_mean_number_of_protons(
    intrinsic: list[float], seed: int
) -> None:
    n = len(intrinsic)
    coupling = -np.abs(np.random.default_rng(seed).normal(size=(n, n)))
    states = from_pairs(np.array(intrinsic), coupling + coupling.T)
    steps = states.macroscopic_pkas()
    ph = np.linspace(-2, 16, 19)
    bound = n - sum(states.alpha(site, ph) for site in range(n))
    log_b = np.concatenate([[0.0], np.cumsum(steps[::-1])])
    weights = 10.0 ** (log_b[None, :] - ph[:, None] * np.arange(n + 1)[None, :])
    np.testing.assert_allclose(bound, (weights @ np.arange(n + 1)) / weights.sum(axis=1), atol=1e-8)


def test_table_with_closed_cycles_equals_pairs() -> None:
    intrinsic = np.array([4.0, 7.0, 9.5])
    coupling = np.array([[0.0, -1.0, -0.3], [-1.0, 0.0, 0.4], [-0.3, 0.4, 0.0]])

    def step(site: int, others: tuple[int, ...]) -> float:
        return float(intrinsic[site] + sum(coupling[site, j] * others[j] for j in range(3) if j != site))

    pairs, table = from_pairs(intrinsic, coupling), from_table(step, 3)
    np.testing.assert_allclose(table.log_beta, pairs.log_beta, atol=NUMERIC)


def test_a_cycle_that_does_not_close_is_shared_out() -> None:
    def step(site: int, others: tuple[int, ...]) -> float:
        lift = (
            1.0 if site == 0 else 2.0
        )  # the first site sees the second as 1 unit, the second the first as 2
        return 7.0 - lift * others[1 - site]

    assert from_table(step, 2).log_beta[-1] == pytest.approx(14.0 - 1.5, abs=NUMERIC)


def test_a_cycle_is_shared_out_from_the_reference_state_given() -> None:
    def step(site: int, others: tuple[int, ...]) -> float:
        rise = 2.0 if site == 0 else 3.0  # pKa 9.7 beside a neutral acid, more beside its anion
        return 9.7 + rise * (1 - others[1 - site])

    steps = from_table(step, 2, (1, 1)).macroscopic_pkas()
    # equal sites in the reference state: the first step is 9.7 - log10(2), the second 9.7 + 2.5 + log10(2)
    np.testing.assert_allclose(steps, [9.7 - log10(2.0), 12.2 + log10(2.0)], atol=NUMERIC)


def test_the_reference_does_not_matter_where_cycles_close() -> None:
    intrinsic = np.array([4.0, 7.0, 9.5])
    coupling = np.array([[0.0, -1.0, -0.3], [-1.0, 0.0, 0.4], [-0.3, 0.4, 0.0]])

    def step(site: int, others: tuple[int, ...]) -> float:
        return float(intrinsic[site] + sum(coupling[site, j] * others[j] for j in range(3) if j != site))

    base = from_table(step, 3).log_beta
    for reference in ((1, 1, 1), (0, 1, 0), (1, 0, 1)):
        np.testing.assert_allclose(from_table(step, 3, reference).log_beta, base, atol=NUMERIC)


def test_extreme_constants_do_not_overflow() -> None:
    states = from_pairs(np.array([-300.0, 400.0]), np.zeros((2, 2)))
    np.testing.assert_allclose(states.macroscopic_pkas(), [-300.0, 400.0], atol=NUMERIC)
    shares: NDArray[np.float64] = states.alpha(0, np.array([7.0]))
    assert shares[0] == pytest.approx(1.0)


def test_two_equivalent_sites_are_half_ionised_between_their_steps() -> None:
    coupling = np.array([[0.0, -2.0], [-2.0, 0.0]])
    states = from_pairs(np.array([8.0, 8.0]), coupling)
    first, second = states.macroscopic_pkas()
    assert states.transition_ph([0, 1]) == pytest.approx((first + second) / 2, abs=1e-6)


def test_no_crossing_gives_nan() -> None:
    states = from_pairs(np.array([7.0]), np.zeros((1, 1)))
    assert np.isnan(states.transition_ph([0], low=8.0, high=9.0))


@pytest.mark.parametrize("n", [0, 11])
def test_too_many_or_no_sites_are_refused(n: int) -> None:
    with pytest.raises(ValueError, match="1 to 10"):
        from_table(lambda site, others: 7.0, n)
    with pytest.raises(ValueError, match="1 to 10"):
        from_pairs(np.zeros(n), np.zeros((n, n)))


def test_all_states_are_there_once() -> None:
    states = all_states(4)
    assert states.shape == (16, 4)
    assert len({tuple(s) for s in states.tolist()}) == 16
