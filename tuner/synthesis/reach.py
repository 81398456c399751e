"""Which one purchase would bring more analogs of a space within reach?

Every bottle of the shipped shelves that is not on the user's shelf is tried. A bottle that only serves as
starting material is tried on its own lattice; one that opens rules, or brings a group to a rule, needs the
whole space to be planned anew.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from tuner.library.reactions import Half
from tuner.library.records import Core, StockItem
from tuner.structure.cores import prepare_core
from tuner.synthesis.joining import Lattices
from tuner.synthesis.lattice import Lattice
from tuner.synthesis.planner import Choices, CorePlan, count_with_route, plan_core, steps_over
from tuner.synthesis.setting import Workshop

Spaces = Sequence[tuple[Core, Choices]]
"""Cores with the choices at their open positions."""


@dataclass(frozen=True, slots=True)
class Purchase:
    """One bottle and what it would open: patterns with a route that have none now."""

    item: StockItem
    more_patterns: int
    opens: tuple[str, ...]  # names of rules that could be used for the first time


def opened_rules(workshop: Workshop, item: StockItem) -> tuple[str, ...]:
    """Rules, or groups of rules, that this bottle would make usable."""
    richer = workshop.with_bottle(item)
    found = []
    for rule in workshop.book.reactions:
        now, then = workshop.can_give(rule), richer.can_give(rule)
        if len(then) > len(now):
            more = [g for g in then if g not in now]
            found.append(f"{rule.name} ({', '.join(more[:4])}{' ...' if len(more) > 4 else ''})")
    for joining in workshop.book.joinings:
        if richer.bottles.offers(joining.roles) and not workshop.bottles.offers(joining.roles):
            found.append(joining.name)
    return tuple(found)


def useful_groups(workshop: Workshop, spaces: Spaces) -> frozenset[str]:
    """Groups of the spaces, and all that some exchange of the book can turn into one of them."""
    found = {short for _, choices in spaces for listed in choices for short in listed}
    for joining in workshop.book.joinings:
        for core, _ in spaces:
            found |= {short for half in joining.cores.get(core.name, ()) for short in half.fixed.values()}
    while True:
        more = found.union(*(rule.takes for rule in workshop.book.reactions if set(rule.gives) & found))
        if more == found:
            return frozenset(found)
        found = more


def _effect(workshop: Workshop, item: StockItem, useful: frozenset[str]) -> tuple[tuple[str, ...], ...]:
    """What a bottle makes possible that matters: rules with their useful groups, and joinings."""
    richer = workshop.with_bottle(item)
    found = []
    for rule in workshop.book.reactions:
        now = set(workshop.can_give(rule))
        more = [g for g in richer.can_give(rule) if g not in now and g in useful]
        if more:
            found.append((rule.name, *more))
    offers, then = workshop.bottles.offers, richer.bottles.offers
    for joining in workshop.book.joinings:
        if then(joining.roles) and not offers(joining.roles):
            found.append((joining.name,))
    for way in workshop.book.protections:
        if then((*way.roles_on, *way.roles_off)) and not offers((*way.roles_on, *way.roles_off)):
            found.append((way.name,))
    return tuple(found)


def worthwhile(
    workshop: Workshop, plans: Sequence[CorePlan], pool: Iterable[StockItem]
) -> list[tuple[StockItem, tuple[str, ...]]]:
    """Bottles of the pool that could matter: they open a rule, or a core can be made from them."""
    have = {item.smiles for item in workshop.shelf}
    found = []
    for item in pool:
        if item.smiles in have:
            continue
        opens = opened_rules(workshop, item)
        if opens or _starts_a_core(workshop, plans, item):
            found.append((item, opens))
    return found


def _touches(workshop: Workshop, item: StockItem, half: Half) -> bool:
    """Whether the bottle is a pattern of a half."""
    lone = replace(workshop, shelf=(item,))
    lone.__dict__["short_of"] = workshop.short_of
    if half.template:
        return bool(lone.bought_template(half.template))
    return bool(lone.bought(workshop.library.cores[half.core]))


def _starts_a_core(workshop: Workshop, plans: Sequence[CorePlan], item: StockItem) -> bool:
    """Whether the bottle is a pattern of one of the cores or of a half of their joinings."""
    lone = replace(workshop, shelf=(item,))
    lone.__dict__["short_of"] = workshop.short_of
    for plan in plans:
        if lone.bought(plan.core):
            return True
        for joining in workshop.book.joinings:
            for half in joining.cores.get(plan.core.name, ()):
                if half.template and lone.bought_template(half.template):
                    return True
                if half.core and lone.bought(workshop.library.cores[half.core]):
                    return True
    return False


def _reached(plan: CorePlan, choices: Choices) -> dict[tuple[str, int], NDArray[np.int64]]:
    """Patterns of the space with a route: keys by way and part."""
    order = prepare_core(plan.core).open_labels
    wanted = {label: frozenset(listed) for label, listed in zip(order, choices, strict=True)}
    ways: list[tuple[str, tuple[Lattice, ...]]] = []
    if plan.whole is not None:
        ways = [("whole", (plan.whole,))]
    else:
        ways += [(w.joining.name, tuple(x for x in w.finished if x is not None)) for w in plan.joinings]
        ways += [(f"bought {w.pattern}", w.finished) for w in plan.bought]
    found = {}
    for name, lattices in ways:
        for number, lattice in enumerate(lattices):
            rows, _ = lattice.reached()
            fits = np.ones(len(rows), dtype=bool)
            for axis, allowed in enumerate(lattice.frame.holding(wanted)):
                fits &= allowed[rows[:, axis]]
            found[name, number] = lattice.keys[0][fits]
    return found


def _size(reached: Mapping[tuple[str, int], NDArray[np.int64]]) -> int:
    """Number of patterns: parts of a way multiplied, ways added."""
    ways: dict[str, int] = {}
    for (name, _), keys in reached.items():
        ways[name] = ways.get(name, 1) * len(keys)
    return sum(ways.values())


class _Starts:
    """What a bottle adds that is only a starting material: planned alone, then united with the rest."""

    def __init__(self, workshop: Workshop, plans: Sequence[CorePlan], spaces: Spaces, max_steps: int) -> None:
        self.workshop, self.spaces, self.max_steps = workshop, spaces, max_steps
        self.now = [_reached(plan, choices) for plan, (_, choices) in zip(plans, spaces, strict=True)]
        self.shared: Lattices = {}

    def gain(self, item: StockItem) -> int:
        """Further patterns over all cores."""
        return sum(self._on(item, k) for k in range(len(self.spaces)))

    def _on(self, item: StockItem, k: int) -> int:
        core, choices = self.spaces[k]
        book = self.workshop.book
        idle = {
            joining.name
            for joining in book.joinings
            if not any(_touches(self.workshop, item, half) for half in joining.cores.get(core.name, ()))
        }
        if not _touches(self.workshop, item, Half(core=core.name)) and len(idle) == len(book.joinings):
            return 0
        richer = self.workshop.with_bottle(item, alone=True, book=book.without(idle))
        alone = _reached(plan_core(richer, core, choices, self.max_steps, self.shared), choices)
        now = self.now[k]
        if set(alone) - set(now):  # a way that was closed before
            whole = plan_core(self.workshop.with_bottle(item), core, choices, self.max_steps)
            return _size(_reached(whole, choices)) - _size(now)
        both = {key: np.union1d(keys, alone[key]) if key in alone else keys for key, keys in now.items()}
        return _size(both) - _size(now)


def purchases(
    workshop: Workshop,
    spaces: Spaces,
    pool: Iterable[StockItem],
    max_steps: int,
    progress: Callable[[int, int], None] | None = None,
) -> tuple[int, tuple[Purchase, ...]]:
    """Patterns within reach now, and purchases that add to them, the most useful first.

    Parameters
    ----------
    spaces : cores with the choices at their open positions
    pool : bottles that could be bought
    progress : called with (tried, to try)
    """
    plans = [plan_core(workshop, core, choices, max_steps) for core, choices in spaces]
    now = sum(count_with_route(steps_over(p, c)) for p, (_, c) in zip(plans, spaces, strict=True))
    starts = _Starts(workshop, plans, spaces, max_steps)
    before = sum(_size(reached) for reached in starts.now)
    tried = worthwhile(workshop, plans, pool)
    found = []
    useful = useful_groups(workshop, spaces)
    alike: dict[object, int] = {}
    for k, (item, opens) in enumerate(tried):
        effect = _effect(workshop, item, useful)
        if not effect:
            more = starts.gain(item)
        else:
            # bottles that open the same rules and are no starting materials do the same
            key = (item.name, effect) if _starts_a_core(workshop, plans, item) else effect
            if key not in alike:
                richer = workshop.with_bottle(item)
                wider = [_reached(plan_core(richer, core, own, max_steps), own) for core, own in spaces]
                alike[key] = sum(_size(reached) for reached in wider) - before
            more = alike[key]
        if more > 0:
            found.append(Purchase(item, more, opens))
        if progress is not None:
            progress(k + 1, len(tried))
    found.sort(key=lambda p: (-p.more_patterns, p.item.name))
    return now, tuple(found)
