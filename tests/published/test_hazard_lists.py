"""Do the hazard rules agree with public lists that a general library ships?

Independent data: names, CAS numbers, structures and the classification of the International Agency for
Research on Cancer, as shipped by `chemicals` (group codes 1 = carcinogenic, 11 = probably, 12 = possibly).
"""

from __future__ import annotations

import csv
from pathlib import Path

import chemicals
import pytest
from chemicals import search_chemical

from tuner.library import load_library
from tuner.screening.rules import RestrictedAmine, load_rules
from tuner.screening.screen import screen
from tuner.structure.molecule import identity_key
from tuner.structure.scan import pattern_counts

LIBRARY = load_library()
RULES = load_rules(LIBRARY)

CARCINOGENIC_GROUPS = {"1", "11", "12"}
AROMATIC_AMINE = "c1ccccc1-[NX3;H2,H1,H0;!$(N-C=O);!$(N-S);!$(N~[#7]);!$(N-[a]~[n])]"
NITROARENE = "c1ccccc1-[N+](=O)[O-]"
ARYLAZO = "c-[NX2]=[NX2]-c"
OUTSIDE = (
    "[#7;R]1~[#6]~[#7]~[#6]~[#7]~[#6]~1",  # triazines
    "[#7,#8,#16;R;a]",  # aromatic heterocycles: food pyrolysis products and drugs, no dyes of this program
    "[P]",
    "[CX4;R]",  # alkaloids, antibiotics, steroids
)
DISSENT = {
    "CI Direct Brown 95 (see Benzidine, dyes metabolized to)": "a copper complex, which is not taken apart",
    "Ponceau MX": "a sulfonated dye; 2,4-xylidine is not among the 22 listed amines",
    "Benzyl violet 4B": "a sulfonated triarylmethane dye; the rules look at free amines",
}
"""Entries that no rule is meant to reach, with the reason."""


@pytest.mark.parametrize("amine", RULES.amines, ids=lambda amine: amine.name)
def test_cas_numbers_of_the_listed_amines(amine: RestrictedAmine) -> None:
    found = search_chemical(amine.cas)
    assert identity_key(found.smiles) == amine.smiles


def carcinogens() -> list[tuple[str, str]]:
    """(name, SMILES) of aromatic amines, nitroarenes and azo compounds in groups 1, 2A and 2B."""
    path = Path(chemicals.__file__).parent / "Safety" / "IARC Carcinogen Database.tsv"
    found = []
    with path.open(encoding="utf-8") as file:
        for row in csv.DictReader(file, delimiter="\t"):
            if row["group"] not in CARCINOGENIC_GROUPS:
                continue
            try:
                smiles = search_chemical(row["CAS"]).smiles
            except ValueError:
                continue  # mixtures and processes have no structure
            inside = pattern_counts(smiles, (AROMATIC_AMINE, NITROARENE, ARYLAZO))
            if any(inside) and not any(pattern_counts(smiles, OUTSIDE)):
                found.append((row["description"], smiles))
    return found


def test_every_listed_carcinogen_of_these_classes_gets_a_caution() -> None:
    listed = carcinogens()
    assert len(listed) > 50
    silent = [
        name for name, smiles in listed if not screen([smiles], LIBRARY)[0].flags and name not in DISSENT
    ]
    assert silent == []


@pytest.mark.parametrize(
    "cas",
    ["92-67-1", "92-87-5", "91-59-8", "95-53-4", "101-14-4", "87-86-5", "55-18-5", "106-89-8"],
)
def test_well_known_carcinogens_are_called_so(cas: str) -> None:
    flags = screen([search_chemical(cas).smiles], LIBRARY)[0]
    assert "carcinogenic" in flags.names
