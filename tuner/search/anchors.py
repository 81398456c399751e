"""What does a handle become once the dye is bound through it to its carrier?

The pKa that counts is that of the bound form; what is made and weighed is the free dye. The table is a
file, so that a chemist can add a handle or correct what it becomes.
"""

from __future__ import annotations

from collections.abc import Mapping
from functools import lru_cache
from pathlib import Path

from tuner.errors import BriefError
from tuner.library import Library, data_folder
from tuner.library.catalogue import split_citation
from tuner.library.checks import nearest
from tuner.library.records import Substituent
from tuner.library.tables import read_csv

ANCHORS_FILE = "anchors.csv"
COLUMNS = ("handle", "bound", "how", "source")


def bound_forms(library: Library) -> Mapping[str, Substituent]:
    """Short name of each handle -> the group that stands for its bound form.

    Raises
    ------
    LibraryError
        A row that names an unknown group or source.
    """
    return {row: library.substituents[bound] for row, bound in _rows(library)}


def bound_form(handle: str, library: Library) -> Substituent:
    """The bound form of one handle; BriefError where the table has none."""
    forms = bound_forms(library)
    if handle not in forms:
        what = f'it is not known what the handle "{handle}" becomes when it is bound'
        raise BriefError(what, place="key anchor.handles", remedy=nearest(handle, forms))
    return forms[handle]


def _rows(library: Library) -> tuple[tuple[str, str], ...]:
    """Pairs handle, bound form; those of the user's folder laid over the shipped ones."""
    found: dict[str, str] = {}
    for folder in (data_folder(), library.overlay):
        if folder is not None and (folder / ANCHORS_FILE).is_file():
            found |= dict(_read(folder / ANCHORS_FILE, tuple(library.substituents), tuple(library.sources)))
    return tuple(found.items())


@lru_cache(maxsize=8)
def _read(path: Path, groups: tuple[str, ...], sources: tuple[str, ...]) -> tuple[tuple[str, str], ...]:
    """One file, every group and source checked."""
    rows = []
    for row in read_csv(path, COLUMNS, ()):
        handle, bound = row.one_of("handle", groups), row.one_of("bound", groups)
        for key, _ in split_citation(row.text("source")):
            if key not in sources:
                raise row.error(f'there is no source "{key}"', place=f"{path}", remedy=nearest(key, sources))
        rows.append((handle, bound))
    return tuple(rows)
