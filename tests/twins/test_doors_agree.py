"""Space door and molecule door: the same analog, the same pKa and the same error.

Random patterns of every core: once as look-ups in the tables of a whole space, once as a SMILES that is
taken apart anew. Groups that ionise are left out here (the space door takes one form of them, the molecule
door all). A molecule that is seen as another, better-fitting core is passed over.
"""

from __future__ import annotations

import random

import numpy as np
import pytest

from tuner.acidity.model import AcidityModel
from tuner.library import load_library
from tuner.library.records import Substituent
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor
from tuner.prediction.estimate import Estimator
from tuner.structure.assemble import assemble

LIBRARY = load_library()
DOOR = MoleculeDoor(LIBRARY, shipped_model(LIBRARY))
ESTIMATOR = Estimator(LIBRARY)
MODEL = AcidityModel(LIBRARY, lambda smiles: ESTIMATOR.group(smiles)[0])
PLAIN = (
    "Me",
    "Et",
    "iPr",
    "tBu",
    "F",
    "Cl",
    "Br",
    "CF3",
    "OMe",
    "CN",
    "NO2",
    "CHO",
    "COMe",
    "CO2Me",
    "SO2Me",
    "Ph",
)
SUMS = 1e-9  # two orders of summation


def groups(rng: random.Random, labels: tuple[str, ...]) -> dict[str, Substituent]:
    """Up to three plain groups at ring positions."""
    ring = [label for label in labels if not label.startswith("N")]
    chosen = rng.sample(ring, min(rng.randint(0, 3), len(ring)))
    return {label: LIBRARY.substituents[rng.choice(PLAIN)] for label in chosen}


@pytest.mark.parametrize("name", sorted(LIBRARY.cores))
def test_both_doors_give_the_same_number(name: str) -> None:
    rng = random.Random(f"doors {name}")
    prepared = DOOR.index.prepared[name]
    choices = [LIBRARY.substituents[short] for short in ("H", *PLAIN)]
    place = {group.short: k for k, group in enumerate(choices)}
    bare = [LIBRARY.substituents["H"]]
    listed = [bare if label.startswith("N") else choices for label in prepared.open_labels]
    tables = MODEL.tables(prepared, listed)
    compared = 0
    for _ in range(12):
        pattern = groups(rng, prepared.open_labels)
        told = DOOR.predict(assemble(LIBRARY.cores[name], {label: g.smiles for label, g in pattern.items()}))
        if told.core != name or len(told.sites) != 1:
            continue
        row = [place[pattern[label].short] if label in pattern else 0 for label in prepared.open_labels]
        index = np.array([row])
        assert told.pka25 == pytest.approx(float(tables.pka25.at(index)[0]), abs=SUMS)
        assert told.pka_sd == pytest.approx(float(np.sqrt(tables.variance.at(index)[0])), abs=SUMS)
        compared += 1
    # cores with several sites of their own have no single-site analogs to compare
    several = len(DOOR.predict(assemble(LIBRARY.cores[name], {})).sites) > 1
    assert compared >= 8 or several


@pytest.mark.parametrize("arms", [("Cl", "Cl"), ("Br", "Br"), ("Me", "Me"), ("H", "iPr")])
def test_a_dye_with_two_reporting_arms_agrees_too(arms: tuple[str, str]) -> None:
    core = LIBRARY.cores["phenolsulfonephthalein"]
    pattern = {"3'": LIBRARY.substituents[arms[0]], "3''": LIBRARY.substituents[arms[1]]}
    told = DOOR.predict(assemble(core, {label: g.smiles for label, g in pattern.items()}))
    space = MODEL.evaluate(DOOR.index.prepared[core.name], pattern).pka25
    # the second step also holds a share of the other path, 10**-6 here
    assert told.pka == pytest.approx(space, abs=1e-4)


@pytest.mark.parametrize("name", ["phenolsulfonephthalein", "phenolphthalein"])
@pytest.mark.parametrize("group", ["Br", "iPr", "NO2"])
def test_two_groups_count_the_same_on_either_arm(name: str, group: str) -> None:
    prepared = DOOR.index.prepared[name]
    choices = [LIBRARY.substituents["H"], LIBRARY.substituents[group]]
    tables = MODEL.tables(prepared, [choices] * len(prepared.open_labels))
    arms = [{"3'", "5'"}, {"3''", "5''"}]
    index = np.array([[int(label in arm) for label in prepared.open_labels] for arm in arms])
    pka, variance = tables.pka25.at(index), tables.variance.at(index)
    assert pka[0] == pytest.approx(pka[1], abs=SUMS)
    assert variance[0] == pytest.approx(variance[1], abs=SUMS)
