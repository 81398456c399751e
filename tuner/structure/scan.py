"""How often do many patterns occur in a molecule, read once?"""

from __future__ import annotations

from functools import lru_cache

from rdkit import Chem

from tuner.errors import StructureError
from tuner.structure.molecule import parse, read_smarts


@lru_cache(maxsize=16384)
def pattern_counts(smiles: str, patterns: tuple[str, ...], *, place: str = "") -> tuple[int, ...]:
    """Number of different places (sets of atoms) at which each SMARTS pattern matches a structure as written.

    Parameters
    ----------
    smiles : str
    patterns : tuple of str
        SMARTS; each is compiled once and kept, and so is the answer: the groups of a space come up again and
        again.

    Raises
    ------
    StructureError
        The structure or a pattern cannot be read.

    >>> pattern_counts("Oc1ccc([N+](=O)[O-])cc1", ("[OX2H1]c", "[N+](=O)[O-]", "[Br]"))
    (1, 1, 0)
    """
    mol = parse(smiles, place=place)
    return tuple(len(mol.GetSubstructMatches(read_smarts(pattern))) for pattern in patterns)


def atomic_mass(symbol: str) -> float:
    """Standard atomic mass of an element [g/mol]; 0 for the open position `*`. StructureError for an unknown
    symbol.

    >>> round(atomic_mass("O"), 3)
    15.999
    """
    if symbol == "*":
        return 0.0
    try:
        return float(Chem.GetPeriodicTable().GetAtomicWeight(symbol))
    except RuntimeError:
        raise StructureError(f'"{symbol}" is no element', remedy="write the symbol, such as Cl") from None
