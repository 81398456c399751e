"""Hit probabilities and their bounds, against numbers worked out by hand and against dense grids."""

from __future__ import annotations

import numpy as np
import pytest

from tuner.search.probability import (
    LEAST_SD,
    Interval,
    farthest_useful_offset,
    hit_bound,
    hit_probability,
)


def at(pka, sd, low, high):
    return Interval(np.array([pka]), np.array([sd]), low, high)


def test_one_window_is_the_normal_share_within_it():
    # 6.5 +- 0.2 around a window 6.2..6.6: z from -1.5 to 0.5; tables: 0.6915 - 0.0668
    assert hit_probability([at(6.5, 0.2, 6.2, 6.6)])[0] == pytest.approx(
        0.6247, abs=5e-5
    )  # four printed digits


def test_shared_errors_make_two_like_targets_one():
    one = hit_probability([at(6.5, 0.2, 6.2, 6.6)])
    two = hit_probability([at(6.5, 0.2, 6.2, 6.6), at(6.3, 0.2, 6.0, 6.4)])
    assert two[0] == pytest.approx(one[0], abs=1e-12)  # the same z-interval up to rounding


def test_contradicting_targets_cannot_both_be_met():
    assert hit_probability([at(6.5, 0.1, 6.4, 6.6), at(6.5, 0.1, 7.4, 7.6)])[0] == 0.0


def test_nan_in_gives_nan_out():
    assert np.isnan(hit_probability([at(np.nan, 0.1, 6.0, 7.0)])[0])


@pytest.mark.parametrize("tolerance", [0.05, 0.2, 0.7])
def test_bound_is_the_best_over_all_errors_and_larger_offsets(tolerance):
    for offset in (0.0, 0.1, 0.3, 1.0):
        for low, high in ((0.05, 0.1), (0.1, 0.9), (0.4, 0.4)):
            errors = np.linspace(low, high, 2001)
            inside = [at(offset, s, -tolerance, tolerance) for s in errors]
            best = max(float(hit_probability([one])[0]) for one in inside)
            bound = float(hit_bound(np.array(offset), tolerance, np.array(low), np.array(high)))
            assert best <= bound + 1e-12  # admissible, up to rounding
            assert bound == pytest.approx(best, abs=1e-4)  # and tight, up to the grid of errors


def test_farthest_useful_offset_separates_useful_from_useless():
    low, high = np.array([0.1]), np.array([0.3])
    far = farthest_useful_offset(np.array([0.4]), 0.2, low, high)
    assert hit_bound(far + 1e-4, 0.2, low, high)[0] < 0.4
    assert hit_bound(far - 1e-4, 0.2, low, high)[0] >= 0.4


def test_farthest_useful_offset_at_the_ends():
    low, high = np.array([0.3]), np.array([0.3])
    assert farthest_useful_offset(np.array([0.99]), 0.2, low, high)[0] == -1.0
    assert farthest_useful_offset(np.array([0.0]), 0.2, low, high)[0] == np.inf


def test_no_error_is_taken_as_smaller_than_the_least():
    sure, least = at(6.41, 0.0, 6.2, 6.4), at(6.41, LEAST_SD, 6.2, 6.4)
    assert hit_probability([sure])[0] == hit_probability([least])[0] > 0.0
