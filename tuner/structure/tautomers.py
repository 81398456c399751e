"""In which tautomer is a dye treated, and what must be said about it?

The acidity model speaks of phenols. A quinone hydrazone is the same compound as an arylazo phenol, a
quinone oxime the same as a nitrosophenol; where a structure is drawn that way it is redrawn as the phenol,
with a note. Textbook equilibria, common practice, no single source.
"""

from __future__ import annotations

from typing import Any

from rdkit import Chem

Mol = Any

_QUINOID = (
    # (pattern: O, its carbon, ..., carbon, N, X with hydrogen), what it is drawn as, what it is treated as)
    ("[OX1]=[#6;r6]~[#6;r6](=[NX2]-[NX3;!H0])", "quinone hydrazone", "arylazo phenol"),
    ("[OX1]=[#6;r6]~[#6;r6]~[#6;r6]~[#6;r6](=[NX2]-[NX3;!H0])", "quinone hydrazone", "arylazo phenol"),
    ("[OX1]=[#6;r6]~[#6;r6](=[NX2]-[OX2;H1])", "quinone oxime", "nitrosophenol"),
    ("[OX1]=[#6;r6]~[#6;r6]~[#6;r6]~[#6;r6](=[NX2]-[OX2;H1])", "quinone oxime", "nitrosophenol"),
)

_PARTNERS = (
    (
        "[OX2H1]-c:c-[NX2]=[NX2]-[#6]",
        "ortho-arylazo phenol or naphthol: exists in part as the quinone hydrazone",
    ),
    (
        "[OX2H1]-c1:c:c:c(-[NX2]=[NX2]-[#6]):c2:c:c:c:c:c:1:2",
        "4-arylazo-1-naphthol: exists in part as the quinone hydrazone",
    ),
    ("[OX2H1]-c:c-[NX2]=[OX1]", "ortho-nitrosophenol or -naphthol: exists in part as the quinone oxime"),
    ("[OX2H1]-c1:c:c:c(-[NX2]=[OX1]):c:c:1", "para-nitrosophenol: exists in part as the quinone oxime"),
    (
        "[NX3;+0;!$(N-C=O);!$(N-S)]-c1:c:c:c(-[NX2]=[NX2]-[#6]):c:c:1",
        "aminoazo dye: its acid form is in part protonated at the azo nitrogen",
    ),
)


def _six_ring(mol: Mol, first: int, last: int) -> tuple[int, ...] | None:
    """The six-membered ring of trigonal carbons that holds both atoms, if there is one."""
    for ring in mol.GetRingInfo().AtomRings():
        if len(ring) == 6 and first in ring and last in ring:
            atoms = [mol.GetAtomWithIdx(k) for k in ring]
            if all(
                a.GetAtomicNum() == 6 and a.GetHybridization() == Chem.HybridizationType.SP2 for a in atoms
            ):
                return tuple(ring)
    return None


def _to_phenol(mol: Mol, match: tuple[int, ...], ring: tuple[int, ...]) -> Mol | None:
    """Move the hydrogen to the oxygen and make the ring aromatic; None where that gives no sound molecule."""
    oxygen, carbonyl, far, nitrogen, donor = match[0], match[1], match[-3], match[-2], match[-1]
    work = Chem.RWMol(mol)
    work.GetBondBetweenAtoms(oxygen, carbonyl).SetBondType(Chem.BondType.SINGLE)
    work.GetBondBetweenAtoms(far, nitrogen).SetBondType(Chem.BondType.SINGLE)
    work.GetBondBetweenAtoms(nitrogen, donor).SetBondType(Chem.BondType.DOUBLE)
    for place, atom in enumerate(ring):
        work.GetAtomWithIdx(atom).SetIsAromatic(True)
        bond = work.GetBondBetweenAtoms(atom, ring[place - 1])
        bond.SetBondType(Chem.BondType.AROMATIC)
        bond.SetIsAromatic(True)
    for index, count in ((oxygen, 1), (donor, mol.GetAtomWithIdx(donor).GetTotalNumHs() - 1)):
        work.GetAtomWithIdx(index).SetNoImplicit(True)
        work.GetAtomWithIdx(index).SetNumExplicitHs(count)
    try:
        Chem.SanitizeMol(work)
    except (Chem.KekulizeException, Chem.AtomValenceException):
        return None
    drawn = work.GetMol()
    return drawn if drawn.GetAtomWithIdx(carbonyl).GetIsAromatic() else None


def usual_tautomer(mol: Mol, notes: list[str]) -> Mol:
    """Redraw quinone hydrazones and quinone oximes as phenols; each change adds a line to `notes`."""
    for smarts, drawn, treated in _QUINOID:
        pattern = _pattern(smarts)
        for _ in range(4):  # a dye has at most a few such rings
            for match in mol.GetSubstructMatches(pattern):
                ring = _six_ring(mol, match[1], match[-3])
                changed = _to_phenol(mol, match, ring) if ring else None
                if changed is not None:
                    notes.append(f"drawn as a {drawn}, treated as the {treated}")
                    mol = changed
                    break
            else:
                break
    return mol


def tautomer_notes(mol: Mol) -> list[str]:
    """What must be said about tautomers of a molecule as treated, in the order of the table above."""
    return [text for smarts, text in _PARTNERS if mol.HasSubstructMatch(_pattern(smarts))]


_PATTERNS: dict[str, Mol] = {}


def _pattern(smarts: str) -> Mol:
    """A search pattern, read once."""
    if smarts not in _PATTERNS:
        _PATTERNS[smarts] = Chem.MolFromSmarts(smarts)
    return _PATTERNS[smarts]
