"""What do the rules see of a core: its rings, what it carries, how its reporting group stands to each rule,
and what the shelf offers?
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

from tuner.errors import TunerError
from tuner.library import Library
from tuner.library.reactions import Protection, Reaction, ReactionBook
from tuner.library.records import HYDROGEN_SHORT, Core, StockItem
from tuner.structure.groups import canonical_group
from tuner.structure.molecule import canonical_smiles
from tuner.structure.templates import REPORTING_PLACE, fit_core, fit_template, ring_places
from tuner.synthesis.records import Bottles
from tuner.synthesis.ring import LARGE, Code

FREE, PROTECTED = 0, 1
"""Layers of the lattice: reporting group as it is, or under its protecting group."""

AMINE_SERIES = ("anilinium", "n_alkyl_anilinium")
TERTIARY_SERIES = ("nn_dialkyl_anilinium",)

Pattern = dict[str, str]
"""Label -> short name; positions with hydrogen are left out."""


def open_bottles(shelf: Iterable[StockItem]) -> Bottles:
    """The shelf by role and by structure; of two bottles with one structure the first counts."""
    by_role: dict[str, list[str]] = {}
    by_structure: dict[str, str] = {}
    for item in shelf:
        for role in item.roles:
            by_role.setdefault(role, []).append(item.name)
        by_structure.setdefault(item.smiles, item.name)
    return Bottles({role: tuple(names) for role, names in by_role.items()}, by_structure)


@dataclass(frozen=True)
class Workshop:
    """The shelf, the rules and the tables, made ready once for all cores."""

    library: Library
    book: ReactionBook
    shelf: tuple[StockItem, ...]
    only: str = ""  # where this bottle is a pattern of a core or template, no other bottle is looked at

    def with_bottle(self, item: StockItem, alone: bool = False, book: ReactionBook | None = None) -> Workshop:
        """A shelf with one more bottle; `alone`: the only one of its kind, so that what it adds is seen."""
        more = replace(
            self, shelf=(*self.shelf, item), only=item.name if alone else "", book=book or self.book
        )
        for kept in ("short_of", "_spelled"):  # do not depend on the shelf, and take a while
            more.__dict__[kept] = getattr(self, kept)
        return more

    @cached_property
    def bottles(self) -> Bottles:
        """The shelf by role and structure."""
        return open_bottles(self.shelf)

    @cached_property
    def short_of(self) -> dict[str, str]:
        """Canonical group -> short name."""
        return {canonical_group(g.smiles): g.short for g in self.library.substituents.values()}

    @cached_property
    def steering(self) -> dict[str, str]:
        """Short name -> how it steers; names given singly win over families."""
        found: dict[str, str] = {}
        given = self.book.steering
        for group in self.library.substituents.values():
            found[group.short] = given.get(group.short) or given.get(f"family:{group.family}", "weak")
        found[HYDROGEN_SHORT] = ""
        return found

    def code(self, short: str) -> Code:
        """What a ring rule sees of a group."""
        bulk = self.library.substituents[short].bulk
        return Code(self.steering[short], bulk >= LARGE, short == HYDROGEN_SHORT)

    @cached_property
    def _spelled(self) -> dict[str, str]:
        return {}

    def spelled(self, smiles: str, place: str) -> str:
        """A rule's bottle as the shelf spells it."""
        if smiles and smiles not in self._spelled:
            self._spelled[smiles] = canonical_smiles(smiles, place=place)
        return self._spelled.get(smiles, "")

    def can_give(self, rule: Reaction) -> tuple[str, ...]:
        """Groups that this rule can give with what is on the shelf, in the rule's order."""
        if not self.bottles.offers(rule.roles):
            return ()
        place = f"reaction {rule.name}"
        return tuple(g for g, b in rule.gives.items() if self.bottles.offers((), self.spelled(b, place)))

    def named(self, groups: Mapping[str, str]) -> Pattern | None:
        """A pattern of `*...` groups in short names; None where a group is not tabulated."""
        found: Pattern = {}
        for label, smiles in groups.items():
            try:
                short = self.short_of.get(canonical_group(smiles))
            except TunerError:
                return None
            if short is None:
                return None
            found[label] = short
        return found

    def bought(self, core: Core) -> dict[tuple[tuple[str, str], ...], str]:
        """Patterns of a core that stand on the shelf -> name of the bottle."""
        return self._bought(item_patterns=((item.name, fit_core(core, item.smiles)) for item in self.shelf))

    def bought_template(self, template: str) -> dict[tuple[tuple[str, str], ...], str]:
        """Patterns of a template that stand on the shelf -> name of the bottle."""
        return self._bought((item.name, fit_template(template, item.smiles)) for item in self.shelf)

    def _bought(
        self, item_patterns: Iterable[tuple[str, Sequence[Mapping[str, str]]]]
    ) -> dict[tuple[tuple[str, str], ...], str]:
        found: dict[tuple[tuple[str, str], ...], str] = {}
        lone: dict[tuple[tuple[str, str], ...], str] = {}
        for name, patterns in item_patterns:
            for groups in patterns:
                pattern = self.named(groups)
                if pattern is not None:
                    key = tuple(sorted(pattern.items()))
                    found.setdefault(key, name)
                    if name == self.only:
                        lone[key] = name
        return lone or found


@dataclass(frozen=True)
class Stage:
    """One core as the rules see it.

    `finishing`: a joined dye, whose rings are left alone; only where both arms are alike (`twin`) and so lie
    in one lattice, every activated place of both may be filled at once.
    """

    workshop: Workshop
    core: Core
    finishing: bool = False
    twin: bool = False

    @cached_property
    def rings(self) -> tuple[object, ...]:
        """Rings with their places."""
        return tuple(ring_places(self.core))

    @cached_property
    def carried(self) -> frozenset[str]:
        """Kinds of groups that the core itself carries, hydrogens and fused rings left out."""
        return frozenset(
            kind
            for ring in ring_places(self.core)
            for name, kind in ring.carried.items()
            if kind != HYDROGEN_SHORT and name not in ring.fused
        )

    @cached_property
    def protection(self) -> Protection | None:
        """The first protecting group that fits the reporting group and stands on the shelf."""
        if self.finishing:
            return None
        offers = self.workshop.bottles.offers
        for way in self.workshop.book.protections:
            if self.core.series in way.series and offers(way.roles_on) and offers(way.roles_off):
                return way
        return None

    def reporting_code(self, layer: int) -> Code:
        """How the reporting group steers, free or protected."""
        steers = "strong" if layer == FREE or self.protection is None else self.protection.steers
        return Code(steers, False, False)

    def layers(self, rule: Reaction) -> tuple[int, ...]:
        """Layers in which the rule may be used on this core; none where the core cannot meet it."""
        if set(rule.tags) & set(self.core.destroyed_by) or rule.spoils & self.carried:
            return ()
        if self.finishing and rule.kind != "exchange" and not (self.twin and rule.floods):
            return ()
        if (rule.all_at_once or rule.one_of_two) and self.carried & set(rule.takes):
            return ()  # it would change what makes the core
        manner = rule.on_phenol
        if self.core.series in AMINE_SERIES:
            manner = rule.on_amine
        elif self.core.series in TERTIARY_SERIES:
            manner = rule.on_tertiary_amine
        if manner == "free":
            return (FREE,) if self.protection is None else (FREE, PROTECTED)
        return (PROTECTED,) if manner == "protect" and self.protection is not None else ()

    @cached_property
    def rules(self) -> tuple[tuple[Reaction, tuple[int, ...], tuple[str, ...]], ...]:
        """Usable rules with their layers and the groups that they can give from the shelf."""
        found = []
        for rule in self.workshop.book.reactions:
            layers, gives = self.layers(rule), self.workshop.can_give(rule)
            if layers and gives:
                found.append((rule, layers, gives))
        return tuple(found)


def reporting_place() -> str:
    """Name of the reporting group among ring places."""
    return REPORTING_PLACE
