"""What can be made from the brief's reagents, in how many steps, and how?"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import cached_property

from tuner.brief.records import Brief
from tuner.errors import BriefError, TunerError
from tuner.library import Library
from tuner.library.checks import nearest
from tuner.library.reactions import load_reactions
from tuner.library.records import HYDROGEN_SHORT, Core, Substituent
from tuner.library.stock import apply_reagents
from tuner.search.build import Makeable
from tuner.search.counting import count_by_steps
from tuner.search.palette import may_stand_at
from tuner.search.result import Campaign
from tuner.search.space import CoreSpace
from tuner.search.tables import SpaceTables
from tuner.structure.molecule import canonical_smiles
from tuner.structure.records import PreparedCore
from tuner.synthesis.campaign import share
from tuner.synthesis.planner import CorePlan, makeable, plan_core, steps_over
from tuner.synthesis.records import NO_ROUTE, Route, Steps
from tuner.synthesis.routes import routes_to
from tuner.synthesis.setting import Workshop

ALTERNATIVES = 3
"""Routes of equal length that are looked at for one analog."""


class Shelf:
    """Reagents and reactions of one brief; step tables, routes and the campaign of a list."""

    def __init__(self, brief: Brief, library: Library) -> None:
        self.brief = brief
        self.library = library
        self._plans: dict[str, CorePlan] = {}
        self._routes: dict[str, tuple[Route, ...]] = {}

    @cached_property
    def workshop(self) -> Workshop:
        """The bottles that may be used, with the rules that are switched on."""
        reagents = self.brief.reagents
        book = load_reactions(self.library.substituents, overlay=self.brief.overlay)
        for name in reagents.switched_off:
            if name not in book.names:
                place = f"{self.brief.path}, key reagents.switched_off"
                raise BriefError(
                    f"there is no reaction '{name}'", place=place, remedy=nearest(name, book.names)
                )
        try:
            bottles = apply_reagents(reagents, base=self.brief.path.parent, canonical=canonical_smiles)
        except TunerError as fault:
            raise BriefError(fault.what, place=fault.place or "key reagents", remedy=fault.remedy) from None
        return Workshop(self.library, book.without(reagents.switched_off), bottles)

    @property
    def makeable(self) -> Makeable:
        """Which groups could stand where at all."""
        return self._makeable

    def _makeable(
        self, core: Core, prepared: PreparedCore, groups: Sequence[Substituent]
    ) -> Mapping[str, frozenset[str]]:
        """Label -> short names that some analog with a route bears there."""
        wanted = [
            [
                HYDROGEN_SHORT,
                *(g.short for g in groups if g.short != HYDROGEN_SHORT and may_stand_at(g, prepared, at)),
            ]
            for at in prepared.open_labels
        ]
        plan = plan_core(self.workshop, core, wanted, self.brief.limits.max_steps)
        self._plans[core.name] = plan
        return makeable(plan)

    def plan(self, space: CoreSpace) -> CorePlan:
        """All ways to the analogs of one core."""
        if space.core.name not in self._plans:
            wanted = [tuple(choice.free.short for choice in listed) for listed in space.choices]
            self._plans[space.core.name] = plan_core(
                self.workshop, space.core, wanted, self.brief.limits.max_steps
            )
        return self._plans[space.core.name]

    def step_table(self, space: CoreSpace) -> Steps:
        """Minimum step counts over one space."""
        return steps_over(self.plan(space), [[choice.free.short for choice in own] for own in space.choices])

    def routes(self, space: CoreSpace, row: Sequence[int]) -> tuple[Route, ...]:
        """Shortest routes to one analog, plainest first."""
        pattern = {
            label: listed[int(k)].free.short
            for label, listed, k in zip(space.prepared.open_labels, space.choices, row, strict=True)
        }
        found = routes_to(self.plan(space), pattern, ALTERNATIVES)
        if found:
            self._routes[found[0].target] = found
        return found

    def route(self, space: CoreSpace, row: Sequence[int]) -> Route | None:
        """A shortest way to one analog, or None."""
        found = self.routes(space, row)
        return found[0] if found else None

    def campaign(self, routes: Sequence[Route | None]) -> Campaign | None:
        """Making the listed analogs together, or None where there is no route."""
        options = [self._routes.get(route.target, (route,)) if route is not None else () for route in routes]
        work = share(options)
        if not work.alone:
            return None
        return Campaign(len(options), work.alone, work.together, work.shared)

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
