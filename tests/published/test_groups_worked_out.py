"""Molecules whose groups no table lists, or lists thinly, against constants from papers, as remembered.

4-Hydroxybenzylidene-imidazolinones: A. F. Bell et al., Biochemistry 2000, 39, 4423 (8.0 to 8.2) and J. S.
Paige et al., Science 2011, 333, 642 (difluoro compound, about 5.5). 4-Hydroxybenzenediazonium: A. Wittwer,
H. Zollinger, Helv. Chim. Acta 1954, 37, 1954 (3.40). 4-Chloro-3,5-dimethylphenol: a worked example of D. D.
Perrin, B. Dempsey, E. P. Serjeant, pKa Prediction for Organic Acids and Bases, 1981 (predicted 9.70,
measured 9.71). None checked against print.
"""

from __future__ import annotations

import pytest

from tuner.library import load_library
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor
from tuner.prediction.records import Prediction

NINE_IN_TEN = 1.645
"""Standard errors to either side that hold nine values in ten."""


@pytest.fixture(scope="module")
def door() -> MoleculeDoor:
    library = load_library()
    return MoleculeDoor(library, shipped_model(library))


def inside(answer: Prediction, pka: float) -> bool:
    """Whether a value lies in the stated 90 % interval."""
    return abs(answer.pka - pka) <= NINE_IN_TEN * answer.pka_sd


@pytest.mark.parametrize(
    ("smiles", "pka"),
    [
        ("CC1=NC(=Cc2ccc(O)cc2)C(=O)N1C", 8.1),
        ("CC1=NC(=Cc2cc(F)c(O)c(F)c2)C(=O)N1C", 5.5),
        ("N#[N+]c1ccc(O)cc1", 3.40),
        ("Cc1cc(O)cc(C)c1Cl", 9.71),
    ],
)
def test_a_remembered_constant_lies_inside_the_stated_interval(
    door: MoleculeDoor, smiles: str, pka: float
) -> None:
    answer = door.predict(smiles)
    assert inside(answer, pka)
    assert answer.pka_sd < 0.8  # and the interval is no excuse


def test_a_merocyanine_pulls_through_its_double_bond(door: MoleculeDoor) -> None:
    """What stands behind the double bond counts, although the nearest tabulated relative is vinyl (9.9)."""
    assert door.predict("CC1=NC(=Cc2ccc(O)cc2)C(=O)N1C").pka < 8.8
