"""What stands in the library folders, the user's own laid over the shipped one?"""

from __future__ import annotations

from collections.abc import Mapping
from functools import lru_cache
from pathlib import Path

from tuner.errors import LibraryError
from tuner.library.catalogue import Library, index_words, split_citation
from tuner.library.checks import nearest
from tuner.library.folders import data_files, data_folder, data_version, require_folder
from tuner.library.read_acidity import read_measured, read_series, read_substituents
from tuner.library.read_cores import read_cores
from tuner.library.records import Core, MeasuredPka, Series, Source, Substituent
from tuner.library.tables import read_toml

SUBSTITUENTS_FILE = "substituents.csv"
SERIES_FILE = "series.toml"
CORES_FILE = "cores.toml"
SOURCES_FILE = "sources.toml"
MEASURED_FILE = "measured_pka.csv"

OWN_SOURCE = "own"
"""Source of a row in a user's folder that names none."""


def load_library(overlay: Path | None = None) -> Library:
    """The shipped tables, with those of the user's folder laid over them row by row.

    A row (or TOML table) of the user's folder replaces the shipped one of the same key (short name of a
    group, name of a series or core, key of a source, SMILES of a measured value) and is added where there is
    none. A user's row may leave `source` empty, which then reads "own". The result is kept until a file
    changes.

    Raises
    ------
    LibraryError
        Anything wrong in any file, with file, row or key, and what would be right.
    """
    return read_library(data_folder(), overlay)


def read_library(shipped: Path, overlay: Path | None = None) -> Library:
    """Like `load_library`, with any complete folder in place of the shipped one."""
    folder = None if overlay is None else require_folder(overlay)
    return _read_once(shipped, folder, (_stamp(shipped), _stamp(folder) if folder else ()))


Stamp = tuple[tuple[str, int, int], ...]


def _stamp(folder: Path) -> Stamp:
    """Name, time of change and size of every data file: another stamp means that the folder is read anew."""
    return tuple((str(p), (s := p.stat()).st_mtime_ns, s.st_size) for p in data_files(folder))


@lru_cache(maxsize=8)
def _read_once(shipped: Path, overlay: Path | None, stamps: tuple[Stamp, Stamp]) -> Library:
    """Read and join; the stamps only tell the cache when to forget."""
    base = _read_folder(shipped, own=False)
    top = _read_folder(overlay, own=True) if overlay is not None else _Tables({}, {}, {}, {}, {})
    joined = base.under(top)
    _check_references(joined)
    _check_unique_groups(joined)
    return Library(
        substituents=joined.substituents,
        series=joined.series,
        cores=joined.cores,
        sources=joined.sources,
        measured=tuple(joined.measured.values()),
        overlay=overlay,
        version=data_version(shipped, overlay),
        places=joined.places,
        _by_word=index_words(joined.substituents.values()),
    )


class _Tables:
    """The tables of one folder, each a mapping from key to record; `places` says where a record was read."""

    def __init__(
        self,
        substituents: dict[str, Substituent],
        series: dict[str, Series],
        cores: dict[str, Core],
        sources: dict[str, Source],
        measured: dict[str, MeasuredPka],
        places: dict[tuple[str, str], str] | None = None,
    ) -> None:
        self.substituents = substituents
        self.series = series
        self.cores = cores
        self.sources = sources
        self.measured = measured
        self.places = places or {}

    def under(self, top: _Tables) -> _Tables:
        """These tables with those of `top` laid over them."""
        return _Tables(
            {**self.substituents, **top.substituents},
            {**self.series, **top.series},
            {**self.cores, **top.cores},
            {**self.sources, **top.sources},
            {**self.measured, **top.measured},
            {**self.places, **top.places},
        )

    def place(self, kind: str, key: str) -> str:
        """Where this record was read, in words."""
        return self.places.get((kind, key), "")


def _read_folder(folder: Path, *, own: bool) -> _Tables:
    """All tables of one folder; in a user's folder each file may be absent and a source may be left out."""
    default = OWN_SOURCE if own else ""
    places: dict[tuple[str, str], str] = {}

    def wanted(name: str) -> Path | None:
        path = folder / name
        return path if path.is_file() or not own else None

    groups = read_substituents(path, default, places) if (path := wanted(SUBSTITUENTS_FILE)) else {}
    series = read_series(path, default, places) if (path := wanted(SERIES_FILE)) else {}
    cores = read_cores(path, default, places) if (path := wanted(CORES_FILE)) else {}
    sources = read_sources(path) if (path := wanted(SOURCES_FILE)) else {}
    measured = read_measured(path, default, places) if (path := wanted(MEASURED_FILE)) else {}
    return _Tables(groups, series, cores, sources, measured, places)


def read_sources(path: Path) -> dict[str, Source]:
    """`sources.toml`: one table `[sources]` with lines `key = "full reference"`; a key is one word."""
    table = read_toml(path).only("sources").table("sources")
    for key in table.values:
        if not key or " " in key or ";" in key:
            raise LibraryError(
                "a source key is one word", place=table.place(key), remedy='write it like "Hansch1991"'
            )
    return {key: Source(key, table.text(key)) for key in table.values}


def read_own_measured(path: Path) -> tuple[MeasuredPka, ...]:
    """A user's file of measured pKa's: CSV with columns smiles and pka, and optionally those of
    `measured_pka.csv`.

    A row without `source` gets the source "own". The SMILES are taken as written; the structure room checks
    them.
    """
    return tuple(read_measured(path, OWN_SOURCE, {}).values())


def _check_references(tables: _Tables) -> None:
    """Every source key, series name and other form that a row names must exist."""
    cited: list[tuple[str, str, str]] = [
        ("substituents", k, g.source) for k, g in tables.substituents.items()
    ]
    cited += [("series", k, s.source) for k, s in tables.series.items()]
    for key, core in tables.cores.items():
        cited += [("cores", key, core.source), ("cores", key, core.parent_pka_source)]
    cited += [("measured", k, m.source) for k, m in tables.measured.items()]
    for kind, key, citation in cited:
        for word, _ in split_citation(citation):
            _need(word, tables.sources, "source", tables.place(kind, key))
    for key, group in tables.substituents.items():
        place = tables.place("substituents", key)
        if group.ionises:
            _need(group.ionises, tables.series, "series", f"{place}, column ionises")
        if group.other_form:
            _need(group.other_form, tables.substituents, "group", f"{place}, column other_form")
    for key, core in tables.cores.items():
        _need(core.series, tables.series, "series", tables.place("cores", key))


def _need(word: str, known: Mapping[str, object], kind: str, place: str) -> None:
    """An error where `word` is not among the known keys."""
    if word not in known:
        raise LibraryError(f'there is no {kind} "{word}"', place=place, remedy=nearest(word, known))


def _check_unique_groups(tables: _Tables) -> None:
    """No two groups may share a name or a structure, also after the user's rows are laid over."""
    seen: dict[tuple[str, str], str] = {}
    for short, group in tables.substituents.items():
        for what, word in (("name", group.name), ("smiles", group.smiles)):
            first = seen.setdefault((what, word), short)
            if first != short:
                raise LibraryError(
                    f'groups "{first}" and "{short}" have the same {what} {word}',
                    place=tables.place("substituents", short),
                    remedy="to replace a shipped group, give the row its short name",
                )
