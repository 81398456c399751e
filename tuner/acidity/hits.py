"""How likely does an analog switch inside the window?"""

from __future__ import annotations

import numpy as np

from tuner.acidity.tables import FloatArray


def hit_probability(pka: FloatArray, sd: FloatArray, target: float, tolerance: float) -> FloatArray:
    """Probability that the true pKa' lies within target +- tolerance, for a normal predictive distribution.

    Parameters
    ----------
    pka, sd : arrays of one shape
        Predicted pKa' and its standard error, pKa units.
    target, tolerance : float
        Window, pH units.

    Returns
    -------
    array of the same shape, 0 to 1; NaN where either input is.

    Examples
    --------
    >>> import numpy as np
    >>> hit_probability(np.array([7.0, 7.0]), np.array([0.1, 0.2]), 7.0, 0.2).round(3)
    array([0.954, 0.683])
    """
    from scipy.special import ndtr

    middle = (target - np.asarray(pka, dtype=np.float64)) / sd
    half = tolerance / np.asarray(sd, dtype=np.float64)
    return np.asarray(ndtr(middle + half) - ndtr(middle - half), dtype=np.float64)
