"""Which groups does a bottle bring to a core or to the half of a joining step, and how do places on a ring
lie?

A template is a SMILES with numbered open positions `[*:n]`. Every way to lay it on the molecule counts, since
a planner asks for patterns, not for one name of a compound.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from rdkit import Chem

from tuner.errors import StructureError
from tuner.library.records import Core
from tuner.structure.assemble import branch_of, written
from tuner.structure.cores import form_of
from tuner.structure.cutting import cut_groups
from tuner.structure.groups import HYDROGEN_GROUP
from tuner.structure.molecule import flat, parse
from tuner.structure.neutral import short

Mol = Any

REPORTING_PLACE = "reporting group"
"""Name of the reporting group among the places of its ring."""
MAX_MATCHES = 500


@dataclass(frozen=True, slots=True)
class RingPlaces:
    """The substituted places of one carbocyclic aromatic six-ring of a core.

    `fused` are the names at which another ring is fused on, `benzo` those of them where it is a benzene ring;
    `distance[a, b]` is 1 (ortho), 2 (meta) or 3 (para), for the labels of open positions, `REPORTING_PLACE`
    and the names in `carried`; `carried` maps a name to the kind of what the core itself carries there (see
    `_kind_carried`).
    """

    labels: tuple[str, ...]
    carried: Mapping[str, str]
    distance: Mapping[tuple[str, str], int]
    fused: frozenset[str] = frozenset()
    benzo: frozenset[str] = frozenset()


@dataclass(frozen=True)
class _Template:
    bare: Mol
    open_atoms: tuple[tuple[str, int], ...]


@lru_cache(maxsize=256)
def _template(smiles: str, labels: tuple[tuple[int, str], ...]) -> _Template:
    names = dict(labels)
    work = Chem.RWMol(flat(parse(smiles)))
    anchors: list[tuple[str, Any]] = []
    for atom in list(work.GetAtoms()):
        if atom.GetAtomicNum() == 0:
            number = atom.GetAtomMapNum()
            anchor = atom.GetNeighbors()[0]
            anchors.append((names.get(number, str(number)), anchor.GetIdx()))
    dummies = {a.GetIdx() for a in work.GetAtoms() if a.GetAtomicNum() == 0}
    kept = [a.GetIdx() for a in work.GetAtoms() if a.GetIdx() not in dummies]
    place = {old: new for new, old in enumerate(kept)}
    for atom in work.GetAtoms():
        if atom.GetIdx() not in dummies:
            lost = sum(1 for n in atom.GetNeighbors() if n.GetIdx() in dummies)
            if lost and atom.GetNoImplicit():
                atom.SetNumExplicitHs(atom.GetNumExplicitHs() + lost)
    for index in sorted(dummies, reverse=True):
        work.RemoveAtom(index)
    bare = work.GetMol()
    Chem.SanitizeMol(bare)
    return _Template(bare, tuple((label, place[atom]) for label, atom in anchors))


def _laid_on(template: _Template, mol: Mol) -> list[dict[str, str]]:
    """Every labeling of the molecule under the template, hydrogens left out."""
    where: dict[int, list[str]] = {}
    for label, atom in template.open_atoms:
        where.setdefault(atom, []).append(label)
    found: list[dict[str, str]] = []
    for match in mol.GetSubstructMatches(template.bare, uniquify=False, maxMatches=MAX_MATCHES):
        if any(
            mol.GetAtomWithIdx(there).GetFormalCharge()
            != template.bare.GetAtomWithIdx(here).GetFormalCharge()
            for here, there in enumerate(match)
        ):
            continue
        back = {there: here for here, there in enumerate(match)}
        cuts = cut_groups(mol, frozenset(match))
        if any(cut.opened for cut in cuts):
            continue
        groups: dict[str, str] = {}
        for cut in cuts:
            free = [name for name in where.get(back[cut.root], ()) if name not in groups]
            if not free:
                break
            groups[free[0]] = cut.smiles
        else:
            if groups not in found:
                found.append(groups)
    return sorted(found, key=lambda g: sorted(g.items()))


def _organic(mol: Mol) -> bool:
    """Whether a part of a compound is more than a counter-ion."""
    return any(atom.GetAtomicNum() == 6 for atom in mol.GetAtoms())


@lru_cache(maxsize=65536)
def _fit(
    template: str, labels: tuple[tuple[int, str], ...], smiles: str
) -> tuple[tuple[tuple[str, str], ...], ...]:
    try:
        mol = flat(parse(smiles))
    except StructureError:
        return ()
    parts = [part for part in Chem.GetMolFrags(mol, asMols=True) if _organic(part)]
    if len(parts) != 1:
        return ()
    mol = parts[0]
    return tuple(tuple(sorted(g.items())) for g in _laid_on(_template(template, labels), mol))


def fit_template(
    template: str, smiles: str, labels: Mapping[int, str] | None = None
) -> tuple[dict[str, str], ...]:
    """Every way to see a compound as a template with groups: label -> `*...`, positions with hydrogen left
    out.

    Counter-ions are left aside. Returns an empty tuple where the template does not fit (or the compound
    cannot be read, or has two organic parts).

    >>> fit_template("O=C(O)c1c([*:2])cccc1", "Cc1ccccc1C(=O)O")
    ({'2': '*C'},)
    """
    named = tuple(sorted((labels or {}).items()))
    return tuple(dict(pairs) for pairs in _fit(template, named, smiles))


def open_places(template: str) -> tuple[str, ...]:
    """The numbers of a template's open positions, as text, in ascending order.

    >>> open_places("[*:4]C(=O)C([*:3])C(=O)OCC")
    ('3', '4')
    """
    return tuple(str(n) for n in sorted({int(n) for n in re.findall(r"\[\*:(\d+)\]", template)}))


def fit_core(core: Core, smiles: str) -> tuple[dict[str, str], ...]:
    """Every way to see a compound as this core with groups on its open positions."""
    return fit_template(core.smiles, smiles, core.labels)


def ring_places(core: Core) -> tuple[RingPlaces, ...]:
    """The carbocyclic aromatic six-rings of a core with the places that carry something or could.

    >>> core = Core("x", "4-nitrophenol", "Oc1c([*:2])cc([N+](=O)[O-])cc1[*:6]", "phenol")
    >>> ring, = ring_places(core)
    >>> ring.distance["2", REPORTING_PLACE], ring.distance["2", "6"], sorted(ring.carried.values())
    (1, 2, ['H', 'H', 'NO2'])
    """
    form = form_of(core)
    at: dict[int, list[str]] = {}
    for label, atom in form.open_atoms.items():
        at.setdefault(atom, []).append(label)
    rings = []
    benzene = [ring for ring in form.bare.GetRingInfo().AtomRings() if _is_benzene(form.bare, ring)]
    for ring in benzene:
        atoms = [form.bare.GetAtomWithIdx(k) for k in ring]
        places: dict[str, int] = {}
        carried: dict[str, str] = {}
        fused: set[str] = set()
        benzo: set[str] = set()
        for spot, atom in enumerate(atoms):
            for label in at.get(atom.GetIdx(), ()):
                places[label] = spot
            for near in atom.GetNeighbors():
                if near.GetIdx() in ring:
                    continue
                name = REPORTING_PLACE if near.GetIdx() == form.reporting else f"carried at {spot}"
                places[name] = spot
                if name != REPORTING_PLACE:
                    carried[name] = _kind_carried(near, atom)
                    if form.bare.GetBondBetweenAtoms(atom.GetIdx(), near.GetIdx()).IsInRing():
                        fused.add(name)
                        if any({atom.GetIdx(), near.GetIdx()} <= set(other) for other in benzene):
                            benzo.add(name)
            if spot not in places.values():
                places[f"bare at {spot}"] = spot
                carried[f"bare at {spot}"] = "H"
        distance = {
            (a, b): min((i - j) % 6, (j - i) % 6) for a, i in places.items() for b, j in places.items()
        }
        labels = tuple(k for k in places if k in form.open_atoms)
        rings.append(RingPlaces(labels, carried, distance, frozenset(fused), frozenset(benzo)))
    return tuple(rings)


def _is_benzene(mol: Mol, ring: tuple[int, ...]) -> bool:
    """Whether a ring is aromatic, of six carbon atoms."""
    atoms = [mol.GetAtomWithIdx(k) for k in ring]
    return len(ring) == 6 and all(a.GetIsAromatic() and a.GetAtomicNum() == 6 for a in atoms)


def _kind_carried(atom: Any, ring_atom: Any) -> str:
    """What the core carries at a ring atom, as the short name of a group that steers alike."""
    if atom.GetAtomicNum() == 7:
        if atom.GetFormalCharge() > 0:
            return "NO2" if any(n.GetAtomicNum() == 8 for n in atom.GetNeighbors()) else "NMe3+"
        double = any(b.GetBondTypeAsDouble() == 2.0 for b in atom.GetBonds())
        return "N=NPh" if double else "NMe2"
    if atom.GetAtomicNum() == 8:
        return "OH" if atom.GetDegree() == 1 else "OMe"
    if atom.GetAtomicNum() == 16:
        return "SO2Me" if atom.GetDegree() > 2 else "SMe"
    if atom.GetAtomicNum() in (9, 17, 35, 53):
        return {9: "F", 17: "Cl", 35: "Br", 53: "I"}[atom.GetAtomicNum()]
    acceptor = any(
        b.GetBondTypeAsDouble() >= 2.0 and b.GetOtherAtom(atom).GetAtomicNum() in (7, 8)
        for b in atom.GetBonds()
    )
    return "COMe" if acceptor else "Me"


def capped(core: Core, groups: Mapping[str, str], cap: str) -> str:
    """The molecule with a temporary group on its reporting atom: `cap` is a SMILES whose last atom is bound
    to it.

    >>> capped(Core("x", "", "Oc1c([*:2])cccc1", "phenol"), {"2": "*Br"}, "C")
    'COc1ccccc1Br'
    """
    text = f"{cap}{written(core, groups)}"
    mol = Chem.MolFromSmiles(text)
    if mol is None:
        raise StructureError(
            f"'{short(text)}' cannot exist", place=f"core '{core.name}'", remedy="check the cap"
        )
    return str(Chem.MolToSmiles(flat(mol)))


def filled(template: str, groups: Mapping[str, str], labels: Mapping[int, str] | None = None) -> str:
    """A template with groups on its positions, hydrogen elsewhere; canonical SMILES.

    >>> filled("[*:4]C(=O)CC(=O)OCC", {"4": "*C(F)(F)F"})
    'CCOC(=O)CC(=O)C(F)(F)F'
    """
    bare = flat(parse(template))
    root = next(a.GetIdx() for a in bare.GetAtoms() if a.GetAtomicNum() > 0)
    # written from an atom of its own on, a template never begins with an open position
    text = str(Chem.MolToSmiles(bare, rootedAtAtom=root))
    for number in sorted({int(n) for n in re.findall(r"\[\*:(\d+)\]", text)}):
        label = (labels or {}).get(number, str(number))
        branch = branch_of(groups.get(label, HYDROGEN_GROUP)).removeprefix("-")
        text = text.replace(f"[*:{number}]", branch or "[H]")
    mol = Chem.MolFromSmiles(text)
    if mol is None:
        raise StructureError(f"'{short(text)}' cannot exist", place="template", remedy="check the template")
    return str(Chem.MolToSmiles(flat(mol)))
