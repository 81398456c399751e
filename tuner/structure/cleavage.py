"""Which amines does a dye give when its azo bonds are split by reduction?"""

from __future__ import annotations

from functools import lru_cache
from itertools import combinations
from typing import Any

from rdkit import Chem

from tuner.structure.molecule import flat, read_molecule, read_smarts

Mol = Any

AZO_BOND = "[#6]-[NX2]=[NX2]-[#6]"
MAX_AZO_BONDS = 6
"""Beyond this number of azo bonds only single and full cleavage are worked out, not every combination."""


@lru_cache(maxsize=16384)
def cleave_azo(smiles: str, *, place: str = "") -> tuple[str, ...]:
    """Canonical SMILES, sorted, of all amines that partial or full reduction of the azo bonds can release.

    R-N=N-R' gives R-NH2 and R'-NH2. Where a dye has several azo bonds every subset of them is split, since a
    half split dye can itself be of concern (4-aminoazobenzene). Stereo marks are ignored; hydrazone tautomers
    of arylazo phenols count as azo compounds. A molecule without an azo bond gives an empty tuple.

    Raises
    ------
    StructureError
        The structure cannot be read or is outside what the program treats.

    >>> cleave_azo("Oc1ccc(N=Nc2ccccc2)cc1")
    ('Nc1ccc(O)cc1', 'Nc1ccccc1')
    """
    mol = flat(read_molecule(smiles, place=place).mol)
    bonds = sorted({(match[1], match[2]) for match in mol.GetSubstructMatches(read_smarts(AZO_BOND))})
    sizes = range(1, len(bonds) + 1) if len(bonds) <= MAX_AZO_BONDS else (1, len(bonds))
    found: set[str] = set()
    for size in sizes:
        for chosen in combinations(bonds, size):
            found.update(_split(mol, chosen))
    return tuple(sorted(found))


def _split(mol: Mol, bonds: tuple[tuple[int, int], ...]) -> list[str]:
    """The pieces that hold a nitrogen of a split bond."""
    work = Chem.RWMol(mol)
    for first, second in bonds:
        work.RemoveBond(first, second)
        for index in (first, second):
            atom = work.GetAtomWithIdx(index)
            atom.SetNoImplicit(True)
            atom.SetNumExplicitHs(2)
    whole = work.GetMol()
    Chem.SanitizeMol(whole)
    split_atoms = {index for bond in bonds for index in bond}
    atoms: list[tuple[int, ...]] = []
    pieces = Chem.GetMolFrags(whole, asMols=True, fragsMolAtomMapping=atoms)
    amines = (
        piece for piece, numbers in zip(pieces, atoms, strict=True) if split_atoms.intersection(numbers)
    )
    # spelled once more through the reader, so that explicit hydrogens leave no trace in the string
    return [Chem.MolToSmiles(Chem.MolFromSmiles(Chem.MolToSmiles(piece))) for piece in amines]
