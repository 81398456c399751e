"""How far is a run, and how long did each stage take?"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from time import perf_counter

from tuner.search.result import Progress


class Stages:
    """Passes progress on and keeps the time of each stage."""

    def __init__(self, progress: Progress | None) -> None:
        self.progress = progress
        self.seconds: list[tuple[str, float]] = []

    def report(self, stage: str, done: int, total: int) -> None:
        """Pass on how far a stage is."""
        if self.progress is not None:
            self.progress(stage, done, total)

    @contextmanager
    def timed(self, stage: str) -> Iterator[None]:
        """Time one stage."""
        start = perf_counter()
        yield
        self.seconds.append((stage, perf_counter() - start))
