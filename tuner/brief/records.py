"""What does a brief ask for, once it has been read and found sound?"""

from __future__ import annotations

from dataclasses import dataclass
from math import inf
from pathlib import Path

TEMPERATURE_LIMITS_C = (0.0, 100.0)
"""Water is a liquid here; outside, a brief is refused."""
IONIC_STRENGTH_LIMIT_M = 3.0
"""Beyond this (mol/L) no activity model of the kind used here says anything."""
COSOLVENT_LIMIT_MASS_PERCENT = 80.0
"""Beyond this neither the tabulated permittivities nor the estimate of the shift hold."""
OFFSET_LIMIT = 6.0
"""Largest measured shift (pKa units) that is taken for one."""
SURFACE_POTENTIAL_LIMIT_MV = 300.0
"""Largest surface potential (mV) that is taken for one."""


@dataclass(frozen=True, slots=True)
class Medium:
    """The working medium. What is refused stands above; ranges of doubt stand with the relations themselves
    (`acidity.medium`).
    """

    temperature_c: float = 25.0
    ionic_strength_m: float = 0.0
    cosolvent: str = ""
    cosolvent_mass_percent: float = 0.0
    offset: float = 0.0  # measured shift of the pKa in the film, micelle or cosolvent, pKa units
    offset_sd: float = 0.0
    surface_potential_mv: float = 0.0


@dataclass(frozen=True, slots=True)
class Target:
    """The wanted transition pH in one medium."""

    ph: float
    tolerance: float
    medium: Medium
    role: str = (
        "switches"  # "switches" inside ph +- tolerance; "stays_off" (pKa' above ph + tol); "stays_on" (below)
    )
    name: str = ""


@dataclass(frozen=True, slots=True)
class Reagents:
    """What may be used: a shelf; names, SMILES or `role:NAME` to add or take away; reactions switched off."""

    shelf: str = "example"  # name of a shipped shelf or path of a CSV
    include: tuple[str, ...] = ()
    exclude: tuple[str, ...] = ()
    switched_off: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Groups:
    """Which groups may, must not, or must stand on the dye: names, `family:NAME` or `smarts:PATTERN`."""

    allow: tuple[str, ...] = ()  # empty: every tabulated group that can be made
    forbid: tuple[str, ...] = ()
    require: tuple[str, ...] = ()
    anchors: tuple[str, ...] = ()  # exactly one of these handles, if any are named


@dataclass(frozen=True, slots=True)
class Limits:
    """Hard limits; an analog beyond any of them is not listed."""

    max_steps: int = 4
    max_molar_mass_g_mol: float = inf
    min_substituents: int = 0
    max_substituents: int = 99
    min_clogp: float = -inf
    max_clogp: float = inf
    max_tpsa_a2: float = inf
    max_pka_sd: float = inf
    flags: tuple[tuple[str, str], ...] = ()  # (flag, "exclude" | "penalise" | "show")


@dataclass(frozen=True, slots=True)
class Ranking:
    """How a chemist trades: worth of one step and of 100 g/mol, in hit probability."""

    step_costs: float = 0.05
    hundred_g_mol_costs: float = 0.03
    flag_costs: float = 0.10
    rows: int = 50
    diverse: bool = False
    user_objective: str = ""  # "file.py:function", called with a SMILES, gives a number to be made small
    user_objective_costs: float = 0.0


@dataclass(frozen=True, slots=True)
class SearchPlan:
    """How to search."""

    method: str = "auto"  # "auto", "exact", "certified", "evolutionary"
    seed: int = 1
    resolution_pka: float = 0.01
    workers: int = 0  # 0: all cores of the machine


@dataclass(frozen=True, slots=True)
class Brief:
    """One validated brief. `path` and `sha256` tell which file it came from."""

    title: str
    target: Target
    also: tuple[Target, ...]
    cores: tuple[str, ...]
    reagents: Reagents
    groups: Groups
    limits: Limits
    ranking: Ranking
    search: SearchPlan
    overlay: Path | None  # the user's own library folder, relative to the brief
    measured: Path | None  # the user's own measured pKa's
    path: Path
    sha256: str
