"""Over which pH range does a dye tell something?"""

from __future__ import annotations

from math import acosh, log, log10, sqrt

import numpy as np

from tuner.acidity.tables import FloatArray

EYE_HALF_RANGE_PH = 1.0
"""By eye a two-colour dye is read between 10 : 90 % and 90 : 10 %: pKa' +- 1; common practice, no source."""

STEEPEST_SLOPE_PER_PH = log(10.0) / 4.0
"""Greatest |d alpha / d pH| of a single ionisation, at pH = pKa'."""


def alpha(ph: FloatArray, pka: FloatArray) -> FloatArray:
    """Ionised share of a single site, 1 / (1 + 10**(pKa' - pH)); arrays broadcast, NaN in gives NaN out.

    Examples
    --------
    >>> float(alpha(np.array(7.0), np.array(7.0)))
    0.5
    """
    from scipy.special import expit

    return np.asarray(expit(log(10.0) * (np.asarray(ph) - np.asarray(pka))), dtype=np.float64)


def slope(ph: FloatArray, pka: FloatArray) -> FloatArray:
    """d alpha / d pH of a single site (per pH unit); arrays broadcast."""
    ionised = alpha(ph, pka)
    return log(10.0) * ionised * (1.0 - ionised)


def working_range_by_eye(pka: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Lower and upper pH of the range that an eye can read, pKa' - 1 and pKa' + 1; same shape as `pka`."""
    return pka - EYE_HALF_RANGE_PH, pka + EYE_HALF_RANGE_PH


def half_range_for_share(share: float) -> float:
    """Half-width (pH units) of the interval where |d alpha/d pH| is at least `share` of its maximum.

    With x = pH - pKa', the slope relative to its maximum is 1 / cosh(x ln10 / 2)**2.

    Parameters
    ----------
    share : float
        Above 0, at most 1.

    Examples
    --------
    >>> round(half_range_for_share(0.5), 3)
    0.766
    >>> half_range_for_share(1.0)
    0.0
    """
    if not 0.0 < share <= 1.0:
        raise ValueError(f"share {share:g} is outside 0 (exclusive) to 1")
    return 2.0 * acosh(1.0 / sqrt(share)) / log(10.0)


def working_range_by_slope(pka: FloatArray, share: float = 0.33) -> tuple[FloatArray, FloatArray]:
    """Lower and upper pH of an instrument's range: where the slope keeps `share` of its maximum; same shape
    as `pka`.
    """
    half = half_range_for_share(share)
    return pka - half, pka + half


def ph_at(ionised_share: float, pka: float) -> float:
    """The pH at which a single site is ionised to `ionised_share` (0 to 1, exclusive).

    Examples
    --------
    >>> round(ph_at(0.9, 7.0), 3)
    7.954
    """
    return pka + log10(ionised_share / (1.0 - ionised_share))
