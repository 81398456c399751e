"""Which reactions may be used, what do they do, and what do they need?

Rules are data: `libraries/reactions.toml`. This module turns them into records and names every slip by file
and key. What a rule means on a pattern of groups is the business of the synthesis room.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from functools import lru_cache
from pathlib import Path
from typing import Any

from tuner.errors import LibraryError
from tuner.library.checks import nearest
from tuner.library.folders import data_folder
from tuner.library.load import OWN_SOURCE
from tuner.library.records import Substituent
from tuner.library.tables import Table, read_toml

REACTIONS_FILE = "reactions.toml"
KINDS = ("ring substitution", "exchange", "on nitrogen")
MANNERS = ("free", "protect", "never")
"""How a rule stands to the free reporting group: tolerates it, needs it protected, or cannot be used."""
STEERING = ("strong", "medium", "weak", "halogen", "meta", "strong meta")
PLACES = ("para first", "ortho or para", "ortho")


@dataclass(frozen=True, slots=True)
class Reaction:
    """One rule that changes one position (or all alike positions at once) of a pattern.

    `gives` maps the short name of the group that results to the SMILES of the bottle that brings it ("" where
    the roles suffice).
    """

    name: str
    title: str
    kind: str
    takes: tuple[str, ...]
    gives: Mapping[str, str]
    roles: tuple[str, ...]
    tags: tuple[str, ...]  # conditions, compared with a core's `destroyed_by`
    spoils: frozenset[str]  # groups that must not stand anywhere
    needs_acceptor: bool  # exchange only where a strong acceptor stands ortho or para
    all_at_once: bool  # an exchange that converts every such group of the pattern in the same step
    one_of_two: (
        bool  # an exchange of one of exactly two such groups, first the one beside the reporting group
    )
    floods: bool  # a ring substitution that fills every activated place at once
    places: str
    burden: int  # ring substitution: the deactivation it still overcomes
    on_phenol: str
    on_amine: str
    on_tertiary_amine: str
    cautions: tuple[str, ...]
    source: str
    note: str = ""


@dataclass(frozen=True, slots=True)
class Half:
    """One half of a joining step: a core with labels carried over, or a template met by bottles only."""

    core: str = ""
    template: str = ""
    labels: Mapping[str, str] = field(default_factory=dict)  # label on the dye -> label on the half
    fixed: Mapping[str, str] = field(default_factory=dict)  # label on the half -> short name it must bear
    free: tuple[str, ...] = ()  # labels on the half that must bear hydrogen
    spoils: frozenset[str] = frozenset()  # groups that must not stand on this half
    twin: bool = False  # a second copy of the half before it: the dye carries the same groups on both arms


@dataclass(frozen=True, slots=True)
class Joining:
    """A step that makes a core from halves; `cores` says how each core falls into halves.

    `steps` is 1, or 0 where nothing is done and one core is merely seen as another with a fixed group.
    """

    name: str
    title: str
    roles: tuple[str, ...]
    spoils: frozenset[str]
    cores: Mapping[str, tuple[Half, ...]]
    cautions: tuple[str, ...]
    source: str
    note: str = ""
    steps: int = 1
    place: str = ""


@dataclass(frozen=True, slots=True)
class Protection:
    """A temporary group on the reporting atom: one step on, one step off.

    `spoils_on` and `spoils_off` are groups of the molecule that putting on and taking off would change too.
    """

    name: str
    series: tuple[str, ...]
    steers: str
    roles_on: tuple[str, ...]
    roles_off: tuple[str, ...]
    spoils_on: frozenset[str]
    spoils_off: frozenset[str]
    source: str


@dataclass(frozen=True)
class ReactionBook:
    """All rules of a library."""

    roles: Mapping[str, str]
    steering: Mapping[str, str]  # short name or family:NAME -> one of STEERING
    reactions: tuple[Reaction, ...]
    joinings: tuple[Joining, ...]
    protections: tuple[Protection, ...]

    def without(self, switched_off: Iterable[str]) -> ReactionBook:
        """The book without rules whose names are given."""
        off = set(switched_off)
        return ReactionBook(
            self.roles,
            self.steering,
            tuple(r for r in self.reactions if r.name not in off),
            tuple(j for j in self.joinings if j.name not in off),
            tuple(p for p in self.protections if p.name not in off),
        )

    def under(self, top: ReactionBook) -> ReactionBook:
        """This book with the rules of another laid over it: the same name replaces, a new name is added."""

        def laid(below: tuple[Any, ...], above: tuple[Any, ...]) -> tuple[Any, ...]:
            return tuple({rule.name: rule for rule in (*below, *above)}.values())

        return ReactionBook(
            {**self.roles, **top.roles},
            {**self.steering, **top.steering},
            laid(self.reactions, top.reactions),
            laid(self.joinings, top.joinings),
            laid(self.protections, top.protections),
        )

    @property
    def names(self) -> tuple[str, ...]:
        """Names of all rules, for lists and for `switched_off`."""
        rules: tuple[Reaction | Joining | Protection, ...] = (
            *self.reactions,
            *self.joinings,
            *self.protections,
        )
        return tuple(rule.name for rule in rules)


def load_reactions(
    substituents: Mapping[str, Substituent], path: Path | None = None, overlay: Path | None = None
) -> ReactionBook:
    """Read and check a rule file (default: the shipped one), a user's own rules laid over it.

    Parameters
    ----------
    substituents : mapping short name -> Substituent
        The groups that rules may name.
    overlay : Path, optional
        The user's folder; its `reactions.toml`, if there is one, may leave out shipped roles and sources.

    Raises
    ------
    LibraryError
        Unknown group, role, kind or key; an exchange that gives what it takes; a rule without source.
    """
    file = path or data_folder() / REACTIONS_FILE
    groups = tuple(substituents.values())
    shipped = _read(file, groups, (), "")
    own = overlay / REACTIONS_FILE if overlay is not None else None
    if own is None or not own.is_file():
        return shipped
    return shipped.under(_read(own, groups, tuple(shipped.roles.items()), OWN_SOURCE))


@lru_cache(maxsize=8)
def _read(
    path: Path, groups: tuple[Substituent, ...], known_roles: tuple[tuple[str, str], ...], default_source: str
) -> ReactionBook:
    table = read_toml(path, error=LibraryError)
    table.only("roles", "steering", "reaction", "joining", "protection")
    reader = _Reader(groups, table, dict(known_roles), default_source)
    return ReactionBook(
        roles=reader.roles,
        steering=reader.steering(table.table("steering")),
        reactions=tuple(reader.reaction(n, t) for n, t in reader.inner(table.table("reaction"))),
        joinings=tuple(reader.joining(n, t) for n, t in reader.inner(table.table("joining"))),
        protections=tuple(reader.protection(n, t) for n, t in reader.inner(table.table("protection"))),
    )


class _Reader:
    """Turns tables into records, with the known groups and roles at hand."""

    def __init__(
        self,
        groups: tuple[Substituent, ...],
        table: Table,
        known_roles: Mapping[str, str],
        default_source: str,
    ) -> None:
        self.groups = {g.short: g for g in groups}
        self.families = {g.family for g in groups}
        roles = table.table("roles")
        self.roles = {**known_roles, **{name: roles.text(name) for name in roles.values}}
        self.default_source = default_source or None

    @staticmethod
    def inner(table: Table) -> list[tuple[str, Table]]:
        return [(name, table.table(name)) for name in table.values]

    def steering(self, table: Table) -> dict[str, str]:
        found = {}
        for name in table.values:
            self.expand((name,), table.place(name))
            found[name] = table.one_of(name, STEERING)
        return found

    def expand(self, names: Iterable[str], place: str) -> frozenset[str]:
        """Short names behind short names and `family:NAME`."""
        found: set[str] = set()
        for name in names:
            if name.startswith("family:"):
                family = name.removeprefix("family:")
                if family not in self.families:
                    raise LibraryError(
                        f"unknown family '{family}'", place=place, remedy=nearest(family, self.families)
                    )
                found |= {g.short for g in self.groups.values() if g.family == family}
            elif name in self.groups:
                found.add(name)
            else:
                raise LibraryError(f"unknown group '{name}'", place=place, remedy=nearest(name, self.groups))
        return frozenset(found)

    def role_list(self, table: Table, key: str = "roles") -> tuple[str, ...]:
        roles = table.texts(key)
        for role in roles:
            if role not in self.roles:
                remedy = nearest(role, self.roles)
                raise LibraryError(f"unknown role '{role}'", place=table.place(key), remedy=remedy)
        return tuple(roles)

    def reaction(self, name: str, table: Table) -> Reaction:
        table.only(
            "title",
            "kind",
            "takes",
            "gives",
            "roles",
            "tags",
            "spoils",
            "needs_acceptor",
            "all_at_once",
            "one_of_two",
            "floods",
            "places",
            "burden",
            "on_phenol",
            "on_amine",
            "on_tertiary_amine",
            "cautions",
            "source",
            "note",
        )
        gives = table.table("gives")
        made = {short: gives.text(short, default="") for short in gives.values}
        takes = self.expand(table.texts("takes"), table.place("takes"))
        kind = table.one_of("kind", KINDS)
        self.expand(made, table.place("gives"))
        if set(made) & takes:
            raise LibraryError(
                f"'{name}' gives what it takes: {', '.join(sorted(set(made) & takes))}",
                place=table.place("gives"),
                remedy="name different groups in takes and gives",
            )
        if (kind == "exchange") != bool(takes):
            raise LibraryError(
                f"'{name}' of kind {kind} {'lacks' if kind == 'exchange' else 'must not have'} 'takes'",
                place=table.place("takes"),
                remedy="an exchange names the groups it takes; the other kinds start from hydrogen",
            )
        return Reaction(
            name=name,
            title=table.text("title"),
            kind=kind,
            takes=tuple(sorted(takes)),
            gives=made,
            roles=self.role_list(table),
            tags=tuple(table.texts("tags")),
            spoils=self.expand(table.texts("spoils"), table.place("spoils")),
            needs_acceptor=table.flag("needs_acceptor", default=False),
            all_at_once=table.flag("all_at_once", default=False),
            one_of_two=table.flag("one_of_two", default=False),
            floods=table.flag("floods", default=False),
            places=table.one_of("places", PLACES, default="ortho or para"),
            burden=table.whole("burden", -10, 10, default=0),
            on_phenol=table.one_of("on_phenol", MANNERS, default="free"),
            on_amine=table.one_of("on_amine", MANNERS, default="free"),
            on_tertiary_amine=table.one_of("on_tertiary_amine", MANNERS, default="free"),
            cautions=tuple(table.texts("cautions")),
            source=table.text("source", self.default_source),
            note=table.text("note", default=""),
        )

    def joining(self, name: str, table: Table) -> Joining:
        table.only("title", "roles", "spoils", "cores", "cautions", "source", "note", "steps")
        cores = {}
        for core, spec in self.inner(table.table("cores")):
            spec.only("first", "twin", "second", "third")
            cores[core] = tuple(self.half(t, name) for name, t in spec.tables().items())
        return Joining(
            name,
            table.text("title"),
            self.role_list(table),
            self.expand(table.texts("spoils"), table.place("spoils")),
            cores,
            tuple(table.texts("cautions")),
            table.text("source", self.default_source),
            table.text("note", default=""),
            table.whole("steps", 0, 1, default=1),
            table.place("cores"),
        )

    def half(self, table: Table, name: str) -> Half:
        table.only("core", "template", "labels", "fixed", "free", "spoils")
        labels, fixed = table.table("labels"), table.table("fixed")
        bears = {label: fixed.text(label) for label in fixed.values}
        self.expand(bears.values(), table.place("fixed"))
        return Half(
            core=table.text("core", default=""),
            template=table.text("template", default=""),
            labels={label: labels.text(label) for label in labels.values},
            fixed=bears,
            free=tuple(table.texts("free")),
            spoils=self.expand(table.texts("spoils"), table.place("spoils")),
            twin=name == "twin",
        )

    def protection(self, name: str, table: Table) -> Protection:
        table.only("series", "steers", "roles_on", "roles_off", "spoils_on", "spoils_off", "source")
        return Protection(
            name,
            tuple(table.texts("series")),
            table.one_of("steers", STEERING),
            self.role_list(table, "roles_on"),
            self.role_list(table, "roles_off"),
            self.expand(table.texts("spoils_on"), table.place("spoils_on")),
            self.expand(table.texts("spoils_off"), table.place("spoils_off")),
            table.text("source", self.default_source),
        )
