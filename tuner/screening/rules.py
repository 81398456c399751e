"""Which rules of caution are there? Reads `hazards.toml`, a user's own rules laid over the shipped ones."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path

from tuner.errors import LibraryError
from tuner.library.catalogue import Library, split_citation
from tuner.library.checks import nearest
from tuner.library.folders import data_folder
from tuner.library.tables import Table, read_csv, read_toml
from tuner.screening.records import NOTE, SEVERITIES, WITHHOLD, Flag

HAZARDS_FILE = "hazards.toml"
AMINES_FILE = "restricted_amines.csv"
AMINE_COLUMNS = ("number", "name", "cas", "smiles", "source")
LISTED_AMINE = "listed amine"
"""Name of the rule about amines that azo cleavage can release; it stands on a table, not on a pattern."""

OXYGEN_BALANCE = "oxygen balance"
ENERGETIC = "energetic"


@dataclass(frozen=True, slots=True)
class Rule:
    """A rule on patterns: applies where `smarts` match `at_least` times and none of `unless` does."""

    flag: Flag
    smarts: tuple[str, ...]
    at_least: int
    unless: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class OxygenRule:
    """Withheld: `nitro_at_least` nitro groups and an oxygen balance [%] above `limit_percent`."""

    flag: Flag
    limit_percent: float
    nitro_at_least: int


@dataclass(frozen=True, slots=True)
class RestrictedAmine:
    """One amine that no azo dye for skin contact may release."""

    number: int
    name: str
    cas: str
    smiles: str
    source: str


@dataclass(frozen=True)
class HazardRules:
    """All rules: patterns in the order of the file, the oxygen balance, the listed amines."""

    rules: tuple[Rule, ...]
    oxygen: OxygenRule
    amines: tuple[RestrictedAmine, ...]

    @property
    def withholding(self) -> tuple[Rule, ...]:
        """The rules by which a compound is withheld."""
        return tuple(rule for rule in self.rules if rule.flag.severity == WITHHOLD)

    def names(self) -> tuple[str, ...]:
        """Every word that a brief may use for a flag: rules and classes, sorted."""
        flags = [rule.flag for rule in self.rules] + [self.oxygen.flag]
        words = {word for flag in flags for word in (flag.rule, flag.kind)}
        return tuple(sorted(words | {LISTED_AMINE}))


def load_rules(library: Library) -> HazardRules:
    """The rules that go with a library: the shipped ones, and those of the library's overlay folder laid over
    them.

    A user's folder may add rules and amines, and replace any rule that does not withhold; what is withheld as
    energetic stays withheld.

    Raises
    ------
    LibraryError
        A malformed rule, an unknown source, or a user's rule in place of a withholding one.
    """
    return _rules(library.overlay, tuple(library.sources), library.version)


@lru_cache(maxsize=8)
def _rules(overlay: Path | None, sources: tuple[str, ...], version: str) -> HazardRules:
    """Read and join; `version` only tells the cache when to forget."""
    shipped = read_toml(data_folder() / HAZARDS_FILE).only("oxygen_balance", "rule")
    rules = {name: _rule(name, table, sources, "") for name, table in shipped.table("rule").tables().items()}
    amines = {a.smiles: a for a in _amines(data_folder() / AMINES_FILE, sources)}
    if overlay is not None and (overlay / HAZARDS_FILE).is_file():
        own = read_toml(overlay / HAZARDS_FILE).only("rule").table("rule").tables()
        for name, table in own.items():
            if name in rules and rules[name].flag.severity == WITHHOLD:
                what = f'rule "{name}" withholds energetic compounds and cannot be replaced'
                raise LibraryError(what, place=table.place(), remedy="give your rule another name")
            rules[name] = _rule(name, table, sources, "own")
    if overlay is not None and (overlay / AMINES_FILE).is_file():
        amines |= {a.smiles: a for a in _amines(overlay / AMINES_FILE, sources)}
    oxygen = _oxygen(shipped.table("oxygen_balance"), sources)
    return HazardRules(tuple(rules.values()), oxygen, tuple(amines.values()))


def _rule(name: str, table: Table, sources: tuple[str, ...], default_source: str) -> Rule:
    """One table `[rule.NAME]`."""
    table.only("class", "severity", "words", "smarts", "at_least", "unless", "source")
    smarts = table.texts("smarts", None)
    if not smarts:
        raise LibraryError(
            "the rule has no pattern", place=table.place("smarts"), remedy="write at least one SMARTS"
        )
    flag = Flag(
        rule=name,
        kind=table.text("class"),
        severity=table.one_of("severity", SEVERITIES, NOTE),
        words=table.text("words"),
        source=_known_source(table, sources, default_source),
    )
    return Rule(flag, smarts, table.whole("at_least", 1, 99, 1), table.texts("unless"))


def _oxygen(table: Table, sources: tuple[str, ...]) -> OxygenRule:
    """The table `[oxygen_balance]`."""
    table.only("limit_percent", "nitro_at_least", "words", "source")
    flag = Flag(OXYGEN_BALANCE, ENERGETIC, WITHHOLD, table.text("words"), _known_source(table, sources, ""))
    return OxygenRule(flag, table.number("limit_percent", -1000, 0), table.whole("nitro_at_least", 1, 99))


def _known_source(table: Table, sources: tuple[str, ...], default: str) -> str:
    """The citation of a table, whose keys must exist."""
    citation = table.text("source", default or None)
    for key, _ in split_citation(citation):
        if key not in sources:
            raise LibraryError(
                f'there is no source "{key}"', place=table.place("source"), remedy=nearest(key, sources)
            )
    return citation


def _amines(path: Path, sources: tuple[str, ...]) -> tuple[RestrictedAmine, ...]:
    """The table of listed amines."""
    found: dict[str, RestrictedAmine] = {}
    for row in read_csv(path, AMINE_COLUMNS):
        amine = RestrictedAmine(
            number=row.whole("number", 1, 999),
            name=row.text("name"),
            cas=row.maybe("cas"),
            smiles=row.text("smiles"),
            source=row.text("source"),
        )
        for key, _ in split_citation(amine.source):
            if key not in sources:
                what = f'there is no source "{key}"'
                raise LibraryError(what, place=row.place("source"), remedy=nearest(key, sources))
        if amine.smiles in found:
            remedy = "keep one of the two rows"
            raise LibraryError(f'"{amine.smiles}" stands twice', place=row.place("smiles"), remedy=remedy)
        found[amine.smiles] = amine
    return tuple(found.values())
