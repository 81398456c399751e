"""How are the constants of the acidity model estimated?

A Bayesian linear model. Every row is a pattern; its features come from the very functions that predict.
Parameters have normal priors (`priors`); the scatter is Student's t with few degrees of freedom, done by
iterated reweighting, so that a misprint loses its weight by itself; the spreads are set by marginal
likelihood. Deviations of one group in both series are correlated, so that a group measured on anilines alone
is also better known on phenols.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields
from itertools import combinations

import numpy as np

from tuner.acidity.constants import SCAFFOLDS, AcidityConstants, Misfit
from tuner.acidity.couplings import AMINE_DIALKYL, COUPLING_PARAMETERS, acceptor_product, couple
from tuner.acidity.features import SHARED_PARAMETERS, Features, alone
from tuner.acidity.nature import is_empty, kin, nature, para_value
from tuner.acidity.tables import FloatArray
from tuner.fitting.acidity_data import MIRROR, REMEMBERED, RING_SLOTS, Row
from tuner.fitting.priors import SERIES_PRIORS, Spreads, decode, encode, group_scales, log_prior, prior_of
from tuner.library.records import Substituent

DEGREES_OF_FREEDOM = 1.5
"""Of the t distribution: the compilations are as good as their best rows and have misprints beside. Chosen
among 1.5, 2, 3 and 4 by leaving out one compound at a time; the mean error falls by 0.01 from 4 to 1.5."""

TAIL = 1.5
"""Stated over fitted scatter of a new compound. The tails of the t distribution are heavier than those of
the normal one by which errors are stated; by this factor 90 % intervals hold about 90 % of the compounds left
out."""

REWEIGHTINGS = 8
SHARED_COLUMNS = ("meta", "para", "ortho")
FIT_SOURCE = "fit:acidity"
EITHER_WAY = {"phenol": "aniline", "aniline": "phenol"}
NOISE_SHARE = (1.0, 1.0, 0.5, 0.25, 0.2)
"""Variance of the median of 0, 1, 2, 3, 4 or more determinations against that of a single one (laboratories
share errors)."""


@dataclass(frozen=True)
class Design:
    """Rows as arrays.

    x : (n_rows, n_parameters); names : (scaffold, parameter) per column; groups : group of a group constant
    or None.
    """

    rows: tuple[Row, ...]
    names: tuple[tuple[str, str], ...]
    groups: tuple[Substituent | None, ...]
    x: FloatArray
    y: FloatArray
    phenol: FloatArray
    noise_share: FloatArray
    doubt: FloatArray
    pairs: FloatArray  # pairs of ring groups
    ortho_pairs: FloatArray  # ortho groups in them, counted pair by pair
    on_nitrogen: FloatArray
    acceptors: FloatArray  # sum over pairs of (product of pulls)^2


def row_features(row: Row, spreads: Spreads) -> Features:
    """Features of one pattern, by the functions that predict."""
    scales = group_scales(row.scaffold, spreads)
    placed = [
        (RING_SLOTS[label], row.groups[label])
        for label in sorted(row.groups)
        if not is_empty(row.groups[label])
    ]
    amine = min(sum(slot.relation == "nitrogen" for slot, _ in placed), AMINE_DIALKYL)
    total: Features = {"base": 1.0}
    parts = [alone(slot, group, scales, amine).features for slot, group in placed]
    for (first, one), (second, two) in combinations(placed, 2):
        coupled = couple(first, [nature(one)], second, [nature(two)], amine)
        parts.append({name: float(table[0, 0]) for name, table in coupled.items()})
    for part in parts:
        for name, weight in part.items():
            total[name] = total.get(name, 0.0) + weight
    return total


def _pulls(row: Row) -> float:
    """Sum over pairs of groups of the squared product of their pulls."""
    placed = [
        (RING_SLOTS[label], group) for label, group in sorted(row.groups.items()) if not is_empty(group)
    ]
    products = [
        float(acceptor_product(a, [nature(g)], b, [nature(h)])[0, 0])
        for (a, g), (b, h) in combinations(placed, 2)
    ]
    return float(sum(p * p for p in products))


def make_design(rows: Sequence[Row]) -> Design:
    """The rows as arrays; features do not depend on the spreads."""
    spreads = Spreads()
    found = [row_features(row, spreads) for row in rows]
    by_name = {f"{g.short}": g for row in rows for g in row.groups.values()}
    listed: dict[tuple[str, str], None] = {}
    for row, features in zip(rows, found, strict=True):
        for name in sorted(features):
            listed[row.scaffold, name] = None
            if name.split(":")[0] in SHARED_COLUMNS and ":" in name:
                listed[EITHER_WAY[row.scaffold], name] = None
    names = sorted(listed, key=lambda key: (SCAFFOLDS.index(key[0]), _rank(key[1]), key[1]))
    place = {key: k for k, key in enumerate(names)}
    x = np.zeros((len(rows), len(names)))
    for i, (row, features) in enumerate(zip(rows, found, strict=True)):
        for name, weight in features.items():
            x[i, place[row.scaffold, name]] = weight
    rings = [
        [label for label, g in row.groups.items() if label in MIRROR and not is_empty(g)] for row in rows
    ]
    groups = [by_name.get(name.partition(":")[2]) if ":" in name else None for _, name in names]
    return Design(
        rows=tuple(rows),
        names=tuple(names),
        groups=tuple(groups),
        x=x,
        y=np.array([row.pka25 for row in rows]),
        phenol=np.array([float(row.scaffold == "phenol") for row in rows]),
        noise_share=np.array([NOISE_SHARE[min(row.determinations, len(NOISE_SHARE) - 1)] for row in rows]),
        doubt=np.array([row.sd for row in rows]),
        pairs=np.array([len(ring) * (len(ring) - 1) / 2.0 for ring in rings]),
        ortho_pairs=np.array([sum(label in "26" for label in ring) * (len(ring) - 1.0) for ring in rings]),
        on_nitrogen=np.array([float(sum(label.startswith("N") for label in row.groups)) for row in rows]),
        acceptors=np.array([_pulls(row) for row in rows]),
    )


def _rank(name: str) -> int:
    if name in SHARED_PARAMETERS:
        return SHARED_PARAMETERS.index(name)
    return len(SHARED_PARAMETERS) + (0 if ":" in name else 1)


def priors(design: Design, spreads: Spreads) -> tuple[FloatArray, FloatArray]:
    """Prior means (p,) and covariance (p, p)."""
    scales = {s: group_scales(s, spreads) for s in SCAFFOLDS}
    pairs = [
        prior_of(scaffold, name, group, bool(group and kin(group.smiles)), scales[scaffold])
        for (scaffold, name), group in zip(design.names, design.groups, strict=True)
    ]
    mean = np.array([m for m, _ in pairs])
    sd = np.array([s for _, s in pairs])
    covariance = np.diag(sd**2)
    place = {key: k for k, key in enumerate(design.names)}
    for (scaffold, name), k in place.items():
        other = place.get(("aniline", name))
        if (
            scaffold == "phenol"
            and other is not None
            and name.split(":")[0] in SHARED_COLUMNS
            and ":" in name
        ):
            share = spreads.shared_ortho if name.startswith("ortho") else spreads.shared
            covariance[k, other] = covariance[other, k] = share * sd[k] * sd[other]
    return mean, covariance


def noise(design: Design, spreads: Spreads) -> FloatArray:
    """Variance of each row about the model, before reweighting."""
    single = np.where(design.phenol > 0, spreads.noise_phenol, spreads.noise_aniline) ** 2
    variance = single * design.noise_share + spreads.misfit_pair**2 * design.pairs
    variance = (
        variance
        + spreads.misfit_ortho**2 * design.ortho_pairs
        + spreads.misfit_nitrogen**2 * design.on_nitrogen
    )
    variance = variance + spreads.misfit_acceptors**2 * design.acceptors
    return np.asarray(variance + (spreads.doubt * design.doubt) ** 2)


@dataclass(frozen=True)
class Posterior:
    """Parameters after the rows: mean (p,), covariance (p, p), log evidence."""

    mean: FloatArray
    covariance: FloatArray
    log_evidence: float


def posterior(
    design: Design, spreads: Spreads, weights: FloatArray, use: FloatArray | None = None
) -> Posterior:
    """Normal posterior for given weights; `use` picks rows (boolean), all where not given."""
    mean, covariance = priors(design, spreads)
    keep = np.ones(len(design.y), dtype=bool) if use is None else np.asarray(use, dtype=bool)
    x, y = design.x[keep], design.y[keep]
    spread = x @ covariance
    total = spread @ x.T + np.diag(noise(design, spreads)[keep] / weights[keep])
    lower = np.linalg.cholesky(total)
    miss = np.linalg.solve(lower, y - x @ mean)
    gain = np.linalg.solve(lower, spread)
    log_evidence = float(-0.5 * miss @ miss - np.log(np.diag(lower)).sum())
    return Posterior(mean + gain.T @ miss, covariance - gain.T @ gain, log_evidence)


def robust_weights(design: Design, spreads: Spreads) -> FloatArray:
    """Weights of the rows under Student's t, by iterated reweighting; 5/3 for a perfect row, near 0 for a
    misprint."""
    weights = np.ones(len(design.y))
    variance = noise(design, spreads)
    for _ in range(REWEIGHTINGS):
        found = posterior(design, spreads, weights)
        miss = design.y - design.x @ found.mean
        doubt = np.einsum("ip,pq,iq->i", design.x, found.covariance, design.x, optimize=True)
        weights = (DEGREES_OF_FREEDOM + 1.0) / (DEGREES_OF_FREEDOM + (miss**2 + doubt) / variance)
    return weights


def tune_spreads(design: Design, spreads: Spreads, rounds: int = 2, iterations: int = 12) -> Spreads:
    """Spreads of the largest marginal likelihood (with their priors), weights renewed between rounds."""
    from scipy.optimize import minimize

    for _ in range(rounds):
        weights = robust_weights(design, spreads)

        def cost(scaled: FloatArray, weights: FloatArray = weights) -> float:
            return -posterior(design, decode(scaled), weights).log_evidence - log_prior(scaled)

        found = minimize(cost, encode(spreads), method="L-BFGS-B", options={"maxiter": iterations})
        spreads = decode(found.x)
    return spreads


@dataclass(frozen=True)
class Fit:
    """A finished fit: what `AcidityConstants` are made of, and what the report shows."""

    design: Design
    spreads: Spreads
    weights: FloatArray
    result: Posterior


def fit(rows: Sequence[Row], spreads: Spreads | None = None, *, tune: bool = False) -> Fit:
    """Estimate all constants.

    Parameters
    ----------
    rows : sequence of Row
    spreads : Spreads
        Start of the search, or the spreads themselves where `tune` is False.
    tune : bool
        Set the spreads by marginal likelihood (half a minute for 650 rows).
    """
    design = make_design(rows)
    used = spreads or Spreads()
    if tune:
        used = tune_spreads(design, used)
    weights = robust_weights(design, used)
    return Fit(design, used, weights, posterior(design, used, weights))


def constants_of(made: Fit, result: Posterior | None = None) -> dict[str, AcidityConstants]:
    """The constants of both scaffolds, as the predictions use them (optionally from another posterior)."""
    return {scaffold: _constants(made, scaffold, result or made.result) for scaffold in SCAFFOLDS}


def published_of(name: str, group: Substituent | None) -> float:
    """The published sigma (dimensionless) that a group constant was fitted on, 0 where there is none."""
    column = name.partition(":")[0]
    if group is None or column == "nitrogen":
        return 0.0
    if column == "meta":
        return group.sigma_meta.value
    return para_value(group)[0].value if column == "para" else group.sigma_para.value


def _constants(made: Fit, scaffold: str, result: Posterior) -> AcidityConstants:
    """One scaffold. The covariance of one-position parameters is taken given the couplings, whose errors
    stay apart."""
    design, spreads = made.design, made.spreads
    own = [k for k, (of, _) in enumerate(design.names) if of == scaffold]
    single = [k for k in own if design.names[k][1] not in COUPLING_PARAMETERS]
    double = [k for k in own if design.names[k][1] in COUPLING_PARAMETERS]
    inside = result.covariance[np.ix_(single, single)]
    across = result.covariance[np.ix_(single, double)]
    between = result.covariance[np.ix_(double, double)]
    given = inside - across @ np.linalg.solve(between, across.T) if double else inside
    names = tuple(design.names[k][1] for k in single)
    published = {
        design.names[k][1]: published_of(design.names[k][1], design.groups[k])
        for k in single
        if ":" in design.names[k][1]
    }
    counted = (design.x[:, own] != 0.0) & (np.array([r.kind != REMEMBERED for r in design.rows])[:, None])
    base_noise = spreads.noise_phenol if scaffold == "phenol" else spreads.noise_aniline
    return AcidityConstants(
        scaffold=scaffold,
        names=names,
        mean=result.mean[single],
        covariance=(given + given.T) / 2.0,
        couplings={design.names[k][1]: float(result.mean[k]) for k in double},
        coupling_sd={design.names[k][1]: float(np.sqrt(result.covariance[k, k])) for k in double},
        scales=group_scales(scaffold, spreads, published),
        misfit=Misfit(
            TAIL * base_noise,
            TAIL * spreads.misfit_pair,
            TAIL * spreads.misfit_ortho,
            TAIL * spreads.misfit_nitrogen,
            TAIL * spreads.misfit_acceptors,
        ),
        rows={design.names[k][1]: int(counted[:, i].sum()) for i, k in enumerate(own)},
        source={design.names[k][1]: FIT_SOURCE for k in own},
    )


def spread_rows(made: Fit) -> list[tuple[str, str, float]]:
    """(scaffold, name, value in pKa units or dimensionless) of everything that is no parameter."""
    found = []
    for scaffold in SCAFFOLDS:
        scales = group_scales(scaffold, made.spreads)
        constants = constants_of(made)[scaffold].misfit
        found += [(scaffold, "rho", SERIES_PRIORS[scaffold]["rho"][0])]
        for name in (
            "error_meta",
            "error_para",
            "ortho_sd",
            "ortho_polar_factor",
            "nitrogen_sd",
            "kin_share",
        ):
            found.append((scaffold, name, float(getattr(scales, name))))
        found += [
            (scaffold, f"misfit_{f.name}", float(getattr(constants, f.name))) for f in fields(constants)
        ]
    return found
