"""How does the evolution library vary rows of choices? Imported only when an evolution runs (the library
loads slowly).
"""

from __future__ import annotations

from typing import Any

import numpy as np
from pymoo.core.crossover import Crossover
from pymoo.core.duplicate import DuplicateElimination
from pymoo.core.mutation import Mutation
from pymoo.core.population import Population
from pymoo.core.sampling import Sampling

from tuner.search.chromosomes import Chromosomes
from tuner.search.tables import Int64


class Start(Sampling):  # type: ignore[misc]
    """The first population, given."""

    def __init__(self, rows: Int64) -> None:
        super().__init__()
        self.rows = rows

    def _do(self, problem: Any, n_samples: int, *args: Any, **kwargs: Any) -> Any:
        return self.rows[:n_samples]


class Cross(Crossover):  # type: ignore[misc]
    """Two parents, two children; see `Chromosomes.cross`."""

    def __init__(self, chromosomes: Chromosomes, rng: np.random.Generator) -> None:
        super().__init__(2, 2, prob=0.9)
        self.chromosomes = chromosomes
        self.rng = rng

    def _do(self, problem: Any, x: Any, *args: Any, **kwargs: Any) -> Any:
        first, second = np.asarray(x[0], dtype=np.int64), np.asarray(x[1], dtype=np.int64)
        children = (
            self.chromosomes.cross(first, second, self.rng),
            self.chromosomes.cross(second, first, self.rng),
        )
        return np.stack(children)


class Move(Mutation):  # type: ignore[misc]
    """One change per child; see `Chromosomes.move`."""

    def __init__(self, chromosomes: Chromosomes, rng: np.random.Generator) -> None:
        super().__init__(prob=0.9)
        self.chromosomes = chromosomes
        self.rng = rng

    def _do(self, problem: Any, x: Any, *args: Any, **kwargs: Any) -> Any:
        return self.chromosomes.move(np.asarray(x, dtype=np.int64), self.rng)


class Distinct(DuplicateElimination):  # type: ignore[misc]
    """Equal rows are the same analog."""

    def _do(self, pop: Population, other: Population | None, is_duplicate: Any) -> Any:
        seen = set() if other is None else {tuple(row) for row in other.get("X").tolist()}
        for n, row in enumerate(pop.get("X").tolist()):
            key = tuple(row)
            if key in seen:
                is_duplicate[n] = True
            elif other is None:
                seen.add(key)
        return is_duplicate
