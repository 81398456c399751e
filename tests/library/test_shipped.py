"""Is every row of the shipped tables chemically and formally sound?"""

from __future__ import annotations

import subprocess
import sys
from math import isnan

import pytest

from tuner.library import load_library
from tuner.library.records import HYDROGEN_SHORT
from tuner.structure.cores import prepare_core
from tuner.structure.groups import canonical_group
from tuner.structure.molecule import canonical_smiles, identity_key, read_smarts

LIBRARY = load_library()


def test_enough_is_there() -> None:
    assert len(LIBRARY.substituents) >= 120
    assert len(LIBRARY.cores) >= 16
    assert len(LIBRARY.measured) <= 150  # as many as may be quoted from the compilations
    assert next(iter(LIBRARY.substituents)) == HYDROGEN_SHORT


def test_every_group_is_canonical_with_one_open_valence() -> None:
    wrong = {g.short: canonical_group(g.smiles) for g in LIBRARY.substituents.values()}
    assert {s: c for s, c in wrong.items() if c != LIBRARY.substituents[s].smiles} == {}


@pytest.mark.parametrize("short", [s for s, g in LIBRARY.substituents.items() if g.charge])
def test_the_charge_of_a_group_is_the_charge_of_its_structure(short: str) -> None:
    group = LIBRARY.substituents[short]
    plus, minus = group.smiles.count("+"), group.smiles.count("-]")
    assert group.charge == plus - minus  # every charge in these strings is a single one in a bracket


def test_the_other_form_of_a_group_leads_back() -> None:
    groups = LIBRARY.substituents
    pairs = [(s, g.other_form) for s, g in groups.items() if g.other_form]
    assert [(a, b) for a, b in pairs if groups[b].other_form != a] == []
    assert [(a, b) for a, b in pairs if abs(groups[a].charge - groups[b].charge) != 1] == []
    assert [s for s, g in groups.items() if g.ionises and not g.other_form] == []


def test_hydrogen_is_zero_everywhere() -> None:
    hydrogen = LIBRARY.substituents[HYDROGEN_SHORT]
    values = [hydrogen.sigma_meta, hydrogen.sigma_para, hydrogen.sigma_para_minus]
    values += [hydrogen.sigma_ortho_phenol, hydrogen.sigma_ortho_aniline]
    assert [(v.value, v.sd) for v in values] == [(0.0, 0.0)] * 5
    assert (hydrogen.bulk, hydrogen.charge, hydrogen.field_effect, hydrogen.resonance) == (0, 0, 0.0, 0.0)


def test_a_group_with_a_constant_states_its_error() -> None:
    silent = [
        g.short
        for g in LIBRARY.substituents.values()
        for v in (g.sigma_meta, g.sigma_para, g.sigma_para_minus, g.sigma_ortho_phenol, g.sigma_ortho_aniline)
        if v.known and isnan(v.sd)
    ]
    assert silent == []


@pytest.mark.parametrize("name", LIBRARY.cores)
def test_every_core_can_be_prepared(name: str) -> None:
    core = LIBRARY.cores[name]
    prepared = prepare_core(core)
    assert set(prepared.open_labels) == set(core.labels.values())
    assert prepared.symmetry[0] == tuple(range(len(prepared.open_labels)))
    if core.reporting_smarts:
        assert read_smarts(core.reporting_smarts).GetNumAtoms() > 0


def test_every_measured_compound_is_canonical_and_there_once() -> None:
    keys = [identity_key(m.smiles) for m in LIBRARY.measured]
    assert len(keys) == len(set(keys))
    assert [m.smiles for m in LIBRARY.measured if canonical_smiles(m.smiles) != m.smiles] == []


def test_every_citation_resolves_to_a_reference() -> None:
    cited = [g.source for g in LIBRARY.substituents.values()] + [s.source for s in LIBRARY.series.values()]
    cited += [c.source for c in LIBRARY.cores.values()] + [m.source for m in LIBRARY.measured]
    assert all(LIBRARY.reference(citation) for citation in cited)


def test_reading_the_tables_needs_no_heavy_library() -> None:
    code = (
        "import sys; import tuner.library as t; t.load_library(); "
        "print(sorted({'numpy', 'scipy', 'pandas', 'rdkit'} & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
