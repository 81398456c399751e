"""Which parameters does one group at one position call up, and with what weight?

pKa = sum over features of weight * parameter. The features of a position are the published constant times
rho, a small
regression for what has no published constant (ortho, nitrogen), what kin groups have in common, and the
group's own
fitted deviation, named "column:short name" (`para:NO2`), all in pKa units. What is not in the fit adds to
the variance.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from math import hypot, nan, sqrt

from tuner.acidity.couplings import AMINE_ALKYL, AMINE_FREE
from tuner.acidity.nature import (
    SIZE,
    STRONG_ANIONS,
    field,
    is_empty,
    kin,
    nature,
    para_value,
    resonance,
    through_resonance,
)
from tuner.library.records import Substituent
from tuner.structure.records import Slot

Features = dict[str, float]

ORTHO_FEATURES = (
    "ortho_field",
    "ortho_resonance",
    "ortho_acceptor",
    "ortho_size",
    "ortho_large",
    "ortho_hbond_acceptor",
    "ortho_hbond_donor",
    "ortho_charge",
    "ortho_anion",
)
NITROGEN_FEATURES = (
    "nitrogen_group",
    "nitrogen_field",
    "nitrogen_unsaturated",
    "nitrogen_medium",
    "nitrogen_large",
    "nitrogen_aryl",
    "nitrogen_branched",
)
AMINE_FEATURES = tuple(
    f"{kind}_{what}"
    for kind in ("alkyl", "dialkyl")
    for what in ("rho", "ortho_acceptor", "ortho_group", "ortho_size")
)
SHARED_PARAMETERS = (
    *("base", "rho", "para_donor"),
    *ORTHO_FEATURES,
    *NITROGEN_FEATURES,
    *AMINE_FEATURES,
    "dialkyl_ortho_hbond",
)
"""Parameters that are no group constants and need one position only."""

KIN_MARK = "~"
"""Names of what kin have in common carry it: `para:~ester`."""

ALLYLIC = re.compile(r"\*C(C=C|C#C|C\(C\)=C|c)")
BRANCHED = re.compile(r"\*CC\(")
"""Isobutyl and the like: the branch stands one carbon off, over the nitrogen's lone pair."""
SATURATED = re.compile(r"\*[C()0-9]+")
SAME_CONSTANT = 1e-6
DONOR_DOUBT = 0.10
"""Further error of sigma_para per unit of donation by resonance: a donor opposite an oxygen or a nitrogen,
itself a donor, gives less than it gives to benzoic acid (amino and dimethylamino by half)."""
CHARGE_SIGMA = 0.33
"""Part of sigma that is the charge itself, per unit charge."""
UNUSUAL_ORTHO_SD = 1.5
"""pKa units; for charged groups and imines at ortho, which no regression foresees."""


@dataclass(frozen=True)
class GroupScales:
    """How far group constants stray from what is published or regressed, and which of them are in the fit.

    Attributes
    ----------
    published : mapping
        Name of a group constant in the fit -> the published constant that it was fitted on (0 for kin).
    rho : float
        Sensitivity of the series that turns errors of sigma into pKa units.
    error_meta, error_para : float
        True over stated error of published constants.
    ortho_sd, ortho_polar_factor, nitrogen_sd : float
        Spread around the regressions, pKa units; polar groups at ortho stray more by the factor.
    kin_share : float
        Share of the variance that kin have in common.
    aniline : bool
        Which of the two apparent ortho constants of the table stands in for groups that are not in the fit.
    """

    published: Mapping[str, float]
    rho: float
    error_meta: float
    error_para: float
    ortho_sd: float
    ortho_polar_factor: float
    nitrogen_sd: float
    kin_share: float
    aniline: bool

    def spread(self, column: str, group: Substituent) -> float:
        """Standard deviation of a group's deviation before any measurement, pKa units."""
        if column == "meta":
            return self.rho * self.error_meta * group.sigma_meta.sd
        if column == "para":
            value, acted = para_value(group)
            donor = DONOR_DOUBT * max(-resonance(group), 0.0) if acted == "para" else 0.0
            return self.rho * self.error_para * hypot(value.sd, donor)
        if column == "nitrogen":
            return self.nitrogen_sd
        if group.charge or "=N" in group.smiles:
            return UNUSUAL_ORTHO_SD
        polar = group.hbond_acceptor or group.hbond_donor
        return self.ortho_sd * (self.ortho_polar_factor if polar else 1.0)

    def kin_spread(self, column: str) -> float:
        """Standard deviation of what kin have in common, pKa units; typical errors of published constants."""
        usual = {
            "meta": self.rho * self.error_meta * 0.04,
            "para": self.rho * self.error_para * 0.06,
            "ortho": self.ortho_sd * sqrt(self.ortho_polar_factor),
            "nitrogen": self.nitrogen_sd,
        }[column]
        return usual * sqrt(self.kin_share)

    def holds(self, name: str, published: float) -> bool:
        """Whether the fit has this very constant: a user's row may state another sigma."""
        return name in self.published and abs(self.published[name] - published) < SAME_CONSTANT


@dataclass(frozen=True, slots=True)
class Alone:
    """What one group at one position adds.

    `own_variance` (pKa units squared) is what no shared parameter explains; `sigma` the published constant
    that acted
    (NaN where a regression did), `column` which one.
    """

    features: Features
    own_variance: float
    sigma: float
    column: str


def _add(features: Features, name: str, weight: float) -> None:
    if weight != 0.0:
        features[name] = features.get(name, 0.0) + weight


def alone(slot: Slot, group: Substituent, scales: GroupScales, amine: int) -> Alone:
    """Features of one group at one position.

    Parameters
    ----------
    slot : Slot
        Relation, column and transmission are used.
    group : Substituent
        The form that acts (charged or neutral, bound or free).
    scales : GroupScales
        Of the scaffold.
    amine : int
        Number of groups on the reporting nitrogen, 0 for phenols.
    """
    if is_empty(group):
        return Alone({}, 0.0, 0.0, slot.column)
    if slot.relation == "nitrogen":
        return _on_nitrogen(group, scales)
    on_reporting_ring = slot.relation == "ortho" and slot.ring == 0 and slot.column in ("ortho", "")
    if on_reporting_ring or (slot.column == "ortho" and slot.relation in ("ortho", "remote")):
        found = _ortho(slot, group, scales)
    else:
        found = _in_line(slot, group, scales)
    if amine != AMINE_FREE and slot.ring == 0:
        _with_amine(found.features, slot, group, amine)
    return found


def _own(
    features: Features, column: str, group: Substituent, published: float, weight: float, scales: GroupScales
) -> float:
    """Add the fitted deviations of a group and its kin; returns the variance of what is not fitted."""
    spread = scales.spread(column, group)
    family = kin(group.smiles)
    variance = spread**2 * (1.0 - scales.kin_share if family else 1.0)
    if family:
        name = f"{column}:{KIN_MARK}{family}"
        if scales.holds(name, 0.0):
            _add(features, name, weight)
        else:
            variance += scales.kin_spread(column) ** 2
    name = f"{column}:{group.short}"
    if scales.holds(name, published):
        _add(features, name, weight)
        variance = 0.0
    return weight**2 * variance


def _in_line(slot: Slot, group: Substituent, scales: GroupScales) -> Alone:
    """Meta, para and remote positions: -rho * transmission * sigma, plus what the fit adds for this group."""
    column = "meta" if slot.column == "meta" else "para"
    value, acted = (group.sigma_meta, "meta") if column == "meta" else para_value(group)
    if slot.column == "para_minus" and group.sigma_para_minus.known:
        value, acted = group.sigma_para_minus, "para_minus"
    features: Features = {}
    _add(features, "rho", -slot.transmission * value.value)
    variance = (scales.rho * value.value * slot.transmission_sd) ** 2
    if slot.relation == "remote":
        _add(features, "rho", -_charge_through_space(slot.transmission, group.charge))
        variance += (scales.rho * slot.transmission * value.sd) ** 2
        return Alone(features, variance, value.value, acted)
    if acted == "para":
        _add(features, "para_donor", slot.transmission * max(-resonance(group), 0.0))
    variance += _own(features, column, group, value.value, slot.transmission, scales)
    return Alone(features, variance, value.value, acted)


def _charge_through_space(transmission: float, charge: int) -> float:
    """What a remote charge adds to transmission * sigma: it falls off more slowly than the dipole beside it.

    Of a charged group's sigma, about 0.33 per unit charge is the charge itself (sulfonate against sulfonic
    ester,
    carboxylate against carboxylic ester); this part comes through with the root of the transmission factor.
    Sized on
    the naphthol- and naphthylaminesulfonates (Serjeant1979, Perrin1965), where sulfonate is felt hardly at
    all.
    """
    size = abs(transmission)
    return CHARGE_SIGMA * charge * (sqrt(size) - size)


def _ortho(slot: Slot, group: Substituent, scales: GroupScales) -> Alone:
    """Ortho: a regression on field, resonance, size and hydrogen bonds, plus what the fit adds for this
    group.
    """
    features: Features = {}
    tau = slot.transmission
    variance = (scales.rho * field(group) * slot.transmission_sd) ** 2
    known = group.sigma_ortho_aniline if scales.aniline else group.sigma_ortho_phenol
    if known.known and not scales.holds(f"ortho:{group.short}", group.sigma_para.value):
        _add(features, "rho", -tau * known.value)
        return Alone(features, variance + (scales.rho * tau * known.sd) ** 2, known.value, "ortho")
    _add(features, "ortho_field", -tau * field(group))
    _add(features, "ortho_resonance", -tau * resonance(group))
    _add(features, "ortho_acceptor", -tau * through_resonance(group))
    _add(features, "ortho_size", tau * nature(group).hydrocarbon)
    _add(features, "ortho_large", tau * nature(group).largest)
    _add(features, "ortho_hbond_acceptor", tau * float(takes_hydrogen_bond(group)))
    _add(features, "ortho_hbond_donor", tau * float(group.hbond_donor))
    _add(features, "ortho_charge", -tau * group.charge)
    _add(features, "ortho_anion", tau * float(group.smiles in STRONG_ANIONS))
    variance += _own(features, "ortho", group, group.sigma_para.value, tau, scales)
    return Alone(features, variance, nan, "ortho")


def nitrogen_pull(group: Substituent) -> float:
    """Field effect (dimensionless) of a group on the reporting nitrogen; 0 for saturated hydrocarbons,
    whose tabulated one is noise.
    """
    return 0.0 if SATURATED.fullmatch(group.smiles) else max(field(group), 0.0)


def takes_hydrogen_bond(group: Substituent) -> bool:
    """Whether an acceptor by resonance offers a neighbour its oxygen or nitrogen: nitro, carbonyl."""
    return group.hbond_acceptor and group.twistable and group.para_acceptor


def _on_nitrogen(group: Substituent, scales: GroupScales) -> Alone:
    """A group on the reporting nitrogen."""
    features: Features = {"nitrogen_group": 1.0}
    _add(features, "nitrogen_field", -nitrogen_pull(group))
    _add(features, "nitrogen_unsaturated", float(bool(ALLYLIC.match(group.smiles))))
    _add(features, "nitrogen_medium", float(group.bulk == 2))
    _add(features, "nitrogen_large", float(group.bulk == len(SIZE) - 1))
    _add(features, "nitrogen_aryl", float(group.smiles.startswith("*c")))
    _add(features, "nitrogen_branched", float(bool(BRANCHED.match(group.smiles))))
    variance = _own(features, "nitrogen", group, 0.0, 1.0, scales)
    return Alone(features, variance, nan, "nitrogen")


def _with_amine(features: Features, slot: Slot, group: Substituent, amine: int) -> None:
    """What changes for a ring group where the amine bears groups.

    rho rises, for acceptors alone (4-methyl and 4-methoxy do to dimethylaniline what they do to aniline);
    ortho groups twist the amine; a twisted dialkylammonium binds to an oxygen beside it (2-nitro, 2-ester).
    """
    kind = "alkyl" if amine == AMINE_ALKYL else "dialkyl"
    tau = slot.transmission
    if slot.relation == "ortho":
        own = nature(group)
        _add(features, f"{kind}_ortho_acceptor", tau * own.pull_ortho)
        _add(features, f"{kind}_ortho_group", tau * own.bulky)
        _add(features, f"{kind}_ortho_size", tau * own.extra_size)
        if amine != AMINE_ALKYL:
            _add(features, "dialkyl_ortho_hbond", tau * float(takes_hydrogen_bond(group)))
    elif slot.relation in ("meta", "para"):
        value = group.sigma_meta if slot.column == "meta" else para_value(group)[0]
        _add(features, f"{kind}_rho", -tau * max(value.value, 0.0))
