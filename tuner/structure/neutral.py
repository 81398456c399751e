"""How is a compound brought to the one form that the program treats?

Salts lose their counter-ion, metals, radicals and mixtures are refused, isotopes are wiped, protons go back
on anions and come off cations. Charges that belong to the bonding (nitro, azide, N-oxide, quaternary
nitrogen) stay.
"""

from __future__ import annotations

from typing import Any

from rdkit import Chem

from tuner.errors import StructureError

Mol = Any

NON_METALS = frozenset({0, 1, 5, 6, 7, 8, 9, 14, 15, 16, 17, 32, 33, 34, 35, 52, 53})

COUNTER_IONS = frozenset(
    [
        "[Na+]",
        "[K+]",
        "[Li+]",
        "[Cs+]",
        "[NH4+]",
        "[Ca+2]",
        "[Mg+2]",
        "[Cl-]",
        "[Br-]",
        "[I-]",
        "[F-]",
        "Cl",
        "Br",
        "I",
        "F",
        "[OH-]",
        "[H+]",
        "O",
        "[O-][Cl+3]([O-])([O-])[O-]",
        "[O-]Cl(=O)(=O)=O",
        "F[B-](F)(F)F",
        "F[P-](F)(F)(F)(F)F",
        "O=S(=O)([O-])O",
        "O=S(=O)(O)O",
        "O=S(=O)([O-])[O-]",
        "O=[N+]([O-])[O-]",
        "O=[N+]([O-])O",
        "O=C([O-])C(F)(F)F",
        "O=C(O)C(F)(F)F",
        "CC(=O)[O-]",
    ]
)
"""Partners of a salt that are left out, with a note; any other second component makes the string a
mixture."""

_OXIDE_PARTNERS = frozenset({15, 16, 33, 34})
"""P, S, As, Se: `[S+][O-]` is another spelling of `S=O`."""


def short(text: str) -> str:
    """The string as an error shows it: printable and not longer than a line."""
    shown = "".join(c if c.isprintable() else "?" for c in text)
    return shown if len(shown) <= 60 else shown[:57] + "..."


def main_component(mol: Mol, text: str, place: str, notes: list[str]) -> tuple[Mol, list[int]]:
    """The organic component of a salt and its atom numbers; an error for a true mixture."""
    atoms: list[tuple[int, ...]] = []
    parts = Chem.GetMolFrags(mol, asMols=True, sanitizeFrags=True, fragsMolAtomMapping=atoms)
    if len(parts) == 1:
        return mol, list(range(mol.GetNumAtoms()))
    spelled = [Chem.MolToSmiles(p) for p in parts]
    main = [k for k, s in enumerate(spelled) if s not in COUNTER_IONS]
    if not main:
        raise StructureError(
            f"'{short(text)}' holds counter-ions only", place=place, remedy="write the organic compound"
        )
    if len(main) > 1:
        raise StructureError(
            f"'{short(text)}' is a mixture of {len(parts)} components",
            place=place,
            remedy="give one compound per line (common counter-ions are left out by themselves)",
        )
    left_out = sorted({s for k, s in enumerate(spelled) if k != main[0]})
    notes.append(f"left out: {', '.join(left_out)}")
    return parts[main[0]], list(atoms[main[0]])


def refuse(mol: Mol, text: str, place: str, notes: list[str]) -> None:
    """Errors for metals, radicals and open positions; isotopes are wiped with a note."""
    foreign = sorted({a.GetSymbol() for a in mol.GetAtoms() if a.GetAtomicNum() not in NON_METALS})
    if foreign:
        raise StructureError(
            f"'{short(text)}' contains {', '.join(foreign)}",
            place=place,
            remedy="metals and rare elements are not treated",
        )
    if any(a.GetAtomicNum() == 0 for a in mol.GetAtoms()):
        raise StructureError(
            f"'{short(text)}' has an open position (*)", place=place, remedy="write the whole molecule"
        )
    if any(a.GetNumRadicalElectrons() for a in mol.GetAtoms()):
        raise StructureError(
            f"'{short(text)}' is a radical", place=place, remedy="only closed-shell molecules are treated"
        )
    if any(a.GetIsotope() for a in mol.GetAtoms()):
        notes.append("isotope labels are ignored")
        for atom in mol.GetAtoms():
            atom.SetIsotope(0)


def spell_oxides(mol: Mol) -> None:
    """`[S+][O-]` -> `S=O`, likewise P, As, Se (in place)."""
    for bond in mol.GetBonds():
        pair = (bond.GetBeginAtom(), bond.GetEndAtom())
        for centre, oxygen in (pair, pair[::-1]):
            if (
                centre.GetAtomicNum() in _OXIDE_PARTNERS
                and oxygen.GetAtomicNum() in (8, 16)
                and centre.GetFormalCharge() > 0
                and oxygen.GetFormalCharge() == -1
                and bond.GetBondType() == Chem.BondType.SINGLE
            ):
                bond.SetBondType(Chem.BondType.DOUBLE)
                centre.SetFormalCharge(centre.GetFormalCharge() - 1)
                oxygen.SetFormalCharge(0)


def _set_hydrogens(atom: Any, count: int) -> None:
    """Fix the number of hydrogens on an atom whose charge was changed."""
    atom.SetNoImplicit(True)
    atom.SetNumExplicitHs(count)


def neutralise(mol: Mol) -> Mol:
    """Protons back on anions and off cations, where the charge is not part of the bonding (nitro, azide
    ...)."""
    work = Chem.RWMol(mol)
    drop: list[int] = []
    for atom in work.GetAtoms():
        charge = atom.GetFormalCharge()
        if not charge:
            continue
        near = [n.GetFormalCharge() for n in atom.GetNeighbors()]
        hydrogens = atom.GetTotalNumHs()
        if charge < 0 and atom.GetAtomicNum() in (7, 8, 16, 34) and not any(c > 0 for c in near):
            atom.SetFormalCharge(0)
            _set_hydrogens(atom, hydrogens - charge)
        elif charge == -1 and atom.GetAtomicNum() == 5:
            hydroxyl = [n for n in atom.GetNeighbors() if n.GetAtomicNum() == 8 and n.GetDegree() == 1]
            if hydroxyl:  # R-B(OH)3(-) is the base form of R-B(OH)2
                atom.SetFormalCharge(0)
                drop.append(hydroxyl[-1].GetIdx())
        elif charge > 0 and hydrogens >= charge and atom.GetAtomicNum() != 6 and not any(c < 0 for c in near):
            atom.SetFormalCharge(0)
            _set_hydrogens(atom, hydrogens - charge)
    for index in sorted(drop, reverse=True):
        work.RemoveAtom(index)
    plain = work.GetMol()
    Chem.SanitizeMol(plain)
    return plain
