"""What does the screening room hand to the search, the routes and the report?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

WITHHOLD = "withhold"
WARN = "warn"
NOTE = "note"
SEVERITIES = (WITHHOLD, WARN, NOTE)
"""From never to be made, over a serious property, to a usual caution."""


@dataclass(frozen=True, slots=True)
class Flag:
    """One rule that applies to one molecule; `kind` is the class that a brief may name instead."""

    rule: str
    kind: str
    severity: str  # one of SEVERITIES
    words: str
    source: str


@dataclass(frozen=True, slots=True)
class Flags:
    """All flags of one molecule, most serious first, then in the order of the rules."""

    smiles: str
    flags: tuple[Flag, ...]

    @property
    def withheld(self) -> bool:
        """Whether the molecule must not be ranked and gets no route."""
        return any(flag.severity == WITHHOLD for flag in self.flags)

    @property
    def names(self) -> tuple[str, ...]:
        """Rule names and classes that apply, each once: what a brief's list of flags is held against."""
        return tuple(dict.fromkeys(name for flag in self.flags for name in (flag.rule, flag.kind)))

    @property
    def cautions(self) -> str:
        """The words of all flags for one cell of a table, separated by semicolons."""
        return "; ".join(dict.fromkeys(flag.words for flag in self.flags))


@dataclass(frozen=True)
class GroupLimit:
    """low <= sum over positions of weights[p][choice] <= high for every analog that may be made.

    `weights[p]` has shape (n_choices_p,); all numbers are whole, so that a sum is exact.
    """

    name: str
    weights: tuple[NDArray[np.int64], ...]
    low: int
    high: int
