"""Which amines can an azo dye release, and is the list of the regulation met?"""

from __future__ import annotations

import pytest

from tuner.library import load_library
from tuner.screening.amines import may_hold_azo, released_amines
from tuner.screening.rules import RestrictedAmine, load_rules
from tuner.structure.cleavage import cleave_azo

RULES = load_rules(load_library())


@pytest.mark.parametrize(
    ("dye", "pieces"),
    [
        ("Oc1ccc(N=Nc2ccccc2)cc1", {"Nc1ccc(O)cc1", "Nc1ccccc1"}),
        ("Oc1ccc(/N=N/c2ccccc2)cc1", {"Nc1ccc(O)cc1", "Nc1ccccc1"}),  # the drawn geometry does not matter
        ("c1ccc(N=Nc2ccccc2)cc1", {"Nc1ccccc1"}),
        ("O=C1C=Cc2ccccc2C1=NNc1ccccc1C", {"Nc1c(O)ccc2ccccc12", "Cc1ccccc1N"}),  # drawn as the hydrazone
        ("Oc1ccccc1", set()),
        ("CC(C)(C#N)N=NC(C)(C)C#N", {"CC(C)(N)C#N"}),
    ],
)
def test_pieces(dye: str, pieces: set[str]) -> None:
    assert set(cleave_azo(dye)) == pieces


def test_a_disazo_dye_is_split_in_part_and_in_full() -> None:
    pieces = cleave_azo("Oc1ccc(N=Nc2ccc(N=Nc3ccccc3)cc2)cc1")
    assert set(pieces) == {
        "Nc1ccccc1",
        "Nc1ccc(O)cc1",
        "Nc1ccc(N)cc1",
        "Nc1ccc(N=Nc2ccccc2)cc1",
        "Nc1ccc(N=Nc2ccc(O)cc2)cc1",
    }
    assert list(pieces) == sorted(pieces)


def test_many_azo_bonds_stay_quick() -> None:
    dye = "c1ccccc1" + "N=Nc1ccc(cc1)" * 8 + "O"
    assert "Nc1ccccc1" in cleave_azo(dye)


def coupled_to_phenol(amine: str) -> str:
    """The azo dye that one amino group of an amine, diazotised, gives with phenol."""
    if "(N)" in amine:
        return amine.replace("(N)", "(N=Nc9ccc(O)cc9)", 1)
    return f"{amine}=Nc9ccc(O)cc9" if amine.endswith("N") else f"Oc9ccc(cc9)N={amine}"


@pytest.mark.parametrize("amine", RULES.amines, ids=lambda amine: amine.name)
def test_a_dye_made_from_a_listed_amine_releases_it(amine: RestrictedAmine) -> None:
    assert amine in released_amines(coupled_to_phenol(amine.smiles), RULES)


@pytest.mark.parametrize(
    ("dye", "name"),
    [
        ("Oc1ccc2ccccc2c1N=Nc1ccccc1C", "o-toluidine"),  # Oil Orange SS
        ("Oc1ccc(N=Nc2ccc(N=Nc3ccccc3)cc2)cc1", "4-aminoazobenzene"),
        ("Nc1ccc(N=Nc2ccccc2)cc1", "4-aminoazobenzene"),  # is itself on the list
        ("Nc1ccc(/N=N/c2ccccc2)cc1", "4-aminoazobenzene"),
        ("Nc1ccc(N=Nc2ccccc2C)cc1C", "o-aminoazotoluene"),
    ],
)
def test_well_known_dyes(dye: str, name: str) -> None:
    assert name in {amine.name for amine in released_amines(dye, RULES)}


@pytest.mark.parametrize(
    "dye", ["Oc1ccc(N=Nc2ccccc2)cc1", "CN(C)c1ccc(N=Nc2ccc(S(=O)(=O)O)cc2)cc1", "Cc1ccccc1O"]
)
def test_dyes_that_release_none(dye: str) -> None:
    assert released_amines(dye, RULES) == ()


@pytest.mark.parametrize(
    ("smiles", "azo"),
    [
        ("Oc1ccc(N=Nc2ccccc2)cc1", True),
        ("Oc1ccc(/N=N/c2ccccc2)cc1", True),
        ("O=C1C=Cc2ccccc2/C1=N/Nc1ccccc1C", True),
        ("Cc1ccccc1N/N=C1/C(=O)C=Cc2ccccc21", True),
        ("Oc1ccc(NN)cc1", False),
        ("Oc1ccccc1", False),
    ],
)
def test_a_look_at_the_text_misses_no_azo_bond(smiles: str, azo: bool) -> None:
    assert may_hold_azo(smiles) is azo
    assert azo or cleave_azo(smiles) == ()


def test_a_salt_of_a_listed_amine_is_that_amine() -> None:
    assert [amine.name for amine in released_amines("Cc1ccccc1[NH3+].[Cl-]", RULES)] == ["o-toluidine"]
