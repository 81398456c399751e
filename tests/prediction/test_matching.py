"""Printed steps laid beside predicted ones."""

from __future__ import annotations

import pytest

from tuner.prediction.matching import Step, kinds_meant, match_steps


def steps(*pkas: float, kinds: tuple[str, ...] = ()) -> list[Step]:
    names = kinds or ("phenol",) * len(pkas)
    return [Step(p, 0.1, k) for p, k in zip(pkas, names, strict=True)]


def test_descending_labels_are_put_in_order() -> None:
    assert match_steps([("pKAH1", 6.2), ("pKAH2", 2.8)], steps(2.5, 6.8)) == [1, 0]


def test_a_step_that_was_not_printed_is_passed_over() -> None:
    assert match_steps([("pK2", 9.3)], steps(-2.8, 9.0)) == [1]


def test_order_is_kept_even_where_a_crossing_would_be_nearer() -> None:
    assert match_steps([("pK1", 7.0), ("pK2", 7.1)], steps(6.0, 9.0)) == [0, 1]


def test_more_printed_than_predicted_leaves_one_over() -> None:
    assert match_steps([("pK1", 3.0), ("pK2", 9.0)], steps(9.2)) == [None, 0]


def test_a_named_group_fits_only_its_own_steps() -> None:
    predicted = steps(8.5, 10.4, kinds=("aliphatic_amine", "phenol"))
    assert match_steps([("pK1(OH)", 8.9)], predicted) == [1]
    assert match_steps([("pK(COOH)", 8.9)], predicted) == [None]


@pytest.mark.parametrize(
    ("label", "kind"),
    [("pK(OH)", "phenol"), ("pK(-OH)", "phenol"), ("pK(COOH)", "benzoic_acid"), ("pKAH(2-NH2)", "aniline"),
     ("pK(-SO2NH-)", "benzenesulfonamide"), ("pK(NH+)", "aniline")],
)  # fmt: skip
def test_words_in_labels(label: str, kind: str) -> None:
    assert kind in kinds_meant(label)


@pytest.mark.parametrize("label", ["pK1", "pKAH2", "pK3((-) isomer)"])
def test_plain_labels_mean_any_group(label: str) -> None:
    assert kinds_meant(label) == ()
