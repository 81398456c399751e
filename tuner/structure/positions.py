"""How does each position of a core stand to the reporting group, and which patterns are the same?

The rules stand at the head of `cores`; here they are carried out, one function for each.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import Any

from rdkit import Chem

from tuner.errors import StructureError
from tuner.library.records import Core, Position
from tuner.structure.groups import spell_group
from tuner.structure.records import Slot
from tuner.structure.transmission import remote_transmission

Mol = Any

NITROGEN = 7
RELATION_BY_DISTANCE = {1: "ortho", 2: "meta", 3: "para"}


@dataclass(frozen=True)
class Frame:
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


def is_lone_benzene(mol: Mol, ring: tuple[int, ...]) -> bool:
    """Whether a ring is all-carbon and shares no atom with another ring."""
    info = mol.GetRingInfo()
    return all(mol.GetAtomWithIdx(k).GetAtomicNum() == 6 and info.NumAtomRings(k) == 1 for k in ring)


def ring_bonds_on_nitrogen(mol: Mol, reporting: int, ipso: int) -> int:
    """Bonds of the reporting nitrogen, other than the one to the reporting ring, that lie in a ring."""
    atom = mol.GetAtomWithIdx(reporting)
    if atom.GetAtomicNum() != NITROGEN:
        return 0
    return sum(b.IsInRing() and b.GetOtherAtomIdx(reporting) != ipso for b in atom.GetBonds())


def permutations(
    labels: list[str], atoms: Mapping[str, int], maps: tuple[tuple[int, ...], ...]
) -> tuple[tuple[int, ...], ...]:
    """Permutations of the open positions that automorphisms and exchanges on one atom give, identity
    first."""
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
        for i, j in pairwise(members):
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


def _relation(frame: Frame, atom: int) -> str:
    """How an atom stands to the reporting group."""
    if atom == frame.reporting:
        return "nitrogen"
    if atom in frame.ring:
        distance = min(frame.ring.index(atom), 6 - frame.ring.index(atom))
        return RELATION_BY_DISTANCE[distance]
    return "remote"


def _ring_numbers(frame: Frame) -> dict[int, int]:
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


def _ring_neighbours(frame: Frame, atoms: Mapping[str, int], label: str) -> tuple[str, ...]:
    """Labels of slots on adjacent ring atoms."""
    here = frame.bare.GetAtomWithIdx(atoms[label])
    if not here.IsInRing():
        return ()
    near = {b.GetOtherAtomIdx(here.GetIdx()) for b in here.GetBonds() if b.IsInRing()}
    return tuple(sorted((other for other, a in atoms.items() if a in near), key=label_order))


_Standing = tuple[str, float, float, str]
"""Relation, transmission, its error, column."""


def _standing(frame: Frame, atom: int) -> _Standing:
    """How a position on an atom stands to the reporting group, by the structure alone."""
    relation = _relation(frame, atom)
    if relation == "remote":
        return (relation, *remote_transmission(frame.bare, atom, frame.reporting, frame.ipso, frame.ring))
    return relation, 1.0, 0.0, relation


def _standing_of_twins(frame: Frame, atom: int) -> _Standing:
    """The mean over the atoms that symmetry exchanges; relation and column are those next to the reporting
    group."""
    orbit = sorted({m[atom] for m in frame.automorphisms})
    family = [_standing(frame, a) for a in orbit]
    lead = next((f for f in family if f[0] != "remote"), family[0])
    return lead[0], sum(f[1] for f in family) / len(family), max(f[2] for f in family), lead[3]


def _open_slot(frame: Frame, label: str, rings: Mapping[int, int], shared: bool) -> Slot:
    """One open position, worked out and then overruled by what the author gave."""
    atom = frame.open_atoms[label]
    relation, tau, sd, column = (_standing_of_twins if shared else _standing)(frame, atom)
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


def _like_its_twins(frame: Frame, slot: Slot, slots: list[Slot]) -> Slot:
    """What the author gave for one of several positions that symmetry exchanges holds for all of them."""
    orbit = {m[frame.open_atoms[slot.label]] for m in frame.automorphisms}
    family = [s for s in slots if frame.open_atoms[s.label] in orbit]
    given = [s for s in family if s.label in frame.core.given_positions]
    if not given:
        return slot
    lead = given[0]
    for other in given[1:]:
        if (other.transmission, other.column) != (lead.transmission, lead.column):
            raise StructureError(
                f"positions {lead.label} and {other.label} are equal by symmetry but described differently",
                place=f"core '{frame.core.name}'",
                remedy="give both the same transmission and column",
            )
    relation = next((s.relation for s in family if s.relation != "remote"), slot.relation)
    error = max(s.transmission_sd for s in given)
    return replace(
        slot, relation=relation, transmission=lead.transmission, transmission_sd=error, column=lead.column
    )


def _ring_locants(frame: Frame) -> dict[int, str]:
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


def _fixed_slots(frame: Frame) -> tuple[list[Slot], dict[str, frozenset[int]]]:
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


def has_twin(frame: Frame) -> bool:
    """Whether the symmetry of the bare core carries the reporting atom to another."""
    return any(m[frame.reporting] != frame.reporting for m in frame.automorphisms)


def all_slots(frame: Frame, own_scaffold: bool) -> tuple[list[Slot], dict[str, frozenset[int]]]:
    """All slots of a core with their neighbours, open ones first."""
    rings = _ring_numbers(frame)
    shared = own_scaffold and has_twin(frame)
    slots = [_open_slot(frame, label, rings, shared) for label in frame.open_atoms]
    if shared:
        slots = [_like_its_twins(frame, slot, slots) for slot in slots]
    fixed: list[Slot] = []
    fixed_atoms: dict[str, frozenset[int]] = {}
    if not own_scaffold:
        fixed, fixed_atoms = _fixed_slots(frame)
    carriers = dict(frame.open_atoms)
    roots = {} if own_scaffold else _ring_locants(frame)
    carriers.update({label: a for a, label in roots.items() if label in fixed_atoms})
    done = []
    for slot in (*slots, *fixed):
        near = _ring_neighbours(frame, carriers, slot.label) if slot.label in carriers else ()
        done.append(replace(slot, neighbours=near))
    return done, fixed_atoms
