"""What do the other rooms say about this brief? The one place where the search asks them.

Everything is worked out when first asked for and kept: reagents, choices, look-up tables, predictions.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from tuner.acidity.medium import MediumEffect, medium_effect, require_valid, to_25_c
from tuner.acidity.model import AcidityModel
from tuner.acidity.tables import CoreTables, PairwiseSum
from tuner.brief.records import Brief, Medium
from tuner.errors import Notes, TunerError
from tuner.library import Library
from tuner.library.records import HYDROGEN_SHORT, MeasuredPka, Series
from tuner.prediction.records import Prediction
from tuner.screening.records import Flags
from tuner.screening.screen import require_known_flags, screen
from tuner.search.build import build_space
from tuner.search.molecules import smiles_of
from tuner.search.palette import COMPETING_SD, competes, near_target, own_pka
from tuner.search.shelf import Shelf
from tuner.search.space import Choice, CoreSpace, DesignSpace
from tuner.search.tables import FLAG_UNIT, MASS_UNIT, PKA_UNIT, Goal, SpaceTables, fixed_sum
from tuner.search.targets import condition
from tuner.structure.molecule import molar_mass
from tuner.synthesis.records import Route, Steps

if TYPE_CHECKING:
    from tuner.prediction.door import MoleculeDoor

HYDROGEN_GROUP = "*[H]"
AMINE_SERIES = ("anilinium", "n_alkyl_anilinium", "nn_dialkyl_anilinium")
"""Series of a reporting amine by the number of groups on its nitrogen."""


class Rooms:
    """One brief with its library, and what the other rooms make of it."""

    def __init__(self, brief: Brief, library: Library) -> None:
        for target in (brief.target, *brief.also):
            require_valid(target.medium, "key medium")
        require_known_flags([name for name, _ in brief.limits.flags], library)
        self.brief = brief
        self.library = library
        self.faults = Notes()
        self._tables: dict[int, CoreTables] = {}
        self._doors: dict[Medium, MoleculeDoor] = {}

    # ------------------------------------------------------------------ structure and choices

    @cached_property
    def space(self) -> DesignSpace:
        """The design space: choices that can be made and whose constants are known."""
        built = build_space(self.brief, self.library, self.shelf.makeable)
        return DesignSpace(tuple(self._with_known_constants(part) for part in built.spaces))

    def _with_known_constants(self, space: CoreSpace) -> CoreSpace:
        """The space without choices for which the acidity model has no number."""
        tables = self._plain(space)
        known = [
            np.isfinite(a) & np.isfinite(b) for a, b in zip(tables[0].unary, tables[1].unary, strict=True)
        ]
        if all(mask.all() for mask in known):
            return space
        choices = tuple(
            tuple(c for c, ok in zip(listed, mask, strict=True) if ok)
            for listed, mask in zip(space.choices, known, strict=True)
        )
        limits = tuple(
            replace(limit, weights=tuple(w[m] for w, m in zip(limit.weights, known, strict=True)))
            for limit in space.limits
        )
        return replace(space, choices=choices, limits=limits)

    # ------------------------------------------------------------------ acidity

    @cached_property
    def model(self) -> AcidityModel:
        """The fitted acidity model."""
        from tuner.prediction.estimate import Estimator

        estimator = Estimator(self.library)
        return AcidityModel(self.library, lambda smiles: estimator.group(smiles)[0])

    def _plain(self, space: CoreSpace) -> tuple[PairwiseSum, PairwiseSum, PairwiseSum]:
        """pKa25, variance and charge tables of a space."""
        found = self.model.tables(space.prepared, [[c.acting for c in listed] for listed in space.choices])
        doubt = tuple(
            np.array([COMPETING_SD**2 * self._competes(choice, space) for choice in listed])
            for listed in space.choices
        )
        unary = tuple(own + more for own, more in zip(found.variance.unary, doubt, strict=True))
        variance = PairwiseSum(found.variance.base, unary, found.variance.pair)
        return found.pka25, variance, found.charge

    def _competes(self, choice: Choice, space: CoreSpace) -> bool:
        """Whether a choice makes the transition doubtful; a bound handle does not."""
        ph = self.brief.target.ph
        return not choice.is_anchor and competes(choice.free, space.prepared.series, ph, self.library)

    def series_of(self, space: CoreSpace) -> Series:
        """The equilibrium that reports: for amines by the number of groups on the nitrogen."""
        prepared = space.prepared
        if prepared.series not in AMINE_SERIES or prepared.scaffold != "aniline":
            return self.library.series[prepared.series]
        fixed = sum(bool(slot.fixed) for slot in prepared.slots if slot.relation == "nitrogen")
        bears = sum(
            prepared.slot(label).relation == "nitrogen" and listed[0].free.short != HYDROGEN_SHORT
            for label, listed in zip(prepared.open_labels, space.choices, strict=True)
        )
        return self.library.series[AMINE_SERIES[min(fixed + bears, 2)]]

    def effect(self, space: CoreSpace, medium: Medium) -> MediumEffect:
        """What a medium does to the reporting group."""
        return medium_effect(self.series_of(space), medium)

    def tables_in(self, space: CoreSpace, medium: Medium) -> CoreTables:
        """Conditional pKa' and its variance over a space, in one medium."""
        pka25, variance, charge = self._plain(space)
        effect = self.effect(space, medium)
        spread = replace(variance, base=variance.base + effect.sd**2)
        pka = effect.on_tables(pka25, charge)
        pka, spread = self._as_the_molecule_door(space, medium, pka, spread)
        intercept, slope = effect.temperature_line(charge.base)
        return CoreTables(pka, spread, intercept, slope)

    def _as_the_molecule_door(
        self, space: CoreSpace, medium: Medium, pka: PairwiseSum, variance: PairwiseSum
    ) -> tuple[PairwiseSum, PairwiseSum]:
        """Tables moved so that the first pattern (the bare core) has the molecule door's value.

        The two differ only where the core itself has several ionising groups (the two hydroxyls of a
        phthalein): the molecule door then sums over protonation states, the tables hold one of them.
        """
        if 0 in space.shape:
            return pka, variance
        first = np.zeros((1, len(space.shape)), dtype=np.int64)
        door = self.predict(smiles_of(space, first[0]), medium)
        if not door.found:
            return pka, variance
        shift = door.pka - float(pka.at(first)[0])
        more = max(0.0, door.pka_sd**2 - float(variance.at(first)[0]))
        return replace(pka, base=pka.base + shift), replace(variance, base=variance.base + more)

    def core_tables(self, rank: int) -> CoreTables:
        """The tables of one space in the target's medium."""
        if rank not in self._tables:
            self._tables[rank] = self.tables_in(self.space.spaces[rank], self.brief.target.medium)
        return self._tables[rank]

    def medium_sd(self, rank: int) -> float:
        """Standard error that the target's medium adds (pKa units)."""
        return self.effect(self.space.spaces[rank], self.brief.target.medium).sd

    # ------------------------------------------------------------------ the molecule door

    def predict(self, smiles: str, medium: Medium) -> Prediction:
        """One molecule in one medium, the user's own measured values known."""
        door = self._doors.get(medium)
        if door is None:
            door = self._doors[medium] = self._open_door(medium)
        try:
            return door.predict(smiles)
        except TunerError as fault:  # a molecule that the other room cannot treat stops no run
            return Prediction(smiles, notes=(fault.text,))

    @cached_property
    def own_measured(self) -> tuple[MeasuredPka, ...]:
        """The user's own measured values."""
        from tuner.structure.own_library import read_checked_measured

        return tuple(read_checked_measured(self.brief.measured)) if self.brief.measured is not None else ()

    @property
    def measured(self) -> tuple[MeasuredPka, ...]:
        """All measured values, the user's own last."""
        return (*self.library.measured, *self.own_measured)

    def _open_door(self, medium: Medium) -> MoleculeDoor:
        """The molecule door for one medium."""
        from tuner.prediction.acidity_face import shipped_model
        from tuner.prediction.door import MoleculeDoor

        return MoleculeDoor(self.library, shipped_model(self.library), medium, self.own_measured)

    def measured_in_medium(self, prediction: Prediction, rank: int) -> float:
        """A measured value brought to 25 degC, then to the target's medium as the prediction is (pKa
        units).
        """
        known = prediction.known
        if known is None:
            return float("nan")
        series = self.series_of(self.space.spaces[rank])
        return to_25_c(known.pka, series, known.temperature_c) + prediction.pka - prediction.pka25

    def screen(self, smiles: str) -> Flags:
        """Flags of one molecule."""
        return screen([smiles], self.library)[0]

    def notes_on(self, key: Sequence[int]) -> list[str]:
        """What a reader should know about the groups of an analog."""
        space = self.space.spaces[key[0]]
        notes = []
        for label, listed, k in zip(space.prepared.open_labels, space.choices, key[1:], strict=True):
            choice = listed[int(k)]
            if choice.is_anchor or not near_target(choice.free, self.brief.target.ph, self.library):
                continue
            pka = own_pka(choice.free, self.library)
            notes.append(f"{choice.free.short} at {label} ionises near pH {pka:.1f} itself")
        return notes

    # ------------------------------------------------------------------ everything the search looks up

    def goal(self) -> Goal:
        """What is wanted, and the trade of the brief's ranking."""
        brief = self.brief
        return Goal(
            target_ph=brief.target.ph,
            tolerance=brief.target.tolerance,
            step_costs=brief.ranking.step_costs,
            hundred_g_mol_costs=brief.ranking.hundred_g_mol_costs,
            flag_costs=brief.ranking.flag_costs,
            reference_mass_g_mol=min(space.prepared.bare_mass_g_mol for space in self.space.spaces),
            max_steps=brief.limits.max_steps,
            max_molar_mass_g_mol=brief.limits.max_molar_mass_g_mol,
            max_pka_sd=brief.limits.max_pka_sd,
        )

    def search_tables(self, rank: int) -> SpaceTables:
        """All look-ups of one space."""
        space = self.space.spaces[rank]
        tables = self.core_tables(rank)
        hydrogen = molar_mass(HYDROGEN_GROUP)
        mass = tuple(
            np.array([molar_mass(choice.free.smiles) - hydrogen for choice in listed])
            for listed in space.choices
        )
        nothing = tuple(np.zeros(len(listed)) for listed in space.choices)
        return SpaceTables(
            name=space.core.name,
            rank=rank,
            shape=space.shape,
            pka=fixed_sum(tables.pka, PKA_UNIT),
            variance=fixed_sum(tables.variance),
            mass=fixed_sum(PairwiseSum(space.prepared.bare_mass_g_mol, mass, {}), MASS_UNIT),
            flags=fixed_sum(PairwiseSum(0.0, nothing, {}), FLAG_UNIT),
            steps=self.step_table(space),
            limits=space.limits,
            symmetry=space.prepared.symmetry,
            conditions=tuple(condition(t, self.tables_in(space, t.medium)) for t in self.brief.also),
        )

    # ------------------------------------------------------------------ synthesis

    @cached_property
    def shelf(self) -> Shelf:
        """Reagents, reactions and what can be made of them."""
        return Shelf(self.brief, self.library)

    def step_table(self, space: CoreSpace) -> Steps:
        """Minimum step counts over one space."""
        return self.shelf.step_table(space)

    def route(self, space: CoreSpace, row: Sequence[int]) -> Route | None:
        """A shortest way to one analog, or None; a fault of the planner becomes a note of the run."""
        try:
            return self.shelf.route(space, row)
        except TunerError as fault:
            self.faults.add(f"a route could not be written: {fault.text}")
            return None
