"""How do the sites of one molecule act on each other, and what are its constants?

Reference: every site's pKa while all other sites are in their neutral form (acids protonated, amines not).
Then

- a phenol or aniline is evaluated anew for every set of charged groups that it sees, with the charged forms'
constants;
- another site beside a phenol or aniline feels the same energy (a proton gained by one is felt by the other
alike);
- two other sites feel each other by the number of bonds between them, falling by half per bond.

Sulfonic acids are always ionised in water; they are charged throughout and only listed among the macroscopic
constants.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import lru_cache
from math import hypot, log10

import numpy as np

from tuner.acidity.medium import MediumEffect
from tuner.acidity.microstates import MOST_SITES, Microstates, from_table

ALWAYS_IONISED = ("benzenesulfonic_acid", "sulfonic_acid")

NEAREST_BONDS, NEAREST_ENERGY = 3, 2.1
"""pKa units between two charges three bonds apart (glycine, 1,2-diaminoethane), as remembered; half of it
per further bond.
"""
ENERGY_FALL_PER_BOND = 0.5
FARTHEST_BONDS = 9

CARBOXYLS_ON_A_RING = {5: 1.8, 6: 0.45, 7: 0.45}
"""pKa units by the number of bonds: phthalic, isophthalic and terephthalic acid, as remembered."""

COUPLING_SD_LEAST, COUPLING_SD_SHARE, COUPLING_SD_MOST = 0.10, 0.35, 0.50

EXACT_SITES = 6
"""Up to this many sites a phenol or aniline is evaluated for every set of charges; beyond, energies add in
pairs.
"""


@dataclass(frozen=True, slots=True)
class IonSite:
    """One site as the microstates see it.

    `charge_if_ionised` is -1 for an acid, +1 for an amine; `own` evaluates a phenol or aniline for a set of
    charged sites, None for any other site, whose pKa beside neutral neighbours is `pka`.
    """

    kind: str
    atom: int
    charge_if_ionised: int
    pka: float
    sd: float
    own: Callable[[frozenset[int]], float] | None
    effect: MediumEffect


def distance_energy(bonds: int) -> float:
    """Change of one site's pKa (pKa units) when another one, so many bonds away, takes on a charge; size
    only.

    Examples
    --------
    >>> distance_energy(3), distance_energy(4), distance_energy(12)
    (2.1, 1.05, 0.0)
    """
    if bonds > FARTHEST_BONDS:
        return 0.0
    return NEAREST_ENERGY * ENERGY_FALL_PER_BOND ** (max(2, bonds) - NEAREST_BONDS)


class Ionisation:
    """Microstates of one molecule out of its sites.

    Parameters
    ----------
    sites : list of IonSite
        At most 10 of them may be titrated.
    energies : mapping (i, j) -> float
        Fixed change of site i's pKa when site j is charged; overrules everything else for this pair.
    bonds : callable (i, j) -> int
        Number of bonds between two sites.
    permanent_charge : int
        Charge of the molecule with every site neutral.
    """

    def __init__(
        self,
        sites: list[IonSite],
        energies: Mapping[tuple[int, int], float],
        bonds: Callable[[int, int], int],
        permanent_charge: int,
    ) -> None:
        self.sites = sites
        self._energies = energies
        self._bonds = bonds
        self.fixed = [k for k, s in enumerate(sites) if s.kind in ALWAYS_IONISED]
        self.free = [k for k in range(len(sites)) if k not in self.fixed]
        self._permanent = permanent_charge + sum(sites[k].charge_if_ionised for k in self.fixed)
        self._own = lru_cache(maxsize=None)(self._evaluate)

    @property
    def treatable(self) -> bool:
        """Whether there is something to titrate, and not too much."""
        return 1 <= len(self.free) <= MOST_SITES

    def _evaluate(self, k: int, charged: frozenset[int]) -> float:
        own = self.sites[k].own
        assert own is not None
        return own(charged)

    def energy(self, i: int, j: int) -> float:
        """Change of site i's pKa when site j goes from neutral to charged, everything else neutral (pKa
        units).
        """
        if (i, j) in self._energies:
            return self._energies[i, j]
        if self.sites[i].own is not None:
            return self._own(i, frozenset({j})) - self._own(i, frozenset())
        if self.sites[j].own is not None:
            # linkage: what i's charge does to j, j's does to i; of opposite sign for an acid and a base
            felt = self._own(j, frozenset({i})) - self._own(j, frozenset())
            return felt * self.sites[i].charge_if_ionised * self.sites[j].charge_if_ionised
        size = distance_energy(self._bonds(i, j))
        if self.sites[i].kind == self.sites[j].kind == "benzoic_acid":
            size = CARBOXYLS_ON_A_RING.get(self._bonds(i, j), size)
        return -self.sites[j].charge_if_ionised * size

    def pka25(self, i: int, charged: frozenset[int]) -> float:
        """pKa25 of site i while the sites in `charged` are ionised."""
        site = self.sites[i]
        if site.own is None:
            return site.pka + sum(self.energy(i, j) for j in sorted(charged))
        fixed = {j for j in charged if (i, j) in self._energies}
        seen = charged - fixed
        extra = sum(self._energies[i, j] for j in sorted(fixed))
        if len(self.sites) <= EXACT_SITES:
            return self._own(i, seen) + extra
        return self._own(i, frozenset()) + sum(self.energy(i, j) for j in sorted(seen)) + extra

    def _charged(self, state: tuple[int, ...], skip: int) -> frozenset[int]:
        """Which sites are ionised where `state` says which free sites hold their proton."""
        found = set(self.fixed)
        for k, held in zip(self.free, state, strict=True):
            ionised = held == (self.sites[k].charge_if_ionised > 0)
            if ionised and k != skip:
                found.add(k)
        return frozenset(found - {skip})

    def microstates(self, medium: bool = True) -> Microstates:
        """All protonation states of the free sites, in the medium or (False) thermodynamic at 25 degC."""

        def step(place: int, others: tuple[int, ...]) -> float:
            k = self.free[place]
            pka = self.pka25(k, self._charged(others, k))
            if not medium:
                return pka
            # charge of the form that holds site k's proton
            held = tuple(1 if n == place else v for n, v in enumerate(others))
            charge = self._permanent + sum(
                self.sites[f].charge_if_ionised
                for f, v in zip(self.free, held, strict=True)
                if v == (self.sites[f].charge_if_ionised > 0)
            )
            return float(self.sites[k].effect.shift(np.array(pka), np.array(float(charge))))

        neutral = tuple(0 if self.sites[f].charge_if_ionised > 0 else 1 for f in self.free)
        return from_table(step, len(self.free), neutral)

    @property
    def pair_energies(self) -> Mapping[tuple[int, int], float]:
        """Energies that were fixed beforehand, pKa units."""
        return self._energies

    def charged_near(self, k: int, states: Microstates, ph: float) -> frozenset[int]:
        """Which other sites are mostly charged at this pH."""
        held = tuple(int(v) for v in states.dominant(ph))
        return self._charged(held, k)

    def charge_around(self, k: int, states: Microstates, ph: float) -> int:
        """Charge of the protonated form of the molecule at site k's transition."""
        held = states.dominant(ph)
        total = self._permanent
        for place, f in enumerate(self.free):
            has = 1 if f == k else int(held[place])
            if has == (self.sites[f].charge_if_ionised > 0):
                total += self.sites[f].charge_if_ionised
        return total

    def coupling_sd(self, k: int) -> float:
        """Standard error of site k's constants by what the other free sites do to it (pKa units).

        Pairs whose energy was fixed beforehand carry their own error. Constants of charged neighbours,
        hydrogen bonds and tautomers are known less well than those of neutral groups; sized on molecules
        with two and more sites so that stated intervals hold.
        """
        own = [j for j in self.free if j != k and (k, j) not in self._energies]
        felt = sum(abs(self.energy(k, j)) for j in own)
        if not felt:
            return 0.0
        return min(COUPLING_SD_MOST, COUPLING_SD_LEAST + COUPLING_SD_SHARE * felt)

    def macroscopic(self, states: Microstates) -> tuple[tuple[float, float, str], ...]:
        """(pKa, standard error, kind of site) of every step, ascending; always-ionised acids are listed with
        their own constants.
        """
        pkas = states.macroscopic_pkas()
        found = []
        for step, pka in enumerate(pkas):
            number = self.free[states.stepwise_site(step)]
            site = self.sites[number]
            sd = hypot(site.sd, site.effect.sd, self.coupling_sd(number))
            found.append((float(pka), sd, site.kind))
        n = len(self.fixed)
        for j, k in enumerate(self.fixed):
            statistical = log10((n - j) / (j + 1)) if n > 1 else 0.0
            found.append((self.sites[k].pka - statistical, self.sites[k].sd, self.sites[k].kind))
        return tuple(sorted(found))
