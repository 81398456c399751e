"""What are pKa and variance over a whole substitution space, as look-up tables?

The space door of the acidity model: everything that `pattern.evaluate_pattern` adds up for one molecule,
worked out once for every choice at every open position and every pair of choices.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations

import numpy as np

from tuner.acidity.constants import AcidityConstants
from tuner.acidity.couplings import AMINE_DIALKYL
from tuner.acidity.features import alone
from tuner.acidity.nature import is_empty
from tuner.acidity.pattern import Base, CoreShift, base_features, fixed_misfit, pair_effect
from tuner.acidity.tables import FloatArray, PairwiseSum
from tuner.errors import StructureError
from tuner.library.records import Substituent
from tuner.structure.records import PreparedCore, Slot


@dataclass(frozen=True)
class SpaceTables:
    """pKa (25 degC, thermodynamic), its variance, and the charge of the protonated form over a space."""

    pka25: PairwiseSum
    variance: PairwiseSum
    charge: PairwiseSum


@dataclass(frozen=True)
class _Place:
    """One position with its choices: weights of the parameters (k, n), variances and charges (k,)."""

    slot: Slot
    groups: tuple[Substituent, ...]
    vectors: FloatArray
    rest: FloatArray
    charge: FloatArray


def _place(constants: AcidityConstants, slot: Slot, groups: Sequence[Substituent], amine: int) -> _Place:
    found = [alone(slot, g, constants.scales, amine) for g in groups]
    rest = [a.own_variance for a in found]
    vectors = np.array([constants.vector(a.features) for a in found])
    return _Place(slot, tuple(groups), vectors, np.array(rest), np.array([float(g.charge) for g in groups]))


def space_amine_count(
    prepared: PreparedCore, choices: Mapping[str, Sequence[Substituent]], fixed: Mapping[str, Substituent]
) -> int:
    """How many groups the reporting nitrogen bears throughout a space.

    Raises
    ------
    StructureError
        Where hydrogen and groups are mixed at one position on the nitrogen: the ring groups then act
        differently from analog to analog.
    """
    count = prepared.ring_on_nitrogen
    for slot in prepared.slots:
        if slot.relation != "nitrogen":
            continue
        there = (
            list(choices[slot.label])
            if slot.label in choices
            else [fixed[slot.label]]
            if slot.label in fixed
            else []
        )
        empty = {is_empty(g) for g in there}
        if len(empty) > 1:
            raise StructureError(
                f"core '{prepared.name}' mixes hydrogen and groups at {slot.label} on its nitrogen",
                remedy="write two cores, one with hydrogen there and one that always bears a group",
            )
        count += empty == {False}
    return min(count, AMINE_DIALKYL)


def build_space_tables(
    constants: AcidityConstants,
    prepared: PreparedCore,
    choices: Mapping[str, Sequence[Substituent]],
    fixed: Mapping[str, Substituent],
    *,
    base: Base | None = None,
    shift: CoreShift | None = None,
    bare_charge: float = 0.0,
) -> SpaceTables:
    """Look-up tables of one core space.

    Parameters
    ----------
    constants, base, shift : as for `pattern.evaluate_pattern`
    prepared : PreparedCore
        `open_labels` gives the order of the positions in every index array.
    choices : mapping open label -> acting groups, in the order of the choice indices
    fixed : mapping label -> the groups that the core carries itself
    bare_charge : float
        Charge of the protonated form of the bare core.

    Returns
    -------
    SpaceTables
        pka25 and variance equal `evaluate_pattern` on every pattern (before its floor on the variance).

    Raises
    ------
    StructureError
        Hydrogen and groups mixed on the reporting nitrogen.
    """
    start, moved = base or Base(None), shift or CoreShift()
    amine = space_amine_count(prepared, choices, fixed)
    places = [
        _place(constants, prepared.slot(label), choices[label], amine) for label in prepared.open_labels
    ]
    standing = [
        _place(constants, slot, [fixed[slot.label]], amine)
        for slot in prepared.slots
        if slot.label in fixed and slot.label not in choices
    ]
    still = constants.vector(base_features(start)) + sum(
        (p.vectors[0] for p in standing), np.zeros(len(constants.names))
    )
    pka = float(still @ constants.mean) + (start.own.value if start.own else 0.0) + moved.value
    variance = float(still @ constants.covariance @ still) + fixed_misfit(constants, amine) + start.variance
    variance += sum(float(p.rest[0]) for p in standing) - moved.variance_taken
    for one, two in combinations(standing, 2):
        effect, doubt = pair_effect(constants, one.slot, one.groups, two.slot, two.groups, amine)
        pka, variance = pka + float(effect[0, 0]), variance + float(doubt[0, 0])
    alone_pka, alone_variance = _singles(constants, places, standing, still, amine)
    pair_pka, pair_variance = _doubles(constants, places, amine)
    charge = float(bare_charge) + sum(float(p.charge[0]) for p in standing)
    return SpaceTables(
        PairwiseSum(pka, alone_pka, pair_pka),
        PairwiseSum(variance, alone_variance, pair_variance),
        PairwiseSum(charge, tuple(p.charge for p in places), {}),
    )


def _singles(
    constants: AcidityConstants, places: list[_Place], standing: list[_Place], still: FloatArray, amine: int
) -> tuple[tuple[FloatArray, ...], tuple[FloatArray, ...]]:
    """One-position tables: each choice alone and with everything that stands still."""
    effects, variances = [], []
    pull = constants.covariance @ still
    for place in places:
        effect = place.vectors @ constants.mean
        spread = np.einsum("kn,nm,km->k", place.vectors, constants.covariance, place.vectors, optimize=True)
        variance = spread + 2.0 * place.vectors @ pull + place.rest
        for other in standing:
            coupled, doubt = pair_effect(constants, place.slot, place.groups, other.slot, other.groups, amine)
            effect, variance = effect + coupled[:, 0], variance + doubt[:, 0]
        effects.append(effect)
        variances.append(variance)
    return tuple(effects), tuple(variances)


def _doubles(
    constants: AcidityConstants, places: list[_Place], amine: int
) -> tuple[dict[tuple[int, int], FloatArray], dict[tuple[int, int], FloatArray]]:
    """Two-position tables: couplings, their variance, and the shared errors of both groups."""
    effects, variances = {}, {}
    for (p, one), (q, two) in combinations(enumerate(places), 2):
        effect, doubt = pair_effect(constants, one.slot, one.groups, two.slot, two.groups, amine)
        if effect.any():
            effects[p, q] = effect
        variances[p, q] = doubt + 2.0 * one.vectors @ constants.covariance @ two.vectors.T
    return effects, variances
