"""What stands on the shelf: which compounds and reagents may be used, after the brief's additions and
removals?

A shelf is a CSV with one bottle per row. Roles are words that the reactions ask for; the vocabulary is the
table `[roles]` of `reactions.toml`. Structures are opaque text in this room: whoever may use the chemistry
toolkit passes a function that spells them canonically, and gets a shelf whose SMILES can be compared.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import replace
from functools import lru_cache
from pathlib import Path
from typing import Protocol

from tuner.errors import LibraryError, TunerError
from tuner.library.checks import closest, nearest, yes_or_no
from tuner.library.folders import data_folder
from tuner.library.records import StockItem
from tuner.library.tables import Row, read_csv, read_toml

ROLE_PREFIX = "role:"
SHELF_FOLDER = "stock"
SHELF_ENDING = "_shelf.csv"
REACTIONS_FILE = "reactions.toml"
SHELF_NEEDED = ("name", "smiles")
SHELF_OPTIONAL = ("roles", "price_per_mol", "in_stock", "note")
PRICE_LIMIT = 1e9
"""A price per mole beyond this is a slip, in any currency."""


Canonical = Callable[..., str]
"""A function (smiles, *, place="") -> canonical SMILES that names `place` in its error."""


class ReagentChoice(Protocol):
    """The part of a brief that says what may be used."""

    @property
    def shelf(self) -> str:
        """Name of a shipped shelf, or path of a CSV."""

    @property
    def include(self) -> tuple[str, ...]:
        """Names, SMILES or `role:NAME` to add."""

    @property
    def exclude(self) -> tuple[str, ...]:
        """Names, SMILES or `role:NAME` to take away."""


def as_written(smiles: str, *, place: str = "") -> str:
    """The SMILES itself: stands in where no chemistry toolkit is at hand."""
    return smiles


def read_roles(path: Path | None = None) -> dict[str, str]:
    """Role -> what it means, from the table `[roles]` of a reaction file (default: the shipped one)."""
    table = read_toml(path or data_folder() / REACTIONS_FILE).table("roles")
    return {role: table.text(role) for role in table.values}


def shelf_names() -> tuple[str, ...]:
    """Names of the shipped shelves, sorted."""
    found = (data_folder() / SHELF_FOLDER).glob(f"*{SHELF_ENDING}")
    return tuple(sorted(path.name.removesuffix(SHELF_ENDING) for path in found))


def shelf_path(name_or_path: str | Path, base: Path | None = None) -> Path:
    """The file of a shelf: a shipped name, or a path (relative to `base`, the folder of the brief)."""
    text = str(name_or_path)
    if text in shelf_names():
        return data_folder() / SHELF_FOLDER / f"{text}{SHELF_ENDING}"
    path = Path(text) if base is None else base / text
    if path.is_file():
        return path
    remedy = f"name a CSV file or a shipped shelf ({', '.join(shelf_names())})"
    raise LibraryError(f'there is no shelf "{text}"', remedy=remedy)


def read_shelf(
    name_or_path: str | Path,
    *,
    base: Path | None = None,
    canonical: Canonical = as_written,
    roles: Iterable[str] | None = None,
) -> tuple[StockItem, ...]:
    """All bottles of a shelf, in the order of the file, also those out of stock.

    Parameters
    ----------
    name_or_path : name of a shipped shelf, or path of a CSV with the columns name and smiles, and optionally
    roles,
        price_per_mol (any one currency), in_stock (yes/no, empty counts as yes) and note
    base : folder that a relative path starts from
    canonical : spells SMILES canonically; raises TunerError where one cannot be read
    roles : the vocabulary (default: `read_roles()`)

    A row of a user's shelf without roles takes those of the same compound on the shipped shelves.

    Raises
    ------
    TunerError
        No such shelf, malformed table, structure that cannot be read, unknown role, compound or name twice.
    """
    path = shelf_path(name_or_path, base)
    known = tuple(read_roles() if roles is None else roles)
    items = tuple(_item(row, known, canonical) for row in read_csv(path, SHELF_NEEDED, SHELF_OPTIONAL))
    _refuse_repeats(items, path)
    if path.parent == data_folder() / SHELF_FOLDER or all(item.roles for item in items):
        return items
    usual = {item.smiles: item.roles for item in shipped_stock(canonical)}
    return tuple(item if item.roles else replace(item, roles=usual.get(item.smiles, ())) for item in items)


def _item(row: Row, known_roles: tuple[str, ...], canonical: Canonical) -> StockItem:
    """One row as a bottle."""
    roles = row.listing("roles")
    for role in roles:
        if role not in known_roles:
            remedy = nearest(role, known_roles)
            raise LibraryError(f'there is no role "{role}"', place=row.place("roles"), remedy=remedy)
    return StockItem(
        name=row.text("name"),
        smiles=canonical(row.text("smiles"), place=row.place("smiles")),
        roles=roles,
        price_per_mol=row.number("price_per_mol", 0.0, PRICE_LIMIT),
        in_stock=yes_or_no(row.maybe("in_stock", "yes"), row.place("in_stock")),
        note=row.maybe("note"),
        row=row.line,
    )


def _refuse_repeats(items: tuple[StockItem, ...], path: Path) -> None:
    """An error where a name (case aside) or a structure stands twice."""
    names: dict[str, StockItem] = {}
    structures: dict[str, StockItem] = {}
    for item in items:
        first = names.setdefault(item.name.casefold(), item)
        same = structures.setdefault(item.smiles, item)
        for other in (first, same):
            if other is not item:
                what = f'"{item.name}" is the same compound as "{other.name}" in row {other.row}'
                if other is first:
                    what = f'"{item.name}" stands already in row {other.row}'
                raise LibraryError(what, place=f"{path}, row {item.row}", remedy="keep one of the two rows")


@lru_cache(maxsize=4)
def shipped_stock(canonical: Canonical = as_written) -> tuple[StockItem, ...]:
    """Every compound of the shipped shelves once, in the order of the shelves' names and rows."""
    found: dict[str, StockItem] = {}
    for name in shelf_names():
        for item in read_shelf(name, canonical=canonical):
            found.setdefault(item.smiles, item)
    return tuple(found.values())


def apply_reagents(
    reagents: ReagentChoice, *, base: Path | None = None, canonical: Canonical = as_written
) -> tuple[StockItem, ...]:
    """What may be used: the shelf's bottles in stock, with the brief's `include` added and its `exclude`
    taken away.

    An entry of either list is a name, a SMILES, or `role:NAME`. What `include` names is looked for on the
    shelf first (this brings in a bottle marked as out of stock), then on the shipped shelves; a SMILES that
    is on none of them is added as a compound without a role. `exclude` is applied last.

    Raises
    ------
    TunerError
        As `read_shelf`; an entry that means nothing; the same entry in both lists; a shelf left empty.
    """
    shelf = read_shelf(reagents.shelf, base=base, canonical=canonical)
    both = sorted(set(reagents.include) & set(reagents.exclude))
    if both:
        raise LibraryError(
            f'"{both[0]}" is both included and excluded', remedy="keep it in one of the two lists"
        )
    chosen = {item.smiles: item for item in shelf if item.in_stock}
    pool = {item.smiles: item for item in (*shipped_stock(canonical), *shelf)}
    for entry in reagents.include:
        for item in _meant(entry, pool, canonical, "include", may_be_new=True):
            chosen[item.smiles] = replace(item, in_stock=True)
    for entry in reagents.exclude:
        for item in _meant(entry, {**pool, **chosen}, canonical, "exclude", may_be_new=False):
            chosen.pop(item.smiles, None)
    if not chosen:
        raise LibraryError("no reagent is left", remedy="shorten the list exclude or name another shelf")
    return tuple(chosen.values())


def _meant(
    entry: str, pool: dict[str, StockItem], canonical: Canonical, key: str, *, may_be_new: bool
) -> tuple[StockItem, ...]:
    """The bottles that one entry of a list means."""
    place = f"key reagents.{key}"
    if entry.startswith(ROLE_PREFIX):
        role = entry.removeprefix(ROLE_PREFIX).strip()
        found = tuple(item for item in pool.values() if role in item.roles)
        if not found:
            known = {role for item in pool.values() for role in item.roles}
            raise LibraryError(f'no reagent has the role "{role}"', place=place, remedy=nearest(role, known))
        return found
    folded = entry.strip().casefold()
    named = tuple(item for item in pool.values() if item.name.casefold() == folded)
    if named:
        return named
    try:
        smiles = canonical(entry.strip(), place=place)
    except TunerError:
        smiles = ""
    if smiles in pool:
        return (pool[smiles],)
    if smiles and may_be_new and canonical is not as_written:
        return (StockItem(name=smiles, smiles=smiles, roles=()),)
    close = closest(entry, [item.name for item in pool.values()])
    remedy = f'did you mean "{close}"?' if close else "write a name from the shelf, a SMILES or role:NAME"
    raise LibraryError(f'"{entry}" is no reagent that is known here', place=place, remedy=remedy)
