"""How wrong is the molecule door on tables of measured values, and does it know?

Scores for molecules with several ionising groups, for dyes, and for temperature series. The ring model's
own scores on compounds left out of its fit stand in `tuner.fitting`; here the shipped model predicts as it
is. Of the tables scored here the fit has seen only the single-site steps listed in
`libraries/acidity/microconstants.csv`; parents and transmission factors of cores, and the rules for side
sites, were set by hand on a few of the rows and on handbook values.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from csv import DictReader
from dataclasses import dataclass
from itertools import groupby
from math import ceil, nan
from pathlib import Path
from statistics import fmean, median

from tuner.acidity.medium import vant_hoff_line
from tuner.errors import TunerError
from tuner.library.catalogue import Library
from tuner.prediction.door import MoleculeDoor
from tuner.prediction.matching import Step, match_steps
from tuner.structure.molecule import has_match

BEST_SHARE = 0.95
"""Means are taken over the best 95 % of rows: misprints fall in the rest."""
WITHIN = 0.3
NINETY_PERCENT = 1.645
WORST_SHOWN = 10
NEAR_25_C = 1.0

NAPHTHALENE = "c1ccc2ccccc2c1"
DYE_CLASSES: tuple[tuple[str, tuple[str, ...]], ...] = (
    ("sulfonephthaleins", ("O=S1(=O)OC(c)(c)c2ccccc21",)),
    ("azo dyes", ("[#6]N=N[#6]",)),
    ("naphthols", ("[OX2H1]c1cccc2ccccc12", "[OX2H1]c1ccc2ccccc2c1")),
    ("naphthylamines", ("[NX3]c1cccc2ccccc12", "[NX3]c1ccc2ccccc2c1")),
)
"""Classes of dyes, first match counts; the rest of a dye table is scored as "other molecules of two and more
rings".
"""
OTHER_DYES = "others of two and more rings"


@dataclass(frozen=True, slots=True)
class Miss:
    """One printed value and its prediction; NaN where there is none."""

    name: str
    smiles: str
    label: str
    measured: float
    predicted: float
    sd: float

    @property
    def given(self) -> bool:
        """Whether there is a prediction."""
        return self.predicted == self.predicted

    @property
    def error(self) -> float:
        """Predicted less measured, pKa units."""
        return self.predicted - self.measured


@dataclass(frozen=True, slots=True)
class SetScore:
    """One set of rows: how many, share with a prediction, errors (pKa units), share inside the stated 90 %
    interval.
    """

    title: str
    rows: int
    given: float
    mean_best: float
    median: float
    within: float
    coverage: float
    worst: tuple[Miss, ...]


def score(title: str, misses: Sequence[Miss]) -> SetScore:
    """Summary of one set; NaN where nothing was predicted."""
    told = sorted((m for m in misses if m.given), key=lambda m: (abs(m.error), m.smiles))
    if not told:
        return SetScore(title, len(misses), 0.0, nan, nan, nan, nan, ())
    size = [abs(m.error) for m in told]
    return SetScore(
        title=title,
        rows=len(misses),
        given=len(told) / len(misses),
        mean_best=fmean(size[: ceil(BEST_SHARE * len(size))]),
        median=median(size),
        within=fmean(float(e <= WITHIN) for e in size),
        coverage=fmean(float(abs(m.error) <= NINETY_PERCENT * m.sd) for m in told),
        worst=tuple(reversed(told[-WORST_SHOWN:])),
    )


Row = Mapping[str, str]


def read_table(path: Path, columns: Iterable[str]) -> list[Row]:
    """Rows of a CSV; TunerError where the file or a column is missing."""
    if not path.is_file():
        raise TunerError("the table does not exist", place=path, remedy="name a folder that holds it")
    with path.open(encoding="utf-8", newline="") as lines:
        rows: list[Row] = [dict(row) for row in DictReader(lines)]
    missing = [c for c in columns if not rows or c not in rows[0]]
    if missing:
        raise TunerError(
            f"columns {', '.join(missing)} are missing", place=path, remedy=f"give {', '.join(columns)}"
        )
    return rows


def _family(label: str) -> str:
    """Steps that one book numbers together: pK1, pK2 ...; pKAH1, pKAH2 ...; a bracketed pKAH stands alone."""
    if label.startswith("pKAH("):
        return label
    return "pKAH" if label.startswith("pKAH") else "pK"


def step_misses(door: MoleculeDoor, rows: Sequence[Row]) -> list[Miss]:
    """Printed steps against predicted macroscopic constants; columns smiles, pka_type, name, pka."""
    found: list[Miss] = []
    ordered = sorted(rows, key=lambda r: (r["smiles"], _family(r["pka_type"])))
    for (smiles, _), members in groupby(ordered, key=lambda r: (r["smiles"], _family(r["pka_type"]))):
        group = list(members)
        told = door.predict(smiles)
        steps = [
            Step(p, s, k)
            for p, s, k in zip(
                told.macroscopic_pkas, told.macroscopic_sds, told.macroscopic_kinds, strict=True
            )
        ]
        printed = [(r["pka_type"], float(r["pka"])) for r in group]
        for row, place in zip(group, match_steps(printed, steps), strict=True):
            pka, sd = (steps[place].pka, steps[place].sd) if place is not None else (nan, nan)
            found.append(Miss(row["name"], smiles, row["pka_type"], float(row["pka"]), pka, sd))
    return found


def dye_class(smiles: str) -> str:
    """Class of a dye by `DYE_CLASSES`."""
    for title, patterns in DYE_CLASSES:
        if any(has_match(smiles, pattern) for pattern in patterns):
            return title
    return OTHER_DYES


def temperature_misses(library: Library, rows: Sequence[Row]) -> list[Miss]:
    """Values at other temperatures predicted from the same laboratory's value at 25 degC.

    Columns smiles, measured_by, t_celsius, pka, book; phenols and anilinium ions are told apart by structure.
    """
    found: list[Miss] = []
    ordered = sorted(rows, key=lambda r: (r["smiles"], r["measured_by"]))
    for (smiles, by), members in groupby(ordered, key=lambda r: (r["smiles"], r["measured_by"])):
        group = [(float(r["t_celsius"]), float(r["pka"])) for r in members]
        near = min(group, key=lambda point: abs(point[0] - 25.0))
        if abs(near[0] - 25.0) > NEAR_25_C:
            continue
        series = library.series["phenol" if has_match(smiles, "[OX2H1]c") else "anilinium"]
        for celsius, pka in group:
            if abs(celsius - 25.0) > NEAR_25_C:
                scale, intercept = vant_hoff_line(series, celsius)
                steep = (
                    abs(scale - 1.0)
                    * series.enthalpy_sd_kj_mol
                    / max(1e-9, abs(series.enthalpy_slope_kj_mol))
                )
                name = f"{smiles} ({by})"
                found.append(Miss(name, smiles, f"{celsius:g} degC", pka, scale * near[1] + intercept, steep))
    return found


def accuracy_report(door: MoleculeDoor, folder: Path) -> tuple[SetScore, ...]:
    """Scores on the tables of a folder: `ionisable.csv`, `dyes.csv`, `temperature.csv`.

    Parameters
    ----------
    door : MoleculeDoor
        With the medium in which the values were measured (25 degC, no salt).
    folder : Path
        Where the tables lie.

    Raises
    ------
    TunerError
        A table or a column is missing.
    """
    columns: tuple[str, ...] = ("smiles", "pka_type", "name", "pka")
    scores = [
        score("several ionising groups", step_misses(door, read_table(folder / "ionisable.csv", columns)))
    ]
    dyes = step_misses(door, read_table(folder / "dyes.csv", columns))
    classes = {m.smiles: dye_class(m.smiles) for m in dyes}
    named = [title for title, _ in DYE_CLASSES]
    scores.append(score("dyes of the four classes", [m for m in dyes if classes[m.smiles] in named]))
    for title in (*named, OTHER_DYES):
        members = [m for m in dyes if classes[m.smiles] == title]
        if members:
            scores.append(score(f"  {title}", members))
    series = read_table(folder / "temperature.csv", ("smiles", "measured_by", "t_celsius", "pka"))
    scores.append(score("temperature, from the 25 degC value", temperature_misses(door.library, series)))
    return tuple(scores)
