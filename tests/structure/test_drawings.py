"""Drawings and connection tables: sound, the same bytes each time, and readable by others."""

from __future__ import annotations

import xml.etree.ElementTree as ElementTree
from collections.abc import Mapping

import pytest
from rdkit import Chem

from tuner.errors import StructureError
from tuner.library.records import Core
from tuner.structure.assemble import assemble
from tuner.structure.cores import form_of, prepare_core
from tuner.structure.depict import draw_analog, draw_core, draw_molecule
from tuner.structure.layout import core_layout, laid_out
from tuner.structure.matching import core_match
from tuner.structure.molecule import canonical_smiles, parse
from tuner.structure.sdf import mol_block, sdf_record

DYE = "O=[N+]([O-])c1ccc(N=Nc2ccc(O)c(Cl)c2)cc1"


def test_drawings_are_one_svg_element_without_ground() -> None:
    svg = draw_molecule(DYE, title="a < b & c")
    root = ElementTree.fromstring(svg)
    assert root.tag.endswith("svg")
    assert root[0].text == "a < b & c"
    assert "<rect" not in svg
    assert svg == draw_molecule(DYE, title="a < b & c")


def test_core_drawings_are_sound(cores: Mapping[str, Core]) -> None:
    for core in cores.values():
        svg = draw_core(core)
        assert ElementTree.fromstring(svg).tag.endswith("svg")
        assert svg == draw_core(core)
        assert "#003399" in svg  # locants are drawn in their own colour


def test_analogs_lie_on_their_core(cores: Mapping[str, Core]) -> None:
    core = cores["4-arylazophenol"]
    groups = {"6": "*Cl", "3'": "*C(=O)O"}
    mol = laid_out(assemble(core, groups), core, groups)
    match = core_match(mol, core, groups)
    assert match is not None
    laid, kept = core_layout(core.smiles)
    for bare_atom, atom in enumerate(match):
        here = mol.GetConformer().GetAtomPosition(atom)
        there = laid.GetConformer().GetAtomPosition(kept[bare_atom])
        assert (here.x, here.y) == pytest.approx(
            (there.x, there.y), abs=1e-3
        )  # the toolkit keeps fixed atoms


def test_the_wanted_labeling_is_drawn(cores: Mapping[str, Core]) -> None:
    core = cores["4-arylazophenol"]
    mol = parse(assemble(core, {"2": "*Cl"}))
    form = form_of(core)
    for label in ("2", "6"):
        match = core_match(mol, core, {label: "*Cl"})
        assert match is not None
        carrier = mol.GetAtomWithIdx(match[form.open_atoms[label]])
        assert "Cl" in [n.GetSymbol() for n in carrier.GetNeighbors()]


def test_a_stranger_is_drawn_by_itself(cores: Mapping[str, Core]) -> None:
    core = cores["4-arylazophenol"]
    assert draw_analog(core, "Oc1ccccc1") == draw_molecule("Oc1ccccc1")


def test_mol_block_reads_back_and_carries_no_date() -> None:
    block = mol_block(DYE, title="chloro\nnitro dye")
    lines = block.splitlines()
    assert lines[0] == "chloro nitro dye"
    assert lines[1] == "  tuner             2D"
    assert "V2000" in lines[3]
    assert Chem.MolToSmiles(Chem.MolFromMolBlock(block)) == canonical_smiles(DYE)
    assert block == mol_block(DYE, title="chloro\nnitro dye")
    assert "-0.0000" not in block


def test_sdf_records_read_back(tmp_path: object) -> None:
    text = sdf_record(DYE, {"pka": "7.1", "note": "two\nlines", "empty": ""}, title="dye")
    supplier = Chem.SDMolSupplier()
    supplier.SetData(text + sdf_record("Oc1ccccc1", {}, title="phenol"))
    first, second = list(supplier)
    assert dict(first.GetPropsAsDict()) == {"pka": 7.1, "note": "two lines"}
    assert (first.GetProp("_Name"), second.GetProp("_Name")) == ("dye", "phenol")
    assert text.endswith("$$$$\n")


@pytest.mark.parametrize("name", ["", "a<b", "a\nb"])
def test_bad_data_names(name: str) -> None:
    with pytest.raises(StructureError, match="data item"):
        sdf_record(DYE, {name: "1"})


def test_bad_structures_are_not_drawn() -> None:
    with pytest.raises(StructureError):
        draw_molecule("C(")
    with pytest.raises(StructureError):
        mol_block("")


def test_prepared_once(cores: Mapping[str, Core]) -> None:
    core = cores["1-naphthol"]
    assert prepare_core(core) is prepare_core(core)
