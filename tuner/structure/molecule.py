"""Can this SMILES be read, what is it as the program treats it, and what are its bulk properties?

Two ways in:

- `canonical_smiles` reads anything that is a structure (reagents, salts, metals) and only spells it canonically;
- `read_molecule` reads a dye: one molecule, no metal, no radical, at most `MAX_HEAVY_ATOMS` atoms, brought to its
  largest neutral form (protons put back on phenolates, carboxylates ..., taken off ammonium ions; nitro groups,
  N-oxides, quaternary nitrogen keep their charges). What was changed is said in `notes`.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from rdkit import Chem, RDLogger
from rdkit.Chem import Crippen, Descriptors, rdMolDescriptors

from tuner.errors import StructureError

RDLogger.DisableLog("rdApp.*")  # its messages are many lines long; ours are one line each

Mol = Any
"""An RDKit molecule; opaque outside this room."""

MAX_HEAVY_ATOMS = 150
"""Dyes are smaller; beyond this a string is a polymer, a protein or a mistake."""
MAX_LENGTH = 4000

NON_METALS = frozenset({0, 1, 5, 6, 7, 8, 9, 14, 15, 16, 17, 32, 33, 34, 35, 52, 53})

COUNTER_IONS = frozenset(
    "[Na+] [K+] [Li+] [Cs+] [NH4+] [Ca+2] [Mg+2] [Cl-] [Br-] [I-] [F-] Cl Br I F [OH-] [H+] O "
    "[O-][Cl+3]([O-])([O-])[O-] [O-]Cl(=O)(=O)=O F[B-](F)(F)F F[P-](F)(F)(F)(F)F O=S(=O)([O-])O O=S(=O)(O)O "
    "O=S(=O)([O-])[O-] O=[N+]([O-])[O-] O=[N+]([O-])O O=C([O-])C(F)(F)F O=C(O)C(F)(F)F CC(=O)[O-]".split()
)
"""Partners of a salt that are left out, with a note; any other second component makes the string a mixture."""

_OXIDE_PARTNERS = frozenset({15, 16, 33, 34})
"""P, S, As, Se: `[S+][O-]` is another spelling of `S=O`."""


@dataclass(frozen=True, slots=True)
class Molecule:
    """A molecule as treated: canonical SMILES, the toolkit's object in that atom order, and what was changed."""

    smiles: str
    mol: Mol
    notes: tuple[str, ...]
    input_atoms: tuple[int, ...]  # for each atom of `smiles`, its number in the string that was given


@dataclass(frozen=True, slots=True)
class Properties:
    """Bulk properties of a neutral molecule. Ranges: any molecule that `read_molecule` accepts."""

    molar_mass_g_mol: float
    formula: str
    clogp: float  # Wildman & Crippen, J. Chem. Inf. Comput. Sci. 1999, 39, 868
    tpsa_a2: float  # Ertl, Rohde & Selzer, J. Med. Chem. 2000, 43, 3714
    heavy_atoms: int
    charge: int


def _syntax_or_valence(text: str, place: str) -> Mol:
    """The sanitised molecule, or an error that says what kind of mistake it is."""
    params = Chem.SmilesParserParams()
    params.sanitize = False
    params.removeHs = False
    params.allowCXSMILES = False
    params.parseName = False
    try:
        mol = Chem.MolFromSmiles(text, params)
    except Exception:  # the toolkit raises several unrelated types on odd bytes
        mol = None
    if mol is None or mol.GetNumAtoms() == 0:
        raise StructureError(
            f"'{_short(text)}' cannot be read as SMILES",
            place=place,
            remedy="check brackets, ring-closure digits and atom symbols",
        )
    heavy = sum(a.GetAtomicNum() != 1 for a in mol.GetAtoms())
    if heavy > MAX_HEAVY_ATOMS:
        raise StructureError(
            f"'{_short(text)}' has {heavy} heavy atoms",
            place=place,
            remedy=f"at most {MAX_HEAVY_ATOMS} are treated",
        )
    try:
        Chem.SanitizeMol(mol)
        mol = Chem.RemoveHs(mol)
    except Chem.AtomValenceException as error:
        symbol = mol.GetAtomWithIdx(error.cause.GetAtomIdx()).GetSymbol()
        raise StructureError(
            f"'{_short(text)}' gives atom {error.cause.GetAtomIdx() + 1} ({symbol}) too many bonds",
            place=place,
            remedy="correct the bonds or write the charge",
        ) from None
    except Exception:  # kekulisation and rarer failures
        raise StructureError(
            f"'{_short(text)}' has an aromatic ring that no double bonds fit",
            place=place,
            remedy="a ring nitrogen that carries hydrogen is written [nH]",
        ) from None
    return mol


def _short(text: str) -> str:
    """The string as an error shows it: printable and not longer than a line."""
    shown = "".join(c if c.isprintable() else "?" for c in text)
    return shown if len(shown) <= 60 else shown[:57] + "..."


def parse(smiles: str, *, place: str = "") -> Mol:
    """Read any SMILES into the toolkit's molecule.

    Raises
    ------
    StructureError
        Empty, not SMILES, impossible valence, unfit aromatic ring, more than `MAX_HEAVY_ATOMS` heavy atoms.
    """
    text = str(smiles).strip()
    if not text:
        raise StructureError("the SMILES is empty", place=place, remedy="write a structure")
    if len(text) > MAX_LENGTH:
        raise StructureError(
            f"'{_short(text)}' is {len(text)} characters long",
            place=place,
            remedy=f"at most {MAX_HEAVY_ATOMS} heavy atoms are treated",
        )
    if any(c.isspace() or not c.isascii() or not c.isprintable() for c in text):
        raise StructureError(
            f"'{_short(text)}' cannot be read as SMILES",
            place=place,
            remedy="a SMILES holds no spaces and only plain ASCII characters",
        )
    return _syntax_or_valence(text, place)


@lru_cache(maxsize=65536)
def canonical_smiles(smiles: str, *, place: str = "") -> str:
    """Canonical spelling of any structure, charges, salts and stereo as they are.

    >>> canonical_smiles("C1=CC=CC=C1O")
    'Oc1ccccc1'
    """
    return str(Chem.MolToSmiles(parse(smiles, place=place)))


@lru_cache(maxsize=65536)
def identity_key(smiles: str, *, place: str = "") -> str:
    """One string per compound as treated: largest neutral form, no stereo, no isotopes; compare measured values by it.

    >>> identity_key("[Na+].[O-]c1ccc(/N=N/c2ccccc2)cc1")
    'Oc1ccc(N=Nc2ccccc2)cc1'
    """
    return str(Chem.MolToSmiles(flat(read_molecule(smiles, place=place).mol)))


def flat(mol: Mol) -> Mol:
    """A copy without stereo marks."""
    copy = Chem.Mol(mol)
    Chem.RemoveStereochemistry(copy)
    return copy


def _main_component(mol: Mol, text: str, place: str, notes: list[str]) -> tuple[Mol, list[int]]:
    """The organic component of a salt and its atom numbers; an error for a true mixture."""
    atoms: list[tuple[int, ...]] = []
    parts = Chem.GetMolFrags(mol, asMols=True, sanitizeFrags=True, fragsMolAtomMapping=atoms)
    if len(parts) == 1:
        return mol, list(range(mol.GetNumAtoms()))
    spelled = [Chem.MolToSmiles(p) for p in parts]
    main = [k for k, s in enumerate(spelled) if s not in COUNTER_IONS]
    if len(main) != 1:
        raise StructureError(
            f"'{_short(text)}' is a mixture of {len(parts)} components",
            place=place,
            remedy="give one compound per line (common counter-ions are left out by themselves)",
        )
    left_out = sorted({s for k, s in enumerate(spelled) if k != main[0]})
    notes.append(f"left out: {', '.join(left_out)}")
    return parts[main[0]], list(atoms[main[0]])


def _refuse(mol: Mol, text: str, place: str, notes: list[str]) -> None:
    """Errors for metals, radicals and open positions; isotopes are wiped with a note."""
    foreign = sorted({a.GetSymbol() for a in mol.GetAtoms() if a.GetAtomicNum() not in NON_METALS})
    if foreign:
        raise StructureError(
            f"'{_short(text)}' contains {', '.join(foreign)}", place=place, remedy="compounds of metals are not treated"
        )
    if any(a.GetAtomicNum() == 0 for a in mol.GetAtoms()):
        raise StructureError(
            f"'{_short(text)}' has an open position (*)", place=place, remedy="write the whole molecule"
        )
    if any(a.GetNumRadicalElectrons() for a in mol.GetAtoms()):
        raise StructureError(
            f"'{_short(text)}' is a radical", place=place, remedy="only closed-shell molecules are treated"
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


def _neutralise(mol: Mol) -> Mol:
    """Protons back on anions and off cations, where the charge is not part of the bonding (nitro, azide ...)."""
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


@lru_cache(maxsize=16384)
def read_molecule(smiles: str, *, place: str = "") -> Molecule:
    """Read one compound and bring it to the form that the program treats.

    Parameters
    ----------
    smiles : str
        One compound; a common counter-ion or water may stand beside it.
    place : str
        File and row, for the error text.

    Raises
    ------
    StructureError
        As `parse`, and for mixtures, metals, radicals and open positions.

    >>> read_molecule("[O-]c1ccccc1[NH3+]").smiles
    'Nc1ccccc1O'
    >>> read_molecule("[O-][N+](=O)c1ccc(O)cc1").notes
    ()
    """
    from tuner.structure.tautomers import usual_tautomer

    text = str(smiles).strip()
    notes: list[str] = []
    mol, kept = _main_component(parse(text, place=place), text, place, notes)
    _refuse(mol, text, place, notes)
    before = Chem.GetFormalCharge(mol)
    charged = any(a.GetFormalCharge() for a in mol.GetAtoms())
    for atom in mol.GetAtoms():
        atom.SetAtomMapNum(0)
        atom.SetIntProp("_input", kept[atom.GetIdx()])
    try:
        spell_oxides(mol)
        mol = _neutralise(mol)
        mol = usual_tautomer(mol, notes)
        mol = Chem.RemoveHs(mol)
        spelled = Chem.MolToSmiles(mol)
        order = list(mol.GetPropsAsDict(True, True)["_smilesAtomOutputOrder"])
        final = Chem.MolFromSmiles(spelled)
        if final is None or final.GetNumAtoms() != len(order) or Chem.MolToSmiles(final) != spelled:
            final, order = Chem.RenumberAtoms(mol, order), order
    except StructureError:
        raise
    except Exception:  # a charge pattern with no neutral counterpart
        raise StructureError(
            f"'{_short(text)}' has no sound neutral form", place=place, remedy="draw the neutral molecule"
        ) from None
    after = Chem.GetFormalCharge(final)
    if charged and before != after:
        notes.append(f"treated in its largest neutral form {spelled}")
    if after:
        notes.append(f"carries a permanent charge of {after:+d}")
    atoms = tuple(mol.GetAtomWithIdx(k).GetIntProp("_input") for k in order)
    return Molecule(spelled, final, tuple(notes), atoms)


@lru_cache(maxsize=16384)
def properties(smiles: str, *, place: str = "") -> Properties:
    """Molar mass, formula, calculated logP, polar surface, size of a structure as written.

    >>> round(properties("Oc1ccccc1").molar_mass_g_mol, 2), properties("Oc1ccccc1").formula
    (94.11, 'C6H6O')
    """
    mol = parse(smiles, place=place)
    return Properties(
        molar_mass_g_mol=float(Descriptors.MolWt(mol)),
        formula=str(rdMolDescriptors.CalcMolFormula(mol)),
        clogp=float(Crippen.MolLogP(mol)),
        tpsa_a2=float(rdMolDescriptors.CalcTPSA(mol)),
        heavy_atoms=int(mol.GetNumHeavyAtoms()),
        charge=int(Chem.GetFormalCharge(mol)),
    )


def molar_mass(smiles: str, *, place: str = "") -> float:
    """Molar mass of a structure as written [g/mol], natural isotopes; `*` weighs nothing."""
    return properties(smiles, place=place).molar_mass_g_mol


def atom_counts(smiles: str, *, place: str = "") -> dict[str, int]:
    """How many atoms of each element, hydrogen included, sorted by symbol; the input of an oxygen balance.

    >>> atom_counts("Oc1c([N+](=O)[O-])cc([N+](=O)[O-])cc1[N+](=O)[O-]")
    {'C': 6, 'H': 3, 'N': 3, 'O': 7}
    """
    counts: Counter[str] = Counter()
    for atom in parse(smiles, place=place).GetAtoms():
        counts[atom.GetSymbol()] += 1
        counts["H"] += atom.GetTotalNumHs()
    return {k: counts[k] for k in sorted(counts) if counts[k]}


@lru_cache(maxsize=4096)
def read_smarts(smarts: str, *, place: str = "") -> Mol:
    """A search pattern; StructureError where it is none."""
    text = str(smarts).strip()
    try:
        pattern = Chem.MolFromSmarts(text) if text.isascii() else None
    except Exception:  # as in `_syntax_or_valence`
        pattern = None
    if pattern is None or pattern.GetNumAtoms() == 0:
        raise StructureError(
            f"'{_short(text)}' cannot be read as SMARTS", place=place, remedy="check brackets and symbols"
        )
    return pattern


def has_match(smiles: str, smarts: str, *, place: str = "") -> bool:
    """Whether a structure holds a pattern.

    >>> has_match("Oc1ccccc1", "[OX2H1]c"), has_match("COc1ccccc1", "[OX2H1]c")
    (True, False)
    """
    return bool(parse(smiles).HasSubstructMatch(read_smarts(smarts, place=place)))


def matches(smiles: str, smarts: str, *, place: str = "") -> tuple[tuple[int, ...], ...]:
    """All different places of a pattern in a structure, as atom numbers of the string that is given."""
    found = parse(smiles).GetSubstructMatches(read_smarts(smarts, place=place))
    return tuple(tuple(int(k) for k in m) for m in found)
