"""How large is the design space of a brief? Counted, not searched."""

from __future__ import annotations

from tuner.brief.records import Brief
from tuner.library import Library
from tuner.search.build import count_analogs
from tuner.search.result import SpaceSummary
from tuner.search.rooms import Rooms
from tuner.search.space import CoreSpace, DesignSpace
from tuner.search.strategy import require_bottles
from tuner.structure.own_library import load_checked_library


def survey(brief: Brief, library: Library | None = None) -> tuple[SpaceSummary, ...]:
    """Positions, choices and numbers of analogs of every core of a brief, in the brief's order.

    Raises
    ------
    TunerError
        Whatever would stop the search as well: reagents that are not known, nothing to choose from.
    """
    rooms = Rooms(brief, library or load_checked_library(brief.overlay))
    found = summaries(rooms.space)
    if all(core.patterns == 1 for core in found):
        require_bottles(brief, [rooms.search_tables(n) for n in range(len(rooms.space.spaces))])
    return found


def summaries(space: DesignSpace) -> tuple[SpaceSummary, ...]:
    """One summary per core; the parts of a core's space are added up."""
    by_core: dict[str, list[CoreSpace]] = {}
    for part in space.spaces:
        by_core.setdefault(part.core.name, []).append(part)
    return tuple(_summary(parts) for parts in by_core.values())


def _summary(parts: list[CoreSpace]) -> SpaceSummary:
    """One core."""
    core, prepared = parts[0].core, parts[0].prepared
    counts = [count_analogs(part) for part in parts]
    names: list[set[str]] = [set() for _ in prepared.open_labels]
    for part in parts:
        for p, listed in enumerate(part.choices):
            names[p] |= {choice.free.short for choice in listed}
    return SpaceSummary(
        core=core.name,
        title=core.title,
        positions=tuple(zip(prepared.open_labels, map(len, names), strict=True)),
        patterns=sum(patterns for patterns, _ in counts),
        analogs=sum(analogs for _, analogs in counts),
        colours=core.colours,
    )
