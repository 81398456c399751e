"""Activity coefficients against a general library (chempy) and against the customary printed value.

chempy evaluates the Debye-Hueckel coefficient from permittivity and density and the Davies equation on its
own.
"""

from __future__ import annotations

from math import log, log10

import pytest
from chempy import electrolytes
from chempy.properties.water_density_tanaka_2001 import water_density
from chempy.properties.water_permittivity_bradley_pitzer_1979 import water_permittivity

from tuner.acidity.medium import (
    davies_term,
    debye_huckel_a,
    water_density_kg_m3,
)
from tuner.acidity.medium import (
    water_permittivity as own_permittivity,
)


@pytest.mark.parametrize("celsius", [5.0, 15.0, 25.0, 40.0])
def test_density_of_water(celsius: float) -> None:
    # two printed equations of state; both claim better than 0.01 kg/m3 below 40 degC
    assert water_density_kg_m3(celsius) == pytest.approx(
        water_density(celsius + 273.15, warn=False), abs=0.02
    )


@pytest.mark.parametrize("celsius", [0.0, 25.0, 60.0, 100.0])
def test_permittivity_of_water(celsius: float) -> None:
    # Malmberg & Maryott state 0.1; Bradley & Pitzer fit several data sets within 0.3
    assert own_permittivity(celsius) == pytest.approx(water_permittivity(celsius + 273.15), abs=0.3)


@pytest.mark.parametrize("celsius", [0.0, 10.0, 25.0, 37.0, 60.0])
def test_coefficient_follows_temperature(celsius: float) -> None:
    def theirs(t: float) -> float:
        return float(electrolytes.A(own_permittivity(t), t + 273.15, water_density_kg_m3(t))) / log(10.0)

    # same physics, so the ratio to 25 degC must agree to rounding of the constants
    assert debye_huckel_a(celsius) / debye_huckel_a(25.0) == pytest.approx(
        theirs(celsius) / theirs(25.0), rel=1e-5
    )
    # 0.509 is customary, theory from the same permittivity gives 0.511: half a per cent
    assert debye_huckel_a(celsius) == pytest.approx(theirs(celsius), rel=0.005)


@pytest.mark.parametrize("ionic", [0.001, 0.01, 0.1, 0.3, 0.5])
@pytest.mark.parametrize("charge", [-2, -1, 0, 1, 2])
def test_davies_shift_is_the_difference_of_two_log_activity_coefficients(ionic: float, charge: int) -> None:
    a = debye_huckel_a(25.0) * log(10.0)
    log_gamma = {
        z: float(electrolytes.davies_log_gamma(ionic, z, a, C=-0.3)) / log(10.0) for z in (charge, charge - 1)
    }
    # pKa' = pKa + log gamma(base) - log gamma(acid)
    expected = log_gamma[charge - 1] - log_gamma[charge]
    assert (2 * charge - 1) * davies_term(ionic) == pytest.approx(expected, abs=1e-9)


def test_mean_activity_coefficient_of_tenth_molar_1_1_salt() -> None:
    # Robinson & Stokes, Electrolyte Solutions, give 0.778 for NaCl at 0.1 mol/kg (as remembered); Davies is
    # good to 3 %
    assert 10.0 ** -davies_term(0.1) == pytest.approx(0.778, rel=0.03)
    assert log10(0.778) == pytest.approx(-davies_term(0.1), abs=0.01)
