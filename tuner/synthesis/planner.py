"""How many steps does every analog of a core space take, by whatever way is shortest?

A core is bought as it is, changed group by group, or joined from halves. Small cores get one lattice in which all of this meets. A dye with
many positions gets one part for each half: after the joining only single groups are exchanged, and no exchange looks at the other half,
so the least counts of the halves add up.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np

from tuner.library.reactions import Joining
from tuner.library.records import HYDROGEN_SHORT, Core
from tuner.structure.cores import prepare_core
from tuner.synthesis.alphabet import alphabet, leading_to
from tuner.synthesis.compress import step_part
from tuner.synthesis.joining import HalfPlan, joined, plan_halves
from tuner.synthesis.lattice import Frame, Lattice, as_pattern, relax
from tuner.synthesis.records import SplitStepTable, Steps, StepTable, StepWay
from tuner.synthesis.setting import Stage, Workshop

MOST_IN_ONE_PIECE = 5
"""Open positions up to which a joined core is planned in one lattice."""

Choices = Sequence[Sequence[str]]
"""For each open position the short names that may stand there."""


@dataclass(frozen=True)
class JoinedWay:
    """A joining with its halves, and for each half the lattice of what is still done on the finished dye."""

    joining: Joining
    halves: tuple[HalfPlan, ...]
    finished: tuple[Lattice | None, ...]  # None: a half without open positions


@dataclass(frozen=True)
class BoughtWay:
    """A bottle of the finished dye, and for each group of positions the lattice of what is done on it."""

    bottle: str
    pattern: tuple[tuple[str, str], ...]
    finished: tuple[Lattice, ...]


@dataclass(frozen=True)
class CorePlan:
    """All ways to the analogs of one core, with their step counts."""

    workshop: Workshop
    core: Core
    max_steps: int
    steps: Steps
    whole: Lattice | None  # everything in one lattice
    joined_starts: Mapping[tuple[tuple[str, str], ...], int] = field(default_factory=dict)
    joinings: tuple[JoinedWay, ...] = ()
    bought: tuple[BoughtWay, ...] = ()


def plan_core(workshop: Workshop, core: Core, choices: Choices, max_steps: int) -> CorePlan:
    """Step counts of every analog of one core space.

    Parameters
    ----------
    choices : for each open position of the prepared core, in its order, the short names that may stand there
    max_steps : int
        Analogs that take more count as without a route.

    Returns
    -------
    CorePlan
        `.steps` is the table for the search; the rest serves to write routes.
    """
    labels = prepare_core(core).open_labels
    listed = dict(zip(labels, choices, strict=True))
    halved = [j for j in workshop.book.joinings if core.name in j.cores]
    if halved and len(labels) > MOST_IN_ONE_PIECE:
        return _in_parts(workshop, core, listed, halved, max_steps)
    return _in_one_piece(workshop, core, listed, halved, max_steps)


def _nitrogen(core: Core, labels: Iterable[str]) -> tuple[bool, ...]:
    prepared = prepare_core(core)
    return tuple(prepared.slot(label).relation == "nitrogen" for label in labels)


def _in_one_piece(
    workshop: Workshop, core: Core, listed: Mapping[str, Sequence[str]], halved: Sequence[Joining], max_steps: int
) -> CorePlan:
    labels = tuple(listed)
    stage = Stage(workshop, core)
    groups = leading_to(stage, {short for own in listed.values() for short in own})
    frame = Frame(labels, _nitrogen(core, labels), alphabet(groups))
    wanted = dict.fromkeys(labels, groups)
    ways, starts = [], {}
    for joining in halved:
        halves = plan_halves(workshop, joining, core, wanted, max_steps - 1)
        if halves is not None:
            ways.append(JoinedWay(joining, halves, ()))
            for pattern, n in joined(halves).items():
                if n <= max_steps:
                    starts[pattern] = min(n, starts.get(pattern, n))
    begin = [*((dict(p), n) for p, n in starts.items()), *((dict(p), 0) for p in workshop.bought(core))]
    lattice = relax(stage, frame, begin, max_steps)
    part = step_part(lattice, range(len(labels)), list(listed.values()))
    table = StepTable(part.class_of, part.counts)
    return CorePlan(workshop, core, max_steps, table, lattice, starts, tuple(ways))


def _in_parts(
    workshop: Workshop, core: Core, listed: Mapping[str, Sequence[str]], halved: Sequence[Joining], max_steps: int
) -> CorePlan:
    stage = Stage(workshop, core, finishing=True)
    wanted = {label: leading_to(stage, own) for label, own in listed.items()}
    order = list(listed)
    ways: list[StepWay] = []
    joinings: list[JoinedWay] = []
    split: tuple[tuple[str, ...], ...] = ()
    for joining in halved:
        halves = plan_halves(workshop, joining, core, wanted, max_steps - 1)
        if halves is None:
            continue
        finished = tuple(
            _finish(stage, plan.labels, wanted, list(plan.counts.items()), max_steps - 1) if plan.labels else None
            for plan in halves
        )
        joinings.append(JoinedWay(joining, halves, finished))
        lattices = [lattice for lattice in finished if lattice is not None]
        split = split or tuple(lattice.frame.labels for lattice in lattices)
        ways.append(_way(1, lattices, listed, order))
    bought = []
    for pattern, bottle in workshop.bought(core).items():
        mine = dict(pattern)
        lattices = [
            _finish(stage, labels, wanted, [(tuple((k, mine[k]) for k in labels if k in mine), 0)], max_steps)
            for labels in split or (tuple(order),)
        ]
        bought.append(BoughtWay(bottle, pattern, tuple(lattices)))
        ways.append(_way(0, lattices, listed, order))
    return CorePlan(
        workshop, core, max_steps, SplitStepTable(tuple(ways)), None, {}, tuple(joinings), tuple(bought)
    )


def _finish(
    stage: Stage,
    labels: Sequence[str],
    wanted: Mapping[str, frozenset[str]],
    start: Sequence[tuple[tuple[tuple[str, str], ...], int]],
    max_steps: int,
) -> Lattice:
    """What can still be done on the finished dye at some of its positions."""
    groups = frozenset().union(*(wanted[label] for label in labels))
    frame = Frame(tuple(labels), _nitrogen(stage.core, labels), alphabet(groups))
    return relax(stage, frame, [(as_pattern(pattern), n) for pattern, n in start], max_steps)


def _way(
    constant: int, lattices: Sequence[Lattice], listed: Mapping[str, Sequence[str]], order: Sequence[str]
) -> StepWay:
    parts = []
    for lattice in lattices:
        positions = [order.index(label) for label in lattice.frame.labels]
        parts.append(step_part(lattice, positions, [listed[label] for label in lattice.frame.labels]))
    return StepWay(constant, tuple(parts))


def makeable(plan: CorePlan, choices: Choices) -> tuple[frozenset[str], ...]:
    """For each open position the choices that stand on at least one analog with a route."""
    found: list[set[str]] = [{HYDROGEN_SHORT} & set(own) for own in choices]
    for way in plan.steps.ways:
        if any(not (part.counts < 255).any() for part in way.parts):
            continue
        for part in way.parts:
            for axis, position in enumerate(part.positions):
                others = tuple(a for a in range(part.counts.ndim) if a != axis)
                reached = (part.counts < 255).any(axis=others)
                classes = part.class_of[axis]
                found[position] |= {
                    short for k, short in enumerate(choices[position]) if reached[classes[k]]
                }
    return tuple(frozenset(own) for own in found)


def count_makeable(plan: CorePlan) -> int:
    """Number of patterns of the space that have a route (patterns, not molecules)."""
    if len(plan.steps.ways) != 1:
        return int(np.sum([_patterns_of(way) for way in plan.steps.ways]))
    return _patterns_of(plan.steps.ways[0])


def _patterns_of(way: StepWay) -> int:
    total = 1
    for part in way.parts:
        reached = (part.counts < 255).astype(np.float64)
        for classes in reversed(part.class_of):
            reached = reached @ np.bincount(classes, minlength=reached.shape[-1]).astype(np.float64)
        total *= int(reached)
    return total
