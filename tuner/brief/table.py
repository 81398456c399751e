"""How does a brief's table name the place of a fault: file, line and key?"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from difflib import get_close_matches
from pathlib import Path
from typing import Any, NoReturn

from tuner.brief.lines import key_lines, line_of
from tuner.errors import BriefError, TunerError
from tuner.library.checks import fail, nearest
from tuner.library.tables import Table, read_text, read_toml

SECTIONS: dict[str, tuple[str, ...]] = {
    "target": ("ph", "tolerance"),
    "medium": (
        "temperature_c",
        "ionic_strength_m",
        "cosolvent",
        "cosolvent_mass_percent",
        "offset",
        "offset_sd",
        "surface_potential_mv",
    ),
    "reagents": ("shelf", "include", "exclude", "switched_off"),
    "groups": ("allow", "forbid", "require"),
    "anchor": ("handles",),
    "limits": (
        "max_steps",
        "max_molar_mass_g_mol",
        "min_substituents",
        "max_substituents",
        "min_clogp",
        "max_clogp",
        "max_tpsa_a2",
        "max_pka_sd",
        "flags",
    ),
    "ranking": (
        "step_costs",
        "hundred_g_mol_costs",
        "flag_costs",
        "rows",
        "diverse",
        "user_objective",
        "user_objective_costs",
    ),
    "search": ("method", "seed", "resolution_pka", "workers"),
    "also": ("ph", "tolerance", "role", "name", "medium"),
}
"""Tables of a brief and their keys."""

TOP_KEYS = ("title", "cores", "overlay", "measured", *SECTIONS)
"""Keys that stand outside every table, and the tables."""


@dataclass(frozen=True, slots=True)
class BriefTable(Table):
    """A table of a brief; every place it names has the line of the key."""

    error: type[TunerError] = BriefError
    lines: Mapping[str, int] = field(default_factory=dict)

    def path_of(self, key: str = "") -> str:
        """Key path as a user would say it, `limits.max_steps`."""
        return ".".join(part for part in (self.key, key) if part)

    def place(self, key: str = "") -> str:
        """File, line where it is known, and key."""
        whole = self.path_of(key)
        line = line_of(whole, self.lines)
        parts = [str(self.path), f"line {line}" if line else "", f"key {whole}" if whole else ""]
        return ", ".join(part for part in parts if part)

    def only(self, *known: str) -> BriefTable:
        """This table, once every key is known; a key of another table is sent there."""
        for key in self.values:
            if key not in known:
                self.fail("the key is not known", key, _remedy(key, known))
        return self

    def table(self, key: str) -> BriefTable:
        """The table under this key; empty where it is absent."""
        value = self._value(key, {}, dict, f"a table: [{self.path_of(key)}] on a line of its own")
        return BriefTable(self.path, self.path_of(key), value, self.error, self.lines)

    def list_of_tables(self, key: str) -> tuple[BriefTable, ...]:
        """The tables written as [[key]]; none where it is absent."""
        value = self._value(key, [], list, f"tables, each under a line [[{key}]]")
        if not all(isinstance(entry, dict) for entry in value):
            self.fail("an entry is not a table", key, f"write each under a line [[{key}]]")
        return tuple(
            BriefTable(self.path, f"{self.path_of(key)}[{n}]", entry, self.error, self.lines)
            for n, entry in enumerate(value, start=1)
        )

    def names(self, key: str) -> tuple[str, ...]:
        """A list of texts, none blank and none twice."""
        found = self.texts(key)
        seen: set[str] = set()
        for entry in found:
            if not entry.strip():
                self.fail("an entry of the list is empty", key, "take it out")
            if entry.strip().casefold() in seen:
                self.fail(f'"{entry}" is listed twice', key, "keep one of them")
            seen.add(entry.strip().casefold())
        return tuple(entry.strip() for entry in found)

    def one_word(self, key: str, options: Sequence[str], default: str) -> str:
        """A text that must be one of `options`."""
        value = self.text(key, default)
        if value not in options:
            self.fail(f'"{value}" is not known here', key, nearest(value, options))
        return value

    def fail(self, what: str, key: str, remedy: str) -> NoReturn:
        """An error at this key."""
        fail(what, self.place(key), remedy, self.error)


def _remedy(key: str, known: Iterable[str]) -> str:
    """Where a key that is not known here might belong."""
    for section, keys in SECTIONS.items():
        if key in keys and section not in ("also",):
            return f"it belongs under [{section}]"
    if key in TOP_KEYS:
        return "it belongs at the top of the file, before the first table"
    close = get_close_matches(key, list(known), n=1, cutoff=0.6)
    elsewhere = {k: section for section, keys in SECTIONS.items() for k in keys if section != "also"}
    other = get_close_matches(key, list(elsewhere), n=1, cutoff=0.75)
    if not close and other:
        return f'did you mean "{other[0]}" under [{elsewhere[other[0]]}]?'
    return nearest(key, known)


def read_brief_table(path: Path) -> BriefTable:
    """The whole file as a table; BriefError where it is absent, empty, no text or no TOML."""
    values: Mapping[str, Any] = read_toml(path, BriefError).values
    return BriefTable(path, "", values, BriefError, key_lines(read_text(path, BriefError)))
