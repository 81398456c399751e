"""A group is one string, however it is drawn; library rows and cut groups compare equal."""

from __future__ import annotations

import pytest

from tuner.errors import StructureError
from tuner.library import load_library
from tuner.structure.assemble import assemble
from tuner.structure.dissect import dissect
from tuner.structure.groups import canonical_group, is_group
from tuner.structure.scaffolds import SCAFFOLD_CORES


@pytest.mark.parametrize(
    ("drawn", "same"),
    [
        ("C*", "*C"),
        ("[*:3]C(=O)OCC", "CCOC(=O)[*]"),
        ("[1*]N(=O)=O", "O=[N+]([O-])*"),
        ("*/N=N/c1ccccc1", r"*/N=N\c1ccccc1"),
        ("*[S+]([O-])C", "*S(C)=O"),
        ("*C1=CC=CC=C1", "c1ccccc1*"),
        ("*[C@H](O)C", "*[C@@H](O)C"),
        ("[H]*", "*[H]"),
        ("*-c1cccs1", "*c1cccs1"),
    ],
)
def test_spellings_agree(drawn: str, same: str) -> None:
    assert canonical_group(drawn) == canonical_group(same)


def test_charge_belongs_to_the_group() -> None:
    assert canonical_group("*C(=O)[O-]") != canonical_group("*C(=O)O")


@pytest.mark.parametrize("bad", ["C", "*C*", "*=C", "*.C", "xyz", "", "*C.O"])
def test_not_a_group(bad: str) -> None:
    assert not is_group(bad)
    with pytest.raises(StructureError):
        canonical_group(bad, place="substituents.csv row 5")


def test_library_groups_come_back_from_molecules() -> None:
    """Every neutral, tabulated group on phenol at 4 is found as the same string."""
    phenol = SCAFFOLD_CORES["phenol"]
    missed = []
    seen = 0
    for group in load_library().substituents.values():
        if group.charge or group.smiles == "*[H]":
            continue
        seen += 1
        found = dissect(assemble(phenol, {"4": group.smiles}), {})
        views = [{g.label: g.smiles for g in v.groups} for v in found.sites if v.core == "phenol"]
        if {"4": group.smiles} not in views:
            missed.append((group.short, group.smiles, views))
    assert seen > 100
    assert missed == []
