"""Which measurements does the acidity model learn from, as patterns on a phenol or an aniline?

Three kinds of rows: measured compounds (a folder of reference tables, or the project's own
`measured_pka.csv`), single steps of molecules with several ionising groups (`microconstants.csv` says which
step measures what), and values written down as remembered (`remembered.csv` and the ortho columns of
`substituents.csv`), which count with the doubt they state.
"""

from __future__ import annotations

import csv
from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass
from math import inf
from pathlib import Path

from tuner.acidity.medium import to_25_c
from tuner.errors import LibraryError, StructureError
from tuner.library.catalogue import Library
from tuner.library.folders import data_folder
from tuner.library.records import Substituent, Value
from tuner.prediction.estimate import Estimator
from tuner.structure.dissect import dissect
from tuner.structure.records import Slot

RELATIONS = {
    "2": "ortho",
    "3": "meta",
    "4": "para",
    "5": "meta",
    "6": "ortho",
    "N": "nitrogen",
    "N'": "nitrogen",
}
NEIGHBOURS = {"2": ("3",), "3": ("2", "4"), "4": ("3", "5"), "5": ("4", "6"), "6": ("5",)}
MIRROR = {"2": "6", "3": "5", "4": "4", "5": "3", "6": "2"}

RING_SLOTS: Mapping[str, Slot] = {
    label: Slot(label, relation, 1.0, 0.0, relation, 0, NEIGHBOURS.get(label, ()))
    for label, relation in RELATIONS.items()
}
"""The positions of a lone ring, as the structure room would find them."""

SERIES = {"phenol": "phenol", "aniline": "anilinium"}
PARENT = {"phenol": 9.99, "aniline": 4.60}
"""Parents by which the table's apparent ortho constants were made (see the head of `substituents.csv`)."""
SENSITIVITY = {"phenol": 2.23, "aniline": 2.88}

MEASURED, STEP, REMEMBERED = "measured", "step", "remembered"
MOST_DETERMINATIONS = 4
DISAGREEMENT = 0.5
"""pKa units; two determinations further apart than this cannot both be right."""
CONTRADICTION = 3.0
"""Stated doubts by which a remembered value must differ from a measured one to be kept beside it."""


@dataclass(frozen=True)
class Row:
    """One pKa at 25 degC of one pattern. `sd` is the doubt stated for this row beyond the usual scatter."""

    name: str
    scaffold: str
    groups: Mapping[str, Substituent]
    pka25: float
    sd: float
    determinations: int
    kind: str
    smiles: str = ""

    @property
    def identity(self) -> str:
        """The same for the same compound, however it is numbered."""
        ring = {label: g.smiles for label, g in self.groups.items() if label in MIRROR}
        turned = {MIRROR[label]: smiles for label, smiles in ring.items()}
        spelled = min(" ".join(f"{k}:{d[k]}" for k in sorted(d)) for d in (ring, turned))
        on_nitrogen = sorted(g.smiles for label, g in self.groups.items() if label not in MIRROR)
        return f"{self.scaffold}|{spelled}|{' '.join(on_nitrogen)}"


def read_rows(path: Path) -> Iterator[dict[str, str]]:
    """Rows of a CSV without the lines that start with #."""
    if not path.is_file():
        raise LibraryError("this table is missing", place=path, remedy="name the folder that holds it")
    with path.open(encoding="utf-8", newline="") as lines:
        yield from csv.DictReader(line for line in lines if not line.startswith("#"))


def measured_row(
    library: Library,
    estimator: Estimator,
    name: str,
    smiles: str,
    pka: float,
    celsius: float,
    n: int,
    scaffold: str = "",
    doubt: float = 0.0,
) -> Row | None:
    """A measured phenol or aniline as a row; None where it is no lone phenol or aniline ring. `doubt` (pKa
    units) comes on top of the usual scatter."""
    try:
        found = dissect(smiles, {})
    except StructureError:
        return None
    views = [v for v in found.sites if v.kind in SERIES and (not scaffold or v.kind == scaffold)]
    if len(views) != 1:
        return None
    view = views[0]
    groups = {g.label: estimator.group(g.smiles)[0] for g in view.groups}
    if set(groups) - set(RING_SLOTS):
        return None
    at_25 = to_25_c(pka, library.series[SERIES[view.kind]], celsius)
    return Row(name, view.kind, groups, at_25, doubt, min(n, MOST_DETERMINATIONS), MEASURED, smiles)


def reference_rows(library: Library, folder: Path) -> tuple[list[Row], list[str]]:
    """Measured phenols and anilines of a folder of reference tables, and what could not be used."""
    estimator = Estimator(library)
    rows: list[Row] = []
    left_out: list[str] = []
    for file, scaffold in (("phenols.csv", "phenol"), ("anilines.csv", "aniline")):
        for line in read_rows(folder / file):
            row = measured_row(
                library, estimator, line["name"], line["smiles"], float(line["pka"]),
                float(line["t_celsius"]), int(line["n"]), scaffold, _disagreement(line),
            )  # fmt: skip
            rows.append(row) if row is not None else left_out.append(line["name"])
    return rows, left_out


def _disagreement(line: Mapping[str, str]) -> float:
    """Half of what two determinations lie apart where they disagree: their middle is then neither of them."""
    apart = float(line.get("high") or "nan") - float(line.get("low") or "nan")
    return apart / 2.0 if int(line["n"]) == 2 and apart > DISAGREEMENT else 0.0


def project_rows(library: Library) -> list[Row]:
    """The project's own measured values."""
    estimator = Estimator(library)
    found = [
        measured_row(library, estimator, m.name, m.smiles, m.pka, m.temperature_c, 2)
        for m in library.measured
    ]
    return [row for row in found if row is not None]


def pattern(library: Library, text: str) -> dict[str, Substituent]:
    """Groups written as "2:NO2 4:Me"."""
    return {
        label: library.find_substituent(short)
        for label, _, short in (part.partition(":") for part in text.split())
    }


def step_rows(library: Library, folder: Path) -> list[Row]:
    """Steps of molecules with several groups that measure one site (values from `ionisable.csv` of the
    folder)."""
    values = {(r["smiles"], r["pka_type"]): r for r in read_rows(folder / "ionisable.csv")}
    rows = []
    for line in read_rows(data_folder() / "acidity" / "microconstants.csv"):
        value = values.get((line["smiles"], line["pka_type"]))
        if value is None:
            continue
        series = library.series[SERIES[line["scaffold"]]]
        pka = to_25_c(float(value["pka"]), series, float(value["t_celsius"])) + float(line["statistical"])
        name = f"{value['name']} {line['pka_type']}"
        rows.append(
            Row(
                name,
                line["scaffold"],
                pattern(library, line["groups"]),
                pka,
                0.05,
                int(value["n"]),
                STEP,
                line["smiles"],
            )
        )
    return rows


def remembered_rows(library: Library, measured: Iterable[Row] = ()) -> list[Row]:
    """Values as remembered: the table of compounds, then the ortho constants of groups it does not list.

    Compounds in `measured` are left out where both agree: a remembered value is no second witness for the
    print that it comes from. Where they contradict each other both stay, and the fit weighs them.
    """
    rows = [
        Row(line["groups"] or line["scaffold"], line["scaffold"], pattern(library, line["groups"]),
        float(line["pka"]),
            float(line["pka_sd"]), 1, REMEMBERED)
        for line in read_rows(data_folder() / "acidity" / "remembered.csv")
    ]  # fmt: skip
    listed = {row.identity for row in rows}
    ortho: tuple[tuple[str, Callable[[Substituent], Value]], ...] = (
        ("phenol", lambda g: g.sigma_ortho_phenol),
        ("aniline", lambda g: g.sigma_ortho_aniline),
    )
    for group in library.substituents.values():
        for scaffold, value_of in ortho:
            value = value_of(group)
            rho = SENSITIVITY[scaffold]
            if group.short == "H" or not value.known:
                continue
            row = Row(f"2:{group.short}", scaffold, {"2": group}, PARENT[scaffold] - rho * value.value,
                      rho * value.sd, 1, REMEMBERED)  # fmt: skip
            if row.identity not in listed:
                rows.append(row)
    known = {row.identity: row.pka25 for row in measured}
    return [row for row in rows if abs(known.get(row.identity, inf) - row.pka25) > CONTRADICTION * row.sd]
