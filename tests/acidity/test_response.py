"""Working range and slope of the response."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tuner.acidity.response import (
    STEEPEST_SLOPE_PER_PH,
    alpha,
    half_range_for_share,
    ph_at,
    slope,
    working_range_by_eye,
    working_range_by_slope,
)


def test_eye_range_is_ten_to_ninety_percent() -> None:
    low, high = working_range_by_eye(np.array([6.4]))
    assert alpha(low, np.array([6.4]))[0] == pytest.approx(1 / 11, abs=1e-12)
    assert alpha(high, np.array([6.4]))[0] == pytest.approx(10 / 11, abs=1e-12)


@given(share=st.floats(0.01, 0.999))
def test_slope_at_the_ends_of_the_instrument_range_has_the_share(share: float) -> None:
    for end in working_range_by_slope(np.array([7.0]), share):
        assert slope(end, np.array([7.0]))[0] / STEEPEST_SLOPE_PER_PH == pytest.approx(share, rel=1e-6)


def test_slope_is_steepest_at_the_pka() -> None:
    ph = np.linspace(4, 10, 61)
    values = slope(ph, np.array(7.0))
    assert ph[int(np.argmax(values))] == pytest.approx(7.0)
    assert values.max() == pytest.approx(STEEPEST_SLOPE_PER_PH)


@given(share=st.floats(0.001, 0.999), pka=st.floats(-5, 14))
def test_ph_at_undoes_alpha(share: float, pka: float) -> None:
    assert float(alpha(np.array(ph_at(share, pka)), np.array(pka))) == pytest.approx(share, rel=1e-6)


@pytest.mark.parametrize("share", [0.0, -0.1, 1.5])
def test_impossible_shares_are_refused(share: float) -> None:
    with pytest.raises(ValueError, match="0 \\(exclusive\\) to 1"):
        half_range_for_share(share)


def test_extreme_ph_does_not_overflow_and_nan_stays() -> None:
    values = alpha(np.array([-1000.0, 1000.0, np.nan]), np.array(7.0))
    assert values[0] == 0.0
    assert values[1] == 1.0
    assert np.isnan(values[2])
