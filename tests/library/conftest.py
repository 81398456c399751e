"""A complete library folder of a few rows, so that a test can spoil one thing at a time."""

from __future__ import annotations

from pathlib import Path

import pytest

from tuner.library.read_acidity import SUBSTITUENT_COLUMNS

GROUPS = (
    {"name": "hydrogen", "short": "H", "smiles": "*[H]", "family": "hydrogen", "bulk": "0"},
    {"name": "nitro", "short": "NO2", "smiles": "*[N+](=O)[O-]", "family": "nitro", "sigma_para": "0.78"},
    {"name": "methoxy", "short": "OMe", "smiles": "*OC", "family": "oxygen", "sigma_para": "-0.27"},
    {"name": "carboxyl", "short": "CO2H", "smiles": "*C(=O)O", "family": "carboxyl",
     "ionises": "benzoic_acid", "other_form": "CO2-"},
    {"name": "carboxylate", "short": "CO2-", "smiles": "*C(=O)[O-]", "family": "carboxyl",
     "charge": "-1", "ionises": "benzoic_acid", "other_form": "CO2H"},
)  # fmt: skip

SERIES = """
[series.phenol]
title = "phenol to phenolate"
parent_pka = { value = 9.99, sd = 0.02 }
rho = { value = 2.2, sd = 0.1 }
acid_charge = 0
enthalpy_kj_mol = { intercept = 0.0, slope = 2.3, sd = 2.0 }
uses_para_minus = true
source = "Book1979"

[series.benzoic_acid]
title = "benzoic acid to benzoate"
parent_pka = { value = 4.2, sd = 0.02 }
rho = { value = 1.0, sd = 0.0 }
acid_charge = 0
source = "Book1979"
"""

CORES = """
[core."phenol"]
title = "phenol"
smiles = "Oc1c([*:2])cc([*:4])cc1"
series = "phenol"
parent_pka = { value = 9.99, sd = 0.02, source = "Book1979 p. 12" }
positions."2" = { relation = "ortho" }
colours = ["colourless", "yellow"]
source = "Book1979"
"""

SOURCES = '[sources]\n"own" = "the user\'s own data"\n"Book1979" = "A book, 1979"\n'
MEASURED = "name,smiles,pka,pka_sd,temperature_c,source\nphenol,Oc1ccccc1,9.99,,25,Book1979\n"


def groups_csv(rows: tuple[dict[str, str], ...] = GROUPS) -> str:
    """`substituents.csv` with these rows; what a row leaves out is empty."""
    filled = [
        ",".join({"source": "Book1979", **row}.get(column, "") for column in SUBSTITUENT_COLUMNS)
        for row in rows
    ]
    return "\n".join(["# groups", ",".join(SUBSTITUENT_COLUMNS), *filled, ""])


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """A complete and sound library folder."""
    shipped = tmp_path / "shipped"
    shipped.mkdir()
    (shipped / "substituents.csv").write_text(groups_csv())
    (shipped / "series.toml").write_text(SERIES)
    (shipped / "cores.toml").write_text(CORES)
    (shipped / "sources.toml").write_text(SOURCES)
    (shipped / "measured_pka.csv").write_text(MEASURED)
    return shipped
