"""Where are the positions of a core, and how does each stand to the reporting group?

Rules
-----
- The reporting atom is the phenol oxygen or the aniline nitrogen on an aromatic carbon: the one that
  `reporting_smarts` picks, else the only one of the kind that the series names (amine series end in `anilinium`). Two
  that the symmetry of the bare core exchanges count as one; two different ones are an error.
- The scaffold is "phenol" or "aniline" where the reporting ring is a benzene ring that shares no atom with another
  ring; what the core carries there is a fixed slot. A fused reporting ring, or a core with a measured parent whose
  symmetry exchanges two reporting groups (sulfonephthaleins, bisphenol dyes), is a scaffold of its own name.
- Relations on the reporting ring follow from the distance to the ring atom that carries the reporting group: 1 ortho,
  2 meta, 3 para. Open valences of the reporting nitrogen are "nitrogen"; all else is "remote".
- Columns: ortho, meta, para, nitrogen by relation ("para" becomes the para-minus constant at evaluation for groups
  that accept by resonance); remote positions see `transmission`.
- Rings are numbered 0 for the reporting ring, 1, 2 ... outwards; -1 for positions on no ring (chains). Positions on
  the reporting nitrogen have ring 0.
- Where the symmetry exchanges reporting groups, equivalent positions share one transmission, the mean of the two.
- What the author gives in `given_positions` wins over all of this.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any

from rdkit import Chem
from rdkit.Chem import Descriptors

from tuner.errors import StructureError
from tuner.library.records import Core, Position
from tuner.structure.groups import spell_group
from tuner.structure.molecule import flat, parse
from tuner.structure.records import PreparedCore, Slot
from tuner.structure.transmission import remote_transmission

Mol = Any

MAX_SELF_MATCHES = 5000
PHENOL_OXYGEN = "[OX2H1]-c"
ANILINE_NITROGEN = "[NX3;+0;!$(N-[#6]=[O,S,N]);!$(N-[!#6;!#1])]-c"
RELATION_BY_DISTANCE = {1: "ortho", 2: "meta", 3: "para"}


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


@dataclass(frozen=True)
class _Frame:
    """Working data of one core while its slots are found."""

    core: Core
    bare: Mol
    open_atoms: dict[str, int]
    reporting: int
    ipso: int
    ring: tuple[int, ...]
    automorphisms: tuple[tuple[int, ...], ...]


def label_order(label: str) -> tuple[int, int, int, str]:
    """Sort key of locants: unprimed before primed, numbers by size, nitrogen last.

    >>> sorted(["N", "2'", "10", "3", "2"], key=label_order)
    ['2', '3', '10', "2'", 'N']
    """
    found = re.match(r"(\d+)", label)
    return (0 if found else 1, label.count("'"), int(found.group(1)) if found else 0, label)


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
                f"position {label} is not held by one single bond", place=_place(core), remedy="write (...[*:2])"
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


def _candidates(core: Core, bare: Mol) -> list[int]:
    """Atoms that could report, by the series or by the author's pattern."""
    if core.reporting_smarts:
        from tuner.structure.molecule import read_smarts

        pattern = read_smarts(core.reporting_smarts, place=f"{_place(core)}, reporting_smarts")
        return sorted({m[0] for m in bare.GetSubstructMatches(pattern)})
    first = ANILINE_NITROGEN if "anil" in core.series or "amin" in core.series else PHENOL_OXYGEN
    return sorted({m[0] for m in bare.GetSubstructMatches(Chem.MolFromSmarts(first))})


def _reporting(core: Core, bare: Mol, automorphisms: tuple[tuple[int, ...], ...]) -> tuple[int, int]:
    """The reporting atom and the aromatic carbon that carries it."""
    found = _candidates(core, bare)
    kind = "amino nitrogen" if "anil" in core.series else "hydroxyl oxygen"
    if not found:
        raise StructureError(
            f"no reporting {kind} on an aromatic carbon was found",
            place=_place(core),
            remedy="correct `smiles`, `series` or `reporting_smarts`",
        )
    orbit = {perm[found[0]] for perm in automorphisms}
    if not set(found) <= orbit:
        raise StructureError(
            f"{len(found)} different groups could report",
            place=_place(core),
            remedy="pick one with reporting_smarts (first atom of the pattern)",
        )
    atom = bare.GetAtomWithIdx(found[0])
    carriers = sorted(n.GetIdx() for n in atom.GetNeighbors() if n.GetIsAromatic())
    if not carriers or atom.GetAtomicNum() not in (7, 8):
        raise StructureError(
            "the reporting atom is no O or N on an aromatic carbon",
            place=_place(core),
            remedy="correct reporting_smarts",
        )
    return found[0], carriers[0]


def _reporting_ring(bare: Mol, ipso: int, place: str) -> tuple[int, ...]:
    """The six-membered aromatic ring through an atom, listed from that atom on."""
    rings = [r for r in bare.GetRingInfo().AtomRings() if ipso in r and len(r) == 6]
    rings = [r for r in rings if all(bare.GetAtomWithIdx(k).GetIsAromatic() for k in r)]
    if not rings:
        raise StructureError(
            "the reporting group is not on a six-membered aromatic ring", place=place, remedy="correct `smiles`"
        )
    carbons = [sum(bare.GetAtomWithIdx(k).GetAtomicNum() == 6 for k in r) for r in rings]
    ring = rings[carbons.index(max(carbons))]
    at = ring.index(ipso)
    return tuple(ring[at:] + ring[:at])


def is_lone_benzene(mol: Mol, ring: tuple[int, ...]) -> bool:
    """Whether a ring is all-carbon and shares no atom with another ring."""
    info = mol.GetRingInfo()
    return all(mol.GetAtomWithIdx(k).GetAtomicNum() == 6 and info.NumAtomRings(k) == 1 for k in ring)


def _self_matches(bare: Mol) -> tuple[tuple[int, ...], ...]:
    """Automorphisms of the bare core as atom maps, identity first."""
    # a query made of the molecule itself compares elements, bonds and aromaticity but no hydrogen counts; on the same
    # molecule that is enough, since all atoms are matched
    found = bare.GetSubstructMatches(bare, uniquify=False, maxMatches=MAX_SELF_MATCHES)
    identity = tuple(range(bare.GetNumAtoms()))
    return (identity, *sorted({tuple(m) for m in found} - {identity}))


def _permutations(labels: list[str], atoms: Mapping[str, int], maps: tuple[tuple[int, ...], ...]) -> tuple[
    tuple[int, ...], ...
]:
    """Permutations of the open positions that automorphisms and exchanges on one atom give, identity first."""
    at: dict[int, list[int]] = {}
    for index, label in enumerate(labels):
        at.setdefault(atoms[label], []).append(index)
    found = {tuple(range(len(labels)))}
    for mapping in maps:
        if any(len(at.get(mapping[a], ())) != len(members) for a, members in at.items()):
            continue
        perm = [0] * len(labels)
        for a, members in at.items():
            for here, there in zip(members, at[mapping[a]], strict=True):
                perm[here] = there
        found.add(tuple(perm))
    swaps = []
    for members in at.values():
        for i, j in zip(members, members[1:], strict=False):
            swap = list(range(len(labels)))
            swap[i], swap[j] = j, i
            swaps.append(tuple(swap))
    while True:  # close under the exchanges
        more = {tuple(p[k] for k in s) for p in found for s in swaps} - found
        if not more:
            break
        found |= more
    identity = tuple(range(len(labels)))
    return (identity, *sorted(found - {identity}))


def _relation(frame: _Frame, atom: int) -> str:
    """How an atom stands to the reporting group."""
    if atom == frame.reporting:
        return "nitrogen"
    if atom in frame.ring:
        distance = min(frame.ring.index(atom), 6 - frame.ring.index(atom))
        return RELATION_BY_DISTANCE[distance]
    return "remote"


def _ring_numbers(frame: _Frame) -> dict[int, int]:
    """Atom -> ring number: 0 the reporting ring, then outwards by distance; chain atoms are absent."""
    rings = [tuple(r) for r in frame.bare.GetRingInfo().AtomRings()]
    rest = [r for r in rings if set(r) != set(frame.ring)]
    near = Chem.GetDistanceMatrix(frame.bare)[frame.reporting]
    rest.sort(key=lambda r: (min(near[k] for k in r), sum(near[k] for k in r), min(r)))
    numbers: dict[int, int] = {}
    for number, ring in enumerate([frame.ring, *rest]):
        for atom in ring:
            numbers.setdefault(atom, number)
    return numbers


def _ring_neighbours(frame: _Frame, atoms: Mapping[str, int], label: str) -> tuple[str, ...]:
    """Labels of slots on adjacent ring atoms."""
    here = frame.bare.GetAtomWithIdx(atoms[label])
    if not here.IsInRing():
        return ()
    near = {b.GetOtherAtomIdx(here.GetIdx()) for b in here.GetBonds() if b.IsInRing()}
    return tuple(sorted((other for other, a in atoms.items() if a in near), key=label_order))


def _open_slot(frame: _Frame, label: str, rings: Mapping[int, int]) -> Slot:
    """One open position, worked out and then overruled by what the author gave."""
    atom = frame.open_atoms[label]
    relation = _relation(frame, atom)
    tau, sd, column = 1.0, 0.0, relation
    if relation == "remote":
        tau, sd, column = remote_transmission(frame.bare, atom, frame.reporting, frame.ipso, frame.ring)
    ring = 0 if relation == "nitrogen" else rings.get(atom, -1)
    slot = Slot(label, relation, tau, sd, column, ring, ())
    given = frame.core.given_positions.get(label)
    return _given(slot, given) if given is not None else slot


def _given(slot: Slot, given: Position) -> Slot:
    """What the core's author says about a position."""
    return replace(
        slot,
        relation=given.relation or slot.relation,
        transmission=given.transmission,
        transmission_sd=given.transmission_sd,
        column=given.column or (given.relation if given.relation not in ("", "remote") else slot.column),
    )


def _share_between_twins(frame: _Frame, slots: list[Slot]) -> list[Slot]:
    """Positions that symmetry exchanges get one relation and the mean transmission (given ones stay)."""
    by_atom: dict[int, list[Slot]] = {}
    for slot in slots:
        by_atom.setdefault(frame.open_atoms[slot.label], []).append(slot)
    shared = []
    for slot in slots:
        orbit = sorted({m[frame.open_atoms[slot.label]] for m in frame.automorphisms})
        family = [s for a in orbit for s in by_atom.get(a, [])]
        if slot.label in frame.core.given_positions or len(family) < 2:
            shared.append(slot)
            continue
        lead = next((s for s in family if s.relation != "remote"), family[0])
        mean = sum(s.transmission for s in family) / len(family)
        error = max(s.transmission_sd for s in family)
        shared.append(replace(slot, relation=lead.relation, column=lead.column, transmission=mean, transmission_sd=error))
    return shared


def _ring_locants(frame: _Frame) -> dict[int, str]:
    """Locants of all atoms of a lone reporting ring, guessed from those of its open positions."""
    ring = frame.ring
    known = {frame.ring.index(a): label for label, a in frame.open_atoms.items() if a in ring}
    for step in (1, -1):
        for start in range(1, 7):  # locant of the reporting carbon
            names = {(step * k) % 6: (start - 1 + k) % 6 + 1 for k in range(6)}
            tails = {re.sub(r"^\d+", "", label) for label in known.values()}
            if len(tails) > 1:
                break
            tail = next(iter(tails), "")
            if all(label == f"{names[k]}{tail}" for k, label in known.items()):
                return {ring[k]: f"{name}{tail}" for k, name in names.items()}
    taken = set(frame.open_atoms)
    plain = {k: f"{k + 1}" for k in range(1, 6)}
    return {ring[k]: plain[k] if plain[k] not in taken else f"r{plain[k]}" for k in range(1, 6)}


def _branch(mol: Mol, root: int, entry: int) -> frozenset[int]:
    """Atoms that are reached from `entry` without passing `root`."""
    seen, queue = {entry}, [entry]
    while queue:
        for near in mol.GetAtomWithIdx(queue.pop()).GetNeighbors():
            if near.GetIdx() != root and near.GetIdx() not in seen:
                seen.add(near.GetIdx())
                queue.append(near.GetIdx())
    return frozenset(seen)


def branch_smiles(mol: Mol, root: int, entry: int) -> str:
    """Canonical group that hangs by a single bond root-entry on an acyclic link."""
    bond = mol.GetBondBetweenAtoms(root, entry).GetIdx()
    frags: list[tuple[int, ...]] = []
    parts = Chem.GetMolFrags(
        Chem.FragmentOnBonds(mol, [bond], dummyLabels=[(0, 0)]), asMols=True, fragsMolAtomMapping=frags
    )
    return spell_group(next(p for p, atoms in zip(parts, frags, strict=True) if entry in atoms))


def _fixed_slots(frame: _Frame) -> tuple[list[Slot], dict[str, frozenset[int]]]:
    """What the core itself carries on a lone reporting ring and on the reporting nitrogen."""
    locants = _ring_locants(frame)
    slots: list[Slot] = []
    atoms: dict[str, frozenset[int]] = {}
    nitrogen = [n for n in ("N", "N'") if n not in frame.open_atoms]
    for root in (*frame.ring[1:], frame.reporting):
        for near in sorted(n.GetIdx() for n in frame.bare.GetAtomWithIdx(root).GetNeighbors()):
            if near in frame.ring:
                continue
            label = nitrogen.pop(0) if root == frame.reporting else locants[root]
            relation = _relation(frame, root)
            smiles = branch_smiles(frame.bare, root, near)
            slots.append(Slot(label, relation, 1.0, 0.0, relation, 0, (), fixed=smiles))
            atoms[label] = _branch(frame.bare, root, near)
    return slots, atoms


def _has_twin(frame: _Frame) -> bool:
    """Whether the symmetry of the bare core carries the reporting atom to another."""
    return any(m[frame.reporting] != frame.reporting for m in frame.automorphisms)


def _slots(frame: _Frame, own_scaffold: bool) -> tuple[list[Slot], dict[str, frozenset[int]]]:
    """All slots of a core with their neighbours, open ones first."""
    rings = _ring_numbers(frame)
    slots = [_open_slot(frame, label, rings) for label in frame.open_atoms]
    fixed: list[Slot] = []
    fixed_atoms: dict[str, frozenset[int]] = {}
    if own_scaffold:
        if _has_twin(frame):
            slots = _share_between_twins(frame, slots)
    else:
        fixed, fixed_atoms = _fixed_slots(frame)
    carriers = dict(frame.open_atoms)
    roots = {k: label for k, label in _ring_locants(frame).items()} if not own_scaffold else {}
    carriers.update({label: a for a, label in roots.items() if label in fixed_atoms})
    done = []
    for slot in (*slots, *fixed):
        near = _ring_neighbours(frame, carriers, slot.label) if slot.label in carriers else ()
        done.append(replace(slot, neighbours=near))
    return done, fixed_atoms


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
        Names the core: bad SMILES, several components, unnumbered or doubled positions, no reporting group or more
        than one, reporting group not on a six-membered aromatic ring.
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
    reporting, ipso = _reporting(core, bare, automorphisms)
    ring = _reporting_ring(bare, ipso, _place(core))
    frame = _Frame(core, bare, open_atoms, reporting, ipso, ring, automorphisms)
    own = not is_lone_benzene(bare, ring) or (_has_twin(frame) and core.parent_pka.known)
    slots, fixed_atoms = _slots(frame, own)
    labels = list(open_atoms)
    kind = "aniline" if bare.GetAtomWithIdx(reporting).GetAtomicNum() == 7 else "phenol"
    prepared = PreparedCore(
        name=core.name,
        scaffold=core.name if own else kind,
        series=core.series,
        slots=tuple(slots),
        open_labels=tuple(labels),
        symmetry=_permutations(labels, open_atoms, automorphisms),
        bare_mass_g_mol=float(Descriptors.MolWt(bare)),
        bare_charge=int(Chem.GetFormalCharge(bare)),
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
