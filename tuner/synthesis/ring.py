"""Where does an electrophile go on a benzene ring?

Evaluated for all patterns of one ring at once. Every place of the ring bears a code (how it steers, and
whether it is large); the rules are those of any textbook on aromatic substitution: the strongest donor
directs to its ortho and para places; without a donor the acceptors direct to meta; a place beside a very
large group, or between two groups, is shut; the acceptors and donors of the ring add up to a burden that the
reagent must overcome. Where another ring is fused on, the bond to it shuts no place; and where that is a
benzene ring, a donor that has an ortho place beside the fusion sends nothing to its other ortho place (1
before 3 in 2-naphthol).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tuner.library.reactions import Reaction

Mask = NDArray[np.bool_]

POWER = {"": 0, "strong": 4, "medium": 3, "weak": 2, "halogen": 1, "meta": 0, "strong meta": 0}
"""Rank in directing to ortho and para."""
BURDEN = {"": 0, "strong": -4, "medium": -3, "weak": -1, "halogen": 1, "meta": 2, "strong meta": 3}
"""Share in the deactivation of the ring; common practice, no source."""
LARGE = 3
"""Bulk class that shuts the places beside it."""


@dataclass(frozen=True, slots=True)
class Code:
    """What a rule on a ring sees of a group: how it steers, whether it is large, whether it is hydrogen."""

    steers: str
    large: bool
    empty: bool


@dataclass(frozen=True)
class RingView:
    """A ring with the codes that its open labels may bear (one list for each) and the fixed ones."""

    labels: tuple[str, ...]  # open places, one axis each
    distance: Mapping[tuple[str, str], int]
    codes: Mapping[str, Sequence[Code]]  # open label -> the codes, in the order of the axis
    fixed: Mapping[str, Code]  # carried places and the reporting group
    fused: frozenset[str] = frozenset()  # names in `fixed` at which another ring is fused on
    benzo: frozenset[str] = frozenset()  # those of them where that is a benzene ring

    def _axis(self, label: str, values: Sequence[float]) -> NDArray[np.float64]:
        axes = self.labels
        shape = [1] * len(axes)
        shape[axes.index(label)] = len(values)
        return np.asarray(values, dtype=np.float64).reshape(shape)

    def _spread(self, name: str, table: Mapping[str, int]) -> NDArray[np.float64]:
        if name in self.fixed:
            return np.full([1] * len(self.labels), float(table[self.fixed[name].steers]))
        return self._axis(name, [float(table[c.steers]) for c in self.codes[name]])

    def _flag(self, name: str, attribute: str) -> Mask:
        if name in self.fixed:
            return np.full([1] * len(self.labels), getattr(self.fixed[name], attribute))
        return self._axis(name, [float(getattr(c, attribute)) for c in self.codes[name]]) > 0.5

    @property
    def names(self) -> tuple[str, ...]:
        """All places of the ring."""
        return (*self.labels, *self.fixed)

    def attacked(self, rule: Reaction) -> dict[str, Mask]:
        """For each open label of the ring, over all patterns (one axis per label): whether the rule attacks
        there.

        The answer stands only where the label itself bears hydrogen.
        """
        top = np.zeros([1] * len(self.labels))
        load = np.zeros_like(top)
        for name in self.names:
            top = np.maximum(top, self._spread(name, POWER))
            load = load + self._spread(name, BURDEN)
        soft = load <= rule.burden
        return {p: soft & self._favoured(p, top, rule) & ~self._shut(p, rule) for p in self.labels}

    def _favoured(self, p: str, top: NDArray[np.float64], rule: Reaction) -> Mask:
        """Ortho or para to the strongest donor, or meta to acceptors where there is no donor."""
        distance = self.distance
        near = np.zeros([1] * len(self.labels), dtype=bool)
        for d in self.names:
            if d == p or (distance[p, d] == 2):
                continue
            leads = (self._spread(d, POWER) == top) & (top > 0)
            if distance[p, d] == 1 and rule.places == "para first" and not rule.floods:
                leads = leads & ~self._para_free(d)
            if distance[p, d] == 3 and rule.places == "ortho":
                continue
            if distance[p, d] == 1 and self._second_to_alpha(p, d):
                continue
            near = near | leads
        meta = np.zeros_like(near)
        other = np.zeros_like(near)
        for d in self.names:
            if d == p:
                continue
            acceptor = self._spread(d, BURDEN) >= 2.0
            if distance[p, d] == 2:
                meta = meta | acceptor
            else:
                other = other | acceptor
        nothing = top == 0
        return np.asarray(near | (nothing & ~other & (meta | ~other) & (rule.places != "ortho")))

    def _second_to_alpha(self, p: str, d: str) -> bool:
        """Whether `d` has another ortho place beside a benzo fusion, and `p` is not beside one."""

        def alpha(place: str) -> bool:
            return any(self.distance[place, f] == 1 for f in self.benzo)

        others = [q for q in self.names if q != p and q not in self.benzo and self.distance[d, q] == 1]
        return not alpha(p) and any(alpha(q) for q in others)

    def _para_free(self, d: str) -> Mask:
        """Whether the place para to `d` bears hydrogen and is not shut."""
        free = np.zeros([1] * len(self.labels), dtype=bool)
        for q in self.names:
            if self.distance[d, q] == 3:
                free = free | self._flag(q, "empty")
        return free

    def _shut(self, p: str, rule: Reaction) -> Mask:
        """Beside a very large group, or (unless the reagent floods the ring) between two groups."""
        beside = [d for d in self.names if d != p and self.distance[p, d] == 1]
        large = np.zeros([1] * len(self.labels), dtype=bool)
        for d in beside:
            large = large | self._flag(d, "large")
        if rule.floods or len(beside) < 2:
            return large
        both = np.ones([1] * len(self.labels), dtype=bool)
        for d in beside:
            both = both & ~self._flag(d, "empty") & (d not in self.fused)
        return np.asarray(large | both)
