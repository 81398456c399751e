"""How is a substituent spelled, so that a group cut from a molecule and a library row are the same string?

A group is a SMILES with exactly one open valence `*`, canonical, without stereo, isotopes or atom maps,
nitro and the like in their charge-separated form; the charge of the group itself is kept (`*C(=O)[O-]` is
not `*C(=O)O`).
"""

from __future__ import annotations

from functools import lru_cache
from typing import Any

from rdkit import Chem

from tuner.errors import StructureError
from tuner.structure.molecule import parse
from tuner.structure.neutral import spell_oxides

Mol = Any

HYDROGEN_GROUP = "*[H]"


def _bare_hydrogen(text: str) -> bool:
    """Whether the string is one of the spellings of the empty position."""
    return text.replace("[*]", "*").replace("*-", "*") in {"*[H]", "[H]*", "[*H]", "*", "[H]-*"}


@lru_cache(maxsize=65536)
def canonical_group(smiles: str, *, place: str = "") -> str:
    """Canonical `*...` SMILES of a substituent.

    Raises
    ------
    StructureError
        Not SMILES, or not exactly one `*` with a single bond.

    >>> canonical_group("O=N(=O)*"), canonical_group("[H]*"), canonical_group("[*:4]/N=N/c1ccccc1")
    ('*[N+](=O)[O-]', '*[H]', '*N=Nc1ccccc1')
    """
    if _bare_hydrogen(str(smiles).strip()):
        return HYDROGEN_GROUP
    mol = parse(smiles, place=place)
    dummies = [a for a in mol.GetAtoms() if a.GetAtomicNum() == 0]
    one_single_bond = len(dummies) == 1 and [b.GetBondType() for b in dummies[0].GetBonds()] == [
        Chem.BondType.SINGLE
    ]
    if not one_single_bond or len(Chem.GetMolFrags(mol)) != 1:
        raise StructureError(
            f"'{smiles}' is no substituent",
            place=place,
            remedy="write one group with one open valence, such as *OC",
        )
    return spell_group(mol)


def spell_group(mol: Mol) -> str:
    """Canonical string of a sanitised group molecule with one dummy atom."""
    work = Chem.RWMol(mol)
    for atom in work.GetAtoms():
        atom.SetIsotope(0)
        atom.SetAtomMapNum(0)
    Chem.RemoveStereochemistry(work)
    spell_oxides(work)
    Chem.SanitizeMol(work)
    first = Chem.MolToSmiles(work)
    # a second reading makes aromaticity and hydrogens independent of how the group was cut
    return str(Chem.MolToSmiles(Chem.MolFromSmiles(first)))


def is_group(smiles: str) -> bool:
    """Whether a string is a substituent."""
    try:
        canonical_group(smiles)
    except StructureError:
        return False
    return True
