"""What does each rule make of many patterns at once?

A pattern is a row of small integers, one group of the alphabet per open position, and also one whole number,
its key. Each rule takes an array of rows and says which of them it acts on and by how much it changes their
keys. Conditions are look-ups on the rows; nothing is allocated per point of the lattice.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from tuner.library.reactions import Reaction
from tuner.library.records import HYDROGEN_SHORT
from tuner.structure.templates import REPORTING_PLACE, RingPlaces, ring_places
from tuner.synthesis.alphabet import ACCEPTORS, Alphabet
from tuner.synthesis.ring import BURDEN, Code, RingView
from tuner.synthesis.setting import FREE, Stage

NITRO = "NO2"
MOST_NITRO = 3
"""Three ring nitro groups make a compound energetic; such patterns are neither targets nor intermediates."""

Rows = NDArray[np.int16]
Mask = NDArray[np.bool_]
Move = tuple[Reaction, NDArray[np.int64], NDArray[np.int64] | int]
"""A rule, the numbers of the rows that it acts on, and what it adds to the key of each."""


def key_weights(n_positions: int, n_groups: int) -> tuple[int, ...]:
    """What one step of the alphabet at each position adds to the key of a pattern.

    >>> key_weights(3, 10)
    (100, 10, 1)
    """
    return tuple(n_groups ** (n_positions - 1 - axis) for axis in range(n_positions))


@dataclass(frozen=True)
class RuleTable:
    """One rule in terms of an alphabet: look-ups by group."""

    rule: Reaction
    layers: tuple[int, ...]
    takes: tuple[int, ...]  # numbers of groups in the alphabet
    gives: tuple[int, ...]
    is_taken: Mask
    spoils: Mask


class MoveMaker:
    """The rules of a stage over the patterns of its open positions."""

    def __init__(
        self, stage: Stage, labels: Sequence[str], nitrogen: Sequence[bool], alphabet: Alphabet
    ) -> None:
        self.stage = stage
        self.labels = tuple(labels)
        self.nitrogen = tuple(nitrogen)
        self.alphabet = alphabet
        self.weights = key_weights(len(labels), len(alphabet.shorts))
        self.on_ring = [a for a in range(len(labels)) if not nitrogen[a]]
        self.rings = [
            ring for ring in ring_places(stage.core) if any(label in self.labels for label in ring.labels)
        ]
        self._attacks: dict[tuple[str, int, int], dict[str, Mask]] = {}

    @cached_property
    def tables(self) -> tuple[RuleTable, ...]:
        """Rules that can do something within the alphabet."""
        found = []
        index = self.alphabet.index
        for rule, layers, gives in self.stage.rules:
            takes = tuple(index[t] for t in rule.takes if t in index)
            given = tuple(index[g] for g in gives if g in index)
            if given and (takes or rule.kind != "exchange"):
                holds = self.alphabet.holds
                found.append(RuleTable(rule, layers, takes, given, holds(rule.takes), holds(rule.spoils)))
        return tuple(found)

    def harmless(self, rows: Rows) -> Mask:
        """False for patterns that must not be made, not even on the way: three or more nitro groups on the
        rings.
        """
        nitro = self.alphabet.index.get(NITRO, -1)
        return np.asarray((rows == nitro).sum(axis=1) + self._nitro_carried < MOST_NITRO)

    @cached_property
    def _nitro_carried(self) -> int:
        return sum(kind == NITRO for ring in ring_places(self.stage.core) for kind in ring.carried.values())

    def may_switch(self, rows: Rows, layer: int) -> Mask:
        """Whether the protecting group can be taken off (`layer` protected) or put on, and nothing else
        changes.
        """
        way = self.stage.protection
        assert way is not None, "only a stage with a protecting group has a second layer"
        spoils = self.alphabet.holds(way.spoils_on if layer == FREE else way.spoils_off)
        return np.asarray(~spoils[rows].any(axis=1))

    def moves(self, rows: Rows, layer: int) -> Iterator[Move]:
        """Every single step that the rules of a layer allow on these rows."""
        everything = np.arange(len(rows))
        for table in self.tables:
            if layer not in table.layers:
                continue
            spoiled = table.spoils[rows].any(axis=1)
            kept = everything[~spoiled]
            if not len(kept):
                continue
            good = rows[kept]
            for at, change in self._by_kind(table, good, layer):
                if len(at):
                    yield table.rule, kept[at], change

    def _by_kind(
        self, table: RuleTable, rows: Rows, layer: int
    ) -> Iterator[tuple[NDArray[np.int64], NDArray[np.int64] | int]]:
        if table.rule.kind == "ring substitution":
            yield from self._substitute(table, rows, layer)
        elif table.rule.kind == "on nitrogen":
            for axis in range(rows.shape[1]):
                if self.nitrogen[axis]:
                    yield from self._put(table, axis, np.flatnonzero(rows[:, axis] == 0), rows)
        elif table.rule.all_at_once:
            yield from self._exchange_all(table, rows)
        else:
            yield from self._exchange_one(table, rows)

    def _put(
        self, table: RuleTable, axis: int, at: NDArray[np.int64], rows: Rows
    ) -> Iterator[tuple[NDArray[np.int64], NDArray[np.int64]]]:
        """The groups of a rule at one position of some rows."""
        for made in table.gives:
            yield at, (made - rows[at, axis].astype(np.int64)) * self.weights[axis]

    def _taken(self, table: RuleTable, rows: Rows) -> Mask:
        """Where the groups stand on which a rule acts."""
        taken = table.is_taken[rows]
        taken[:, [a for a in range(rows.shape[1]) if self.nitrogen[a]]] = False
        return taken

    def _exchange_all(
        self, table: RuleTable, rows: Rows
    ) -> Iterator[tuple[NDArray[np.int64], NDArray[np.int64] | int]]:
        """Every position that bears the group changes; no other group that the rule takes may be there."""
        taken = self._taken(table, rows)
        some = np.flatnonzero(taken.any(axis=1))
        taken = taken[some]
        for group in table.takes:
            here = (rows[some] == group) & taken
            pure = (here == taken).all(axis=1)
            if table.rule.needs_acceptor:
                for axis in self.on_ring:
                    pure &= ~here[:, axis] | self._activated(rows[some], axis)
            span = here[pure].astype(np.int64) @ np.asarray(self.weights, dtype=np.int64)
            for made in table.gives:
                yield some[pure], (made - group) * span

    def _exchange_one(
        self, table: RuleTable, rows: Rows
    ) -> Iterator[tuple[NDArray[np.int64], NDArray[np.int64]]]:
        """One position changes; a second one that could change as well would compete, unless the rule tells
        two apart.
        """
        taken = self._taken(table, rows)
        if table.rule.needs_acceptor:
            for axis in self.on_ring:
                taken[:, axis] &= self._activated(rows, axis)
        fits = taken.sum(axis=1) == (2 if table.rule.one_of_two else 1)
        if table.rule.one_of_two:
            beside: Mask = np.asarray(taken & self._beside_reporting)
            some = np.asarray(beside.any(axis=1))
            taken = np.where(some[:, None], beside, taken)
        for axis in self.on_ring:
            yield from self._put(table, axis, np.flatnonzero(fits & taken[:, axis]), rows)

    @cached_property
    def _beside_reporting(self) -> Mask:
        """For each position whether it is ortho to the reporting group."""
        return np.array(
            [
                any(ring.distance.get((label, REPORTING_PLACE)) == 1 for ring in self.rings)
                for label in self.labels
            ]
        )

    def _activated(self, rows: Rows, axis: int) -> Mask:
        """Whether an acceptor stands ortho or para to the position."""
        found = np.zeros(len(rows), dtype=bool)
        label = self.labels[axis]
        acceptor = self.alphabet.holds(ACCEPTORS)
        for ring in self.rings:
            if label not in ring.labels:
                continue
            for name, kind in ring.carried.items():
                if kind in ACCEPTORS and name not in ring.fused and ring.distance[label, name] in (1, 3):
                    found[:] = True
            for other, there in enumerate(self.labels):
                if there in ring.labels and ring.distance[label, there] in (1, 3):
                    found |= acceptor[rows[:, other]]
        return found

    @cached_property
    def _codes(self) -> tuple[tuple[Code, ...], NDArray[np.int64]]:
        """The distinct codes, and for each group of the alphabet the number of its code."""
        codes = [self.stage.workshop.code(short) for short in self.alphabet.shorts]
        distinct = tuple(dict.fromkeys(codes))
        return distinct, np.array([distinct.index(c) for c in codes])

    def _fixed(self, ring: RingPlaces, layer: int) -> dict[str, Code]:
        """Codes of what does not vary on a ring."""
        code = self.stage.workshop.code
        fixed = {name: code(kind) for name, kind in ring.carried.items()}
        if (REPORTING_PLACE, REPORTING_PLACE) in ring.distance:
            fixed[REPORTING_PLACE] = self.stage.reporting_code(layer)
        return fixed | {label: code(HYDROGEN_SHORT) for label in ring.labels if label not in self.labels}

    def _attacked(self, rule: Reaction, number: int, ring: RingPlaces, layer: int) -> dict[str, Mask]:
        """Where the rule attacks on a ring, over the codes of its open places."""
        key = (rule.name, number, layer)
        if key not in self._attacks:
            distinct, _ = self._codes
            codes = {label: distinct for label in ring.labels if label in self.labels}
            view = RingView(
                tuple(codes), ring.distance, codes, self._fixed(ring, layer), ring.fused, ring.benzo
            )
            shape = [len(distinct)] * len(codes)
            self._attacks[key] = {p: np.broadcast_to(m, shape) for p, m in view.attacked(rule).items()}
        return self._attacks[key]

    def _richest(self, rows: Rows, layer: int) -> list[Mask]:
        """For each ring the rows where no other ring is richer in electrons; electrophiles go there."""
        if len(self.rings) == 1:
            return [np.ones(len(rows), dtype=bool)]
        share = np.array([BURDEN[self.stage.workshop.steering[short]] for short in self.alphabet.shorts])
        loads = []
        for ring in self.rings:
            axes = [a for a, label in enumerate(self.labels) if label in ring.labels]
            constant = sum(BURDEN[code.steers] for code in self._fixed(ring, layer).values())
            loads.append(share[rows[:, axes]].sum(axis=1) + constant)
        return [load == np.min(loads, axis=0) for load in loads]

    def _substitute(
        self, table: RuleTable, rows: Rows, layer: int
    ) -> Iterator[tuple[NDArray[np.int64], NDArray[np.int64] | int]]:
        """Hydrogen becomes a group where the directing rules allow."""
        _, number_of = self._codes
        span = np.zeros(len(rows), dtype=np.int64)
        for number, (ring, richest) in enumerate(zip(self.rings, self._richest(rows, layer), strict=True)):
            attacked = self._attacked(table.rule, number, ring, layer)
            axes = [self.labels.index(label) for label in attacked]
            codes = tuple(number_of[rows[:, a]] for a in axes)
            hits = {
                axis: attacked[label][codes] & (rows[:, axis] == 0) & richest
                for label, axis in zip(attacked, axes, strict=True)
            }
            if not table.rule.floods:
                for axis, hit in hits.items():
                    yield from self._put(table, axis, np.flatnonzero(hit), rows)
            elif layer == FREE and self._is_arm(ring):
                for axis, hit in hits.items():
                    span += hit.astype(np.int64) * self.weights[axis]
        if table.rule.floods:
            at = np.flatnonzero(span)
            for made in table.gives:
                yield at, made * span[at]

    def _is_arm(self, ring: RingPlaces) -> bool:
        """Whether a ring bears the reporting group, or on a dye with two arms its twin."""
        if (REPORTING_PLACE, REPORTING_PLACE) in ring.distance:
            return True
        return self.stage.twin and "OH" in ring.carried.values()
