"""The fit itself: recovers what it is given, shrugs off misprints, and agrees with the shipped constants."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from tuner.acidity.constants import load_constants
from tuner.acidity.pattern import evaluate_pattern
from tuner.fitting.__main__ import main
from tuner.fitting.acidity_data import Row, pattern, project_rows, remembered_rows
from tuner.fitting.acidity_fit import Fit, constants_of, fit
from tuner.fitting.crossval import RING, leave_out, score
from tuner.fitting.priors import Spreads, decode, encode
from tuner.fitting.write_constants import write_constants
from tuner.library import load_library

LIBRARY = load_library()


@pytest.fixture(scope="module")
def in_project() -> Fit:
    rows = project_rows(LIBRARY)
    return fit([*rows, *remembered_rows(LIBRARY, rows)])


def test_the_project_holds_no_more_single_values_than_it_may() -> None:
    assert len(LIBRARY.measured) <= 150
    assert all(m.source for m in LIBRARY.measured)


def test_constants_from_the_project_alone_agree_with_the_shipped_ones(in_project: Fit) -> None:
    """Both fits share rows, so they should agree within the larger error; two of them for one in twenty."""
    own, shipped = constants_of(in_project), load_constants()
    away = []
    for scaffold, constants in shipped.items():
        for name, value in zip(constants.names, constants.mean, strict=True):
            if name not in own[scaffold].names or constants.rows[name] < 2:
                continue
            k = own[scaffold].names.index(name)
            error = np.sqrt(own[scaffold].covariance[k, k])
            away.append(abs(own[scaffold].mean[k] - value) / error)
    assert len(away) > 80
    assert np.mean(np.array(away) < 2.0) > 0.93


def test_predictions_of_both_fits_agree(in_project: Fit) -> None:
    own, shipped = constants_of(in_project), load_constants()
    for scaffold, groups in (
        ("phenol", "2:Cl 4:NO2"),
        ("phenol", "3:Me 4:CN"),
        ("aniline", "2:Me 4:Br"),
        ("aniline", "N:Me 4:Cl"),
    ):
        placed = pattern(LIBRARY, groups)
        here = evaluate_pattern(own[scaffold], RING[scaffold], placed)
        there = evaluate_pattern(shipped[scaffold], RING[scaffold], placed)
        assert abs(here.pka25 - there.pka25) < 2.0 * np.hypot(here.sd, there.sd)


def test_left_out_compounds_of_the_project_are_predicted(in_project: Fit) -> None:
    """Harder than the shipped fit: each is predicted from a hundred others. Bounds leave room for one more
    misprint."""
    found = leave_out(in_project)
    for scaffold in ("phenol", "aniline"):
        table = score(scaffold, [f for f in found if f.row.scaffold == scaffold])
        assert table.mean_best < 0.20
        assert table.median < 0.13
        assert table.coverage > 0.80


def _synthetic(rng: np.random.Generator, n: int) -> list[Row]:
    """Compounds made with pKa = 9.97 - 2.2 sum(sigma_meta), scatter 0.05; the parent within its prior."""
    groups = [
        g for g in LIBRARY.substituents.values() if g.sigma_meta.known and not g.charge and g.short != "H"
    ]
    rows = []
    for k in range(n):
        three, five = (groups[j] for j in rng.integers(0, len(groups), 2))
        pka = 9.97 - 2.2 * (three.sigma_meta.value + five.sigma_meta.value) + rng.normal(0, 0.05)
        rows.append(Row(f"row {k}", "phenol", {"3": three, "5": five}, pka, 0.0, 1, "measured"))
    return rows


def test_known_parameters_are_recovered() -> None:
    made = fit(_synthetic(np.random.default_rng(3), 120))
    constants = constants_of(made)["phenol"]
    for name, truth in (("base", 9.97), ("rho", 2.2)):
        k = constants.names.index(name)
        assert abs(constants.mean[k] - truth) < 3.0 * np.sqrt(constants.covariance[k, k])


def test_a_misprint_loses_its_weight() -> None:
    rows = _synthetic(np.random.default_rng(4), 120)
    rows[0] = replace(rows[0], pka25=rows[0].pka25 + 5.0)
    made = fit(rows)
    assert made.weights[0] < 0.05
    assert np.median(made.weights) > 0.8


def test_spreads_survive_their_scale() -> None:
    spreads = Spreads(kin_share=0.3, shared=0.6, doubt=1.7)
    back = decode(encode(spreads))
    assert encode(back) == pytest.approx(encode(spreads))


def test_written_constants_read_back(in_project: Fit, tmp_path: Path) -> None:
    write_constants(in_project, tmp_path, "fit:in-project")
    written, meant = load_constants(tmp_path), constants_of(in_project)
    for scaffold, groups in (("phenol", "2:OMe 4:CHO"), ("aniline", "2:Cl 4:NO2")):
        placed = pattern(LIBRARY, groups)
        here = evaluate_pattern(written[scaffold], RING[scaffold], placed)
        there = evaluate_pattern(meant[scaffold], RING[scaffold], placed)
        assert here.pka25 == pytest.approx(there.pka25, abs=1e-3)  # five decimals per constant are written
        assert here.sd == pytest.approx(there.sd, abs=2e-3)


def test_nothing_to_fit_on_is_said_in_one_line(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["fit"]) == 2
    assert main(["fit", "--reference", "nowhere"]) == 2
    told = capsys.readouterr().err
    assert "--in-project" in told
    assert "phenols.csv: this table is missing" in told
