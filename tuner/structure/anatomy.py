"""How is a substituent built, seen from its open valence?

One level at a time: the entry atom and what hangs on it, each piece again a group. That is all a rule for
estimating the constants of an untabulated group needs to know; the rules themselves stand elsewhere.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from rdkit import Chem

from tuner.structure.cutting import cut_groups
from tuner.structure.groups import HYDROGEN_GROUP, canonical_group
from tuner.structure.molecule import parse

Mol = Any

BENZENE_RELATIONS = {0: "ipso", 1: "ortho", 2: "meta", 3: "para"}


@dataclass(frozen=True, slots=True)
class Branch:
    """A piece on the entry atom: bond order (1, 2, 3) and the piece as `*...`, `*=...` or `*#...`."""

    order: int
    smiles: str


@dataclass(frozen=True, slots=True)
class Anatomy:
    """A group seen from its open valence.

    `entry` is the entry atom as SMILES writes it alone ("C", "[NH2+]" ...). For an aromatic ring `ring` is
    the bare ring as a group and `on_ring` lists (relation to the open valence, group); relations are
    "ortho", "meta", "para" on a benzene ring and "far" on any other. `charge` is the group's net charge.
    """

    smiles: str
    entry: str
    symbol: str
    entry_charge: int
    branches: tuple[Branch, ...]
    ring: str
    on_ring: tuple[tuple[str, str], ...]
    charge: int
    heavy_atoms: int


def _entry_text(atom: Any, hydrogens: int) -> str:
    """The entry atom alone, in brackets where it carries a charge."""
    charge = atom.GetFormalCharge()
    if not charge:
        return str(atom.GetSymbol())
    sign = ("+" if charge > 0 else "-") + (str(abs(charge)) if abs(charge) > 1 else "")
    count = f"H{hydrogens if hydrogens > 1 else ''}" if hydrogens else ""
    return f"[{atom.GetSymbol()}{count}{sign}]"


def _aromatic_system(mol: Mol, entry: int) -> frozenset[int]:
    """Atoms of the aromatic rings fused to the entry atom's ring."""
    rings = [
        set(r) for r in mol.GetRingInfo().AtomRings() if all(mol.GetAtomWithIdx(k).GetIsAromatic() for k in r)
    ]
    system = {entry}
    grown = True
    while grown:
        grown = False
        for ring in rings:
            if ring & system and not ring <= system:
                system |= ring
                grown = True
    return frozenset(system)


def _ring_anatomy(mol: Mol, entry: int, dummy: int) -> tuple[str, tuple[tuple[str, str], ...]]:
    """The bare ring as a group, and what it carries."""
    system = _aromatic_system(mol, entry)
    carried = []
    benzene = len(system) == 6 and all(mol.GetAtomWithIdx(k).GetAtomicNum() == 6 for k in system)
    for cut in cut_groups(mol, system):
        if cut.entry == dummy:
            continue
        distance = len(Chem.GetShortestPath(mol, entry, cut.root)) - 1 if cut.root != entry else 0
        carried.append((BENZENE_RELATIONS[distance] if benzene else "far", cut.smiles))
    work = Chem.RWMol(mol)
    for index in sorted(set(range(mol.GetNumAtoms())) - system - {dummy}, reverse=True):
        work.RemoveAtom(index)
    for atom in work.GetAtoms():
        if atom.GetAtomicNum() == 6:
            atom.SetNoImplicit(False)
            atom.SetNumExplicitHs(0)
    try:
        Chem.SanitizeMol(work)
        bare = canonical_group(Chem.MolToSmiles(work))
    except (Chem.KekulizeException, Chem.AtomValenceException, ValueError):
        bare = ""
    return bare, tuple(sorted(carried))


@lru_cache(maxsize=16384)
def anatomy(smiles: str) -> Anatomy:
    """Take a group apart by one level.

    Parameters
    ----------
    smiles : str
        A group with one open valence.

    Raises
    ------
    StructureError
        Not a group.

    >>> found = anatomy("*C(=O)OCC")
    >>> found.symbol, [(b.order, b.smiles) for b in found.branches]
    ('C', [(1, '*OCC'), (2, '*=O')])
    >>> anatomy("*c1ccc(Cl)cc1").on_ring
    (('para', '*Cl'),)
    """
    text = canonical_group(smiles)
    if text == HYDROGEN_GROUP:
        return Anatomy(text, "[H]", "H", 0, (), "", (), 0, 0)
    mol = parse(text)
    dummy = next(a.GetIdx() for a in mol.GetAtoms() if a.GetAtomicNum() == 0)
    atom = mol.GetAtomWithIdx(dummy).GetNeighbors()[0]
    entry = int(atom.GetIdx())
    ring = ""
    on_ring: tuple[tuple[str, str], ...] = ()
    branches: list[Branch] = []
    if atom.GetIsAromatic():
        ring, on_ring = _ring_anatomy(mol, entry, dummy)
    else:
        for cut in cut_groups(mol, frozenset({entry})):
            if cut.entry != dummy:
                order = int(mol.GetBondBetweenAtoms(cut.root, cut.entry).GetBondTypeAsDouble())
                branches.append(Branch(order, cut.smiles))
    return Anatomy(
        smiles=text,
        entry=_entry_text(atom, atom.GetTotalNumHs()),
        symbol=str(atom.GetSymbol()),
        entry_charge=int(atom.GetFormalCharge()),
        branches=tuple(sorted(branches, key=lambda b: (b.order, b.smiles))),
        ring=ring,
        on_ring=on_ring,
        charge=int(Chem.GetFormalCharge(mol)),
        heavy_atoms=int(mol.GetNumHeavyAtoms()),
    )


def rebuild(entry: str, branches: tuple[Branch, ...]) -> str:
    """The group made of an entry atom and pieces; "" where that is no sound group.

    >>> rebuild("C", (Branch(1, "*OC"), Branch(2, "*=O")))
    '*C(=O)OC'
    """
    from tuner.errors import StructureError

    parts = "".join(f"({b.smiles[1:]})" for b in branches if b.smiles.startswith("*"))
    if len(parts) == 0 and branches:
        return ""
    try:
        return canonical_group(f"*{entry}{parts}")
    except StructureError:
        return ""
