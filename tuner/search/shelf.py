"""What does the synthesis room make of the brief's reagents?"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from tuner.brief.records import Brief
from tuner.library import Library
from tuner.library.records import HYDROGEN_SHORT
from tuner.search.build import Makeable
from tuner.search.counting import count_by_steps
from tuner.search.result import Campaign
from tuner.search.space import CoreSpace
from tuner.search.tables import SpaceTables
from tuner.synthesis.records import NO_ROUTE, Route, StepTable


class Shelf:
    """Reagents and reactions of one brief; step tables, routes and the campaign of a list."""

    def __init__(self, brief: Brief, library: Library) -> None:
        self.brief = brief
        self.library = library

    @property
    def makeable(self) -> Makeable | None:
        """Which groups could stand where at all; None where every group could."""
        return None

    def step_table(self, space: CoreSpace) -> StepTable:
        """Minimum step counts over one space: one step for each group."""
        classes = tuple(
            np.array([int(choice.free.short != HYDROGEN_SHORT) for choice in listed], dtype=np.int64)
            for listed in space.choices
        )
        counts = np.indices((2,) * len(classes)).sum(axis=0).astype(np.uint8)
        return StepTable(classes, counts)

    def route(self, smiles: str, space: CoreSpace, row: Sequence[int]) -> Route | None:
        """A shortest way to one analog, or None."""
        return None

    def campaign(self, routes: Sequence[Route | None]) -> Campaign | None:
        """Making the listed analogs together, or None where there is no route."""
        return None

    def route_counts(self, spaces: Sequence[SpaceTables], max_steps: int) -> tuple[tuple[str, int], ...]:
        """How many patterns have no route, and how many take too many steps."""
        none = beyond = 0
        for tables in spaces:
            for steps, n in count_by_steps(tables.steps).items():
                none += n if steps == NO_ROUTE else 0
                beyond += n if max_steps < steps < NO_ROUTE else 0
        return (
            ("patterns without a route from the shelf", none),
            (f"patterns of more than {max_steps} steps", beyond),
        )
