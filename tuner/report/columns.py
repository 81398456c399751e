"""Which columns does a candidate table have, in which unit, with how many digits, and what do they mean?

The only place where column names stand. Digits follow from what a number deserves: the best predictions are
good to a tenth of a pKa unit, so two decimals are shown and no more.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import isfinite

from tuner.report.routes import route_on_one_line
from tuner.search.result import Candidate

Cell = str | int | float | None
"""What a table holds; None is an empty cell."""

YES, NO = "yes", "no"
LIST_SEPARATOR = "; "


@dataclass(frozen=True, slots=True)
class Column:
    """One column: its name in files, its heading for people, what it means, and how its numbers are
    written.
    """

    name: str
    heading: str
    meaning: str
    value: Callable[[Candidate], Cell]
    decimals: int = -1  # -1: not a decimal number
    width: int = 12  # characters, in the workbook


def shown_pka(candidate: Candidate) -> float:
    """The pKa' that pictures show: the measured one where there is one, else the predicted."""
    return candidate.measured_pka if isfinite(candidate.measured_pka) else candidate.pka


def rounded(value: float, decimals: int) -> float | None:
    """The number with so many decimals, without a negative zero; None where there is none."""
    if not isfinite(value):
        return None
    return round(value, decimals) + 0.0


def cell(column: Column, candidate: Candidate) -> Cell:
    """The value of a column for a candidate, rounded as it is written everywhere."""
    value = column.value(candidate)
    if isinstance(value, float):
        return rounded(value, max(column.decimals, 0))
    return value if value != "" else None


def written(column: Column, candidate: Candidate) -> str:
    """The value as text with the column's decimals; empty where there is none."""
    value = cell(column, candidate)
    if value is None:
        return ""
    return f"{value:.{column.decimals}f}" if isinstance(value, float) else str(value)


def _joined(parts: tuple[str, ...]) -> str:
    """A list in one cell."""
    return LIST_SEPARATOR.join(parts)


def _pkas(candidate: Candidate) -> str:
    """Macroscopic constants in one cell."""
    return ";".join(f"{pka:.2f}" for pka in candidate.macroscopic_pkas)


PKA = "conditional pKa' of the reporting group in the brief's medium; of the bound form if anchored"

COLUMNS: tuple[Column, ...] = (
    Column("rank", "rank", "order by the brief's ranking", lambda c: c.rank, width=6),
    Column("analog", "analog", "name of the analog within this run", lambda c: c.analog, width=22),
    Column("smiles", "SMILES", "structure of the free dye", lambda c: c.smiles, width=44),
    Column("core", "core", "chromophore", lambda c: c.core, width=22),
    Column("substitution", "substitution", "groups by locant", lambda c: c.substitution, width=28),
    Column("pka", "pKa'", PKA, lambda c: c.pka, 2, 8),
    Column("pka_sd", "pKa' sd", "standard error of pka", lambda c: c.pka_sd, 2, 8),
    Column("offset", "offset, pH", "pka less target pH", lambda c: c.offset, 2, 10),
    Column(
        "hit_probability",
        "hit probability",
        "chance that the true pKa' lies in the window, 0 to 1",
        lambda c: c.hit_probability,
        2,
        14,
    ),
    Column("steps", "steps", "fewest reactions from the shelf", lambda c: c.steps, width=7),
    Column(
        "molar_mass_g_mol",
        "molar mass, g/mol",
        "molar mass of the free dye",
        lambda c: c.molar_mass_g_mol,
        2,
        16,
    ),
    Column(
        "working_range_low",
        "range from, pH",
        "lower end of the working range by eye, pka - 1",
        lambda c: c.working_range_low,
        2,
        13,
    ),
    Column(
        "working_range_high",
        "range to, pH",
        "upper end of the working range by eye, pka + 1",
        lambda c: c.working_range_high,
        2,
        12,
    ),
    Column("dpka_dt", "dpKa'/dT, 1/K", "drift of pka with temperature", lambda c: c.dpka_dt, 4, 13),
    Column(
        "front",
        "front",
        "yes: no analog is closer to the targets (at the worst of them), shorter and lighter at once",
        lambda c: YES if c.front else NO,
        width=7,
    ),
    Column("cautions", "cautions", "what to look up first", lambda c: _joined(c.cautions), width=50),
    Column("route", "route", "a shortest route", lambda c: route_on_one_line(c.route), width=90),
    Column(
        "knee",
        "knee",
        "yes: bend of the front, past which a gain in one objective costs most in the others",
        lambda c: YES if c.knee else NO,
        width=7,
    ),
    Column("layer", "layer", "non-dominated layer, 1 is the front", lambda c: c.layer or "", width=7),
    Column("score", "score", "what the ranking sorts by, in hit probability", lambda c: c.score, 3, 8),
    Column(
        "stability",
        "stability",
        "share of redrawn rankings in which it stays listed, 0 to 1",
        lambda c: c.stability,
        2,
        10,
    ),
    Column(
        "measured_pka",
        "measured pKa'",
        "measured value brought to the brief's medium",
        lambda c: c.measured_pka,
        2,
        13,
    ),
    Column(
        "measured_source",
        "measured in",
        "source of the measured value",
        lambda c: c.measured_source,
        width=30,
    ),
    Column(
        "macroscopic_pkas",
        "macroscopic pKa'",
        "constants of the whole molecule, ascending",
        _pkas,
        width=18,
    ),
    Column(
        "other_targets",
        "further targets",
        "chance to do what each further target asks, 0 to 1",
        lambda c: _joined(
            tuple(f"{t.target.name or f'pH {t.target.ph:g}'}: {t.probability:.2f}" for t in c.other_targets)
        ),
        width=30,
    ),
    Column("clogp", "calculated logP", "octanol-water, of the neutral form", lambda c: c.clogp, 1, 14),
    Column(
        "tpsa_a2",
        "polar surface, A2",
        "topological polar surface, square angstrom",
        lambda c: c.tpsa_a2,
        0,
        15,
    ),
    Column("note", "note", "doubts about this row", lambda c: _joined(c.notes), width=60),
)
"""Every column of `candidates.csv` and of the workbook, in order."""

BY_NAME = {column.name: column for column in COLUMNS}
"""Columns by name."""

TEXT_COLUMNS = frozenset(
    {"analog", "smiles", "core", "substitution", "front", "cautions", "route", "knee"}
    | {"measured_source", "macroscopic_pkas", "other_targets", "note"}
)
"""Columns that always hold text."""
