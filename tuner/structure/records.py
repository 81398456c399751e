"""What does a dissected molecule look like to the rooms that know no chemistry toolkit?"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Slot:
    """One substitutable place of a prepared core, open or fixed by the core itself.

    `neighbours` are the labels of slots on adjacent ring atoms (what flanks what). `fixed` is the canonical
    `*...` SMILES of the group that the core carries there, "" where the position is open.
    """

    label: str
    relation: str  # one of library.records.RELATIONS
    transmission: float
    transmission_sd: float
    column: str  # "meta", "para", "para_minus", "ortho", "nitrogen"
    ring: int  # 0 = the reporting ring, 1, 2 ... other rings
    neighbours: tuple[str, ...]
    fixed: str = ""


@dataclass(frozen=True, slots=True)
class PreparedCore:
    """A core with its positions worked out of the structure.

    `scaffold` is what the acidity model has a parent for: "phenol" or "aniline" where the reporting group
    sits on a lone benzene ring (whatever the core carries there is then a fixed slot), otherwise the core's
    own name. `open_labels` gives the column order of every index array. `symmetry` holds permutations of
    the open positions (as indices, identity first) that give the same molecule. `ring_on_nitrogen` is the
    number of bonds of the reporting nitrogen that lie in a saturated ring (2 in N-phenylpiperidine, 1 in
    indoline): groups on the nitrogen that are no slots.
    """

    name: str
    scaffold: str
    series: str
    slots: tuple[Slot, ...]
    open_labels: tuple[str, ...]
    symmetry: tuple[tuple[int, ...], ...]
    bare_mass_g_mol: float  # with hydrogen at every open position
    bare_charge: int
    ring_on_nitrogen: int = 0

    def slot(self, label: str) -> Slot:
        """The slot with this locant; KeyError where there is none."""
        for slot in self.slots:
            if slot.label == label:
                return slot
        raise KeyError(label)


@dataclass(frozen=True, slots=True)
class PlacedGroup:
    """A group found at a position of a core: canonical `*...` SMILES and the molecule's atoms that belong
    to it."""

    label: str
    smiles: str
    atoms: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class SiteView:
    """One ionising site of a molecule, seen as a core with groups on it.

    `groups` stand on the open positions of `core`; hydrogen is left out. Where that core lies on a lone
    benzene ring, `scaffold` is "phenol" or "aniline" and `scaffold_groups` is the same site seen as that
    bare ring: 2 to 6 (and N, N'), what the core carries itself included. For other cores `scaffold` is the
    core's own name and both tuples are the same. `other_sites` pairs the reporting atom of every other site
    with the label of the group in `groups` that holds it, "" where the core itself does.
    """

    kind: str  # a series name, or "aliphatic_amine", "aliphatic_acid", "sulfonic_acid", "thiol" ...
    reporting_atom: int
    core: str  # name of the matched core, "" for sites that are no phenol or aniline core
    groups: tuple[PlacedGroup, ...]
    other_sites: tuple[tuple[int, str], ...]
    note: str = ""
    scaffold: str = ""  # "" for sites that are no phenol or aniline
    scaffold_groups: tuple[PlacedGroup, ...] = ()


@dataclass(frozen=True, slots=True)
class Dissection:
    """A molecule as its ionising sites; `sites[0]` is the reporting one. `notes` say what was assumed."""

    smiles: str  # canonical, as treated (largest neutral form)
    sites: tuple[SiteView, ...]
    notes: tuple[str, ...]
