"""What do the groups of a site look like while other sites of the molecule are ionised?

The charged form of a group (`*C(=O)[O-]` for `*C(=O)O`) has constants of its own. It is cut out of the
molecule after the charges were set, so that any group, tabulated or not, is spelled as the tables spell it.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from functools import lru_cache
from typing import Any

from rdkit import Chem

from tuner.structure.cutting import cut_groups
from tuner.structure.molecule import flat, parse
from tuner.structure.records import PlacedGroup

Mol = Any


@lru_cache(maxsize=4096)
def _charged(smiles: str, charges: tuple[tuple[int, int], ...]) -> Mol:
    """The molecule with formal charges set on atoms; hydrogens follow."""
    work = Chem.RWMol(flat(parse(smiles)))
    for index, charge in charges:
        atom = work.GetAtomWithIdx(index)
        hydrogens = atom.GetTotalNumHs()
        atom.SetFormalCharge(charge)
        atom.SetNoImplicit(True)
        atom.SetNumExplicitHs(max(0, hydrogens + charge))
    mol = work.GetMol()
    Chem.SanitizeMol(mol)
    return mol


def charged_groups(smiles: str, groups: Iterable[PlacedGroup], charges: Mapping[int, int]) -> dict[str, str]:
    """Label -> canonical `*...` SMILES of the groups of one site view while some atoms carry a charge.

    Parameters
    ----------
    smiles : str
        `Dissection.smiles`; atom numbers refer to it.
    groups : PlacedGroups of one SiteView
    charges : mapping
        Atom number -> formal charge of the ionised form: -1 for an acid that lost its proton, +1 for an
        amine that took one up. Boron is left as it is.

    Returns
    -------
    dict
        Groups that hold no charged atom come back unchanged.

    >>> charged_groups("O=C(O)c1ccc(O)cc1", [PlacedGroup("4", "*C(=O)O", (0, 1, 2))], {2: -1})
    {'4': '*C(=O)[O-]'}
    """
    placed = tuple(groups)
    found = {g.label: g.smiles for g in placed}
    inside = {a for g in placed for a in g.atoms}
    acting = tuple(sorted((a, q) for a, q in charges.items() if a in inside))
    if not acting:
        return found
    try:
        mol = _charged(smiles, tuple((a, q) for a, q in acting))
    except (Chem.KekulizeException, Chem.AtomValenceException):
        return found
    core = frozenset(range(mol.GetNumAtoms())) - inside
    cuts = {(c.atoms, c.entry): c.smiles for c in cut_groups(mol, core)}
    by_atoms = {atoms: text for (atoms, _), text in sorted(cuts.items())}
    return {label: by_atoms.get(g.atoms, found[label]) for label, g in ((g.label, g) for g in placed)}


@lru_cache(maxsize=4096)
def bonds_between(smiles: str, first: int, second: int) -> int:
    """Number of bonds on the shortest path between two atoms of a structure as written.

    >>> bonds_between("NCC(=O)O", 0, 4)
    3
    """
    return len(Chem.GetShortestPath(parse(smiles), first, second)) - 1


def formal_charge(smiles: str) -> int:
    """Net formal charge of a structure as written."""
    return int(Chem.GetFormalCharge(parse(smiles)))
