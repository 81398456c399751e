"""Whatever is thrown at the reader and the dissector: a dissection or one clear line, never anything else."""

from __future__ import annotations

import time
from collections.abc import Callable

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tuner.errors import StructureError
from tuner.library import load_library
from tuner.structure.dissect import dissect
from tuner.structure.groups import canonical_group
from tuner.structure.molecule import read_smarts
from tuner.structure.records import Dissection
from tuner.structure.scaffolds import index_cores

INDEX = index_cores(load_library().cores)
SLOWEST_S = 2.0
"""Far above what any of these takes (0.05 s); it catches explosions, not slow machines."""

WILD = {
    "porphyrin": "Oc1ccc(cc1)-c1c2nc(cc3ccc([nH]3)cc3nc(cc4ccc1[nH]4)C=C3)C=C2",
    "calixarene": "Oc1c2cccc1Cc1cccc(c1O)Cc1cccc(c1O)Cc1cccc(C2)c1O",
    "cubane": "Oc1ccc(cc1)C12C3C4C1C5C2C3C45",
    "many tert-butyls": "Oc1c(T)cc(T)cc1C(c1cc(T)cc(T)c1O)c1cc(T)cc(T)c1O".replace("T", "C(C)(C)C"),
    "perfluoro chain": "C(F)(F)" * 20 + "c1ccc(O)cc1",
    "peptide": "N" + "CC(=O)N" * 30 + "c1ccc(O)cc1",
    "large fused": "Oc1ccc2c(c1)ccc1c2ccc2c1ccc1c3ccccc3ccc12",
    "morphinan": "CN1CC[C@]23c4c5ccc(O)c4O[C@H]2[C@@H](O)CC[C@H]3[C@H]1C5",
    "azide": "[N-]=[N+]=Nc1ccc(O)cc1",
    "diazonium": "N#[N+]c1ccc([O-])cc1",
    "cationic dye": "CCN(CC)c1ccc2c(-c3ccccc3C(=O)O)c3ccc(=[N+](CC)CC)cc-3oc2c1",
    "spiropyran": "CN1c2ccccc2C(C)(C)C12C=Cc1cc([N+](=O)[O-])ccc1O2",
    "bis-azo": "O=S(=O)(O)c1cc(Cl)cc(N=Nc2c(S(=O)(=O)O)cc3cc(S(=O)(=O)O)c(N=Nc4cccc(Cl)c4O)c(O)c3c2O)c1O",
    "triphenylamine": "c1ccc(N(c2ccccc2)c2ccccc2)cc1",
    "water": "O",
    "helium": "[He]",
    "uranium": "[U]",
    "carbene": "[CH2]",
    "hydrogen": "[H][H]",
    "proton": "[H+]",
    "dendrimer of 500 atoms": "C(" * 250 + "C" + ")C" * 250,
    "ring of 120": "C1" + "C" * 118 + "C1",
    "macrocycle on a ring": "Oc1ccc2c(c1)" + "C" * 40 + "2",
    "three bridges": "Oc1c2CCc3c1CCc1c2CCc2c1CCC3C2",
}


@pytest.mark.parametrize("name", sorted(WILD))
def test_wild_molecules(name: str) -> None:
    start = time.perf_counter()
    found: list[Dissection] = []
    refusal = _refusal(lambda: found.append(dissect(WILD[name], INDEX)))
    assert bool(refusal) != bool(found)
    assert "\n" not in refusal
    assert all(g.smiles.count("*") == 1 for d in found for v in d.sites for g in v.groups)
    assert time.perf_counter() - start < SLOWEST_S


@settings(max_examples=300, deadline=None, derandomize=True)
@given(st.text(max_size=40))
def test_any_text(text: str) -> None:
    assert _answer(text)


@settings(max_examples=400, deadline=None, derandomize=True)
@given(st.text(alphabet="CNOScnos()[]=#123%+-*.BrClFHIP@/\\", max_size=30))
def test_almost_smiles(text: str) -> None:
    assert _answer(text)


TOKENS = (
    "c1ccccc1",
    "O",
    "N",
    "C",
    "(C)",
    "(=O)",
    "S(=O)(=O)",
    "[N+](=O)[O-]",
    "Cl",
    "N=N",
    "C1CC1",
    "[O-]",
    "c1cc(O)ccc1",
    "P",
    "B(O)O",
    "[nH]",
    "c2ccc3ccccc3c2",
    "[NH3+]",
    "C#N",
    "[As](=O)(O)O",
    "[Si](C)(C)C",
)


@settings(max_examples=400, deadline=None, derandomize=True)
@given(st.lists(st.sampled_from(TOKENS), max_size=9))
def test_shuffled_fragments(tokens: list[str]) -> None:
    assert _answer("".join(tokens))


def _refusal(work: Callable[[], object]) -> str:
    """The error's text, or nothing where the work was done."""
    try:
        work()
    except StructureError as error:
        return error.text
    return ""


def _answer(text: str) -> bool:
    """Whether reading, cutting and spelling each work or refuse in one line."""
    refusals = [_refusal(lambda work=work: work(text)) for work in (dissect_it, canonical_group, read_smarts)]  # type: ignore[misc]
    return all("\n" not in refusal for refusal in refusals)


def dissect_it(text: str) -> Dissection:
    """Dissect with the shipped cores."""
    return dissect(text, INDEX)
