"""How are evaluated analogs kept while a search runs?"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import FloatArray
from tuner.search.tables import MASS_UNIT, PKA_UNIT, Int64

NO_CHOICE = -1
"""Filler of `Analogs.index` behind the last position of a core with fewer positions than the widest."""


@dataclass(frozen=True)
class Analogs:
    """Evaluated analogs, one row each. `pka`, `offset` in whole numbers of `PKA_UNIT`, `mass` of
    `MASS_UNIT`.

    `core` is the rank of the core in the brief, `index` its choices, filled up with `NO_CHOICE`. Rows with
    the same (core, index) are the same analog.
    """

    core: NDArray[np.int32]
    index: NDArray[np.int16]
    pka: Int64
    sd: FloatArray
    offset: Int64
    hit: FloatArray
    steps: Int64
    mass: Int64
    flags: Int64
    score: FloatArray

    def __len__(self) -> int:
        return len(self.core)

    def take(self, rows: NDArray[np.bool_] | NDArray[np.integer]) -> Analogs:
        """These rows only, in the order given."""
        return Analogs(*(getattr(self, name)[rows] for name in FIELDS))

    @property
    def pka_values(self) -> FloatArray:
        """pKa' (pKa units)."""
        return np.asarray(self.pka * PKA_UNIT, dtype=np.float64)

    @property
    def offset_values(self) -> FloatArray:
        """Distance from the target (pKa units)."""
        return np.asarray(self.offset * PKA_UNIT, dtype=np.float64)

    @property
    def mass_values(self) -> FloatArray:
        """Molar mass of the free dye (g/mol)."""
        return np.asarray(self.mass * MASS_UNIT, dtype=np.float64)

    def key(self, row: int) -> tuple[int, ...]:
        """(core, choices ...): identifies the analog."""
        return (int(self.core[row]), *(int(k) for k in self.index[row] if k != NO_CHOICE))


FIELDS = ("core", "index", "pka", "sd", "offset", "hit", "steps", "mass", "flags", "score")


def no_analogs(width: int = 0) -> Analogs:
    """An empty set."""
    whole, real = np.zeros(0, dtype=np.int64), np.zeros(0)
    return Analogs(
        core=np.zeros(0, dtype=np.int32),
        index=np.zeros((0, width), dtype=np.int16),
        pka=whole,
        sd=real,
        offset=whole,
        hit=real,
        steps=whole,
        mass=whole,
        flags=whole,
        score=real,
    )


def join(parts: Sequence[Analogs]) -> Analogs:
    """All rows of all parts; narrower index arrays are filled up with `NO_CHOICE`."""
    filled = [part for part in parts if len(part)]
    if not filled:
        return parts[0] if parts else no_analogs()
    width = max(part.index.shape[1] for part in filled)
    columns = {
        name: np.concatenate([getattr(part, name) for part in filled]) for name in FIELDS if name != "index"
    }
    index = np.full((sum(map(len, filled)), width), NO_CHOICE, dtype=np.int16)
    start = 0
    for part in filled:
        index[start : start + len(part), : part.index.shape[1]] = part.index
        start += len(part)
    return Analogs(index=index, **columns)


def order_keys(rows: Analogs) -> list[NDArray[np.integer]]:
    """Sort keys of (core, index) for `numpy.lexsort`, least significant first."""
    return [*(rows.index[:, p] for p in reversed(range(rows.index.shape[1]))), rows.core]
