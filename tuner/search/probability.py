"""How likely is a hit, and how likely can it be at best?

The predictive distribution is normal. With several targets the errors are taken as fully shared between the
media: it is the same molecule with the same constants, so one deviation z moves all its pKa' values at
once.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from tuner.acidity.tables import FloatArray

FARTHEST_Z = 8.0
"""Standard deviations beyond which a share is taken as 0 (it is below 1e-15)."""

LEAST_SD = 0.02
"""pKa units; no calculated pKa is surer than this, whatever the algebra says (as in `acidity.pattern`)."""


@dataclass(frozen=True)
class Interval:
    """pKa' and standard error of analogs in one medium, and the interval low..high that is wanted (pKa
    units).
    """

    pka: FloatArray
    sd: FloatArray
    low: float
    high: float


def normal_share(below: FloatArray, above: FloatArray) -> FloatArray:
    """Probability that below <= z <= above, z standard normal; 0 where empty. Arrays broadcast."""
    from scipy.special import ndtr

    below, above = np.broadcast_arrays(below, above)
    far = (below > FARTHEST_Z) | (above < -FARTHEST_Z)
    if np.count_nonzero(far) * 2 <= far.size:
        share = np.maximum(ndtr(above) - ndtr(below), 0.0)
        return np.asarray(np.where(far, 0.0, share), dtype=np.float64)
    # most analogs of a space are far from the window: the costly function is left to those that are near
    share = np.zeros(far.shape)
    near = ~far
    share[near] = np.maximum(ndtr(above[near]) - ndtr(below[near]), 0.0)
    return share


def hit_probability(intervals: Sequence[Interval]) -> FloatArray:
    """P(every pKa' lies within its interval), errors fully shared between the media.

    Parameters
    ----------
    intervals : sequence of Interval
        At least one; arrays of one shape.

    Returns
    -------
    array of that shape, 0 to 1; NaN where a pKa' or standard error is NaN.

    Examples
    --------
    >>> import numpy as np
    >>> one = Interval(np.array([6.4]), np.array([0.1]), 6.2, 6.6)
    >>> hit_probability([one]).round(4).tolist()
    [0.9545]
    >>> other = Interval(np.array([5.9]), np.array([0.1]), 5.9, float("inf"))
    >>> hit_probability([one, other]).round(4).tolist()
    [0.4772]
    """
    below, above = _in_errors(intervals[0])
    for one in intervals[1:]:
        low, high = _in_errors(one)
        below, above = np.maximum(below, low), np.minimum(above, high)
    return normal_share(below, above)


def _in_errors(one: Interval) -> tuple[FloatArray, FloatArray]:
    """Both edges of an interval in standard errors from the prediction."""
    per_sd = 1.0 / np.maximum(one.sd, LEAST_SD)
    return (one.low - one.pka) * per_sd, (one.high - one.pka) * per_sd


def hit_bound(offset: FloatArray, tolerance: float, sd_low: FloatArray, sd_high: FloatArray) -> FloatArray:
    """Largest hit probability at this offset or beyond with a standard error anywhere within
    sd_low..sd_high.

    Inside the window a smaller error is always better. Outside, at distances a < b of the two edges, the
    best error is sqrt((b^2 - a^2) / (2 ln(b / a))), or the nearest one allowed.

    Parameters
    ----------
    offset : array
        |pKa' - target|, pKa units, not negative.
    tolerance : float
        Half width of the window, pKa units.
    sd_low, sd_high : arrays
        Broadcast against `offset`.

    Examples
    --------
    >>> import numpy as np
    >>> hit_bound(np.array([0.0, 0.5]), 0.2, np.array([0.1]), np.array([0.6])).round(3).tolist()
    [0.954, 0.194]
    """
    offset = np.asarray(offset, dtype=np.float64)
    near, far = offset - tolerance, offset + tolerance
    with np.errstate(divide="ignore", invalid="ignore"):
        best = np.sqrt((far**2 - near**2) / (2.0 * np.log(far / near)))
    inside = near <= 0.0
    sd = np.where(inside, sd_low, np.clip(np.where(inside, sd_low, best), sd_low, sd_high))
    sd = np.maximum(sd, LEAST_SD)
    return normal_share(near / sd, far / sd)


def farthest_useful_offset(
    least_hit: FloatArray, tolerance: float, sd_low: FloatArray, sd_high: FloatArray, halvings: int = 24
) -> FloatArray:
    """Offset (pKa units) beyond which the hit probability stays below `least_hit`; -1 where it always does.

    `hit_bound` falls with the offset, so bisection finds it; the result errs on the safe (far) side by
    2**-halvings of the search range.
    """
    least_hit, sd_low, sd_high = np.broadcast_arrays(
        np.asarray(least_hit, dtype=np.float64), np.asarray(sd_low), np.asarray(sd_high)
    )
    low = np.zeros(least_hit.shape)
    high = tolerance + 8.5 * np.maximum(sd_high, LEAST_SD)
    for _ in range(halvings):
        middle = 0.5 * (low + high)
        useful = hit_bound(middle, tolerance, sd_low, sd_high) >= least_hit
        low, high = np.where(useful, middle, low), np.where(useful, high, middle)
    nothing = hit_bound(np.zeros(least_hit.shape), tolerance, sd_low, sd_high) < least_hit
    return np.where(least_hit <= 0.0, np.inf, np.where(nothing, -1.0, high))
