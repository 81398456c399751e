"""Which kind of search fits this space, and why? Runs it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from tuner.brief.records import Brief
from tuner.errors import BriefError, SearchError
from tuner.search.bounds import SpaceBounds
from tuner.search.certified import search_certified
from tuner.search.counting import count_by_steps
from tuner.search.evaluate import removed_by
from tuner.search.exact import Search, search_exact
from tuner.search.found import Found
from tuner.search.result import Progress
from tuner.search.sample import sample_rows
from tuner.search.tables import PKA_UNIT, Goal, SpaceTables, in_ph
from tuner.synthesis.records import NO_ROUTE

GONE_THROUGH_UP_TO = 300_000_000
"""Patterns up to which every analog is gone through by default: a few seconds."""

EXACT_UP_TO = 50_000_000_000
"""Patterns beyond which going through would take many minutes."""

SAMPLED = 20_000
"""Analogs by which the effect of the limits is judged where nothing is left."""


@dataclass(frozen=True)
class Method:
    """Name and reason, as shown to the user. `certified`: by bounds rather than by going through."""

    name: str
    reason: str
    certified: bool


def choose_method(brief: Brief, spaces: Sequence[SpaceTables]) -> Method:
    """The method of a brief.

    Raises
    ------
    BriefError
        "exact" is asked for and the space is too large to go through.
    """
    size = sum(tables.size for tables in spaces)
    asked = brief.search.method
    if asked == "exact" and size > EXACT_UP_TO:
        raise BriefError(
            f"{size:.2g} patterns are too many to go through one by one",
            place="key search.method",
            remedy='write "certified", which proves the same without visiting every analog',
        )
    if asked == "certified" or (asked != "exact" and size > GONE_THROUGH_UP_TO):
        why = (
            "asked for in the brief" if asked == "certified" else "too many patterns to go through one by one"
        )
        return Method("certified", f"{size:.3g} patterns, {why}: bounds decide over most of them", True)
    return Method("exact", f"{size:,} patterns, few enough to go through every one", False)


def run_search(
    search: Search,
    method: Method,
    *,
    workers: int,
    scheduler: str,
    progress: Progress | None,
    checkpoint: Path | None,
) -> Found:
    """Run a search on this machine or, with a scheduler's address, on a cluster."""
    if scheduler:
        from tuner.search.cluster import search_on_cluster

        return search_on_cluster(search, scheduler, certified=method.certified, progress=progress)
    if method.certified:
        return search_certified(search, workers=workers, progress=progress)
    return search_exact(search, workers=workers, progress=progress, checkpoint=checkpoint)


def require_reach(spaces: Sequence[SpaceTables], goal: Goal) -> None:
    """An error where no analog can come near the target, whatever stands on the cores.

    Raises
    ------
    BriefError
        Says which pKa' the cores can reach.
    """
    lows, highs = [], []
    for tables in spaces:
        low, high = pka_range(tables, goal)
        lows.append(low)
        highs.append(high)
    low, high = min(lows), max(highs)
    if not low - goal.tolerance <= goal.target_ph <= high + goal.tolerance:
        raise BriefError(
            f"the target {goal.target_ph:g} is out of reach: pKa' of these cores and groups lies between "
            f"{low:.1f} and {high:.1f}",
            place="key target.ph",
            remedy="choose another core or allow more groups",
        )


def require_bottles(brief: Brief, spaces: Sequence[SpaceTables]) -> None:
    """An error where the shelf leads to no analog at all, not even to a bare core.

    Groups that no route brings are not offered, so that only spaces of one pattern need a look.

    Raises
    ------
    BriefError
        Names the shelf.
    """
    if any(tables.size > 1 for tables in spaces):
        return
    if any(steps != NO_ROUTE for tables in spaces for steps in count_by_steps(tables.steps)):
        return
    raise BriefError(
        f'nothing can be made from the shelf "{brief.reagents.shelf}" within {brief.limits.max_steps} steps '
        f"on {', '.join(brief.cores)}",
        place="key reagents.shelf",
        remedy="include the bare core by its SMILES, or add what a joining step to it asks for",
    )


def pka_range(tables: SpaceTables, goal: Goal) -> tuple[float, float]:
    """Bounds of pKa' over a space (pKa units); every analog lies between them."""
    bounds = SpaceBounds(tables, goal)
    low, high = bounds.pka_span(np.zeros((1, 0), dtype=np.int64))
    return float(in_ph(low)[0]), float(in_ph(high)[0])


def nothing_left(spaces: Sequence[SpaceTables], goal: Goal, seed: int) -> BriefError:
    """The error of limits that exclude everything: which limit removes how many."""
    removed: dict[str, int] = {}
    looked = 0
    for tables in spaces:
        rows = sample_rows(tables, SAMPLED, seed)
        looked += len(rows)
        for name, n in removed_by(tables, goal, rows).items():
            removed[name] = removed.get(name, 0) + n
    size = sum(tables.size for tables in spaces)
    of = f"of {looked:,} analogs" if size <= SAMPLED else f"of a sample of {looked:,} analogs"
    listed = sorted(((n, name) for name, n in removed.items() if n), key=lambda pair: (-pair[0], pair[1]))
    words = "; ".join(f"{name} removes {n:,}" for n, name in listed) or "limits together remove all"
    return BriefError(f"no candidate is left: {of}, {words}", remedy="loosen the limit that removes most")


def resolution(brief: Brief) -> int:
    """The brief's resolution in whole numbers."""
    whole = round(brief.search.resolution_pka / PKA_UNIT)
    if whole < 1:
        raise SearchError(
            "the resolution is too fine", place="key search.resolution_pka", remedy="write 0.01"
        )
    return whole
