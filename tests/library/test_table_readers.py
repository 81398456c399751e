"""Does a slip in a table get named by file and row or key, with what would be right?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tuner.errors import BriefError, LibraryError
from tuner.library.checks import nearest
from tuner.library.tables import read_csv, read_toml


def written(tmp_path: Path, text: str | bytes, name: str = "table.csv") -> Path:
    path = tmp_path / name
    path.write_bytes(text if isinstance(text, bytes) else text.encode())
    return path


def test_comments_blank_lines_and_quotes(tmp_path: Path) -> None:
    path = written(tmp_path, '# what columns mean\n\nname,value\n"a, b",1\n,,\nc,2\n')
    rows = read_csv(path, ("name", "value"))
    assert [(row.text("name"), row.number("value"), row.line) for row in rows] == [
        ("a, b", 1.0, 4),
        ("c", 2.0, 6),
    ]


def test_byte_order_mark_and_windows_line_ends(tmp_path: Path) -> None:
    rows = read_csv(written(tmp_path, b"\xef\xbb\xbfname\r\na\r\nb\r\n"), ("name",))
    assert [row.text("name") for row in rows] == ["a", "b"]


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", ["the file is empty", "name"]),
        ("# only a comment\n", ["the file is empty"]),
        ("name,value\n", ["no row"]),
        ("name\na\n", ['column "value" is missing', "row 1"]),
        ("name,valeu\na,1\n", ['column "valeu" is not known', 'did you mean "value"?']),
        ("name,value,\na,1,\n", ["a column has no name"]),
        ("name,value,value\na,1,1\n", ['"value" stands twice']),
        ("name;value\na;1\n", ["not separated by commas"]),
        ("name,value\na\n", ["1 cells but the header has 2", "row 2"]),
        ("name,value\na,1,2\n", ["3 cells", "double quotes"]),
        ('name,value\n"a,1\n', ["cannot be read", "row 2"]),
        (b"name,value\n\xff\xfe,1\n", ["not UTF-8"]),
    ],
)
def test_malformed_csv(tmp_path: Path, text: str | bytes, said: list[str]) -> None:
    with pytest.raises(LibraryError) as caught:
        read_csv(written(tmp_path, text), ("name", "value"))
    assert "table.csv" in caught.value.text
    assert "\n" not in caught.value.text
    for words in said:
        assert words in caught.value.text


@pytest.mark.parametrize(
    ("cell", "said"),
    [
        ("abc", ['"abc" is not a number', "0.37"]),
        ('"0,37"', ['"0,37" is not a number', "a point as decimal sign"]),
        ("nan", ["out of range"]),
        ("inf", ["out of range"]),
        ("3.5", ["3.5 is out of range", "between -3 and 3"]),
    ],
)
def test_not_a_sound_number(tmp_path: Path, cell: str, said: list[str]) -> None:
    row = read_csv(written(tmp_path, f"value\n{cell}\n"), ("value",))[0]
    with pytest.raises(LibraryError) as caught:
        row.number("value", -3, 3)
    assert "row 2, column value" in caught.value.text
    for words in said:
        assert words in caught.value.text


def test_empty_cell_is_unknown_and_never_zero(tmp_path: Path) -> None:
    row = read_csv(written(tmp_path, "value,other\n,x\n"), ("value", "other"))[0]
    unknown = row.number("value")
    assert unknown != unknown


def test_flags_lists_and_whole_numbers(tmp_path: Path) -> None:
    row = read_csv(written(tmp_path, "flag,list,n\nyes, a ; b;,2\n"), ("flag", "list", "n"))[0]
    assert row.flag("flag") is True
    assert row.listing("list") == ("a", "b")
    assert row.whole("n", 0, 3) == 2


@pytest.mark.parametrize(("column", "said"), [("flag", "neither yes nor no"), ("n", "not a whole number")])
def test_wrong_flag_and_fraction(tmp_path: Path, column: str, said: str) -> None:
    row = read_csv(written(tmp_path, "flag,n\ntrue,1.5\n"), ("flag", "n"))[0]
    with pytest.raises(LibraryError, match=said):
        row.flag("flag") if column == "flag" else row.whole("n", 0, 3)


def test_absent_file_and_folder_in_its_place(tmp_path: Path) -> None:
    with pytest.raises(LibraryError, match="does not exist"):
        read_csv(tmp_path / "none.csv", ("a",))
    with pytest.raises(LibraryError, match=r"cannot be read \(Is a directory\)"):
        read_csv(tmp_path, ("a",))


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", "the file is empty"),
        ("a = \n", "not valid TOML"),
        ("a = 1\na = 2\n", "not valid TOML"),
        ("x = " + "[" * 3000, "TOML|nested"),
    ],
)
def test_malformed_toml(tmp_path: Path, text: str, said: str) -> None:
    with pytest.raises(LibraryError, match=said):
        read_toml(written(tmp_path, text, "t.toml"))


@pytest.mark.parametrize(
    ("toml", "call", "said"),
    [
        ("n = true", lambda t: t.number("n"), "true is of the wrong kind"),
        ('n = "4"', lambda t: t.number("n"), '"4" is of the wrong kind'),
        ("n = nan", lambda t: t.number("n"), "out of range"),
        ("n = 1", lambda t: t.number("m"), "the key is missing"),
        ("n = 1.5", lambda t: t.whole("n", 0, 9), "of the wrong kind"),
        ("n = 1", lambda t: t.flag("n"), "true or false"),
        ("n = 1", lambda t: t.text("n"), "a text between double quotes"),
        ('n = " "', lambda t: t.text("n"), "the text is empty"),
        ("n = [1]", lambda t: t.texts("n"), "is not a text"),
        ("n = 1", lambda t: t.table("n"), "it must be a table"),
        ("n = 1", lambda t: t.only("m"), "the key is not known; known are m"),
        ('n = "orto"', lambda t: t.one_of("n", ("ortho", "para")), 'did you mean "ortho"'),
    ],
)
def test_wrong_kind_of_value(tmp_path: Path, toml: str, call: object, said: str) -> None:
    table = read_toml(written(tmp_path, f"[a.b]\n{toml}\n", "t.toml"), BriefError).table("a").table("b")
    assert callable(call)
    with pytest.raises(BriefError) as caught:
        call(table)
    assert said in caught.value.text
    assert "key a.b" in caught.value.text


def test_nearest_name_or_the_first_ones() -> None:
    assert nearest("Metoxy", ["methoxy", "nitro"]) == 'did you mean "methoxy"?'
    assert nearest("xyz", ["b", "a"]) == "known are a, b"
    assert nearest("xyz", [f"g{n:02}" for n in range(20)]).endswith("and 8 more")
    assert nearest("x", []) == "there is none to choose from"
