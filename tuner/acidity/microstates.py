"""What does a molecule with several ionising groups do as the pH changes?

Each site is protonated (1) or not (0); a microstate is one choice for every site. The binding polynomial
over all of them gives the macroscopic constants, the share of each state, and the pH at which one chosen
site is half ionised. Statistical factors (log10 2 for two equivalent sites) and zwitterions come out by
themselves: they are microstates like any other.

All sums are over powers of ten far apart, so they are taken as log-sum-exp.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import product
from math import log

import numpy as np
from numpy.typing import NDArray

from tuner.acidity.tables import FloatArray

LN10 = log(10.0)
MOST_SITES = 10
"""2**10 microstates; more ionising groups than this are not treated."""

BISECTION_MARGIN_PH = 5.0  # beyond the outermost steps every site is 10**-4 short of all or nothing at most
BISECTION_STEPS = 50  # some 20 pH units halved 50 times: far below rounding


def _log10_sum(exponents: FloatArray, axis: int) -> FloatArray:
    """log10 of a sum of powers of ten, without overflow."""
    top = exponents.max(axis=axis, keepdims=True)
    total = np.log10(np.sum(10.0 ** (exponents - top), axis=axis)) + np.squeeze(top, axis=axis)
    return np.asarray(total, dtype=np.float64)


@dataclass(frozen=True)
class Microstates:
    """All protonation states of n sites.

    Attributes
    ----------
    protonated : int array, shape (2**n, n)
        1 where the site holds its proton.
    log_beta : float array, shape (2**n,)
        log10 of each state's formation constant from the fully deprotonated form: the state with k protons
        has the weight 10**(log_beta - k * pH).
    """

    protonated: NDArray[np.int64]
    log_beta: FloatArray

    @property
    def n_sites(self) -> int:
        """Number of sites."""
        return int(self.protonated.shape[1])

    def macroscopic_pkas(self) -> FloatArray:
        """Macroscopic (stepwise) pKa's, ascending in the order in which protons leave, shape (n,).

        pKa_j = log B_k - log B_(k-1), where B_k sums the formation constants of all states with k protons
        and k = n + 1 - j. With strongly cooperative sites the steps need not ascend; they are given as they
        come.
        """
        count = self.protonated.sum(axis=1)
        total = np.array([float(_log10_sum(self.log_beta[count == k], 0)) for k in range(self.n_sites + 1)])
        return np.diff(total)[::-1]

    def log_shares(self, ph: FloatArray) -> FloatArray:
        """log10 of the share of each state at each pH, shape (n_ph, 2**n)."""
        count = self.protonated.sum(axis=1)
        weight = self.log_beta[None, :] - np.asarray(ph, dtype=np.float64)[:, None] * count[None, :]
        return np.asarray(weight - _log10_sum(weight, 1)[:, None])

    def alpha(self, site: int, ph: FloatArray) -> FloatArray:
        """Share of the molecules whose `site` has lost its proton at each pH, shape (n_ph,)."""
        shares = 10.0 ** self.log_shares(ph)
        return np.asarray(shares @ (1 - self.protonated[:, site]), dtype=np.float64)

    def transition_ph(
        self, sites: Sequence[int], low: float | None = None, high: float | None = None
    ) -> float:
        """The pH at which the sites given are half ionised on average (one site, or several equivalent ones).

        Found by bisection; the mean ionisation rises monotonically with pH for the sites' sum. NaN where
        there is no crossing between `low` and `high` (default: a little beyond the outermost steps).
        """
        chosen = list(sites)
        if self.n_sites == 1 and low is None and high is None:
            return float(self.macroscopic_pkas()[0])
        steps = self.macroscopic_pkas()
        lo = float(steps.min()) - BISECTION_MARGIN_PH if low is None else low
        hi = float(steps.max()) + BISECTION_MARGIN_PH if high is None else high
        lost = 1 - self.protonated[:, chosen].mean(axis=1)

        def mean_alpha(ph: float) -> float:
            return float(10.0 ** self.log_shares(np.array([ph]))[0] @ lost)

        if not mean_alpha(lo) < 0.5 < mean_alpha(hi):
            return float("nan")
        for _ in range(BISECTION_STEPS):
            middle = 0.5 * (lo + hi)
            lo, hi = (middle, hi) if mean_alpha(middle) < 0.5 else (lo, middle)
        return 0.5 * (lo + hi)

    def dominant(self, ph: float) -> NDArray[np.int64]:
        """Protonation (1/0 per site) of the most abundant state at this pH, shape (n,)."""
        shares = self.log_shares(np.array([ph]))[0]
        return np.asarray(self.protonated[int(np.argmax(shares))])

    def site_losses(self, step: int) -> FloatArray:
        """Which share of its proton each site loses in macroscopic step `step` (0 = most acidic), shape (n,),
        sum 1.
        """
        count = self.protonated.sum(axis=1)
        k = self.n_sites - step

        def occupation(n: int) -> FloatArray:
            chosen = count == n
            weight = 10.0 ** (self.log_beta[chosen] - self.log_beta[chosen].max())
            return np.asarray(weight @ self.protonated[chosen] / weight.sum())

        return np.asarray(occupation(k) - occupation(k - 1))

    def stepwise_site(self, step: int) -> int:
        """Which site mainly loses its proton in macroscopic step `step` (0 = the most acidic step)."""
        return int(np.argmax(self.site_losses(step)))


def all_states(n_sites: int) -> NDArray[np.int64]:
    """Every protonation state, shape (2**n, n); row 0 is fully deprotonated."""
    return np.array(list(product((0, 1), repeat=n_sites)), dtype=np.int64).reshape(-1, n_sites)


def from_table(
    intrinsic: Callable[[int, tuple[int, ...]], float],
    n_sites: int,
    reference: tuple[int, ...] | None = None,
) -> Microstates:
    """Microstates from intrinsic constants that depend on the states of the other sites.

    Parameters
    ----------
    intrinsic : callable
        `intrinsic(site, others)` gives the microscopic pKa of `site` with the other sites in the states
        `others` (length n, the entry of `site` itself is ignored).
    n_sites : int
        1 to 10.
    reference : tuple of 0 and 1, length n
        The state from which the others are built up, site by site; fully deprotonated unless given.

    Returns
    -------
    Microstates

    Notes
    -----
    A thermodynamic cycle must close: protonating A then B costs what B then A costs. Constants estimated
    site by site do not quite do so; each state's formation constant is therefore the mean over all orders
    in which the sites leave the reference state, worked out layer by layer, which spreads the misclosure
    evenly. Take as reference the state in which the constants are surest.

    Raises
    ------
    ValueError
        For fewer than 1 or more than 10 sites.

    Examples
    --------
    Two equal and independent sites of pKa 7: the macroscopic steps lie log10(4) apart.

    >>> states = from_table(lambda site, others: 7.0, 2)
    >>> [round(float(p), 3) for p in states.macroscopic_pkas()]
    [6.699, 7.301]
    >>> round(states.transition_ph([0]), 3)
    7.0
    """
    if not 1 <= n_sites <= MOST_SITES:
        raise ValueError(f"{n_sites} ionising sites; 1 to {MOST_SITES} can be treated")
    start = reference if reference is not None else (0,) * n_sites
    states = all_states(n_sites)
    row = {tuple(int(v) for v in state): i for i, state in enumerate(states)}
    log_beta = np.zeros(len(states))
    for state in sorted(row, key=lambda s: sum(a != b for a, b in zip(s, start, strict=True))):
        changed = [s for s in range(n_sites) if state[s] != start[s]]
        if changed:
            before = [tuple(start[i] if i == s else v for i, v in enumerate(state)) for s in changed]
            sign = [1.0 if state[s] else -1.0 for s in changed]
            steps = [
                log_beta[row[b]] + g * intrinsic(s, b) for s, b, g in zip(changed, before, sign, strict=True)
            ]
            log_beta[row[state]] = float(np.mean(steps))
    return Microstates(states, log_beta - log_beta[row[(0,) * n_sites]])


def from_pairs(intrinsic: FloatArray, interaction: FloatArray) -> Microstates:
    """Microstates of sites that interact pairwise.

    Parameters
    ----------
    intrinsic : array, shape (n,)
        pKa of each site while all others are deprotonated.
    interaction : array, shape (n, n), symmetric
        `interaction[i, j]`: change of site i's pKa when site j takes up its proton (negative where charges
        repel).

    Examples
    --------
    >>> import numpy as np
    >>> s = from_pairs(np.array([7.0, 7.0]), np.array([[0.0, -2.0], [-2.0, 0.0]]))
    >>> [round(float(p), 3) for p in s.macroscopic_pkas()]
    [4.699, 7.301]
    """
    n = len(intrinsic)
    if not 1 <= n <= MOST_SITES:
        raise ValueError(f"{n} ionising sites; 1 to {MOST_SITES} can be treated")
    states = all_states(n)
    upper = np.triu(interaction, 1)
    log_beta = states @ intrinsic + np.einsum("si,ij,sj->s", states, upper, states)
    return Microstates(states, np.asarray(log_beta, dtype=np.float64))
