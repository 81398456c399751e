"""Do the summands of a prediction add up to it, in every medium?"""

from __future__ import annotations

import pytest

from tuner.brief.records import Medium
from tuner.library.catalogue import Library
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor
from tuner.prediction.explain import SMALLEST_SHOWN, medium_rest, sites_terms

MEDIA = (
    Medium(),
    Medium(temperature_c=37.0, ionic_strength_m=0.15),
    Medium(cosolvent="ethanol", cosolvent_mass_percent=30.0, offset=0.2, surface_potential_mv=-80.0),
)


@pytest.mark.parametrize("medium", MEDIA)
@pytest.mark.parametrize(
    "smiles",
    [
        "Oc1ccc([N+](=O)[O-])cc1",
        "Oc1ccc(C(=O)O)cc1",
        "Oc1ccccc1O",  # a statistical factor
        "CN(C)c1ccc(N=Nc2ccc(C(=O)O)cc2)cc1",  # a neighbour that ionises beside it
        "CN(C)c1ccc(N=Nc2ccccc2C(=O)O)cc1",
        "NCCc1ccc(O)cc1",
        "O=S1(=O)OC(c2ccc(O)cc2)(c2ccc(O)cc2)c2ccccc21",
    ],
)
def test_a_prediction_is_the_sum_of_what_is_shown(library: Library, smiles: str, medium: Medium) -> None:
    answer = MoleculeDoor(library, shipped_model(library), medium).predict(smiles)
    at_25 = sum(term.value for term in (*answer.terms, *sites_terms(answer)))
    assert at_25 == pytest.approx(answer.pka25, abs=SMALLEST_SHOWN)
    there = answer.pka25 + sum(term.value for term in medium_rest(answer))
    # what is too small to be shown may be missing, once for the medium's own terms
    assert there == pytest.approx(answer.pka, abs=2 * SMALLEST_SHOWN)


def test_the_statistical_factor_of_two_equal_groups_is_a_summand(door: MoleculeDoor) -> None:
    (term,) = sites_terms(door.predict("Oc1ccc(O)cc1"))
    # log10 2, less what the partner's charge takes away again, which is little where it is far
    assert term.value == pytest.approx(-0.301, abs=0.03)


def test_a_lone_group_has_no_such_summand(door: MoleculeDoor) -> None:
    assert sites_terms(door.predict("Oc1ccccc1Cl")) == ()
