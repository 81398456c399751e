"""Can this SMILES be read, what is it as the program treats it, and what are its bulk properties?

Two ways in:

- `canonical_smiles` reads anything that is a structure (reagents, salts, metals) and only spells it
  canonically;
- `read_molecule` reads a dye: one molecule, no metal, no radical, at most `MAX_HEAVY_ATOMS` atoms, brought
  to its largest neutral form (protons put back on phenolates, carboxylates ..., taken off ammonium ions;
  nitro groups, N-oxides, quaternary nitrogen keep their charges). What was changed is said in `notes`.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from rdkit import Chem, RDLogger
from rdkit.Chem import Crippen, Descriptors, rdMolDescriptors

from tuner.errors import StructureError
from tuner.structure.neutral import main_component, neutralise, refuse, short, spell_oxides
from tuner.structure.ringchain import usual_ring_form
from tuner.structure.tautomers import usual_tautomer

RDLogger.DisableLog("rdApp.*")  # its messages are many lines long; ours are one line each

Mol = Any
"""An RDKit molecule; opaque outside this room."""

MAX_HEAVY_ATOMS = 150
"""Dyes are smaller; beyond this a string is a polymer, a protein or a mistake."""
MAX_LENGTH = 4000


@dataclass(frozen=True, slots=True)
class Molecule:
    """A molecule as treated: canonical SMILES, the toolkit's object in that atom order, and what was
    changed."""

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
            f"'{short(text)}' cannot be read as SMILES",
            place=place,
            remedy="check brackets, ring-closure digits and atom symbols",
        )
    heavy = sum(a.GetAtomicNum() != 1 for a in mol.GetAtoms())
    if heavy > MAX_HEAVY_ATOMS:
        raise StructureError(
            f"'{short(text)}' has {heavy} heavy atoms",
            place=place,
            remedy=f"at most {MAX_HEAVY_ATOMS} are treated",
        )
    try:
        Chem.SanitizeMol(mol)
        mol = Chem.RemoveHs(mol)
    except Chem.AtomValenceException as error:
        symbol = mol.GetAtomWithIdx(error.cause.GetAtomIdx()).GetSymbol()
        raise StructureError(
            f"'{short(text)}' gives atom {error.cause.GetAtomIdx() + 1} ({symbol}) too many bonds",
            place=place,
            remedy="correct the bonds or write the charge",
        ) from None
    except Exception:  # kekulisation and rarer failures
        raise StructureError(
            f"'{short(text)}' has an aromatic ring that no double bonds fit",
            place=place,
            remedy="a ring nitrogen that carries hydrogen is written [nH]",
        ) from None
    return mol


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
            f"'{short(text)}' is {len(text)} characters long",
            place=place,
            remedy=f"at most {MAX_HEAVY_ATOMS} heavy atoms are treated",
        )
    if any(c.isspace() or not c.isascii() or not c.isprintable() for c in text):
        raise StructureError(
            f"'{short(text)}' cannot be read as SMILES",
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
    """One string per compound as treated: largest neutral form, no stereo, no isotopes; compare measured
    values by it.

    >>> identity_key("[Na+].[O-]c1ccc(/N=N/c2ccccc2)cc1")
    'Oc1ccc(N=Nc2ccccc2)cc1'
    """
    return str(Chem.MolToSmiles(flat(read_molecule(smiles, place=place).mol)))


def flat(mol: Mol) -> Mol:
    """A copy without stereo marks."""
    copy = Chem.Mol(mol)
    Chem.RemoveStereochemistry(copy)
    return copy


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
    text = str(smiles).strip()
    notes: list[str] = []
    mol, kept = main_component(parse(text, place=place), text, place, notes)
    refuse(mol, text, place, notes)
    before = _charge_marks(mol)
    for atom in mol.GetAtoms():
        atom.SetAtomMapNum(0)
        atom.SetIntProp("_input", kept[atom.GetIdx()])
    try:
        spell_oxides(mol)
        mol = usual_tautomer(neutralise(mol), notes)
        mol = Chem.RemoveHs(usual_ring_form(mol, notes))
        spelled = str(Chem.MolToSmiles(mol))
        order = list(mol.GetPropsAsDict(True, True)["_smilesAtomOutputOrder"])
        final = Chem.RenumberAtoms(mol, order)
    except (
        Exception
    ):  # a charge pattern with no sound neutral counterpart; the toolkit raises unrelated types
        raise StructureError(
            f"'{short(text)}' has no sound neutral form", place=place, remedy="draw the neutral molecule"
        ) from None
    if _charge_marks(final) != before:
        notes.append(f"treated in its largest neutral form {spelled}")
    charge = Chem.GetFormalCharge(final)
    if charge:
        notes.append(f"carries a permanent charge of {charge:+d}")
    return Molecule(spelled, final, tuple(notes), tuple(a.GetIntProp("_input") for a in final.GetAtoms()))


def _charge_marks(mol: Mol) -> int:
    """Number of charged atoms, by which a change of form is noticed."""
    return sum(a.GetFormalCharge() != 0 for a in mol.GetAtoms())


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
            f"'{short(text)}' cannot be read as SMARTS", place=place, remedy="check brackets and symbols"
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
