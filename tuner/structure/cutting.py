"""What hangs on a core, and as which groups?

The core's atoms are fixed; every bond that leaves them is cut and each piece becomes a group `*...`.

A piece that hangs on one bond is the group as it is. A piece that bridges two or more positions (a fused
ring) is opened, once for each position, so that each position sees what its own end of the bridge holds:

- the atom at the other end of the bridge is taken away with what hangs on it only ...
- ... unless it is part of a ring of the piece itself (fluorene: the far benzene ring stays), or it is O, S
  or N on a carbonyl carbon (coumarin: the ester stays an ester); then it is kept and its valence closed
  with hydrogen or methyl;
- aromatic atoms that are no ring any more get the double bonds that fit, the rest hydrogen.

So 1-naphthol without a naphthol core is phenol with `*C=CC` at 2 and at 3; methylenedioxy is two methoxy
groups; tetralone is a propanoyl and a propyl group.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from rdkit import Chem

from tuner.structure.groups import spell_group

Mol = Any


@dataclass(frozen=True, slots=True)
class CutGroup:
    """A group cut from a molecule at the bond root-entry (`root` belongs to the core)."""

    root: int
    entry: int
    smiles: str
    atoms: tuple[int, ...]
    opened: bool  # part of a ring that was opened


def cut_groups(mol: Mol, core: frozenset[int]) -> list[CutGroup]:
    """All groups that a core carries, by root and entry atom.

    Parameters
    ----------
    mol : sanitised molecule without stereo
    core : atoms of the core; bonds inside it are left alone
    """
    bonds, ends = [], []
    for bond in mol.GetBonds():
        a, b = bond.GetBeginAtomIdx(), bond.GetEndAtomIdx()
        if (a in core) != (b in core):
            bonds.append(bond.GetIdx())
            ends.append((a, b) if a in core else (b, a))
    if not bonds:
        return []
    broken = Chem.FragmentOnBonds(mol, bonds, dummyLabels=[(0, 0)] * len(bonds))
    atoms: list[tuple[int, ...]] = []
    parts = Chem.GetMolFrags(broken, asMols=True, sanitizeFrags=False, fragsMolAtomMapping=atoms)
    found: list[CutGroup] = []
    for part, members in zip(parts, atoms, strict=True):
        real = [k for k in members if k < mol.GetNumAtoms()]
        if set(real) & core:
            continue
        here = [(root, entry) for root, entry in ends if entry in members]
        if len(here) == 1:
            found.append(CutGroup(*here[0], spell_group(part), tuple(sorted(real)), False))
        else:
            found.extend(_open_bridge(mol, part, members, here))
    return sorted(found, key=lambda g: (g.root, g.entry))


def _open_bridge(
    mol: Mol, part: Mol, members: tuple[int, ...], ends: list[tuple[int, int]]
) -> list[CutGroup]:
    """The groups that one bridging piece gives, one for each of its ends."""
    number = {atom: k for k, atom in enumerate(members)}
    wanting = _wants_double_bond(mol)
    groups = []
    for root, entry in ends:
        others = [e for r, e in ends if (r, e) != (root, entry)]
        smiles, kept = _open_end(part, number, entry, others, wanting)
        atoms = tuple(sorted(members[k] for k in kept))
        groups.append(CutGroup(root, entry, smiles, atoms, True))
    return groups


def _wants_double_bond(mol: Mol) -> frozenset[int]:
    """Aromatic atoms that hold a double bond inside the aromatic system."""
    drawn = Chem.Mol(mol)
    Chem.Kekulize(drawn, clearAromaticFlags=True)
    wanting = set()
    for old, new in zip(mol.GetBonds(), drawn.GetBonds(), strict=True):
        if old.GetIsAromatic() and new.GetBondType() == Chem.BondType.DOUBLE:
            wanting |= {new.GetBeginAtomIdx(), new.GetEndAtomIdx()}
    return frozenset(wanting)


def _kept_at_far_end(part: Mol, atom: int) -> str:
    """How the far end of a bridge is kept: "hydrogen", "methyl", or "" where it is taken away."""
    there = part.GetAtomWithIdx(atom)
    if part.GetRingInfo().NumAtomRings(atom):
        return "hydrogen"
    if there.GetAtomicNum() in (7, 8, 16):
        for near in there.GetNeighbors():
            if near.GetAtomicNum() == 6 and any(
                b.GetBondType() == Chem.BondType.DOUBLE and b.GetOtherAtom(near).GetAtomicNum() in (8, 16)
                for b in near.GetBonds()
            ):
                return "methyl"
    return ""


def _open_end(
    part: Mol, number: dict[int, int], entry: int, others: list[int], wanting: frozenset[int]
) -> tuple[str, list[int]]:
    """The bridge as seen from one end: its canonical group and the kept atoms (numbers in `part`)."""
    Chem.FastFindRings(part)
    work = Chem.RWMol(part)
    near = number[entry]
    back = {k: atom for atom, k in number.items()}
    doomed: set[int] = set()
    mine = True
    for dummy in [a for a in work.GetAtoms() if a.GetAtomicNum() == 0]:
        at = dummy.GetNeighbors()[0].GetIdx()
        if at == near and mine:
            mine = False  # the group's own open valence
            continue
        keep = "hydrogen" if at == near else _kept_at_far_end(part, at)
        if keep == "methyl":
            dummy.SetAtomicNum(6)
        else:
            doomed.add(dummy.GetIdx())
            if not keep:
                doomed.add(at)
    pi = {k for k, atom in back.items() if atom in wanting}
    _draw_double_bonds(work, pi - doomed, near)
    for index in sorted(doomed, reverse=True):
        work.RemoveAtom(index)
    kept_order = [k for k in range(part.GetNumAtoms()) if k not in doomed]
    for atom in work.GetAtoms():
        atom.SetNoImplicit(False)
        atom.SetNumExplicitHs(0)
    pieces: list[tuple[int, ...]] = []
    mols = Chem.GetMolFrags(work.GetMol(), asMols=True, sanitizeFrags=True, fragsMolAtomMapping=pieces)
    for mol, piece in zip(mols, pieces, strict=True):
        original = [kept_order[k] for k in piece]
        if near in original:
            real = [k for k in original if part.GetAtomWithIdx(k).GetAtomicNum() != 0]
            return spell_group(mol), real
    raise AssertionError("the entry atom is always kept")  # pragma: no cover


def _draw_double_bonds(work: Any, pi: set[int], first: int) -> None:
    """Replace aromatic bonds by single and double ones: a matching of the atoms in `pi`, `first` among
    them."""
    edges: dict[int, list[int]] = {k: [] for k in pi}
    for bond in work.GetBonds():
        if not bond.GetIsAromatic():
            continue
        a, b = bond.GetBeginAtomIdx(), bond.GetEndAtomIdx()
        bond.SetIsAromatic(False)
        bond.SetBondType(Chem.BondType.SINGLE)
        if a in pi and b in pi:
            edges[a].append(b)
            edges[b].append(a)
    for atom in work.GetAtoms():
        atom.SetIsAromatic(False)
    for a, b in best_matching(edges, first):
        work.GetBondBetweenAtoms(a, b).SetBondType(Chem.BondType.DOUBLE)


def best_matching(edges: dict[int, list[int]], first: int = -1) -> list[tuple[int, int]]:
    """A largest set of bonds that share no atom, deterministic; among equal ones `first` is bound if it can
    be.

    Atoms with the fewest partners are served first, which is exact on chains and trees; on rings of a size
    that dyes have the short search is.

    >>> best_matching({0: [1], 1: [0, 2], 2: [1, 3], 3: [2]})
    [(0, 1), (2, 3)]
    >>> best_matching({0: [1], 1: [0, 2], 2: [1]}, first=2)
    [(1, 2)]
    """
    budget = [2000]

    def search(free: frozenset[int]) -> list[tuple[int, int]]:
        budget[0] -= 1
        ranked = sorted((sum(n in free for n in edges[a]), a) for a in free)
        ranked = [r for r in ranked if r[0]]
        if not ranked:
            return []
        count, atom = ranked[0]
        best: list[tuple[int, int]] = []
        for near in sorted(n for n in edges[atom] if n in free):
            trial = [(min(atom, near), max(atom, near)), *search(free - {atom, near})]
            if len(trial) > len(best):
                best = trial
            if count == 1 or 2 * len(best) >= len(free) - 1 or budget[0] < 0:
                break
        return best

    every = frozenset(edges)
    plain = search(every)
    for near in sorted(edges.get(first, ())):
        led = [(min(first, near), max(first, near)), *search(every - {first, near})]
        if len(led) >= len(plain):
            return sorted(led)
    return sorted(plain)
