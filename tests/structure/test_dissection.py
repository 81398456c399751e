"""Dissection: textbook molecules come apart as a chemist would name them."""

from __future__ import annotations

from collections.abc import Mapping

import pytest
from rdkit import Chem

from tuner.errors import StructureError
from tuner.library.records import Core
from tuner.structure.dissect import OPENED_NOTE, dissect
from tuner.structure.records import SiteView
from tuner.structure.scaffolds import CoreIndex


def _groups(view: SiteView) -> dict[str, str]:
    return {g.label: g.smiles for g in view.groups}


@pytest.mark.parametrize(
    ("smiles", "core", "groups"),
    [
        ("Oc1ccccc1", "phenol", {}),
        ("Cc1cccc(Cl)c1O", "phenol", {"2": "*C", "6": "*Cl"}),
        ("Oc1cc(Cl)ccc1C", "phenol", {"2": "*C", "5": "*Cl"}),
        ("COc1cc(C=O)ccc1O", "phenol", {"2": "*OC", "4": "*C=O"}),
        ("CCN(C)c1ccc(N=O)cc1", "aniline", {"4": "*N=O", "N": "*C", "N'": "*CC"}),
        ("CC(C)Nc1ccccc1[N+](=O)[O-]", "aniline", {"2": "*[N+](=O)[O-]", "N": "*C(C)C"}),
        ("Oc1ccc2ccccc2c1", "2-naphthol", {}),
        ("Nc1ccc([N+](=O)[O-])c2ccccc12", "1-naphthylamine", {"4": "*[N+](=O)[O-]"}),
        ("O=[N+]([O-])c1ccc(N=Nc2ccc(O)c(C)c2)cc1", "4-arylazophenol", {"2": "*C", "4'": "*[N+](=O)[O-]"}),
        ("CN(C)c1ccc(N=Nc2ccccc2C(=O)O)cc1", "4-(dimethylamino)azobenzene", {"2'": "*C(=O)O"}),
        (
            "Cc1cc(C2(c3ccc(O)c(C)c3)OS(=O)(=O)c3ccccc32)ccc1O",
            "phenolsulfonephthalein",
            {"3'": "*C", "3''": "*C"},
        ),
        ("O=c1ccc2ccc(O)c(Cl)c2o1", "7-hydroxycoumarin", {"8": "*Cl"}),
    ],
)
def test_reporting_site(smiles: str, core: str, groups: Mapping[str, str], index: CoreIndex) -> None:
    found = dissect(smiles, index)
    assert found.sites[0].core == core
    assert _groups(found.sites[0]) == groups


def test_two_views_of_a_bridged_dye(index: CoreIndex) -> None:
    view = dissect("O=[N+]([O-])c1ccc(N=Nc2ccc(O)c(C)c2)cc1", index).sites[0]
    assert view.scaffold == "phenol"
    assert {g.label: g.smiles for g in view.scaffold_groups} == {
        "2": "*C",
        "4": "*N=Nc1ccc([N+](=O)[O-])cc1",
    }


def test_fixed_groups_of_a_core_appear_on_the_ring(index: CoreIndex) -> None:
    view = dissect("CN(C)c1ccc([N+](=O)[O-])cc1Cl", index).sites[0]
    on_ring = {g.label: g.smiles for g in view.scaffold_groups}
    assert on_ring == {"2": "*Cl", "4": "*[N+](=O)[O-]", "N": "*C", "N'": "*C"}


@pytest.mark.parametrize(
    ("smiles", "kinds"),
    [
        ("O=C(O)c1ccccc1O", ["phenol", "benzoic_acid"]),
        ("Nc1ccc(S(=O)(=O)O)cc1", ["aniline", "benzenesulfonic_acid"]),
        ("Nc1ccc([As](=O)(O)O)cc1", ["aniline", "phenylarsonic_acid", "phenylarsonic_acid"]),
        ("NC(Cc1ccc(O)cc1)C(=O)O", ["phenol", "aliphatic_acid", "aliphatic_amine"]),
        ("OB(O)c1ccc(N)cc1", ["aniline", "phenylboronic_acid"]),
        ("Nc1ccccc1S", ["aniline", "thiophenol"]),
        ("NS(=O)(=O)c1ccc(O)cc1", ["phenol", "benzenesulfonamide"]),
        ("N=C(N)NCCc1ccc(O)cc1", ["phenol", "guanidine"]),
        ("Oc1ccc(-c2ccncc2)cc1", ["phenol", "pyridine"]),
        ("CC(=O)Nc1ccc(O)cc1", ["phenol"]),
        ("CS(=O)(=O)N(C)c1ccc(O)cc1", ["phenol"]),
        ("Oc1ccncc1", ["hydroxyheteroarene", "pyridine"]),
        ("c1ccccc1", []),
        ("c1ccc2c(c1)[nH]c1ccccc12", []),
    ],
)
def test_which_sites_ionise(smiles: str, kinds: list[str], index: CoreIndex) -> None:
    found = [v.kind for v in dissect(smiles, index).sites]
    assert found[:1] == kinds[:1]
    assert sorted(found) == sorted(kinds)


def test_acids_on_rings_are_seen_from_the_acid(index: CoreIndex) -> None:
    sites = {v.kind: v for v in dissect("Nc1ccc(Cl)cc1C(=O)O", index).sites}
    assert _groups(sites["benzoic_acid"]) == {"2": "*N", "5": "*Cl"}
    assert _groups(sites["aniline"]) == {"2": "*C(=O)O", "4": "*Cl"}
    assert [label for _, label in sites["aniline"].other_sites] == ["2"]
    assert [label for _, label in sites["benzoic_acid"].other_sites] == ["2"]


def test_chains_between_sites(index: CoreIndex) -> None:
    sites = {v.kind: v for v in dissect("NC(Cc1ccc(O)cc1)C(=O)O", index).sites}
    assert _groups(sites["phenol"]) == {"4": "*CC(N)C(=O)O"}
    assert _groups(sites["aliphatic_acid"]) == {"1": "*C(N)Cc1ccc(O)cc1"}
    assert _groups(sites["aliphatic_amine"]) == {"N": "*C(Cc1ccc(O)cc1)C(=O)O"}
    assert {label for _, label in sites["phenol"].other_sites} == {"4"}


@pytest.mark.parametrize(
    ("smiles", "groups"),
    [
        ("Oc1ccc2c(c1)OCO2", {"3": "*OC", "4": "*OC"}),
        ("O=C1CCCc2cc(O)ccc21", {"3": "*CCC", "4": "*C(=O)CC"}),
        ("Oc1ccc2[nH]ccc2c1", {"3": "*C=C", "4": "*NC"}),
        ("Cc1cc(=O)oc2cccc(O)c12", {"2": "*C(C)=CC(=O)OC", "3": "*OC(C)=O"}),
        ("c1ccc2c(c1)CCN2", {"2": "*C", "N": "*C"}),
        ("Nc1ccc2c(c1)Cc1ccccc1-2", {"3": "*Cc1ccccc1", "4": "*c1ccccc1"}),
        ("O=[N+]([O-])c1ccc(N2CCCCC2)cc1", {"4": "*[N+](=O)[O-]", "N": "*CCCC", "N'": "*CCCC"}),
    ],
)
def test_rings_that_no_core_holds_are_opened(smiles: str, groups: Mapping[str, str]) -> None:
    found = dissect(smiles, {})
    assert _groups(found.sites[0]) == groups
    assert OPENED_NOTE in found.notes


def test_naphthalene_without_its_core_opens_alike_on_both_sides() -> None:
    assert _groups(dissect("Oc1ccc2ccccc2c1", {}).sites[0]) == {"3": "*C=CC", "4": "*C=CC"}


def test_a_whole_ring_is_better_than_a_larger_core(index: CoreIndex) -> None:
    view = dissect("Oc1ccc(-c2ccc3ccccc3c2)cc1", index).sites[0]
    assert (view.core, _groups(view)) == ("phenol", {"4": "*c1ccc2ccccc2c1"})


def test_diarylamine_is_seen_from_the_poorer_ring(index: CoreIndex) -> None:
    view = dissect("CN(c1ccc(Br)cc1)c1ccc([N+](=O)[O-])cc1[N+](=O)[O-]", index).sites[0]
    on_ring = {g.label: g.smiles for g in view.scaffold_groups}
    assert on_ring == {"2": "*[N+](=O)[O-]", "4": "*[N+](=O)[O-]", "N": "*C", "N'": "*c1ccc(Br)cc1"}


@pytest.mark.parametrize(
    ("smiles", "word"),
    [
        ("Oc1ccc2ccccc2c1N=Nc1ccccc1", "hydrazone"),
        ("Oc1ccc(N=Nc2ccccc2)c2ccccc12", "hydrazone"),
        ("O=Nc1ccc(O)cc1", "oxime"),
        ("CN(C)c1ccc(N=Nc2ccccc2)cc1", "azo nitrogen"),
    ],
)
def test_tautomers_are_mentioned(smiles: str, word: str, index: CoreIndex) -> None:
    assert any(word in note for note in dissect(smiles, index).notes)


def test_the_caller_can_choose_the_site(index: CoreIndex) -> None:
    aminophenol = "Nc1ccc(O)cc1"
    assert dissect(aminophenol, index).sites[0].kind == "phenol"
    assert dissect(aminophenol, index, reporting="aniline").sites[0].kind == "aniline"
    assert dissect(aminophenol, index, reporting=0).sites[0].kind == "aniline"
    with pytest.raises(StructureError, match="it has: phenol"):
        dissect(aminophenol, index, reporting="benzoic_acid")


def test_of_equal_phenols_the_more_acidic_reports(index: CoreIndex) -> None:
    view = dissect("Oc1ccccc1Cc1ccc(O)c(C#N)c1", index).sites[0]
    assert view.scaffold_groups[0].smiles == "*C#N"


@pytest.mark.parametrize(
    "smiles",
    [
        "Oc1c(Cl)cc([N+](=O)[O-])cc1C",
        "CN(CC)c1ccc(N=Nc2cc(C)ccc2C(=O)O)c(OC)c1",
        "Oc1ccc2cc(S(=O)(=O)O)ccc2c1N=Nc1ccc(Cl)cc1",
        "Cc1cc(C2(c3cc(C)c(O)c(Br)c3)OS(=O)(=O)c3ccccc32)cc(Br)c1O",
        "O=C1CCCc2c(O)c(N)ccc21",
        "NC(Cc1ccc(O)c(I)c1)C(=O)NCc1ccccc1O",
    ],
)
def test_every_spelling_gives_the_same(smiles: str, index: CoreIndex) -> None:
    mol = Chem.MolFromSmiles(smiles)
    first = dissect(smiles, index)
    for other in Chem.MolToRandomSmilesVect(mol, 12, 7):
        assert dissect(other, index) == first


def test_atoms_of_groups_are_disjoint_and_complete(index: CoreIndex) -> None:
    found = dissect("CN(CC)c1ccc(N=Nc2cc(C)ccc2C(=O)O)c(OC)c1", index)
    view = found.sites[0]
    atoms = [k for g in view.scaffold_groups for k in g.atoms]
    total = Chem.MolFromSmiles(found.smiles).GetNumAtoms()
    assert len(atoms) == len(set(atoms)) == total - 7  # ring and nitrogen


def test_mapping_and_index_agree(cores: Mapping[str, Core], index: CoreIndex) -> None:
    smiles = "O=C(O)c1cc(N=Nc2ccc(O)cc2)ccc1O"
    assert dissect(smiles, cores) == dissect(smiles, index)
