"""How does the enthalpy of ionisation depend on the pKa itself?

Refits, from pKa's measured at several temperatures by one laboratory at a time, the regularity dH0 = a + b
* pKa25 with a constant heat capacity, one for phenols and one for anilinium ions, and prints the lines for
`libraries/series.toml`. Run: `python -m tuner.fitting.temperature TABLE.csv`, columns smiles, measured_by,
t_celsius, pka, book.

Phenols with pKa 7 to 10.6 do not tell intercept and slope apart (a free fit gives 8.9 and 1.37); the
intercept is held at zero, which also serves the strong nitrophenols outside that range (2,4-dinitrophenol,
about 10 kJ/mol).
"""

from __future__ import annotations

import sys
from collections.abc import Sequence
from dataclasses import dataclass
from math import log
from typing import TYPE_CHECKING

import numpy as np

from tuner.acidity.medium import GAS_CONSTANT_KJ, REFERENCE_K, ZERO_C_K
from tuner.acidity.tables import FloatArray

if TYPE_CHECKING:
    import pandas as pd

NEAR_25_C = 1.0
"""A determination within this of 25 degC stands for the 25 degC value of its laboratory."""


@dataclass(frozen=True, slots=True)
class EnthalpyFit:
    """dH0 = intercept + slope * pKa25 (kJ/mol), dCp0 (J/mol/K), scatter of dH0 between compounds, and the
    misses.
    """

    intercept: float
    slope: float
    heat_capacity: float
    sd: float
    n_series: int
    mean_abs_error: float  # pKa units, each compound predicted by the fit to all others
    worst: float


@dataclass(frozen=True)
class _Points:
    """Design rows (per kJ/mol intercept, slope, per J/mol/K), observed shifts, and which compound each
    belongs to.
    """

    design: FloatArray
    shift: FloatArray
    group: FloatArray


def _lever(kelvin: FloatArray) -> FloatArray:
    """(1/T - 1/T0) / (R ln 10), in mol/kJ."""
    return (1.0 / kelvin - 1.0 / REFERENCE_K) / (GAS_CONSTANT_KJ * log(10.0))


def _points(table: pd.DataFrame) -> _Points:
    """Shifts from the 25 degC value of the same compound and laboratory."""
    design, shift, group = [], [], []
    for number, (_, rows) in enumerate(table.groupby(["smiles", "measured_by"], sort=True)):
        celsius = rows["t_celsius"].to_numpy(dtype=float)
        pka = rows["pka"].to_numpy(dtype=float)
        middle = int(np.argmin(np.abs(celsius - 25.0)))
        if abs(celsius[middle] - 25.0) > NEAR_25_C:
            continue
        away = np.abs(celsius - 25.0) > NEAR_25_C
        kelvin = celsius[away] + ZERO_C_K
        lever = _lever(kelvin)
        curve = -(REFERENCE_K / kelvin - 1.0 + np.log(kelvin / REFERENCE_K)) / (GAS_CONSTANT_KJ * log(10.0))
        design.append(np.column_stack([lever, lever * pka[middle], curve * 1e-3]))
        shift.append(pka[away] - pka[middle])
        group.append(np.full(int(away.sum()), float(number)))
    return _Points(np.vstack(design), np.concatenate(shift), np.concatenate(group))


def fit_enthalpy(table: pd.DataFrame, free: Sequence[int]) -> EnthalpyFit:
    """Least squares over all shifts; `free` picks among (0 intercept, 1 slope, 2 heat capacity), others are
    zero.
    """
    points = _points(table)
    columns = list(free)
    design = points.design[:, columns]
    solution = np.zeros(3)
    solution[columns] = np.linalg.lstsq(design, points.shift, rcond=None)[0]
    miss = np.zeros(len(points.shift))
    enthalpy_miss = []
    for group in np.unique(points.group):
        inside = points.group == group
        other = np.linalg.lstsq(design[~inside], points.shift[~inside], rcond=None)[0]
        miss[inside] = points.shift[inside] - design[inside] @ other
        lever = points.design[inside, 0]
        enthalpy_miss.append(float(lever @ miss[inside] / (lever @ lever)))
    return EnthalpyFit(
        intercept=float(solution[0]),
        slope=float(solution[1]),
        heat_capacity=float(solution[2]),
        sd=float(np.sqrt(np.mean(np.square(enthalpy_miss)))),
        n_series=len(enthalpy_miss),
        mean_abs_error=float(np.abs(miss).mean()),
        worst=float(np.abs(miss).max()),
    )


def fit_series(table: pd.DataFrame) -> dict[str, EnthalpyFit]:
    """One fit for the acids (phenols), one for the bases (anilinium ions), told apart by the book they stand
    in.
    """
    acids = table["book"].str.contains("serjeant")
    return {
        "phenol": fit_enthalpy(table[acids], (1, 2)),
        "anilinium": fit_enthalpy(table[~acids], (0, 1)),
    }


def main(arguments: Sequence[str]) -> int:
    """Read the table named, print the lines for `libraries/series.toml`."""
    import pandas as pd

    if len(arguments) != 1:
        print("usage: python -m tuner.fitting.temperature TABLE.csv", file=sys.stderr)
        return 2
    for name, fit in fit_series(pd.read_csv(arguments[0])).items():
        print(
            f"{name}: enthalpy_kj_mol = {{ intercept = {fit.intercept:.2f}, slope = {fit.slope:.3f}, "
            f"sd = {fit.sd:.1f} }}, heat_capacity_j_mol_k = {fit.heat_capacity:.0f}"
            f"  # {fit.n_series} series, left out one at a time: mean miss {fit.mean_abs_error:.3f}, "
            f"largest {fit.worst:.2f}"
        )
    return 0


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
