"""Does the curve of the base form follow a lone group's pKa', and the microstates where there are more?"""

from __future__ import annotations

import numpy as np
import pytest

from tuner.brief.records import Medium
from tuner.library.catalogue import Library
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.base_form import BaseForm
from tuner.prediction.door import MoleculeDoor

SALT = Medium(ionic_strength_m=0.1)


@pytest.fixture(scope="module")
def curves(library: Library) -> BaseForm:
    return BaseForm(library, shipped_model(library), SALT)


def test_a_lone_group_follows_henderson_and_hasselbalch(curves: BaseForm, library: Library) -> None:
    pka = MoleculeDoor(library, shipped_model(library), SALT).predict("Oc1ccc([N+](=O)[O-])cc1").pka
    ph = np.array([pka - 1.0, pka, pka + 1.0])
    assert curves.shares("Oc1ccc([N+](=O)[O-])cc1", ph) == pytest.approx([1 / 11, 1 / 2, 10 / 11])


def test_shares_are_found_again(curves: BaseForm) -> None:
    low, half, high = curves.ph_of_shares("Oc1ccccc1", (1 / 11, 0.5, 10 / 11))
    # one pH unit to either side, by the same equation; 0.001: straight lines between points 0.02 apart
    assert (half - low, high - half) == pytest.approx((1.0, 1.0), abs=0.001)


def test_an_amine_beside_an_acid_has_a_flat_curve(curves: BaseForm) -> None:
    """3-Aminobenzoic acid loses its two protons near pH 3 and 4.8, each in part from the amine."""
    low, high = curves.ph_of_shares("Nc1cccc(C(=O)O)c1", (0.1, 0.9))
    assert high - low > 2.4  # a lone group: 2 log10 9 = 1.9


@pytest.mark.parametrize("smiles", ["Cc1ccccc1", "xyz", "", "c1ccccc1.Oc1ccccc1"])
def test_what_has_no_reporting_group_has_no_curve(curves: BaseForm, smiles: str) -> None:
    assert np.isnan(curves.shares(smiles, np.array([7.0]))).all()
    assert np.isnan(curves.ph_of_shares(smiles, (0.5,))).all()


def test_the_grid_is_left_alone(curves: BaseForm) -> None:
    ph = np.array([5.0, 6.0])
    curves.shares("Oc1ccccc1", ph)
    assert ph.tolist() == [5.0, 6.0]
