"""Printed steps laid beside predicted ones."""

from __future__ import annotations

from tuner.prediction.matching import Step, match_steps


def steps(*pkas: float) -> list[Step]:
    return [Step(p, 0.1, "phenol") for p in pkas]


def test_descending_labels_are_put_in_order() -> None:
    assert match_steps([("pKAH1", 6.2), ("pKAH2", 2.8)], steps(2.5, 6.8)) == [1, 0]


def test_a_step_that_was_not_printed_is_passed_over() -> None:
    assert match_steps([("pK2", 9.3)], steps(-2.8, 9.0)) == [1]


def test_order_is_kept_even_where_a_crossing_would_be_nearer() -> None:
    assert match_steps([("pK1", 7.0), ("pK2", 7.1)], steps(6.0, 9.0)) == [0, 1]


def test_more_printed_than_predicted_leaves_one_over() -> None:
    assert match_steps([("pK1", 3.0), ("pK2", 9.0)], steps(9.2)) == [None, 0]


def test_one_step_printed_twice_goes_to_one_predicted_step() -> None:
    # a further determination of the same step must not claim the next one
    assert match_steps([("pK3", 9.15), ("pK3(-OH)", 9.3)], steps(9.2, 14.5)) == [0, 0]


def test_two_bracketed_names_without_a_number_are_two_steps() -> None:
    assert match_steps([("pKAH(1-NH2)", 2.2), ("pKAH(2-NH2)", 4.0)], steps(2.0, 4.4)) == [0, 1]
