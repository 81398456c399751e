"""How is a table read from a file, so that a slip is named by file, row or key?

Two strict readers: `read_csv` for tables of rows and `read_toml` for named tables. Both know nothing of
chemistry and use the standard library only. In CSV files lines that start with `#` are comments, the first
other line names the columns, `;` separates the entries of a list, and an empty cell means unknown.
"""

from __future__ import annotations

import csv
import tomllib
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from math import inf, nan
from pathlib import Path
from typing import Any

from tuner.errors import LibraryError, TunerError
from tuner.library.checks import fail, in_range, nearest, number, one_of, yes_or_no

LIST_SEPARATOR = ";"
COMMENT = "#"
MAX_FILE_BYTES = 64 * 1024 * 1024
"""A table larger than this (64 MiB) is refused: it is not a table that a chemist edits."""


@dataclass(frozen=True, slots=True)
class Row:
    """One row of a CSV table, with the line it stands on (counted from 1, comments included)."""

    path: Path
    line: int
    cells: Mapping[str, str]
    error: type[TunerError] = LibraryError

    def place(self, column: str = "") -> str:
        """Where this cell stands, in words."""
        return f"{self.path}, row {self.line}" + (f", column {column}" if column else "")

    def has(self, column: str) -> bool:
        """Whether the cell holds anything."""
        return bool(self.cells.get(column, ""))

    def text(self, column: str) -> str:
        """The cell; an error where it is empty."""
        value = self.cells.get(column, "")
        if not value:
            fail("the cell is empty", self.place(column), "a value is needed here", self.error)
        return value

    def maybe(self, column: str, default: str = "") -> str:
        """The cell, or `default` where it is empty or the column is absent."""
        return self.cells.get(column, "") or default

    def number(self, column: str, low: float = -inf, high: float = inf, default: float = nan) -> float:
        """The cell as a number within [low, high]; `default` where it is empty."""
        value = self.cells.get(column, "")
        return number(value, self.place(column), low, high, self.error) if value else default

    def whole(self, column: str, low: int, high: int, default: int = 0) -> int:
        """The cell as a whole number within [low, high]; `default` where it is empty."""
        value = self.number(column, low, high, float(default))
        if value != int(value):
            fail(
                f"{value:g} is not a whole number",
                self.place(column),
                "write it without a fraction",
                self.error,
            )
        return int(value)

    def flag(self, column: str) -> bool:
        """The cell as yes (True) or no (False, also where empty)."""
        return yes_or_no(self.cells.get(column, ""), self.place(column), self.error)

    def listing(self, column: str) -> tuple[str, ...]:
        """The entries of a cell separated by semicolons, blanks trimmed."""
        parts = (part.strip() for part in self.cells.get(column, "").split(LIST_SEPARATOR))
        return tuple(part for part in parts if part)

    def one_of(self, column: str, options: Sequence[str]) -> str:
        """The cell, which must be one of `options`."""
        return one_of(self.text(column), options, self.place(column), self.error)


def read_csv(
    path: Path, required: Sequence[str], optional: Sequence[str] = (), error: type[TunerError] = LibraryError
) -> tuple[Row, ...]:
    """All rows of a CSV table.

    Parameters
    ----------
    path : Path
    required, optional : column names; a missing required one and any other column is an error
    error : the kind of TunerError to raise

    Raises
    ------
    TunerError
        File absent, empty, not UTF-8; wrong columns; a row with too many or too few cells; no row at all.
    """
    lines = _numbered_records(path, error)
    try:
        line, header = next(lines)
    except StopIteration:
        fail(
            "the file is empty",
            str(path),
            f"its first line must name the columns {', '.join(required)}",
            error,
        )
    columns = [name.strip() for name in header]
    _check_header(columns, required, optional, f"{path}, row {line}", error)
    rows = tuple(_row(path, n, columns, cells, error) for n, cells in lines)
    if not rows:
        fail("the table has a header but no row", str(path), "add at least one row", error)
    return rows


def _row(path: Path, line: int, columns: list[str], cells: list[str], error: type[TunerError]) -> Row:
    """One record as a row; its length must match the header's."""
    if len(cells) != len(columns):
        fail(
            f"the row has {len(cells)} cells but the header has {len(columns)}",
            f"{path}, row {line}",
            "put a cell that holds a comma between double quotes",
            error,
        )
    return Row(path, line, dict(zip(columns, (cell.strip() for cell in cells), strict=True)), error)


def _check_header(
    columns: list[str], required: Sequence[str], optional: Sequence[str], place: str, error: type[TunerError]
) -> None:
    """Every required column once, no unknown one."""
    if len(columns) == 1 and (";" in columns[0] or "\t" in columns[0]):
        fail(
            "the columns are not separated by commas",
            place,
            "save the table as comma-separated values",
            error,
        )
    known = (*required, *optional)
    for name in columns:
        if name not in known:
            shown = f'column "{name}" is not known' if name else "a column has no name"
            fail(shown, place, nearest(name, known), error)
        if columns.count(name) > 1:
            fail(f'column "{name}" stands twice', place, "keep one of them", error)
    for name in required:
        if name not in columns:
            fail(f'column "{name}" is missing', place, f"the table needs {', '.join(required)}", error)


def _numbered_records(path: Path, error: type[TunerError]) -> Iterator[tuple[int, list[str]]]:
    """Records that are neither blank nor comments, each with its line number; no cell spans lines."""
    # not str.splitlines: it also breaks at form feeds and other signs that editors do not count as line ends
    lines = read_text(path, error).replace("\r\n", "\n").replace("\r", "\n").split("\n")
    for n, line in enumerate(lines, start=1):
        if not line.strip(" ,\t") or line.startswith(COMMENT):
            continue
        try:
            yield n, next(csv.reader([line], strict=True))
        except csv.Error as fault:
            remedy = "close every double quote on the line where it opens"
            fail(f"the row cannot be read ({fault})", f"{path}, row {n}", remedy, error)


def read_text(path: Path, error: type[TunerError] = LibraryError) -> str:
    """The whole file as text (UTF-8, with or without byte-order mark); `error` where that cannot be."""
    try:
        if path.stat().st_size > MAX_FILE_BYTES:
            fail("the file is larger than 64 MiB", str(path), "name the right file", error)
        return path.read_bytes().decode("utf-8-sig")
    except FileNotFoundError:
        fail("the file does not exist", str(path), "check the name and the folder", error)
    except UnicodeDecodeError:
        fail("the file is not UTF-8 text", str(path), "save it with the encoding UTF-8", error)
    except OSError as fault:
        fail(f"the file cannot be read ({fault.strerror})", str(path), "name a readable file", error)


@dataclass(frozen=True, slots=True)
class Table:
    """One TOML table, with the file and the key path it stands under."""

    path: Path
    key: str
    values: Mapping[str, Any]
    error: type[TunerError] = LibraryError

    def place(self, key: str = "") -> str:
        """Where this key stands, in words."""
        whole = ".".join(part for part in (self.key, key) if part)
        return f"{self.path}, key {whole}" if whole else str(self.path)

    def only(self, *known: str) -> Table:
        """This table, once every key in it is one of `known`."""
        for key in self.values:
            if key not in known:
                fail("the key is not known", self.place(key), nearest(key, known), self.error)
        return self

    def has(self, key: str) -> bool:
        """Whether the key is there."""
        return key in self.values

    def text(self, key: str, default: str | None = None) -> str:
        """A string; an error where it is absent without a default, or needed and blank."""
        value = self._value(key, default, str, "a text between double quotes")
        if default is None and not value.strip():
            fail("the text is empty", self.place(key), "a text is needed here", self.error)
        return str(value)

    def number(self, key: str, low: float = -inf, high: float = inf, default: float | None = None) -> float:
        """A finite number within [low, high]; the default is not checked."""
        if key not in self.values and default is not None:
            return default
        value = self._value(key, None, (int, float), "a number without quotes")
        return in_range(float(value), self.place(key), low, high, self.error)

    def whole(self, key: str, low: int, high: int, default: int | None = None) -> int:
        """A whole number within [low, high]."""
        if key not in self.values and default is not None:
            return default
        value = self._value(key, None, int, "a whole number without quotes")
        return int(in_range(value, self.place(key), low, high, self.error))

    def flag(self, key: str, default: bool | None = None) -> bool:
        """true or false."""
        return bool(self._value(key, default, bool, "true or false without quotes"))

    def texts(self, key: str, default: tuple[str, ...] | None = ()) -> tuple[str, ...]:
        """A list of strings."""
        value = self._value(key, default, (list, tuple), 'a list of texts such as ["a", "b"]')
        for entry in value:
            if not isinstance(entry, str):
                fail(
                    f"{entry!r} in the list is not a text",
                    self.place(key),
                    "put it in double quotes",
                    self.error,
                )
        return tuple(value)

    def table(self, key: str) -> Table:
        """The table under this key; empty where it is absent."""
        value = self._value(key, {}, dict, "a table")
        return Table(self.path, ".".join(part for part in (self.key, key) if part), value, self.error)

    def tables(self) -> dict[str, Table]:
        """Every key of this table, each of which must hold a table, in the order of the file."""
        return {key: self.table(key) for key in self.values}

    def listed(self, key: str) -> tuple[Table, ...]:
        """A list of tables (`[[key]]` or `key = [{...}, {...}]`); empty where it is absent."""
        value = self._value(key, (), (list, tuple), "a list of tables such as [{...}, {...}]")
        whole = ".".join(part for part in (self.key, key) if part)
        for n, entry in enumerate(value, start=1):
            if not isinstance(entry, dict):
                what = f"{_shown(entry)} in the list is no table"
                fail(what, f"{self.place(key)}, entry {n}", "write {...}", self.error)
        numbered = enumerate(value, start=1)
        return tuple(Table(self.path, f"{whole} entry {n}", entry, self.error) for n, entry in numbered)

    def one_of(self, key: str, options: Sequence[str], default: str | None = None) -> str:
        """A string that must be one of `options` (or the default)."""
        value = self.text(key, default)
        return value if value == default else one_of(value, options, self.place(key), self.error)

    def _value(self, key: str, default: Any, kind: type | tuple[type, ...], wanted: str) -> Any:
        """The value under `key`, of the wanted kind."""
        if key not in self.values:
            if default is None:
                fail("the key is missing", self.place(key), f"it must hold {wanted}", self.error)
            return default
        value = self.values[key]
        # bool is a kind of int in Python, but true is no number to a chemist
        wrong_bool = isinstance(value, bool) and kind is not bool
        if wrong_bool or not isinstance(value, kind):
            fail(f"{_shown(value)} is of the wrong kind", self.place(key), f"it must be {wanted}", self.error)
        return value


def _shown(value: object) -> str:
    """A value as a short text for an error line."""
    if isinstance(value, bool):
        return str(value).lower()
    shown = f'"{value}"' if isinstance(value, str) else str(value)
    return shown if len(shown) <= 60 else shown[:57] + "..."


def read_toml(path: Path, error: type[TunerError] = LibraryError) -> Table:
    """A TOML file as one table; `error` names file and line where it cannot be read, or where it is empty."""
    try:
        values = tomllib.loads(read_text(path, error))
    except tomllib.TOMLDecodeError as fault:
        fail(f"the file is not valid TOML ({fault})", str(path), "mend the line that is named", error)
    except RecursionError:
        fail("the file is nested too deeply", str(path), "write plain tables", error)
    if not values:
        fail("the file is empty", str(path), "it must hold at least one table", error)
    return Table(path, "", values, error)
