"""Which groups take part in the planning at each position?

The wanted groups, and every group that a chain of exchanges can turn into one of them; no other group can
help.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field

import numpy as np

from tuner.library.records import HYDROGEN_SHORT
from tuner.synthesis.setting import Stage

ACCEPTORS = frozenset(
    ("NO2", "NO", "CN", "CHO", "COMe", "COEt", "COiPr", "COPr", "COtBu", "COPh",
     "COCF3", "CO2Me", "CO2Et", "SO2Me", "SO2Et", "SO2Ph", "SO2CF3", "SO2NMe2", "SO2NEt2")
)  # fmt: skip
"""Groups that activate a halide ortho or para to them for nucleophilic substitution (March, 6th ed., chapter
13).
"""


@dataclass(frozen=True)
class Alphabet:
    """Groups of one lattice, hydrogen first; the same list serves every position."""

    shorts: tuple[str, ...]
    index: dict[str, int] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.index.update({short: k for k, short in enumerate(self.shorts)})

    def holds(self, groups: Iterable[str]) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
        """For each group of the alphabet, whether it is one of these."""
        named = frozenset(groups)
        return np.array([short in named for short in self.shorts], dtype=bool)


def leading_to(stage: Stage, wanted: Iterable[str]) -> frozenset[str]:
    """The wanted groups, hydrogen, and all groups that exchanges can turn into one of them."""
    found = {HYDROGEN_SHORT, *wanted}
    while True:
        more = set(found)
        for rule, _, gives in stage.rules:
            if rule.kind == "exchange" and more & set(gives):
                more |= set(rule.takes)
        if more == found:
            return frozenset(found)
        found = more


ENERGETIC_TAGS = frozenset(("azide", "diazonium", "nitrate ester", "nitramine", "peroxide"))
"""Hazard tags of groups that are never made, not even on the way."""


def alphabet(stage: Stage, groups: Iterable[str]) -> Alphabet:
    """An alphabet of these groups, hydrogen first, then by name; energetic groups are left out."""
    tabulated = stage.workshop.library.substituents
    groups = {g for g in groups if not set(tabulated[g].hazards) & ENERGETIC_TAGS}
    return Alphabet((HYDROGEN_SHORT, *sorted(set(groups) - {HYDROGEN_SHORT})))
