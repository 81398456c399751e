"""Dyes by class against constants that set no rule: is the model right beyond the molecules it was made on?

Every constant is as remembered from Bishop, Indicators (1972), from the compilations of Serjeant & Dempsey
(1979) and Perrin (1965, 1972), and from the papers named in `libraries/sources.toml`; none was checked
against print, and the last column says how far the memory may be off. Compounds from which a parent, a
share or a rule was taken are in the second table: they show that the rule does what it was made for, no
more.
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

LEFT_OUT: tuple[Row, ...] = (
    # azo dyes with a hydroxyl on each side, and others with several hydrogen bonds
    (
        "eriochrome black T",
        "O=[N+]([O-])c1ccc2c(N=Nc3c(O)ccc4ccccc34)c(O)cc(S(=O)(=O)O)c2c1",
        (6.3, 11.55),
        0.4,
    ),
    ("solochrome violet R", "O=S(=O)(O)c1ccc(O)c(c1)N=Nc1c(O)ccc2ccccc12", (7.2, 13.4), 0.4),
    ("2,2'-dihydroxyazobenzene", "Oc1ccccc1N=Nc1ccccc1O", (7.8, 11.5), 0.5),
    (
        "SPADNS",
        "O=S(=O)(O)c1ccc(N=Nc2c(S(=O)(=O)O)cc3cc(S(=O)(=O)O)cc(O)c3c2O)cc1",
        (9.2,),
        0.3,
    ),
    ("thorin", "O=S(=O)(O)c1cc(S(=O)(=O)O)c2ccc(O)c(N=Nc3ccccc3[As](=O)(O)O)c2c1", (3.7, 8.1, 11.8), 0.4),
    (
        "arsenazo I",
        "O=S(=O)(O)c1cc(O)c2c(O)c(N=Nc3ccccc3[As](=O)(O)O)c(S(=O)(=O)O)cc2c1",
        (3.5, 8.2),
        0.4,
    ),
    (
        "alizarin yellow GG",
        "O=C(O)c1cc(N=Nc2cccc([N+](=O)[O-])c2)ccc1O",
        (11.2,),
        0.3,
    ),
    # amines
    ("ethyl orange", "CCN(CC)c1ccc(N=Nc2ccc(S(=O)(=O)O)cc2)cc1", (4.1,), 0.3),
    ("4'-carboxy methyl yellow", "CN(C)c1ccc(N=Nc2ccc(C(=O)O)cc2)cc1", (3.2,), 0.4),
    ("4-aminodiphenylmethane", "Nc1ccc(Cc2ccccc2)cc1", (4.6,), 0.3),
    ("4-aminobenzophenone", "Nc1ccc(C(=O)c2ccccc2)cc1", (2.17,), 0.1),
    ("dapsone", "Nc1ccc(S(=O)(=O)c2ccc(N)cc2)cc1", (1.3, 2.4), 0.3),
    ("2-aminofluorene", "Nc1ccc2c(c1)Cc1ccccc1-2", (4.64,), 0.1),
    ("1-aminoanthracene", "Nc1cccc2cc3ccccc3cc12", (3.7,), 0.5),
    ("2-aminoanthracene", "Nc1ccc2cc3ccccc3cc2c1", (4.1,), 0.5),
    ("9-aminophenanthrene", "Nc1cc2ccccc2c2ccccc12", (3.6,), 0.3),
    ("tetrahydroquinoline", "C1CCNc2ccccc21", (5.0,), 0.1),
    ("N-phenylanthranilic acid", "O=C(O)c1ccccc1Nc1ccccc1", (3.99,), 0.1),
    # phenols
    ("bisphenol A", "CC(C)(c1ccc(O)cc1)c1ccc(O)cc1", (9.6, 10.2), 0.2),
    ("4,4'-dihydroxybiphenyl", "Oc1ccc(-c2ccc(O)cc2)cc1", (9.5, 10.2), 0.4),
    ("2-benzylphenol", "Oc1ccccc1Cc1ccccc1", (10.0,), 0.2),
    ("4-phenoxyphenol", "Oc1ccc(Oc2ccccc2)cc1", (9.9,), 0.2),
    ("4-hydroxybenzanilide", "O=C(Nc1ccccc1)c1ccc(O)cc1", (8.3,), 0.3),
    ("quinizarin", "O=C1c2ccccc2C(=O)c2c(O)ccc(O)c21", (9.5, 11.5), 0.5),
    ("anthrarufin", "O=C1c2cccc(O)c2C(=O)c2cccc(O)c21", (9.9, 11.2), 0.5),
    ("5-hydroxycoumarin", "O=c1ccc2c(O)cccc2o1", (8.3,), 0.3),
    ("6-hydroxycoumarin", "O=c1ccc2cc(O)ccc2o1", (9.0,), 0.3),
    ("scopoletin", "COc1cc2ccc(=O)oc2cc1O", (7.4,), 0.3),
    ("esculetin", "Oc1cc2ccc(=O)oc2cc1O", (7.0,), 0.4),
    ("7-hydroxyflavone", "O=c1cc(-c2ccccc2)oc2cc(O)ccc12", (7.4,), 0.3),
    ("2-methyl-8-hydroxyquinoline", "Cc1ccc2cccc(O)c2n1", (5.6, 10.2), 0.2),
    ("m-cresol purple", "Cc1cc(O)ccc1C1(c2ccc(O)cc2C)OS(=O)(=O)c2ccccc21", (8.3,), 0.1),
    (
        "thymol blue",
        "CC(C)c1cc(C2(c3cc(C(C)C)c(O)cc3C)OS(=O)(=O)c3ccccc32)c(C)cc1O",
        (9.0,),
        0.2,
    ),
    (
        "bromocresol green",
        "Cc1c(C2(c3cc(Br)c(O)c(Br)c3C)OS(=O)(=O)c3ccccc32)cc(Br)c(O)c1Br",
        (4.7,),
        0.2,
    ),
)

RULED: tuple[Row, ...] = (
    # 2-arylazo-8-amino-1-naphthol-3,6-disulfonates: the amino group holds the hydrazone (Serjeant1979)
    (
        "4-methylphenylazo-H acid",
        "Cc1ccc(N=Nc2c(S(=O)(=O)O)cc3cc(S(=O)(=O)O)cc(N)c3c2O)cc1",
        (12.64,),
        0.1,
    ),
    # o,o'-dihydroxyazo (Serjeant1979)
    (
        "2-hydroxyphenylazo chromotropic acid",
        "O=S(=O)(O)c1cc(O)c2c(O)c(N=Nc3ccccc3O)c(S(=O)(=O)O)cc2c1",
        (7.6, 10.6),
        0.1,
    ),
    ("calmagite", "Cc1ccc(O)c(N=Nc2c(O)cc(S(=O)(=O)O)c3ccccc23)c1", (8.14, 12.35), 0.3),
    ("calcon", "O=S(=O)(O)c1cc(O)c(N=Nc2c(O)ccc3ccccc23)c2ccccc12", (7.4, 13.5), 0.4),
    ("tropaeolin O", "O=S(=O)(O)c1ccc(N=Nc2ccc(O)cc2O)cc1", (6.7, 11.9), 0.4),
    ("chrysoidine", "Nc1ccc(N=Nc2ccccc2)c(N)c1", (5.3,), 0.2),
    ("tropaeolin OO", "O=S(=O)(O)c1ccc(N=Nc2ccc(Nc3ccccc3)cc2)cc1", (2.0,), 0.5),
    # heteroaryl azo dyes (memory:hetarylazo)
    ("PAR", "Oc1ccc(N=Nc2ccccn2)c(O)c1", (3.0, 5.6, 11.9), 0.2),
    ("TAR", "Oc1ccc(N=Nc2nccs2)c(O)c1", (1.0, 6.2, 9.4), 0.3),
    ("PAN", "Oc1ccc2ccccc2c1N=Nc1ccccn1", (2.4, 11.8), 0.5),
    # naphthylamine azo dyes take their proton at the azo nitrogen (memory:Bishop1972)
    ("naphthyl red", "Nc1ccc(N=Nc2ccccc2)c2ccccc12", (4.2,), 0.3),
    (
        "Congo red",
        "Nc1c(N=Nc2ccc(-c3ccc(N=Nc4cc(S(=O)(=O)O)c5ccccc5c4N)cc3)cc2)cc(S(=O)(=O)O)c2ccccc12",
        (4.1,),
        0.5,
    ),
    ("8-hydroxyquinoline", "Oc1cccc2cccnc12", (5.0, 9.81), 0.1),
    ("5,7-dichloro-8-hydroxyquinoline", "Oc1c(Cl)cc(Cl)c2cccnc12", (2.9, 7.4), 0.2),
    ("indophenol", "O=C1C=CC(=Nc2ccc(O)cc2)C=C1", (8.1,), 0.1),
    ("2,6-dichloroindophenol", "O=C1C(Cl)=CC(=Nc2ccc(O)cc2)C=C1Cl", (5.7,), 0.2),
    ("2,2'-dihydroxybiphenyl", "Oc1ccccc1-c1ccccc1O", (7.6, 13.0), 0.7),
    # acid NH groups (memory:Stewart1963), with a sulfonate on the far ring (Serjeant1979)
    ("2,4-dinitrodiphenylamine", "O=[N+]([O-])c1ccc(Nc2ccccc2)c([N+](=O)[O-])c1", (13.84,), 0.2),
    ("2,4-dinitroaniline", "Nc1ccc([N+](=O)[O-])cc1[N+](=O)[O-]", (15.0,), 0.2),
    (
        "picrylmetanilic acid",
        "O=[N+]([O-])c1cc([N+](=O)[O-])c(Nc2cccc(S(=O)(=O)O)c2)c([N+](=O)[O-])c1",
        (10.28,),
        0.1,
    ),
    ("6-methyl-1,2,3,4-tetrahydroquinoxaline", "Cc1ccc2c(c1)NCCN2", (2.03, 4.97), 0.1),
    # a carbonyl group beside the hydroxyl, held near or turned away by its ring (Serjeant1979)
    ("8-hydroxy-5-nitro-1-tetralone", "O=C1CCCc2c([N+](=O)[O-])ccc(O)c21", (8.5,), 0.1),
    ("7-hydroxy-4-nitro-1-indanone", "O=C1CCc2c([N+](=O)[O-])ccc(O)c21", (5.27,), 0.1),
    ("7-hydroxy-2,3-dimethylbenzofuran", "Cc1oc2c(O)cccc2c1C", (9.07,), 0.1),
)


@pytest.fixture(scope="module")
def door() -> MoleculeDoor:
    library = load_library()
    return MoleculeDoor(library, shipped_model(library))


def misses(door: MoleculeDoor, rows: tuple[Row, ...]) -> list[Miss]:
    """Remembered steps beside predicted ones; the memory's doubt, about two standard errors, is added."""
    found = []
    for name, smiles, pkas, doubt in rows:
        told = door.predict(smiles)
        parts = zip(told.macroscopic_pkas, told.macroscopic_sds, told.macroscopic_kinds, strict=True)
        steps = [Step(*part) for part in parts]
        places = match_steps([(f"pK{k}", pka) for k, pka in enumerate(pkas, 1)], steps)
        for pka, place in zip(pkas, places, strict=True):
            assert place is not None, name
            sd = hypot(steps[place].sd, doubt / 2)
            found.append(Miss(name, smiles, "", pka, steps[place].pka, sd))
    return found


def test_dyes_that_set_no_rule_are_predicted(door: MoleculeDoor) -> None:
    result = score("left out", misses(door, LEFT_OUT))
    # 0.45: what is asked of dyes, 0.40, and some of the doubt of the memory
    assert result.mean_best <= 0.45


def test_their_stated_intervals_hold(door: MoleculeDoor) -> None:
    # nine in ten less two binomial standard errors of some fifty values (0.04 each)
    assert score("left out", misses(door, LEFT_OUT)).coverage >= 0.82


@pytest.mark.parametrize("row", RULED, ids=lambda row: row[0])
def test_each_rule_does_what_it_was_made_for(door: MoleculeDoor, row: Row) -> None:
    for miss in misses(door, (row,)):
        # 0.7: the constants of one class scatter by half a unit, memory adds the rest
        assert miss.error == pytest.approx(0.0, abs=0.7)


def test_a_bis_azo_dye_of_chromotropic_acid_gets_all_its_steps(door: MoleculeDoor) -> None:
    told = door.predict(
        "O=S(=O)(O)c1cc(Cl)cc(N=Nc2c(S(=O)(=O)O)cc3cc(S(=O)(=O)O)c(N=Nc4cc(Cl)cc(S(=O)(=O)O)c4O)c(O)c3c2O)c1O"
    )
    # four sulfonic acids, four hydroxyls, two azo groups: ten printed constants (Serjeant1979)
    assert len(told.macroscopic_pkas) == 10
    assert any("hydrazone" in note for note in told.notes)
    # the last two are printed as 11.9 and 14.5; 1.5 is one stated standard error
    assert told.macroscopic_pkas[-2:] == pytest.approx((11.9, 14.5), abs=1.5)


def test_ortho_groups_act_more_between_1_and_2_than_between_2_and_3(door: MoleculeDoor) -> None:
    bare = door.predict("Nc1ccc2ccccc2c1").pka25
    # 1-nitro- and 3-nitro-2-naphthylamine: -0.85 and 1.48 (memory:compilations), the parent 4.16
    shifts = [
        door.predict(s).pka25 - bare for s in ("Nc1ccc2ccccc2c1[N+](=O)[O-]", "Nc1cc2ccccc2cc1[N+](=O)[O-]")
    ]
    assert shifts == pytest.approx([-5.0, -2.7], abs=0.6)  # two doubts of the memory


@pytest.mark.parametrize(
    ("smiles", "parent"),
    [
        ("Oc1c(S(=O)(=O)O)ccc2ccccc12", "Oc1cccc2ccccc12"),
        ("O=S(=O)(O)c1ccc2cc(O)c(S(=O)(=O)O)cc2c1", "O=S(=O)(O)c1ccc2cc(O)ccc2c1"),
    ],
)
def test_a_sulfonate_beside_a_naphthols_hydroxyl_does_not_make_it_an_acid(
    door: MoleculeDoor, smiles: str, parent: str
) -> None:
    # 1-naphthol-2-sulfonate 9.58 against 9.34, 2-naphthol-3,6-disulfonate 9.7 against 9.13
    # (memory:compilations)
    assert door.predict(smiles).pka25 > door.predict(parent).pka25 - 0.2


def test_azo_protonation_is_never_stated_as_sharp_as_an_anilines(door: MoleculeDoor) -> None:
    # residuals of aminoazobenzenes are about 0.3, whichever nitrogen takes the proton
    assert door.predict("Nc1ccc(/N=N/c2ccccc2)cc1").pka_sd >= 0.25
    assert door.predict("Nc1ccccc1Cl").pka_sd < 0.2
