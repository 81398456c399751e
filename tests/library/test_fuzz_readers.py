"""Does every reader answer every file with a result or with one line?"""

from __future__ import annotations

import csv
import io
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from tests.library.fuzz_readers import fuzz, outcome
from tuner.errors import LibraryError
from tuner.library.checks import closest, nearest
from tuner.library.load import read_own_measured
from tuner.library.stock import read_shelf
from tuner.library.tables import read_csv, read_toml

QUIET = settings(
    max_examples=120,
    derandomize=True,
    deadline=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)


@pytest.mark.parametrize("seed", range(4))
def test_spoiled_files_are_answered_with_a_result_or_one_line(seed: int) -> None:
    done, wrong = fuzz(seed, rounds=100)
    assert done == 100
    assert wrong == []


@QUIET
@given(content=st.binary(max_size=300))
def test_any_bytes(tmp_path: Path, content: bytes) -> None:
    path = tmp_path / "any.csv"
    path.write_bytes(content)
    assert outcome(lambda: read_csv(path, ("a",), ("b",))) == ""
    assert outcome(lambda: read_toml(path)) == ""


@QUIET
@given(content=st.text(alphabet=st.sampled_from("smilepka,;\"'\n\r\t#Oc1cc(C)N=[]+-*0.9e"), max_size=120))
def test_almost_a_table(tmp_path: Path, content: str) -> None:
    path = tmp_path / "almost.csv"
    path.write_text(f"smiles,pka\n{content}", encoding="utf-8", newline="")
    assert outcome(lambda: read_own_measured(path)) == ""
    path.write_text(f"name,smiles\n{content}", encoding="utf-8", newline="")
    assert outcome(lambda: read_shelf(path, roles=("base",))) == ""


CELL = st.text(st.characters(exclude_categories=("Cs", "Cc", "Zl", "Zp")), min_size=1, max_size=12).map(
    str.strip
)


@QUIET
@given(rows=st.lists(st.tuples(CELL.filter(bool), CELL), min_size=1, max_size=8))
def test_what_a_csv_writer_writes_is_read_back(tmp_path: Path, rows: list[tuple[str, str]]) -> None:
    text = io.StringIO()
    csv.writer(text).writerows([("first", "second"), *rows])
    path = tmp_path / "written.csv"
    path.write_text(text.getvalue(), encoding="utf-8", newline="")
    lines = text.getvalue().split("\r\n")[1:-1]
    kept = [row for row, line in zip(rows, lines, strict=True) if line.strip(" ,\t") and line[0] != "#"]
    if not kept:
        with pytest.raises(LibraryError, match="no row"):
            read_csv(path, ("first", "second"))
        return
    read = read_csv(path, ("first", "second"))
    assert [(row.cells["first"], row.cells["second"]) for row in read] == kept


@QUIET
@given(text=st.text(max_size=20), options=st.lists(st.text(min_size=1, max_size=8), max_size=30))
def test_a_remedy_is_always_one_of_the_options(text: str, options: list[str]) -> None:
    assert closest(text, options) in {"", *options}
    assert nearest(text, options)
