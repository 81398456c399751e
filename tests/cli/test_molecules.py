"""Is any sound table of molecules read, every column kept, and every slip named?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tuner.cli.molecules import read_molecules, renamed, with_columns
from tuner.errors import TunerError


def write(path: Path, text: str | bytes) -> Path:
    """A file of molecules."""
    path.write_bytes(text if isinstance(text, bytes) else text.encode("utf-8"))
    return path


def test_columns_rows_and_lines_arrive(tmp_path: Path) -> None:
    table = read_molecules(write(tmp_path / "m.csv", 'name,smiles\n"a, b",Oc1ccccc1\n\n"two\nlines",C\n'))
    assert table.columns == ("name", "smiles")
    assert table.rows == (("a, b", "Oc1ccccc1"), ("two\nlines", "C"))
    assert table.lines == (2, 5)
    assert table.smiles(1) == "C"


def test_a_byte_order_mark_and_foreign_line_ends_do_no_harm(tmp_path: Path) -> None:
    table = read_molecules(write(tmp_path / "m.csv", b"\xef\xbb\xbfsmiles,x\r\nC,1\r\n"))
    assert (table.columns, table.rows) == (("smiles", "x"), (("C", "1"),))


def test_rows_of_the_wrong_length_are_kept_and_marked(tmp_path: Path) -> None:
    table = read_molecules(write(tmp_path / "m.csv", "smiles,x\nC\nN,1,2\nO,1\n"))
    assert table.rows == (("C", ""), ("N", "1"), ("O", "1"))
    assert table.odd == {0, 1}


@pytest.mark.parametrize(
    ("text", "part"),
    [
        ("", "empty"),
        ("\n\n", "empty"),
        ("smiles\n", "no row"),
        ("SMILES\nC\n", 'write "smiles" in small letters, not "SMILES"'),
        ("structure,name\nC,a\n", "there are structure, name"),
        ("smiles;name\nC;a\n", "not separated by commas"),
        ("smiles,a,a\nC,1,2\n", '"a" stands twice'),
        (b"smiles\n\xff\n", "UTF-8"),
        ('smiles,name\n"Oc1ccccc1,a\nC,b\n', "comma-separated"),
    ],
)
def test_a_slip_in_the_table_is_named(tmp_path: Path, text: str | bytes, part: str) -> None:
    path = write(tmp_path / "m.csv", text)
    with pytest.raises(TunerError) as caught:
        read_molecules(path)
    assert part in caught.value.text
    assert str(path) in caught.value.text


def test_a_missing_file_is_named(tmp_path: Path) -> None:
    with pytest.raises(TunerError, match="does not exist"):
        read_molecules(tmp_path / "none.csv")


@pytest.mark.parametrize(
    ("columns", "kept"),
    [
        (("smiles", "name"), ("smiles", "name")),
        (("smiles", "pka"), ("smiles", "given_pka")),
        (("smiles", "pka", "given_pka"), ("smiles", "given_given_pka", "given_pka")),
    ],
)
def test_a_column_with_a_taken_name_is_kept_under_another(
    columns: tuple[str, ...], kept: tuple[str, ...]
) -> None:
    assert renamed(columns, ("pka", "note")) == kept


def test_the_table_comes_back_in_order_with_columns_added(tmp_path: Path) -> None:
    table = read_molecules(write(tmp_path / "m.csv", 'pka,smiles,name\n9.9,Oc1ccccc1,"a, b"\n1,C,\n'))
    written = with_columns(table, ("pka", "note"), [("9.99", ""), ("", "no phenol")])
    assert written.decode() == (
        'given_pka,smiles,name,pka,note\n9.9,Oc1ccccc1,"a, b",9.99,\n1,C,,,no phenol\n'
    )
