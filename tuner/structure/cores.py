"""Where are the positions of a core, and how does each stand to the reporting group?

Rules
-----
- The reporting atom is the phenol oxygen or the aniline nitrogen on an aromatic carbon: the one that
  `reporting_smarts` picks (matched on the core as written, open positions are [#0]), else the only one of
  the kind that the series names (amine series end in `anilinium`). Two that the symmetry of the bare core
  exchanges count as one; two different ones are an error.
- The scaffold is "phenol" or "aniline" where the reporting ring is a benzene ring that shares no atom with
  another ring; what the core carries there is a fixed slot. A fused reporting ring, a reporting nitrogen
  in a ring (N-phenylpiperidine, indoline), or a core with a measured parent whose symmetry exchanges two
  reporting groups (sulfonephthaleins, bisphenol dyes), is a scaffold of its own name.
- Relations on the reporting ring follow from the distance to the ring atom that carries the reporting
  group: 1 ortho, 2 meta, 3 para. Open valences of the reporting nitrogen are "nitrogen"; all else is
  "remote".
- Columns: ortho, meta, para, nitrogen by relation ("para" becomes the para-minus constant at evaluation for
  groups that accept by resonance); remote positions see `transmission`.
- Rings are numbered 0 for the reporting ring, 1, 2 ... outwards; -1 for positions on no ring (chains).
  Positions on the reporting nitrogen have ring 0.
- Where the symmetry exchanges reporting groups, equivalent positions share one transmission, the mean of
  the two.
- What the author gives in `given_positions` wins over all of this; given for one of several positions that
  symmetry exchanges (twin arms), it holds for all of them.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from rdkit import Chem
from rdkit.Chem import Descriptors

from tuner.errors import StructureError
from tuner.library.records import Core
from tuner.structure.molecule import flat, parse, read_smarts
from tuner.structure.positions import (
    Frame,
    all_slots,
    has_twin,
    is_lone_benzene,
    label_order,
    permutations,
    ring_bonds_on_nitrogen,
)
from tuner.structure.records import PreparedCore

Mol = Any

MAX_SELF_MATCHES = 5000
PHENOL_OXYGEN = "[OX2H1]-c"
ANILINE_NITROGEN = "[NX3;+0;!$(N-[#6]=[O,S,N]);!$(N-[!#6;!#1;!#0])]-c"


@dataclass(frozen=True)
class CoreForm:
    """A prepared core with the toolkit objects that matching and assembly need.

    Atom numbers are those of `bare`, the core without its open positions (hydrogen there).
    """

    core: Core
    prepared: PreparedCore
    bare: Mol
    reporting: int
    ring: tuple[int, ...]  # reporting ring, from the atom that carries the reporting group
    open_atoms: Mapping[str, int]  # open label -> atom that carries it
    fixed_atoms: Mapping[str, frozenset[int]]  # fixed label -> atoms of the fixed group
    template: str  # SMILES with `[*:k]`, k = index of the open label


def _place(core: Core) -> str:
    return f"core '{core.name}'"


def _open_positions(core: Core, mol: Mol) -> dict[str, int]:
    """Open label -> number of the dummy atom, in locant order."""
    found: dict[str, int] = {}
    for atom in mol.GetAtoms():
        if atom.GetAtomicNum():
            continue
        number = atom.GetAtomMapNum() or atom.GetIsotope()
        label = core.labels.get(number, str(number))
        if not number:
            raise StructureError(
                "an open position has no number", place=_place(core), remedy="write [*:2], [*:3] ..."
            )
        if label in found:
            raise StructureError(
                f"position {label} stands twice", place=_place(core), remedy="number every open position once"
            )
        bonds = [b.GetBondType() for b in atom.GetBonds()]
        if bonds != [Chem.BondType.SINGLE]:
            raise StructureError(
                f"position {label} is not held by one single bond",
                place=_place(core),
                remedy="write (...[*:2])",
            )
        found[label] = atom.GetIdx()
    unknown = sorted(set(core.given_positions) - set(found))
    if unknown:
        raise StructureError(
            f"positions {', '.join(unknown)} are described but not open",
            place=_place(core),
            remedy=f"open positions are {', '.join(sorted(found, key=label_order)) or 'none'}",
        )
    return {label: found[label] for label in sorted(found, key=label_order)}


def _bare(mol: Mol, dummies: Mapping[str, int]) -> tuple[Mol, dict[str, int]]:
    """The core with hydrogen at every open position, and the carrier atom of each label in it."""
    work = Chem.RWMol(mol)
    carriers = {label: work.GetAtomWithIdx(d).GetNeighbors()[0].GetIdx() for label, d in dummies.items()}
    for carrier in carriers.values():
        atom = work.GetAtomWithIdx(carrier)
        if atom.GetNoImplicit() or (atom.GetIsAromatic() and atom.GetAtomicNum() != 6):
            atom.SetNumExplicitHs(atom.GetNumExplicitHs() + 1)
    gone = sorted(dummies.values())
    for dummy in reversed(gone):
        work.RemoveAtom(dummy)
    shift = {label: c - sum(d < c for d in gone) for label, c in carriers.items()}
    bare = work.GetMol()
    Chem.SanitizeMol(bare)
    return flat(bare), shift


def _candidates(core: Core, mol: Mol) -> list[int]:
    """Atoms that could report, by the author's pattern or by the series; numbers without the open
    positions."""
    if core.reporting_smarts:
        pattern = read_smarts(core.reporting_smarts, place=f"{_place(core)}, reporting_smarts")
    else:
        pattern = read_smarts(ANILINE_NITROGEN if _is_amine(core) else PHENOL_OXYGEN)
    dummies = [a.GetIdx() for a in mol.GetAtoms() if a.GetAtomicNum() == 0]
    found = {m[0] for m in mol.GetSubstructMatches(pattern)} - set(dummies)
    return sorted(k - sum(d < k for d in dummies) for k in found)


def _is_amine(core: Core) -> bool:
    """Whether the series is one of amines."""
    return "anil" in core.series or "amin" in core.series


def _reporting(
    core: Core, mol: Mol, bare: Mol, open_atoms: Mapping[str, int], automorphisms: tuple[tuple[int, ...], ...]
) -> tuple[int, int]:
    """The reporting atom and the aromatic carbon that carries it (numbers of `bare`)."""
    found = _candidates(core, mol)
    if not found:
        kind = "amino nitrogen" if _is_amine(core) else "hydroxyl oxygen"
        raise StructureError(
            f"no reporting {kind} on an aromatic carbon was found",
            place=_place(core),
            remedy="correct `smiles`, `series` or `reporting_smarts`",
        )
    carried = sorted(open_atoms.values())
    alike = [m for m in automorphisms if sorted(m[a] for a in carried) == carried]
    if not set(found) <= {m[found[0]] for m in alike}:
        raise StructureError(
            f"{len(found)} different groups could report",
            place=_place(core),
            remedy="pick one with reporting_smarts (first atom of the pattern; an open position is [#0])",
        )
    atom = bare.GetAtomWithIdx(found[0])
    carriers = [n.GetIdx() for n in atom.GetNeighbors() if n.GetIsAromatic()]
    carriers.sort(key=lambda c: (-_open_around(bare, c, carried), c))
    if not carriers or atom.GetAtomicNum() not in (7, 8):
        raise StructureError(
            "the reporting atom is no O or N on an aromatic carbon",
            place=_place(core),
            remedy="correct reporting_smarts",
        )
    return found[0], carriers[0]


def _open_around(bare: Mol, carrier: int, carried: list[int]) -> int:
    """How many open positions lie on the rings of a carrier: the open ring of a diarylamine reports."""
    return sum(a in ring for ring in bare.GetRingInfo().AtomRings() if carrier in ring for a in carried)


def _reporting_ring(bare: Mol, ipso: int, place: str) -> tuple[int, ...]:
    """The six-membered aromatic ring through an atom, listed from that atom on."""
    rings = [r for r in bare.GetRingInfo().AtomRings() if ipso in r and len(r) == 6]
    rings = [r for r in rings if all(bare.GetAtomWithIdx(k).GetIsAromatic() for k in r)]
    if not rings:
        raise StructureError(
            "the reporting group is not on a six-membered aromatic ring",
            place=place,
            remedy="correct `smiles`",
        )
    carbons = [sum(bare.GetAtomWithIdx(k).GetAtomicNum() == 6 for k in r) for r in rings]
    ring = rings[carbons.index(max(carbons))]
    at = ring.index(ipso)
    return tuple(ring[at:] + ring[:at])


def _self_matches(bare: Mol) -> tuple[tuple[int, ...], ...]:
    """Automorphisms of the bare core as atom maps, identity first."""
    # a query made of the molecule itself compares no hydrogen counts; as all atoms are matched, that suffices
    found = bare.GetSubstructMatches(bare, uniquify=False, maxMatches=MAX_SELF_MATCHES)
    identity = tuple(range(bare.GetNumAtoms()))
    return (identity, *sorted({tuple(m) for m in found} - {identity}))


def _template(mol: Mol, dummies: Mapping[str, int], reporting_in_bare: int) -> str:
    """SMILES of the core rooted at the reporting atom, with `[*:k]` at open position k."""
    work = Chem.RWMol(flat(mol))
    for k, dummy in enumerate(dummies.values()):
        work.GetAtomWithIdx(dummy).SetIsotope(0)
        work.GetAtomWithIdx(dummy).SetAtomMapNum(k + 1)
    root = reporting_in_bare
    for dummy in sorted(dummies.values()):
        root += dummy <= root
    return str(Chem.MolToSmiles(work, rootedAtAtom=root))


def form_of(core: Core) -> CoreForm:
    """Prepare a core, toolkit objects included; kept in memory by the core's own text.

    Raises
    ------
    StructureError
        Names the core: bad SMILES, several components, unnumbered or doubled positions, no reporting group
        or more than one, reporting group not on a six-membered aromatic ring.
    """
    key = repr(core)
    if key not in _FORMS:
        _FORMS[key] = _prepare(core)
    return _FORMS[key]


_FORMS: dict[str, CoreForm] = {}


def _prepare(core: Core) -> CoreForm:
    mol = parse(core.smiles, place=_place(core))
    if len(Chem.GetMolFrags(mol)) > 1:
        raise StructureError("a core is one molecule", place=_place(core), remedy="take the counter-ion out")
    dummies = _open_positions(core, mol)
    bare, open_atoms = _bare(mol, dummies)
    automorphisms = _self_matches(bare)
    reporting, ipso = _reporting(core, mol, bare, open_atoms, automorphisms)
    ring = _reporting_ring(bare, ipso, _place(core))
    frame = Frame(core, bare, open_atoms, reporting, ipso, ring, automorphisms)
    ring_on_nitrogen = ring_bonds_on_nitrogen(bare, reporting, ipso)
    own = not is_lone_benzene(bare, ring) or ring_on_nitrogen > 0
    own = own or (has_twin(frame) and core.parent_pka.known)
    slots, fixed_atoms = all_slots(frame, own)
    labels = list(open_atoms)
    kind = "aniline" if bare.GetAtomWithIdx(reporting).GetAtomicNum() == 7 else "phenol"
    prepared = PreparedCore(
        name=core.name,
        scaffold=core.name if own else kind,
        series=core.series,
        slots=tuple(slots),
        open_labels=tuple(labels),
        symmetry=permutations(labels, open_atoms, automorphisms),
        bare_mass_g_mol=float(Descriptors.MolWt(bare)),
        bare_charge=int(Chem.GetFormalCharge(bare)),
        ring_on_nitrogen=ring_on_nitrogen,
    )
    return CoreForm(
        core=core,
        prepared=prepared,
        bare=bare,
        reporting=reporting,
        ring=ring,
        open_atoms=open_atoms,
        fixed_atoms=fixed_atoms,
        template=_template(mol, dummies, reporting),
    )


def prepare_core(core: Core) -> PreparedCore:
    """Work out every position of a core from its structure (see the rules at the head of this module).

    >>> core = Core("x", "4-nitrophenol", "Oc1c([*:2])cc([N+](=O)[O-])cc1[*:6]", "phenol")
    >>> prepared = prepare_core(core)
    >>> prepared.scaffold, prepared.open_labels, [(s.label, s.relation, s.fixed) for s in prepared.slots]
    ('phenol', ('2', '6'), [('2', 'ortho', ''), ('6', 'ortho', ''), ('4', 'para', '*[N+](=O)[O-]')])
    >>> prepared.symmetry
    ((0, 1), (1, 0))
    """
    return form_of(core).prepared
