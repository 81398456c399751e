"""What does the synthesis room hand to the search and to the report?"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

Counts = NDArray[np.uint8]
Classes = NDArray[np.int64]

NO_ROUTE = 255
"""Step count of an analog that cannot be made from the shelf with the allowed reactions."""


@dataclass(frozen=True)
class StepPart:
    """Step counts that depend on some positions only: counts[class_of[0][choice at positions[0]], ...]."""

    positions: tuple[int, ...]
    class_of: tuple[Classes, ...]
    counts: Counts

    def at(self, index: NDArray[np.integer]) -> Counts:
        """Counts for analogs, shape (n_analogs, all positions of the core) -> (n_analogs,)."""
        pairs = zip(self.positions, self.class_of, strict=True)
        return np.asarray(self.counts[tuple(classes[index[:, p]] for p, classes in pairs)], dtype=np.uint8)


@dataclass(frozen=True)
class ListedPart:
    """The same where few of very many patterns can be made: only those are listed, the others have no route.

    A key is the row of choices at `positions` (ascending) read as one whole number, the last position
    counting ones, position k having `sizes[k]` choices. `keys` are sorted, each with its count.
    """

    positions: tuple[int, ...]
    sizes: tuple[int, ...]
    keys: NDArray[np.int64]
    counts: Counts

    def at(self, index: NDArray[np.integer]) -> Counts:
        """Counts for analogs, shape (n_analogs, all positions of the core) -> (n_analogs,)."""
        if not len(self.keys):
            return np.full(len(index), NO_ROUTE, dtype=np.uint8)
        wanted = np.zeros(len(index), dtype=np.int64)
        for p, size in zip(self.positions, self.sizes, strict=True):
            wanted = wanted * size + index[:, p]
        at = np.minimum(np.searchsorted(self.keys, wanted), len(self.keys) - 1)
        return np.where(self.keys[at] == wanted, self.counts[at], NO_ROUTE).astype(np.uint8)


@dataclass(frozen=True)
class StepWay:
    """One way to the analogs of a space: `constant` steps plus the counts of independent parts (halves of a
    dye).
    """

    constant: int
    parts: tuple[StepPart | ListedPart, ...]


class Steps(Protocol):
    """Exact minimum step counts of one core space: the least over ways of the sum over parts."""

    @property
    def ways(self) -> tuple[StepWay, ...]:
        """Ways, none of which is always better than the others."""

    def at(self, index: NDArray[np.integer]) -> Counts:
        """Step counts for analogs, shape (n_analogs, n_positions) -> (n_analogs,)."""


@dataclass(frozen=True)
class StepTable:
    """Step counts in one piece, compressed by classes of choices that are made the same way.

    steps(a) = counts[class_of[0][a_0], ..., class_of[P-1][a_{P-1}]], `NO_ROUTE` where there is none.
    """

    class_of: tuple[Classes, ...]
    counts: Counts

    @property
    def ways(self) -> tuple[StepWay, ...]:
        """The table as a single way with a single part."""
        return (StepWay(0, (StepPart(tuple(range(len(self.class_of))), self.class_of, self.counts),)),)

    def at(self, index: NDArray[np.integer]) -> Counts:
        """Step counts for analogs, shape (n_analogs, n_positions) -> (n_analogs,)."""
        found = self.counts[tuple(c[index[:, p]] for p, c in enumerate(self.class_of))]
        return np.asarray(found, dtype=np.uint8)


@dataclass(frozen=True)
class SplitStepTable:
    """Step counts of a dye that is joined from halves: the least over ways of the sum over parts."""

    ways: tuple[StepWay, ...]

    def at(self, index: NDArray[np.integer]) -> Counts:
        """Step counts for analogs, shape (n_analogs, n_positions) -> (n_analogs,)."""
        best = np.full(len(index), NO_ROUTE, dtype=np.int64)
        for way in self.ways:
            total = np.full(len(index), way.constant, dtype=np.int64)
            for part in way.parts:
                total += part.at(index)
            best = np.minimum(best, total)
        return np.where(best < NO_ROUTE, best, NO_ROUTE).astype(np.uint8)


@dataclass(frozen=True, slots=True)
class Step:
    """One reaction of a route; `kind` is the rule's name, `reagents` are bottles, molecules SMILES."""

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


@dataclass(frozen=True, slots=True)
class Bottles:
    """What the shelf offers to rules: names by role, and names by canonical structure."""

    by_role: Mapping[str, tuple[str, ...]] = field(default_factory=dict)
    by_structure: Mapping[str, str] = field(default_factory=dict)

    def offers(self, roles: tuple[str, ...], structure: str = "") -> bool:
        """Whether every role, and the structure where one is named, stands on the shelf."""
        return all(role in self.by_role for role in roles) and (
            not structure or structure in self.by_structure
        )
