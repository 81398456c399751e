"""Step counts of wide spaces: time and memory."""

from __future__ import annotations

import resource
import time

import pytest

from tests.synthesis.benches import book, library
from tuner.library.records import HYDROGEN_SHORT
from tuner.library.stock import shipped_stock
from tuner.structure.cores import prepare_core
from tuner.structure.molecule import canonical_smiles
from tuner.synthesis.planner import plan_core, steps_over
from tuner.synthesis.setting import Workshop

WIDE = """
Me Et Pr iPr Bu tBu allyl Bn CF3 CHF2 OCF3 F Cl Br I OH OMe OEt OPr OBu OBn OPh OAllyl SMe SEt SO2Me
SO2NH2 SO2NMe2 SO3H SO2Cl NO2 NO NH2 NHMe NMe2 NEt2 NHAc NHCOPh NHSO2Me NHCONH2 CHO COMe COEt COPh CO2H CO2Me
CO2Et CONH2 CONHMe CONMe2 CN CH=NOH CH2OH CH2CO2H CH2NMe2 CH=CHCO2H Ph 2-thienyl CCH vinyl
"""
SOME = "F Cl Br Me Et OMe CF3 Ph COMe CO2Et CN CONH2 CO2H CH2CO2H NO2"
MOST_SECONDS, MOST_MEGABYTES = 60.0, 2000.0
COUMARIN_SECONDS = 5.0


def planned(core: str, names: str, max_steps: int) -> tuple[float, float, int]:
    """Seconds, megabytes at the peak, and the number of choices of a planned space."""
    groups = names.split()
    bench = Workshop(library(), book(), tuple(shipped_stock(canonical_smiles)))
    listed = [(HYDROGEN_SHORT, *groups)] * len(prepare_core(library().cores[core]).open_labels)
    begin = time.perf_counter()
    table = steps_over(plan_core(bench, library().cores[core], listed, max_steps), listed)
    seconds = time.perf_counter() - begin
    assert table.ways
    return seconds, resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024, len(groups)


@pytest.mark.benchmark
def test_sixty_groups_at_five_positions_of_phenol() -> None:
    seconds, megabytes, n = planned("phenol", WIDE, 4)
    assert n == 60
    assert seconds < MOST_SECONDS
    assert megabytes < MOST_MEGABYTES


@pytest.mark.benchmark
def test_hydroxycoumarin_within_six_steps() -> None:
    seconds, _, _ = planned("7-hydroxycoumarin", SOME, 6)
    assert seconds < COUMARIN_SECONDS
