"""What does one row of a library hold?

Frozen records that travel through every room. They carry no behaviour beyond look-ups, and know neither files
nor molecules. A missing number is NaN and nothing else.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from math import nan

RELATIONS = ("ortho", "meta", "para", "remote", "nitrogen")
"""How a position stands to the reporting group. `nitrogen`: on the reporting nitrogen itself."""

HYDROGEN_SHORT = "H"
"""Short name of the empty position; every choice list that allows it holds it first."""


@dataclass(frozen=True, slots=True)
class Value:
    """A constant with its standard error; both NaN where unknown."""

    value: float = nan
    sd: float = nan

    @property
    def known(self) -> bool:
        """Whether there is a number."""
        return self.value == self.value


@dataclass(frozen=True, slots=True)
class Source:
    """Where a number comes from: `key` is what rows cite, `text` the full reference."""

    key: str
    text: str


@dataclass(frozen=True, slots=True)
class Substituent:
    """One group that can stand at a position: a row of `libraries/substituents.csv`.

    `smiles` is canonical with exactly one attachment point `*`. `sigma_*` are the published base constants
    (dimensionless); the fitted, series-specific ones live with the fitted acidity constants.
    """

    name: str
    short: str
    smiles: str
    family: str
    sigma_meta: Value
    sigma_para: Value
    sigma_para_minus: Value
    sigma_ortho_phenol: Value
    sigma_ortho_aniline: Value
    field_effect: float  # F of the two-parameter split (dimensionless)
    resonance: float  # R = sigma_para - F
    bulk: int  # 0 none (H, F), 1 small (Cl, CH3, OCH3), 2 medium (iPr, I, CF3, Ph), 3 large (tBu, SiMe3)
    para_acceptor: bool  # withdraws by resonance: takes sigma_para_minus at para
    twistable: bool  # an acceptor or donor that flanking groups turn out of the plane (nitro yes, cyano no)
    hbond_acceptor: bool  # accepts an intramolecular H bond from an ortho OH or NH
    hbond_donor: bool
    charge: int  # formal charge of the group as written
    ionises: str  # "" or the series name of its own acid-base equilibrium, e.g. "benzoic_acid"
    other_form: str  # short name of the group in its other protonation state, "" if it does not ionise
    hazards: tuple[str, ...]
    source: str
    note: str = ""


@dataclass(frozen=True, slots=True)
class Series:
    """One acid-base equilibrium on an aromatic ring: a table of `libraries/series.toml`."""

    name: str
    title: str
    parent_pka: Value  # thermodynamic, 25 degC, water
    rho: Value  # sensitivity, positive: acceptors lower the pKa
    acid_charge: int  # charge of the reporting group in its protonated form (0 phenol, +1 anilinium)
    enthalpy_intercept_kj_mol: float  # dH0 = intercept + slope * pKa25
    enthalpy_slope_kj_mol: float
    enthalpy_sd_kj_mol: float
    uses_para_minus: bool
    source: str
    heat_capacity_j_mol_k: float = 0.0  # dCp0, taken as constant


@dataclass(frozen=True, slots=True)
class Position:
    """One open position of a core. `label` is its locant as chemists write it ("2", "3'", "N")."""

    label: str
    relation: str  # one of RELATIONS
    transmission: float = 1.0  # tau: 1 on the reporting ring
    transmission_sd: float = 0.0
    column: str = ""  # which sigma acts: "meta", "para", "para_minus", "ortho"; "" = follows from relation
    given: bool = False  # True where the core's author wrote it, False where it was worked out


@dataclass(frozen=True, slots=True)
class Core:
    """A chromophore whose substitution is to be chosen. A table of `libraries/cores.toml`.

    In `smiles` each open position is `[*:n]`; `labels[n]` is its locant (default: str(n)). `reporting_smarts`
    picks the reporting atom where more than one hydroxyl or amino group is present (first atom of the match).
    """

    name: str
    title: str
    smiles: str
    series: str
    labels: Mapping[int, str] = field(default_factory=dict)
    reporting_smarts: str = ""
    parent_pka: Value = Value()
    parent_pka_source: str = ""
    parent_temperature_c: float = 25.0
    scatter: float = 0.0  # further standard error of every analog (pKa units) that the ring model leaves out
    given_positions: Mapping[str, Position] = field(default_factory=dict)
    assembly: tuple[str, ...] = ()  # names of joining reactions that can build it
    survives: tuple[str, ...] = ()  # condition tags the core withstands
    destroyed_by: tuple[str, ...] = ()  # condition tags it does not
    colours: tuple[str, str] = ("", "")  # acid form, base form: words for the table
    cautions: tuple[str, ...] = ()
    note: str = ""
    source: str = ""


@dataclass(frozen=True, slots=True)
class StockItem:
    """One bottle on the shelf: a row of a stock file. `roles` are free tags that reactions ask for."""

    name: str
    smiles: str
    roles: tuple[str, ...]
    price_per_mol: float = nan
    in_stock: bool = True
    note: str = ""
    row: int = 0


@dataclass(frozen=True, slots=True)
class MeasuredPka:
    """One measured value with its source: a row of `measured_pka.csv` or of a user's file."""

    name: str
    smiles: str
    pka: float
    pka_sd: float
    temperature_c: float
    source: str
