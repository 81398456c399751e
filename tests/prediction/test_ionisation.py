"""Sites of one molecule acting on each other."""

from __future__ import annotations

from collections.abc import Callable
from math import log10

import pytest

from tuner.acidity.medium import MediumEffect
from tuner.prediction.ionisation import Ionisation, IonSite, distance_energy

WATER = MediumEffect(1.0, 0.0, 0.0, 0.0)


def site(kind: str, charge: int, pka: float, own: Callable[[frozenset[int]], float] | None = None) -> IonSite:
    return IonSite(kind, 0, charge, pka, 0.1, own, WATER)


def far(i: int, j: int) -> int:
    return 99


def test_distance_halves_the_energy_per_bond() -> None:
    assert distance_energy(4) == pytest.approx(distance_energy(3) / 2)
    assert distance_energy(30) == 0.0


def test_glycine_from_its_neutral_form() -> None:
    # acid 4.4 beside a neutral amine, amine 7.7 beside a neutral acid (as in its ester); three bonds apart:
    # 2.3
    sites = [site("aliphatic_acid", -1, 4.4), site("aliphatic_amine", 1, 7.7)]
    made = Ionisation(sites, {}, lambda i, j: 3, 0)
    first, second = made.microstates().macroscopic_pkas()
    assert first == pytest.approx(4.4 - 2.1, abs=0.01)  # the other path adds 10**-3
    assert second == pytest.approx(7.7 + 2.1, abs=0.01)


def test_linkage_what_one_feels_the_other_feels_alike() -> None:
    def phenol(charged: frozenset[int]) -> float:
        return 8.5 + (0.8 if 1 in charged else 0.0)

    sites = [site("phenol", -1, 8.5, phenol), site("benzoic_acid", -1, 4.5)]
    made = Ionisation(sites, {}, far, 0)
    assert made.energy(0, 1) == pytest.approx(0.8)
    assert made.energy(1, 0) == pytest.approx(0.8)
    first, second = made.microstates().macroscopic_pkas()
    assert first == pytest.approx(4.5, abs=0.01)
    assert second == pytest.approx(9.3, abs=0.01)


def test_linkage_of_acid_and_base_has_opposite_signs() -> None:
    def phenol(charged: frozenset[int]) -> float:
        return 10.0 - (1.5 if 1 in charged else 0.0)

    sites = [site("phenol", -1, 10.0, phenol), site("aliphatic_amine", 1, 9.0)]
    made = Ionisation(sites, {}, far, 0)
    assert made.energy(0, 1) == pytest.approx(-1.5)
    assert made.energy(1, 0) == pytest.approx(1.5)
    # the sum of both steps is that of either path
    assert sum(made.microstates().macroscopic_pkas()) == pytest.approx(10.0 + 9.0, abs=1e-6)


def test_two_views_that_disagree_are_averaged() -> None:
    def own(base: float, rise: float) -> Callable[[frozenset[int]], float]:
        return lambda charged: base + (rise if charged else 0.0)

    sites = [site("phenol", -1, 9.7, own(9.7, 2.0)), site("phenol", -1, 9.7, own(9.7, 3.0))]
    steps = Ionisation(sites, {}, far, 0).microstates().macroscopic_pkas()
    assert steps[0] == pytest.approx(9.7 - log10(2.0), abs=0.01)
    assert steps[1] == pytest.approx(9.7 + 2.5 + log10(2.0), abs=0.01)


def test_sulfonic_acids_are_charged_throughout_and_listed() -> None:
    def phenol(charged: frozenset[int]) -> float:
        return 8.2 + (0.6 if 1 in charged else 0.0)

    sites = [site("phenol", -1, 8.2, phenol), site("benzenesulfonic_acid", -1, -2.8)]
    made = Ionisation(sites, {}, far, 0)
    steps = made.macroscopic(made.microstates())
    assert [k for _, _, k in steps] == ["benzenesulfonic_acid", "phenol"]
    assert steps[1][0] == pytest.approx(8.8)
    assert made.charge_around(0, made.microstates(), 8.8) == -1


def test_salt_shifts_each_step_by_its_charge() -> None:
    salty = MediumEffect(1.0, -0.1, 0.2, 0.0)  # pKa' = pKa + (2z - 1) 0.1
    sites = [
        IonSite("phenol", 0, -1, 5.0, 0.1, None, salty),
        IonSite("phenol", 1, -1, 12.0, 0.1, None, salty),
    ]
    steps = Ionisation(sites, {}, far, 0).microstates().macroscopic_pkas()
    assert steps[0] == pytest.approx(5.0 - 0.1, abs=1e-4)
    assert steps[1] == pytest.approx(12.0 - 0.3, abs=1e-4)


def test_fixed_energies_overrule() -> None:
    sites = [site("phenol", -1, 7.0), site("phenol", -1, 7.0)]
    made = Ionisation(sites, {(0, 1): 8.0, (1, 0): 8.0}, lambda i, j: 3, 0)
    first, second = made.microstates().macroscopic_pkas()
    assert second - first == pytest.approx(8.0 + log10(4.0), abs=1e-6)


def test_too_many_sites_are_not_titrated() -> None:
    sites = [site("aliphatic_acid", -1, 4.0) for _ in range(11)]
    assert not Ionisation(sites, {}, far, 0).treatable
