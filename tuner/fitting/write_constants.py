"""How do the fitted constants get into `libraries/acidity`?

Every file is written to a neighbour first and then renamed, so that a run that breaks off leaves the old
state.
"""

from __future__ import annotations

import os
from collections.abc import Iterable
from pathlib import Path

import numpy as np

from tuner.acidity.constants import CONSTANTS_FILE, SPREADS_FILE, covariance_file
from tuner.fitting.acidity_fit import Fit, constants_of, priors, spread_rows

CONSTANTS_HEAD = """\
# Fitted constants of the acidity model. One row per parameter and scaffold; written by python -m
# tuner.fitting fit. pKa = sum of feature * value. base: parent; rho: sensitivity; column:GROUP: what a group
# adds beyond rho * published sigma (or beyond the regression, for ortho and nitrogen), in pKa units;
# column:~KIN: what kin groups have in common; the rest are regressions and couplings
# (tuner/acidity/features.py, couplings.py).
# rows: measurements behind the value; 0 means that it rests on the prior and on correlated parameters.
# published: the published sigma that a group constant was fitted on. Covariances stand in covariance_*.csv.
"""
COVARIANCE_HEAD = """\
# Cholesky factor L (lower triangle, pKa units) of the covariance L L' of the one-position parameters, given
# the couplings. The factor and not the covariance itself, since L L' has no negative variance however L is
# rounded.
"""
SMALLEST_SHOWN = 2e-5
JITTER = 1e-9
"""Added to the variances so that rounding of the fit itself cannot spoil the factorisation (pKa units
squared)."""
SPREADS_HEAD = """\
# Spreads of the acidity model: how far constants that are not in the fit stray, and what a new compound adds
# to the error. Standard deviations in pKa units, except factors (error_*, *_factor), shares and rho (pKa per
# sigma).
"""


def _write(path: Path, head: str, lines: Iterable[str]) -> None:
    temporary = path.with_suffix(".part")
    temporary.write_text(head + "\n".join(lines) + "\n", encoding="utf-8")
    os.replace(temporary, path)


def _quoted(text: str) -> str:
    return f'"{text}"' if "," in text else text


def write_constants(made: Fit, folder: Path, source: str) -> None:
    """Write constants, covariances and spreads of a fit into a folder.

    Parameters
    ----------
    made : Fit
    folder : Path
        Made where it is missing.
    source : str
        Source key of the rows.
    """
    folder.mkdir(parents=True, exist_ok=True)
    mean, covariance = priors(made.design, made.spreads)
    before = {key: (mean[k], np.sqrt(covariance[k, k])) for k, key in enumerate(made.design.names)}
    lines = ["scaffold,parameter,value,sd,rows,prior,prior_sd,published,source"]
    for scaffold, constants in constants_of(made).items():
        single = zip(constants.names, constants.mean, _total_sd(made, scaffold), strict=True)
        double = ((name, value, constants.coupling_sd[name]) for name, value in constants.couplings.items())
        for name, value, sd in (*single, *double):
            prior, prior_sd = before[scaffold, name]
            published = constants.scales.published.get(name)
            shown = "" if published is None else f"{published:.4g}"
            lines.append(
                f"{scaffold},{_quoted(name)},{value:.5f},{sd:.4f},{constants.rows[name]},{prior:.4g},{prior_sd:.4g},"
                f"{shown},{source}"
            )
        factor = np.linalg.cholesky(constants.covariance + np.diag(np.full(len(constants.names), JITTER)))
        factor[np.abs(factor) < SMALLEST_SHOWN] = 0.0
        rows = [
            ",".join([_quoted(name), *(f"{v:.4g}" for v in factor[k, : k + 1])])
            for k, name in enumerate(constants.names)
        ]
        _write(folder / covariance_file(scaffold), COVARIANCE_HEAD, rows)
    _write(folder / CONSTANTS_FILE, CONSTANTS_HEAD, lines)
    spread = ["scaffold,name,value", *(f"{of},{name},{value:.5g}" for of, name, value in spread_rows(made))]
    _write(folder / SPREADS_FILE, SPREADS_HEAD, spread)


def _total_sd(made: Fit, scaffold: str) -> list[float]:
    """Standard errors of the one-position parameters, couplings uncertain too."""
    from tuner.acidity.couplings import COUPLING_PARAMETERS

    return [
        float(np.sqrt(made.result.covariance[k, k]))
        for k, (of, name) in enumerate(made.design.names)
        if of == scaffold and name not in COUPLING_PARAMETERS
    ]
