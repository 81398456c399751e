"""How much faster do sums over positions find energetic analogs than screening every molecule?"""

from __future__ import annotations

from time import perf_counter

import numpy as np
import pytest

from tuner.library import load_library
from tuner.screening.energetic import energetic_weights
from tuner.screening.screen import screen
from tuner.structure.assemble import assemble
from tuner.structure.cores import prepare_core

PATTERNS = 200_000
MOLECULES = 300
AT_LEAST = 200.0
"""Ratio asked for; a whole space is worth carrying limits for only if they cost next to nothing."""


@pytest.mark.benchmark
def test_sums_against_molecules() -> None:
    library = load_library()
    core = library.cores["4-arylazophenol"]
    prepared = prepare_core(core)
    groups = [g for g in library.substituents.values() if g.charge == 0][:60]
    n = len(prepared.open_labels)
    relations = [prepared.slot(label).relation for label in prepared.open_labels]
    limits = energetic_weights(core.smiles, relations, [groups] * n, library)
    rows = np.random.default_rng(5).integers(len(groups), size=(PATTERNS, n))

    start = perf_counter()
    fine = np.ones(PATTERNS, dtype=bool)
    for limit in limits:
        total = np.zeros(PATTERNS, dtype=np.int64)
        for p, weights in enumerate(limit.weights):
            total += weights[rows[:, p]]
        fine &= (total >= limit.low) & (total <= limit.high)
    by_sum = (perf_counter() - start) / PATTERNS

    start = perf_counter()
    analogs = [
        assemble(core, {label: groups[k].smiles for label, k in zip(prepared.open_labels, row, strict=True)})
        for row in rows[:MOLECULES]
    ]
    found = [not flags.withheld for flags in screen(analogs, library)]
    by_molecule = (perf_counter() - start) / MOLECULES

    assert found == fine[:MOLECULES].tolist()
    print(f"energetic limits: {1 / by_sum:,.0f} analogs/s by sums, {1 / by_molecule:,.0f} by molecules")
    assert by_molecule / by_sum > AT_LEAST
