"""Which analogs form the front and the best N of a space that nobody can go through?

Branch and bound over positions: prefixes are extended choice by choice, and a prefix is dropped once
admissible bounds (see `bounds`) show that no completion can enter the front, at the stated resolution, or
the best N. What is dropped is covered by the bound, so the result is the same as if every analog had been
visited. Scores are compared exactly; offsets in whole steps of the resolution, since a front resolved to
1e-7 pKa units would list thousands of equal dyes.

Cost: proportional to the number of prefixes that bounds leave open. For a fixed target and limits that is
near (positions x choices) times the length of the result, as timings in tests/benchmarks show; it is no
guarantee. A search that would not end in reasonable time stops at `most_prefixes` with an error that says
what to tighten.
"""

from __future__ import annotations

from concurrent.futures import FIRST_COMPLETED, Future, ThreadPoolExecutor, wait
from dataclasses import dataclass
from os import cpu_count

import numpy as np

from tuner.acidity.tables import FloatArray
from tuner.errors import SearchError
from tuner.search.bounds import SpaceBounds
from tuner.search.evaluate import evaluate_admitted
from tuner.search.exact import Search, found
from tuner.search.found import Found
from tuner.search.result import Progress
from tuner.search.standing import Standing
from tuner.search.tables import Int64

CHILDREN_AT_ONCE = 2**16
"""Children bounded in one step: arrays of about 1 MiB."""

MOST_PREFIXES = 3_000_000_000
STAGE = "bounding"


@dataclass(frozen=True)
class Batch:
    """Prefixes of one depth of one space, with the cost bound by which batches are ordered."""

    space: int
    index: Int64
    score: FloatArray


def roots(search: Search) -> list[Batch]:
    """The empty prefix of every space, the first core on top."""
    empty = np.zeros((1, 0), dtype=np.int64)
    return [Batch(n, empty, np.zeros(1)) for n in reversed(range(len(search.spaces)))]


def too_large(most_prefixes: int) -> SearchError:
    """The error of a search that would not end."""
    remedy = "limit the number of substituents or steps, or coarsen search.resolution_pka"
    return SearchError(f"the bounds leave more than {most_prefixes:,} patterns open", remedy=remedy)


class Tree:
    """The open prefixes of a search, the most promising on top, and the work on one batch of them."""

    def __init__(self, search: Search, standing: Standing, start: list[Batch] | None = None) -> None:
        self.search = search
        self.standing = standing
        self.bounds = [SpaceBounds(tables, search.goal) for tables in search.spaces]
        self.open = roots(search) if start is None else start
        self.bounded = 0
        self.visited = 0

    def expand(self, batch: Batch) -> tuple[list[Batch], int, int]:
        """Bound the children of a batch; returns the batches that stay open, children bounded and analogs
        evaluated.
        """
        tables, bounds = self.search.spaces[batch.space], self.bounds[batch.space]
        index = batch.index[bounds.useful(batch.index, self.standing)]
        depth = index.shape[1]
        choices = tables.shape[depth]
        if not len(index):
            return [], len(batch.index), 0
        useful, score = bounds.useful_children(index, self.standing)
        parent, choice = np.nonzero(useful)
        children = np.concatenate((index[parent], choice[:, None]), axis=1)
        counted = len(batch.index) + len(index) * choices
        if depth + 1 == len(tables.shape):
            self.standing.offer(evaluate_admitted(tables, self.search.goal, children))
            return [], counted, len(children)
        return self._batches(batch.space, children, score[parent, choice]), counted, 0

    def run(self, enough: int = 0) -> None:
        """Work off the open batches here and now, until none is left or, if asked, `enough` are open."""
        while self.open and not (enough and len(self.open) >= enough):
            batches, bounded, visited = self.expand(self.open.pop())
            self.open += batches
            self.bounded += bounded
            self.visited += visited
            if self.bounded > MOST_PREFIXES:
                raise too_large(MOST_PREFIXES)

    def _batches(self, space: int, children: Int64, score: FloatArray) -> list[Batch]:
        """Children in batches, the most promising last (they are taken from the end)."""
        if not len(children):
            return []
        order = np.argsort(score, kind="stable")
        size = max(64, CHILDREN_AT_ONCE // self.search.spaces[space].shape[children.shape[1]])
        parts = range(0, len(order), size)
        return [Batch(space, children[order[s : s + size]], score[order[s : s + size]]) for s in parts]


def search_certified(
    search: Search,
    *,
    workers: int = 0,
    progress: Progress | None = None,
    most_prefixes: int = MOST_PREFIXES,
) -> Found:
    """The front at the search's resolution and the exact best N, certified by bounds.

    Parameters
    ----------
    search : Search
        `resolution` of about 0.01 pKa units is usual; `largest_block` is not used.
    workers : int
        Threads; 0 takes all cores. The result is the same for any number.
    progress : callable
        Called as progress(stage, prefixes bounded, 0): how many there will be is not known beforehand.
    most_prefixes : int
        Where to give up.

    Raises
    ------
    SearchError
        After `most_prefixes` prefixes.
    """
    standing = search.seeded()
    tree = Tree(search, standing)
    workers = workers or cpu_count() or 1
    running: set[Future[tuple[list[Batch], int, int]]] = set()
    with ThreadPoolExecutor(max_workers=workers) as pool:
        while tree.open or running:
            while tree.open and len(running) < 2 * workers:
                running.add(pool.submit(tree.expand, tree.open.pop()))
            done, running = wait(running, return_when=FIRST_COMPLETED)
            for future in done:
                batches, bounded, visited = future.result()
                tree.open += batches
                tree.bounded += bounded
                tree.visited += visited
            if progress is not None:
                progress(STAGE, tree.bounded, 0)
            if tree.bounded > most_prefixes:
                raise too_large(most_prefixes)
    return found(search, standing, tree.visited)
