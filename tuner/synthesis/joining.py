"""How is a dye joined from two halves, and how many steps do the halves take?"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from tuner.errors import LibraryError
from tuner.library.checks import nearest
from tuner.library.reactions import Half, Joining
from tuner.library.records import HYDROGEN_SHORT, Core
from tuner.structure.cores import prepare_core
from tuner.structure.templates import open_places
from tuner.synthesis.alphabet import alphabet, leading_to
from tuner.synthesis.lattice import Frame, Lattice, as_pattern, relax
from tuner.synthesis.setting import Pattern, Stage, Workshop

Lattices = dict[tuple[object, ...], Lattice]
"""Lattices of halves by core, wanted groups, steps and what is bought; one set of rules and roles."""


@dataclass(frozen=True)
class HalfPlan:
    """One half of a joining: its own patterns by the pattern that they give on the dye, with least step
    counts.
    """

    half: Half
    labels: tuple[str, ...]  # labels on the dye that this half decides (both arms, where it is doubled)
    counts: Mapping[tuple[tuple[str, str], ...], int]  # pattern on the dye -> steps
    own: Mapping[
        tuple[tuple[str, str], ...], tuple[tuple[str, str], ...]
    ]  # pattern on the dye -> pattern of the half
    lattice: Lattice | None  # None: a bottle
    bottles: Mapping[tuple[tuple[str, str], ...], str]  # pattern of the half -> name of the bottle


def core_lattice(
    workshop: Workshop, core: Core, wanted: Mapping[str, frozenset[str]], max_steps: int
) -> Lattice:
    """Step counts over the patterns of a core that is built from bottles of its own kind.

    `wanted` names for each label of the core the groups that matter in the end; labels left out bear hydrogen
    then.
    """
    stage = Stage(workshop, core)
    prepared = prepare_core(core)
    nitrogen = tuple(prepared.slot(label).relation == "nitrogen" for label in prepared.open_labels)
    frame = Frame(
        prepared.open_labels,
        nitrogen,
        alphabet(stage, leading_to(stage, frozenset().union(*wanted.values()))),
    )
    start = [(dict(pattern), 0) for pattern in workshop.bought(core)]
    return relax(stage, frame, start, max_steps, frame.holding(wanted))


def _shared_lattice(
    workshop: Workshop, core: Core, wanted: Mapping[str, frozenset[str]], max_steps: int, lattices: Lattices
) -> Lattice:
    """The lattice of a half, made once where several joinings need the same."""
    asked = tuple(sorted((label, tuple(sorted(own))) for label, own in wanted.items()))
    key = (core.name, asked, max_steps, frozenset(workshop.bought(core)))
    if key not in lattices:
        lattices[key] = core_lattice(workshop, core, wanted, max_steps)
    return lattices[key]


def check_halves(workshop: Workshop, joining: Joining, core: Core) -> None:
    """Refuse a joining of a core that names a half or a position which does not exist.

    Raises
    ------
    LibraryError
        File and key of the rule, what is wrong, and what would be right.
    """
    open_labels = prepare_core(core).open_labels
    for number, half in enumerate(joining.cores[core.name], start=1):
        place = f"{joining.place}.{core.name}, half {number}"
        if half.core and half.core not in workshop.library.cores:
            raise LibraryError(
                f"unknown core '{half.core}'", place=place, remedy=nearest(half.core, workshop.library.cores)
            )
        if bool(half.core) == bool(half.template):
            raise LibraryError(
                "a half is a core or a template", place=place, remedy="give one of the two keys"
            )
        if half.twin and number == 1:
            raise LibraryError("a twin needs a half before it", place=place, remedy="name the first half")
        own = (
            prepare_core(workshop.library.cores[half.core]).open_labels
            if half.core
            else open_places(half.template)
        )
        for named, known, owner in (
            (tuple(half.labels), open_labels, f"the core '{core.name}'"),
            ((*half.labels.values(), *half.fixed, *half.free), own, "the half"),
        ):
            strange = [label for label in named if label not in known]
            if strange:
                what = f"{owner} has no open position {', '.join(strange)}"
                remedy = f"its positions are {', '.join(known) or 'none'}"
                raise LibraryError(what, place=place, remedy=remedy)


def plan_halves(
    workshop: Workshop,
    joining: Joining,
    core: Core,
    wanted: Mapping[str, frozenset[str]],
    max_steps: int,
    lattices: Lattices,
) -> tuple[HalfPlan, ...] | None:
    """The halves of a joining with their step counts; None where a bottle or a role is missing.

    Parameters
    ----------
    wanted : label on the dye -> groups that may have to stand there when the halves are joined
    lattices : what has been planned for other joinings of the core; filled up
    """
    halves = joining.cores.get(core.name)
    if halves is not None:
        check_halves(workshop, joining, core)
    if halves is None or not workshop.bottles.offers(joining.roles):
        return None
    plans: list[HalfPlan] = []
    for half in halves:
        if half.twin:
            plans[-1] = _doubled(plans[-1], half)
        else:
            plans.append(_plan_half(workshop, joining, half, wanted, max_steps, lattices))
    return tuple(plans) if all(plan.counts for plan in plans) else None


def _plan_half(
    workshop: Workshop,
    joining: Joining,
    half: Half,
    wanted: Mapping[str, frozenset[str]],
    max_steps: int,
    lattices: Lattices,
) -> HalfPlan:
    back = {there: here for here, there in half.labels.items()}
    if half.template:
        bottles = workshop.bought_template(half.template)
        found = {pattern: (pattern, 0) for pattern in bottles}
        lattice = None
    else:
        core = workshop.library.cores[half.core]
        needed = {
            there: wanted.get(here, frozenset()) | {HYDROGEN_SHORT} for here, there in half.labels.items()
        }
        needed |= {label: frozenset((short,)) for label, short in half.fixed.items()}
        lattice = _shared_lattice(workshop, core, needed, max_steps, lattices)
        bottles = workshop.bought(core)
        rows, counts = lattice.reached()
        fits = np.ones(len(rows), dtype=bool)
        for axis, allowed in enumerate(lattice.frame.holding(needed)):
            fits &= allowed[rows[:, axis]]
        rows, counts = rows[fits], counts[fits]
        patterns = (tuple(sorted(lattice.frame.pattern_of(row).items())) for row in rows)
        found = {pattern: (pattern, int(n)) for pattern, n in zip(patterns, counts, strict=True)}
    counts_by: dict[tuple[tuple[str, str], ...], int] = {}
    own: dict[tuple[tuple[str, str], ...], tuple[tuple[str, str], ...]] = {}
    for pattern, n in found.values():
        dye = _on_the_dye(dict(pattern), half, back, joining.spoils | half.spoils)
        if dye is None or any(short not in wanted.get(label, frozenset((short,))) for label, short in dye):
            continue
        if n < counts_by.get(dye, 256):
            counts_by[dye], own[dye] = n, pattern
    return HalfPlan(half, tuple(half.labels), counts_by, own, lattice, bottles)


def _on_the_dye(
    pattern: Pattern, half: Half, back: Mapping[str, str], spoils: frozenset[str]
) -> tuple[tuple[str, str], ...] | None:
    """The pattern on the dye that a half gives; None where the half does not fit the joining."""
    if any(pattern.get(label) != short for label, short in half.fixed.items()):
        return None
    rest = {label: short for label, short in pattern.items() if label not in half.fixed}
    if any(label in rest for label in half.free) or any(label not in back for label in rest):
        return None
    if any(short in spoils for short in rest.values()):
        return None
    return tuple(sorted((back[label], short) for label, short in rest.items()))


def _doubled(plan: HalfPlan, twin: Half) -> HalfPlan:
    """A half that is used twice: the same groups on both arms."""
    other = {there: here for here, there in twin.labels.items()}
    counts, own = {}, {}
    for dye, n in plan.counts.items():
        on_half = as_pattern((plan.half.labels[label], short) for label, short in dye)
        both = tuple(sorted([*dye, *((other[label], short) for label, short in on_half.items())]))
        counts[both], own[both] = n, plan.own[dye]
    return replace(plan, labels=(*plan.labels, *twin.labels), counts=counts, own=own)


def joined(plans: Sequence[HalfPlan]) -> dict[tuple[tuple[str, str], ...], int]:
    """Patterns of the dye right after joining with the steps of all halves together, the joining step left
    out.
    """
    found: dict[tuple[tuple[str, str], ...], int] = {(): 0}
    for plan in plans:
        found = {
            tuple(sorted((*one, *two))): n + m for one, n in found.items() for two, m in plan.counts.items()
        }
    return found
