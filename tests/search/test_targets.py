"""Further targets: windows by role, conditions on tables, probabilities."""

from __future__ import annotations

from math import inf

import numpy as np
import pytest

from tuner.acidity.tables import CoreTables, PairwiseSum
from tuner.brief.records import Medium, Target
from tuner.search.tables import PKA_UNIT
from tuner.search.targets import condition, probability, target_name, window

TABLES = CoreTables(
    PairwiseSum(6.0, (np.array([0.0, 0.5, 1.0]),), {}), PairwiseSum(0.01, (np.zeros(3),), {}), 0.0, 0.0
)


def target(role, ph=6.5, tolerance=0.2):
    return Target(ph, tolerance, Medium(temperature_c=40.0), role=role, name="warm room")


@pytest.mark.parametrize(
    ("role", "low", "high", "kept"),
    [
        ("switches", 6.3, 6.7, [False, True, False]),
        ("stays_off", 6.7, inf, [False, False, True]),
        ("stays_on", -inf, 6.3, [True, False, False]),
    ],
)
def test_windows_and_conditions_by_role(role, low, high, kept):
    assert window(target(role)) == pytest.approx((low, high))
    found = condition(target(role), TABLES)
    pka = found.pka.at(np.array([[0], [1], [2]]))
    assert ((pka >= found.low) & (pka <= found.high)).tolist() == kept
    assert (found.centre is not None) == (role == "switches")


def test_centre_is_the_wanted_ph():
    found = condition(target("switches"), TABLES)
    assert found.centre * PKA_UNIT == pytest.approx(6.5, abs=PKA_UNIT)


def test_probability_of_staying_off_is_one_half_at_the_edge():
    assert probability(target("stays_off"), 6.7, 0.1) == pytest.approx(0.5)
    assert probability(target("stays_on"), 6.3, 0.1) == pytest.approx(0.5)
    assert probability(target("stays_off"), 9.0, 0.1) == pytest.approx(1.0)


def test_a_target_is_named_where_analogs_miss_it():
    assert target_name(target("stays_off")) == "misses the target in warm room (stays off up to pH 6.5)"
