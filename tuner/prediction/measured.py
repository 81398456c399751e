"""What does a measured value of a molecule become in the working medium?"""

from __future__ import annotations

from math import nan

from tuner.acidity.medium import to_25_c
from tuner.library.catalogue import Library
from tuner.library.records import Series
from tuner.prediction.records import Prediction
from tuner.prediction.sites import AMINE_SERIES

LONE_RING = "aniline"
"""A core whose series depends on how many groups stand on nitrogen."""


def measured_in_medium(answer: Prediction, library: Library) -> float:
    """The measured value brought to 25 degC, then to the medium as the prediction was (pKa units).

    NaN where the compound has not been measured, or has no prediction.
    """
    if answer.known is None or not answer.found:
        return nan
    at_25 = to_25_c(answer.known.pka, _series(answer, library), answer.known.temperature_c)
    return at_25 + answer.pka - answer.pka25


def _series(answer: Prediction, library: Library) -> Series:
    """The equilibrium of the reporting group."""
    if answer.core != LONE_RING and answer.core in library.cores:
        return library.series[library.cores[answer.core].series]
    if answer.sites and answer.sites[0].kind == "phenol":
        return library.series["phenol"]
    on_nitrogen = sum(term.label in ("N", "N'") for term in answer.terms)
    return library.series[AMINE_SERIES[min(on_nitrogen, len(AMINE_SERIES) - 1)]]
