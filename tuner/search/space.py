"""Which analogs are there? Cores with a list of choices at each open position, and additive limits, without
a molecule.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tuner.library.records import Core, Substituent
from tuner.structure.records import PreparedCore


@dataclass(frozen=True, slots=True)
class Choice:
    """One choice at one position: the group as made (`free`) and the group whose constants act (`acting`).

    They differ where the group ionises at the target pH or is the handle by which the dye is bound to its
    carrier.
    """

    free: Substituent
    acting: Substituent
    is_anchor: bool = False


@dataclass(frozen=True)
class CountLimit:
    """low <= sum over positions of weight[p][choice] <= high; e.g. number of groups, of anchors, of a
    required group.
    """

    name: str
    weights: tuple[NDArray[np.int64], ...]
    low: int
    high: int


@dataclass(frozen=True)
class CoreSpace:
    """All patterns of one core: `choices[p][k]` is choice k at open position p; hydrogen comes first where
    allowed.
    """

    core: Core
    prepared: PreparedCore
    choices: tuple[tuple[Choice, ...], ...]
    limits: tuple[CountLimit, ...]

    @property
    def shape(self) -> tuple[int, ...]:
        """Number of choices at each position."""
        return tuple(len(c) for c in self.choices)


@dataclass(frozen=True)
class DesignSpace:
    """The spaces of all cores of a brief, in the brief's order."""

    spaces: tuple[CoreSpace, ...]
