"""Does this number look as if it were in another unit than its key says?

Each check knows the range that makes sense and the slips that chemists make: kelvin for degrees Celsius,
millimolar for molar, a fraction for a percentage, volt for millivolt.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import isfinite

from tuner.brief.records import (
    COSOLVENT_LIMIT_MASS_PERCENT,
    IONIC_STRENGTH_LIMIT_M,
    OFFSET_LIMIT,
    SURFACE_POTENTIAL_LIMIT_MV,
    TEMPERATURE_LIMITS_C,
)
from tuner.brief.table import BriefTable

ZERO_C_K = 273.15
Slip = Callable[[float], str]
"""Gives a remedy where a value is a slip, otherwise an empty text."""


@dataclass(frozen=True, slots=True)
class Quantity:
    """A number of the brief: the range that makes sense, its unit in words, and how a slip is recognised."""

    low: float
    high: float
    unit: str
    slip: Slip = lambda value: ""


def _kelvin(value: float) -> str:
    return f"in degC this is {value - ZERO_C_K:.4g}; write that" if 200.0 <= value <= 400.0 else ""


def _millimolar(value: float) -> str:
    return (
        f"if this is mmol/L, write {value / 1000.0:g}"
        if IONIC_STRENGTH_LIMIT_M < value <= 1000.0 * IONIC_STRENGTH_LIMIT_M
        else ""
    )


def _fraction(value: float) -> str:
    return f"if this is a fraction, write {100.0 * value:g} for per cent" if 0.0 < value < 1.0 else ""


def _volt(value: float) -> str:
    return f"if this is in volt, write {1000.0 * value:g}" if 0.0 < abs(value) < 0.5 else ""


def _kilogram(value: float) -> str:
    return f"if this is kg/mol, write {1000.0 * value:g}" if 0.05 <= value <= 2.0 else ""


def _percent(value: float) -> str:
    return f"if this is per cent, write {value / 100.0:g}" if 1.0 < value <= 100.0 else ""


def _tolerance(value: float) -> str:
    return "it is the half width of the window in pH units, not per cent" if value > 3.0 else ""


def _beyond_offset(value: float) -> str:
    return (
        "an offset is in pKa units; a potential goes to surface_potential_mv"
        if abs(value) > OFFSET_LIMIT
        else ""
    )


PH = Quantity(-10.0, 16.0, "a pH; below 0 it is an acidity function")
TOLERANCE = Quantity(0.01, 3.0, "pH units", _tolerance)
MARGIN = Quantity(0.0, 3.0, "pH units", _tolerance)
TEMPERATURE = Quantity(*TEMPERATURE_LIMITS_C, "degC", _kelvin)
IONIC_STRENGTH = Quantity(0.0, IONIC_STRENGTH_LIMIT_M, "mol/L", _millimolar)
COSOLVENT = Quantity(0.0, COSOLVENT_LIMIT_MASS_PERCENT, "per cent by mass", _fraction)
OFFSET = Quantity(-OFFSET_LIMIT, OFFSET_LIMIT, "pKa units", _beyond_offset)
OFFSET_SD = Quantity(0.0, OFFSET_LIMIT, "pKa units")
POTENTIAL = Quantity(-SURFACE_POTENTIAL_LIMIT_MV, SURFACE_POTENTIAL_LIMIT_MV, "mV", _volt)
MOLAR_MASS = Quantity(90.0, 5000.0, "g/mol", _kilogram)
CLOGP = Quantity(-20.0, 30.0, "logarithm of the octanol-water ratio")
TPSA = Quantity(0.0, 1000.0, "square angstrom")
PKA_SD = Quantity(0.01, 10.0, "pKa units")
WORTH = Quantity(0.0, 1.0, "hit probability, 0 to 1", _percent)
RESOLUTION = Quantity(0.0005, 0.2, "pKa units")


def quantity(table: BriefTable, key: str, kind: Quantity, default: float | None = None) -> float:
    """The number under `key`, checked for slips and range; the default is not checked.

    Raises
    ------
    BriefError
        Absent without a default, no number, outside the range; the remedy names the unit and the likely slip.
    """
    if not table.has(key) and default is not None:
        return default
    value = table.values.get(key)
    if isinstance(value, str):
        table.fail(f'"{value}" is a text', key, f"write a bare number; the unit is {kind.unit}")
    number = table.number(key) if not isinstance(value, float) or isfinite(value) else float("nan")
    slip = kind.slip(number)
    if slip or not kind.low <= number <= kind.high:
        allowed = f"it must lie between {kind.low:g} and {kind.high:g} ({kind.unit})"
        table.fail(f"{number:g} is out of range", key, f"{allowed}; {slip}" if slip else allowed)
    return number
