"""What is the pKa of each site of a molecule, and of which groups does it consist?

Turns the site views of a dissection into evaluated sites: phenols and anilines through the ring model, for
any set of charged neighbours; every other site through its own rules.
"""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping
from dataclasses import dataclass, field, replace
from math import hypot, log10

from tuner.acidity.medium import medium_effect
from tuner.brief.records import Medium
from tuner.library.catalogue import Library
from tuner.library.records import Series, Substituent
from tuner.prediction.doubt import SATURATED, TIED, site_doubt
from tuner.prediction.estimate import Estimator
from tuner.prediction.held import (
    APPARENT_SULFONIC,
    COUNTED_IN_PARENT,
    HELD_OTHER,
    HELD_PAIRS,
    HYDROXYL_BRIDGES,
    PROTON_BRIDGES,
)
from tuner.prediction.ionisation import ALWAYS_IONISED, IonSite
from tuner.prediction.records import SitePrediction, Term
from tuner.prediction.ring_model import RingModel
from tuner.prediction.side_sites import side_pka, side_site
from tuner.prediction.words import substitution
from tuner.structure.charging import bonds_between, charged_groups
from tuner.structure.molecule import matches
from tuner.structure.records import Dissection, SiteView
from tuner.structure.scaffolds import CoreIndex

REPORTING_KINDS = ("phenol", "aniline")
AMINE_SERIES = ("anilinium", "n_alkyl_anilinium", "nn_dialkyl_anilinium")
STATISTICAL_TWO = log10(2.0)
SAME_CENTRE_BONDS = 2

Charges = Mapping[int, int]
"""Atom number -> formal charge that it carries when its site is ionised."""


@dataclass(frozen=True, slots=True)
class Evaluated:
    """A phenol or aniline evaluated for one set of charged neighbours (pKa25)."""

    pka: float
    sd: float
    terms: tuple[Term, ...]


def _opened(view: SiteView) -> frozenset[str]:
    """Labels of groups that are two ends of one fused ring: they share atoms."""
    found = set()
    for i, one in enumerate(view.groups):
        for other in view.groups[i + 1 :]:
            if set(one.atoms) & set(other.atoms):
                found |= {one.label, other.label}
    return frozenset(found)


def _ends_without_charge(
    view: SiteView, opened: Collection[str], acting: Charges, holder: Mapping[int, str]
) -> dict[str, str]:
    """Ends of an opened ring that share a charged atom with a nearer end: only that one carries the
    charge."""
    return {
        g.label: g.smiles
        for g in view.groups
        if g.label in opened and not any(holder[a] == g.label for a in acting if a in g.atoms)
    }


def lies_flat(group: Substituent) -> Substituent:
    """A group that a fused ring holds in the plane: it neither turns nor turns its neighbour."""
    return replace(group, bulk=0, twistable=False)


@dataclass
class SiteTable:
    """All sites of one molecule, ready for the microstates, and what is to be said about them."""

    ions: list[IonSite]
    shown: list[SitePrediction]
    energies: dict[tuple[int, int], float]
    evaluate: dict[int, Callable[[frozenset[int]], Evaluated]]
    notes: list[str] = field(default_factory=list)
    series: dict[int, Series] = field(default_factory=dict)  # of phenols and anilines


class SiteMaker:
    """Evaluates the sites of dissected molecules with one library and one ring model."""

    def __init__(self, library: Library, index: CoreIndex, model: RingModel, estimator: Estimator) -> None:
        self._library, self._index, self._model, self._estimator = library, index, model, estimator

    def series_of(self, view: SiteView) -> Series:
        """The equilibrium of a phenol or aniline; amines by the number of groups on nitrogen."""
        if view.kind == "phenol":
            return self._library.series["phenol"]
        groups = view.scaffold_groups or view.groups
        count = sum(g.label.startswith("N") for g in groups)
        if view.scaffold not in ("", "aniline"):
            return self._library.series[self._library.cores[view.core].series]
        return self._library.series[AMINE_SERIES[min(count, 2)]]

    def table(self, found: Dissection, medium: Medium) -> SiteTable:
        """Every site of a dissection; sites of a kind without rules are left out with a note."""
        made = SiteTable([], [], {}, {})
        kept: list[SiteView] = []
        for view in found.sites:
            if view.kind in REPORTING_KINDS or side_site(view.kind, view, self._library) is not None:
                kept.append(view)
            else:
                made.notes.append(f"no rules for a {view.kind.replace('_', ' ')}; it was left neutral")
        charges = {v.reporting_atom: self._charge(v) for v in kept}
        for number, view in enumerate(kept):
            if view.kind in REPORTING_KINDS:
                self._add_ring_site(made, found, kept, number, charges, medium)
            else:
                self._add_side_site(made, view, medium)
        self._held_together(made, kept)
        self._bridged_hydroxyls(made, kept, found.smiles)
        self._bridged_by_proton(made, kept, found.smiles)
        self._two_protons_on_one_centre(made, kept, found.smiles)
        return made

    def _charge(self, view: SiteView) -> int:
        """+1 where ionising means taking up a proton, -1 where it means losing one."""
        if view.kind in REPORTING_KINDS:
            return 1 if view.kind == "aniline" else -1
        site = side_site(view.kind, view, self._library)
        return 1 if site is not None and site.series.acid_charge > 0 else -1

    def resolve(self, smiles_by_label: Mapping[str, str], notes: list[str]) -> dict[str, Substituent]:
        """Groups as library records, estimated where no table lists them."""
        resolved = {}
        for label, smiles in smiles_by_label.items():
            group, estimated = self._estimator.group(smiles)
            resolved[label] = group
            if estimated:
                notes.append(f"{group.short} at {label} {group.note}")
        return resolved

    def _add_ring_site(
        self,
        made: SiteTable,
        found: Dissection,
        kept: list[SiteView],
        number: int,
        charges: Charges,
        medium: Medium,
    ) -> None:
        """A phenol or aniline: evaluated for any set of charged sites."""
        view = kept[number]
        prepared = self._index.core(view.core)
        notes: list[str] = []
        neutral = self.resolve({g.label: g.smiles for g in view.groups}, notes)
        opened = _opened(view)
        atoms = [v.reporting_atom for v in kept]
        holder = {a: label for a, label in view.other_sites if label}
        estimated = [g.label for g in view.groups if self._estimator.group(g.smiles)[1]]
        doubt = site_doubt(view, found.smiles, opened, estimated)

        def evaluate(charged: frozenset[int]) -> Evaluated:
            acting = {atoms[k]: charges[atoms[k]] for k in charged if atoms[k] in holder}
            if not acting:
                groups = neutral
            else:
                spelled = charged_groups(found.smiles, view.groups, acting)
                spelled.update(_ends_without_charge(view, opened, acting, holder))
                groups = self.resolve(spelled, [])
            flat = {label: lies_flat(g) if label in opened else g for label, g in groups.items()}
            if opened == TIED:
                flat.update(self._tied_back(flat))
            pka, sd, terms = self._model.evaluate(prepared, flat)
            return Evaluated(pka, hypot(sd, doubt), terms)

        known: dict[frozenset[int], Evaluated] = {}

        def cached(charged: frozenset[int]) -> Evaluated:
            key = frozenset(k for k in charged if atoms[k] in holder)
            if key not in known:
                known[key] = evaluate(key)
            return known[key]

        base = cached(frozenset())
        made.series[number] = self.series_of(view)
        effect = medium_effect(made.series[number], medium)
        made.evaluate[number] = cached
        made.ions.append(
            IonSite(
                kind=view.kind,
                atom=view.reporting_atom,
                charge_if_ionised=charges[view.reporting_atom],
                pka=base.pka,
                sd=base.sd,
                own=lambda charged: cached(charged).pka,
                effect=effect,
            )
        )
        made.shown.append(
            SitePrediction(
                kind=view.kind,
                atom=view.reporting_atom,
                core=view.core,
                substitution=substitution(view.groups, neutral),
                pka25=base.pka,
                sd=base.sd,
                terms=base.terms,
                notes=tuple(notes),
            )
        )

    def _tied_back(self, groups: Mapping[str, Substituent]) -> dict[str, Substituent]:
        """Saturated ends of a ring on the nitrogen alone: tied back, they crowd it no more than methyl does.

        N-Phenylpiperidine is as weak a base as dimethylaniline (5.2 and 5.1), not as diethylaniline (6.6).
        """
        methyl, _ = self._estimator.group("*C")
        return {k: methyl for k, g in groups.items() if k in TIED and SATURATED.fullmatch(g.smiles)}

    def _add_side_site(self, made: SiteTable, view: SiteView, medium: Medium) -> None:
        """Any other site."""
        site = side_site(view.kind, view, self._library)
        assert site is not None
        pka, sd = side_pka(view, site, self._estimator)
        charge = 1 if site.series.acid_charge > 0 else -1
        effect = medium_effect(site.series, medium)
        made.ions.append(IonSite(view.kind, view.reporting_atom, charge, pka, sd, None, effect))
        term = Term("parent", site.series.title, pka, sd, source=site.series.source)
        made.shown.append(SitePrediction(view.kind, view.reporting_atom, "", "", pka, sd, (term,)))

    def _held_together(self, made: SiteTable, kept: list[SiteView]) -> None:
        """Sites that one core holds together (`held`)."""
        for i, view in enumerate(kept):
            if view.kind not in REPORTING_KINDS:
                continue
            held = [a for a, label in view.other_sites if not label]
            for j, other in enumerate(kept):
                if i == j or other.reporting_atom not in held:
                    continue
                if view.core == other.core and view.core in HELD_PAIRS and other.kind == view.kind:
                    self._pair(made, view.core, i, j)
                elif view.core in COUNTED_IN_PARENT:
                    made.energies[i, j] = made.energies[j, i] = 0.0
                    self._inside_core(made, view, i, j)

    def _inside_core(self, made: SiteTable, view: SiteView, i: int, j: int) -> None:
        """Site j, which stands inside the core of the reporting site i."""
        others = HELD_OTHER.get(view.core, ())
        held = next((other for other in others if other.kind == made.ions[j].kind), None)
        if held is not None:
            acids = frozenset(k for k, site in enumerate(made.ions) if site.kind in ALWAYS_IONISED)
            moved = made.evaluate[i](acids).pka - self._library.cores[view.core].parent_pka.value
            self._replace(
                made, j, held.pka + held.follows * moved, hypot(held.sd, 0.3 * held.follows * moved)
            )
        if view.core in APPARENT_SULFONIC and made.ions[j].kind in ALWAYS_IONISED:
            for k, site in enumerate(made.ions):
                if site.kind in ALWAYS_IONISED:
                    self._replace(made, k, *APPARENT_SULFONIC[view.core])

    def _bridged_hydroxyls(self, made: SiteTable, kept: list[SiteView], smiles: str) -> None:
        """Two hydroxyls that hold one proton between them once the first has left."""
        number = {view.reporting_atom: k for k, view in enumerate(kept) if view.kind == "phenol"}
        done: set[int] = set()
        for rule in HYDROXYL_BRIDGES if len(number) > 1 else ():
            for a, b in sorted({tuple(sorted((m[0], m[-1]))) for m in matches(smiles, rule.pattern)}):
                i, j = number.get(a, -1), number.get(b, -1)
                if i < 0 or j < 0 or {i, j} & done or (i, j) in made.energies:
                    continue
                if rule.cores and not {kept[i].core, kept[j].core} & set(rule.cores):
                    continue
                done |= {i, j}
                for k in (i, j):
                    sd = hypot(made.ions[k].sd, rule.sd)
                    self._replace(made, k, made.ions[k].pka - rule.fall, sd, -rule.fall)
                made.energies[i, j] = made.energies[j, i] = rule.fall + rule.rise

    def _bridged_by_proton(self, made: SiteTable, kept: list[SiteView], smiles: str) -> None:
        """A proton held by the anion of an acid beside it."""
        if all(ion.own is not None for ion in made.ions):  # no acids: spare the search
            return
        number = {view.reporting_atom: k for k, view in enumerate(kept)}
        for pattern, rise, rise_sd in PROTON_BRIDGES:
            for match in sorted(matches(smiles, pattern)):
                i = number.get(match[0], -1)
                acids = [number[a] for a in match[1:] if a in number and made.ions[number[a]].own is None]
                if i not in made.evaluate or not acids or (i, acids[0]) in made.energies:
                    continue
                j, of = acids[0], made.evaluate[i]
                rise_in_all = of(frozenset({j})).pka - of(frozenset()).pka + rise
                made.energies[i, j], made.energies[j, i] = rise_in_all, -rise_in_all
                self._replace(made, i, made.ions[i].pka, hypot(made.ions[i].sd, rise_sd), 0.0)

    def _two_protons_on_one_centre(self, made: SiteTable, kept: list[SiteView], smiles: str) -> None:
        """Phosphonic and arsonic acids: the rise to the second proton stands in the table."""
        for i, view in enumerate(kept):
            site = None if view.kind in REPORTING_KINDS else side_site(view.kind, view, self._library)
            if site is None or site.second_step != site.second_step:
                continue
            for j, other in enumerate(kept):
                near = other.kind == view.kind and i != j
                if (
                    near
                    and bonds_between(smiles, view.reporting_atom, other.reporting_atom) == SAME_CENTRE_BONDS
                ):
                    made.energies[i, j] = site.second_step

    def _pair(self, made: SiteTable, core: str, i: int, j: int) -> None:
        """Site i of two equal ones: its pKa beside a neutral partner, and the rise when the partner is
        charged.
        """
        held = HELD_PAIRS[core]
        model, bare = made.shown[i].pka25, self._library.cores[core].parent_pka.value
        other = held.other_pka + (model - bare if held.follows else 0.0)
        first, second = (model, other) if held.parent_step == 1 else (other, model)
        if made.ions[i].charge_if_ionised < 0:
            beside_neutral, beside_charged = first + STATISTICAL_TWO, second - STATISTICAL_TWO
        else:  # amines: the higher step is the one beside a partner without proton
            beside_neutral, beside_charged = second - STATISTICAL_TWO, first + STATISTICAL_TWO
        made.energies[i, j] = beside_charged - beside_neutral
        shift = beside_neutral - model
        self._replace(made, i, beside_neutral, made.shown[i].sd, shift)

    def _replace(self, made: SiteTable, k: int, pka: float, sd: float, shift: float | None = None) -> None:
        """Put another pKa in the place of the ring model's, or shift it."""
        old = made.ions[k]
        own: Callable[[frozenset[int]], float] | None = None
        if shift is not None and old.own is not None:
            inner, moved = old.own, shift

            def own(charged: frozenset[int]) -> float:
                return inner(charged) + moved

        made.ions[k] = IonSite(old.kind, old.atom, old.charge_if_ionised, pka, sd, own, old.effect)
