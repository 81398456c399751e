"""Where do the atoms of a drawing lie?

Plane coordinates, the same for the same input; analogs of one core are laid onto the core's own drawing.
"""

from __future__ import annotations

from collections.abc import Mapping
from functools import lru_cache
from typing import Any

from rdkit import Chem, Geometry
from rdkit.Chem import rdDepictor

from tuner.library.records import Core
from tuner.structure.matching import core_match
from tuner.structure.molecule import parse

Mol = Any


def _plain(mol: Mol) -> Mol:
    """A copy that draws alike wherever it came from."""
    copy = Chem.RWMol(mol)
    for atom in copy.GetAtoms():
        atom.SetAtomMapNum(0)
        atom.SetIsotope(0)
    return copy.GetMol()


@lru_cache(maxsize=256)
def core_layout(smiles: str) -> tuple[Mol, tuple[int, ...]]:
    """Laid-out core with its dummies, and for each atom of the bare core its atom there.

    The molecule is shared: copy before changing it.
    """
    mol = parse(smiles)
    rdDepictor.Compute2DCoords(mol, canonOrient=True)
    kept = tuple(a.GetIdx() for a in mol.GetAtoms() if a.GetAtomicNum() != 0)
    return mol, kept


def laid_out(smiles: str, core: Core | None = None, groups: Mapping[str, str] | None = None) -> Mol:
    """A structure with plane coordinates.

    Parameters
    ----------
    smiles : str
    core : Core
        Lay the structure onto this core's drawing; without it, or where it is not found, the structure lies
        by itself. groups : mapping label -> `*...` Which group stands where, as the table names them;
        without it the lowest labeling is taken.
    """
    mol = _plain(parse(smiles))
    match = core_match(mol, core, groups) if core is not None else None
    if core is None or match is None:
        rdDepictor.Compute2DCoords(mol, canonOrient=True)
        return mol
    laid, kept = core_layout(core.smiles)
    where = laid.GetConformer()
    fixed = {}
    for bare_atom, atom in enumerate(match):
        at = where.GetAtomPosition(kept[bare_atom])
        fixed[int(atom)] = Geometry.Point2D(at.x, at.y)
    rdDepictor.Compute2DCoords(mol, canonOrient=False, coordMap=fixed)
    return mol
