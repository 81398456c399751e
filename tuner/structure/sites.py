"""Which groups of a molecule take up or give off a proton between pH 0 and 14?

One row per kind: name, pattern, and what the pattern's atoms are. Atom map 1 is the reporting atom (the one
that carries the proton of the acid form), map 2 the carrier (the atom that the group hangs on). Rows are
tried in order; an atom that an earlier row claimed is not claimed again. Patterns are our own; that these
groups ionise is textbook.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from rdkit import Chem

Mol = Any

_PLAIN_N = (
    "NX3;+0;!$(N-[#6]=[O,S,N,P]);!$(N-C#N);!$(N-[!#6;!#1]);!$(N-[#6]=[#6]-[#6]=[O,N]);!$(N-[#6]=[#6]-[#6]#N)"
)

SITE_PATTERNS: tuple[tuple[str, str], ...] = (
    ("sulfonic_acid", "[OX2H1:1]S(=O)(=O)[#6,#7,#8:2]"),
    ("sulfinic_acid", "[OX2H1:1][SX3](=O)[#6:2]"),
    ("phosphonic_acid", "[OX2H1:1]P(=O)([OX2H1])[#6,#7,#8:2]"),
    ("arsonic_acid", "[OX2H1:1][As](=O)([OX2H1])[#6,#8:2]"),
    ("phosphonic_acid", "[OX2H1:1]P(=O)[#6,#7,#8:2]"),
    ("arsonic_acid", "[OX2H1:1][As](=O)[#6,#8:2]"),
    ("boronic_acid", "[BX3:1]([OX2H1])([OX2H1])[#6,#8:2]"),
    ("boronic_acid", "[BX3:1]([OX2H1])([OX2])[#6,#8:2]"),
    ("carboxylic_acid", "[OX2H1:1][CX3](=O)[#6,#1:2]"),
    ("thioacid", "[SX2H1:1][CX3](=O)[#6:2]"),
    ("hydroxamic_acid", "[OX2H1:1][NX3]C(=O)[#6:2]"),
    ("oxime", "[OX2H1:1][NX2]=[CX3][#6:2]"),
    ("phenol", "[OX2H1:1][c:2]"),
    ("thiophenol", "[SX2H1:1][c:2]"),
    ("thiol", "[SX2H1:1][CX4:2]"),
    ("sulfonamide", "[NX3;H1,H2;+0:1]S(=O)(=O)[#6:2]"),
    ("imide", "[NX3;H1;$(N(C=[O,S])C=[O,S]):1]C(=[O,S])[#6,#7,#16:2]"),
    ("tetrazole", "[nH;$([nH]1nnnc1),$([nH]1nncn1):1]"),
    ("guanidine", "[NX2;+0:1]=[CX3]([NX3;!$(N-C=O)])[NX3;!$(N-C=O):2]"),
    ("amidine", "[NX2;+0;!$(N-[!#6;!#1]):1]=[CX3]([NX3;!$(N-C=O);!$(N-S)])[#6:2]"),
    ("aniline", f"[{_PLAIN_N}:1]-[c:2]"),
    ("aliphatic_amine", f"[{_PLAIN_N};!$(N-[#6]=[#6]);!$(N-a):1]-[CX4:2]"),
    ("hydrazine", "[NX3;H2;!$(N-[NX3]-C=[O,S]);!$(N-C):1]-[NX3:2]"),
    ("hydrazide", "[NX3;H2;$(N-[NX3]-C=[O,S]):1]-[NX3:2]"),
    ("pyridine", "[nX2;r6;+0:1]"),
    ("azole", "[nX2;r5;+0;$(n:c:[nX3]),$(n:[nX3]),$(n:c:s):1]"),
)

RING_KINDS = {
    "carboxylic_acid": "benzoic_acid",
    "sulfonic_acid": "benzenesulfonic_acid",
    "boronic_acid": "phenylboronic_acid",
    "phosphonic_acid": "phenylphosphonic_acid",
    "arsonic_acid": "phenylarsonic_acid",
    "sulfonamide": "benzenesulfonamide",
}
"""What a site is called where its carrier is an atom of a benzene ring."""

PLAIN_KINDS = {
    "carboxylic_acid": "aliphatic_acid",
    "phenol": "hydroxyheteroarene",
    "aniline": "aminoheteroarene",
}
"""What a site is called where it is not (a phenol or aniline pattern on a heteroaromatic ring)."""


HETERORINGS = ("tetrazole", "pyridine", "azole")
"""Kinds whose reporting atom is part of an aromatic ring; seen as that ring, the reporting atom is number
1."""


@dataclass(frozen=True, slots=True)
class Site:
    """One ionising site as found, before it is seen as a core.

    `atoms` are all atoms of the group itself (without the carrier). `rings` are the benzene rings that the
    site sits on, each listed from the carrier on; more than one for diarylamines. For a ring nitrogen it is
    its own ring.
    """

    kind: str
    reporting: int
    carrier: int  # -1 where the site is part of a ring
    atoms: tuple[int, ...]
    rings: tuple[tuple[int, ...], ...]


def benzene_rings(mol: Mol, atom: int) -> list[tuple[int, ...]]:
    """All-carbon aromatic six-membered rings through an atom, each listed from that atom on."""
    found = []
    for ring in mol.GetRingInfo().AtomRings():
        if len(ring) != 6 or atom not in ring:
            continue
        members = [mol.GetAtomWithIdx(k) for k in ring]
        if all(a.GetAtomicNum() == 6 and a.GetIsAromatic() for a in members):
            at = ring.index(atom)
            found.append(tuple(ring[at:] + ring[:at]))
    return found


def _smallest_ring(mol: Mol, atom: int) -> tuple[int, ...]:
    """The smallest ring through an atom, listed from that atom on."""
    ring = min((r for r in mol.GetRingInfo().AtomRings() if atom in r), key=lambda r: (len(r), r))
    at = ring.index(atom)
    return tuple(ring[at:] + ring[:at])


def _compiled() -> list[tuple[str, Mol, int, int]]:
    """(kind, pattern, place of the reporting atom, place of the carrier or -1), read once."""
    if not _COMPILED:
        for kind, smarts in SITE_PATTERNS:
            pattern = Chem.MolFromSmarts(smarts)
            maps = {a.GetAtomMapNum(): a.GetIdx() for a in pattern.GetAtoms() if a.GetAtomMapNum()}
            _COMPILED.append((kind, pattern, maps[1], maps.get(2, -1)))
    return _COMPILED


_COMPILED: list[tuple[str, Mol, int, int]] = []


def find_sites(mol: Mol) -> list[Site]:
    """All ionising sites, by kind in the order of the table, then by atom number.

    Phosphonic and arsonic acids have two OH and give two sites.
    """
    claimed: set[int] = set()
    found: list[Site] = []
    for kind, pattern, one, two in _compiled():
        places: dict[int, list[tuple[int, ...]]] = {}
        for match in mol.GetSubstructMatches(pattern, uniquify=False, maxMatches=4000):
            places.setdefault(match[one], []).append(tuple(match))
        for reporting in sorted(set(places) - claimed):
            found.append(_site(mol, kind, sorted(places[reporting]), one, two))
            claimed.add(reporting)
    return found


def _site(mol: Mol, kind: str, places: list[tuple[int, ...]], one: int, two: int) -> Site:
    """A site with its name, which depends on what it hangs on."""
    rings: set[tuple[int, ...]] = set()
    if two >= 0:
        rings = {ring for match in places for ring in benzene_rings(mol, match[two])}
    match = places[0]
    if kind in HETERORINGS:
        rings = {_smallest_ring(mol, places[0][one])}
    elif rings:
        match = next(m for m in places if benzene_rings(mol, m[two]))
    carrier = match[two] if two >= 0 else -1
    name = kind if kind in HETERORINGS else (RING_KINDS if rings else PLAIN_KINDS).get(kind, kind)
    atoms = tuple(sorted(set(match) - {carrier}))
    return Site(name, match[one], carrier, atoms, tuple(sorted(rings)))
