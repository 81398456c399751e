"""Are structures in a user's folder respelled, and refused by file and row where they are none?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tuner.errors import TunerError
from tuner.library import load_library
from tuner.structure.own_library import load_checked_library, read_checked_measured


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


def test_users_measured_values_are_read_and_held_apart(tmp_path: Path) -> None:
    path = tmp_path / "mine.csv"
    path.write_text("smiles,pka\nOc1ccccc1,9.9\nCc1ccc(O)cc1,10.2\n")
    assert [value.pka for value in read_checked_measured(path)] == [9.9, 10.2]


@pytest.mark.parametrize(
    ("row", "said"),
    [
        ("c1ccc(O)cc1,9.8", 'row 3: "c1ccc(O)cc1" is the same compound as "Oc1ccccc1"'),
        ("[Na+].[O-]c1ccccc1,9.8", "is the same compound"),
        ("Oc1ccccc,9.8", "row 3, column smiles"),
        ("Oc1ccccc1.Cc1ccccc1,9.8", "row 3, column smiles"),
    ],
)
def test_unsound_measured_values(tmp_path: Path, row: str, said: str) -> None:
    path = tmp_path / "mine.csv"
    path.write_text(f"smiles,pka\nOc1ccccc1,9.9\n{row}\n")
    with pytest.raises(TunerError) as caught:
        read_checked_measured(path)
    assert said in caught.value.text
