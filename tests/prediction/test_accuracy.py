"""Scores on tables of measured values."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from tuner.errors import TunerError
from tuner.library.catalogue import Library
from tuner.prediction.accuracy import (
    Miss,
    accuracy_report,
    dye_class,
    read_table,
    score,
    step_misses,
    temperature_misses,
)
from tuner.prediction.door import MoleculeDoor


def miss(measured: float, predicted: float, sd: float = 0.1) -> Miss:
    return Miss("x", "C", "pK1", measured, predicted, sd)


def test_a_score_by_hand() -> None:
    misses = [miss(7.0, 7.1), miss(7.0, 7.2), miss(7.0, 8.0), miss(7.0, math.nan)]
    got = score("three of four", misses)
    assert got.rows == 4
    assert got.given == pytest.approx(0.75)
    assert got.mean_best == pytest.approx((0.1 + 0.2 + 1.0) / 3)  # 95 % of three is three
    assert got.median == pytest.approx(0.2)
    assert got.within == pytest.approx(2 / 3)
    assert got.coverage == pytest.approx(1 / 3)  # 1.645 * 0.1 holds only the first
    assert got.worst[0].error == pytest.approx(1.0)


def test_the_worst_twentieth_is_left_out_of_the_mean() -> None:
    misses = [miss(7.0, 7.1)] * 95 + [miss(7.0, 17.0)] * 5
    assert score("", misses).mean_best == pytest.approx(0.1)


def test_nothing_predicted_gives_no_numbers() -> None:
    got = score("", [miss(7.0, math.nan)])
    assert got.given == 0.0
    assert math.isnan(got.mean_best)


@pytest.mark.parametrize(
    ("smiles", "title"),
    [
        ("Oc1ccc(N=Nc2ccccc2)cc1", "azo dyes"),
        ("Oc1cccc2ccccc12", "naphthols"),
        ("Nc1ccc2ccccc2c1", "naphthylamines"),
        ("O=S1(=O)OC(c2ccc(O)cc2)(c2ccc(O)cc2)c2ccccc21", "sulfonephthaleins"),
        ("Oc1ccc(-c2ccccc2)cc1", "others of two and more rings"),
    ],
)
def test_classes_of_dyes(smiles: str, title: str) -> None:
    assert dye_class(smiles) == title


def test_steps_of_one_compound_are_matched_together(door: MoleculeDoor) -> None:
    rows = [
        {"smiles": "O=C(O)c1ccc(O)cc1", "pka_type": label, "name": "acid", "pka": pka}
        for label, pka in (("pK1", "4.5"), ("pK2", "9.3"))
    ]
    misses = step_misses(door, rows)
    assert [m.label for m in misses] == ["pK1", "pK2"]
    assert all(abs(m.error) < 0.5 for m in misses)


def test_temperature_series_of_a_made_up_compound_of_the_shipped_law(library: Library) -> None:
    rows = [
        {"smiles": "Cc1ccc(O)cc1", "measured_by": "A", "t_celsius": t, "pka": p, "book": ""}
        for t, p in (("25", "10.27"), ("10", "10.50"), ("40", "10.10"))
    ]
    misses = temperature_misses(library, rows)
    assert len(misses) == 2
    assert all(abs(m.error) < 0.04 for m in misses)  # 2 kJ/mol over 15 K


def test_a_report_on_a_small_folder(door: MoleculeDoor, tmp_path: Path) -> None:
    steps = "smiles,pka_type,name,pka\nO=C(O)c1ccc(O)cc1,pK2,acid,9.3\n"
    (tmp_path / "ionisable.csv").write_text(steps, encoding="utf-8")
    (tmp_path / "dyes.csv").write_text(
        "smiles,pka_type,name,pka\nOc1cccc2ccccc12,pK1,naphthol,9.34\n", encoding="utf-8"
    )
    series = "smiles,measured_by,t_celsius,pka,book\nOc1ccccc1,A,25,9.99,x\nOc1ccccc1,A,40,9.80,x\n"
    (tmp_path / "temperature.csv").write_text(series, encoding="utf-8")
    titles = [s.title for s in accuracy_report(door, tmp_path)]
    assert titles[0] == "several ionising groups"
    assert "  naphthols" in titles
    assert titles[-1].startswith("temperature")


def test_a_missing_table_or_column_is_named(tmp_path: Path) -> None:
    with pytest.raises(TunerError, match="does not exist"):
        read_table(tmp_path / "none.csv", ("pka",))
    path = tmp_path / "half.csv"
    path.write_text("smiles,name\nC,x\n", encoding="utf-8")
    with pytest.raises(TunerError, match="pka"):
        read_table(path, ("smiles", "pka"))
