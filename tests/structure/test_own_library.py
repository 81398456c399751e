"""Are structures in a user's folder respelled, and refused by file and row where they are none?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tuner.errors import TunerError
from tuner.library import load_library
from tuner.structure.own_library import load_checked_library


def own(tmp_path: Path, **files: str) -> Path:
    folder = tmp_path / "own"
    folder.mkdir()
    for name, text in files.items():
        path = folder / name.replace("__", ".")
        path.write_text(text, encoding="utf-8")
    return folder


def test_without_a_folder_it_is_the_plain_library() -> None:
    assert load_checked_library() is load_library()


def test_a_users_group_is_found_however_it_was_spelled(tmp_path: Path) -> None:
    folder = own(tmp_path, substituents__csv="name,short,smiles\ncyclobutyloxy,OcBu,C1CC(C1)O*\n")
    library = load_checked_library(folder)
    assert library.substituents["OcBu"].smiles == "*OC1CCC1"
    found = library.find_by_smiles("*OC1CCC1")
    assert found is not None
    assert found.short == "OcBu"


CORE = '[core."mine"]\nsmiles = "SMILES"\nseries = "phenol"\n'


@pytest.mark.parametrize(
    ("name", "text", "said"),
    [
        ("substituents__csv", "name,short,smiles\nmine,X,C1CC(C1O*\n", "row 2, column smiles"),
        ("substituents__csv", "name,short,smiles\nmine,X,C=*\n", "substituents.csv"),
        ("substituents__csv", "name,short,smiles\nmine,X,CO*\n", 'same structure as "OMe"'),
        ("cores__toml", CORE.replace("SMILES", "Oc1c([*:2])cccc"), "key core.mine.smiles"),
        ("cores__toml", CORE.replace("SMILES", "Cc1c([*:2])cccc1"), "key core.mine.smiles"),
        (
            "cores__toml",
            CORE.replace("SMILES", "Oc1c([*:2])cccc1") + 'reporting_smarts = "[OH"\n',
            "key core.mine.reporting_smarts",
        ),
        ("measured_pka__csv", "name,smiles,pka\nmine,Oc1ccccc,9\n", "row 2, column smiles"),
    ],
)
def test_unsound_structures_are_named_by_place(tmp_path: Path, name: str, text: str, said: str) -> None:
    with pytest.raises(TunerError) as caught:
        load_checked_library(own(tmp_path, **{name: text}))
    assert said in caught.value.text
    assert "\n" not in caught.value.text
