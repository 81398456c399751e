"""Which ionising groups act together in ways that constants of single groups do not tell?

- Cores that hold two ionising groups in one chromophore (sulfonephthaleins, phthaleins,
  1,8-dihydroxynaphthalene).
- Cores whose other groups are ionised at the transition and counted in the measured parent.
- Further sites inside a core (hydrogen-bonded hydroxyls, a quinoline nitrogen).
- o,o'-Dihydroxyazo dyes, 2,2'-dihydroxybiphenyls and -diphenylmethanes: the two hydroxyls share a hydrogen
  bond, which makes the first proton leave early and the second late.
- An ammonium or azonium proton that a neighbouring acid anion holds (dialkylanthranilic acids, methyl red,
  1-naphthylamine-8-sulfonic acid) leaves late.
- Hydroxyazo dyes also take up a proton at the azo group in strong acid; sulfonic acids beside azo groups show
  apparent constants.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class HeldPair:
    """Two equal reporting groups of one core.

    `parent_step` is the step whose constant is the core's parent pKa (1 or 2, in ascending order);
    `other_pka` that of the other step, for the bare core, with its standard error; `follows` whether the
    other step moves with the substituents as the first does.
    """

    parent_step: int
    other_pka: float
    other_sd: float
    follows: bool
    source: str


HELD_PAIRS: dict[str, HeldPair] = {
    "phenolsulfonephthalein": HeldPair(2, 1.2, 0.4, False, "Perrin1972"),
    "phenolphthalein": HeldPair(2, 9.05, 0.3, True, "memory:Bishop1972"),
    "2,7-bis(arylazo)chromotropic acid": HeldPair(1, 14.7, 0.8, True, "Serjeant1979"),
    "1,2,3,4-tetrahydroquinoxaline": HeldPair(2, 2.11, 0.2, True, "Perrin1965"),
    "1,8-dihydroxynaphthalene": HeldPair(1, 15.0, 0.7, True, "memory:Bishop1972"),
}
"""Cores with two equal groups whose steps are not independent."""


@dataclass(frozen=True, slots=True)
class HeldOther:
    """A second site inside a core that does not report.

    `pka`, `sd` for the bare core; `follows` the share of the reporting site's shift by substituents that it
    takes part in.
    """

    kind: str
    pka: float
    sd: float
    follows: float
    source: str


HELD_OTHER: dict[str, tuple[HeldOther, ...]] = {
    "fluorescein": (HeldOther("benzoic_acid", 4.35, 0.2, 0.1, "memory:Haugland"),),
    "phenylazochromotropic acid": (HeldOther("phenol", 13.8, 0.7, 0.0, "Serjeant1979"),),
    "2-arylazo-H acid": (HeldOther("aniline", 1.5, 1.0, 0.0, "convention"),),
    "2,4-diaminoazobenzene": (HeldOther("aniline", 0.5, 1.0, 0.0, "convention"),),
    "8-hydroxyquinoline": (HeldOther("pyridine", 5.0, 0.3, 0.8, "memory:Perrin1981"),),
    "4-(2-pyridylazo)resorcinol": (
        HeldOther("phenol", 11.9, 0.3, 0.5, "memory:hetarylazo"),
        HeldOther("pyridine", 3.0, 0.4, 0.3, "memory:hetarylazo"),
    ),
    "4-(2-thiazolylazo)resorcinol": (
        HeldOther("phenol", 9.4, 0.4, 0.5, "memory:hetarylazo"),
        HeldOther("azole", 1.0, 0.6, 0.3, "memory:hetarylazo"),
    ),
    "1-(2-pyridylazo)-2-naphthol": (HeldOther("pyridine", 2.4, 0.6, 0.2, "memory:hetarylazo"),),
    "1-(2-thiazolylazo)-2-naphthol": (HeldOther("azole", 2.2, 0.6, 0.2, "memory:hetarylazo"),),
}
"""The carboxyl of fluorescein, the hydroxyl that a hydrogen bond holds, the amino group beside a
hydrazone's carbonyl, ring nitrogens (the share of 8-hydroxyquinoline: its 5-sulfo-, 5-nitro- and
5,7-dichloro derivative, as remembered; the others are guesses).
"""

COUNTED_IN_PARENT = (
    "fluorescein",
    "phenylazochromotropic acid",
    "2,7-bis(arylazo)chromotropic acid",
    "2-arylazo-H acid",
    "2-arylazo-N-acetyl-H acid",
    "2,4-diaminoazobenzene",
    "8-hydroxyquinoline",
    "4-(2-pyridylazo)resorcinol",
    "4-(2-thiazolylazo)resorcinol",
    "1-(2-pyridylazo)-2-naphthol",
    "1-(2-thiazolylazo)-2-naphthol",
)
"""Cores whose other groups do not move the reporting site: they are ionised at the transition (or, as the
quinoline nitrogen, neutral), and that is part of the measured parent."""


@dataclass(frozen=True, slots=True)
class HydroxylBridge:
    """Two hydroxyls (first and last atom of `pattern`) that share a proton once the first has left.

    The first proton leaves `fall` below its site's own pKa, the second `rise` above it (pKa units; what the
    charge of the first does is in it). `cores`
    restricts the rule to reporting cores of these names, empty for any.
    """

    pattern: str
    cores: tuple[str, ...]
    fall: float
    rise: float
    sd: float


_NAPHTHALENE = "$(c1ccc2ccccc2c1),$(c1cccc2ccccc12)"
_DIHYDROXYAZO = "[OX2H1]-c:c-[NX2]=[NX2]-c:c-[OX2H1]"
_BOTH_NAPHTHOL = f"[OX2H1]-[{_NAPHTHALENE}]:c-[NX2]=[NX2]-c:[{_NAPHTHALENE}]-[OX2H1]"
HYDROXYL_BRIDGES = (
    HydroxylBridge(_DIHYDROXYAZO, ("2,7-bis(arylazo)chromotropic acid",), -0.6, 0.6, 1.0),
    HydroxylBridge(_DIHYDROXYAZO, ("phenylazochromotropic acid",), 0.5, 1.3, 0.4),
    HydroxylBridge(_BOTH_NAPHTHOL, (), 3.0, 2.2, 0.8),
    HydroxylBridge(_DIHYDROXYAZO, (), 0.6, 1.9, 0.7),
    HydroxylBridge("[OX2H1]-c1c(-[NX2]=[NX2]-c)ccc(c1)-[OX2H1]", (), 0.4, 3.0, 0.6),
    HydroxylBridge("[OX2H1]-c:c-!@c:c-[OX2H1]", (), 1.8, 3.2, 0.8),
    HydroxylBridge("[OX2H1]-c:c-[CH2]-c:c-[OX2H1]", (), 1.8, 1.5, 0.7),
)
"""First that fits counts. o,o'-Dihydroxyazo dyes: sized on 2-hydroxyphenylazo chromotropic acids and two
naphthylazonaphthols (Serjeant1979), on calcon and calmagite (memory:Bishop1972), rounded;
4-arylazoresorcinols on tropaeolin O (memory:Bishop1972); 2,2'-dihydroxybiphenyl and -diphenylmethane: 7.6
for the first proton (memory:compilations)."""

PROTON_BRIDGES: tuple[tuple[str, float, float], ...] = (
    ("[NX3]([CX4;!$(CC[OX2,N])])([CX4;!$(CC[OX2,N])])c1ccccc1C(=O)[OX2H1]", 1.4, 0.5),
    ("[NX3]c1ccc(N=Nc2ccccc2C(=O)[OX2H1])cc1", 0.9, 0.4),
    ("[NX3]c1cccc2cccc(S(=O)(=O)[OX2H1])c12", 1.7, 0.4),
    (f"[OX2H1]-[{_NAPHTHALENE};!$(c:c-N=N)]:c-S(=O)(=O)[OX2H1]", 0.8, 0.4),
)
"""Amine or naphthol (first atom) whose proton the anion of an acid in the same match holds by a hydrogen
bond: by how much its pKa then lies above what the charge alone makes of it, and the standard error. Sized
on N,N-dimethylanthranilic acid (Perrin1965), methyl red (memory:Bishop1972) and 1-naphthylamine-8-sulfonic
acid (memory:compilations), rounded; one compound each; the last on 1-naphthol-2-sulfonic and
2-naphthol-3,6-disulfonic acid (memory:compilations), where no azo group holds the proton already.
Hydroxyalkyl groups on nitrogen are left out: bis(hydroxyethyl)aminoterephthalic acids (Perrin1965) show no
such rise."""

AZO_PROTONATION: dict[str, tuple[tuple[float, float], ...]] = {
    "4-arylazophenol": ((-1.3, 0.5),),
    "2,7-bis(arylazo)chromotropic acid": ((-2.8, 1.2), (-1.5, 1.2)),
}
"""pKa and standard error of the azo groups of a bare hydroxyazo core, protonated in strong acid
(Perrin1965; Serjeant1979 for the bis-azo dyes, of which only apparent constants are known).
"""
AZO_PROTONATION_RHO = 1.0

APPARENT_SULFONIC: dict[str, tuple[float, float]] = {"2,7-bis(arylazo)chromotropic acid": (0.3, 1.2)}
"""pKa and standard error of sulfonic acids where the printed constants are apparent ones: their protons are
shared with the hydrazone nitrogens beside them (Serjeant1979, two dyes; hence the wide error)."""
