"""What does each rule make of many patterns at once?

A pattern is a row of small integers, one group of the alphabet per open position. Each rule takes an array of rows and returns the rows
that one step gives. Conditions are look-ups on the rows; nothing is allocated per point of the lattice.
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
from tuner.synthesis.ring import Code, RingView
from tuner.synthesis.setting import FREE, Stage

NITRO = "NO2"
MOST_NITRO = 3
"""Three ring nitro groups make a compound energetic; such patterns are neither targets nor intermediates."""

Rows = NDArray[np.int16]
Mask = NDArray[np.bool_]


@dataclass(frozen=True)
class RuleTable:
    """One rule in terms of an alphabet: look-ups by group."""

    rule: Reaction
    layers: tuple[int, ...]
    takes: tuple[int, ...]
    gives: tuple[int, ...]
    is_taken: Mask
    spoils: Mask


class MoveMaker:
    """The rules of a stage over the patterns of its open positions."""

    def __init__(self, stage: Stage, labels: Sequence[str], nitrogen: Sequence[bool], alphabet: Alphabet) -> None:
        self.stage = stage
        self.labels = tuple(labels)
        self.nitrogen = tuple(nitrogen)
        self.alphabet = alphabet
        self.on_ring = [a for a in range(len(labels)) if not nitrogen[a]]
        self.rings = [ring for ring in ring_places(stage.core) if any(label in self.labels for label in ring.labels)]
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
        """False for patterns that must not be made, not even on the way: three or more nitro groups on the rings."""
        nitro = self.alphabet.index.get(NITRO, -1)
        return np.asarray((rows == nitro).sum(axis=1) + self._nitro_carried < MOST_NITRO)

    @cached_property
    def _nitro_carried(self) -> int:
        return sum(kind == NITRO for ring in ring_places(self.stage.core) for kind in ring.carried.values())

    def outcomes(self, rows: Rows, layer: int) -> Iterator[tuple[Reaction, Rows, Rows]]:
        """(rule, rows it acts on, rows it gives), pairwise, for all rules of the layer."""
        for table in self.tables:
            if layer not in table.layers:
                continue
            good = rows[~table.spoils[rows].any(axis=1)]
            if not len(good):
                continue
            if table.rule.kind == "exchange":
                act = self._exchange_all if table.rule.all_at_once else self._exchange_one
                for before, after in act(table, good):
                    yield table.rule, before, after
            elif table.rule.kind == "on nitrogen":
                for before, after in self._on_nitrogen(table, good):
                    yield table.rule, before, after
            else:
                for before, after in self._substitute(table, good, layer):
                    yield table.rule, before, after

    def _exchange_all(self, table: RuleTable, rows: Rows) -> Iterator[tuple[Rows, Rows]]:
        """Every position that bears the group changes; no other group that the rule takes may be there."""
        taken = table.is_taken[rows]
        taken[:, [a for a in range(rows.shape[1]) if self.nitrogen[a]]] = False
        some = rows[taken.any(axis=1)]
        taken = taken[taken.any(axis=1)]
        for group in table.takes:
            here = (some == group) & taken
            pure = here.any(axis=1) & (here.sum(axis=1) == taken.sum(axis=1))
            before = some[pure]
            if table.rule.needs_acceptor and len(before):
                lit = np.zeros_like(before, dtype=bool)
                for axis in self.on_ring:
                    lit[:, axis] = self._activated(before, axis)
                fits = (lit | ~here[pure]).all(axis=1)
                before = before[fits]
            if not len(before):
                continue
            for made in table.gives:
                yield before, np.where(before == group, np.int16(made), before)

    def _exchange_one(self, table: RuleTable, rows: Rows) -> Iterator[tuple[Rows, Rows]]:
        """One position changes; a second taken group would compete, unless the rule is there to tell the two apart."""
        taken = table.is_taken[rows]
        taken[:, [a for a in range(rows.shape[1]) if self.nitrogen[a]]] = False
        partial = table.rule.needs_acceptor and set(table.rule.takes) <= ACCEPTORS
        number = taken.sum(axis=1)
        fits = number == 2 if partial else number == 1
        rows, taken = rows[fits], taken[fits]
        for axis in self.on_ring:
            before = rows[taken[:, axis]]
            if table.rule.needs_acceptor and len(before):
                before = before[self._activated(before, axis)]
            if len(before):
                for made in table.gives:
                    after = before.copy()
                    after[:, axis] = made
                    yield before, after

    def _activated(self, rows: Rows, axis: int) -> Mask:
        """Whether an acceptor stands ortho or para to the position."""
        found = np.zeros(len(rows), dtype=bool)
        label = self.labels[axis]
        acceptor = self.alphabet.holds(ACCEPTORS)
        for ring in self.rings:
            if label not in ring.labels:
                continue
            for name, kind in ring.carried.items():
                if kind in ACCEPTORS and ring.distance[label, name] in (1, 3):
                    found[:] = True
            for other, there in enumerate(self.labels):
                if there in ring.labels and ring.distance[label, there] in (1, 3):
                    found |= acceptor[rows[:, other]]
        return found

    def _on_nitrogen(self, table: RuleTable, rows: Rows) -> Iterator[tuple[Rows, Rows]]:
        for axis in range(rows.shape[1]):
            if self.nitrogen[axis]:
                before = rows[rows[:, axis] == 0]
                if len(before):
                    for made in table.gives:
                        after = before.copy()
                        after[:, axis] = made
                        yield before, after

    @cached_property
    def _codes(self) -> tuple[tuple[Code, ...], NDArray[np.int64]]:
        """The distinct codes, and for each group of the alphabet the number of its code."""
        codes = [self.stage.workshop.code(short) for short in self.alphabet.shorts]
        distinct = tuple(dict.fromkeys(codes))
        return distinct, np.array([distinct.index(c) for c in codes])

    def _attacked(self, rule: Reaction, number: int, ring: RingPlaces, layer: int) -> dict[str, Mask]:
        """Where the rule attacks on a ring, over the codes of its open places."""
        key = (rule.name, number, layer)
        if key not in self._attacks:
            distinct, _ = self._codes
            code = self.stage.workshop.code
            fixed = {name: code(kind) for name, kind in ring.carried.items()}
            if (REPORTING_PLACE, REPORTING_PLACE) in ring.distance:
                fixed[REPORTING_PLACE] = self.stage.reporting_code(layer)
            hydrogen = code(HYDROGEN_SHORT)
            codes = {}
            for label in ring.labels:
                if label in self.labels:
                    codes[label] = distinct
                else:
                    fixed[label] = hydrogen
            view = RingView(tuple(codes), ring.distance, codes, fixed)
            shape = [len(distinct)] * len(codes)
            self._attacks[key] = {p: np.broadcast_to(m, shape) for p, m in view.attacked(rule).items()}
        return self._attacks[key]

    def _substitute(self, table: RuleTable, rows: Rows, layer: int) -> Iterator[tuple[Rows, Rows]]:
        """Hydrogen becomes a group where the directing rules allow."""
        _, number_of = self._codes
        for number, ring in enumerate(self.rings):
            attacked = self._attacked(table.rule, number, ring, layer)
            axes = [self.labels.index(label) for label in attacked]
            codes = tuple(number_of[rows[:, a]] for a in axes)
            hit = np.zeros(rows.shape, dtype=bool)
            for label, axis in zip(attacked, axes, strict=True):
                hit[:, axis] = attacked[label][codes] & (rows[:, axis] == 0)
            if table.rule.floods:
                if (REPORTING_PLACE, REPORTING_PLACE) in ring.distance and layer == FREE:
                    many = hit.sum(axis=1) >= 2
                    for made in table.gives:
                        yield rows[many], np.where(hit[many], np.int16(made), rows[many])
                continue
            for axis in axes:
                before = rows[hit[:, axis]]
                if len(before):
                    for made in table.gives:
                        after = before.copy()
                        after[:, axis] = made
                        yield before, after
