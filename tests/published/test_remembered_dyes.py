"""Naphthols, naphthylamines, azo dyes and molecules with two ionising groups: are they right as a whole?

Every constant is as remembered from the compilations of Serjeant & Dempsey (1979) and Perrin (1965, 1972)
and from Bishop, Indicators (1972), not checked against print; the last column says how far the memory may
be off. Rows were not chosen by how well they are predicted. Some served to set a rule or a parent:
1-naphthylamine-8- sulfonate (protons held by an anion), 1-naphthol-2-sulfonate and
2-naphthol-3,6-disulfonate (sulfonate beside a hydroxyl), the nitronaphthols and nitronaphthylamines (shares
of ortho positions), 2-hydroxyazobenzene and both hydroxyanthraquinones (parents of cores). Dyes that served
for nothing are in `test_dye_classes.py`.
"""

from __future__ import annotations

from math import hypot

import pytest

from tuner.library import load_library
from tuner.prediction.accuracy import Miss, score
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor
from tuner.prediction.matching import Step, match_steps

Row = tuple[str, str, tuple[float, ...], float]

REMEMBERED: tuple[Row, ...] = (
    ("1-naphthol-2-sulfonate", "OS(=O)(=O)c1ccc2ccccc2c1O", (9.58,), 0.2),
    ("1-naphthol-3-sulfonate", "OS(=O)(=O)c1cc(O)c2ccccc2c1", (8.53,), 0.2),
    ("2-naphthol-3,6-disulfonate", "OS(=O)(=O)c1ccc2cc(O)c(cc2c1)S(=O)(=O)O", (9.7,), 0.4),
    ("4-nitro-1-naphthol", "Oc1ccc([N+](=O)[O-])c2ccccc12", (5.73,), 0.15),
    ("2-nitro-1-naphthol", "Oc1c([N+](=O)[O-])ccc2ccccc12", (5.9,), 0.2),
    ("1-nitro-2-naphthol", "Oc1ccc2ccccc2c1[N+](=O)[O-]", (5.9,), 0.2),
    ("2,4-dinitro-1-naphthol", "Oc1c([N+](=O)[O-])cc([N+](=O)[O-])c2ccccc12", (2.1,), 0.3),
    ("6-bromo-2-naphthol", "Oc1ccc2cc(Br)ccc2c1", (9.25,), 0.1),
    ("6-cyano-2-naphthol", "Oc1ccc2cc(C#N)ccc2c1", (8.6,), 0.2),
    ("5-cyano-1-naphthol", "Oc1cccc2c(C#N)cccc12", (8.5,), 0.2),
    ("5-cyano-2-naphthol", "Oc1ccc2c(C#N)cccc2c1", (8.75,), 0.15),
    ("7-cyano-2-naphthol", "Oc1ccc2ccc(C#N)cc2c1", (8.8,), 0.2),
    ("8-cyano-2-naphthol", "Oc1ccc2cccc(C#N)c2c1", (8.4,), 0.2),
    ("1-bromo-2-naphthol", "Oc1ccc2ccccc2c1Br", (7.9,), 0.3),
    ("3-hydroxy-2-naphthoic acid", "OC(=O)c1cc2ccccc2cc1O", (2.8,), 0.2),
    ("1-naphthylamine-2-nitro", "Nc1c([N+](=O)[O-])ccc2ccccc12", (-1.76,), 0.3),
    ("1-naphthylamine-8-nitro", "Nc1cccc2cccc([N+](=O)[O-])c12", (2.79,), 0.1),
    ("2-naphthylamine-1-nitro", "Nc1ccc2ccccc2c1[N+](=O)[O-]", (-0.85,), 0.3),
    ("2-naphthylamine-3-nitro", "Nc1cc2ccccc2cc1[N+](=O)[O-]", (1.48,), 0.3),
    ("2-naphthylamine-4-nitro", "Nc1cc([N+](=O)[O-])c2ccccc2c1", (2.43,), 0.1),
    ("2-naphthylamine-8-nitro", "Nc1ccc2cccc([N+](=O)[O-])c2c1", (2.73,), 0.1),
    ("1-naphthylamine-4-bromo", "Nc1ccc(Br)c2ccccc12", (3.21,), 0.1),
    ("1-naphthylamine-4-chloro", "Nc1ccc(Cl)c2ccccc12", (3.22,), 0.15),
    ("1-naphthylamine-4-sulfonate", "Nc1ccc(S(=O)(=O)O)c2ccccc12", (2.81,), 0.1),
    ("1-naphthylamine-8-sulfonate", "Nc1cccc2cccc(S(=O)(=O)O)c12", (5.03,), 0.1),
    ("2-naphthylamine-6-sulfonate", "Nc1ccc2cc(S(=O)(=O)O)ccc2c1", (3.74,), 0.1),
    ("2-naphthylamine-1-sulfonate", "Nc1ccc2ccccc2c1S(=O)(=O)O", (2.35,), 0.2),
    ("dimethyl-1-naphthylamine", "CN(C)c1cccc2ccccc12", (4.57,), 0.2),
    ("dimethyl-2-naphthylamine", "CN(C)c1ccc2ccccc2c1", (4.57,), 0.2),
    ("4-hydroxyazobenzene", "Oc1ccc(N=Nc2ccccc2)cc1", (8.2,), 0.1),
    ("4-hydroxy-4'-nitroazobenzene", "Oc1ccc(N=Nc2ccc([N+](=O)[O-])cc2)cc1", (7.6,), 0.3),
    ("4-hydroxyazobenzene-4'-sulfonate", "Oc1ccc(N=Nc2ccc(S(=O)(=O)O)cc2)cc1", (8.05,), 0.3),
    ("2-hydroxyazobenzene", "Oc1ccccc1N=Nc1ccccc1", (9.3,), 0.3),
    ("orange I", "Oc1ccc(N=Nc2ccc(S(=O)(=O)O)cc2)c2ccccc12", (8.26,), 0.1),
    ("orange II", "Oc1ccc2ccccc2c1N=Nc1ccc(S(=O)(=O)O)cc1", (11.4,), 0.1),
    ("methyl orange", "CN(C)c1ccc(N=Nc2ccc(S(=O)(=O)O)cc2)cc1", (3.46,), 0.05),
    ("4-aminoazobenzene-4'-sulfonate", "Nc1ccc(N=Nc2ccc(S(=O)(=O)O)cc2)cc1", (2.9,), 0.3),
    ("4-hydroxybiphenyl", "Oc1ccc(-c2ccccc2)cc1", (9.55,), 0.05),
    ("3-hydroxybiphenyl", "Oc1cccc(-c2ccccc2)c1", (9.64,), 0.05),
    ("2-hydroxybiphenyl", "Oc1ccccc1-c1ccccc1", (10,), 0.1),
    ("4-aminobiphenyl", "Nc1ccc(-c2ccccc2)cc1", (4.35,), 0.1),
    ("3-aminobiphenyl", "Nc1cccc(-c2ccccc2)c1", (4.25,), 0.1),
    ("diphenylamine", "N(c1ccccc1)c1ccccc1", (0.79,), 0.1),
    ("7-hydroxycoumarin", "O=c1ccc2ccc(O)cc2o1", (7.8,), 0.1),
    ("5-bromosalicylic", "OC(=O)c1cc(Br)ccc1O", (2.62,), 0.1),
    ("4-methylsalicylic", "OC(=O)c1ccc(C)cc1O", (3.15,), 0.1),
    ("5-methoxysalicylic", "OC(=O)c1cc(OC)ccc1O", (2.95,), 0.1),
    ("3,5-dinitrosalicylic", "OC(=O)c1cc([N+](=O)[O-])cc([N+](=O)[O-])c1O", (0.7, 7.4), 0.4),
    ("3-hydroxybenzoic", "OC(=O)c1cccc(O)c1", (4.08, 9.92), 0.05),
    ("2,4-dihydroxybenzoic", "OC(=O)c1ccc(O)cc1O", (3.3, 8.8), 0.2),
    ("gentisic", "OC(=O)c1cc(O)ccc1O", (2.95, 10.2), 0.15),
    ("protocatechuic", "OC(=O)c1ccc(O)c(O)c1", (4.45, 8.8), 0.1),
    ("4-aminosalicylic", "OC(=O)c1ccc(N)cc1O", (1.8, 3.65), 0.2),
    ("5-aminosalicylic", "OC(=O)c1cc(N)ccc1O", (2.7, 5.8), 0.3),
    ("N-methylanthranilic", "CNc1ccccc1C(=O)O", (1.95, 5.33), 0.15),
    ("4-dimethylaminobenzoic", "CN(C)c1ccc(C(=O)O)cc1", (2.5, 5.03), 0.1),
    ("metanilic", "Nc1cccc(S(=O)(=O)O)c1", (3.74,), 0.04),
    ("o-phenylenediamine", "Nc1ccccc1N", (0.8, 4.5), 0.2),
    ("2-amino-4-nitrophenol", "Nc1cc([N+](=O)[O-])ccc1O", (3.1, 7.6), 0.3),
    ("resorcinol", "Oc1cccc(O)c1", (9.35, 11.2), 0.15),
    ("hydroquinone", "Oc1ccc(O)cc1", (9.9, 11.5), 0.15),
    ("4-nitrocatechol", "Oc1ccc([N+](=O)[O-])cc1O", (6.7, 10.85), 0.1),
    ("tyramine", "NCCc1ccc(O)cc1", (9.6, 10.6), 0.2),
    ("dopamine", "NCCc1ccc(O)c(O)c1", (8.9, 10.5), 0.2),
    ("tyrosine", "NC(Cc1ccc(O)cc1)C(=O)O", (2.2, 9.11, 10.1), 0.1),
    ("4-hydroxyphenylacetic", "OC(=O)Cc1ccc(O)cc1", (4.5, 10.2), 0.15),
    ("phenol-4-sulfonate", "Oc1ccc(S(=O)(=O)O)cc1", (9,), 0.1),
    ("phenol-3-sulfonate", "Oc1cccc(S(=O)(=O)O)c1", (9.1,), 0.2),
    ("4-hydroxyphenylarsonic", "Oc1ccc([As](=O)(O)O)cc1", (3.9, 8.4, 10.2), 0.3),
    ("4-aminobenzylamine", "NCc1ccc(N)cc1", (3.5, 9.3), 0.4),
    ("4-aminophenylacetic", "Nc1ccc(CC(=O)O)cc1", (3.6, 5.3), 0.3),
    ("o-coumaric", "OC(=O)/C=C/c1ccccc1O", (4.6, 9.6), 0.2),
    ("p-coumaric", "OC(=O)/C=C/c1ccc(O)cc1", (4.4, 9.3), 0.3),
    ("phenolphthalein", "Oc1ccc(cc1)C1(OC(=O)c2ccccc12)c1ccc(O)cc1", (9.5,), 0.3),
    ("fluorescein", "Oc1ccc2c(c1)oc1cc(=O)ccc-1c2-c1ccccc1C(=O)O", (4.4, 6.4), 0.2),
    ("1-hydroxyanthraquinone", "O=C1c2ccccc2C(=O)c2c1cccc2O", (11,), 0.5),
    ("2-hydroxyanthraquinone", "O=C1c2ccccc2C(=O)c2cc(O)ccc12", (7.6,), 0.3),
)


@pytest.fixture(scope="module")
def misses() -> list[Miss]:
    library = load_library()
    door = MoleculeDoor(library, shipped_model(library))
    found = []
    for name, smiles, pkas, doubt in REMEMBERED:
        told = door.predict(smiles)
        parts = zip(told.macroscopic_pkas, told.macroscopic_sds, told.macroscopic_kinds, strict=True)
        steps = [Step(*part) for part in parts]
        places = match_steps([(f"pK{k}", pka) for k, pka in enumerate(pkas, 1)], steps)
        for pka, place in zip(pkas, places, strict=True):
            if place is None:
                found.append(Miss(name, smiles, "", pka, float("nan"), float("nan")))
            else:
                # a printed doubt is a bound, about two standard errors
                sd = hypot(steps[place].sd, doubt / 2)
                found.append(Miss(name, smiles, "", pka, steps[place].pka, sd))
    return found


def test_most_remembered_constants_are_told(misses: list[Miss]) -> None:
    assert score("remembered", misses).given >= 0.95


def test_the_mean_miss_is_that_of_molecules_with_several_groups(misses: list[Miss]) -> None:
    # 0.30: what is asked of molecules with two sites; memory adds 0.1 or so
    assert score("remembered", misses).mean_best <= 0.30


def test_stated_intervals_hold_what_was_remembered(misses: list[Miss]) -> None:
    # nine in ten less two binomial standard errors of about a hundred rows (0.03 each)
    assert score("remembered", misses).coverage >= 0.84


@pytest.mark.parametrize(
    ("name", "smiles", "pka"),
    [
        ("N,N-dimethylanthranilic acid", "CN(C)c1ccccc1C(=O)O", 8.4),
        ("methyl red", "CN(C)c1ccc(N=Nc2ccccc2C(=O)O)cc1", 5.0),
        ("1-naphthylamine-8-sulfonic acid", "Nc1cccc2cccc(S(=O)(=O)O)c12", 5.0),
    ],
)
def test_a_proton_held_by_an_anion_leaves_late(name: str, smiles: str, pka: float) -> None:
    library = load_library()
    told = MoleculeDoor(library, shipped_model(library)).predict(smiles)
    # 1.0: two standard errors of 0.5, the rule's 0.4 to 0.5 with what the model leaves open; without the
    # rule these three miss by 1.4 to 1.9
    assert max(told.macroscopic_pkas) == pytest.approx(pka, abs=1.0), name
