"""The molecule door: SMILES in, numbers or a reason out."""

from __future__ import annotations

import math

import pytest

from tuner.brief.records import Medium
from tuner.errors import BriefError
from tuner.library.catalogue import Library
from tuner.library.records import MeasuredPka
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor, predict_molecule

ROUNDING = 1e-9


@pytest.mark.parametrize(
    "smiles",
    [
        "", "   ", "not a molecule", "c1ccccc", "C1CC", "[Na+].[Cl-]", "CCO", "c1ccccc1", "CC(=O)O",
        "Oc1ccccc1.Nc1ccccc1", "[Cu]c1ccccc1O", "[CH2]c1ccccc1O", "Oc1cc[nH]c1*", "C" * 500,
        "c1cc(O)ccc1" + "C(=O)N" * 200, "O=[N+]([O-])c1", "[*]c1ccccc1O", "Oc1ccccc1\x00", "öl",
        "[O-]" * 50, "CN(C)(C)c1ccccc1O",
    ],
)  # fmt: skip
def test_what_cannot_be_treated_gets_a_note_and_no_number(door: MoleculeDoor, smiles: str) -> None:
    answer = door.predict(smiles)
    assert not answer.found
    assert math.isnan(answer.pka)
    assert answer.macroscopic_pkas == ()
    assert answer.notes
    assert all("\n" not in note for note in answer.notes)


@pytest.mark.parametrize(
    ("smiles", "core"),
    [
        ("Oc1ccccc1", "phenol"),
        ("Oc1ccc([N+](=O)[O-])cc1Cl", "4-nitrophenol"),
        ("Nc1ccc(/N=N/c2ccccc2)cc1", "4-aminoazobenzene"),
        ("Oc1cccc2cc(Cl)ccc12", "1-naphthol"),
        ("Cc1cc(=O)oc2cc(O)ccc12", "7-hydroxy-4-methylcoumarin"),
        ("O=S1(=O)OC(c2ccc(O)cc2)(c2ccc(O)cc2)c2ccccc21", "phenolsulfonephthalein"),
    ],
)
def test_the_best_matching_core_is_named(door: MoleculeDoor, smiles: str, core: str) -> None:
    assert door.predict(smiles).core == core


def test_an_unsubstituted_core_of_its_own_has_its_measured_parent(
    door: MoleculeDoor, library: Library
) -> None:
    for name, smiles in (("1-naphthol", "Oc1cccc2ccccc12"), ("7-hydroxycoumarin", "O=c1ccc2ccc(O)cc2o1")):
        assert door.predict(smiles).pka25 == pytest.approx(library.cores[name].parent_pka.value, abs=ROUNDING)


@pytest.mark.parametrize(
    ("one", "other"),
    [
        ("Oc1ccc(Cl)cc1", "[Na+].[O-]c1ccc(Cl)cc1"),
        ("Nc1ccc(Cl)cc1", "Cl.Nc1ccc(Cl)cc1"),
        ("Oc1ccc(C(=O)O)cc1", "OC(=O)c1ccc([O-])cc1"),
        ("Oc1ccc(/N=N/c2ccccc2)cc1", "O=C1C=CC(=NNc2ccccc2)C=C1"),
        ("Oc1ccc(N=Nc2ccccc2)cc1", "Oc1ccc(/N=N\\c2ccccc2)cc1"),
    ],
)
def test_salts_spellings_and_tautomers_of_one_compound_agree(
    door: MoleculeDoor, one: str, other: str
) -> None:
    assert door.predict(one).pka == pytest.approx(door.predict(other).pka, abs=ROUNDING)


def test_reporting_atom_is_that_of_the_given_string(door: MoleculeDoor) -> None:
    assert door.predict("c1ccc(O)cc1").reporting_atom == 4
    assert door.predict("Clc1ccc(N)cc1").reporting_atom == 5


def test_another_site_can_be_asked_for(door: MoleculeDoor) -> None:
    phenol = door.predict("Nc1ccc(O)cc1")
    aniline = door.predict("Nc1ccc(O)cc1", reporting="aniline")
    assert phenol.pka > 9.0 > 6.5 > aniline.pka
    assert phenol.macroscopic_pkas == pytest.approx(aniline.macroscopic_pkas)


@pytest.mark.parametrize(
    "smiles",
    ["Oc1ccccc1O", "Nc1ccc(C(=O)O)cc1", "N[C@@H](Cc1ccc(O)cc1)C(=O)O", "Oc1c(O)c(O)ccc1", "Nc1cccc(N)c1"],
)
def test_macroscopic_constants_ascend_and_have_errors(door: MoleculeDoor, smiles: str) -> None:
    answer = door.predict(smiles)
    assert list(answer.macroscopic_pkas) == sorted(answer.macroscopic_pkas)
    assert len(answer.macroscopic_pkas) == len(answer.macroscopic_sds) == len(answer.macroscopic_kinds)
    assert all(sd > 0.0 for sd in answer.macroscopic_sds)


def test_equal_groups_report_in_the_step_in_which_they_first_take_part(door: MoleculeDoor) -> None:
    answer = door.predict("Oc1ccccc1O")
    assert answer.pka == pytest.approx(answer.macroscopic_pkas[0], abs=ROUNDING)
    assert any("shares its proton" in note for note in answer.notes)


def test_terms_add_up_to_the_sites_own_constant(door: MoleculeDoor) -> None:
    answer = door.predict("Cc1cc([N+](=O)[O-])cc(C)c1O")
    assert sum(term.value for term in answer.terms) == pytest.approx(answer.pka25, abs=1e-6)
    assert all(term.source for term in answer.terms if term.label == "parent")


def test_an_estimated_group_is_named_in_the_notes_and_widens_the_error(door: MoleculeDoor) -> None:
    known, guessed = door.predict("Oc1cccc(Cl)c1"), door.predict("Oc1cccc([Si](C)(C)OC)c1")
    assert any("estimated" in note for note in guessed.notes)
    assert not any("estimated" in note for note in known.notes)
    assert guessed.pka_sd > known.pka_sd


@pytest.mark.parametrize(
    ("smiles", "word"),
    [
        ("Oc1ccc2ccccc2c1/N=N/c1ccccc1", "hydrazone"),
        ("O=Nc1ccc(O)cc1", "oxime"),
        ("Oc1c(N=Nc2ccccc2)ccc2cccc(N)c12", "hydrazone"),
        ("Nc1c([N+](=O)[O-])cc([N+](=O)[O-])cc1[N+](=O)[O-]", "acidity function"),
        ("[2H]Oc1ccccc1", "isotope"),
    ],
)
def test_what_must_be_said_is_said(door: MoleculeDoor, smiles: str, word: str) -> None:
    assert any(word in note for note in door.predict(smiles).notes)


def test_temperature_and_salt_act_on_the_conditional_constant_only(
    library: Library, door: MoleculeDoor
) -> None:
    model = shipped_model(library)
    warm = MoleculeDoor(library, model, Medium(temperature_c=45.0, ionic_strength_m=0.1)).predict(
        "Oc1ccc([N+](=O)[O-])cc1"
    )
    cold = door.predict("Oc1ccc([N+](=O)[O-])cc1")
    assert warm.pka25 == pytest.approx(cold.pka25, abs=ROUNDING)
    assert warm.pka < cold.pka - 0.2  # 17 kJ/mol over 20 K, and a tenth from salt
    assert warm.pka_sd > cold.pka_sd
    assert -0.02 < cold.dpka_dt < -0.005


def test_an_impossible_medium_is_refused(library: Library) -> None:
    with pytest.raises(BriefError, match="degrees Celsius"):
        MoleculeDoor(library, shipped_model(library), Medium(temperature_c=298.0))


def test_measured_values_stand_beside_the_prediction_and_own_ones_come_first(library: Library) -> None:
    own = MeasuredPka("mine", "Oc1ccc(Cl)cc1", 9.5, 0.05, 25.0, "own")
    door = MoleculeDoor(library, shipped_model(library), measured=[own])
    assert door.predict("[O-]c1ccc(Cl)cc1").known == own
    shipped = door.predict(library.measured[0].smiles).known
    assert shipped is not None
    assert shipped.source == library.measured[0].source
    assert door.predict("Oc1ccc(CCCCCCC)cc1").known is None


def test_the_short_way_in_gives_the_same(door: MoleculeDoor) -> None:
    assert predict_molecule("Oc1ccc(Cl)cc1").pka == pytest.approx(
        door.predict("Oc1ccc(Cl)cc1").pka, abs=ROUNDING
    )


def test_a_charged_neighbour_acts_with_its_own_constants(door: MoleculeDoor) -> None:
    acid, ester = door.predict("Oc1ccc(C(=O)O)cc1"), door.predict("Oc1ccc(C(=O)OC)cc1")
    assert acid.pka - ester.pka == pytest.approx(0.8, abs=0.3)  # 9.3 and 8.5 in the handbooks, to 0.1 each
    assert any(t.what == "carboxylato" for t in acid.terms)


def test_a_sulfonate_far_away_is_hardly_felt(door: MoleculeDoor) -> None:
    plain = door.predict("Nc1cccc2ccccc12").pka
    for smiles in ("Nc1cccc2c(S(=O)(=O)O)cccc12", "Nc1cccc2cc(S(=O)(=O)O)ccc12"):
        assert abs(door.predict(smiles).pka - plain) < 0.35


def test_what_the_medium_adds_is_told_cause_by_cause(library: Library) -> None:
    medium = Medium(
        temperature_c=37.0, ionic_strength_m=0.15, offset=0.2, offset_sd=0.05, surface_potential_mv=-20.0
    )
    answer = MoleculeDoor(library, shipped_model(library), medium).predict("Nc1ccc(Cl)cc1")
    assert [t.label for t in answer.medium_terms] == ["temperature", "ionic strength", "film", "surface"]
    assert answer.pka25 + sum(t.value for t in answer.medium_terms) == pytest.approx(answer.pka, abs=1e-6)
    for term in answer.medium_terms:
        assert library.reference(term.source)


def test_plain_water_at_25_degc_adds_nothing(door: MoleculeDoor) -> None:
    assert door.predict("Oc1ccccc1").medium_terms == ()
