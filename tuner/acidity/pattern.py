"""What is the pKa of one substitution pattern, how sure is it, and what is it made of?

The molecule door of the acidity model. The same features, couplings and variances make the look-up tables of
a whole space (`space_tables`), so both doors give the same number.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations
from math import sqrt

import numpy as np

from tuner.acidity.constants import AcidityConstants
from tuner.acidity.couplings import AMINE_DIALKYL, acceptor_product, couple
from tuner.acidity.features import Alone, Features, alone
from tuner.acidity.nature import is_empty, nature
from tuner.acidity.tables import FloatArray
from tuner.errors import StructureError
from tuner.library.records import Substituent, Value
from tuner.structure.records import PreparedCore, Slot

LEAST_VARIANCE = 0.02**2
"""No calculated pKa is surer than this, whatever the algebra says (pKa units squared)."""

COUPLING_WORDS = {
    "acceptors_oo": "two ortho acceptors",
    "acceptors_om": "ortho and meta acceptors",
    "acceptors_op": "ortho and para acceptors",
    "acceptors_mm": "two meta acceptors",
    "acceptors_mp": "meta and para acceptors",
    "solvation": "hindered solvation between two ortho groups",
    "two_large": "two large ortho groups",
    "ortho_field_para_acceptor": "ortho halogen and para acceptor",
    "ortho_bulk_para_field": "ortho hydrocarbon and para halogen",
    "neighbours_para_field": "para halogen beside a meta group",
    "crowding": "two ortho groups beside the reporting group",
    "buttressing": "neighbour presses on an ortho group",
    "ortho_bulk_para_acceptor": "bulky ortho group and para acceptor",
    "ortho_large_para_acceptor": "large ortho group and para acceptor",
    "ortho_ether_para_acceptor": "ortho ether and para acceptor",
    "twist_para": "para acceptor turned out of the plane",
    "twist_ortho": "ortho acceptor turned out of the plane",
    "twist_ether_para": "para ether turned out of the plane",
    "twist_ether_ortho": "ortho ether turned out of the plane",
    "alkyl_between": "N-alkyl amine between two ortho groups",
    "alkyl_between_acceptors": "N-alkyl amine between two ortho acceptors",
    "dialkyl_between": "N,N-dialkyl amine between two ortho groups",
    "dialkyl_between_acceptors": "N,N-dialkyl amine between two ortho acceptors",
    "alkyl_acceptors_op": "ortho and para acceptors on an N-alkyl amine",
    "dialkyl_acceptors_op": "ortho and para acceptors on an N,N-dialkyl amine",
    "acceptor_and_oxide": "acceptor already leaned on by an anionic oxygen",
    "acceptor_and_donor_op": "ortho acceptor and para donor",
    "dialkyl_longer_acceptor": "groups longer than methyl on nitrogen and para acceptor",
    "dialkyl_longer_nitroso": "groups longer than methyl on nitrogen and para nitroso",
    "dialkyl": "two groups on nitrogen",
    "dialkyl_longer": "two groups on nitrogen, longer than methyl",
    "dialkyl_large": "two groups on nitrogen, one large",
}


@dataclass(frozen=True, slots=True)
class Term:
    """One summand of a pKa.

    kind : "parent", "group", "pair" or "core"; labels : the positions; value, sd in pKa units (sd of this
    summand alone); sigma, rho : what the summand would be made of by the plain equation (NaN where it is
    not);
    source : keys.
    """

    kind: str
    labels: tuple[str, ...]
    title: str
    value: float
    sd: float
    sigma: float
    rho: float
    source: str


@dataclass(frozen=True, slots=True)
class PatternPka:
    """Thermodynamic pKa at 25 degC in water of one pattern, its standard error, and its summands (they add
    up)."""

    pka25: float
    sd: float
    terms: tuple[Term, ...]


@dataclass(frozen=True, slots=True)
class CoreShift:
    """A core's own measured parent, as a shift of the model and what it takes off the variance."""

    value: float = 0.0
    variance_taken: float = 0.0
    source: str = ""


@dataclass(frozen=True)
class Base:
    """Where the sum starts: the scaffold of the fit (`own` is None) or a core with a parent of its own."""

    own: Value | None
    own_source: str = ""

    @property
    def variance(self) -> float:
        """Variance of a parent of its own, 0 for the fitted scaffolds."""
        return 0.0 if self.own is None else self.own.sd**2


def amine_count(prepared: PreparedCore, groups: Mapping[str, Substituent]) -> int:
    """How many groups the reporting nitrogen bears, a ring that it lies in included; 0 for phenols."""
    on = [g for label, g in groups.items() if prepared.slot(label).relation == "nitrogen" and not is_empty(g)]
    return min(len(on) + prepared.ring_on_nitrogen, AMINE_DIALKYL)


def pair_effect(
    constants: AcidityConstants,
    first: Slot,
    ones: Sequence[Substituent],
    second: Slot,
    twos: Sequence[Substituent],
    amine: int,
) -> tuple[FloatArray, FloatArray]:
    """Coupling (pKa units) and its variance between all choices at two positions, both (len(ones),
    len(twos))."""
    left, right = [nature(g) for g in ones], [nature(g) for g in twos]
    effect = np.zeros((len(left), len(right)))
    variance = (constants.misfit.acceptors * acceptor_product(first, left, second, right)) ** 2
    variance += _pair_misfit(constants, first, second) * np.outer(
        [n.present for n in left], [n.present for n in right]
    )
    for parameter, table in couple(first, left, second, right, amine).items():
        effect += constants.couplings.get(parameter, 0.0) * table
        variance += (constants.coupling_sd.get(parameter, 0.0) * table) ** 2
    return effect, variance


def fixed_misfit(constants: AcidityConstants, amine: int) -> float:
    """Variance that any compound has, pKa units squared."""
    return constants.misfit.base**2 + constants.misfit.nitrogen**2 * amine


def _pair_misfit(constants: AcidityConstants, first: Slot, second: Slot) -> float:
    """Variance that two groups on the reporting ring add by not being quite additive, pKa units squared."""
    ring = ("ortho", "meta", "para")
    if first.ring != second.ring or first.relation not in ring or second.relation not in ring:
        return 0.0
    n_ortho = (first.relation == "ortho") + (second.relation == "ortho")
    return constants.misfit.pair**2 + n_ortho * constants.misfit.ortho**2


def base_features(base: Base) -> Features:
    """The parent as a feature; a core with its own parent has none."""
    return {"base": 1.0} if base.own is None else {}


@dataclass(frozen=True)
class _Sum:
    """A pattern taken apart: what stands where, and the arrays from which pKa, variance and terms are
    made."""

    slots: tuple[Slot, ...]
    groups: tuple[Substituent, ...]
    found: tuple[Alone, ...]
    vectors: FloatArray  # (1 + n_groups, n_parameters); row 0 is the parent
    pairs: tuple[tuple[int, int, float, float], ...]  # which two groups, coupling, its variance
    rest: float  # variance outside the covariance


def _take_apart(
    constants: AcidityConstants, prepared: PreparedCore, groups: Mapping[str, Substituent], base: Base
) -> _Sum:
    unknown = sorted(set(groups) - {slot.label for slot in prepared.slots})
    if unknown:
        raise StructureError(
            f"core '{prepared.name}' has no position {', '.join(unknown)}",
            remedy=f"positions are {', '.join(slot.label for slot in prepared.slots)}",
        )
    slots = tuple(s for s in prepared.slots if s.label in groups and not is_empty(groups[s.label]))
    present = tuple(groups[s.label] for s in slots)
    amine = amine_count(prepared, groups)
    found = tuple(alone(s, g, constants.scales, amine) for s, g in zip(slots, present, strict=True))
    vectors = np.array(
        [constants.vector(base_features(base)), *(constants.vector(a.features) for a in found)]
    )
    rest = fixed_misfit(constants, amine) + base.variance + sum(a.own_variance for a in found)
    pairs = []
    for (i, first), (j, second) in combinations(enumerate(slots), 2):
        effect, variance = pair_effect(constants, first, [present[i]], second, [present[j]], amine)
        pairs.append((i, j, float(effect[0, 0]), float(variance[0, 0])))
    return _Sum(slots, present, found, vectors, tuple(pairs), rest)


def evaluate_pattern(
    constants: AcidityConstants,
    prepared: PreparedCore,
    groups: Mapping[str, Substituent],
    *,
    base: Base | None = None,
    shift: CoreShift | None = None,
) -> PatternPka:
    """pKa of one pattern.

    Parameters
    ----------
    constants : AcidityConstants
        Of the scaffold, or of the scaffold whose constants a core with its own parent borrows.
    prepared : PreparedCore
        The core; open and fixed positions alike count by what `groups` puts there.
    groups : mapping label -> Substituent
        The acting form at each position; left-out positions bear hydrogen. Fixed groups of the core must be
        in it (`with_fixed`).
    base : Base
        Where the sum starts; the fitted parent where not given.
    shift : CoreShift
        Correction by the core's own measured parent (`core_shift`).

    Returns
    -------
    PatternPka
        Thermodynamic, 25 degC. NaN where a constant of a group is NaN.
    """
    start = base or Base(None)
    parts = _take_apart(constants, prepared, groups, start)
    summed = parts.vectors.sum(axis=0)
    pka = float(summed @ constants.mean) + (start.own.value if start.own else 0.0)
    variance = float(summed @ constants.covariance @ summed) + parts.rest
    pka += sum(pair[2] for pair in parts.pairs)
    variance += sum(pair[3] for pair in parts.pairs)
    moved = shift or CoreShift()
    pka += moved.value
    variance = max(variance - moved.variance_taken, LEAST_VARIANCE)
    return PatternPka(pka, sqrt(variance), _terms(constants, parts, start, moved))


def _terms(constants: AcidityConstants, parts: _Sum, base: Base, shift: CoreShift) -> tuple[Term, ...]:
    """The summands in the order in which a chemist reads them."""
    rho = constants.value("rho")
    covariance = constants.covariance
    parent = parts.vectors[0]
    if base.own is None:
        sd = sqrt(float(parent @ covariance @ parent))
        title, value, source = constants.scaffold, float(parent @ constants.mean), constants.source["base"]
    else:
        title, value, sd, source = "core", base.own.value, base.own.sd, base.own_source
    terms = [Term("parent", (), title, value, sd, float("nan"), float("nan"), source)]
    for slot, group, found, vector in zip(
        parts.slots, parts.groups, parts.found, parts.vectors[1:], strict=True
    ):
        sd = sqrt(float(vector @ covariance @ vector) + found.own_variance)
        terms.append(_group_term(constants, slot, group, found, float(vector @ constants.mean), sd, rho))
    for i, j, effect, variance in parts.pairs:
        if effect != 0.0:
            labels = (parts.slots[i].label, parts.slots[j].label)
            title = _pair_title(constants, parts, i, j)
            source = constants.source.get("acceptors_oo", "")
            terms.append(
                Term("pair", labels, title, effect, sqrt(variance), float("nan"), float("nan"), source)
            )
    if shift.value != 0.0:
        terms.append(
            Term(
                "core",
                (),
                "measured parent of this core",
                shift.value,
                0.0,
                float("nan"),
                float("nan"),
                shift.source,
            )
        )
    return tuple(terms)


def _group_term(
    constants: AcidityConstants,
    slot: Slot,
    group: Substituent,
    found: Alone,
    value: float,
    sd: float,
    rho: float,
) -> Term:
    names = [name for name in found.features if ":" in name]
    fitted = next((constants.source[n] for n in names if n in constants.source), "")
    source = "; ".join(dict.fromkeys(part for part in (fitted, group.source) if part))
    acting = -value / (rho * slot.transmission) if rho * slot.transmission else float("nan")
    sigma = float("nan") if slot.relation == "nitrogen" else acting
    return Term("group", (slot.label,), group.name, value, sd, sigma, rho * slot.transmission, source)


def _pair_title(constants: AcidityConstants, parts: _Sum, i: int, j: int) -> str:
    """Name of the coupling that contributes most between two groups."""
    one, two = nature(parts.groups[i]), nature(parts.groups[j])
    amine = min(sum(s.relation == "nitrogen" for s in parts.slots), AMINE_DIALKYL)
    tables = couple(parts.slots[i], [one], parts.slots[j], [two], amine)
    largest = max(tables, key=lambda p: abs(constants.couplings.get(p, 0.0) * float(tables[p][0, 0])))
    return COUPLING_WORDS.get(largest, largest)


def core_shift(
    constants: AcidityConstants,
    prepared: PreparedCore,
    fixed: Mapping[str, Substituent],
    measured: Value,
    source: str,
) -> CoreShift:
    """How far a core's measured parent moves the model for all its analogs.

    shift = w * (measured - model), w = s^2 / (s^2 + sd^2) with s the model's own error for the bare
    core. The bare scaffold itself (nothing fixed) is not moved: its parent is in the fit.

    Parameters
    ----------
    fixed : mapping label -> Substituent
        The groups that the core carries itself.
    measured : Value
        The core's parent pKa at 25 degC; no shift where unknown.
    """
    if not measured.known or not any(not is_empty(g) for g in fixed.values()):
        return CoreShift()
    model = evaluate_pattern(constants, prepared, fixed)
    weight = model.sd**2 / (model.sd**2 + measured.sd**2)
    room = constants.misfit.base**2 - LEAST_VARIANCE  # so that no analog's variance can become negative
    taken = min(weight * (model.sd**2 - constants.misfit.base**2), room)
    return CoreShift(weight * (measured.value - model.pka25), max(taken, 0.0), source)
