"""What is this molecule made of: which ionising sites, and what stands around each?

Rules
-----
1. The molecule is read by `molecule.read_molecule` (largest neutral form, usual tautomer).
2. All ionising sites are found (`sites`). Each phenol and aniline is seen as a core that fits: the one that
   leaves the fewest rings to be opened (rule 3) on the reporting ring (on lone-ring scaffolds: anywhere),
   of these the largest; library order breaks ties. The lone rings "phenol" (2 to 6) and "aniline" (2 to 6,
   N, N') always fit. A core fits where its atoms match and everything else hangs on open positions.
3. Everything outside the core is cut into groups `*...` (`cutting`); rings fused to it that no core holds
   are opened, with a note.
4. Of all equal labelings the one with the lowest locants is taken, then the one whose groups come first in
   the alphabet in locant order. So every spelling of a molecule gives the same placement.
5. A diarylamine is seen from the ring with more acceptors, then more groups, then lower atom number.
6. Other acids on a benzene ring (benzoic, sulfonic, boronic, phosphonic, arsonic acid, thiophenol,
   sulfonamide) are seen as that ring with groups at 2 to 6; ring nitrogens as their own ring, the nitrogen
   being 1; sites on no ring have one group at "1", the rest of the molecule; amines one group for each bond
   of the nitrogen at N, N', N''.
7. The reporting site (`sites[0]`): a phenol before an aniline before anything else; then the one with the
   larger core; then the one with more acceptors on its ring; then the lower atom number. The caller can ask
   for a kind or an atom.

Atom numbers are those of `Dissection.smiles`; `molecule.read_molecule(...).input_atoms` leads back to the
string that was given.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import Any

from rdkit import Chem

from tuner.errors import StructureError
from tuner.library.records import Core
from tuner.structure.cores import CoreForm, form_of
from tuner.structure.cutting import CutGroup, cut_groups
from tuner.structure.matching import Labeling, acceptors_on, best_labeling
from tuner.structure.molecule import Molecule, flat, read_molecule
from tuner.structure.positions import label_order
from tuner.structure.records import Dissection, PlacedGroup, SiteView
from tuner.structure.scaffolds import SCAFFOLD_CORES, CoreIndex, index_cores
from tuner.structure.sites import Site, find_sites
from tuner.structure.tautomers import tautomer_notes

Mol = Any

REPORTING_KINDS = ("phenol", "aniline")
OPENED_NOTE = "a fused ring that no core holds was opened into separate groups"


def dissect(
    smiles: str,
    cores: CoreIndex | Mapping[str, Core],
    *,
    reporting: str | int = "",
    place: str = "",
) -> Dissection:
    """Take a molecule apart into its ionising sites, each seen as a core with groups.

    Parameters
    ----------
    smiles : str
        One compound.
    cores : CoreIndex or mapping name -> Core
        The library's cores; an index (`index_cores`) saves preparing them anew.
    reporting : str or int
        Which site reports: "" by rule 7, a kind ("phenol", "aniline", "benzoic_acid" ...), or an atom
        number of the given string. place : str File and row, for the error text.

    Returns
    -------
    Dissection
        `sites` may be empty where nothing ionises; `notes` say what was assumed.

    Raises
    ------
    StructureError
        Unreadable or untreated structure, or no site of the kind that is asked for.

    >>> found = dissect("Cc1cc(O)ccc1[N+](=O)[O-]", {})
    >>> found.sites[0].core, [(g.label, g.smiles) for g in found.sites[0].groups]
    ('phenol', [('3', '*C'), ('4', '*[N+](=O)[O-]')])
    """
    index = cores if isinstance(cores, CoreIndex) else index_cores(cores)
    molecule = read_molecule(smiles, place=place)
    mol = flat(molecule.mol)
    notes = [*molecule.notes, *tautomer_notes(mol)]
    sites = find_sites(mol)
    views = [_view(mol, site, index, notes) for site in sites]
    views = _with_other_sites(mol, sites, views)
    order = _by_rank(mol, sites, views)
    if reporting != "":
        order = _asked_for(order, sites, molecule, reporting, place)
    return Dissection(molecule.smiles, tuple(views[k][0] for k in order), tuple(dict.fromkeys(notes)))


_Placed = tuple[SiteView, frozenset[int], int]
"""A view, the atoms of its core, and the size of the matched core (heavy atoms)."""


def _view(mol: Mol, site: Site, index: CoreIndex, notes: list[str]) -> _Placed:
    """One site as a core with groups, or as a plain group of the molecule."""
    if site.kind in REPORTING_KINDS:
        found = _best_core(mol, site, index)
        if found is not None:
            form, labeling = found
            if labeling.opened:
                notes.append(OPENED_NOTE)
            return _core_view(mol, site, form, labeling)
    if site.rings:
        return _ring_view(mol, site)
    return _plain_view(mol, site)


def _best_core(mol: Mol, site: Site, index: CoreIndex) -> tuple[CoreForm, Labeling] | None:
    """The core of rule 2 and its labeling."""
    best: tuple[tuple[int, int], CoreForm, Labeling] | None = None
    for form in index.forms:
        labeling = best_labeling(mol, site.reporting, form)
        if labeling is None:
            continue
        elsewhere = labeling.opened if form.prepared.scaffold in SCAFFOLD_CORES else 0
        key = (labeling.opened_here, elsewhere)
        if best is None or key < best[0]:
            best = (key, form, labeling)
        if best[0] == (0, 0):
            break
    return best[1:] if best is not None else None


def _core_view(mol: Mol, site: Site, form: CoreForm, labeling: Labeling) -> _Placed:
    """A site on its core, and on the bare ring below it."""
    scaffold = form.prepared.scaffold
    on_ring = labeling.groups
    if scaffold in SCAFFOLD_CORES and form.core.name != scaffold:
        lone = best_labeling(mol, site.reporting, form_of(SCAFFOLD_CORES[scaffold]))
        on_ring = lone.groups if lone is not None else on_ring
    view = SiteView(
        site.kind,
        site.reporting,
        form.core.name,
        labeling.groups,
        (),
        scaffold=scaffold,
        scaffold_groups=on_ring,
    )
    return view, labeling.core, form.bare.GetNumAtoms()


def _ring_view(mol: Mol, site: Site) -> _Placed:
    """A site of another kind on a benzene ring: groups at 2 to 6, lowest labeling; others on its own atoms
    at N."""
    best: tuple[Any, tuple[PlacedGroup, ...], frozenset[int]] | None = None
    for ring in site.rings:
        core = frozenset(ring) | frozenset(site.atoms)
        cuts = cut_groups(mol, core)
        for turn in (ring, (ring[0], *ring[:0:-1])):
            names = {atom: str(k + 1) for k, atom in enumerate(turn)}
            placed = _named(cuts, names)
            ranks = tuple(label_order(g.label) for g in placed)
            key = (ring[0], ranks, tuple(g.smiles for g in placed), tuple(g.atoms for g in placed))
            if best is None or key < best[0]:
                best = (key, placed, core)
    if best is None:  # `site.rings` is not empty
        return _plain_view(mol, site)
    return SiteView(site.kind, site.reporting, "", best[1], ()), best[2], 0


def _named(cuts: list[CutGroup], names: Mapping[int, str]) -> tuple[PlacedGroup, ...]:
    """Groups under the given names of their roots, the rest as N, N', N''."""
    placed, spare = [], 0
    for cut in sorted(cuts, key=lambda c: (names.get(c.root, "~"), c.smiles, c.atoms)):
        label = names.get(cut.root)
        if label is None:
            label = "N" + "'" * spare
            spare += 1
        placed.append(PlacedGroup(label, cut.smiles, cut.atoms))
    return tuple(sorted(placed, key=lambda g: label_order(g.label)))


def _plain_view(mol: Mol, site: Site) -> _Placed:
    """A site on no benzene ring: the rest of the molecule as one group at "1" (amines: one for each bond)."""
    core = frozenset(site.atoms)
    cuts = cut_groups(mol, core)
    names: dict[int, str] = {}
    if site.carrier >= 0 and site.kind not in ("aliphatic_amine", "aminoheteroarene"):
        names = {c.root: "1" for c in cuts if c.entry == site.carrier}
    return SiteView(site.kind, site.reporting, "", _named(cuts, names), ()), core, 0


def _with_other_sites(mol: Mol, sites: list[Site], placed: list[_Placed]) -> list[_Placed]:
    """Fill in which group of each view holds which other site; "" where the core itself holds it."""
    done = []
    near = Chem.GetDistanceMatrix(mol)
    for view, core, size in placed:
        others = []
        for site in sites:
            if site.reporting == view.reporting_atom:
                continue
            holders = [g for g in view.groups if site.reporting in g.atoms]
            holders.sort(
                key=lambda g: (min(near[view.reporting_atom][k] for k in g.atoms), label_order(g.label))
            )
            others.append((site.reporting, holders[0].label if holders else ""))
        done.append((replace(view, other_sites=tuple(sorted(others))), core, size))
    return done


def _by_rank(mol: Mol, sites: list[Site], placed: list[_Placed]) -> list[int]:
    """Order of the sites by rule 7."""

    def key(k: int) -> tuple[int, int, int, int]:
        view, core, size = placed[k]
        first = REPORTING_KINDS.index(view.kind) if view.kind in REPORTING_KINDS else len(REPORTING_KINDS)
        acceptors = (
            acceptors_on(mol, (a for r in sites[k].rings for a in r if a in core)) if sites[k].rings else 0
        )
        return first, -size, -acceptors, view.reporting_atom

    return sorted(range(len(sites)), key=key)


def _asked_for(
    order: list[int], sites: list[Site], molecule: Molecule, reporting: str | int, place: str
) -> list[int]:
    """The same order with the site that the caller wants in front."""
    if isinstance(reporting, int):
        wanted = [k for k in order if molecule.input_atoms[sites[k].reporting] == reporting]
    else:
        wanted = [k for k in order if sites[k].kind == reporting]
    if not wanted:
        there = ", ".join(f"{sites[k].kind} (atom {molecule.input_atoms[sites[k].reporting]})" for k in order)
        raise StructureError(
            f"no ionising site '{reporting}' in {molecule.smiles}",
            place=place,
            remedy=f"it has: {there or 'none'}",
        )
    return [wanted[0], *(k for k in order if k != wanted[0])]
