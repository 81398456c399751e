"""Is a flag that a group is said to bring along raised by every molecule that bears it?"""

from __future__ import annotations

import pytest

from tuner.library import load_library
from tuner.screening.groups import flags_of_group
from tuner.screening.screen import screen
from tuner.structure.assemble import assemble

LIBRARY = load_library()


@pytest.mark.parametrize(
    ("short", "flags"),
    [
        ("H", ()),
        ("OMe", ()),
        ("N3", ("azide", "energetic")),
        ("CF3", ("perfluoroalkyl", "persistent")),
        ("NH2", ()),  # what follows from an amino group can be lifted by a sulfonate elsewhere
    ],
)
def test_well_known_groups(short: str, flags: tuple[str, ...]) -> None:
    assert flags_of_group(LIBRARY.substituents[short], LIBRARY) == flags


@pytest.mark.parametrize("core", ["phenol", "4-aminoazobenzene", "1-naphthol", "7-hydroxycoumarin"])
def test_molecules_raise_what_their_group_brings(core: str) -> None:
    label = "3" if core == "4-aminoazobenzene" else "5"
    brought = {g.smiles: set(flags_of_group(g, LIBRARY)) for g in LIBRARY.substituents.values()}
    bearing = [smiles for smiles, flags in brought.items() if flags]
    analogs = {smiles: assemble(LIBRARY.cores[core], {label: smiles}) for smiles in bearing}
    raised = dict(zip(analogs, screen(analogs.values(), LIBRARY), strict=True))
    assert {smiles for smiles in analogs if not brought[smiles] <= set(raised[smiles].names)} == set()
    assert len(analogs) > 10
