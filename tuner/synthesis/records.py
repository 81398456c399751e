"""What does the synthesis room hand to the search and to the report?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

NO_ROUTE = 255
"""Step count of an analog that cannot be made from the shelf with the allowed reactions."""


@dataclass(frozen=True)
class StepTable:
    """Exact minimum step counts of one core space, compressed by classes of choices that are made the same way.

    steps(a) = counts[class_of[0][a_0], ..., class_of[P-1][a_{P-1}]], `NO_ROUTE` where there is none.
    """

    class_of: tuple[NDArray[np.int64], ...]
    counts: NDArray[np.uint8]

    def at(self, index: NDArray[np.integer]) -> NDArray[np.uint8]:
        """Step counts for analogs, shape (n_analogs, n_positions) -> (n_analogs,)."""
        found = self.counts[tuple(c[index[:, p]] for p, c in enumerate(self.class_of))]
        return np.asarray(found, dtype=np.uint8)


@dataclass(frozen=True, slots=True)
class Step:
    """One reaction of a route. `kind` is the rule's name; `reagents` are stock names; molecules are SMILES."""

    kind: str
    title: str
    substrate: str
    product: str
    reagents: tuple[str, ...]
    cautions: tuple[str, ...]
    note: str = ""


@dataclass(frozen=True, slots=True)
class Route:
    """A shortest way to an analog: bought starting materials, then steps in order."""

    target: str
    starting_materials: tuple[str, ...]
    steps: tuple[Step, ...]
    notes: tuple[str, ...] = ()
