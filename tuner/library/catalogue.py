"""What do the tables hold, and how is an entry found by what a chemist calls it?"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TypeVar

from tuner.errors import LibraryError
from tuner.library.checks import nearest
from tuner.library.records import Core, MeasuredPka, Series, Source, Substituent

Entry = TypeVar("Entry")


@dataclass(frozen=True)
class Library:
    """Every table that the acidity model needs, the user's own folder laid over the shipped one.

    Parameters
    ----------
    substituents : mapping short name -> Substituent, in the order of the file
    series : mapping name -> Series
    cores : mapping name -> Core
    sources : mapping key -> Source
    measured : tuple of MeasuredPka (pKa units, temperature in degC)
    overlay : the user's own folder, or None
    version : twelve hexadecimal digits that stand for the state of all data files
    places : (kind of table, key) -> file and row or key where the record was read, for errors
    """

    substituents: Mapping[str, Substituent]
    series: Mapping[str, Series]
    cores: Mapping[str, Core]
    sources: Mapping[str, Source]
    measured: tuple[MeasuredPka, ...]
    overlay: Path | None
    version: str
    places: Mapping[tuple[str, str], str] = field(default_factory=dict, repr=False, compare=False)
    _by_word: Mapping[str, str] = field(default_factory=dict, repr=False, compare=False)

    def find_substituent(self, text: str) -> Substituent:
        """The group with this short name, common name or canonical attachment SMILES.

        Case counts only where two names differ in nothing else. Raises LibraryError with the nearest name.
        """
        if text in self.substituents:
            return self.substituents[text]
        short = self._by_word.get(text) or self._by_word.get(text.strip().casefold())
        if short is None:
            names = [*self.substituents, *(group.name for group in self.substituents.values())]
            raise LibraryError(f'there is no group "{text}"', remedy=nearest(text, names))
        return self.substituents[short]

    def find_by_smiles(self, smiles: str) -> Substituent | None:
        """The group with this canonical attachment SMILES (one `*`), or None."""
        short = self._by_word.get(smiles)
        group = self.substituents.get(short) if short is not None else None
        return group if group is not None and group.smiles == smiles else None

    def find_core(self, text: str) -> Core:
        """The core with this name or title (case aside); LibraryError with the nearest name."""
        return _find(text, self.cores, "core")

    def find_series(self, text: str) -> Series:
        """The reaction series with this name or title (case aside); LibraryError with the nearest name."""
        return _find(text, self.series, "series")

    def with_substituents(self, groups: Mapping[str, Substituent]) -> Library:
        """A copy with other groups (short name -> Substituent), and the index of words made anew."""
        return replace(self, substituents=groups, _by_word=index_words(groups.values()))

    def families(self) -> tuple[str, ...]:
        """Families of groups, sorted."""
        return tuple(sorted({group.family for group in self.substituents.values()}))

    def reference(self, citation: str) -> str:
        """Full reference of a citation as rows write it: keys separated by semicolons, a place after a blank.

        Raises LibraryError for a key that is not in `sources`.
        """
        texts = []
        for key, place in split_citation(citation):
            if key not in self.sources:
                raise LibraryError(f'there is no source "{key}"', remedy=nearest(key, self.sources))
            texts.append(self.sources[key].text + (f" ({place})" if place else ""))
        return "; ".join(texts)


def split_citation(citation: str) -> tuple[tuple[str, str], ...]:
    """A citation as (key, place) pairs.

    >>> split_citation("Hansch1991; Serjeant1979 p. 120")
    (('Hansch1991', ''), ('Serjeant1979', 'p. 120'))
    """
    parts = (part.strip() for part in citation.split(";"))
    return tuple((part.split(" ", 1)[0], part.partition(" ")[2].strip()) for part in parts if part)


def index_words(groups: Iterable[Substituent]) -> dict[str, str]:
    """Every word that finds a group -> its short name.

    Exact spellings win over spellings that differ in case; among these the first row of the file wins.
    """
    words: dict[str, str] = {}
    listed = tuple(groups)
    for group in listed:
        words[group.short] = words[group.smiles] = group.short
    for group in listed:
        words.setdefault(group.name, group.short)
    for group in listed:
        words.setdefault(group.name.casefold(), group.short)
        words.setdefault(group.short.casefold(), group.short)
    return words


def _find(text: str, entries: Mapping[str, Entry], kind: str) -> Entry:
    """The entry with this name or title, case aside."""
    if text in entries:
        return entries[text]
    folded = text.strip().casefold()
    for name, entry in entries.items():
        if folded in (name.casefold(), str(getattr(entry, "title", "")).casefold()):
            return entry
    raise LibraryError(f'there is no {kind} "{text}"', remedy=nearest(text, entries))
