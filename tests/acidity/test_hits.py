"""Hit probabilities against tabulated areas of the normal distribution."""

from __future__ import annotations

import numpy as np
import pytest

from tuner.acidity.hits import hit_probability


@pytest.mark.parametrize(
    ("offset", "expected"),
    [
        (0.0, 0.6827),  # from one standard error below the middle to one above
        (0.1, 0.4772),  # from the middle to two standard errors
        (0.2, 0.1573),  # from one to three
    ],
)
def test_areas_of_the_normal_curve(offset: float, expected: float) -> None:
    found = hit_probability(np.array([7.0 + offset]), np.array([0.1]), 7.0, 0.1)
    assert found[0] == pytest.approx(expected, abs=1e-4)  # four printed digits


def test_nan_in_nan_out_and_inputs_unchanged() -> None:
    pka, sd = np.array([7.0, np.nan, 7.0]), np.array([0.1, 0.1, np.nan])
    pka.setflags(write=False)
    sd.setflags(write=False)
    found = hit_probability(pka, sd, 7.0, 0.2)
    assert np.isnan(found).tolist() == [False, True, True]


def test_wide_errors_make_hits_unlikely() -> None:
    found = hit_probability(np.full(3, 7.0), np.array([0.1, 1.0, 10.0]), 7.0, 0.2)
    assert np.all(np.diff(found) < 0)
