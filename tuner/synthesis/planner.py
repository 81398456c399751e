"""How many steps does every analog of a core space take, by whatever way is shortest?

A core is bought as it is, changed group by group, or joined from halves. Small cores get one lattice in which
all of this meets. A dye with many positions gets one part for each half: after the joining only single groups
are exchanged, and no exchange looks at the other half, so the least counts of the halves add up.
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
from tuner.synthesis.joining import HalfPlan, Lattices, joined, plan_halves
from tuner.synthesis.lattice import Frame, Lattice, as_pattern, relax
from tuner.synthesis.records import NO_ROUTE, ListedPart, SplitStepTable, StepPart, Steps, StepTable, StepWay
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
    whole: Lattice | None  # everything in one lattice
    joined_starts: Mapping[tuple[tuple[str, str], ...], int] = field(default_factory=dict)
    joinings: tuple[JoinedWay, ...] = ()
    bought: tuple[BoughtWay, ...] = ()

    @property
    def lattice_ways(self) -> tuple[tuple[int, tuple[Lattice, ...]], ...]:
        """Each way as constant steps and the lattices whose counts add up."""
        if self.whole is not None:
            return ((0, (self.whole,)),)
        ways = [(way.joining.steps, tuple(x for x in way.finished if x is not None)) for way in self.joinings]
        return (*ways, *((0, way.finished) for way in self.bought))


def plan_core(
    workshop: Workshop, core: Core, choices: Choices, max_steps: int, shared: Lattices | None = None
) -> CorePlan:
    """Step counts of every analog of one core space.

    Parameters
    ----------
    choices : for each open position of the prepared core, in its order, the short names that may stand there
    max_steps : int
        Analogs that take more count as without a route.
    shared : optional
        Halves planned before with the same rules and roles; filled up.

    Returns
    -------
    CorePlan
        For `steps_over`, `makeable` and `routes.routes_to`.
    """
    shared = {} if shared is None else shared
    labels = prepare_core(core).open_labels
    listed = dict(zip(labels, choices, strict=True))
    halved = [j for j in workshop.book.joinings if core.name in j.cores]
    if halved and len(labels) > MOST_IN_ONE_PIECE:
        return _in_parts(workshop, core, listed, halved, max_steps, shared)
    return _in_one_piece(workshop, core, listed, halved, max_steps, shared)


def _nitrogen(core: Core, labels: Iterable[str]) -> tuple[bool, ...]:
    prepared = prepare_core(core)
    return tuple(prepared.slot(label).relation == "nitrogen" for label in labels)


def _in_one_piece(
    workshop: Workshop,
    core: Core,
    listed: Mapping[str, Sequence[str]],
    halved: Sequence[Joining],
    max_steps: int,
    shared: Lattices,
) -> CorePlan:
    labels = tuple(listed)
    stage = Stage(workshop, core)
    groups = leading_to(stage, {short for own in listed.values() for short in own})
    frame = Frame(labels, _nitrogen(core, labels), alphabet(stage, groups))
    wanted = dict.fromkeys(labels, groups)
    ways: list[JoinedWay] = []
    starts: dict[tuple[tuple[str, str], ...], int] = {}
    for joining in halved:
        halves = plan_halves(workshop, joining, core, wanted, max_steps - joining.steps, shared)
        if halves is not None:
            ways.append(JoinedWay(joining, halves, ()))
            for pattern, before in joined(halves).items():
                n = before + joining.steps
                if n <= max_steps:
                    starts[pattern] = min(n, starts.get(pattern, n))
    begin = [*((dict(p), n) for p, n in starts.items()), *((dict(p), 0) for p in workshop.bought(core))]
    asked = {label: frozenset((HYDROGEN_SHORT, *own)) for label, own in listed.items()}
    lattice = relax(stage, frame, begin, max_steps, frame.holding(asked))
    return CorePlan(workshop, core, max_steps, lattice, starts, tuple(ways))


def _in_parts(
    workshop: Workshop,
    core: Core,
    listed: Mapping[str, Sequence[str]],
    halved: Sequence[Joining],
    max_steps: int,
    shared: Lattices,
) -> CorePlan:
    twin = any(half.twin for joining in halved for half in joining.cores[core.name])
    stage = Stage(workshop, core, finishing=True, twin=twin)
    wanted = {label: leading_to(stage, own) for label, own in listed.items()}
    order = list(listed)
    joinings: list[JoinedWay] = []
    split: tuple[tuple[str, ...], ...] = ()
    for joining in halved:
        halves = plan_halves(workshop, joining, core, wanted, max_steps - joining.steps, shared)
        if halves is None:
            continue
        finished = tuple(
            _finish(stage, plan.labels, wanted, list(plan.counts.items()), max_steps - joining.steps)
            if plan.labels
            else None
            for plan in halves
        )
        joinings.append(JoinedWay(joining, halves, finished))
        split = split or tuple(lattice.frame.labels for lattice in finished if lattice is not None)
    bought = []
    for pattern, bottle in workshop.bought(core).items():
        mine = dict(pattern)
        lattices = [
            _finish(stage, labels, wanted, [(tuple((k, mine[k]) for k in labels if k in mine), 0)], max_steps)
            for labels in split or (tuple(order),)
        ]
        bought.append(BoughtWay(bottle, pattern, tuple(lattices)))
    return CorePlan(workshop, core, max_steps, None, {}, tuple(joinings), tuple(bought))


def _finish(
    stage: Stage,
    labels: Sequence[str],
    wanted: Mapping[str, frozenset[str]],
    start: Sequence[tuple[tuple[tuple[str, str], ...], int]],
    max_steps: int,
) -> Lattice:
    """What can still be done on the finished dye at some of its positions."""
    groups = frozenset().union(*(wanted[label] for label in labels))
    frame = Frame(tuple(labels), _nitrogen(stage.core, labels), alphabet(stage, groups))
    begin = [(as_pattern(pattern), n) for pattern, n in start]
    return relax(stage, frame, begin, max_steps)


def steps_over(plan: CorePlan, choices: Choices) -> Steps:
    """Step counts over lists of choices (a part of those that the plan was made for).

    Raises
    ------
    RouteError
        Where the table would not fit into memory.
    """
    order = prepare_core(plan.core).open_labels
    ways = []
    for constant, lattices in plan.lattice_ways:
        parts = []
        for lattice in lattices:
            positions = [order.index(label) for label in lattice.frame.labels]
            parts.append(step_part(lattice, positions, [choices[p] for p in positions]))
        ways.append(StepWay(constant, tuple(parts)))
    if plan.whole is not None:
        part = ways[0].parts[0]
        if isinstance(part, StepPart):
            return StepTable(part.class_of, part.counts)
    return SplitStepTable(tuple(ways))


def makeable(plan: CorePlan) -> dict[str, frozenset[str]]:
    """For each open position the groups that stand on at least one analog with a route; hydrogen always."""
    found: dict[str, set[str]] = {label: {HYDROGEN_SHORT} for label in prepare_core(plan.core).open_labels}
    for _, lattices in plan.lattice_ways:
        reached = [lattice.reached()[0] for lattice in lattices]
        if any(not len(rows) for rows in reached):
            continue
        for lattice, rows in zip(lattices, reached, strict=True):
            for axis, label in enumerate(lattice.frame.labels):
                found[label] |= {lattice.frame.alphabet.shorts[k] for k in np.unique(rows[:, axis])}
    return {label: frozenset(groups) for label, groups in found.items()}


def count_with_route(steps: Steps) -> int:
    """Number of patterns that some way reaches, the ways counted apart (an upper bound where there are
    several).
    """
    return sum(_patterns_of(way) for way in steps.ways)


def _patterns_of(way: StepWay) -> int:
    total = 1
    for part in way.parts:
        if isinstance(part, ListedPart):
            total *= len(part.keys)
            continue
        reached = (part.counts < NO_ROUTE).astype(np.float64)
        for axis in reversed(range(reached.ndim)):
            reached = reached @ np.bincount(part.class_of[axis], minlength=reached.shape[-1]).astype(
                np.float64
            )
        total *= int(reached)
    return total
