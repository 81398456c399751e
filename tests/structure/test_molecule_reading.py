"""Reading: each kind of bad input has its own words; charges, salts and tautomers come out in one form."""

from __future__ import annotations

import subprocess
import sys

import pytest

from tuner.errors import StructureError
from tuner.structure.molecule import (
    MAX_HEAVY_ATOMS,
    atom_counts,
    canonical_smiles,
    has_match,
    identity_key,
    matches,
    molar_mass,
    properties,
    read_molecule,
    read_smarts,
)


@pytest.mark.parametrize(
    ("smiles", "words"),
    [
        ("", "empty"),
        ("   ", "empty"),
        ("C(", "cannot be read as SMILES"),
        ("CCO ethanol", "cannot be read as SMILES"),
        ("Zz", "cannot be read as SMILES"),
        ("φενόλη", "cannot be read as SMILES"),
        ("C\x00C", "cannot be read as SMILES"),
        ("CC(C)(C)(C)C", "atom 2 (C) too many bonds"),
        ("c1cccc1", "aromatic ring that no double bonds fit"),
        ("C" * (MAX_HEAVY_ATOMS + 1), f"{MAX_HEAVY_ATOMS + 1} heavy atoms"),
        ("C" * 500, "500 heavy atoms"),
        ("C" * 100_000, "characters long"),
        ("CCO.CCN", "mixture of 2 components"),
        ("[Na+].[Cl-]", "counter-ions only"),
        ("Oc1ccc([Hg]C)cc1", "contains Hg"),
        ("[Fe+2]", "contains Fe"),
        ("[O]c1ccccc1", "radical"),
        ("*c1ccccc1", "open position"),
    ],
)
def test_bad_input_is_named_in_one_line(smiles: str, words: str) -> None:
    with pytest.raises(StructureError) as caught:
        read_molecule(smiles, place="molecules.csv row 7")
    text = str(caught.value)
    assert words in text
    assert text.startswith("molecules.csv row 7: ")
    assert "\n" not in text


def test_long_strings_are_not_repeated_in_full() -> None:
    with pytest.raises(StructureError) as caught:
        read_molecule("C" * 3000)
    assert len(str(caught.value)) < 200  # one line of a terminal or two


@pytest.mark.parametrize("bad", ["[", "C(", "", "é"])
def test_bad_smarts_is_an_error(bad: str) -> None:
    with pytest.raises(StructureError, match="SMARTS"):
        read_smarts(bad, place="brief.toml, forbid")


@pytest.mark.parametrize(
    ("given", "treated"),
    [
        ("[O-]c1ccccc1", "Oc1ccccc1"),
        ("[NH3+]c1ccccc1", "Nc1ccccc1"),
        ("C[NH+](C)c1ccc(C(=O)[O-])cc1", "CN(C)c1ccc(C(=O)O)cc1"),
        ("[O-]S(=O)(=O)c1ccc(O)cc1", "O=S(=O)(O)c1ccc(O)cc1"),
        ("O=N(=O)c1ccc(O)cc1", "O=[N+]([O-])c1ccc(O)cc1"),
        ("C[S+]([O-])c1ccc(O)cc1", "CS(=O)c1ccc(O)cc1"),
        ("[O-][n+]1ccc(O)cc1", "[O-][n+]1ccc(O)cc1"),
        ("C[N+](C)(C)c1ccc([O-])cc1", "C[N+](C)(C)c1ccc(O)cc1"),
        ("[OH-].[B-](O)(O)(O)c1ccccc1", "OB(O)c1ccccc1"),
        ("c1cc[nH+]cc1", "c1ccncc1"),
        ("[N-]=[N+]=Nc1ccccc1", "[N-]=[N+]=Nc1ccccc1"),
        ("Cl.Nc1ccccc1", "Nc1ccccc1"),
        ("[K+].[O-]c1ccccc1.O", "Oc1ccccc1"),
        ("[2H]c1ccccc1O", "Oc1ccccc1"),
        # quinone hydrazones and oximes are the azo and nitroso phenols
        ("O=C1C=CC(=NNc2ccccc2)C=C1", "Oc1ccc(N=Nc2ccccc2)cc1"),
        ("O=C1C=Cc2ccccc2C1=NNc1ccccc1", "Oc1ccc2ccccc2c1N=Nc1ccccc1"),
        ("O=C1C=CC(=NO)C=C1", "O=Nc1ccc(O)cc1"),
        ("O=C1C(=NO)C=Cc2ccccc12", "O=Nc1ccc2ccccc2c1O"),
        # a quinone and a quinone imine without a hydrogen to move stay what they are
        ("O=C1C=CC(=O)C=C1", "O=C1C=CC(=O)C=C1"),
        ("O=C1C=CC(=Nc2ccccc2)C=C1", "O=C1C=CC(=Nc2ccccc2)C=C1"),
        # open and closed forms of the triarylmethane dyes are one compound
        (
            "O=C1C=CC(=C(c2ccc(O)cc2)c2ccccc2S(=O)(=O)O)C=C1",
            "O=S1(=O)OC(c2ccc(O)cc2)(c2ccc(O)cc2)c2ccccc21",
        ),
        ("O=C1C=CC(=C(c2ccc(O)cc2)c2ccccc2C(=O)O)C=C1", "O=C1OC(c2ccc(O)cc2)(c2ccc(O)cc2)c2ccccc21"),
        ("O=C1OC2(c3ccc(O)cc3Oc3cc(O)ccc32)c2ccccc21", "O=C(O)c1ccccc1-c1c2ccc(=O)cc-2oc2cc(O)ccc12"),
    ],
)
def test_one_form_per_compound(given: str, treated: str) -> None:
    assert read_molecule(given).smiles == canonical_smiles(treated)
    assert identity_key(given) == identity_key(treated)


def test_what_was_changed_is_said() -> None:
    notes = " | ".join(read_molecule("[Na+].[O-]c1ccc([2H])cc1").notes)
    assert "[Na+]" in notes
    assert "isotope" in notes
    assert "neutral form" in notes
    assert read_molecule("Oc1ccccc1").notes == ()
    assert "charge of +1" in read_molecule("C[N+](C)(C)c1ccc(O)cc1").notes[-1]


def test_atoms_lead_back_to_the_given_string() -> None:
    given = "[Na+].[O-]c1ccc(Cl)cc1"
    molecule = read_molecule(given)
    symbols = ["Na", "O", "C", "C", "C", "C", "Cl", "C", "C"]  # atoms of the string, counted by hand
    back = [symbols[k] for k in molecule.input_atoms]
    assert back == [a.GetSymbol() for a in molecule.mol.GetAtoms()]


def test_molar_mass_from_atomic_masses() -> None:
    # C6H5NO3 from the standard atomic masses 12.011, 1.008, 14.007, 15.999, added by hand
    assert molar_mass("O=[N+]([O-])c1ccc(O)cc1") == pytest.approx(
        139.110, abs=0.002
    )  # rounding of the masses
    assert properties("O=[N+]([O-])c1ccc(O)cc1").formula == "C6H5NO3"


def test_atom_counts_hold_hydrogen() -> None:
    assert atom_counts("OB(O)c1ccc(Br)cc1") == {"B": 1, "Br": 1, "C": 6, "H": 6, "O": 2}


def test_matches_are_places_in_the_given_string() -> None:
    assert matches("OCCO", "[OX2H1]") == ((0,), (3,))
    assert not has_match("COC", "[OX2H1]")


def test_reagents_may_be_salts_and_metals() -> None:
    assert canonical_smiles("[Na+].[N-]=O.[O]") != ""
    assert canonical_smiles("Cl[Sn]Cl") == canonical_smiles("[Cl][Sn][Cl]")


def test_toolkit_stays_silent() -> None:
    code = (
        "from tuner.structure.molecule import read_molecule\n"
        "from tuner.errors import StructureError\n"
        "for s in ('C(', 'c1cccc1', 'C(C)(C)(C)(C)C'):\n"
        "    try: read_molecule(s)\n"
        "    except StructureError: pass\n"
    )
    done = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, timeout=60, check=True
    )
    assert done.stderr == ""
    assert done.stdout == ""
