"""Do the worked changes of the contributor guide work as printed?

The code blocks are taken out of DEVELOPERS.md and put into a folder of one's own.
"""

from __future__ import annotations

import re
from pathlib import Path

import numpy as np
import pytest

from tuner.library import load_library
from tuner.library.reactions import load_reactions
from tuner.library.stock import read_shelf
from tuner.prediction.door import predict_molecule
from tuner.screening.screen import flag_names, screen
from tuner.structure.cores import prepare_core
from tuner.structure.molecule import canonical_smiles
from tuner.synthesis.planner import plan_core, steps_over
from tuner.synthesis.setting import Workshop

GUIDE = Path(__file__).resolve().parents[2] / "DEVELOPERS.md"


def printed(file: str) -> str:
    """The first code block after the words `own/FILE`."""
    text = GUIDE.read_text(encoding="utf-8")
    found = re.search(rf"`own/{re.escape(file)}`.*?```\w+\n(.*?)```", text, re.DOTALL)
    assert found is not None, f"the guide has no example for {file}"
    return found.group(1)


@pytest.fixture
def own(tmp_path: Path) -> Path:
    folder = tmp_path / "own"
    folder.mkdir()
    return folder


def test_a_group(own: Path) -> None:
    (own / "substituents.csv").write_text(printed("substituents.csv"), encoding="utf-8")
    library = load_library(own)
    group = library.find_substituent("cyclobutyloxy")
    assert canonical_smiles(group.smiles) == group.smiles
    found = predict_molecule("Oc1ccc(OC2CCC2)cc1", None, library)
    assert found.substitution == "4-OcBu"
    # 4-alkoxyphenols lie between 10.0 and 10.3 in print (4-methoxy 10.09); the guide's group is one of them
    assert found.pka == pytest.approx(10.15, abs=0.15)


def test_a_core(own: Path) -> None:
    (own / "cores.toml").write_text(printed("cores.toml"), encoding="utf-8")
    library = load_library(own)
    name = "7-hydroxy-4-(trifluoromethyl)coumarin"
    assert prepare_core(library.cores[name]).open_labels == ("3", "5", "6", "8")
    found = predict_molecule("O=c1cc(C(F)(F)F)c2ccc(O)cc2o1", None, library)
    assert (found.core, found.pka) == (name, 7.26)  # the parent that the example states


def test_a_core_and_the_joining_that_makes_it(own: Path) -> None:
    block = re.search(r"```toml\n(\[joining.*?)```", GUIDE.read_text(encoding="utf-8"), re.DOTALL)
    assert block is not None
    (own / "cores.toml").write_text(printed("cores.toml"), encoding="utf-8")
    (own / "reactions.toml").write_text(block.group(1), encoding="utf-8")
    library = load_library(own)
    core = library.cores["7-hydroxy-4-(trifluoromethyl)coumarin"]
    book = load_reactions(library.substituents, overlay=own)
    shelf = read_shelf("example", canonical=canonical_smiles)
    bare = [["H"]] * 4
    steps = steps_over(plan_core(Workshop(library, book, shelf), core, bare, 4), bare)
    # resorcinol and ethyl trifluoroacetoacetate stand on the shelf: one closure
    assert steps.at(np.zeros((1, 4), dtype=np.int64)).tolist() == [1]


def test_a_core_with_a_position_of_its_own(own: Path) -> None:
    text = GUIDE.read_text(encoding="utf-8")
    line = next(line for line in text.splitlines() if line.startswith('positions."3"'))
    (own / "cores.toml").write_text(printed("cores.toml") + line + "\n", encoding="utf-8")
    core = load_library(own).cores["7-hydroxy-4-(trifluoromethyl)coumarin"]
    assert prepare_core(core).slot("3").transmission == 0.45


def test_a_shelf(own: Path) -> None:
    path = own / "cupboard.csv"
    path.write_text(printed("cupboard.csv"), encoding="utf-8")
    items = read_shelf(path, canonical=canonical_smiles)
    assert [item.in_stock for item in items] == [True, True, False]
    assert all(item.roles for item in items)


def test_a_reaction(own: Path) -> None:
    (own / "reactions.toml").write_text(printed("reactions.toml"), encoding="utf-8")
    groups = load_library().substituents
    book = load_reactions(groups, overlay=own)
    dakin = next(rule for rule in book.reactions if rule.name == "Dakin oxidation")
    assert (dakin.takes, dict(dakin.gives)) == (("CHO",), {"OH": ""})
    assert set(book.names) == {*load_reactions(groups).names, "Dakin oxidation"}


def test_a_rule_of_caution(own: Path) -> None:
    (own / "hazards.toml").write_text(printed("hazards.toml"), encoding="utf-8")
    library = load_library(own)
    assert "no bromine" in flag_names(library)
    assert "no bromine" in screen(["Oc1ccc(Br)cc1"], library)[0].names
