"""What is known about the parameters of the acidity model before any measurement is looked at?

Values are pKa units per unit of the feature. Means come from the published equations (Perrin, Dempsey &
Serjeant 1981, as remembered) and from chemical sense; standard deviations are wide. Group constants start at
the published value with its stated error (times a factor found by the fit). `Spreads` are the few numbers
that marginal likelihood sets.
"""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np

from tuner.acidity.features import KIN_MARK, GroupScales
from tuner.acidity.tables import FloatArray
from tuner.library.records import Substituent

PRIOR_SOURCE = "memory:Perrin1981"

SERIES_PRIORS = {
    "phenol": {"base": (9.99, 0.02), "rho": (2.23, 0.10), "para_donor": (-0.3, 0.5)},
    "aniline": {"base": (4.60, 0.02), "rho": (2.88, 0.10), "para_donor": (0.0, 0.5)},
}
"""para_donor: donors give less than sigma_para to a phenolate (4-methoxyphenol 10.1, not 10.6)."""

COMMON_PRIORS = {
    "ortho_field": (2.5, 1.0),
    "ortho_resonance": (1.0, 1.0),
    "ortho_acceptor": (0.5, 1.0),
    "ortho_size": (0.0, 0.7),
    "ortho_large": (0.0, 0.7),
    "ortho_hbond_acceptor": (0.0, 0.8),
    "ortho_hbond_donor": (0.0, 0.5),
    "ortho_charge": (0.0, 1.5),
    "ortho_anion": (3.0, 2.0),
    "nitrogen_group": (0.3, 0.3),
    "nitrogen_field": (8.0, 5.0),
    "nitrogen_unsaturated": (-0.7, 0.5),
    "nitrogen_medium": (0.6, 0.5),
    "nitrogen_large": (2.0, 1.0),
    "nitrogen_aryl": (-3.5, 2.0),
    "nitrogen_branched": (-0.3, 0.3),
    "crowding": (0.0, 0.3),
    "buttressing": (0.0, 0.3),
    "alkyl_between": (1.0, 0.7),
    "alkyl_between_acceptors": (2.0, 1.0),
    "dialkyl_between": (-0.8, 0.4),
    "dialkyl_between_acceptors": (-0.8, 0.5),
    "alkyl_rho": (0.29, 0.15),
    "dialkyl_rho": (0.58, 0.15),
}
"""alkyl_rho, dialkyl_rho: rho rises from 2.88 (primary) to 3.46 (N,N-dialkyl).

An N-alkyl amine turns aside from one ortho group; two turn it as one turns an N,N-dialkyl amine, which a
second one cannot turn again: hence the priors of what happens between two ortho groups.
"""

GROUP_PRIORS = {("aniline", "para:NO"): (4.0, 1.0)}
"""4-Nitrosoanilines take up the proton at the nitroso oxygen, so the group weakens them far less than sigma
says."""

COUPLING_SD = 1.0


@dataclass(frozen=True, slots=True)
class Spreads:
    """Spreads that the fit sets by marginal likelihood. pKa units unless a factor or a share (see
    `GroupScales`).

    `shared` is the correlation between a group's deviations in the two series (`shared_ortho`: at ortho);
    `noise_*` the scatter of single determinations; `misfit_*` what each pair of groups (more with an ortho
    group in it), N-groups and pairs of acceptors add (see `constants.Misfit`); `doubt` the true over the
    stated doubt of remembered values.
    """

    error_meta: float = 0.95
    error_para: float = 1.13
    ortho_phenol: float = 0.253
    ortho_aniline: float = 0.217
    ortho_polar_factor: float = 2.17
    nitrogen: float = 0.29
    kin_share: float = 0.95
    shared: float = 0.753
    shared_ortho: float = 0.665
    noise_phenol: float = 0.08
    noise_aniline: float = 0.069
    misfit_pair: float = 0.039
    misfit_ortho: float = 0.0292
    misfit_nitrogen: float = 0.048
    misfit_acceptors: float = 0.0684
    doubt: float = 0.386


BOUNDED = ("kin_share", "shared", "shared_ortho")
"""Shares between 0 and 1; fitted on a logit scale, everything else on a log scale."""

SPREAD_PRIORS = {
    "error_meta": (0.0, 0.4),
    "error_para": (0.0, 0.4),
    "ortho_phenol": (np.log(0.2), 0.5),
    "ortho_aniline": (np.log(0.2), 0.5),
    "ortho_polar_factor": (np.log(2.0), 0.5),
    "nitrogen": (np.log(0.3), 0.5),
    "kin_share": (0.8, 0.7),
    "shared": (0.0, 1.0),
    "shared_ortho": (0.0, 1.0),
    "noise_phenol": (np.log(0.06), 0.4),
    "noise_aniline": (np.log(0.06), 0.4),
    "misfit_pair": (np.log(0.06), 0.4),
    "misfit_ortho": (np.log(0.05), 0.6),
    "misfit_nitrogen": (np.log(0.07), 0.6),
    "misfit_acceptors": (np.log(0.1), 0.6),
    "doubt": (0.0, 0.3),
}
"""Mean and standard deviation on the fitted (log or logit) scale."""


def encode(spreads: Spreads) -> FloatArray:
    """Spreads on the scale on which they are fitted (dimensionless)."""
    values = [getattr(spreads, f.name) for f in fields(Spreads)]
    scaled = [
        np.log(v / (1 - v)) if f.name in BOUNDED else np.log(v)
        for f, v in zip(fields(Spreads), values, strict=True)
    ]
    return np.array(scaled)


def decode(scaled: FloatArray) -> Spreads:
    """Inverse of `encode`: dimensionless numbers to spreads."""
    values = {
        f.name: float(1 / (1 + np.exp(-x)) if f.name in BOUNDED else np.exp(x))
        for f, x in zip(fields(Spreads), scaled, strict=True)
    }
    return Spreads(**values)


def log_prior(scaled: FloatArray) -> float:
    """Log density (dimensionless) of the priors of the spreads, up to a constant."""
    return float(
        sum(
            -0.5 * ((x - SPREAD_PRIORS[f.name][0]) / SPREAD_PRIORS[f.name][1]) ** 2
            for f, x in zip(fields(Spreads), scaled, strict=True)
        )
    )


class OpenScales(GroupScales):
    """Scales that take every group constant as in the fit, whatever the group: used while the fit is made."""

    def holds(self, name: str, published: float) -> bool:
        """Always: each group that occurs gets a constant, whatever its published sigma."""
        return True


def group_scales(scaffold: str, spreads: Spreads, published: dict[str, float] | None = None) -> GroupScales:
    """The scales (pKa units) of one scaffold; open ones where `published` (sigma) is not given."""
    made = OpenScales if published is None else GroupScales
    return made(
        published=published or {},
        rho=SERIES_PRIORS[scaffold]["rho"][0],
        error_meta=spreads.error_meta,
        error_para=spreads.error_para,
        ortho_sd=spreads.ortho_phenol if scaffold == "phenol" else spreads.ortho_aniline,
        ortho_polar_factor=spreads.ortho_polar_factor,
        nitrogen_sd=spreads.nitrogen,
        kin_share=spreads.kin_share,
        aniline=scaffold == "aniline",
    )


def prior_of(
    scaffold: str, name: str, group: Substituent | None, has_kin: bool, scales: GroupScales
) -> tuple[float, float]:
    """Mean and standard deviation of one parameter.

    Parameters
    ----------
    name : str
        A shared parameter, a coupling, "column:short name" or "column:~kin".
    group : Substituent
        The group of a group constant, None otherwise.
    has_kin : bool
        Whether that group shares part of its deviation with kin.
    """
    if (scaffold, name) in GROUP_PRIORS:
        return GROUP_PRIORS[scaffold, name]
    column, _, rest = name.partition(":")
    if rest.startswith(KIN_MARK):
        return 0.0, scales.kin_spread(column)
    if group is not None:
        return 0.0, scales.spread(column, group) * (np.sqrt(1.0 - scales.kin_share) if has_kin else 1.0)
    return SERIES_PRIORS[scaffold].get(name) or COMMON_PRIORS.get(name) or (0.0, COUPLING_SD)
