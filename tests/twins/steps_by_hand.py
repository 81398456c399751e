"""A second planner for the tests: the rules read anew, one pattern at a time, with plain loops and no arrays.

Patterns are dicts of label -> short name. The geometry of each core is written down by hand: six places
around the ring, each of them a label, what the core carries there, a bond to a fused ring, or the reporting
group.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

from tuner.library.reactions import Protection, Reaction
from tuner.synthesis.setting import Workshop

Key = tuple[tuple[str, str], ...]
State = tuple[Key, bool]  # pattern, and whether the reporting group is protected

PULL = {"strong": -4, "medium": -3, "weak": -1, "halogen": 1, "meta": 2, "strong meta": 3, "": 0}
RANK = ("strong", "medium", "weak", "halogen")
WITHDRAWING = (
    "NO2 NO CN CHO COMe COEt COiPr COPr COtBu COPh COCF3 CO2Me CO2Et SO2Me SO2Et SO2Ph SO2CF3 SO2NMe2 SO2NEt2"
)
FORBIDDEN_TAGS = {"azide", "diazonium", "nitrate ester", "nitramine", "peroxide"}
MOST_NITRO_GROUPS = 2


@dataclass(frozen=True)
class Place:
    """One place of a ring. `kind`: label, carried, fused or reporting; `name`: the label, or the group
    carried.
    """

    kind: str
    name: str = ""


def around(text: str) -> tuple[Place, ...]:
    """Six places: `OH!` reporting, `2` a label, `=NO2` carried, `~Me` a fused ring, `.` hydrogen."""
    found = []
    for word in text.split():
        if word.endswith("!"):
            found.append(Place("reporting"))
        elif word.startswith("="):
            found.append(Place("carried", word[1:]))
        elif word.startswith("~"):
            found.append(Place("fused", word[1:]))
        elif word == ".":
            found.append(Place("carried", "H"))
        else:
            found.append(Place("label", word))
    assert len(found) == 6
    return tuple(found)


@dataclass(frozen=True)
class HandCore:
    """What the rules know of a core. `finishing`: a joined dye, on which groups are only exchanged."""

    series: str
    rings: tuple[tuple[Place, ...], ...]
    outside: tuple[str, ...] = ()
    destroyed_by: tuple[str, ...] = ()
    finishing: bool = False

    @property
    def labels(self) -> tuple[str, ...]:
        """All open positions."""
        return (*(p.name for ring in self.rings for p in ring if p.kind == "label"), *self.outside)


class HandPlanner:
    """Breadth-first search, one pattern after the other."""

    def __init__(self, bench: Workshop, core: HandCore, groups: Sequence[str]) -> None:
        self.core = core
        self.tabulated = bench.library.substituents
        self.groups = [g for g in groups if not set(self.tabulated[g].hazards) & FORBIDDEN_TAGS]
        self.roles = {role for item in bench.shelf for role in item.roles}
        self.structures = {item.smiles for item in bench.shelf}
        self.steering = bench.book.steering
        self.spelled = bench.spelled
        self.rules = [rule for rule in bench.book.reactions if self.usable(rule)]
        self.way = self.protection(bench.book.protections)

    # ------------------------------------------------------------------ what may be used at all

    def usable(self, rule: Reaction) -> bool:
        """Roles on the shelf, conditions that the core stands, nothing that the core itself carries in the
        way.
        """
        carried = {p.name for ring in self.core.rings for p in ring if p.kind == "carried" and p.name != "H"}
        if not set(rule.roles) <= self.roles or set(rule.tags) & set(self.core.destroyed_by):
            return False
        if carried & set(rule.spoils) or (self.core.finishing and rule.kind != "exchange"):
            return False
        return not ((rule.all_at_once or rule.one_of_two) and carried & set(rule.takes))

    def protection(self, ways: Sequence[Protection]) -> Protection | None:
        """The first temporary group that fits and can be put on and taken off."""
        for way in ways:
            fits = self.core.series in way.series and not self.core.finishing
            if fits and {*way.roles_on, *way.roles_off} <= self.roles:
                return way
        return None

    def manner(self, rule: Reaction) -> str:
        """How the rule stands to the free reporting group."""
        if self.core.series == "phenol":
            return rule.on_phenol
        return rule.on_tertiary_amine if self.core.series.startswith("nn_") else rule.on_amine

    def offered(self, rule: Reaction) -> list[str]:
        """Groups that the rule gives with the bottles at hand."""
        found = []
        for group, bottle in rule.gives.items():
            if group in ("H", *self.groups) and (not bottle or self.spelled(bottle, "") in self.structures):
                found.append(group)
        return found

    # ------------------------------------------------------------------ one ring

    def steers(self, short: str) -> str:
        """How a group directs."""
        if short == "H":
            return ""
        family = f"family:{self.tabulated[short].family}"
        return self.steering.get(short) or self.steering.get(family, "weak")

    def standing(self, place: Place, pattern: Mapping[str, str], protected: bool) -> str:
        """How the group at a place directs."""
        if place.kind == "reporting":
            return self.way.steers if protected and self.way else "strong"
        return self.steers(self.group(place, pattern))

    @staticmethod
    def group(place: Place, pattern: Mapping[str, str]) -> str:
        """What stands at a place."""
        if place.kind == "label":
            return pattern.get(place.name, "H")
        return "reporting" if place.kind == "reporting" else place.name

    def burden(self, ring: Sequence[Place], pattern: Mapping[str, str], protected: bool) -> int:
        """Sum of pulls on the ring."""
        return sum(PULL[self.standing(place, pattern, protected)] for place in ring)

    def attacked(
        self, rule: Reaction, ring: Sequence[Place], pattern: Mapping[str, str], protected: bool
    ) -> list[str]:
        """Labels with hydrogen at which the rule attacks."""
        if self.burden(ring, pattern, protected) > rule.burden:
            return []
        led = [self.standing(place, pattern, protected) for place in ring]
        best = next((rank for rank in RANK if rank in led), None)
        found = []
        for k, place in enumerate(ring):
            if place.kind != "label" or place.name in pattern:
                continue
            if best is None:
                pulled = [PULL[led[(k + step) % 6]] >= 2 for step in (1, 3, 5)]
                good = not any(pulled) and rule.places != "ortho"
            else:
                good = any(self.leads(rule, ring, pattern, k, j) for j in range(6) if led[j] == best)
            if good and not self.shut(rule, ring, pattern, k):
                found.append(place.name)
        return found

    def leads(
        self, rule: Reaction, ring: Sequence[Place], pattern: Mapping[str, str], k: int, donor: int
    ) -> bool:
        """Whether a donor sends the rule to place k."""
        apart = (k - donor) % 6
        if apart == 3:
            return rule.places != "ortho"
        if apart not in (1, 5):
            return False
        if self.is_beta_of_naphthalene(ring, k, donor):
            return False
        opposite = self.group(ring[(donor + 3) % 6], pattern)
        return not (rule.places == "para first" and not rule.floods and opposite == "H")

    def is_beta_of_naphthalene(self, ring: Sequence[Place], k: int, donor: int) -> bool:
        """Only cores with a fused benzene ring would know this; none of them is written down here."""
        return False

    def shut(self, rule: Reaction, ring: Sequence[Place], pattern: Mapping[str, str], k: int) -> bool:
        """Beside a very large group, or between two groups."""
        beside = [ring[(k + 1) % 6], ring[(k - 1) % 6]]
        for place in beside:
            short = self.group(place, pattern)
            if short != "reporting" and self.tabulated[short].bulk >= 3:
                return True
        taken = [p.kind != "fused" and self.group(p, pattern) != "H" for p in beside]
        return all(taken) and not rule.floods

    def activated(self, label: str, pattern: Mapping[str, str]) -> bool:
        """Whether an acceptor stands ortho or para."""
        for ring in self.core.rings:
            for k, place in enumerate(ring):
                if place.kind == "label" and place.name == label:
                    near = [ring[(k + step) % 6] for step in (1, 3, 5)]
                    if any(self.group(p, pattern) in WITHDRAWING.split() for p in near if p.kind != "fused"):
                        return True
        return False

    def beside_reporting(self, label: str) -> bool:
        """Whether a label is ortho to the reporting group."""
        for ring in self.core.rings:
            for k, place in enumerate(ring):
                if place.name == label and "reporting" in (ring[(k + 1) % 6].kind, ring[k - 1].kind):
                    return True
        return False

    # ------------------------------------------------------------------ steps

    def steps(self, pattern: dict[str, str], protected: bool) -> Iterator[tuple[dict[str, str], bool]]:
        """Everything that one step makes."""
        if self.way:
            spoils = self.way.spoils_off if protected else self.way.spoils_on
            if not set(pattern.values()) & set(spoils):
                yield pattern, not protected
        for rule in self.rules:
            manner = self.manner(rule)
            if (
                set(pattern.values()) & set(rule.spoils)
                or manner == "never"
                or (manner == "protect" and not protected)
            ):
                continue
            for made in self.offered(rule):
                for change in self.changes(rule, pattern, protected):
                    after = {**pattern, **dict.fromkeys(change, made)}
                    yield {k: g for k, g in after.items() if g != "H"}, protected

    def changes(self, rule: Reaction, pattern: dict[str, str], protected: bool) -> list[list[str]]:
        """Sets of labels that the rule changes together."""
        if rule.kind == "on nitrogen":
            return []
        if rule.kind == "ring substitution":
            return self.substitutions(rule, pattern, protected)
        there = [label for label, group in pattern.items() if group in rule.takes]
        if rule.all_at_once:
            alike = len({pattern[label] for label in there}) == 1
            lit = not rule.needs_acceptor or all(self.activated(label, pattern) for label in there)
            return [there] if there and alike and lit else []
        if rule.needs_acceptor:
            there = [label for label in there if self.activated(label, pattern)]
        if rule.one_of_two:
            first = [label for label in there if self.beside_reporting(label)] or there
            return [[label] for label in first] if len(there) == 2 else []
        return [there] if len(there) == 1 else []

    def substitutions(self, rule: Reaction, pattern: dict[str, str], protected: bool) -> list[list[str]]:
        """Places that an electrophile takes, on the ring that is richest in electrons."""
        loads = [self.burden(ring, pattern, protected) for ring in self.core.rings]
        found: list[list[str]] = []
        for ring, load in zip(self.core.rings, loads, strict=True):
            labels = self.attacked(rule, ring, pattern, protected) if load == min(loads) else []
            if not rule.floods:
                found += [[label] for label in labels]
            elif labels and not protected and any(place.kind == "reporting" for place in ring):
                found.append(labels)
        return found

    def harmless(self, pattern: Mapping[str, str]) -> bool:
        """No more than two nitro groups."""
        carried = [p.name for ring in self.core.rings for p in ring if p.kind in ("carried", "fused")]
        return [*pattern.values(), *carried].count("NO2") <= MOST_NITRO_GROUPS

    def search(self, start: Mapping[Key, int], max_steps: int) -> dict[State, int]:
        """Least counts of all patterns, free and protected."""
        allowed = {*self.groups, "H"}
        found: dict[State, int] = {}
        for level in range(max_steps + 1):
            new = {(key, False) for key, n in start.items() if n == level and {g for _, g in key} <= allowed}
            if level:
                for key, protected in [state for state, n in found.items() if n == level - 1]:
                    for after, layer in self.steps(dict(key), protected):
                        if self.harmless(after):
                            new.add((tuple(sorted(after.items())), layer))
            for state in new:
                found.setdefault(state, level)
        return found
