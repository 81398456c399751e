"""Twins: the look-up tables of a space against the molecule door, pattern by pattern."""

from __future__ import annotations

import numpy as np
import pytest

from tuner.acidity.model import AcidityModel
from tuner.acidity.pattern import LEAST_VARIANCE
from tuner.errors import StructureError
from tuner.library import load_library
from tuner.library.records import Substituent
from tuner.prediction.estimate import Estimator
from tuner.structure.scaffolds import index_cores

LIBRARY = load_library()
CORES = index_cores(LIBRARY.cores)
ESTIMATOR = Estimator(LIBRARY)
MODEL = AcidityModel(LIBRARY, lambda smiles: ESTIMATOR.group(smiles)[0])
HYDROGEN = LIBRARY.substituents["H"]
GROUPS = [g for g in LIBRARY.substituents.values() if g.short != "H"]

ROUNDING = 1e-9
"""Both doors add the same numbers in another order."""


def choices_for(relation: str, rng: np.random.Generator, amine_group: bool) -> list[Substituent]:
    picked = [GROUPS[k] for k in rng.choice(len(GROUPS), 12, replace=False)]
    if relation == "nitrogen":
        return picked if amine_group else [HYDROGEN]
    return [HYDROGEN, *picked]


@pytest.mark.parametrize("name", sorted(LIBRARY.cores))
def test_tables_equal_patterns(name: str) -> None:
    prepared = CORES.core(name)
    rng = np.random.default_rng(7)
    listed = [
        choices_for(prepared.slot(label).relation, rng, k % 2 == 0)
        for k, label in enumerate(prepared.open_labels)
    ]
    tables = MODEL.tables(prepared, listed)
    index = (
        np.column_stack([rng.integers(0, len(c), 25) for c in listed])
        if listed
        else np.zeros((1, 0), dtype=int)
    )
    pka, variance = tables.pka25.at(index), tables.variance.at(index)
    for row, expected_pka, expected_variance in zip(index, pka, variance, strict=True):
        groups = {label: listed[p][row[p]] for p, label in enumerate(prepared.open_labels)}
        told = MODEL.evaluate(prepared, groups)
        assert told.pka25 == pytest.approx(expected_pka, abs=ROUNDING)
        assert told.sd**2 == pytest.approx(max(expected_variance, LEAST_VARIANCE), abs=ROUNDING)


def test_charges_of_the_groups_add_to_the_acid_form() -> None:
    prepared = CORES.core("phenol")
    charged = [[HYDROGEN, LIBRARY.substituents["SO3-"], LIBRARY.substituents["NMe3+"]]] * len(
        prepared.open_labels
    )
    tables = MODEL.tables(prepared, charged)
    index = np.zeros((1, len(charged)), dtype=int)
    index[0, :3] = (1, 2, 1)
    assert tables.charge.at(index).tolist() == [-1.0]


def test_hydrogen_mixed_with_groups_on_the_nitrogen_is_refused() -> None:
    name = next(n for n in sorted(LIBRARY.cores) if "N" in CORES.core(n).open_labels)
    prepared = CORES.core(name)
    mixed = [[HYDROGEN, LIBRARY.substituents["Me"]] for _ in prepared.open_labels]
    with pytest.raises(StructureError, match="mixes hydrogen and groups at N"):
        MODEL.tables(prepared, mixed)
