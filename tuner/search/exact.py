"""Which analogs form the trade-off front and the best N, with every analog gone through?

The space is streamed in blocks. A block whose bounds show that nothing in it can enter the front or the
best N is passed over; of the others only pKa' is computed for all analogs, the rest for those close enough
to the target to matter. The result does not depend on the order of blocks or on the number of workers,
because everything compared is a whole number (or a function of whole numbers of one analog) and `Standing`
merges exactly.
"""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor, as_completed
from dataclasses import dataclass
from os import cpu_count
from pathlib import Path
from threading import Event

import numpy as np

from tuner.acidity.tables import IntArray
from tuner.search.blocks import LARGEST_BLOCK, BlockPlan
from tuner.search.bounds import SCORE_SLACK, Bounds, SpaceBounds, seed_rows
from tuner.search.checkpoint import Checkpoint, problem_digest
from tuner.search.evaluate import evaluate_admitted
from tuner.search.found import Certificate, Found
from tuner.search.probability import farthest_useful_offset, hit_bound
from tuner.search.result import Progress
from tuner.search.standing import NEVER, Standing
from tuner.search.tables import HIGHEST_WHOLE, MASS_UNIT, PKA_UNIT, Goal, Int32, Int64, SpaceTables, in_ph

CHUNKS_WANTED = 256
"""Work is handed out in about so many chunks: fine enough for progress and even load, coarse enough to cost
nothing.
"""

STAGE = "searching"


@dataclass(frozen=True)
class Chunk:
    """Blocks of one core, by number, in the order in which they are searched."""

    number: int
    space: int
    blocks: Int64


@dataclass(frozen=True)
class Search:
    """One exact search: spaces, goal, how many rows of best score, resolution in whole numbers of
    `PKA_UNIT`.
    """

    spaces: tuple[SpaceTables, ...]
    goal: Goal
    best_n: int
    resolution: int = 1
    largest_block: int = LARGEST_BLOCK

    def seeded(self) -> Standing:
        """A first standing from lightly substituted analogs; the same on every worker."""
        standing = Standing(self.best_n, self.resolution)
        for tables in self.spaces:
            standing.offer(evaluate_admitted(tables, self.goal, seed_rows(tables.shape)))
        return standing

    def plan(self, space: int) -> BlockPlan:
        """The blocks of one space."""
        return BlockPlan(self.spaces[space], self.largest_block)

    def chunks(self) -> list[Chunk]:
        """All blocks that can hold an admissible analog, cheapest bounds first, in chunks."""
        chunks: list[Chunk] = []
        for space, tables in enumerate(self.spaces):
            plan = self.plan(space)
            numbers = np.arange(plan.count, dtype=np.int64)
            bounds = SpaceBounds(tables, self.goal).at(plan.prefixes(numbers))
            order = np.lexsort((numbers, bounds.costs))
            listed = numbers[order][bounds.possible[order]]
            pieces = max(1, min(len(listed), CHUNKS_WANTED // len(self.spaces)))
            chunks += [Chunk(0, space, part) for part in np.array_split(listed, pieces) if len(part)]
        return [Chunk(n, chunk.space, chunk.blocks) for n, chunk in enumerate(chunks)]


class ChunkSearcher:
    """Searches chunks of blocks against a standing; one per worker thread or process is enough."""

    def __init__(self, search: Search) -> None:
        self.search = search
        self._plans = [search.plan(n) for n in range(len(search.spaces))]
        self._bounds = [SpaceBounds(tables, search.goal) for tables in search.spaces]

    def run(self, chunk: Chunk, standing: Standing, stop: Callable[[], bool] = lambda: False) -> int:
        """Search one chunk, offering what is found to `standing`; returns the number of analogs looked
        at.
        """
        plan = self._plans[chunk.space]
        prefixes = plan.prefixes(chunk.blocks)
        bounds = self._bounds[chunk.space].at(prefixes)
        visited = 0
        for row in np.flatnonzero(bounds.useful(standing)):
            if stop():
                break
            visited += self._block(plan, prefixes[row], bounds.row(int(row)), standing)
        return visited

    def _block(self, plan: BlockPlan, prefix: Int64, bound: Bounds, standing: Standing) -> int:
        """Search one block; returns the number of analogs looked at (0 if its bounds rule it out by
        now).
        """
        if not bound.useful(standing)[0]:
            return 0
        for_front, for_score = self._farthest(bound, standing)
        main, worst = self._offsets(plan, prefix)
        close = (
            worst <= max(for_front, for_score)
            if worst is main
            else (worst <= for_front) | (main <= for_score)
        )
        inside: IntArray = np.flatnonzero(close)
        if len(inside):
            near = main.ravel()[inside].astype(np.int64), worst.ravel()[inside].astype(np.int64)
            inside = self._worth(plan, prefix, inside, near, bound, standing)
            rows = plan.rows(prefix.tolist(), inside)
            standing.offer(evaluate_admitted(plan.tables, self.search.goal, rows))
        return plan.inner_size

    def _farthest(self, bound: Bounds, standing: Standing) -> tuple[int, int]:
        """Whole-number offsets beyond which no analog of the block matters to the front, and to the best
        N.
        """
        goal = self.search.goal
        ceiling = int(standing.offset_ceiling(bound.steps, bound.mass)[0])
        for_front = HIGHEST_WHOLE if ceiling == NEVER else ceiling * standing.resolution - 1
        least_hit = standing.score_floor() + bound.costs - SCORE_SLACK
        far = float(farthest_useful_offset(least_hit, goal.tolerance, bound.sd_low, bound.sd_high)[0])
        for_score = HIGHEST_WHOLE if far == np.inf else int(np.ceil(far / PKA_UNIT))
        return min(HIGHEST_WHOLE, for_front), min(HIGHEST_WHOLE, for_score)

    def _offsets(self, plan: BlockPlan, prefix: Int64) -> tuple[Int32, Int32]:
        """Whole-number offsets over the inner grid: from the target, and the worst over all targets at
        which to switch.

        Analogs that miss a further target get the largest number in both. Without such targets both are one
        array.
        """
        main = plan.pka.values(prefix.tolist(), -self.search.goal.target)
        np.abs(main, out=main)
        worst = main.copy() if any(c.centre is not None for c in plan.tables.conditions) else main
        for condition, grid in zip(plan.tables.conditions, plan.conditions, strict=True):
            there = grid.values(prefix.tolist())
            if condition.centre is not None:
                np.maximum(worst, np.abs(there - np.int32(condition.centre)), out=worst)
            missed = (there < condition.low) | (there > condition.high)
            main[missed] = worst[missed] = np.iinfo(np.int32).max
        return main, worst

    def _worth(
        self,
        plan: BlockPlan,
        prefix: Int64,
        inside: IntArray,
        near: tuple[Int64, Int64],
        bound: Bounds,
        standing: Standing,
    ) -> IntArray:
        """Of the analogs close enough (`near`: both offsets), those whose own steps and mass still let them
        matter.
        """
        goal = self.search.goal
        steps = plan.steps(prefix.tolist()).ravel()[inside].astype(np.int64)
        mass = plan.mass.values(prefix.tolist()).ravel()[inside].astype(np.int64)
        good = (steps <= goal.max_steps) & (mass <= goal.mass_ceiling)
        main, worst = near[0][good], near[1][good]
        inside, steps, mass = inside[good], steps[good], mass[good]
        dearer = goal.step_costs * (steps - bound.steps[0])
        dearer += goal.hundred_g_mol_costs * MASS_UNIT / 100.0 * (mass - bound.mass[0])
        best_hit = hit_bound(in_ph(main), goal.tolerance, bound.sd_low, bound.sd_high)
        good = best_hit - bound.costs[0] - dearer + SCORE_SLACK >= standing.score_floor()
        good |= worst // standing.resolution < standing.offset_ceiling(steps, mass)
        return np.asarray(inside[good])


def search_exact(
    search: Search,
    *,
    workers: int = 0,
    progress: Progress | None = None,
    checkpoint: Path | None = None,
) -> Found:
    """The exact front and the exact best N.

    Parameters
    ----------
    search : Search
    workers : int
        Threads; 0 takes all cores. The result is the same for any number.
    progress : callable
        Called as progress(stage, chunks done, chunks in all).
    checkpoint : path
        Where to keep what has been done. It is written every few seconds and on an interrupt, read if it
        belongs to the same problem, and removed once the search is complete.

    Returns
    -------
    Found
    """
    chunks = search.chunks()
    kept = Checkpoint(
        checkpoint, problem_digest(search.spaces, search.goal, search.best_n, search.resolution)
    )
    standing = search.seeded()
    visited = kept.load(standing)
    pending = [chunk for chunk in chunks if chunk.number not in kept.done]
    searcher = ChunkSearcher(search)
    stop = Event()
    with ThreadPoolExecutor(max_workers=workers or cpu_count() or 1) as pool:
        running = {pool.submit(searcher.run, chunk, standing, stop.is_set): chunk for chunk in pending}
        try:
            for future in as_completed(running):
                visited += future.result()
                kept.note(running[future].number, visited, standing)
                if progress is not None:
                    progress(STAGE, len(kept.done), len(chunks))
        except BaseException:
            stop.set()
            pool.shutdown(wait=True, cancel_futures=True)
            kept.save(visited, standing)
            raise
    kept.remove()
    return found(search, standing, visited)


def found(search: Search, standing: Standing, visited: int) -> Found:
    """The result of a finished search, with its certificate."""
    covered = sum(tables.size for tables in search.spaces)
    full = len(standing.best) >= search.best_n > 0
    certificate = Certificate(
        covered=covered,
        visited=min(visited, covered),
        resolution_pka=search.resolution * PKA_UNIT,
        bound=standing.score_floor() if full else float("-inf"),
    )
    return Found(standing.front, standing.best, certificate)
