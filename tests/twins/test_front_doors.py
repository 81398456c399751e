"""The space door and the molecule door give the same pKa' for the same analog."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from tests.search.test_build import LIBRARY, NITROPHENOL
from tuner.brief.records import Groups, Limits, Medium, Target
from tuner.search.evaluate import evaluate_rows
from tuner.search.molecules import smiles_of
from tuner.search.rooms import Rooms
from tuner.search.sample import sample_rows
from tuner.structure.molecule import molar_mass
from tuner.synthesis.records import StepTable

MEDIUM = Medium(temperature_c=37.0, ionic_strength_m=0.1, offset=0.15, offset_sd=0.05)
CORES = (
    "phenol",
    "4-nitrophenol",
    "4-arylazophenol",
    "2-naphthol",
    "7-hydroxycoumarin",
    "aniline",
    "4-aminoazobenzene",
)
FAMILIES = tuple(
    f"family:{name}" for name in ("alkyl", "halogen", "fluoroalkyl", "acyl", "oxygen", "nitrogen")
)
PER_CORE = 40


def no_steps(space):
    """Routes play no part here."""
    classes = tuple(np.zeros(n, dtype=np.int64) for n in space.shape)
    return StepTable(classes, np.zeros((1,) * len(classes), dtype=np.uint8))


@pytest.mark.parametrize("core", CORES)
def test_both_doors_agree_on_random_analogs(core, monkeypatch):
    families = tuple(f"family:{f}" for f in LIBRARY.families() if f"family:{f}" in FAMILIES)
    brief = replace(
        NITROPHENOL,
        cores=(core,),
        target=Target(7.0, 0.2, MEDIUM),
        groups=Groups(allow=families),
        limits=Limits(max_substituents=3),
    )
    rooms = Rooms(brief, LIBRARY)
    monkeypatch.setattr(type(rooms.shelf), "makeable", None)
    monkeypatch.setattr(Rooms, "step_table", lambda self, space: no_steps(space))
    space = rooms.space.spaces[0]
    tables = rooms.search_tables(0)
    rows = sample_rows(tables, PER_CORE, seed=1)
    found = evaluate_rows(tables, rooms.goal(), rows)
    bare = len(rooms.predict(smiles_of(space, [0] * len(space.shape)), MEDIUM).sites)
    compared = 0
    for n, row in enumerate(rows):
        smiles = smiles_of(space, row)
        assert found.mass_values[n] == pytest.approx(molar_mass(smiles), abs=0.002)  # three decimals per atom
        door = rooms.predict(smiles, MEDIUM)
        if not door.found or len(door.sites) != bare or door.core != core:
            continue  # further ionising groups are summed over by the molecule door only
        compared += 1
        assert found.pka_values[n] == pytest.approx(door.pka, abs=1e-5), smiles  # whole numbers of 6e-8
        assert found.sd[n] == pytest.approx(door.pka_sd, abs=1e-3), smiles
    assert compared >= PER_CORE // 2
