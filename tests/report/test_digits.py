"""Does a number keep the digits that it deserves and no more?"""

from __future__ import annotations

from dataclasses import replace
from math import inf, nan

import pytest

from tests.report.sample import sample_brief
from tuner.brief.records import Groups, Medium, Target
from tuner.report import digits
from tuner.report.wording import anchor_in_words, medium_in_words, target_in_words


@pytest.mark.parametrize(
    ("value", "sd", "shown"),
    [
        (7.149, 0.05, "7.15 ± 0.05"),
        (7.149, 0.249, "7.15 ± 0.25"),
        (7.149, 0.25, "7.1 ± 0.2"),
        (nan, 0.1, "–"),
    ],
)
def test_a_pka_loses_a_decimal_with_a_wide_error(value: float, sd: float, shown: str) -> None:
    assert digits.pka_text(value, sd) == shown


def test_a_pka_without_error_is_told_without() -> None:
    assert digits.pka_text(7.149, nan) == "7.15"


@pytest.mark.parametrize(
    ("share", "shown"),
    [(0.0, "< 1 %"), (0.01, "1 %"), (0.5, "50 %"), (0.99, "99 %"), (1.0, "> 99 %"), (nan, "–")],
)
def test_no_chance_is_told_as_certain(share: float, shown: str) -> None:
    assert digits.percent(share) == shown


@pytest.mark.parametrize(
    ("number", "shown"),
    [
        (0, "0"),
        (999, "999"),
        (1234567, "1_234_567"),
        (10_000_000, "1.0 × 10⁷"),
        (99_999_999_999, "1.0 × 10¹¹"),
    ],
)
def test_large_counts_become_powers(number: int, shown: str) -> None:
    assert digits.count(number).replace(",", "_") == shown


@pytest.mark.parametrize("value", [nan, inf])
def test_what_is_no_number_is_a_dash(value: float) -> None:
    assert digits.signed(value) == digits.mass(value) == digits.MISSING


def test_a_medium_names_every_part_with_its_unit() -> None:
    medium = Medium(37.0, 0.15, "ethanol", 20.0, 0.3, 0.1, -40.0)
    assert medium_in_words(medium) == (
        "water with 20 % ethanol by mass, 37 °C, ionic strength 0.15 mol/L, "
        "measured offset +0.3 ± 0.1 pKa units, surface potential -40 mV"
    )


@pytest.mark.parametrize(
    ("role", "words"),
    [
        ("switches", "switch at pH 5 ± 0.5"),
        ("stays_off", "stay in its acid form up to pH 5.5"),
        ("stays_on", "stay in its base form down to pH 4.5"),
    ],
)
def test_a_target_says_what_the_dye_must_do(role: str, words: str) -> None:
    assert target_in_words(Target(5.0, 0.5, Medium(), role)) == words


def test_an_anchored_dye_says_which_form_counts() -> None:
    assert anchor_in_words(sample_brief()) == ""
    anchored = replace(sample_brief(), groups=Groups(anchors=("CO2H",)))
    assert "bound form" in anchor_in_words(anchored)
