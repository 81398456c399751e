"""Is this TOML file a sound brief, and what does it ask for?

Everything that can be told from the file and the library alone is checked here, so that a slip is named
with its line before any chemistry starts. What needs a structure (SMILES, SMARTS, reach of the cores) is
checked by the design space.
"""

from __future__ import annotations

import hashlib
from pathlib import Path

from tuner.brief.consistency import check_consistency
from tuner.brief.records import Brief, Medium, Reagents
from tuner.brief.sections import (
    read_also,
    read_cores,
    read_groups,
    read_limits,
    read_medium,
    read_ranking,
    read_reagents,
    read_search,
    read_target,
)
from tuner.brief.table import TOP_KEYS, BriefTable, read_brief_table
from tuner.errors import TunerError
from tuner.library import load_library
from tuner.library.stock import shelf_path


def read_brief(path: Path) -> Brief:
    """The brief in this file, checked.

    Parameters
    ----------
    path : Path
        A TOML file. Paths inside it are relative to its folder.

    Raises
    ------
    BriefError
        Any fault, with file, line, key, and what would be right.
    LibraryError
        A fault in the user's own library folder that the brief names.
    """
    table = read_brief_table(path)
    table.only(*TOP_KEYS)
    overlay = _own_path(table, "overlay", folder=True)
    library = load_library(overlay)
    medium = read_medium(table.table("medium"), Medium())
    if not table.has("target"):
        table.fail("the table is missing", "target", "it must hold ph and tolerance")
    brief = Brief(
        title=table.text("title", path.stem),
        target=read_target(table.table("target"), medium),
        also=tuple(read_also(entry, medium) for entry in table.list_of_tables("also")),
        cores=read_cores(table, library),
        reagents=_with_shelf(table, read_reagents(table.table("reagents"))),
        groups=read_groups(table.table("groups"), table.table("anchor"), library),
        limits=read_limits(table.table("limits")),
        ranking=read_ranking(table.table("ranking")),
        search=read_search(table.table("search")),
        overlay=overlay,
        measured=_own_path(table, "measured", folder=False),
        path=path,
        sha256=hashlib.sha256(path.read_bytes()).hexdigest(),
    )
    check_consistency(brief, table, library)
    return brief


def _own_path(table: BriefTable, key: str, *, folder: bool) -> Path | None:
    """A file or folder of the user's, relative to the brief; None where the key is absent."""
    if not table.has(key):
        return None
    path = table.path.parent / table.text(key)
    if folder and not path.is_dir():
        table.fail(f'there is no folder "{table.text(key)}" beside the brief', key, "check the name")
    if not folder and not path.is_file():
        table.fail(f'there is no file "{table.text(key)}" beside the brief', key, "check the name")
    return path


def _with_shelf(table: BriefTable, reagents: Reagents) -> Reagents:
    """The reagents, once the shelf is known to exist; contents are read by the synthesis."""
    try:
        shelf_path(reagents.shelf, table.path.parent)
    except TunerError as fault:
        table.table("reagents").fail(fault.what, "shelf", fault.remedy)
    return reagents


def place_in_brief(path: Path, key: str) -> str:
    """File, line and key in words, for a fault that another room found in a sound brief."""
    return read_brief_table(path).place(key)
