"""How is one analog made? A shortest way in words: bottles, steps in order, intermediates, reagents,
cautions.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from tuner.library.reactions import Half, Joining
from tuner.library.records import HYDROGEN_SHORT, Core
from tuner.structure.assemble import assemble
from tuner.structure.templates import capped, filled
from tuner.synthesis.backwards import Tracer, Transition
from tuner.synthesis.joining import HalfPlan
from tuner.synthesis.lattice import Lattice
from tuner.synthesis.planner import BoughtWay, CorePlan, JoinedWay
from tuner.synthesis.records import NO_ROUTE, Route, Step
from tuner.synthesis.setting import FREE, PROTECTED, Pattern, Workshop

Pairs = tuple[tuple[str, str], ...]

CAPS = {"phenol": "C", "anilinium": "CC(=O)", "n_alkyl_anilinium": "CC(=O)"}
"""Temporary group on the reporting atom by series, as a SMILES whose last atom is bound to it."""
MIXTURE_NOTE = "ortho and para isomers form side by side and have to be parted"


@dataclass(frozen=True)
class _Draft:
    """Part of a route: bottles and steps."""

    bottles: tuple[str, ...]
    steps: tuple[Step, ...]


def routes_to(plan: CorePlan, pattern: Mapping[str, str], most: int = 1) -> tuple[Route, ...]:
    """Shortest routes to one analog, plainest first; empty where there is none.

    Parameters
    ----------
    pattern : label of an open position -> short name of the group as made; hydrogen left out
    most : int
        How many routes of the same, least length are wanted.
    """
    wanted = {label: short for label, short in pattern.items() if short != HYDROGEN_SHORT}
    writer = _Writer(plan)
    drafts = writer.whole(wanted, most) if plan.whole is not None else writer.in_parts(wanted, most)
    target = writer.molecule(plan.core, wanted, FREE)
    routes = [Route(target, tuple(dict.fromkeys(d.bottles)), d.steps, writer.notes(d)) for d in drafts]
    return tuple(dict.fromkeys(routes))


class _Writer:
    """Turns transitions into steps with molecules and reagents."""

    def __init__(self, plan: CorePlan) -> None:
        self.plan = plan
        self.workshop: Workshop = plan.workshop

    # ------------------------------------------------------------------ molecules and words

    def groups(self, pattern: Mapping[str, str]) -> dict[str, str]:
        """Short names to `*...`."""
        return {label: self.workshop.library.substituents[short].smiles for label, short in pattern.items()}

    def molecule(self, core: Core, pattern: Mapping[str, str], layer: int) -> str:
        """SMILES of a pattern, with the protecting group where it is on."""
        if layer == PROTECTED:
            return capped(core, self.groups(pattern), CAPS[core.series])
        return assemble(core, self.groups(pattern))

    def reagents(self, roles: Sequence[str], structure: str = "") -> tuple[str, ...]:
        """One bottle for each role, and the bottle that brings the group."""
        bottles = self.workshop.bottles
        named = [bottles.by_structure[structure]] if structure else []
        roled = [bottles.by_role[role][0] for role in roles if not set(bottles.by_role[role]) & set(named)]
        return tuple(dict.fromkeys((*named, *roled)))

    def notes(self, draft: _Draft) -> tuple[str, ...]:
        """What a chemist should know about the whole route."""
        return tuple(dict.fromkeys(step.note for step in draft.steps if step.note))

    def step(self, core: Core, transition: Transition) -> Step:
        """One transition on the patterns of a core as a step."""
        before = self.molecule(core, transition.before, transition.before_layer)
        after = self.molecule(core, transition.after, transition.after_layer)
        rule = transition.rule
        if rule is None:
            return self._protection(core, transition, before, after)
        made = next(g for g in rule.gives if g in self._changed(transition))
        structure = self.workshop.spelled(rule.gives[made], rule.name)
        note = rule.note
        if rule.kind == "ring substitution" and rule.places == "ortho or para" and not rule.floods:
            note = note or MIXTURE_NOTE
        return Step(
            rule.name, rule.title, before, after, self.reagents(rule.roles, structure), rule.cautions, note
        )

    @staticmethod
    def _changed(transition: Transition) -> set[str]:
        labels = {*transition.before, *transition.after}
        return {
            transition.after.get(label, HYDROGEN_SHORT)
            for label in labels
            if transition.before.get(label) != transition.after.get(label)
        }

    def _protection(self, core: Core, transition: Transition, before: str, after: str) -> Step:
        stage_protection = next(p for p in self.workshop.book.protections if core.series in p.series)
        on = transition.after_layer == PROTECTED
        title = f"{'protection as' if on else 'removal of the'} {stage_protection.name}"
        roles = stage_protection.roles_on if on else stage_protection.roles_off
        return Step("protection" if on else "deprotection", title, before, after, self.reagents(roles), ())

    # ------------------------------------------------------------------ ways

    def on_lattice(
        self, core: Core, lattice: Lattice, pattern: Pattern, most: int
    ) -> list[tuple[Pattern, tuple[Step, ...]]]:
        """Ways on one lattice: the pattern that each starts from, and its steps."""
        found = []
        for way in Tracer(lattice).ways(pattern, FREE, most):
            start = way[0].before if way else pattern
            found.append((start, tuple(self.step(core, t) for t in way)))
        return found

    def whole(self, pattern: Pattern, most: int) -> list[_Draft]:
        """Routes where everything stands in one lattice."""
        plan = self.plan
        assert plan.whole is not None
        bought = self.workshop.bought(plan.core)
        drafts: list[_Draft] = []
        for start, steps in self.on_lattice(plan.core, plan.whole, pattern, most):
            key = tuple(sorted(start.items()))
            if key in bought and plan.whole.steps(start) == 0:
                drafts.append(_Draft((bought[key],), steps))
                continue
            for joining in plan.joinings:
                for head in self._joined(joining, start, most, plan.joined_starts.get(key, NO_ROUTE)):
                    drafts.append(_Draft(head.bottles, (*head.steps, *steps)))
        return drafts[:most]

    def in_parts(self, pattern: Pattern, most: int) -> list[_Draft]:
        """Routes where the halves of a dye are planned apart; only the shortest ways are kept."""
        best, drafts = NO_ROUTE, list[_Draft]()
        ways: tuple[JoinedWay | BoughtWay, ...] = (*self.plan.joinings, *self.plan.bought)
        for way in ways:
            steps = _count(way, pattern)
            if steps > best or steps >= NO_ROUTE or steps > self.plan.max_steps:
                continue
            if steps < best:
                best, drafts = steps, []
            if isinstance(way, BoughtWay):
                drafts += self._from_bottle(way, pattern, most)
            else:
                drafts += self._finished(way, pattern, most)
        return drafts[:most]

    def _from_bottle(self, way: BoughtWay, pattern: Pattern, most: int) -> list[_Draft]:
        """Routes from a bought dye: the changes on one half, then those on the other."""
        return [
            _Draft((way.bottle,), self._changes(dict(way.pattern), finish))
            for finish in _finishes(way.finished, pattern, most)
        ]

    def _finished(self, way: JoinedWay, pattern: Pattern, most: int) -> list[_Draft]:
        """Routes over a joining: halves, joining, then what is changed on the dye."""
        drafts: list[_Draft] = []
        for finish in _finishes([x for x in way.finished if x is not None], pattern, most):
            starts: Pattern = {}
            for part in finish:
                starts.update(part.ways[0].before if part.ways else part.end)
            steps = self._changes(starts, finish)
            heads = self._joined(way, starts, most, NO_ROUTE)
            drafts += [_Draft(head.bottles, (*head.steps, *steps)) for head in heads]
        return drafts[:most]

    def _changes(self, start: Pattern, finish: Sequence[_Finish]) -> tuple[Step, ...]:
        """Steps on the finished dye, part by part, the other positions as they stand."""
        now, steps = dict(start), list[Step]()
        for part in finish:
            rest = {label: g for label, g in now.items() if label not in part.labels}
            for t in part.ways:
                before, after = {**rest, **t.before}, {**rest, **t.after}
                whole = Transition(t.rule, before, t.before_layer, after, t.after_layer)
                steps.append(self.step(self.plan.core, whole))
            now = {**rest, **part.end}
        return tuple(steps)

    def _joined(self, way: JoinedWay, pattern: Pattern, most: int, steps: int) -> list[_Draft]:
        """Routes to a dye right after joining."""
        parts: list[list[tuple[str, _Draft]]] = []
        total = way.joining.steps
        if not set(pattern) <= {label for half in way.halves for label in half.labels}:
            return []
        for half in way.halves:
            key = tuple(sorted((label, g) for label, g in pattern.items() if label in half.labels))
            if key not in half.counts:
                return []
            total += half.counts[key]
            parts.append(self._half(half, half.own[key], most))
        if steps not in (NO_ROUTE, total):
            return []
        drafts = [(list[str](), _Draft((), ()))]
        for options in parts:
            drafts = [
                ([*names, name], _Draft((*d.bottles, *more.bottles), (*d.steps, *more.steps)))
                for names, d in drafts
                for name, more in options
            ][:most]
        return [self._with_joining(way.joining, names, d, pattern) for names, d in drafts]

    def _with_joining(self, joining: Joining, halves: list[str], draft: _Draft, pattern: Pattern) -> _Draft:
        if not joining.steps:
            return draft
        product = self.molecule(self.plan.core, pattern, FREE)
        reagents = self.reagents(joining.roles)
        step = Step(
            joining.name, joining.title, ".".join(halves), product, reagents, joining.cautions, joining.note
        )
        return _Draft(draft.bottles, (*draft.steps, step))

    def _half(self, half: HalfPlan, own: Pairs, most: int) -> list[tuple[str, _Draft]]:
        """Ways to one half, with its SMILES."""
        if half.lattice is None:
            return [(self._template_molecule(half.half, dict(own)), _Draft((half.bottles[own],), ()))]
        core = half.lattice.stage.core
        found = []
        for start, steps in self.on_lattice(core, half.lattice, dict(own), most):
            bottle = half.bottles[tuple(sorted(start.items()))]
            found.append((self.molecule(core, dict(own), FREE), _Draft((bottle,), steps)))
        return found

    def _template_molecule(self, half: Half, own: Pattern) -> str:
        return filled(half.template, self.groups(own))


@dataclass(frozen=True)
class _Finish:
    """What is done on some positions of a finished dye: a shortest way, and the pattern that it ends in."""

    labels: tuple[str, ...]
    ways: tuple[Transition, ...]
    end: Pattern


def _finishes(lattices: Sequence[Lattice], pattern: Pattern, most: int) -> list[list[_Finish]]:
    """Combinations of shortest ways, one for each lattice."""
    found: list[list[_Finish]] = [[]]
    for lattice in lattices:
        labels = lattice.frame.labels
        own = {label: g for label, g in pattern.items() if label in labels}
        ways = [_Finish(labels, tuple(way), own) for way in Tracer(lattice).ways(own, FREE, most)]
        found = [[*done, way] for done in found for way in ways][:most]
    return found


def _count(way: JoinedWay | BoughtWay, pattern: Mapping[str, str]) -> int:
    """Steps of a pattern by one way."""
    total = way.joining.steps if isinstance(way, JoinedWay) else 0
    placed: set[str] = set()
    for lattice in way.finished:
        if lattice is not None:
            placed |= set(lattice.frame.labels)
            own = {label: g for label, g in pattern.items() if label in lattice.frame.labels}
            total = min(NO_ROUTE, total + lattice.steps(own))
    return total if set(pattern) <= placed else NO_ROUTE
