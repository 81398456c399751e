"""Which analogs are good when an objective or a limit needs the whole molecule?

Non-dominated sorting evolution (NSGA-II, Deb et al., IEEE Trans. Evol. Comput. 2002, 6, 182, as in `pymoo`)
on rows of choices, seeded with what the exact search found. The space's own objectives cost nothing here,
so the number of evaluations counts whole-molecule calls. It stops when the hypervolume has ceased to grow.
Unlike the exact and certified searches it proves nothing; the run says so.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from tuner.acidity.tables import FloatArray
from tuner.search.chromosomes import Chromosomes
from tuner.search.evaluate import admitted, evaluate_rows
from tuner.search.hypervolume import Box, hypervolume
from tuner.search.result import Progress
from tuner.search.rows import Analogs, join
from tuner.search.symmetry import canonical_form
from tuner.search.tables import Goal, Int64, SpaceTables

WholeMolecule = Callable[[Analogs], FloatArray]
"""Objectives (made small) that need the molecule: rows -> array of shape (n_rows, k); NaN sets an analog
aside.
"""

STAGE = "evolving"
SMALLEST_GAIN = 1e-3
"""The search stops when the hypervolume grew by less than this share over the last `Evolution.patience`
generations.
"""


@dataclass(frozen=True)
class Evolution:
    """How to evolve: population, most generations, and after how many generations without growth to
    stop.
    """

    population: int = 200
    generations: int = 400
    patience: int = 40
    seed: int = 1


@dataclass(frozen=True)
class Evolved:
    """All non-dominated analogs met, their whole-molecule objectives, evaluations spent and hypervolume by
    generation.
    """

    front: Analogs
    extra: FloatArray
    evaluations: int
    hypervolumes: tuple[float, ...]


class Arena:
    """Evaluates chromosomes once each and keeps the non-dominated ones."""

    def __init__(
        self, spaces: Sequence[SpaceTables], goal: Goal, whole: WholeMolecule | None, box: Box
    ) -> None:
        self.spaces = spaces
        self.goal = goal
        self.whole = whole
        self.box = box
        self.seen: dict[tuple[int, ...], tuple[FloatArray, float]] = {}
        self.rows: list[Analogs] = []
        self.extra: list[FloatArray] = []
        self.evaluations = 0

    @property
    def objectives(self) -> int:
        """Number of objectives."""
        return len(self.box.high)

    def evaluate(self, coded: Int64) -> tuple[FloatArray, FloatArray]:
        """Objectives (n, k) and constraint violation (n,) of chromosomes (n, 1 + positions)."""
        keys = [tuple(row) for row in coded.tolist()]
        fresh = [key for key in dict.fromkeys(keys) if key not in self.seen]
        if fresh:
            self._evaluate_new(np.array(fresh, dtype=np.int64))
        values = np.stack([self.seen[key][0] for key in keys])
        return values, np.array([self.seen[key][1] for key in keys])

    def _evaluate_new(self, coded: Int64) -> None:
        for core in np.unique(coded[:, 0]):
            tables = self.spaces[int(core)]
            mine = coded[coded[:, 0] == core]
            rows = evaluate_rows(tables, self.goal, mine[:, 1 : 1 + len(tables.shape)])
            good = admitted(tables, self.goal, rows)
            values = np.stack([rows.offset_values, rows.steps.astype(np.float64), rows.mass_values], axis=1)
            extra = np.full((len(rows), self.objectives - 3), np.nan)
            if self.whole is not None and good.any():
                extra[good] = self.whole(rows.take(good))
            self.evaluations += int(good.sum())
            good &= ~np.isnan(extra).any(axis=1)
            values = np.concatenate((values, np.where(np.isnan(extra), self.box.high[3:], extra)), axis=1)
            for key, value, ok in zip(map(tuple, mine.tolist()), values, good, strict=True):
                self.seen[key] = (value, 0.0 if ok else 1.0)
            self.rows.append(rows.take(good))
            self.extra.append(extra[good])

    def front(self) -> tuple[Analogs, FloatArray]:
        """The non-dominated analogs met so far, and their whole-molecule objectives."""
        rows, extra = join(self.rows), np.concatenate(self.extra)
        values = np.concatenate(
            (np.stack([rows.offset_values, rows.steps, rows.mass_values], axis=1), extra), axis=1
        )
        kept = _non_dominated(values)
        self.rows, self.extra = [rows.take(kept)], [extra[kept]]
        return self.rows[0], self.extra[0]


def _non_dominated(values: FloatArray) -> np.ndarray[tuple[int], np.dtype[np.intp]]:
    """Rows that no other row beats, one of each set of equal rows, in the order given."""
    if not len(values):
        return np.zeros(0, dtype=np.intp)
    from pymoo.util.nds.non_dominated_sorting import NonDominatedSorting

    _, first = np.unique(values, axis=0, return_index=True)
    first = np.sort(first)
    front = NonDominatedSorting().do(values[first], only_non_dominated_front=True)
    return np.sort(first[front]).astype(np.intp)


def search_evolutionary(
    spaces: Sequence[SpaceTables],
    goal: Goal,
    box: Box,
    *,
    evolution: Evolution | None = None,
    whole: WholeMolecule | None = None,
    seeds: Analogs | None = None,
    progress: Progress | None = None,
) -> Evolved:
    """Evolve a trade-off front.

    Parameters
    ----------
    spaces, goal
        As for the exact search; limits and further targets are constraints.
    box : Box
        Ideal and reference point of the hypervolume, one pair per objective: offset (pKa units), steps,
        molar mass (g/mol), then those of `whole`.
    whole : callable, optional
        Objectives that need the molecule.
    seeds : Analogs, optional
        Analogs to start with (the exact front).

    Returns
    -------
    Evolved
        Reproducible for a given seed; no global random state is touched.
    """
    plan = evolution or Evolution()
    rng = np.random.default_rng([plan.seed, 13])
    arena = Arena(spaces, goal, whole, box)
    chromosomes = Chromosomes([tables.shape for tables in spaces], [tables.symmetry for tables in spaces])
    algorithm = _algorithm(arena, chromosomes, plan, rng, seeds)
    volumes: list[float] = []
    for generation in range(plan.generations):
        algorithm.next()
        front, extra = arena.front()
        volumes.append(hypervolume(front, extra, box))
        if progress is not None:
            progress(STAGE, generation + 1, plan.generations)
        if _settled(volumes, plan.patience):
            break
    front, extra = arena.front()
    return Evolved(front, extra, arena.evaluations, tuple(volumes))


def _settled(volumes: Sequence[float], patience: int) -> bool:
    """Whether the hypervolume has ceased to grow."""
    if len(volumes) <= patience:
        return False
    before, now = volumes[-1 - patience], volumes[-1]
    return now - before <= SMALLEST_GAIN * max(now, 1e-300)


def _algorithm(
    arena: Arena, chromosomes: Chromosomes, plan: Evolution, rng: np.random.Generator, seeds: Analogs | None
) -> Any:
    """The evolution strategy of the general library, with operators for rows of choices."""
    from pymoo.algorithms.moo.nsga2 import NSGA2
    from pymoo.core.problem import Problem
    from pymoo.core.termination import NoTermination

    from tuner.search.operators import Cross, Distinct, Move, Start

    class Rows(Problem):  # type: ignore[misc]
        """Chromosomes as a problem of the general library."""

        def __init__(self) -> None:
            super().__init__(
                n_var=chromosomes.width, n_obj=arena.objectives, n_ieq_constr=1, xl=0, xu=2**15, vtype=int
            )

        def _evaluate(self, x: Any, out: dict[str, Any], *args: Any, **kwargs: Any) -> None:
            values, broken = arena.evaluate(np.asarray(x, dtype=np.int64))
            span = arena.box.high - arena.box.low
            out["F"] = (values - arena.box.low) / span
            out["G"] = broken[:, None]

    start = chromosomes.start(plan.population, rng)
    if seeds is not None and len(seeds):
        start = np.concatenate((chromosomes.code(seeds), start))[: plan.population]
    algorithm = NSGA2(
        pop_size=plan.population,
        sampling=Start(start),
        crossover=Cross(chromosomes, rng),
        mutation=Move(chromosomes, rng),
        eliminate_duplicates=Distinct(),
    )
    algorithm.setup(Rows(), termination=NoTermination(), seed=plan.seed, verbose=False)
    return algorithm


def canonical_rows(spaces: Sequence[SpaceTables], rows: Analogs) -> Analogs:
    """The same analogs with each row in its canonical form."""
    index = rows.index.astype(np.int64)
    for core, tables in enumerate(spaces):
        mine = rows.core == core
        if mine.any():
            width = len(tables.shape)
            index[mine, :width] = canonical_form(index[mine][:, :width], tables.symmetry)
    return Analogs(**{**vars(rows), "index": index.astype(np.int16)})
