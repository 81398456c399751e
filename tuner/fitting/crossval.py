"""How wrong is the acidity model on compounds that it has not seen, and does it know?

Each compound is left out with everything else that is known of it (remembered values too), the parameters
are estimated anew from the rest, and the compound is predicted through the molecule door, error and all.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.constants import SCAFFOLDS
from tuner.acidity.pattern import evaluate_pattern
from tuner.acidity.tables import FloatArray
from tuner.fitting.acidity_data import MEASURED, RING_SLOTS, Row
from tuner.fitting.acidity_fit import Fit, Posterior, constants_of, noise, priors
from tuner.structure.records import PreparedCore

BEST_SHARE = 0.95
"""Mean errors are taken over the best 95 % of compounds: misprints fall in the rest."""
WITHIN = 0.3
NINETY_PERCENT = 1.645

RING = {
    scaffold: PreparedCore(
        f"{scaffold} ring", scaffold, series, tuple(RING_SLOTS.values()), (), ((),), 0.0, 0
    )
    for scaffold, series in (("phenol", "phenol"), ("aniline", "anilinium"))
}


@dataclass(frozen=True, slots=True)
class LeftOut:
    """One compound as predicted without itself."""

    row: Row
    predicted: float
    sd: float

    @property
    def error(self) -> float:
        """Predicted less measured, pKa units."""
        return self.predicted - self.row.pka25


@dataclass(frozen=True, slots=True)
class Score:
    """Summary of one set of compounds, pKa units and shares."""

    title: str
    n: int
    mean_best: float
    median: float
    within: float
    coverage: float


def leave_out(made: Fit) -> list[LeftOut]:
    """Every measured compound predicted without itself (spreads and the other rows' weights kept)."""
    design = made.design
    identities = [row.identity for row in design.rows]
    mean, covariance = priors(design, made.spreads)
    variance = noise(design, made.spreads) / made.weights
    spread = design.x @ covariance
    total = spread @ design.x.T + np.diag(variance)
    inverse = np.asarray(np.linalg.inv(total), dtype=np.float64)
    miss = design.y - design.x @ mean
    found = []
    for i, row in enumerate(design.rows):
        if row.kind != MEASURED:
            continue
        out = np.array([identity == identities[i] for identity in identities])
        less = _without(inverse, out)
        gain = spread[~out].T @ less
        result = Posterior(mean + gain @ miss[~out], covariance - gain @ spread[~out], 0.0)
        constants = constants_of(made, result)[row.scaffold]
        told = evaluate_pattern(constants, RING[row.scaffold], row.groups)
        found.append(LeftOut(row, told.pka25, told.sd))
    return found


def _without(inverse: FloatArray, out: NDArray[np.bool_]) -> FloatArray:
    """Inverse of a matrix without the rows and columns in `out`, from the inverse of the whole."""
    keep = ~out
    corner = inverse[np.ix_(keep, out)]
    return np.asarray(
        inverse[np.ix_(keep, keep)] - corner @ np.linalg.solve(inverse[np.ix_(out, out)], corner.T)
    )


def score(title: str, found: Sequence[LeftOut]) -> Score:
    """Mean over the best 95 %, median, share within 0.3, share inside the stated 90 % interval."""
    miss = np.sort(np.abs([f.error for f in found]))
    best = miss[: round(BEST_SHARE * len(miss))]
    inside = [abs(f.error) <= NINETY_PERCENT * f.sd for f in found]
    return Score(
        title,
        len(miss),
        float(best.mean()),
        float(np.median(miss)),
        float(np.mean(miss <= WITHIN)),
        float(np.mean(inside)),
    )


def scores(found: Sequence[LeftOut]) -> list[Score]:
    """One score per scaffold; the anilines also apart by how many groups their nitrogen bears."""
    table = [score(f"{s}s", [f for f in found if f.row.scaffold == s]) for s in SCAFFOLDS]
    for count, title in ((0, "  primary anilines"), (1, "  N-alkylanilines"), (2, "  N,N-dialkylanilines")):
        chosen = [f for f in found if f.row.scaffold == "aniline" and _on_nitrogen(f.row) == count]
        if chosen:
            table.append(score(title, chosen))
    return table


def _on_nitrogen(row: Row) -> int:
    return sum(label.startswith("N") for label in row.groups)
