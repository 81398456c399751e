"""Is a compound energetic, and how is that known for a whole space without building a molecule?

Energetic compounds are withheld from ranking and get no route. The rules count groups, and where nitro groups
are few they look at the oxygen balance. Both are sums over the parts of a molecule, so a search can carry
them as limits on sums over positions; `energetic_weights` gives these sums, equal by construction to what
`screen` finds.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping, Sequence
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from tuner.errors import LibraryError
from tuner.library.catalogue import Library
from tuner.library.records import Substituent
from tuner.screening.match import applying, match_count
from tuner.screening.records import GroupLimit
from tuner.screening.rules import HAZARDS_FILE, OXYGEN_BALANCE, HazardRules, OxygenRule, Rule, load_rules
from tuner.structure.assemble import branch_of
from tuner.structure.molecule import atom_counts
from tuner.structure.scan import atomic_mass

NITRO_RULE = "polynitro"
"""Its patterns are also what the oxygen balance counts as nitro groups."""

HALOGENS = ("F", "Cl", "Br", "I")

TWICE_OXYGEN_NEEDED: Mapping[str, int] = {
    "C": 4, "H": 1, "F": -1, "Cl": -1, "Br": -1, "I": -1, "O": -2, "S": 6, "P": 5, "B": 3, "Si": 4,
}  # fmt: skip
"""Twice the oxygen atoms that burn one atom, to CO2, H2O, HX, SO3, P2O5, B2O3, SiO2."""

OPEN_POSITION = re.compile(r"\[\*:\d+\]")
PHENYL_CAP = "c1ccccc1"
AMINE_CAP = "N"
UNBOUND = 10**14
"""Larger than any shortfall: a dye of 10,000 g/mol stays below 10^12."""
LARGEST = 2**62


def oxygen_balance(smiles: str) -> float:
    """Oxygen balance of a structure [% of the mass without halogens].

    -1600 * (oxygen atoms needed to burn it) / mass, after Lothrop & Handrick, Chem. Rev. 1949, 44, 419, with
    the mass of halogens left out: they dilute a compound but do not make it burn. Valid for compounds of C,
    H, N, O, S, P, B, Si and halogens; NaN where nothing but halogen is left.

    >>> round(oxygen_balance("Cc1c([N+](=O)[O-])cc([N+](=O)[O-])cc1[N+](=O)[O-]"))
    -74
    """
    twice_needed, milligrams = _oxygen_and_mass(_counts(smiles))
    return -800.0 * twice_needed / (milligrams / 1000.0) if milligrams else float("nan")


def nitro_rule(rules: HazardRules) -> Rule:
    """The rule whose patterns say what a nitro group is; LibraryError where the file has lost it."""
    for rule in rules.withholding:
        if rule.flag.rule == NITRO_RULE:
            return rule
    raise LibraryError(f'the rule "{NITRO_RULE}" is missing', place=HAZARDS_FILE, remedy="put it back")


def nitro_count(smiles: str, rules: HazardRules) -> int:
    """Number of nitro and nitroso groups on carbon, as the rule `polynitro` counts them."""
    return match_count(smiles, nitro_rule(rules), rules.rules)


def too_rich_in_oxygen(smiles: str, nitro: int, rules: HazardRules) -> bool:
    """Whether a compound with this many nitro groups is withheld for its oxygen balance."""
    oxygen = rules.oxygen
    return nitro >= oxygen.nitro_at_least and _shortfall(_counts(smiles), oxygen.limit_percent) < 0


@lru_cache(maxsize=65536)
def _cached_counts(smiles: str) -> tuple[tuple[str, int], ...]:
    """Atoms by element, kept: the groups of a space come up at every position."""
    return tuple(atom_counts(smiles).items())


def _counts(smiles: str) -> dict[str, int]:
    """Atoms by element; a fresh dict each time, so that no caller can change another's."""
    return dict(_cached_counts(smiles))


def _oxygen_and_mass(counts: Mapping[str, int]) -> tuple[int, int]:
    """Twice the oxygen atoms needed, and the mass without halogens [mg/mol], both whole numbers."""
    twice_needed = sum(TWICE_OXYGEN_NEEDED.get(symbol, 0) * n for symbol, n in counts.items())
    mass = sum(
        round(1000 * atomic_mass(symbol)) * n for symbol, n in counts.items() if symbol not in HALOGENS
    )
    return twice_needed, mass


def _shortfall(counts: Mapping[str, int], limit_percent: float) -> int:
    """A whole number that is negative where the oxygen balance is above the limit, and additive over parts.

    From -800 * twice_needed / mass > limit follows 800 * twice_needed + limit * mass < 0; scaled to whole
    numbers.
    """
    twice_needed, milligrams = _oxygen_and_mass(counts)
    return 8_000_000 * twice_needed + round(10 * limit_percent) * milligrams


def energetic_weights(
    core_smiles: str, relations: Sequence[str], choices: Sequence[Sequence[Substituent]], library: Library
) -> tuple[GroupLimit, ...]:
    """The limits that keep energetic analogs out of a space, as sums over its positions.

    Parameters
    ----------
    core_smiles : str
        The core with open positions `[*:n]`, as in `cores.toml`.
    relations : one per position, in the order of the index arrays
        Only "nitrogen" matters: a group there sits on the amine's nitrogen.
    choices : one sequence of groups (as made, not as bound) per position
    library : Library

    Returns
    -------
    tuple of GroupLimit
        "energetic groups", "nitro groups" and "oxygen balance". An analog is withheld as energetic by
        `screen` if and only if it breaks one of them. Where the bare core is itself energetic, no analog
        meets the first.
    """
    rules = load_rules(library)
    bare = OPEN_POSITION.sub("[H]", core_smiles)
    withholding, by_number = rules.withholding, nitro_rule(rules)

    def forbidden(smiles: str) -> int:
        """1 where another rule than the number of nitro groups withholds."""
        return int(any(rule is not by_number for rule in applying(smiles, withholding)))

    def nitro_groups(smiles: str) -> int:
        """As `nitro_count`, with the same look at the structure that `forbidden` takes."""
        return match_count(smiles, by_number, withholding)

    groups = _weights(relations, choices, forbidden)
    nitro = _weights(relations, choices, nitro_groups)
    own_nitro = nitro_groups(bare)
    return (
        GroupLimit("energetic groups", groups, 0, -forbidden(bare)),
        GroupLimit("nitro groups", nitro, 0, by_number.at_least - 1 - own_nitro),
        _oxygen_limit(bare, own_nitro, nitro, choices, rules.oxygen),
    )


def _weights(
    relations: Sequence[str], choices: Sequence[Sequence[Substituent]], measure: Callable[[str], int]
) -> tuple[NDArray[np.int64], ...]:
    """A measure of every choice at every position, taken on the group with a cap."""
    return tuple(
        np.array([measure(_capped(group.smiles, relation)) for group in groups], dtype=np.int64)
        for relation, groups in zip(relations, choices, strict=True)
    )


def _capped(group_smiles: str, relation: str) -> str:
    """The group on a bare ring or nitrogen: what patterns can reach across the bond is then there."""
    return (AMINE_CAP if relation == "nitrogen" else PHENYL_CAP) + branch_of(group_smiles)


def _oxygen_limit(
    bare: str,
    own_nitro: int,
    nitro: Sequence[NDArray[np.int64]],
    choices: Sequence[Sequence[Substituent]],
    oxygen: OxygenRule,
) -> GroupLimit:
    """The oxygen balance as one sum: shortfall + UNBOUND * (nitro_at_least - nitro groups) must not be
    negative.

    With fewer nitro groups than the rule asks for, the second term outweighs any shortfall; with exactly as
    many it is gone; with more, the limit on nitro groups has already spoken.
    """
    hydrogen = _shortfall({"H": 1}, oxygen.limit_percent)
    weights = []
    for groups, counted in zip(choices, nitro, strict=True):
        own = [_shortfall(_counts(group.smiles), oxygen.limit_percent) - hydrogen for group in groups]
        weights.append(np.array(own, dtype=np.int64) - UNBOUND * counted)
    core = _shortfall(_counts(bare), oxygen.limit_percent) + UNBOUND * (oxygen.nitro_at_least - own_nitro)
    return GroupLimit(OXYGEN_BALANCE, tuple(weights), -core, LARGEST)
