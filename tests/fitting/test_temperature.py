"""The enthalpy regularity is found again in data that were made with it."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from tuner.acidity.medium import vant_hoff_line
from tuner.fitting.temperature import fit_enthalpy, fit_series, main
from tuner.library.records import Series, Value

LAW = Series("phenol", "", Value(9.9, 0.1), Value(2.2, 0.1), 0, 12.0, 2.0, 1.0, True, "", -120.0)


def made(law: Series, noise: float = 0.0, book: str = "serjeant") -> pd.DataFrame:
    """Ten compounds from pKa 4 to 11 at seven temperatures."""
    rng = np.random.default_rng(2)
    rows = []
    for number, pka25 in enumerate(np.linspace(4.0, 11.0, 10)):
        for celsius in (5.0, 15.0, 25.0, 35.0, 45.0, 55.0, 60.0):
            scale, intercept = vant_hoff_line(law, celsius)
            pka = scale * pka25 + intercept + noise * rng.normal()
            rows.append((f"compound {number}", "A", celsius, pka, book))
    return pd.DataFrame(rows, columns=["smiles", "measured_by", "t_celsius", "pka", "book"])


def test_the_law_is_recovered() -> None:
    fit = fit_enthalpy(made(LAW), (0, 1, 2))
    assert fit.intercept == pytest.approx(12.0, abs=1e-6)
    assert fit.slope == pytest.approx(2.0, abs=1e-6)
    assert fit.heat_capacity == pytest.approx(-120.0, abs=1e-4)
    assert fit.mean_abs_error == pytest.approx(0.0, abs=1e-6)


def test_noise_is_left_over_and_shows_in_the_misses() -> None:
    fit = fit_enthalpy(made(LAW, noise=0.02), (0, 1, 2))
    assert fit.slope == pytest.approx(2.0, abs=0.5)  # 0.02 at 25 degC shifts each compound by about 1 kJ/mol
    assert 0.01 < fit.mean_abs_error < 0.04
    assert fit.n_series == 10


def test_acids_and_bases_are_fitted_apart() -> None:
    both = pd.concat([made(LAW), made(LAW, book="perrin")])
    assert set(fit_series(both)) == {"phenol", "anilinium"}


def test_a_series_without_a_value_at_25_degc_is_passed_over() -> None:
    table = made(LAW)
    lame = table[~((table["smiles"] == "compound 3") & (table["t_celsius"] == 25.0))]
    assert fit_enthalpy(lame, (0, 1)).n_series == 9


def test_the_command_says_how_it_is_called(capsys: pytest.CaptureFixture[str]) -> None:
    assert main([]) == 2
    assert "usage" in capsys.readouterr().err
