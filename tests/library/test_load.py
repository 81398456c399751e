"""Does the loader join the shipped tables and the user's own, and refuse what is not sound?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tuner.errors import LibraryError
from tuner.library import load_library, read_own_measured
from tuner.library.folders import data_version
from tuner.library.load import read_library


def test_sound_folder(folder: Path) -> None:
    library = read_library(folder)
    assert list(library.substituents) == ["H", "NO2", "OMe", "CO2H", "CO2-"]
    assert library.substituents["NO2"].sigma_para.value == 0.78
    assert library.substituents["NO2"].sigma_meta.known is False
    assert library.series["phenol"].enthalpy_slope_kj_mol == 2.3
    assert library.cores["phenol"].labels == {2: "2", 4: "4"}
    assert library.cores["phenol"].given_positions["2"].given is True
    assert library.measured[0].pka == 9.99


def test_same_folder_is_read_once_until_a_file_changes(folder: Path) -> None:
    first = read_library(folder)
    assert read_library(folder) is first
    with (folder / "measured_pka.csv").open("a") as file:
        file.write("p-cresol,Cc1ccc(O)cc1,10.26,,25,Book1979\n")
    assert len(read_library(folder).measured) == 2


@pytest.mark.parametrize("word", ["NO2", "nitro", "Nitro", "no2", "*[N+](=O)[O-]"])
def test_a_group_is_found_by_what_a_chemist_calls_it(folder: Path, word: str) -> None:
    assert read_library(folder).find_substituent(word).short == "NO2"


def test_unknown_group_core_and_series_suggest_the_nearest(folder: Path) -> None:
    library = read_library(folder)
    with pytest.raises(LibraryError, match='did you mean "methoxy"'):
        library.find_substituent("metoxy")
    with pytest.raises(LibraryError, match='did you mean "phenol"'):
        library.find_core("fenol")
    with pytest.raises(LibraryError, match='did you mean "benzoic_acid"'):
        library.find_series("benzoic acids")


def test_references_are_spelled_out(folder: Path) -> None:
    library = read_library(folder)
    assert library.reference("Book1979 p. 12; own") == "A book, 1979 (p. 12); the user's own data"
    with pytest.raises(LibraryError, match='no source "Book1997"'):
        library.reference("Book1997")


def spoil(folder: Path, name: str, old: str, new: str) -> Path:
    path = folder / name
    text = path.read_text()
    assert old in text
    path.write_text(text.replace(old, new, 1))
    return folder


@pytest.mark.parametrize(
    ("name", "old", "new", "said"),
    [
        (
            "substituents.csv",
            "0.78",
            "7.8",
            ["row 4, column sigma_para", "7.8 is out of range", "between -3 and 3"],
        ),
        ("substituents.csv", "0.78", "0.78,", ["row 4", "cells but the header"]),
        (
            "substituents.csv",
            "*OC,",
            "OC,",
            ["row 5, column smiles", "0 attachment points", "mark one with *"],
        ),
        ("substituents.csv", "methoxy,OMe", "methoxy,NO2", ["row 5, column short", '"NO2" stands twice']),
        ("substituents.csv", "methoxy,", "nitro,", ['"NO2" and "OMe" have the same name nitro']),
        ("substituents.csv", "*OC,", "*[N+](=O)[O-],", ["have the same smiles"]),
        (
            "substituents.csv",
            "Book1979",
            "Book1997",
            ["row 3", 'no source "Book1997"', 'did you mean "Book1979"'],
        ),
        (
            "substituents.csv",
            "benzoic_acid",
            "benzoic",
            ["row 6, column ionises", 'did you mean "benzoic_acid"'],
        ),
        ("substituents.csv", ",CO2-,,Book", ",CO2m,,Book", ["row 6, column other_form", 'no group "CO2m"']),
        ("series.toml", "9.99", "99", ["key series.phenol.parent_pka.value", "between -15 and 25"]),
        ("series.toml", "rho =", "rhoo =", ["key series.phenol.rhoo", 'did you mean "rho"']),
        (
            "series.toml",
            "acid_charge = 0\nenth",
            'acid_charge = "0"\nenth',
            ["acid_charge", "a whole number"],
        ),
        ("cores.toml", "[*:2]", "[*:3]", ["key core.phenol.positions.2", "open positions are 3, 4"]),
        ("cores.toml", "[*:2]", "[*:4]", ["two open positions are called the same"]),
        ("cores.toml", "Oc1c([*:2])cc([*:4])cc1", "Oc1ccccc1", ["no open position"]),
        ("cores.toml", '"ortho"', '"orto"', ["positions.2.relation", 'did you mean "ortho"']),
        ("cores.toml", 'series = "phenol"', 'series = "phenols"', ["core.phenol", 'no series "phenols"']),
        ("cores.toml", '"Book1979 p. 12"', '"Buch1979"', ["core.phenol", 'did you mean "Book1979"']),
        ("cores.toml", '["colourless", "yellow"]', '["yellow"]', ["there are 1 colours"]),
        ("measured_pka.csv", "9.99", "99.9", ["row 2, column pka", "99.9 is out of range"]),
        ("measured_pka.csv", "9.99", "", ["row 2, column pka", "the cell is empty"]),
        ("sources.toml", '"own"', '"my own"', ["a source key is one word"]),
    ],
)
def test_slips(folder: Path, name: str, old: str, new: str, said: list[str]) -> None:
    with pytest.raises(LibraryError) as caught:
        read_library(spoil(folder, name, old, new))
    text = caught.value.text
    assert name in text
    assert "\n" not in text
    for words in said:
        assert words in text


def test_a_missing_shipped_file_is_named(folder: Path) -> None:
    (folder / "cores.toml").unlink()
    with pytest.raises(LibraryError, match=r"cores\.toml: the file does not exist"):
        read_library(folder)


def test_users_rows_replace_and_extend(folder: Path, tmp_path: Path) -> None:
    own = tmp_path / "own"
    own.mkdir()
    (own / "substituents.csv").write_text(
        "name,short,smiles,sigma_para\nnitro,NO2,*[N+](=O)[O-],0.8\nmine,X,*CCl,0.1\n"
    )
    (own / "cores.toml").write_text('[core."mine"]\nsmiles = "Oc1c([*:2])cccc1"\nseries = "phenol"\n')
    library = read_library(folder, own)
    assert library.substituents["NO2"].sigma_para.value == 0.8
    assert library.substituents["NO2"].source == "own"
    assert library.find_substituent("mine").smiles == "*CCl"
    assert library.find_core("mine").title == "mine"
    assert set(library.cores) == {"phenol", "mine"}


def test_users_row_for_a_shipped_structure_must_use_its_short_name(folder: Path, tmp_path: Path) -> None:
    own = tmp_path / "own"
    own.mkdir()
    (own / "substituents.csv").write_text("name,short,smiles\nmine,X,*OC\n")
    with pytest.raises(LibraryError, match="give the row its short name"):
        read_library(folder, own)


def test_overlay_must_be_a_folder(tmp_path: Path) -> None:
    with pytest.raises(LibraryError, match="the library folder does not exist"):
        load_library(tmp_path / "none")


def test_users_measured_values(tmp_path: Path) -> None:
    path = tmp_path / "mine.csv"
    path.write_text("smiles,pka\nOc1ccccc1,9.9\n")
    value = read_own_measured(path)[0]
    assert (value.name, value.pka, value.temperature_c, value.source) == ("Oc1ccccc1", 9.9, 25.0, "own")
    path.write_text("smiles,pka\nOc1ccccc1,9.9\nOc1ccccc1,9.8\n")
    with pytest.raises(LibraryError, match=r"row 3, column smiles: .*stands twice"):
        read_own_measured(path)


def test_data_version_follows_contents_and_not_line_ends(folder: Path) -> None:
    before = data_version(folder)
    path = folder / "series.toml"
    path.write_bytes(path.read_bytes().replace(b"\n", b"\r\n"))
    assert data_version(folder) == before
    path.write_bytes(path.read_bytes().replace(b"9.99", b"9.98"))
    assert data_version(folder) != before


def test_an_empty_folder_changes_nothing_but_is_remembered(folder: Path, tmp_path: Path) -> None:
    own = tmp_path / "own"
    own.mkdir()
    plain, laid = read_library(folder), read_library(folder, own)
    # as text, since an unknown number is NaN, which equals nothing
    assert repr((laid.substituents, laid.series, laid.cores)) == repr(
        (plain.substituents, plain.series, plain.cores)
    )
    assert (laid.sources, laid.measured, laid.overlay) == (plain.sources, plain.measured, own)


def test_a_library_is_not_changed_by_reading_another(folder: Path, tmp_path: Path) -> None:
    plain = read_library(folder)
    before = repr(plain.substituents)
    own = tmp_path / "own"
    own.mkdir()
    (own / "substituents.csv").write_text("name,short,smiles,sigma_para\nnitro,NO2,*[N+](=O)[O-],0.9\n")
    read_library(folder, own)
    assert repr(plain.substituents) == before
