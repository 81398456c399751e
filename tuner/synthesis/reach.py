"""Which one purchase would bring more analogs of a space within reach?

Every bottle of the shipped shelves that is not on the user's shelf is tried. A bottle that only serves as
starting material is tried on its own lattice; one that opens rules, or brings a group to a rule, needs the
whole space to be planned anew.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, replace

from tuner.library.records import Core, StockItem
from tuner.synthesis.planner import Choices, CorePlan, count_with_route, plan_core, steps_over
from tuner.synthesis.setting import Workshop


@dataclass(frozen=True, slots=True)
class Purchase:
    """One bottle and what it would open: patterns with a route that have none now."""

    item: StockItem
    more_patterns: int
    opens: tuple[str, ...]  # names of rules that could be used for the first time


def opened_rules(workshop: Workshop, item: StockItem) -> tuple[str, ...]:
    """Rules, or groups of rules, that this bottle would make usable."""
    richer = replace(workshop, shelf=(*workshop.shelf, item))
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


def _starts_a_core(workshop: Workshop, plans: Sequence[CorePlan], item: StockItem) -> bool:
    """Whether the bottle is a pattern of one of the cores or of a half of their joinings."""
    lone = replace(workshop, shelf=(item,))
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


def purchases(
    workshop: Workshop,
    spaces: Sequence[tuple[Core, Choices]],
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
    tried = worthwhile(workshop, plans, pool)
    found = []
    for k, (item, opens) in enumerate(tried):
        richer = replace(workshop, shelf=(*workshop.shelf, item))
        then = 0
        for core, choices in spaces:
            then += count_with_route(steps_over(plan_core(richer, core, choices, max_steps), choices))
        if then > now:
            found.append(Purchase(item, then - now, opens))
        if progress is not None:
            progress(k + 1, len(tried))
    found.sort(key=lambda p: (-p.more_patterns, p.item.name))
    return now, tuple(found)
