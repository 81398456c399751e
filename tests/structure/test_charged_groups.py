"""Charged forms of groups, and a group seen one level at a time."""

from __future__ import annotations

import pytest

from tuner.structure.anatomy import Branch, anatomy, rebuild
from tuner.structure.charging import bonds_between, charged_groups, formal_charge
from tuner.structure.dissect import dissect


def test_each_group_is_charged_where_the_site_is() -> None:
    found = dissect("N[C@@H](Cc1ccc(O)cc1)C(=O)O", {})
    view = found.sites[0]
    amine = next(s.reporting_atom for s in found.sites if s.kind == "aliphatic_amine")
    acid = next(s.reporting_atom for s in found.sites if s.kind == "aliphatic_acid")
    assert charged_groups(found.smiles, view.groups, {amine: 1, acid: -1}) == {"4": "*CC([NH3+])C(=O)[O-]"}
    assert charged_groups(found.smiles, view.groups, {}) == {"4": "*CC(N)C(=O)O"}


def test_groups_without_a_charged_atom_stay() -> None:
    found = dissect("Cc1cc(C(=O)O)ccc1O", {})
    acid = next(s.reporting_atom for s in found.sites if s.kind == "benzoic_acid")
    assert charged_groups(found.smiles, found.sites[0].groups, {acid: -1}) == {"2": "*C", "4": "*C(=O)[O-]"}


def test_bonds_and_charge() -> None:
    assert bonds_between("NCC(=O)O", 0, 4) == 3
    assert formal_charge("C[n+]1ccccc1") == 1


@pytest.mark.parametrize(
    "smiles",
    [
        "*C(=O)OCC",
        "*N=Nc1ccccc1",
        "*S(=O)(=O)NC",
        "*CC#N",
        "*[NH+](C)C",
        "*C(F)(F)F",
        "*OCC(=O)O",
        "*C=CC(=O)O",
    ],
)
def test_a_group_can_be_taken_apart_and_put_together(smiles: str) -> None:
    built = anatomy(smiles)
    assert rebuild(built.entry, built.branches) == built.smiles


def test_a_ring_lists_what_it_carries_by_relation() -> None:
    built = anatomy("*c1cc(Cl)ccc1O")
    assert built.ring == "*c1ccccc1"
    assert built.on_ring == (("meta", "*Cl"), ("ortho", "*O"))


def test_nonsense_is_not_rebuilt() -> None:
    assert rebuild("C", (Branch(2, "*=O"), Branch(2, "*=O"), Branch(2, "*=O"))) == ""
