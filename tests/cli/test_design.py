"""Does `tuner design` lead from a brief to a whole folder, always the same, as `tuner predict` has it?"""

from __future__ import annotations

import csv
import io
import json
from pathlib import Path

import pytest

from tests.cli.conftest import Tuner

BRIEF = """\
title = "small search"
cores = ["4-nitrophenol"]

[target]
ph = 6.0
tolerance = 0.5

[groups]
allow = ["Me", "F", "Cl", "Br", "OMe", "CN", "CO2H"]

[limits]
max_substituents = 2

[ranking]
rows = 15
"""

FILES = ["candidates.csv", "candidates.sdf", "candidates.xlsx", "manifest.json", "report.html"]


@pytest.fixture
def brief(tuner: Tuner) -> str:
    """A small brief in the working folder; its name."""
    Path("small.toml").write_text(BRIEF, encoding="utf-8")
    return "small.toml"


def table(folder: str) -> list[dict[str, str]]:
    """The candidates of a run."""
    text = (Path(folder) / "candidates.csv").read_text(encoding="utf-8")
    return list(csv.DictReader(io.StringIO(text)))


def test_a_run_fills_a_new_folder_and_says_where(tuner: Tuner, brief: str) -> None:
    seen = tuner("design", brief)
    assert seen.code == 0, seen.err
    folder = Path("outputs") / "small"
    assert sorted(path.name for path in folder.iterdir()) == FILES
    for part in ("small search", "pKa' ± sd", "g/mol", str(folder), "report.html", "estimates"):
        assert part in seen.out
    assert tuner("design", brief, "--quiet").out == ""
    assert sorted(path.name for path in Path("outputs").iterdir()) == ["small", "small-2"]


def test_the_same_brief_gives_the_same_bytes_timings_apart(tuner: Tuner, brief: str) -> None:
    assert tuner("design", brief, "--out", "one", "--quiet").code == 0
    assert tuner("design", brief, "--out", "two", "--quiet").code == 0
    for name in FILES:
        first, second = ((Path(run) / name).read_bytes() for run in ("one", "two"))
        if name == "manifest.json":
            told = [json.loads(content) for content in (first, second)]
            assert all(content.pop("timings_s") for content in told)
            assert told[0] == told[1]
        else:
            assert first == second, name


def test_rows_are_ranked_and_consistent(tuner: Tuner, brief: str) -> None:
    tuner("design", brief, "--out", "run", "--quiet")
    rows = table("run")
    assert [int(row["rank"]) for row in rows] == list(range(1, len(rows) + 1))
    assert len({row["smiles"] for row in rows}) == len({row["analog"] for row in rows}) == len(rows)
    for row in rows:
        # 0.011: pka and offset are rounded to two decimals each
        assert float(row["offset"]) == pytest.approx(float(row["pka"]) - 6.0, abs=0.011)
        assert 0.0 <= float(row["hit_probability"]) <= 1.0
        assert row["front"] in ("yes", "no")
    scores = [float(row["score"]) for row in rows]
    assert scores == sorted(scores, reverse=True)


def test_the_molecule_door_gives_the_same_numbers(tuner: Tuner, brief: str) -> None:
    tuner("design", brief, "--out", "run", "--quiet")
    tuner("predict", "run/candidates.csv", "--out", "again.csv", "--quiet")
    with Path("again.csv").open(encoding="utf-8", newline="") as file:
        again = list(csv.DictReader(file))
    assert len(again) == len(table("run"))
    for row in again:
        # 0.011: both numbers are rounded to two decimals
        assert float(row["pka"]) == pytest.approx(float(row["given_pka"]), abs=0.011), row["smiles"]
        assert row["core"] == row["given_core"]


def test_the_manifest_names_the_brief_and_the_seed(tuner: Tuner, brief: str) -> None:
    tuner("design", brief, "--out", "run", "--seed", "5", "--quiet")
    told = json.loads(Path("run/manifest.json").read_text(encoding="utf-8"))
    assert told["seed"] == 5
    assert "small.toml" in [file["name"] for file in told["inputs"]]
    assert str(Path.cwd()) not in Path("run/manifest.json").read_text(encoding="utf-8")


def test_an_earlier_run_is_replaced_only_on_demand(tuner: Tuner, brief: str) -> None:
    tuner("design", brief, "--out", "run", "--quiet")
    before = (Path("run") / "manifest.json").read_bytes()
    seen = tuner("design", brief, "--out", "run", "--quiet")
    assert seen.code == 2
    assert "--again" in seen.fault
    assert (Path("run") / "manifest.json").read_bytes() == before
    assert tuner("design", brief, "--out", "run", "--quiet", "--again").code == 0


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("ph = 6.0", "ph = -5"),
        ("max_substituents = 2", "max_substituents = 2\nmax_molar_mass_g_mol = 100"),
        ("max_substituents = 2", 'max_substituents = 2\n[reagents]\ninclude = ["no such bottle"]'),
        ('"CO2H"]', '"smarts:[[["]'),
    ],
)
def test_a_brief_that_cannot_be_met_is_one_line_and_leaves_nothing(tuner: Tuner, old: str, new: str) -> None:
    assert old in BRIEF
    Path("small.toml").write_text(BRIEF.replace(old, new), encoding="utf-8")
    seen = tuner("design", "small.toml")
    assert seen.code == 2, seen.out
    assert seen.fault
    assert [path.name for path in Path().iterdir()] == ["small.toml"]
