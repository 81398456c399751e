"""What is a group like, as far as its neighbours and the reporting group can feel it?

A `Nature` holds the few numbers of a group from which all couplings between two positions are made: how hard
it pulls from each place, how large it is, whether it can be turned out of the ring plane. Groups that differ
only far from the ring are `kin` and share most of what the fit learns about one of them.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache
from math import isnan

from tuner.library.records import HYDROGEN_SHORT, Substituent, Value

SIZE = (0.0, 0.4, 0.7, 1.0)
"""Size of a group by its bulk class, in units of tert-butyl."""

PRESS = (0.0, 1.0, 1.15, 1.3)
"""How far a group turns its neighbour out of the ring plane, by its bulk class, in units of methyl. It
saturates: two tert-butyl groups beside a nitro group cost hardly more of its resonance than two methyl groups
(3,5-di-tert-butyl- and 3,5-dimethyl-4-nitroaniline)."""

WEAK_FIELD = 0.2
"""Groups with a smaller field effect count as hydrocarbon-like: their ortho effects are steric."""

ETHER_RESONANCE = -0.1
METHYL = "*C"
NITROSO = "*N=O"
OXIDE = "*[O-]"

STRONG_ANIONS = ("*C(=O)[O-]", "*[O-]")
"""Anionic oxygen that an ortho hydroxyl binds by a strong hydrogen bond (salicylate, catecholate)."""

KIN = (
    ("ester", r"\*C\(=O\)OC(?!\().*|\*C\(=O\)OC\(C\).*"),
    ("ketone", r"\*C\(C\)=O|\*C\(=O\)C(?!l|\(F\)|=).*"),
    ("amide", r"\*C\(N\)=O|\*C\(=O\)N.*"),
    ("acylamino", r"\*NC\(C\)=O|\*NC=O|\*NC\(=O\)[Cc].*"),
    ("carbamate", r"\*NC\(N\)=O|\*NC\(=O\)[ON].*"),
    ("alkoxy", r"\*OC(?!\(F\)|\(=O\)|\(C\)=O|#N).*"),
    ("alkylthio", r"\*SC(?!\(F\)|\(=O\)|\(C\)=O|#N).*"),
    ("sulfonyl", r"\*S\([CN]\)\(=O\)=O|\*S\(=O\)\(=O\)(?!\[O-\]|O).*"),
    ("normal alkyl", r"\*CC+(\(C\)C)?"),
    ("secondary alkyl", r"\*C\(C\)C+|\*C1C+1"),
    ("tertiary alkyl", r"\*C\(C\)\(C\)C[C()]*|\*C1\(C\)CCCCC1"),
    ("arylazo", r"\*N=Nc.*"),
    ("dialkylamino", r"\*N\([CO]+\)[CO]+|\*N1C.*1"),
    ("alkylamino", r"\*NC(?!\(=).*"),
)
"""Name and pattern of the attachment SMILES, tried in order."""

_KIN = tuple((name, re.compile(pattern)) for name, pattern in KIN)


@lru_cache(maxsize=4096)
def kin(smiles: str) -> str:
    """The kin that a group belongs to, or "".

    >>> kin("*C(=O)OCC"), kin("*OC"), kin("*S(N)(=O)=O"), kin("*S(=O)(=O)[O-]"), kin("*Cl")
    ('ester', 'alkoxy', 'sulfonyl', '', '')
    """
    return next((name for name, pattern in _KIN if pattern.fullmatch(smiles)), "")


@dataclass(frozen=True, slots=True)
class Nature:
    """Numbers from which couplings are made; all dimensionless, none negative, zero for hydrogen."""

    present: float  # 1, or 0 for hydrogen
    pull_ortho: float  # acceptor strength felt from each place
    pull_meta: float
    pull_para: float
    resonance_pull: float  # para only: sigma_para_minus of acceptors by resonance
    field_pull: float  # field effect of groups that neither accept nor donate much by resonance (halogens)
    hydrocarbon: float  # size where hydrocarbon-like
    large_hydrocarbon: float  # 1 where hydrocarbon-like and of the largest bulk class
    ether: float  # 1 for donors with lone pairs in the ring plane
    bulky: float  # 1 where larger than hydrogen and fluorine
    bulky_pull: float  # pull_ortho of these
    press: float
    turned_acceptor: float  # the part of sigma_para_minus that is lost out of the plane
    turned_ether: float
    longer: float  # 1 for anything but hydrogen and methyl
    largest: float  # 1 for the largest bulk class
    extra_size: float  # size beyond methyl
    takes_proton: float  # 1 for nitroso, which the proton of a 4-nitrosoaniline goes to
    push_para: float  # donor strength felt from para
    oxide: float  # 1 for anionic oxygen on the ring


def is_empty(group: Substituent) -> bool:
    """Whether the position bears hydrogen only."""
    return group.short == HYDROGEN_SHORT


def field(group: Substituent) -> float:
    """Field effect; where unknown, a little more than sigma_meta (the usual ratio of the two)."""
    return group.field_effect if not isnan(group.field_effect) else 1.1 * group.sigma_meta.value


def resonance(group: Substituent) -> float:
    """sigma_para less the field effect."""
    return group.resonance if not isnan(group.resonance) else group.sigma_para.value - field(group)


def hydrocarbon_like(group: Substituent) -> bool:
    """Neutral, without lone pairs or dipole near the ring: alkyl, aryl, silyl, vinyl."""
    polar = group.para_acceptor or group.hbond_acceptor or group.charge or abs(field(group)) > WEAK_FIELD
    return group.bulk > 0 and not polar


def para_value(group: Substituent) -> tuple[Value, str]:
    """The published constant that acts at para: sigma_para_minus for groups that accept by resonance."""
    if group.para_acceptor and group.sigma_para_minus.known:
        return group.sigma_para_minus, "para_minus"
    return group.sigma_para, "para"


def through_resonance(group: Substituent) -> float:
    """The part of sigma_para_minus that needs the group in the plane of the ring, not negative."""
    if not (group.para_acceptor and group.sigma_para_minus.known):
        return 0.0
    return max(group.sigma_para_minus.value - max(field(group), 0.0), 0.0)


def ether_like(group: Substituent) -> bool:
    """A donor with lone pairs that lies in the ring plane: alkoxy, alkylthio, amino."""
    return group.twistable and not group.para_acceptor and resonance(group) < ETHER_RESONANCE


@lru_cache(maxsize=8192)
def nature(group: Substituent) -> Nature:
    """The coupling numbers of one group."""
    if is_empty(group):
        return Nature(*([0.0] * 20))
    inductive = max(field(group), 0.0)
    acceptor = group.para_acceptor and group.sigma_para_minus.known
    conjugated = through_resonance(group)
    pull_ortho = inductive + 0.5 * conjugated
    size = SIZE[group.bulk]
    smooth = hydrocarbon_like(group)
    ether = float(ether_like(group))
    return Nature(
        present=1.0,
        pull_ortho=pull_ortho,
        pull_meta=max(group.sigma_meta.value, 0.0),
        pull_para=group.sigma_para_minus.value if acceptor else inductive,
        resonance_pull=max(group.sigma_para_minus.value, 0.0) if acceptor else 0.0,
        field_pull=0.0 if acceptor or ether else inductive,
        hydrocarbon=size if smooth else 0.0,
        large_hydrocarbon=float(smooth and group.bulk == len(SIZE) - 1),
        ether=ether,
        bulky=float(group.bulk > 0),
        bulky_pull=pull_ortho if group.bulk else 0.0,
        press=PRESS[group.bulk],
        turned_acceptor=conjugated if group.twistable else 0.0,
        turned_ether=ether,
        longer=float(group.smiles != METHYL),
        largest=float(group.bulk == len(SIZE) - 1),
        extra_size=max(size - SIZE[1], 0.0),
        takes_proton=float(group.smiles == NITROSO),
        oxide=float(group.smiles == OXIDE),
        push_para=0.0 if acceptor else max(-group.sigma_para.value, 0.0),
    )
