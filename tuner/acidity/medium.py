"""How does a pKa of 25 degC and infinite dilution change in the working medium?

Every relation here is affine in the pKa of 25 degC and linear in the charge of the protonated form, so the
whole medium is one `MediumEffect` that acts alike on a single value, an array, or the look-up tables of a
whole space. The result is the conditional pKa', the pH (by activity of H+) at which the concentrations of
both forms are equal.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import log, sqrt

from tuner.acidity.cosolvent import PERMITTIVITY, cosolvent_shift
from tuner.acidity.tables import FloatArray, PairwiseSum
from tuner.brief.records import (
    COSOLVENT_LIMIT_MASS_PERCENT,
    IONIC_STRENGTH_LIMIT_M,
    OFFSET_LIMIT,
    SURFACE_POTENTIAL_LIMIT_MV,
    TEMPERATURE_LIMITS_C,
    Medium,
)
from tuner.errors import BriefError
from tuner.library.records import Series

GAS_CONSTANT_KJ = 8.314462618e-3  # kJ/(mol K), CODATA 2018
FARADAY_KJ_MV = 9.648533212e-2  # kJ/(mol mV), CODATA 2018
REFERENCE_K = 298.15
ZERO_C_K = 273.15

TEMPERATURE_FITTED_C = (0.0, 60.0)  # range of the series behind the enthalpies
IONIC_STRENGTH_VALID_M = 0.5  # beyond: a note and a wider error
DAVIES_COEFFICIENT = 0.3  # Davies, Ion Association, 1962 (0.2 in the 1938 paper)
DAVIES_SD_PER_M = 0.1  # pKa units per mol/L beyond the valid range; common practice, no source
DEBYE_HUCKEL_A_25 = 0.509  # (kg/mol)^0.5, the value customary in pKa work


@dataclass(frozen=True, slots=True)
class MediumEffect:
    """pKa' = scale * pKa25 + intercept + per_charge * z, z the charge of the protonated form of the whole
    molecule.

    `sd` is the standard error that the medium adds (pKa units). `rate_scale`, `rate_intercept`,
    `rate_per_charge` are the derivatives of the first three with temperature (per kelvin).
    """

    scale: float
    intercept: float
    per_charge: float
    sd: float
    rate_scale: float = 0.0
    rate_intercept: float = 0.0
    rate_per_charge: float = 0.0

    def shift(self, pka25: FloatArray, charge: FloatArray) -> FloatArray:
        """Conditional pKa' from pKa25 (any shape) and the protonated form's charge (broadcast against it).

        Examples
        --------
        >>> import numpy as np
        >>> MediumEffect(1.0, 0.1, 0.2, 0.0).shift(np.array([7.0]), np.array([1.0]))
        array([7.3])
        """
        return self.scale * pka25 + self.intercept + self.per_charge * charge

    def unshift(self, conditional: FloatArray, charge: FloatArray) -> FloatArray:
        """pKa25 from the conditional pKa'; the inverse of `shift`."""
        return (conditional - self.intercept - self.per_charge * charge) / self.scale

    def temperature_line(self, charge: float) -> tuple[float, float]:
        """dpKa'/dT = intercept + slope * pKa' (per kelvin), for the given charge of the protonated form."""
        slope = self.rate_scale / self.scale
        return self.rate_intercept + self.rate_per_charge * charge - slope * (
            self.intercept + self.per_charge * charge
        ), slope

    def on_tables(self, pka: PairwiseSum, charge: PairwiseSum) -> PairwiseSum:
        """The same shift on look-up tables of pKa25 and of the protonated form's charge over one space (same
        shapes).
        """
        unary = tuple(
            self.scale * own + self.per_charge * held
            for own, held in zip(pka.unary, charge.unary, strict=True)
        )
        pair = {key: self.scale * table for key, table in pka.pair.items()}
        for key, table in charge.pair.items():
            pair[key] = pair[key] + self.per_charge * table if key in pair else self.per_charge * table
        base = self.scale * pka.base + self.intercept + self.per_charge * charge.base
        return PairwiseSum(base=base, unary=unary, pair=pair)


def water_permittivity(temperature_c: float) -> float:
    """Relative permittivity of water, 0-100 degC.

    Malmberg & Maryott, J. Res. Natl. Bur. Stand. 1956, 56, 1 (stated error 0.1); coefficients as remembered.

    Examples
    --------
    >>> round(water_permittivity(25.0), 2)
    78.3
    """
    t = temperature_c
    return 87.740 - 0.40008 * t + 9.398e-4 * t**2 - 1.410e-6 * t**3


def water_density_kg_m3(temperature_c: float) -> float:
    """Density of water at 1 atm, 0-100 degC, in kg/m3.

    Kell, J. Chem. Eng. Data 1975, 20, 97; coefficients as remembered.

    Examples
    --------
    >>> round(water_density_kg_m3(25.0), 2)
    997.04
    """
    t = temperature_c
    top = (
        999.83952
        + 16.945176 * t
        - 7.9870401e-3 * t**2
        - 46.170461e-6 * t**3
        + 105.56302e-9 * t**4
        - 280.54253e-12 * t**5
    )
    return top / (1.0 + 16.879850e-3 * t)


def debye_huckel_a(temperature_c: float) -> float:
    """Debye-Hueckel coefficient A of water in (kg/mol)^0.5, 0-100 degC.

    A grows as sqrt(density) / (permittivity * T)^1.5; anchored to 0.509 at 25 degC.

    Examples
    --------
    >>> debye_huckel_a(25.0)
    0.509
    >>> round(debye_huckel_a(60.0), 3)
    0.543
    """

    def unscaled(t: float) -> float:
        return float(sqrt(water_density_kg_m3(t)) / (water_permittivity(t) * (t + ZERO_C_K)) ** 1.5)

    return DEBYE_HUCKEL_A_25 * unscaled(temperature_c) / unscaled(25.0)


def davies_term(ionic_strength_m: float, temperature_c: float = 25.0) -> float:
    """The bracket of pKa' = pKa + (2z - 1) * bracket: A sqrt(I)/(1 + sqrt(I)) - 0.3 A I, in pKa units.

    Parameters
    ----------
    ionic_strength_m : float
        Ionic strength in mol/L (molarity taken for molality), 0-0.5; beyond, it is only an indication.
    temperature_c : float
        0-100 degC.

    Examples
    --------
    >>> round(davies_term(0.1), 3)
    0.107
    """
    a = debye_huckel_a(temperature_c)
    root = sqrt(ionic_strength_m)
    return a * (root / (1.0 + root) - DAVIES_COEFFICIENT * ionic_strength_m)


def vant_hoff_line(series: Series, temperature_c: float) -> tuple[float, float]:
    """pKa(T) = scale * pKa25 + intercept by van 't Hoff, with an enthalpy linear in pKa25 and a constant
    heat capacity.

    dH0 = a + b * pKa25 (kJ/mol), dCp constant: pKa(T) - pKa25 = [dH0 (1/T - 1/T0) - dCp (T0/T - 1 +
    ln(T/T0))] / (R ln 10).

    Parameters
    ----------
    series : Series
        Gives a, b, dCp.
    temperature_c : float
        Fitted on 0-60 degC.

    Returns
    -------
    scale, intercept : float
        Dimensionless; pKa units.
    """
    kelvin = temperature_c + ZERO_C_K
    lever = (1.0 / kelvin - 1.0 / REFERENCE_K) / (GAS_CONSTANT_KJ * log(10.0))
    curve = (REFERENCE_K / kelvin - 1.0 + log(kelvin / REFERENCE_K)) / (GAS_CONSTANT_KJ * log(10.0))
    scale = 1.0 + series.enthalpy_slope_kj_mol * lever
    return scale, series.enthalpy_intercept_kj_mol * lever - series.heat_capacity_j_mol_k * 1e-3 * curve


def to_25_c(pka: float, series: Series, temperature_c: float) -> float:
    """pKa at 25 degC of a value measured at another temperature (same ionic strength).

    Examples
    --------
    >>> from tuner.library.records import Value
    >>> phenol = Series("phenol", "", Value(9.9, 0.1), Value(2.2, 0.1), 0, 0.0, 2.3, 2.0, True, "")
    >>> round(to_25_c(7.21, phenol, 20.0), 2)
    7.16
    """
    scale, intercept = vant_hoff_line(series, temperature_c)
    return (pka - intercept) / scale


def surface_potential_shift(surface_potential_mv: float, temperature_c: float = 25.0) -> float:
    """Apparent shift -F psi / (2.303 R T) of a dye at a charged surface, pKa units.

    A negative surface attracts H+, so the apparent pKa rises.

    Examples
    --------
    >>> round(surface_potential_shift(-59.16), 3)
    1.0
    """
    return -FARADAY_KJ_MV * surface_potential_mv / (log(10.0) * GAS_CONSTANT_KJ * (temperature_c + ZERO_C_K))


def _affine(series: Series, medium: Medium) -> MediumEffect:
    """The effect without its temperature derivative."""
    scale, intercept = vant_hoff_line(series, medium.temperature_c)
    bracket = davies_term(medium.ionic_strength_m, medium.temperature_c)
    neutral, per_charge, solvent_sd = cosolvent_shift(medium.cosolvent, medium.cosolvent_mass_percent)
    lever = abs(1.0 / (medium.temperature_c + ZERO_C_K) - 1.0 / REFERENCE_K) / (GAS_CONSTANT_KJ * log(10.0))
    beyond = max(0.0, medium.ionic_strength_m - IONIC_STRENGTH_VALID_M)
    variances = (
        (series.enthalpy_sd_kj_mol * lever) ** 2,
        solvent_sd**2,
        medium.offset_sd**2,
        (DAVIES_SD_PER_M * beyond) ** 2,
    )
    surface = surface_potential_shift(medium.surface_potential_mv, medium.temperature_c)
    return MediumEffect(
        scale=scale,
        intercept=intercept - bracket + neutral + medium.offset + surface,
        per_charge=2.0 * bracket + per_charge,
        sd=sqrt(sum(variances)),
    )


def medium_effect(series: Series, medium: Medium) -> MediumEffect:
    """All that the medium does to the pKa of one series.

    Parameters
    ----------
    series : Series
        Its enthalpy regularity is used.
    medium : Medium
        Checked beforehand by `require_valid`.

    Returns
    -------
    MediumEffect
        Temperature (van 't Hoff), ionic strength (Davies: (2z - 1) times `davies_term`), cosolvent estimate,
        measured offset and surface potential, with the temperature derivative by central difference over 1 K.
    """
    here = _affine(series, medium)
    above = _affine(series, replace(medium, temperature_c=medium.temperature_c + 0.5))
    below = _affine(series, replace(medium, temperature_c=medium.temperature_c - 0.5))
    return replace(
        here,
        rate_scale=above.scale - below.scale,
        rate_intercept=above.intercept - below.intercept,
        rate_per_charge=above.per_charge - below.per_charge,
    )


def require_valid(medium: Medium, place: str = "") -> None:
    """Raise `BriefError` where a number of the medium is outside what the relations can treat; says what
    would be right.
    """
    low, high = TEMPERATURE_LIMITS_C
    if not low <= medium.temperature_c <= high:
        guess = medium.temperature_c - ZERO_C_K
        slip = f" ({medium.temperature_c:g} K would be {guess:.0f} degC)" if low <= guess <= high else ""
        raise BriefError(
            f"temperature {medium.temperature_c:g} degC is outside {low:g} to {high:g} degC{slip}",
            place=place,
            remedy="give degrees Celsius",
        )
    if not 0.0 <= medium.ionic_strength_m <= IONIC_STRENGTH_LIMIT_M:
        raise BriefError(
            f"ionic strength {medium.ionic_strength_m:g} mol/L is outside 0 to {IONIC_STRENGTH_LIMIT_M:g}",
            place=place,
            remedy="give mol/L, not mmol/L",
        )
    if medium.cosolvent and medium.cosolvent not in PERMITTIVITY:
        raise BriefError(
            f"cosolvent '{medium.cosolvent}' is not known",
            place=place,
            remedy=f"one of {', '.join(sorted(PERMITTIVITY))}",
        )
    highest = COSOLVENT_LIMIT_MASS_PERCENT
    if not 0.0 <= medium.cosolvent_mass_percent <= highest:
        raise BriefError(
            f"cosolvent {medium.cosolvent_mass_percent:g} % by mass is outside 0 to {highest:g}",
            place=place,
            remedy="for richer mixtures give a measured offset instead",
        )
    if medium.cosolvent_mass_percent > 0.0 and not medium.cosolvent:
        raise BriefError(
            "a cosolvent percentage without a cosolvent",
            place=place,
            remedy=f"one of {', '.join(sorted(PERMITTIVITY))}",
        )
    if not abs(medium.offset) <= OFFSET_LIMIT or not 0.0 <= medium.offset_sd <= OFFSET_LIMIT:
        raise BriefError(
            f"offset {medium.offset:g} +- {medium.offset_sd:g} pKa units is beyond {OFFSET_LIMIT:g}",
            place=place,
            remedy="offset and offset_sd are pKa units; offset_sd is not negative",
        )
    if not abs(medium.surface_potential_mv) <= SURFACE_POTENTIAL_LIMIT_MV:
        raise BriefError(
            f"surface potential {medium.surface_potential_mv:g} mV is beyond {SURFACE_POTENTIAL_LIMIT_MV:g}",
            place=place,
            remedy="give millivolts",
        )


def medium_notes(medium: Medium) -> tuple[str, ...]:
    """What a reader should know about this medium: where a relation is stretched beyond what it was fitted
    on.
    """
    notes = []
    low, high = TEMPERATURE_FITTED_C
    if not low <= medium.temperature_c <= high:
        notes.append(
            f"{medium.temperature_c:g} degC is outside {low:g}-{high:g} degC, where enthalpies were fitted"
        )
    if medium.ionic_strength_m > IONIC_STRENGTH_VALID_M:
        notes.append(
            f"ionic strength {medium.ionic_strength_m:g} mol/L is beyond {IONIC_STRENGTH_VALID_M:g}, "
            "up to which the Davies relation holds"
        )
    if medium.cosolvent and medium.cosolvent_mass_percent > 0.0:
        notes.append("cosolvent shift is a rough physical estimate; a measured offset is better")
    if medium.cosolvent and medium.cosolvent_mass_percent > 0.0 and medium.temperature_c != 25.0:
        notes.append("cosolvent shift is that of 25 degC")
    return tuple(notes)
