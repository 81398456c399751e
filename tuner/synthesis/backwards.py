"""From which patterns does one step lead to a given one? The lattice read backwards, for routes in words."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import combinations

import numpy as np

from tuner.library.reactions import Reaction
from tuner.library.records import HYDROGEN_SHORT
from tuner.synthesis.lattice import Lattice
from tuner.synthesis.moves import MoveMaker
from tuner.synthesis.records import NO_ROUTE
from tuner.synthesis.setting import FREE, PROTECTED, Pattern

MOST_AT_ONCE = 4


@dataclass(frozen=True, slots=True)
class Transition:
    """One step on a lattice. `rule` is None where the protecting group is put on or taken off."""

    rule: Reaction | None
    before: Pattern
    before_layer: int
    after: Pattern
    after_layer: int


class Tracer:
    """Reads one lattice backwards."""

    def __init__(self, lattice: Lattice) -> None:
        self.lattice = lattice
        frame = lattice.frame
        self.maker = MoveMaker(lattice.stage, frame.labels, frame.nitrogen, frame.alphabet)

    def last_steps(self, pattern: Mapping[str, str], layer: int) -> list[Transition]:
        """Every last step of a shortest way to this pattern; none where it is a starting pattern."""
        steps = self.lattice.steps(pattern, layer)
        if steps in (0, NO_ROUTE):
            return []
        found = []
        other = PROTECTED if layer == FREE else FREE
        candidates = {tuple(sorted(p.items())) for p in self._candidates(pattern)}
        near = [dict(p) for p in sorted(candidates) if self.lattice.steps(dict(p), layer) == steps - 1]
        for before in near:
            found += [
                Transition(rule, before, layer, dict(pattern), layer)
                for rule in self._rules(before, pattern, layer)
            ]
        row = self.lattice.frame.row_of(pattern)
        switch = row is not None and self.lattice.steps(pattern, other) == steps - 1
        if row is not None and switch and self.maker.may_switch(row, other)[0]:
            found.append(Transition(None, dict(pattern), other, dict(pattern), layer))
        return found

    def _rules(self, before: Mapping[str, str], after: Mapping[str, str], layer: int) -> list[Reaction]:
        """Rules that lead from one pattern to the other in one step."""
        frame = self.lattice.frame
        here, there = frame.row_of(before), frame.row_of(after)
        if here is None or there is None:
            return []
        here_key, there_key = int(frame.keys(here)[0]), int(frame.keys(there)[0])
        found: dict[str, Reaction] = {}
        for rule, _, change in self.maker.moves(here, layer):
            if np.any(here_key + np.asarray(change) == there_key):
                found.setdefault(rule.name, rule)
        return list(found.values())

    def _candidates(self, pattern: Mapping[str, str]) -> Iterator[Pattern]:
        """Patterns that some rule could have started from; checked forward afterwards."""
        alphabet = self.lattice.frame.alphabet
        by_group: dict[str, list[str]] = {}
        for label in self.lattice.frame.labels:
            by_group.setdefault(pattern.get(label, HYDROGEN_SHORT), []).append(label)
        for group, labels in by_group.items():
            sources: set[str] = set()
            for rule, _, gives in self.lattice.stage.rules:
                if group in gives:
                    sources |= set(rule.takes) if rule.kind == "exchange" else {HYDROGEN_SHORT}
            for size in range(1, min(MOST_AT_ONCE, len(labels)) + 1):
                for changed in combinations(labels, size):
                    for source in sorted(sources & set(alphabet.shorts)):
                        before = {**pattern, **dict.fromkeys(changed, source)}
                        yield {k: g for k, g in before.items() if g != HYDROGEN_SHORT}

    def ways(self, pattern: Mapping[str, str], layer: int = FREE, most: int = 1) -> list[list[Transition]]:
        """Up to `most` shortest ways to a pattern, each from its start to the end, in a fixed order."""
        steps = self.lattice.steps(pattern, layer)
        if steps == NO_ROUTE:
            return []
        lasts = self.last_steps(pattern, layer)
        if not lasts:
            return [[]]
        found: list[list[Transition]] = []
        for last in sorted(lasts, key=_plainest_first):
            for way in self.ways(last.before, last.before_layer, most - len(found)):
                found.append([*way, last])
                if len(found) >= most:
                    return found
        return found


def _plainest_first(step: Transition) -> tuple[int, str, list[tuple[str, str]]]:
    """Order of equal steps: fewer cautions first, then by name."""
    if step.rule is None:
        return (0, "", sorted(step.before.items()))
    return (len(step.rule.cautions), step.rule.name, sorted(step.before.items()))
