"""Does this core fit this molecule, and under which labels do its groups stand?

A core fits where its atoms match one to one and everything else hangs on open positions. Of all ways to lay
it on, the lowest labeling is taken (see `dissect`, rules 4 and 5).
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from rdkit import Chem

from tuner.library.records import Core
from tuner.structure.cores import CoreForm, form_of
from tuner.structure.cutting import CutGroup, cut_groups
from tuner.structure.groups import HYDROGEN_GROUP, canonical_group
from tuner.structure.molecule import flat
from tuner.structure.positions import label_order
from tuner.structure.records import PlacedGroup

Mol = Any

MAX_CORE_MATCHES = 2000

_ACCEPTOR = "[$([N+](=O)[O-]),$(N=O),$(C#N),$([CX3]=[OX1]),$(S(=O)=O),$([NX2]=[NX2]),$(C(F)(F)F)]"


@dataclass(frozen=True)
class Labeling:
    """One way to see a site as a core."""

    groups: tuple[PlacedGroup, ...]
    core: frozenset[int]  # atoms of the molecule that the core takes
    opened: int  # number of groups that opened rings gave
    opened_here: int  # those on the reporting ring or the reporting atom


def best_labeling(mol: Mol, reporting: int, form: CoreForm) -> Labeling | None:
    """The lowest labeling of one core on one site (rules 4 and 5), None where the core does not fit."""
    best: tuple[Any, Labeling] | None = None
    cuts: dict[frozenset[int], list[CutGroup]] = {}
    for match in mol.GetSubstructMatches(form.bare, uniquify=False, maxMatches=MAX_CORE_MATCHES):
        if match[form.reporting] != reporting or not _fits(mol, form, match):
            continue
        core = frozenset(match)
        if core not in cuts:
            cuts[core] = cut_groups(mol, core)
        placed = _place(form, match, cuts[core])
        if placed is None:
            continue
        key = (_ring_key(mol, [match[k] for k in form.ring], core), _labeling_key(form, placed))
        if best is None or key < best[0]:
            here = {match[k] for k in form.ring} | {reporting}
            opened = [c.root in here for c in cuts[core] if c.opened]
            best = (key, Labeling(placed, core, len(opened), sum(opened)))
    return best[1] if best is not None else None


def core_match(mol: Mol, core: Core, groups: Mapping[str, str] | None = None) -> tuple[int, ...] | None:
    """For each atom of the bare core its atom in a molecule; None where the core does not fit.

    Parameters
    ----------
    groups : mapping label -> `*...`
        The labeling that is wanted; without it, or where no match has it, the lowest labeling is taken.
    """
    form = form_of(core)
    plain = flat(mol)
    wanted = {k: canonical_group(g) for k, g in (groups or {}).items()}
    wanted = {k: g for k, g in wanted.items() if g != HYDROGEN_GROUP}
    best: tuple[Any, tuple[int, ...]] | None = None
    for match in plain.GetSubstructMatches(form.bare, uniquify=False, maxMatches=MAX_CORE_MATCHES):
        if not _fits(plain, form, match):
            continue
        placed = _place(form, match, cut_groups(plain, frozenset(match)))
        if placed is None:
            continue
        differs = groups is not None and {g.label: g.smiles for g in placed} != wanted
        key = (differs, _labeling_key(form, placed), tuple(match))
        if best is None or key < best[0]:
            best = (key, tuple(match))
    return best[1] if best is not None else None


def _fits(mol: Mol, form: CoreForm, match: tuple[int, ...]) -> bool:
    """Whether only open positions carry more than the core itself, by single or fused aromatic bonds."""
    room = [0] * len(match)
    for atom in form.open_atoms.values():
        room[atom] += 1
    core = set(match)
    for here, there in enumerate(match):
        atom, own = mol.GetAtomWithIdx(there), form.bare.GetAtomWithIdx(here)
        extra = atom.GetDegree() - own.GetDegree()
        if not 0 <= extra <= room[here] or atom.GetFormalCharge() != own.GetFormalCharge():
            return False
        if extra == 0:
            continue
        outside = 0
        for bond in atom.GetBonds():
            if bond.GetOtherAtomIdx(there) in core:
                continue
            outside += 1
            if bond.GetBondType() not in (Chem.BondType.SINGLE, Chem.BondType.AROMATIC):
                return False
        if outside != extra:
            return False
    return True


def _place(form: CoreForm, match: tuple[int, ...], cuts: list[CutGroup]) -> tuple[PlacedGroup, ...] | None:
    """Groups at the open labels of their roots; several on one atom in alphabetical order."""
    labels: dict[int, list[str]] = {}
    for label in form.prepared.open_labels:
        labels.setdefault(match[form.open_atoms[label]], []).append(label)
    placed = []
    for root in sorted({c.root for c in cuts}):
        here = sorted((c for c in cuts if c.root == root), key=lambda c: (c.smiles, c.atoms))
        if len(here) > len(labels.get(root, ())):
            return None
        placed += [
            PlacedGroup(label, c.smiles, c.atoms) for label, c in zip(labels[root], here, strict=False)
        ]
    return tuple(sorted(placed, key=lambda g: label_order(g.label)))


def _labeling_key(form: CoreForm, placed: Iterable[PlacedGroup]) -> tuple[Any, ...]:
    """Lowest set of locants first, then group names in locant order."""
    rank = {label: k for k, label in enumerate(form.prepared.open_labels)}
    order = sorted((rank[g.label], g.smiles, g.atoms) for g in placed)
    return tuple(r for r, _, _ in order), tuple(s for _, s, _ in order), tuple(a for _, _, a in order)


@lru_cache(maxsize=1)
def _acceptor() -> Mol:
    return Chem.MolFromSmarts(_ACCEPTOR)


def acceptors_on(mol: Mol, ring: Iterable[int], skip: frozenset[int] = frozenset()) -> int:
    """Number of electron acceptors bound to atoms of a ring."""
    accepting = {m[0] for m in mol.GetSubstructMatches(_acceptor())}
    members = set(ring)
    near = {n.GetIdx() for k in members for n in mol.GetAtomWithIdx(k).GetNeighbors()}
    return len((near - members - skip) & accepting)


def _ring_key(mol: Mol, ring: list[int], core: frozenset[int]) -> tuple[int, int, int]:
    """Rule 5: a ring with more acceptors, then with more groups, comes first."""
    carried = sum(n.GetIdx() not in core for k in ring for n in mol.GetAtomWithIdx(k).GetNeighbors())
    return -acceptors_on(mol, ring), -carried, min(ring) if carried == 0 else ring[0]
