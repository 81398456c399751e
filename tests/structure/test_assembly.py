"""Assembly is the inverse of dissection, on any pattern of any shipped core."""

from __future__ import annotations

import random
from collections.abc import Mapping

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tuner.errors import StructureError
from tuner.library import load_library
from tuner.library.records import Core
from tuner.structure.assemble import assemble
from tuner.structure.cores import prepare_core
from tuner.structure.dissect import dissect
from tuner.structure.molecule import canonical_smiles, molar_mass
from tuner.structure.scaffolds import SCAFFOLD_CORES, CoreIndex, index_cores

LIBRARY = load_library()
INDEX = index_cores(LIBRARY.cores)
NAMES = tuple(LIBRARY.cores)
GROUPS = tuple(
    s.smiles
    for s in LIBRARY.substituents.values()
    if s.charge == 0 and s.smiles != "*[H]" and "[N+]=[N-]" not in s.smiles
)
WEIGHT_OF_HYDROGEN = 1.008


def test_by_hand() -> None:
    phenol = SCAFFOLD_CORES["phenol"]
    groups = {"2": "*c1ccccc1", "4": "*N=Nc1ccc2ccccc2c1", "6": "*OC"}
    by_hand = "Oc1c(-c2ccccc2)cc(N=Nc2ccc3ccccc3c2)cc1OC"
    assert assemble(phenol, groups) == canonical_smiles(by_hand)
    assert assemble(phenol, {}) == canonical_smiles("Oc1ccccc1")
    assert assemble(phenol, {"3": "*[H]"}) == canonical_smiles("Oc1ccccc1")
    assert assemble(SCAFFOLD_CORES["aniline"], {"N": "*C", "N'": "*CC"}) == canonical_smiles("CCN(C)c1ccccc1")


def test_bad_patterns_are_named() -> None:
    phenol = SCAFFOLD_CORES["phenol"]
    with pytest.raises(StructureError, match="position 7 is not open; open positions are 2, 3, 4, 5, 6"):
        assemble(phenol, {"7": "*C"})
    with pytest.raises(StructureError, match="no substituent"):
        assemble(phenol, {"2": "CC"})


@settings(max_examples=150, deadline=None, derandomize=True)
@given(st.data())
def test_round_trip(data: st.DataObject) -> None:
    """The molecule comes apart again, and what it comes apart into is the same molecule."""
    core = LIBRARY.cores[data.draw(st.sampled_from(NAMES))]
    labels = prepare_core(core).open_labels
    chosen = data.draw(st.lists(st.sampled_from(labels), unique=True, max_size=4))
    groups = {label: data.draw(st.sampled_from(GROUPS)) for label in chosen}
    smiles = assemble(core, groups)
    found = dissect(smiles, INDEX)
    for view in found.sites:
        if not view.core or "opened" in " ".join(found.notes):
            continue
        seen_as = SCAFFOLD_CORES.get(view.core) or LIBRARY.cores[view.core]
        assert assemble(seen_as, {g.label: g.smiles for g in view.groups}) == smiles
    images = _images(core, groups)
    same_core = [v for v in found.sites if v.core == core.name and core.name not in SCAFFOLD_CORES]
    if same_core:
        assert any({g.label: g.smiles for g in v.groups} in images for v in same_core)


def _images(core: Core, groups: Mapping[str, str]) -> list[dict[str, str]]:
    """The pattern under every symmetry of the core."""
    prepared = prepare_core(core)
    return [
        {
            prepared.open_labels[perm[k]]: groups[label]
            for k, label in enumerate(prepared.open_labels)
            if label in groups
        }
        for perm in prepared.symmetry
    ]


def test_symmetry_images_are_the_same_molecule() -> None:
    rng = random.Random(11)
    for core in LIBRARY.cores.values():
        labels = prepare_core(core).open_labels
        groups = {label: rng.choice(GROUPS[:40]) for label in rng.sample(labels, min(3, len(labels)))}
        assert {assemble(core, image) for image in _images(core, groups)} == {assemble(core, groups)}


def test_masses_add(index: CoreIndex) -> None:
    """Molar mass is a sum over positions, which the search relies on."""
    core = index.forms[0].core
    prepared = prepare_core(core)
    groups = dict(zip(prepared.open_labels, GROUPS, strict=False))
    added = prepared.bare_mass_g_mol + sum(molar_mass(g) - WEIGHT_OF_HYDROGEN for g in groups.values())
    assert molar_mass(assemble(core, groups)) == pytest.approx(added, abs=0.01)  # rounding of atomic masses
