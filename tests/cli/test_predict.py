"""Does `tuner predict` give a row for every molecule, and `tuner explain` a sum that adds up?"""

from __future__ import annotations

import csv
import re
from collections.abc import Callable
from math import nan
from pathlib import Path

import pytest

import tuner.cli.predict as predict_command
from tests.cli.conftest import Tuner
from tuner.cli.predict import ADDED, Desk
from tuner.errors import LibraryError, StructureError
from tuner.prediction.records import Prediction

MOLECULES = """\
name,smiles,pka
phenol,Oc1ccccc1,9.99
4-nitrophenol,Oc1ccc([N+](=O)[O-])cc1,7.15
nonsense,xyz,
toluene,Cc1ccccc1,
nothing,,
aniline,Nc1ccccc1,4.60
"""


@pytest.fixture
def table(tuner: Tuner) -> Path:
    """A small table in the working folder."""
    path = Path("molecules.csv")
    path.write_text(MOLECULES, encoding="utf-8")
    return path


def read(path: str) -> list[dict[str, str]]:
    """A CSV as rows."""
    with Path(path).open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def desk_of(predict: Callable[[str], Prediction]) -> Callable[..., Desk]:
    """Opens a desk at which this function predicts."""
    return lambda *asked: Desk(predict, lambda answer: nan, lambda smiles, wanted: (nan,) * len(wanted))


def test_order_and_input_columns_are_kept_and_the_promised_ones_added(tuner: Tuner, table: Path) -> None:
    seen = tuner("predict", str(table), "--out", "out.csv")
    assert seen.code == 0, seen.err
    rows = read("out.csv")
    assert list(rows[0]) == ["name", "smiles", "given_pka", *ADDED]
    assert [row["name"] for row in rows] == [
        "phenol",
        "4-nitrophenol",
        "nonsense",
        "toluene",
        "nothing",
        "aniline",
    ]
    assert rows[0]["given_pka"] == "9.99"
    assert "given_pka" in seen.err
    assert "3 of 6 molecules" in seen.out


def test_known_parents_come_out_as_measured(tuner: Tuner, table: Path) -> None:
    tuner("predict", str(table), "--out", "out.csv")
    rows = {row["name"]: row for row in read("out.csv")}
    # 0.1: the spread of repeated determinations of one compound
    assert float(rows["phenol"]["pka"]) == pytest.approx(9.99, abs=0.1)
    assert float(rows["4-nitrophenol"]["pka"]) == pytest.approx(7.15, abs=0.1)
    assert float(rows["aniline"]["pka"]) == pytest.approx(4.60, abs=0.1)
    assert rows["phenol"]["reporting_atom"] == "0"
    assert float(rows["phenol"]["pka_sd"]) > 0.0


def test_what_cannot_be_treated_gets_a_note_and_no_number(tuner: Tuner, table: Path) -> None:
    tuner("predict", str(table), "--out", "out.csv")
    for row in read("out.csv"):
        if row["name"] in ("nonsense", "toluene", "nothing"):
            assert (row["pka"], row["pka_sd"], row["macroscopic_pkas"]) == ("", "", "")
            assert row["note"]


def test_macroscopic_constants_ascend(tuner: Tuner) -> None:
    Path("m.csv").write_text("smiles\nOC(=O)c1ccc(O)cc1\nNc1ccc(O)cc1\n", encoding="utf-8")
    tuner("predict", "m.csv", "--out", "out.csv")
    for row in read("out.csv"):
        values = [float(value) for value in row["macroscopic_pkas"].split(";")]
        assert len(values) == 2
        assert values == sorted(values)


def test_the_medium_moves_the_number(tuner: Tuner, table: Path) -> None:
    tuner("predict", str(table), "--out", "cold.csv")
    tuner("predict", str(table), "--out", "warm.csv", "--temperature-c", "40", "--ionic-strength-m", "0.1")
    assert float(read("warm.csv")[0]["pka"]) < float(read("cold.csv")[0]["pka"]) - 0.2


def test_without_out_a_table_is_shown(tuner: Tuner, table: Path) -> None:
    seen = tuner("predict", str(table))
    assert "pKa' ± sd" in seen.out
    assert sorted(path.name for path in Path().iterdir()) == ["molecules.csv"]


@pytest.mark.parametrize(
    ("arguments", "part"),
    [
        (("--temperature-c", "298"), "degC"),
        (("--ionic-strength-m", "150"), "mol/L"),
        (("--out", "molecules.csv"), "replace the input"),
        (("--overlay", "none"), "library folder does not exist"),
        (("--cosolvent", "ethanol"), "without a share"),
        (("--cosolvent", "vodka", "--cosolvent-mass-percent", "40"), "'vodka' is not known"),
        (("--cosolvent", "ethanol", "--cosolvent-mass-percent", "95"), "outside 0 to 80"),
        (("--offset", "60"), "pKa units"),
        (("--offset-sd", "-1"), "offset-sd"),
        (("--surface-potential-mv", "5000"), "mV"),
        (("--surface-potential-mv", "nan"), "mV"),
        (("--at-ph", "74"), "pH 74 is outside"),
        (("--measured", "none.csv"), "none.csv"),
    ],
)
def test_a_slip_is_one_line_and_leaves_nothing(
    tuner: Tuner, table: Path, arguments: tuple[str, ...], part: str
) -> None:
    seen = tuner(
        "predict", str(table), *(("--out", "out.csv") if "--out" not in arguments else ()), *arguments
    )
    assert seen.code == 2
    assert part in seen.fault
    assert table.read_text(encoding="utf-8") == MOLECULES
    assert [path.name for path in Path().iterdir()] == ["molecules.csv"]


def test_a_defect_costs_one_row_and_not_the_table(
    tuner: Tuner, table: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def fails_on_aniline(smiles: str) -> Prediction:
        if smiles.startswith("N"):
            raise ZeroDivisionError
        return Prediction(smiles, pka=9.0, pka_sd=0.1)

    monkeypatch.setattr(predict_command, "open_desk", desk_of(fails_on_aniline))
    assert tuner("predict", str(table), "--out", "out.csv").code == 0
    notes = {row["name"]: row["note"] for row in read("out.csv")}
    assert "ZeroDivisionError" in notes["aniline"]
    assert notes["phenol"] == ""


def test_a_structure_that_a_rule_cannot_treat_costs_one_row(
    tuner: Tuner, table: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def fails_on_aniline(smiles: str) -> Prediction:
        if smiles.startswith("N"):
            raise StructureError("such a ring is not treated")
        return Prediction(smiles, pka=9.0, pka_sd=0.1)

    monkeypatch.setattr(predict_command, "open_desk", desk_of(fails_on_aniline))
    assert tuner("predict", str(table), "--out", "out.csv").code == 0
    rows = {row["name"]: row for row in read("out.csv")}
    assert (rows["aniline"]["pka"], rows["aniline"]["note"]) == ("", "such a ring is not treated")
    assert rows["phenol"]["pka"] == "9.00"


def test_a_fault_of_the_library_stops_the_table(
    tuner: Tuner, table: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def fails(smiles: str) -> Prediction:
        raise LibraryError("a cell is empty", place="groups.csv, row 3")

    monkeypatch.setattr(predict_command, "open_desk", desk_of(fails))
    seen = tuner("predict", str(table), "--out", "out.csv")
    assert (seen.code, Path("out.csv").exists()) == (2, False)
    assert "groups.csv, row 3" in seen.fault


def test_a_missing_column_is_named(tuner: Tuner) -> None:
    Path("m.csv").write_text("structure\nC\n", encoding="utf-8")
    seen = tuner("predict", "m.csv", "--out", "out.csv")
    assert seen.code == 2
    assert 'm.csv: column "smiles" is missing' in seen.fault


def test_an_explanation_adds_up(tuner: Tuner) -> None:
    seen = tuner("explain", "Oc1c(Cl)cc(C#N)cc1OC")
    assert seen.code == 0, seen.err
    rows = seen.out.split(" from\n")[1].split("sum:")[0]
    terms = [
        float(v.replace("−", "-")) for v in re.findall(r"([+−]?\d+\.\d\d)\s+\d\.\d\d(?:  [\d, ]+)?\n", rows)
    ]
    total = float(re.search(r"sum: .*?(\d+\.\d\d)", seen.out).group(1))  # type: ignore[union-attr]
    # 0.005 per term: each is rounded to two decimals
    assert sum(terms) == pytest.approx(total, abs=0.005 * (len(terms) + 1))
    assert "conditional pKa'" in seen.out


def test_what_cannot_be_explained_says_why(tuner: Tuner) -> None:
    seen = tuner("explain", "Cc1ccccc1")
    assert seen.code == 2
    assert "no ionising phenol or aniline" in seen.fault


def test_every_part_of_the_medium_can_be_told(tuner: Tuner, table: Path) -> None:
    told = ("--offset", "0.4", "--offset-sd", "0.3", "--surface-potential-mv", "-59.16")
    tuner("predict", str(table), "--out", "water.csv")
    tuner("predict", str(table), "--out", "film.csv", *told)
    water, film = read("water.csv")[0], read("film.csv")[0]
    # 0.4 as measured, and 1.00 at 59.16 mV and 25 degC (2.303 RT/F); two roundings
    assert float(film["pka"]) - float(water["pka"]) == pytest.approx(1.4, abs=0.01)
    assert float(film["pka_sd"]) > 0.3
    tuner(
        "predict", str(table), "--out", "wet.csv", "--cosolvent", "ethanol", "--cosolvent-mass-percent", "30"
    )
    wet = read("wet.csv")
    assert float(wet[0]["pka"]) > float(water["pka"]) + 0.2  # a neutral acid weakens
    assert "rough physical estimate" in wet[0]["note"]


def test_ones_own_measured_value_stands_beside_the_prediction(tuner: Tuner, table: Path) -> None:
    Path("own.csv").write_text("smiles,pka,source\nOc1ccccc1,9.70,note book 3\n", encoding="utf-8")
    tuner("predict", str(table), "--out", "out.csv", "--measured", "own.csv", "--offset", "0.5")
    rows = {row["name"]: row for row in read("out.csv")}
    assert float(rows["phenol"]["measured_pka"]) == pytest.approx(10.20, abs=0.005)  # 9.70 + 0.5
    assert rows["phenol"]["measured_source"] == "note book 3"
    assert float(rows["4-nitrophenol"]["measured_pka"]) == pytest.approx(7.65, abs=0.05)  # 7.15 in print
    assert rows["toluene"]["measured_pka"] == ""


def test_the_share_of_the_base_form_is_told_on_request(tuner: Tuner, table: Path) -> None:
    tuner("predict", str(table), "--out", "out.csv", "--at-ph", "7.0")
    row = read("out.csv")[1]
    # Henderson-Hasselbalch; 0.02: the pKa is rounded to two decimals
    assert float(row["alpha"]) == pytest.approx(1 / (1 + 10 ** (float(row["pka"]) - 7.0)), abs=0.02)
    assert read("out.csv")[3]["alpha"] == ""


def test_a_structure_instead_of_a_file_is_sent_to_the_right_command(tuner: Tuner) -> None:
    seen = tuner("predict", "Oc1ccccc1")
    assert (seen.code, "tuner explain SMILES" in seen.fault) == (2, True)


def test_an_explanation_adds_up_in_the_medium_too(tuner: Tuner) -> None:
    seen = tuner("explain", "CN(C)c1ccc(N=Nc2ccc(C(=O)O)cc2)cc1", "--temperature-c", "37", "--offset", "0.3")
    assert seen.code == 0, seen.err
    table, results = seen.out.split(" from\n")[1].split("sum: pKa' in the medium")
    numbers = [
        float(hit.group(1).replace("−", "-"))
        for line in table.split("sum: pKa at 25")[1].splitlines()
        if (hit := re.search(r"\s([+−]?\d+\.\d\d)(?:\s+\d\.\d\d)?(?:\s+\d[\d, ]*)?$", line))
    ]
    total = re.match(r"\s+(\d+\.\d\d)", results)
    assert total is not None
    # the first is the sum at 25 degC; 0.005 per term: each is rounded to two decimals
    assert sum(numbers) == pytest.approx(float(total.group(1)), abs=0.005 * (len(numbers) + 1))
    assert len(numbers) > 2


def test_an_explanation_tells_sites_and_base_form(tuner: Tuner) -> None:
    out = tuner("explain", "OC(=O)c1ccc(O)cc1", "--at-ph", "9.3").out
    assert re.search(r"each site alone +phenol \d\.\d\d, benzoic acid 4\.\d\d", out)
    assert re.search(r"base form +10 % at pH 8\.\d\d, 50 % at 9\.\d\d, 90 % at 10\.\d\d", out)
    assert "% at pH 9.3" in out


def test_every_summand_cites_its_source(tuner: Tuner) -> None:
    out = tuner("explain", "Oc1c(Cl)cc(C#N)cc1OC", "--temperature-c", "37").out
    table, rest = out.split(" from\n")[1].split("conditional pKa'")
    rows = [line for line in table.splitlines() if re.search(r"\d\.\d\d", line) and "sum:" not in line]
    listed = set(re.findall(r"^  from +(\d+)  \S", rest, re.MULTILINE))
    assert len(rows) >= 5
    for row in rows:
        numbers = re.search(r"  (\d+(?:, \d+)*)$", row)
        assert numbers is not None, row
        assert set(numbers.group(1).split(", ")) <= listed
