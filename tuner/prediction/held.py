"""What happens to ionising groups that a core itself holds?

Most cores hold one ionising group, the reporting one. Some hold two that share one chromophore
(sulfonephthaleins,
phthaleins, 1,8-dihydroxynaphthalene) or carry groups that are ionised at the transition and counted in the
measured parent
(fluorescein's carboxyl, the sulfonates of chromotropic acid dyes). This table says how these are treated; a
core that is not
listed and holds two equal groups is given two independent, equal ones.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class HeldPair:
    """Two equal reporting groups of one core.

    `parent_step` is the step whose constant is the core's parent pKa (1 or 2); `other_pka` that of the other
    step, for the bare
    core, with its standard error; `follows` whether the other step moves with the substituents as the first
    does.
    """

    parent_step: int
    other_pka: float
    other_sd: float
    follows: bool
    source: str


HELD_PAIRS: dict[str, HeldPair] = {
    "phenolsulfonephthalein": HeldPair(2, 1.2, 0.4, False, "Perrin1972"),
    "phenolphthalein": HeldPair(2, 9.05, 0.3, True, "memory:Bishop1972"),
    "1,8-dihydroxynaphthalene": HeldPair(1, 15.0, 0.8, True, "memory:Bishop1972"),
}
"""Cores with two equal groups whose steps are not independent."""

HELD_OTHER: dict[str, tuple[float, float]] = {
    "phenylazochromotropic acid": (13.8, 0.8),
}
"""pKa and standard error of a hydroxyl inside the core that is bound by a hydrogen bond and does not
report.
"""

COUNTED_IN_PARENT = ("fluorescein", "phenylazochromotropic acid")
"""Cores whose other groups are ionised at the transition; their charge is part of the measured parent."""
