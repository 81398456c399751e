"""How does a long search survive an interruption? One small file with what is done and the standing,
replaced whole.
"""

from __future__ import annotations

import hashlib
import os
from collections.abc import Sequence
from pathlib import Path
from time import monotonic
from zipfile import BadZipFile

import numpy as np

from tuner.errors import SearchError
from tuner.search.rows import FIELDS, Analogs
from tuner.search.standing import Standing
from tuner.search.tables import FixedSum, Goal, SpaceTables
from tuner.synthesis.records import ListedPart

SECONDS_BETWEEN = 5.0


def problem_digest(spaces: Sequence[SpaceTables], goal: Goal, best_n: int, resolution: int) -> str:
    """Fingerprint of everything that a result depends on; equal digests mean equal results."""
    digest = hashlib.sha256(repr((goal, best_n, resolution)).encode())

    def add(array: np.ndarray[tuple[int, ...], np.dtype[np.generic]]) -> None:
        digest.update(repr((array.shape, array.dtype.str)).encode())
        digest.update(np.ascontiguousarray(array).data)

    def add_sum(table: FixedSum) -> None:
        digest.update(repr((table.unit, table.base, sorted(table.pair))).encode())
        for part in (*table.unary, *(table.pair[key] for key in sorted(table.pair))):
            add(part)

    for tables in spaces:
        digest.update(repr((tables.name, tables.rank, tables.shape, tables.symmetry)).encode())
        for table in (tables.pka, tables.variance, tables.mass, tables.flags):
            add_sum(table)
        for way in tables.steps.ways:
            digest.update(repr(way.constant).encode())
            for part in way.parts:
                digest.update(repr(part.positions).encode())
                add(part.counts)
                for array in (part.keys,) if isinstance(part, ListedPart) else part.class_of:
                    add(array)
        for limit in tables.limits:
            digest.update(repr((limit.name, limit.low, limit.high)).encode())
            for weights in limit.weights:
                add(weights)
        for condition in tables.conditions:
            digest.update(repr((condition.low, condition.high, condition.centre)).encode())
            add_sum(condition.pka)
            add_sum(condition.variance)
    return digest.hexdigest()


class Checkpoint:
    """What has been done of one search; without a path it only counts."""

    def __init__(self, path: Path | None, digest: str) -> None:
        self.path = path
        self.digest = digest
        self.done: set[int] = set()
        self._saved = monotonic()

    def load(self, standing: Standing) -> int:
        """Take up what an earlier run of the same problem left; returns the number of analogs that it
        looked at.

        Raises
        ------
        SearchError
            Where the file is there but cannot be read.
        """
        if self.path is None or not self.path.exists():
            return 0
        try:
            with np.load(self.path, allow_pickle=False) as kept:
                if str(kept["digest"]) != self.digest:
                    return 0
                self.done = set(kept["done"].tolist())
                for part in ("front", "best"):
                    standing.offer(Analogs(*(kept[f"{part}_{name}"] for name in FIELDS)))
                return int(kept["visited"])
        except (OSError, ValueError, KeyError, EOFError, BadZipFile) as fault:
            remedy = "delete it to start the search anew"
            raise SearchError(
                "the kept state of a search is damaged", place=self.path.name, remedy=remedy
            ) from fault

    def note(self, number: int, visited: int, standing: Standing) -> None:
        """A chunk is finished; the file is brought up to date every few seconds."""
        self.done.add(number)
        if self.path is not None and monotonic() - self._saved > SECONDS_BETWEEN:
            self.save(visited, standing)

    def save(self, visited: int, standing: Standing) -> None:
        """Write the file whole: to a neighbour, synced, then renamed."""
        if self.path is None:
            return
        kept = (("front", standing.front), ("best", standing.best))
        parts = {f"{part}_{name}": getattr(rows, name) for part, rows in kept for name in FIELDS}
        neighbour = self.path.with_name(self.path.name + ".part")
        with neighbour.open("wb") as file:
            np.savez(
                file,
                digest=np.array(self.digest),
                done=np.array(sorted(self.done), dtype=np.int64),
                visited=np.array(visited),
                **parts,
            )
            file.flush()
            os.fsync(file.fileno())
        neighbour.replace(self.path)
        self._saved = monotonic()

    def remove(self) -> None:
        """The search is complete: nothing is left to take up."""
        if self.path is not None:
            self.path.unlink(missing_ok=True)
