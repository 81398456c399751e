"""Are the structures in a user's own library folder sound, and spelled as the program spells them?

The library room reads tables without a chemistry toolkit, so it takes structures as written. Shipped tables
are held to canonical spelling by tests; a user's rows are read and respelled here. A group that is not
spelled canonically would otherwise never be found again in a molecule.
"""

from __future__ import annotations

from dataclasses import replace
from functools import lru_cache
from pathlib import Path

from tuner.errors import LibraryError, TunerError
from tuner.library import Library, load_library
from tuner.library.load import OWN_SOURCE
from tuner.library.read_acidity import read_measured
from tuner.library.records import MeasuredPka
from tuner.structure.cores import prepare_core
from tuner.structure.groups import canonical_group
from tuner.structure.molecule import identity_key, read_smarts


def load_checked_library(overlay: Path | None = None) -> Library:
    """As `load_library`, with every structure of the user's folder read, and its groups spelled canonically.

    Raises
    ------
    TunerError
        As `load_library`; a group, core or measured compound that is no sound structure, with file and row or
        key; a group that is, once respelled, the same as another one.
    """
    library = load_library(overlay)
    return library if overlay is None else _checked(library.overlay, library.version)


@lru_cache(maxsize=8)
def _checked(overlay: Path | None, version: str) -> Library:
    """Check what the overlay brought; `version` only tells the cache when to forget."""
    library, shipped = load_library(overlay), load_library()
    groups = dict(library.substituents)
    for short, group in library.substituents.items():
        if shipped.substituents.get(short) != group:
            place = f"{library.places['substituents', short]}, column smiles"
            groups[short] = replace(group, smiles=canonical_group(group.smiles, place=place))
    _refuse_twins(library, {short: group.smiles for short, group in groups.items()})
    for name, core in library.cores.items():
        if shipped.cores.get(name) != core:
            place = library.places["cores", name]
            _check_core(core.reporting_smarts, place)
            try:
                prepare_core(core)
            except TunerError as fault:
                raise LibraryError(fault.what, place=f"{place}.smiles", remedy=fault.remedy) from None
    known = set(shipped.measured)
    for value in library.measured:
        if value not in known:
            identity_key(value.smiles, place=f"{library.places['measured', value.smiles]}, column smiles")
    return library.with_substituents(groups)


def read_checked_measured(path: Path) -> tuple[MeasuredPka, ...]:
    """A user's file of measured pKa's (see `library.read_own_measured`), every structure read.

    Raises
    ------
    TunerError
        As `read_own_measured`; a structure that cannot be treated; a compound that stands twice, however
        it is spelled: two measurements of one compound are to be averaged by whoever made them.
    """
    places: dict[tuple[str, str], str] = {}
    values = read_measured(path, OWN_SOURCE, places)
    seen: dict[str, str] = {}
    for smiles in values:
        place = places["measured", smiles]
        first = seen.setdefault(identity_key(smiles, place=f"{place}, column smiles"), smiles)
        if first != smiles:
            remedy = "keep one row, with the mean"
            raise LibraryError(f'"{smiles}" is the same compound as "{first}"', place=place, remedy=remedy)
    return tuple(values.values())


def _check_core(reporting_smarts: str, place: str) -> None:
    """The pattern that picks the reporting atom must be one."""
    if reporting_smarts:
        read_smarts(reporting_smarts, place=f"{place}.reporting_smarts")


def _refuse_twins(library: Library, smiles: dict[str, str]) -> None:
    """An error where two groups are one structure."""
    seen: dict[str, str] = {}
    for short, structure in smiles.items():
        first = seen.setdefault(structure, short)
        if first != short:
            raise LibraryError(
                f'group "{short}" is the same structure as "{first}"',
                place=library.places["substituents", short],
                remedy="to replace a shipped group, give the row its short name",
            )
