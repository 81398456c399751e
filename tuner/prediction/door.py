"""What is the pKa of this molecule in this medium?

SMILES in, `Prediction` out. A molecule that cannot be read or treated gives an empty prediction with a note
that says why; nothing here raises for a bad molecule.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace
from functools import lru_cache
from math import hypot, nan, sqrt

from tuner.acidity.medium import medium_notes, require_valid
from tuner.acidity.microstates import MOST_SITES, Microstates
from tuner.brief.records import Medium
from tuner.errors import TunerError
from tuner.library.catalogue import Library
from tuner.library.records import MeasuredPka
from tuner.prediction.estimate import Estimator
from tuner.prediction.explain import medium_terms
from tuner.prediction.further_steps import Steps, further_steps
from tuner.prediction.held import HELD_PAIRS
from tuner.prediction.ionisation import ALWAYS_IONISED, Ionisation
from tuner.prediction.records import Prediction
from tuner.prediction.ring_model import RingModel
from tuner.prediction.sites import REPORTING_KINDS, SiteMaker, SiteTable
from tuner.structure.charging import bonds_between, formal_charge
from tuner.structure.dissect import dissect
from tuner.structure.molecule import identity_key, read_molecule
from tuner.structure.records import Dissection
from tuner.structure.scaffolds import index_cores

CLOSE_PKA = 1.5
"""A group whose own pKa lies this near the reporting site's is half charged at the transition."""
CLOSE_SD = 0.15
SCALE_PH = (-12.0, 16.0)
"""Constants outside this range are not given: no acidity scale in water reaches there."""
WATER_PH = (0.0, 14.0)
MACROSCOPIC_SD_LIMIT = 1.6
"""Stepwise constants of a molecule are left out where one of them is less sure than this (pKa units); outside
the pH scale of water only that one is.
"""
OWN_STEP = 0.75  # a step in which the reporting site loses more than this share of its proton is its own
GOOD_PART = 0.35
SHARED_NOTE = "shares its proton with another group; the step in which it first ionises is given"


class MoleculeDoor:
    """Predicts molecules with one library, one ring model and one medium.

    Parameters
    ----------
    library : Library
    model : RingModel
        The fitted acidity model.
    medium : Medium
        Checked here; BriefError where it is out of range.
    measured : iterable of MeasuredPka
        The user's own measured values; they come before the library's.
    """

    def __init__(
        self,
        library: Library,
        model: RingModel,
        medium: Medium | None = None,
        measured: Iterable[MeasuredPka] = (),
    ) -> None:
        self.medium = medium if medium is not None else Medium()
        require_valid(self.medium)
        self.library = library
        self.index = index_cores(library.cores)
        self.estimator = Estimator(library)
        self._maker = SiteMaker(library, self.index, model, self.estimator)
        self._known = _known_values((*library.measured, *measured))

    def predict(self, smiles: str, *, reporting: str | int = "", place: str = "") -> Prediction:
        """One molecule.

        Parameters
        ----------
        smiles : str
        reporting : str or int
            Which site reports: "" by rule (phenols before anilines, larger core first), a kind of site, or
            an atom number of the given SMILES.
        place : str
            File and row, for the note.
        """
        try:
            found = dissect(smiles, self.index, reporting=reporting, place=place)
        except TunerError as error:
            return Prediction(str(smiles), notes=(error.text,))
        if not found.sites or found.sites[0].kind not in REPORTING_KINDS:
            note = "no ionising phenol or aniline in this molecule"
            return Prediction(str(smiles), found.smiles, notes=(*found.notes, note))
        return self._treated(str(smiles), found)

    def known(self, smiles: str) -> MeasuredPka | None:
        """A measured value of this compound, the user's own first."""
        try:
            return self._known.get(identity_key(smiles))
        except TunerError:
            return None

    def _treated(self, smiles: str, found: Dissection) -> Prediction:
        """A molecule with a reporting site."""
        table = self._maker.table(found, self.medium)
        ionisation = Ionisation(
            table.ions,
            table.energies,
            lambda i, j: bonds_between(found.smiles, table.ions[i].atom, table.ions[j].atom),
            formal_charge(found.smiles),
        )
        lead = table.shown[0]
        answer = Prediction(
            smiles=smiles,
            treated=found.smiles,
            core=lead.core,
            substitution=lead.substitution,
            reporting_atom=_input_atom(smiles, lead.atom),
            sites=tuple(table.shown),
            terms=lead.terms,
            known=self.known(smiles),
        )
        notes = [*found.notes, *table.notes, *lead.notes, *medium_notes(self.medium)]
        if not ionisation.treatable:
            notes.append(f"{len(ionisation.free)} ionising groups; at most {MOST_SITES} are treated")
            return replace(answer, notes=tuple(dict.fromkeys(notes)))
        return self._filled(answer, table, ionisation, notes, further_steps(found, self.estimator))

    def _filled(
        self, answer: Prediction, table: SiteTable, ionisation: Ionisation, notes: list[str], extra: Steps
    ) -> Prediction:
        """Numbers of a treatable molecule."""
        states = ionisation.microstates()
        plain = ionisation.microstates(medium=False)
        place = ionisation.free.index(0)
        macroscopic = sorted((*ionisation.macroscopic(states), *extra))
        pka, shared = self._transition(answer, ionisation, states, place)
        pka25, _ = self._transition(answer, ionisation, plain, place)
        notes += [shared] if shared else []
        charged = ionisation.charged_near(0, states, pka)
        around = table.evaluate[0](charged)
        moved = sqrt(max(0.0, table.ions[0].sd ** 2 - table.shown[0].sd ** 2))  # doubt of what was put on top
        sd = hypot(around.sd, moved, table.ions[0].effect.sd, ionisation.coupling_sd(0))
        near = [s for k, s in enumerate(table.ions) if k and abs(s.pka - pka) < CLOSE_PKA and s.own is None]
        if near:
            kinds = sorted({s.kind.replace("_", " ") for s in near})
            notes.append(f"half charged at the transition: {', '.join(kinds)}")
            sd = hypot(sd, CLOSE_SD)
        notes += _range_notes(pka)
        charge = ionisation.charge_around(0, states, pka)
        intercept, slope = table.ions[0].effect.temperature_line(charge)
        inside = _tellable(macroscopic)
        doubt = max((s for _, s, k in inside if k not in ALWAYS_IONISED), default=0.0)
        if doubt > MACROSCOPIC_SD_LIMIT:
            notes.append(f"constants of the whole molecule are too unsure to be given (+-{doubt:.1f})")
            inside = []
        beyond = not SCALE_PH[0] <= pka <= SCALE_PH[1]
        return replace(
            answer,
            pka=nan if beyond else pka,
            pka_sd=nan if beyond else sd,
            pka25=nan if beyond else pka25,
            dpka_dt=nan if beyond else intercept + slope * pka,
            macroscopic_pkas=tuple(p for p, _, _ in inside),
            macroscopic_sds=tuple(s for _, s, _ in inside),
            macroscopic_kinds=tuple(k for _, _, k in inside),
            terms=around.terms or answer.terms,
            medium_terms=medium_terms(table.series[0], self.medium, pka25, charge),
            notes=tuple(dict.fromkeys(notes)),
        )

    def _transition(
        self, answer: Prediction, ionisation: Ionisation, states: Microstates, place: int
    ) -> tuple[float, str]:
        """pH of half ionisation of the reporting site, and a note where that needs one.

        A site that shares its protons with an equal one (catechol, a sulfonephthalein's two arms) is half
        ionised only between two steps; what is seen then is a step, and the step is given: the one that the
        core's parent stands for, else the first in which the site takes a good part.
        """
        steps = [float(p) for p in states.macroscopic_pkas()]
        if answer.core in HELD_PAIRS and (0, 1) in ionisation.pair_energies:
            wanted = ionisation.sites[0].pka
            beside_charged = 2 if ionisation.sites[0].charge_if_ionised < 0 else 1
            if HELD_PAIRS[answer.core].parent_step == beside_charged:
                wanted += ionisation.pair_energies[0, 1]
            return min(steps, key=lambda p: abs(p - wanted)), ""
        part = [float(states.site_losses(k)[place]) for k in range(len(steps))]
        if max(part) > OWN_STEP:
            return states.transition_ph([place]), ""
        order = (
            range(len(part)) if ionisation.sites[0].charge_if_ionised < 0 else range(len(part) - 1, -1, -1)
        )
        first = next((k for k in order if part[k] >= GOOD_PART), part.index(max(part)))
        return steps[first], SHARED_NOTE


def _known_values(measured: Iterable[MeasuredPka]) -> dict[str, MeasuredPka]:
    """Identity -> measured value; later ones win; rows that cannot be read are passed over."""
    found = {}
    for value in measured:
        try:
            found[identity_key(value.smiles)] = value
        except TunerError:
            continue
    return found


def _tellable(steps: Sequence[tuple[float, float, str]]) -> list[tuple[float, float, str]]:
    """Steps on an acidity scale; outside the pH scale of water only those that are sure enough."""
    return [
        (p, s, k)
        for p, s, k in steps
        if SCALE_PH[0] <= p <= SCALE_PH[1]
        and (WATER_PH[0] <= p <= WATER_PH[1] or s <= MACROSCOPIC_SD_LIMIT or k in ALWAYS_IONISED)
    ]


def _range_notes(pka: float) -> list[str]:
    """What must be said about a value outside the pH scale of water."""
    if not SCALE_PH[0] <= pka <= SCALE_PH[1]:
        return [f"the reporting group does not ionise between pH {SCALE_PH[0]:g} and {SCALE_PH[1]:g}"]
    if pka < WATER_PH[0]:
        return ["below pH 0 the value belongs to an acidity function, not to a pH"]
    if pka > WATER_PH[1]:
        return ["above pH 14 the value is an extrapolation"]
    return []


def _input_atom(smiles: str, atom: int) -> int:
    """Atom number in the string that was given."""
    return int(read_molecule(smiles).input_atoms[atom])


@lru_cache(maxsize=8)
def _door(version: str, overlay: str, medium: Medium) -> MoleculeDoor:
    """Kept doors; the library's version and folder stand for the library."""
    from pathlib import Path

    from tuner.prediction.acidity_face import shipped_model
    from tuner.structure.own_library import load_checked_library

    library = load_checked_library(Path(overlay) if overlay else None)
    return MoleculeDoor(library, shipped_model(library), medium)


def predict_molecule(smiles: str, medium: Medium | None = None, library: Library | None = None) -> Prediction:
    """Predict one molecule with the shipped model.

    Parameters
    ----------
    smiles : str
    medium : Medium, optional
        25 degC and no salt unless given.
    library : Library, optional
        The shipped one unless given.

    Returns
    -------
    Prediction
        Empty with a note where the molecule cannot be treated.
    """
    from tuner.library import load_library

    used = library or load_library()
    return _door(used.version, str(used.overlay or ""), medium or Medium()).predict(smiles)
