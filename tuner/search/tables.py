"""What does the search look up for one core?

Everything additive is kept in whole numbers of a small unit (fixed point). Whole numbers add up to the same
sum in any order, so the result of a search does not depend on how a space was cut into blocks or on how
many workers shared them.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import ceil, inf, isfinite, log2

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import FloatArray, IntArray, Pair, PairwiseSum
from tuner.errors import SearchError
from tuner.search.space import CountLimit
from tuner.synthesis.records import Steps

Int32 = NDArray[np.int32]
Int64 = NDArray[np.int64]

PKA_UNIT = 2.0**-24
"""pKa units per whole number (6e-8); sums up to +-128 fit into 32 bits."""

MASS_UNIT = 1e-3
"""g/mol per whole number: standard atomic masses are given to three decimals, so isomers get equal
masses.
"""

FLAG_UNIT = 1.0
HIGHEST_WHOLE = 2**30
"""Largest sum of absolute values a table may reach, so that 32-bit sums and differences never overflow."""


def in_ph(whole: NDArray[np.integer]) -> FloatArray:
    """pKa units from whole numbers of `PKA_UNIT`."""
    return np.asarray(whole * PKA_UNIT, dtype=np.float64)


@dataclass(frozen=True)
class FixedSum:
    """A `PairwiseSum` in whole numbers: value = unit * (base + sum of look-ups)."""

    unit: float
    base: int
    unary: tuple[Int32, ...]
    pair: Mapping[Pair, Int32]

    def at(self, index: IntArray) -> Int64:
        """Whole numbers for the analogs in `index`, shape (n_analogs, n_positions) -> (n_analogs,)."""
        total = np.full(index.shape[0], self.base, dtype=np.int64)
        for p, table in enumerate(self.unary):
            total += table[index[:, p]]
        for (p, q), table in self.pair.items():
            total += table[index[:, p], index[:, q]]
        return total


def fixed_sum(exact: PairwiseSum, unit: float = 0.0) -> FixedSum:
    """Round the tables of a sum to whole numbers of `unit`.

    Parameters
    ----------
    exact : PairwiseSum
        Finite tables.
    unit : float
        Size of one whole number; 0 takes the finest power of two with which no sum can overflow.

    Raises
    ------
    SearchError
        Where a table holds NaN or infinity, or a sum could overflow.

    Examples
    --------
    >>> import numpy as np
    >>> s = fixed_sum(PairwiseSum(1.0, (np.array([0.0, 0.5]),), {}), 0.25)
    >>> s.at(np.array([[0], [1]])).tolist()
    [4, 6]
    """
    parts = [*exact.unary, *exact.pair.values()]
    reach = abs(exact.base) + sum(float(np.abs(t).max(initial=0.0)) for t in parts)
    if not isfinite(reach):
        raise SearchError("a look-up table holds a value that is not a number", remedy="check the constants")
    if unit == 0.0:
        unit = 2.0 ** ceil(log2(max(reach, 2.0**-20) / (HIGHEST_WHOLE / 2)))
    if reach / unit > HIGHEST_WHOLE:
        raise SearchError(f"sums of up to {reach:g} are too large", remedy="check the constants of the core")

    def whole(table: FloatArray) -> Int32:
        return np.rint(np.asarray(table, dtype=np.float64) / unit).astype(np.int32)

    pair = {key: whole(table) for key, table in sorted(exact.pair.items()) if np.any(table)}
    return FixedSum(unit, round(exact.base / unit), tuple(whole(t) for t in exact.unary), pair)


@dataclass(frozen=True)
class Condition:
    """A further target: pKa' in another medium must lie within low..high (whole numbers of `PKA_UNIT`).

    `centre` is the wanted pKa' where the dye must switch there too (it then counts for the offset), else
    None.
    """

    name: str
    pka: FixedSum
    variance: FixedSum
    low: int
    high: int
    centre: int | None = None


@dataclass(frozen=True)
class SpaceTables:
    """All look-ups of one core's space; `rank` is the core's place in the brief and breaks ties."""

    name: str
    rank: int
    shape: tuple[int, ...]
    pka: FixedSum
    variance: FixedSum
    mass: FixedSum
    flags: FixedSum
    steps: Steps
    limits: tuple[CountLimit, ...] = ()
    symmetry: tuple[tuple[int, ...], ...] = ()
    conditions: tuple[Condition, ...] = ()

    @property
    def size(self) -> int:
        """Number of patterns, symmetry duplicates included."""
        total = 1
        for n in self.shape:
            total *= n
        return total


@dataclass(frozen=True, slots=True)
class Goal:
    """What is wanted of an analog, and how a chemist trades.

    score = hit probability - step_costs * steps - hundred_g_mol_costs * (molar mass - reference_mass) / 100
            - flag_costs * flags

    `reference_mass_g_mol` (the lightest bare core of the brief) only shifts all scores alike, so that a
    score reads as "hit probability after paying for steps and bulk".
    """

    target_ph: float
    tolerance: float
    step_costs: float = 0.05
    hundred_g_mol_costs: float = 0.03
    flag_costs: float = 0.10
    reference_mass_g_mol: float = 0.0
    max_steps: int = 6
    max_molar_mass_g_mol: float = inf
    max_pka_sd: float = inf

    @property
    def target(self) -> int:
        """Target in whole numbers of `PKA_UNIT`."""
        return round(self.target_ph / PKA_UNIT)

    @property
    def half_width(self) -> int:
        """Tolerance in whole numbers of `PKA_UNIT`."""
        return round(self.tolerance / PKA_UNIT)

    @property
    def mass_ceiling(self) -> int:
        """Largest molar mass in whole numbers of `MASS_UNIT`."""
        if not isfinite(self.max_molar_mass_g_mol):
            return HIGHEST_WHOLE
        return min(HIGHEST_WHOLE, int(np.floor(self.max_molar_mass_g_mol / MASS_UNIT + 1e-6)))

    def costs(self, steps: IntArray, mass: IntArray, flags: IntArray) -> FloatArray:
        """What is taken off the hit probability; arrays broadcast (steps; whole numbers of mass; flags)."""
        bulk = (np.asarray(mass) * MASS_UNIT - self.reference_mass_g_mol) / 100.0
        total = self.step_costs * np.asarray(steps) + self.hundred_g_mol_costs * bulk
        return np.asarray(total + self.flag_costs * np.asarray(flags), dtype=np.float64)
