"""How is a core read from the few lines that a chemist writes about it?"""

from __future__ import annotations

import re
from pathlib import Path

from tuner.errors import LibraryError
from tuner.library.read_acidity import PKA_HIGH, PKA_LOW, Places, read_value
from tuner.library.records import RELATIONS, Core, Position, Value
from tuner.library.tables import Table, read_toml

OPEN_POSITION = re.compile(r"\[\*:(\d+)\]")
COLUMNS = ("", "meta", "para", "para_minus", "ortho", "nitrogen")
SCATTER_LIMIT = 3.0
"""pKa units; a core whose analogs stray further has no model."""
TRANSMISSION_LIMIT = 2.0
"""Largest |tau|: a bridge that passes on twice the effect of a direct position does not exist."""

CORE_KEYS = (
    "title", "smiles", "series", "labels", "reporting_smarts", "parent_pka", "scatter", "positions",
    "assembly", "survives", "destroyed_by", "colours", "cautions", "note", "source",
)  # fmt: skip


def read_cores(path: Path, default_source: str, places: Places) -> dict[str, Core]:
    """`cores.toml`: tables `[core."NAME"]` as name -> Core; `default_source` fills an absent source."""
    found: dict[str, Core] = {}
    for name, table in read_toml(path).only("core").table("core").tables().items():
        found[name] = _core(name, table.only(*CORE_KEYS), default_source)
        places["cores", name] = table.place()
    return found


def _core(name: str, table: Table, default_source: str) -> Core:
    """One table as a core."""
    smiles = table.text("smiles")
    labels = _labels(table, smiles)
    pka, pka_source, temperature = _parent(table.table("parent_pka"), default_source)
    return Core(
        name=name,
        title=table.text("title", name),
        smiles=smiles,
        series=table.text("series"),
        labels=labels,
        reporting_smarts=table.text("reporting_smarts", ""),
        parent_pka=pka,
        parent_pka_source=pka_source,
        parent_temperature_c=temperature,
        scatter=table.number("scatter", 0.0, SCATTER_LIMIT, 0.0),
        given_positions=_positions(table.table("positions"), labels),
        assembly=table.texts("assembly"),
        survives=table.texts("survives"),
        destroyed_by=table.texts("destroyed_by"),
        colours=_colours(table),
        cautions=table.texts("cautions"),
        note=table.text("note", ""),
        source=table.text("source", default_source or None),
    )


def _labels(table: Table, smiles: str) -> dict[int, str]:
    """Locant of each open position `[*:n]`: as given under `labels`, else the number itself."""
    numbers = [int(n) for n in OPEN_POSITION.findall(smiles)]
    if not numbers:
        raise LibraryError(
            "the core has no open position", place=table.place("smiles"), remedy="write one as [*:2]"
        )
    given = table.table("labels")
    for key in given.values:
        if not key.isdigit() or int(key) not in numbers:
            remedy = f"the open positions are {', '.join(str(n) for n in sorted(set(numbers)))}"
            raise LibraryError("no open position has this number", place=given.place(key), remedy=remedy)
    labels = {n: given.text(str(n), str(n)) for n in numbers}
    if len(set(numbers)) < len(numbers) or len(set(labels.values())) < len(labels):
        place = table.place("smiles")
        raise LibraryError(
            "two open positions are called the same", place=place, remedy="number each one apart"
        )
    return labels


def _parent(table: Table, default_source: str) -> tuple[Value, str, float]:
    """Measured pKa with hydrogen at every open position, its source, and its temperature in degC."""
    if not table.values:
        return Value(), "", 25.0
    table.only("value", "sd", "source", "temperature_c")
    source = table.text("source", default_source or None)
    return read_value(table, PKA_LOW, PKA_HIGH), source, table.number("temperature_c", -20, 120, 25.0)


def _positions(table: Table, labels: dict[int, str]) -> dict[str, Position]:
    """Positions about which the author of the core says something himself."""
    found: dict[str, Position] = {}
    for label, entry in table.tables().items():
        if label not in labels.values():
            remedy = f"the open positions are {', '.join(labels.values())}"
            raise LibraryError("the core has no such open position", place=entry.place(), remedy=remedy)
        entry.only("relation", "transmission", "transmission_sd", "column")
        found[label] = Position(
            label=label,
            relation=entry.one_of("relation", RELATIONS),
            transmission=entry.number("transmission", -TRANSMISSION_LIMIT, TRANSMISSION_LIMIT, 1.0),
            transmission_sd=entry.number("transmission_sd", 0.0, TRANSMISSION_LIMIT, 0.0),
            column=entry.one_of("column", COLUMNS, ""),
            given=True,
        )
    return found


def _colours(table: Table) -> tuple[str, str]:
    """Words for the colour of the acid form and of the base form; two empty texts where not told."""
    words = table.texts("colours")
    if len(words) not in (0, 2):
        remedy = 'write ["colour of the acid form", "colour of the base form"]'
        raise LibraryError(f"there are {len(words)} colours", place=table.place("colours"), remedy=remedy)
    return (words[0], words[1]) if words else ("", "")
