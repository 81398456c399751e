"""How far does an organic cosolvent move a pKa?

A physical estimate with a wide uncertainty, for planning only: a shift measured for one's own dye in one's
own mixture (`offset` of the medium) is always better. The electrostatic part is Born's: charging ions costs
more as the permittivity falls, so neutral acids weaken. Cationic acids lose no charge on the way, so the
electrostatic part cancels; what remains is the greater basicity of mixed water, which strengthens them a
little and turns back towards the pure solvent.

Sources. Permittivities at 25 degC: Akerlof, J. Am. Chem. Soc. 1932, 54, 4125 (methanol, ethanol,
2-propanol, acetone); Harned & Owen, The Physical Chemistry of Electrolytic Solutions, 3rd ed. 1958
(1,4-dioxane); common tables for acetonitrile and dimethyl sulfoxide; all as remembered, rounded, not
checked against print. The two coefficients are set so that phenol in 50 % methanol rises by about 0.95 and
anilinium falls by about 0.6, as remembered; common practice, no source.
"""

from __future__ import annotations

import numpy as np

MASS_PERCENT = (0.0, 20.0, 40.0, 60.0, 80.0)
"""Mass percentages of cosolvent at which permittivities are tabulated."""

PERMITTIVITY: dict[str, tuple[float, ...]] = {
    "methanol": (78.4, 70.0, 60.9, 51.7, 42.6),
    "ethanol": (78.4, 67.0, 55.0, 43.4, 32.8),
    "2-propanol": (78.4, 64.1, 50.3, 36.8, 25.5),
    "acetone": (78.4, 67.0, 54.6, 41.8, 29.6),
    "acetonitrile": (78.4, 70.5, 62.0, 53.0, 44.0),
    "1,4-dioxane": (78.4, 60.8, 43.0, 25.9, 10.7),
    "dimethyl sulfoxide": (78.4, 77.0, 75.0, 71.0, 62.0),
}
"""Relative permittivity of water-cosolvent mixtures at `MASS_PERCENT`, 25 degC."""

BORN_COEFFICIENT = 190.0
"""pKa units per unit of (1/permittivity); 2 * 121.8 Angstrom / r at 25 degC with an effective ion radius r
of 1.28 Angstrom.
"""

BASICITY_COEFFICIENT = 2.4
"""pKa units; fall of a cationic acid by 2.4 w (1 - w) at the mass fraction w."""

RELATIVE_SD = 0.4
ABSOLUTE_SD = 0.25
"""Standard error of the estimate: 40 % of the shift, and 0.25 from 20 % cosolvent on (less below)."""


def permittivity(cosolvent: str, mass_percent: float) -> float:
    """Relative permittivity of a mixture with water at 25 degC, between tabulated points linear.

    Parameters
    ----------
    cosolvent : str
        A name out of `PERMITTIVITY`; KeyError otherwise.
    mass_percent : float
        0 to 80 mass percent of cosolvent.

    Examples
    --------
    >>> permittivity("methanol", 50.0)
    56.3
    """
    return round(float(np.interp(mass_percent, MASS_PERCENT, PERMITTIVITY[cosolvent])), 4)


def cosolvent_shift(cosolvent: str, mass_percent: float) -> tuple[float, float, float]:
    """Shift of a pKa at 25 degC as `neutral + per_charge * z`, z the charge of the protonated form, and its
    standard error.

    Parameters
    ----------
    cosolvent : str
        A name out of `PERMITTIVITY`, or "" for none.
    mass_percent : float
        0 to 80 mass percent.

    Returns
    -------
    neutral, per_charge, sd : float
        pKa units. For z = 0 the shift is the Born term, for z = +1 the basicity term alone.

    Examples
    --------
    >>> neutral, per_charge, sd = cosolvent_shift("methanol", 50.0)
    >>> round(neutral, 2), round(neutral + per_charge, 2), round(sd, 2)
    (0.95, -0.6, 0.46)
    """
    if not cosolvent or mass_percent == 0.0:
        return 0.0, 0.0, 0.0
    fraction = mass_percent / 100.0
    born = BORN_COEFFICIENT * (1.0 / permittivity(cosolvent, mass_percent) - 1.0 / PERMITTIVITY[cosolvent][0])
    basicity = -BASICITY_COEFFICIENT * fraction * (1.0 - fraction)
    sd = float(np.hypot(RELATIVE_SD * born, ABSOLUTE_SD * min(1.0, fraction / 0.2)))
    return born, basicity - born, sd
