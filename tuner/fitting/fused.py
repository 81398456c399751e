"""How much of a group's effect reaches the reporting group of a naphthol or naphthylamine, position by
position?

Least squares over measured compounds with one neutral group on such a core: the shift from the parent
against the shift that the ring model would give at full transmission. Run: `python -m tuner.fitting.fused
TABLE.csv`, columns smiles, pka. The factors in `libraries/cores.toml` are these, rounded, with errors that
also cover positions with few compounds; naphthol positions without data take those of the naphthylamine.
"""

from __future__ import annotations

import sys
from collections.abc import Mapping, Sequence
from csv import DictReader
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np

from tuner.acidity.model import AcidityModel
from tuner.errors import TunerError
from tuner.library import load_library
from tuner.library.catalogue import Library
from tuner.prediction.estimate import Estimator
from tuner.structure.dissect import dissect
from tuner.structure.records import PreparedCore
from tuner.structure.scaffolds import CoreIndex, index_cores

CORES = ("1-naphthol", "2-naphthol", "1-naphthylamine", "2-naphthylamine")
LEAST_EFFECT = 0.15
"""pKa units at full transmission; weaker groups say nothing about it."""
MEASURED_SD = 0.1
TAUTOMERIC = ("*N=O", "*N=N")
"""Groups that take the proton themselves (quinone oximes, hydrazones) are left out."""


@dataclass(frozen=True, slots=True)
class Transmission:
    """A position's factor from `n` compounds, its standard error, and what the library ships."""

    core: str
    label: str
    n: int
    value: float
    sd: float
    shipped: float


def full_effect(
    model: AcidityModel, prepared: PreparedCore, label: str, estimator: Estimator, smiles: str
) -> float:
    """Shift (pKa units) that one group would cause at a position if all of its effect arrived."""
    opened = tuple(replace(s, transmission=1.0) if s.label == label else s for s in prepared.slots)
    whole = replace(prepared, slots=opened)
    group = estimator.group(smiles)[0]
    return model.evaluate(whole, {label: group}).pka25 - model.evaluate(whole, {}).pka25


def single_groups(
    rows: Sequence[Mapping[str, str]], index: CoreIndex, estimator: Estimator
) -> list[tuple[str, str, str, float]]:
    """(core, label, group, pKa) of compounds with one neutral, non-ionising group on one of the cores."""
    found = []
    for row in rows:
        try:
            seen = dissect(row["smiles"], index)
        except TunerError:
            continue
        if len(seen.sites) != 1 or seen.sites[0].core not in CORES or len(seen.sites[0].groups) != 1:
            continue
        group = seen.sites[0].groups[0]
        shifts = group.smiles.startswith(TAUTOMERIC)
        if estimator.group(group.smiles)[0].charge == 0 and not group.label.startswith("N") and not shifts:
            found.append((seen.sites[0].core, group.label, group.smiles, float(row["pka"])))
    return found


def fit_transmissions(rows: Sequence[Mapping[str, str]], library: Library) -> list[Transmission]:
    """One factor for every position that a compound speaks about, in the order of cores and positions."""
    estimator = Estimator(library)
    model = AcidityModel(library, lambda smiles: estimator.group(smiles)[0])
    index = index_cores(library.cores)
    effects: dict[tuple[str, str], list[tuple[float, float]]] = {}
    for core, label, smiles, pka in single_groups(rows, index, estimator):
        prepared = index.core(core)
        effect = full_effect(model, prepared, label, estimator, smiles)
        if abs(effect) >= LEAST_EFFECT:
            shift = pka - library.cores[core].parent_pka.value
            effects.setdefault((core, label), []).append((effect, shift))
    found = []
    for core, label in sorted(effects):
        effect, shift = np.array(effects[core, label]).T
        weight = float(effect @ effect)
        value = float(effect @ shift) / weight
        shipped = index.core(core).slot(label).transmission
        found.append(Transmission(core, label, len(effect), value, MEASURED_SD / weight**0.5, shipped))
    return found


def main(arguments: Sequence[str]) -> int:
    """Read the table named and print the factors beside the shipped ones."""
    if len(arguments) != 1 or not Path(arguments[0]).is_file():
        print("usage: python -m tuner.fitting.fused TABLE.csv", file=sys.stderr)
        return 2
    with Path(arguments[0]).open(encoding="utf-8", newline="") as lines:
        rows = list(DictReader(lines))
    for t in fit_transmissions(rows, load_library()):
        print(f"{t.core:<18}{t.label:>3}{t.n:>4}{t.value:>8.2f} +-{t.sd:5.2f}   shipped {t.shipped:.2f}")
    return 0


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
