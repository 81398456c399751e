"""Which ionising groups act together in ways that constants of single groups do not tell?

- Cores that hold two ionising groups in one chromophore (sulfonephthaleins, phthaleins,
  1,8-dihydroxynaphthalene).
- Cores whose other groups are ionised at the transition and counted in the measured parent.
- o,o'-Dihydroxyazo dyes: the two hydroxyls share a hydrogen bond with the azo group, which makes the first
  proton leave early and the second late.
- An ammonium or azonium proton that a neighbouring acid anion holds (dialkylanthranilic acids, methyl red,
  1-naphthylamine-8-sulfonic acid) leaves late.
- Hydroxyazo dyes also take up a proton at the azo group in strong acid.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class HeldPair:
    """Two equal reporting groups of one core.

    `parent_step` is the step whose constant is the core's parent pKa (1 or 2); `other_pka` that of the
    other step, for the bare core, with its standard error; `follows` whether the other step moves with the
    substituents as the first does.
    """

    parent_step: int
    other_pka: float
    other_sd: float
    follows: bool
    source: str


HELD_PAIRS: dict[str, HeldPair] = {
    "phenolsulfonephthalein": HeldPair(2, 1.2, 0.4, False, "Perrin1972"),
    "phenolphthalein": HeldPair(2, 9.05, 0.3, True, "memory:Bishop1972"),
    "1,8-dihydroxynaphthalene": HeldPair(1, 15.0, 0.7, True, "memory:Bishop1972"),
}
"""Cores with two equal groups whose steps are not independent."""

HELD_OTHER: dict[str, tuple[float, float]] = {
    "phenylazochromotropic acid": (13.8, 0.7),
}
"""pKa and standard error of a hydroxyl inside the core that is bound by a hydrogen bond and does not
report.
"""

COUNTED_IN_PARENT = ("fluorescein", "phenylazochromotropic acid")
"""Cores whose other groups are ionised at the transition; their charge is part of the measured parent."""

DIHYDROXYAZO = "[OX2H1]-c:c-[NX2]=[NX2]-c:c-[OX2H1]"
DIHYDROXYAZO_SHIFT = 1.6
DIHYDROXYAZO_SD = 0.6
"""o,o'-Dihydroxyazo dyes: both hydroxyls' pKa's fall by this much while the other holds its proton, and rise
by as much above
their own once it is gone. Sized on calcon-type dyes (Serjeant1979), rounded."""

PROTON_BRIDGES: tuple[tuple[str, float, float], ...] = (
    ("[NX3]([CX4;!$(CC[OX2,N])])([CX4;!$(CC[OX2,N])])c1ccccc1C(=O)[OX2H1]", 1.4, 0.5),
    ("[NX3]c1ccc(N=Nc2ccccc2C(=O)[OX2H1])cc1", 0.9, 0.4),
    ("[NX3]c1cccc2cccc(S(=O)(=O)[OX2H1])c12", 1.7, 0.4),
)
"""Amine (first atom) whose proton the anion of an acid in the same match holds by a hydrogen bond: by how
much the amine's pKa then lies above what the charge alone makes of it, and the standard error. Sized on
N,N-dimethylanthranilic acid (Perrin1965), methyl red (memory:Bishop1972) and 1-naphthylamine-8-sulfonic
acid (memory:compilations), rounded; one compound each. Hydroxyalkyl groups on nitrogen are left out:
bis(hydroxyethyl)aminoterephthalic acids (Perrin1965) show no such rise."""

NOT_MODELLED: tuple[tuple[str, str], ...] = (
    (
        "Oc1c(N=Nc)ccc2ccc(N=Nc)c(O)c12",
        "bis-azo dyes of 1,8-dihydroxynaphthalene have too many tautomers and hydrogen bonds for this model",
    ),
    (
        "[OX2H1]c1c(N=Nc)ccc2cccc(N)c12",
        "a nitrogen group beside the hydroxyl of an arylazo-naphthol (peri) binds its proton; not modelled",
    ),
    (
        "[OX2H1]c1cccc2ccc(N=Nc)c(N)c12",
        "a hydroxyl beside a nitrogen group that an azo group binds (peri); not modelled",
    ),
)
"""Patterns of dyes that get no number, and why."""

AZO_PROTONATION: dict[str, tuple[float, float]] = {"4-arylazophenol": (-1.3, 0.5)}
"""pKa and standard error of the azo group of a bare hydroxyazo core, protonated in strong acid
(Perrin1965).
"""
AZO_PROTONATION_RHO = 1.0
