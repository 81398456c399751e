"""Which analogs does a brief allow? From brief and tables to a design space, without a molecule per
analog.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import replace
from itertools import product

import numpy as np

from tuner.brief.records import Brief
from tuner.errors import BriefError
from tuner.library import Library
from tuner.library.records import HYDROGEN_SHORT, Core, Substituent
from tuner.screening.energetic import energetic_weights
from tuner.search.anchors import bound_form
from tuner.search.counting import count_patterns
from tuner.search.palette import acting_form, is_named, may_stand_at, palette
from tuner.search.space import Choice, CoreSpace, CountLimit, DesignSpace
from tuner.structure.cores import prepare_core
from tuner.structure.records import PreparedCore

Makeable = Callable[[Core, PreparedCore, Sequence[Substituent]], Mapping[str, frozenset[str]]]
"""Says for each open position which groups (short names) could be put there at all from the shelf."""

SUBSTITUENTS = "number of substituents"
ANCHORED = "exactly one handle"
WIDEST_COUNTED = 1000
"""Limits with larger weights (the oxygen balance) are left out of counts: their sums take too many values
to tabulate.
"""


def build_space(brief: Brief, library: Library, makeable: Makeable | None = None) -> DesignSpace:
    """The design space of a brief.

    Parameters
    ----------
    brief : Brief
    library : Library
    makeable : callable, optional
        Restricts each position to groups that the shelf can supply; without it every allowed group is a
        choice.

    Returns
    -------
    DesignSpace
        Cores in the brief's order; at each position hydrogen first, then groups in the order of the table,
        then handles. Positions that symmetry makes equal have equal lists.

    Raises
    ------
    BriefError
        Where nothing is left to choose from.
    """
    groups = palette(brief, library)
    handles = tuple(library.substituents[name] for name in brief.groups.anchors)
    spaces = []
    for name in brief.cores:
        core = library.cores[name]
        prepared = prepare_core(core)
        supplied = makeable(core, prepared, (*groups, *handles)) if makeable is not None else None
        spaces += _core_spaces(brief, library, core, prepared, groups, handles, supplied)
    if not spaces or all(0 in space.shape for space in spaces):
        remedy = "allow more groups, or more reagents"
        raise BriefError("no group can stand on any core of the brief", place="key groups", remedy=remedy)
    return DesignSpace(tuple(spaces))


def _core_spaces(
    brief: Brief,
    library: Library,
    core: Core,
    prepared: PreparedCore,
    groups: Sequence[Substituent],
    handles: Sequence[Substituent],
    supplied: Mapping[str, frozenset[str]] | None,
) -> list[CoreSpace]:
    """The spaces of one core: one, or several where its nitrogen may bear no, one or two groups."""
    target = brief.target.ph
    choices = []
    for label in prepared.open_labels:
        listed = [g for g in (*groups, *handles) if _fits(g, prepared, label, supplied)]
        choices.append(
            tuple(
                Choice(g, bound_form(g.short, library), is_anchor=True)
                if g in handles
                else Choice(g, acting_form(g, target, library))
                for g in listed
            )
        )
    shared = _shared_by_symmetry(choices, prepared.symmetry)
    return [
        CoreSpace(core, part, listed, _limits(brief, library, core, part, listed))
        for part, listed in nitrogen_parts(prepared, shared)
    ]


def nitrogen_parts(
    prepared: PreparedCore, choices: tuple[tuple[Choice, ...], ...]
) -> list[tuple[PreparedCore, tuple[tuple[Choice, ...], ...]]]:
    """Split a space so that in each part every position on the reporting nitrogen bears always hydrogen or
    always a group.

    The groups on the ring act differently on primary, secondary and tertiary amines, so a look-up table
    holds for one of them. Of parts that symmetry makes equal one is kept; each part keeps the symmetry
    operations that leave it as it is.
    """
    on = [p for p, label in enumerate(prepared.open_labels) if prepared.slot(label).relation == "nitrogen"]
    parts: list[tuple[PreparedCore, tuple[tuple[Choice, ...], ...]]] = []
    seen: set[tuple[bool, ...]] = set()
    for bears in product((False, True), repeat=len(on)):
        occupied = dict(zip(on, bears, strict=True))
        pattern = tuple(occupied.get(p, False) for p in range(len(choices)))
        images = {tuple(pattern[q] for q in permutation) for permutation in prepared.symmetry} | {pattern}
        listed = tuple(
            tuple(c for c in own if (c.free.short != HYDROGEN_SHORT) == occupied[p]) if p in occupied else own
            for p, own in enumerate(choices)
        )
        if images & seen or (on and not all(listed[p] for p in on)):
            continue
        seen.add(pattern)
        kept = tuple(g for g in prepared.symmetry if tuple(pattern[q] for q in g) == pattern)
        parts.append((replace(prepared, symmetry=kept), listed))
    return parts


def _fits(
    group: Substituent, prepared: PreparedCore, label: str, supplied: Mapping[str, frozenset[str]] | None
) -> bool:
    """Whether a group may stand at a position."""
    if not may_stand_at(group, prepared, label):
        return False
    return supplied is None or group.short in supplied.get(label, frozenset())


def _shared_by_symmetry(
    choices: Sequence[tuple[Choice, ...]], symmetry: Iterable[tuple[int, ...]]
) -> tuple[tuple[Choice, ...], ...]:
    """Equal positions get the choices that all of them have."""
    orbit = [{permutation[p] for permutation in symmetry} | {p} for p in range(len(choices))]
    names = [{choice.free.short for choice in listed} for listed in choices]
    common = [set.intersection(*(names[q] for q in sorted(orbit[p]))) for p in range(len(choices))]
    return tuple(
        tuple(choice for choice in choices[p] if choice.free.short in common[p]) for p in range(len(choices))
    )


def _weights(
    choices: Sequence[Sequence[Choice]], test: Callable[[Choice], bool]
) -> tuple[np.ndarray[tuple[int], np.dtype[np.int64]], ...]:
    """1 for the choices that pass a test, else 0."""
    return tuple(np.array([int(test(choice)) for choice in listed], dtype=np.int64) for listed in choices)


def _limits(
    brief: Brief,
    library: Library,
    core: Core,
    prepared: PreparedCore,
    choices: Sequence[Sequence[Choice]],
) -> tuple[CountLimit, ...]:
    """Counting limits of the brief, and those that keep energetic analogs out whatever the brief says."""
    n = len(choices)
    limits = []
    low, high = brief.limits.min_substituents, brief.limits.max_substituents
    if low > 0 or high < n:
        counted = _weights(choices, lambda choice: choice.free.short != HYDROGEN_SHORT)
        limits.append(CountLimit(SUBSTITUENTS, counted, low, high))
    if brief.groups.anchors:
        limits.append(CountLimit(ANCHORED, _weights(choices, lambda choice: choice.is_anchor), 1, 1))
    for word in brief.groups.require:
        wanted = _weights(choices, lambda choice, word=word: is_named(choice.free, (word,)))  # type: ignore[misc]
        limits.append(CountLimit(f"required {word}", wanted, 1, n))
    relations = [prepared.slot(label).relation for label in prepared.open_labels]
    free = [[choice.free for choice in listed] for listed in choices]
    for limit in energetic_weights(core.smiles, relations, free, library):
        if _can_bind(limit.weights, limit.low, limit.high):
            limits.append(CountLimit(limit.name, limit.weights, limit.low, limit.high))
    return tuple(limits)


def _can_bind(weights: Sequence[np.ndarray[tuple[int], np.dtype[np.int64]]], low: int, high: int) -> bool:
    """Whether any pattern could break the limit."""
    least = sum(int(w.min(initial=0)) for w in weights)
    most = sum(int(w.max(initial=0)) for w in weights)
    return least < low or most > high


def counted_limits(space: CoreSpace) -> tuple[CountLimit, ...]:
    """The limits that counts consider (see `WIDEST_COUNTED`)."""
    return tuple(
        limit
        for limit in space.limits
        if all(np.abs(w).max(initial=0) <= WIDEST_COUNTED for w in limit.weights)
    )


def count_analogs(space: CoreSpace) -> tuple[int, int]:
    """Patterns (product of the choices) and analogs (within the counting limits, each molecule once), exact
    integers.
    """
    patterns, _ = count_patterns(space.shape)
    _, analogs = count_patterns(space.shape, counted_limits(space), space.prepared.symmetry)
    return patterns, analogs
