"""How is a user's table of molecules read, and written back with columns added?

Any comma-separated table with a column `smiles` is taken. Every input column is kept; where one bears the
name of a column that the program writes, it is kept as `given_NAME`.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from pathlib import Path

from tuner.errors import TunerError
from tuner.library.tables import read_text

SMILES = "smiles"
GIVEN = "given_"


@dataclass(frozen=True, slots=True)
class Molecules:
    """A table as it was read. `rows` hold one text per column; `lines` where each row ends in the file."""

    path: Path
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    lines: tuple[int, ...]
    odd: frozenset[int]  # rows that had too few or too many cells

    def smiles(self, row: int) -> str:
        """Structure of one row."""
        return self.rows[row][self.columns.index(SMILES)].strip()

    def place(self, row: int) -> str:
        """Where a row stands."""
        return f"{self.path}, line {self.lines[row]}"


def read_molecules(path: Path) -> Molecules:
    """The table in this file.

    Raises
    ------
    TunerError
        File absent, empty, no text; column `smiles` missing; a column named twice; no row.
    """
    reader = csv.reader(
        io.StringIO(read_text(path, TunerError), newline=""), skipinitialspace=True, strict=True
    )
    try:
        records = [(reader.line_num, record) for record in reader if any(cell.strip() for cell in record)]
    except csv.Error as fault:
        raise TunerError(f"the table cannot be read ({fault})", place=f"{path}, line {reader.line_num}",
                         remedy="save it as comma-separated values") from None  # fmt: skip
    if not records:
        raise TunerError("the file is empty", place=path, remedy="its first line must name the columns")
    columns = tuple(name.strip() for name in records[0][1])
    _check_columns(columns, path)
    if len(records) == 1:
        raise TunerError("the table has a header but no row", place=path, remedy="add at least one molecule")
    width = len(columns)
    rows = tuple(tuple((cells + [""] * width)[:width]) for _, cells in records[1:])
    odd = frozenset(n for n, (_, cells) in enumerate(records[1:]) if len(cells) != width)
    return Molecules(path, columns, rows, tuple(line for line, _ in records[1:]), odd)


def _check_columns(columns: Sequence[str], path: Path) -> None:
    """The column of structures is there, and no name stands twice."""
    if SMILES not in columns:
        if len(columns) == 1 and (";" in columns[0] or "\t" in columns[0]):
            raise TunerError("the columns are not separated by commas", place=path,
                             remedy="save the table as comma-separated values")  # fmt: skip
        close = [name for name in columns if name.casefold() == SMILES]
        remedy = (
            f'write "{SMILES}" in small letters, not "{close[0]}"'
            if close
            else f"there are {', '.join(columns[:8])}"
        )
        raise TunerError('column "smiles" is missing', place=path, remedy=remedy)
    twice = sorted({name for name in columns if columns.count(name) > 1})
    if twice:
        raise TunerError(f'column "{twice[0]}" stands twice', place=path, remedy="rename one of them")


def renamed(columns: Sequence[str], added: Sequence[str]) -> tuple[str, ...]:
    """Names under which the input columns are kept beside the added ones.

    >>> renamed(("smiles", "pka"), ("pka", "note"))
    ('smiles', 'given_pka')
    """
    taken = set(added) | {name for name in columns if name not in added}
    kept = []
    for name in columns:
        new = name
        while new in taken and (new in added or new != name):
            new = GIVEN + new
        taken.add(new)
        kept.append(new)
    return tuple(kept)


def with_columns(molecules: Molecules, added: Sequence[str], rows: Iterable[Sequence[str]]) -> bytes:
    """The table with columns added, in the order of the input, as UTF-8 CSV."""
    text = io.StringIO()
    table = csv.writer(text, lineterminator="\n")
    table.writerow([*renamed(molecules.columns, added), *added])
    for given, new in zip(molecules.rows, rows, strict=True):
        table.writerow([*given, *new])
    return text.getvalue().encode("utf-8")
