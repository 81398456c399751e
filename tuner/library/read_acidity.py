"""How are the tables of the acidity model read: groups, reaction series, measured pKa's?"""

from __future__ import annotations

from collections.abc import Mapping
from math import nan
from pathlib import Path

from tuner.errors import LibraryError
from tuner.library.records import MeasuredPka, Series, Substituent, Value
from tuner.library.tables import Row, Table, read_csv, read_toml

Places = dict[tuple[str, str], str]
"""(kind of table, key) -> where it was read, for errors that show only once all tables are joined."""

PKA_LOW, PKA_HIGH = -15.0, 25.0
"""A pKa in water beyond these is a slip: no scale in use here reaches further."""

SIGMA_LIMIT = 3.0
"""Largest |sigma| accepted; the diazonium group, the strongest on record, has sigma_para near 1.9."""

SD_LIMIT = 3.0
RHO_LIMIT = 15.0
CHARGE_LIMIT = 4
BULK_LARGEST = 3

SIGMA_COLUMNS = ("sigma_meta", "sigma_para", "sigma_para_minus", "sigma_ortho_phenol", "sigma_ortho_aniline")

SUBSTITUENT_COLUMNS = (
    "name", "short", "smiles", "family",
    *(name for column in SIGMA_COLUMNS for name in (column, f"{column}_sd")),
    "field_effect", "resonance", "bulk", "para_acceptor", "twistable", "hbond_acceptor", "hbond_donor",
    "charge", "ionises", "other_form", "hazards", "source", "note",
)  # fmt: skip

NEEDED_OF_A_USER = ("name", "short", "smiles")
"""Columns that a table in a user's folder must have; the others may be left out and then count as empty."""

MEASURED_COLUMNS = ("name", "smiles", "pka", "pka_sd", "temperature_c", "source")
USUAL_PKA_SD = 0.05
"""Taken for a measured value that states no error: laboratories scatter by 0.065 to 0.08, less within one."""


def read_substituents(path: Path, default_source: str, places: Places) -> dict[str, Substituent]:
    """`substituents.csv` as short name -> Substituent; `default_source` fills an empty source."""
    own = bool(default_source)
    required = NEEDED_OF_A_USER if own else SUBSTITUENT_COLUMNS
    rows = read_csv(path, required, [c for c in SUBSTITUENT_COLUMNS if c not in required])
    groups: dict[str, Substituent] = {}
    for row in rows:
        group = _substituent(row, default_source)
        _refuse_repeat(row, "short", group.short, groups)
        groups[group.short] = group
        places["substituents", group.short] = row.place()
    return groups


def _substituent(row: Row, default_source: str) -> Substituent:
    """One row as a group."""
    smiles = row.text("smiles")
    if smiles.count("*") != 1:
        raise LibraryError(
            f'"{smiles}" has {smiles.count("*")} attachment points',
            place=row.place("smiles"),
            remedy="mark one with *",
        )
    sigma = {column: _value(row, column) for column in SIGMA_COLUMNS}
    field_effect = row.number("field_effect", -SIGMA_LIMIT, SIGMA_LIMIT)
    return Substituent(
        name=row.text("name"),
        short=row.text("short"),
        smiles=smiles,
        family=row.maybe("family", "own"),
        **sigma,
        field_effect=field_effect,
        resonance=row.number(
            "resonance", -SIGMA_LIMIT, SIGMA_LIMIT, sigma["sigma_para"].value - field_effect
        ),
        bulk=row.whole("bulk", 0, BULK_LARGEST, default=1),
        para_acceptor=row.flag("para_acceptor"),
        twistable=row.flag("twistable"),
        hbond_acceptor=row.flag("hbond_acceptor"),
        hbond_donor=row.flag("hbond_donor"),
        charge=row.whole("charge", -CHARGE_LIMIT, CHARGE_LIMIT),
        ionises=row.maybe("ionises"),
        other_form=row.maybe("other_form"),
        hazards=row.listing("hazards"),
        source=_source(row, default_source),
        note=row.maybe("note"),
    )


def _value(row: Row, column: str) -> Value:
    """A constant with its error; an error without a constant is a slip."""
    value = row.number(column, -SIGMA_LIMIT, SIGMA_LIMIT)
    sd = row.number(f"{column}_sd", 0.0, SD_LIMIT)
    if value != value and sd == sd:
        raise LibraryError("an error without a value", place=row.place(column), remedy="give both or neither")
    return Value(value, sd)


def _source(row: Row, default_source: str) -> str:
    """The citation; empty only where a default stands in."""
    return row.maybe("source", default_source) or row.text("source")


def _refuse_repeat(row: Row, column: str, key: str, seen: Mapping[str, object]) -> None:
    """An error where this key already stood in the same file."""
    if key in seen:
        remedy = "keep one of the two rows"
        raise LibraryError(f'"{key}" stands twice', place=row.place(column), remedy=remedy)


def read_series(path: Path, default_source: str, places: Places) -> dict[str, Series]:
    """`series.toml`: tables `[series.NAME]` as name -> Series."""
    found: dict[str, Series] = {}
    for name, table in read_toml(path).only("series").table("series").tables().items():
        found[name] = _series(name, table, default_source)
        places["series", name] = table.place()
    return found


def _series(name: str, table: Table, default_source: str) -> Series:
    """One table as a reaction series."""
    table.only(
        "title", "parent_pka", "rho", "acid_charge", "enthalpy_kj_mol", "heat_capacity_j_mol_k",
        "uses_para_minus", "source", "note",
    )  # fmt: skip
    enthalpy = table.table("enthalpy_kj_mol").only("intercept", "slope", "sd")
    return Series(
        name=name,
        title=table.text("title"),
        parent_pka=read_value(table.table("parent_pka").only("value", "sd"), PKA_LOW, PKA_HIGH),
        rho=read_value(table.table("rho").only("value", "sd"), -RHO_LIMIT, RHO_LIMIT),
        acid_charge=table.whole("acid_charge", -CHARGE_LIMIT, CHARGE_LIMIT),
        enthalpy_intercept_kj_mol=enthalpy.number("intercept", -200, 200, 0.0),
        enthalpy_slope_kj_mol=enthalpy.number("slope", -50, 50, 0.0),
        enthalpy_sd_kj_mol=enthalpy.number("sd", 0, 100, 10.0),
        uses_para_minus=table.flag("uses_para_minus", False),
        source=table.text("source", default_source or None),
        heat_capacity_j_mol_k=table.number("heat_capacity_j_mol_k", -2000, 2000, 0.0),
    )


def read_value(table: Table, low: float, high: float) -> Value:
    """`{value = ..., sd = ...}` as a Value; both unknown where the table is absent."""
    if not table.values:
        return Value()
    return Value(table.number("value", low, high), table.number("sd", 0.0, SD_LIMIT, nan))


def read_measured(path: Path, default_source: str, places: Places) -> dict[str, MeasuredPka]:
    """`measured_pka.csv` as SMILES -> MeasuredPka; a user's file needs only the columns smiles and pka."""
    own = bool(default_source)
    required = ("smiles", "pka") if own else MEASURED_COLUMNS
    optional = [column for column in (*MEASURED_COLUMNS, "note") if column not in required]
    found: dict[str, MeasuredPka] = {}
    for row in read_csv(path, required, optional):
        smiles = row.text("smiles")
        _refuse_repeat(row, "smiles", smiles, found)
        row.text("pka")
        found[smiles] = MeasuredPka(
            name=row.maybe("name", smiles),
            smiles=smiles,
            pka=row.number("pka", PKA_LOW, PKA_HIGH),
            pka_sd=row.number("pka_sd", 0.0, SD_LIMIT, USUAL_PKA_SD),
            temperature_c=row.number("temperature_c", -20, 120, 25.0),
            source=_source(row, default_source),
        )
        places["measured", smiles] = row.place()
    return found
