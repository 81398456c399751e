"""Macroscopic constants of molecules with two and three ionising groups, as handbooks print them.

Values as remembered from the tables "Dissociation constants of organic acids and bases" of the CRC Handbook
of Chemistry and Physics and from Serjeant & Dempsey 1979 (nitroresorcinol), 25 degC, not checked against
print.
Steps are printed in ascending order; a tautomer or a zwitterion is no concern of the reader of a titration.
"""

from __future__ import annotations

import pytest

from tuner.library import load_library
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor

TOLERANCE = 0.45
"""Twice the usual error of such a step (median 0.2); a wrong charged constant shows as 0.6 and more."""


@pytest.fixture(scope="module")
def water() -> MoleculeDoor:
    library = load_library()
    return MoleculeDoor(library, shipped_model(library))


@pytest.mark.parametrize(
    ("name", "smiles", "steps"),
    [
        ("2-aminobenzoic acid", "Nc1ccccc1C(=O)O", (2.11, 4.95)),
        ("3-aminobenzoic acid", "Nc1cccc(C(=O)O)c1", (3.07, 4.79)),
        ("4-aminobenzoic acid", "Nc1ccc(C(=O)O)cc1", (2.50, 4.87)),
        ("2-hydroxybenzoic acid", "Oc1ccccc1C(=O)O", (2.98, 13.6)),
        ("3-hydroxybenzoic acid", "Oc1cccc(C(=O)O)c1", (4.06, 9.92)),
        ("4-hydroxybenzoic acid", "Oc1ccc(C(=O)O)cc1", (4.48, 9.32)),
        ("1,2-benzenediol", "Oc1ccccc1O", (9.34, 13.0)),
        ("1,3-benzenediol", "Oc1cccc(O)c1", (9.32, 11.1)),
        ("1,4-benzenediol", "Oc1ccc(O)cc1", (9.85, 11.4)),
        ("4-nitro-1,3-benzenediol", "O=[N+]([O-])c1ccc(O)cc1O", (6.15, 9.37)),
        ("4-aminophenol", "Nc1ccc(O)cc1", (5.48, 10.30)),
        ("3-aminophenol", "Nc1cccc(O)c1", (4.37, 9.82)),
        ("2-aminophenol", "Nc1ccccc1O", (4.78, 9.97)),
        ("1,4-benzenediamine", "Nc1ccc(N)cc1", (2.95, 6.10)),
        ("1,3-benzenediamine", "Nc1cccc(N)c1", (2.40, 5.00)),
        ("4-aminobenzenesulfonic acid", "Nc1ccc(S(=O)(=O)O)cc1", (3.23,)),
        ("tyrosine", "NC(Cc1ccc(O)cc1)C(=O)O", (2.20, 9.11, 10.07)),
    ],
)
def test_steps_as_printed(water: MoleculeDoor, name: str, smiles: str, steps: tuple[float, ...]) -> None:
    told = water.predict(smiles)
    found = [p for p, k in zip(told.macroscopic_pkas, told.macroscopic_kinds, strict=True) if "sulf" not in k]
    assert found == pytest.approx(steps, abs=TOLERANCE), name
