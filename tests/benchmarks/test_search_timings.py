"""The timed ratios that the search must reach; run with `pytest -m benchmark`."""

from __future__ import annotations

import pytest

from tests.benchmarks import search_timings

pytestmark = pytest.mark.benchmark


def test_evaluation_is_two_thousand_times_faster_than_the_loop():
    assert all(line.reached for line in search_timings.speed_lines())


def test_a_thousand_million_analogs_within_half_a_minute_and_two_gigabytes():
    assert search_timings.exact_line().reached


def test_certified_spaces_within_a_minute():
    assert all(line.reached for line in search_timings.certified_lines())


def test_evolution_reaches_the_exact_hypervolume():
    assert search_timings.evolution_line().reached
