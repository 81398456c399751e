"""What are the best analogs once they are looked at as molecules?

The search ranks by look-up tables. Those at the top are then built, screened, weighed and predicted through
the molecule door (which sums over all protonation states), the limits that need the molecule are applied,
and the score is worked out anew. Only here can an analog be set aside for its calculated logP, a flag, or a
failing function of the user's own.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass, replace
from math import isfinite, isnan, nan

import numpy as np

from tuner.brief.records import Brief, Target
from tuner.errors import BriefError
from tuner.prediction.records import Prediction
from tuner.screening.records import Flags
from tuner.search.molecules import has_anchor, smiles_of
from tuner.search.palette import EXCLUDE
from tuner.search.probability import Interval, hit_probability
from tuner.search.result import OtherTarget
from tuner.search.rooms import Rooms
from tuner.search.rows import Analogs
from tuner.search.tables import Goal
from tuner.search.targets import SWITCHES, probability, window
from tuner.search.user_objective import UserObjective
from tuner.structure.molecule import Properties, properties

PENALISE = "penalise"
MEASURED_SD = 0.03
"""Least standard error of a measured value (pKa units): no laboratory repeats another's better; as FIELD
data scatter.
"""


@dataclass(frozen=True)
class Finalist:
    """One analog as a molecule. pKa values are conditional, in the target's
    medium.
    """

    key: tuple[int, ...]
    smiles: str
    pka: float
    sd: float
    steps: int
    mass: float  # g/mol
    other_costs: float  # flags and the user's own objective, in hit probability
    clogp: float
    tpsa: float  # square Angstrom
    flags: tuple[str, ...]
    cautions: tuple[str, ...]
    hit: float = nan
    offset: float = nan  # worst distance over the targets at which it must switch, not negative
    score: float = nan
    dpka_dt: float = nan  # per kelvin
    measured: float = nan
    measured_source: str = ""
    macroscopic: tuple[float, ...] = ()
    notes: tuple[str, ...] = ()
    others: tuple[OtherTarget, ...] = ()


class Judge:
    """Turns rows of the search into finalists, each once, and counts what is set aside and why."""

    def __init__(self, rooms: Rooms, goal: Goal, user: UserObjective | None) -> None:
        self.rooms = rooms
        self.brief: Brief = rooms.brief
        self.goal = goal
        self.user = user
        self.removed: Counter[str] = Counter()
        self._known: dict[tuple[int, ...], Finalist | None] = {}
        self._seen: set[str] = set()
        self._actions = dict(self.brief.limits.flags)

    def finalists(self, rows: Analogs) -> list[Finalist]:
        """Those of these analogs that pass, best score first; equal scores in the order of cores and
        choices.
        """
        found = [one for n in range(len(rows)) if (one := self.judge(rows, n)) is not None]
        return sorted(found, key=lambda one: (-one.score, one.key))

    def judge(self, rows: Analogs, n: int) -> Finalist | None:
        """One analog; None where it is set aside."""
        key = rows.key(n)
        if key not in self._known:
            self._known[key] = self._first_look(rows, n, key)
        return self._known[key]

    def _first_look(self, rows: Analogs, n: int, key: tuple[int, ...]) -> Finalist | None:
        """Build, check and predict an analog that has not been looked at."""
        smiles = smiles_of(self.rooms.space.spaces[key[0]], key[1:])
        if smiles in self._seen:
            return self._set_aside("the same molecule from another core")
        self._seen.add(smiles)
        found, screened = properties(smiles), self.rooms.screen(smiles)
        why = self._refused(found, screened)
        if why:
            return self._set_aside(why)
        costs = self._other_costs(smiles, screened)
        if isnan(costs):
            return self._set_aside("the user's own objective fails")
        plain = Finalist(
            key=key,
            smiles=smiles,
            pka=float(rows.pka_values[n]),
            sd=float(rows.sd[n]),
            steps=int(rows.steps[n]),
            mass=float(rows.mass_values[n]),
            other_costs=costs,
            clogp=found.clogp,
            tpsa=found.tpsa_a2,
            flags=screened.names,
            cautions=tuple(flag.words for flag in screened.flags),
        )
        return self._predicted(plain)

    def _refused(self, found: Properties, screened: Flags) -> str:
        """Which limit on the molecule refuses an analog; "" for none."""
        limits = self.brief.limits
        if not limits.min_clogp <= found.clogp <= limits.max_clogp:
            return "calculated logP outside the limits"
        if found.tpsa_a2 > limits.max_tpsa_a2:
            return f"polar surface above {limits.max_tpsa_a2:g} Å²"
        if screened.withheld:
            return "energetic"
        barred = [name for name in screened.names if self._actions.get(name) == EXCLUDE]
        return f"flag: {barred[0]}" if barred else ""

    def _other_costs(self, smiles: str, screened: Flags) -> float:
        """What penalised flags and the user's own objective cost, in hit probability; NaN where the latter
        fails.
        """
        penalised = [
            f for f in screened.flags if PENALISE in (self._actions.get(f.rule), self._actions.get(f.kind))
        ]
        costs = self.brief.ranking.flag_costs * len(penalised)
        if self.user is not None:
            costs += self.brief.ranking.user_objective_costs * self.user(smiles)
        return costs

    def nothing_passed(self) -> BriefError:
        """The error of molecules that all fail the limits: which limit removed how many."""
        listed = "; ".join(f"{why} removes {n:,}" for why, n in sorted(self.removed.items(), key=_most_first))
        what = f"no candidate is left: of the {sum(self.removed.values()):,} best analogs, {listed}"
        return BriefError(what, remedy="loosen the limit that removes most")

    def _set_aside(self, why: str) -> Finalist | None:
        """Count an analog that is set aside; gives None."""
        self.removed[why] += 1
        return None

    def _predicted(self, plain: Finalist) -> Finalist | None:
        """The same analog with what the molecule door says about it."""
        space = self.rooms.space.spaces[plain.key[0]]
        anchored = has_anchor(space, plain.key[1:])
        shape = smiles_of(space, plain.key[1:], bound=True) if anchored else plain.smiles
        door = self.rooms.predict(shape, self.brief.target.medium)
        better = self._take_over(plain, door, anchored)
        if better.sd > self.goal.max_pka_sd:
            return self._set_aside(f"standard error above {self.goal.max_pka_sd:g}")
        others = tuple(self._other(target, shape, better) for target in self.brief.also)
        for other in others:
            low, high = window(other.target)
            if not low <= other.pka <= high:
                return self._set_aside("a further target is missed")
        return self._scored(replace(better, others=others))

    def _take_over(self, plain: Finalist, door: Prediction, anchored: bool) -> Finalist:
        """pKa', error and what goes with them from the molecule door, and a measured value where there is
        one.
        """
        tables = self.rooms.core_tables(plain.key[0])
        rate = tables.dpka_dt_intercept + tables.dpka_dt_slope * plain.pka
        notes = tuple(self.rooms.notes_on(plain.key))
        if anchored:
            notes = ("pKa of the dye bound through its handle", *notes)
        if not door.found:
            return replace(plain, dpka_dt=rate, notes=(*notes, *door.notes))
        found = replace(
            plain, pka=door.pka, sd=door.pka_sd, dpka_dt=door.dpka_dt,
            macroscopic=door.macroscopic_pkas, notes=tuple(dict.fromkeys((*door.notes, *notes))),
        )  # fmt: skip
        if door.known is None or anchored:
            return found
        there = self.rooms.measured_in_medium(door, plain.key[0])
        return replace(found, measured=there, measured_source=door.known.source)

    def _other(self, target: Target, shape: str, one: Finalist) -> OtherTarget:
        """How the analog does at a further target."""
        door = self.rooms.predict(shape, target.medium)
        shift = one.measured - one.pka if isfinite(one.measured) else 0.0
        return OtherTarget(
            target, door.pka + shift, door.pka_sd, probability(target, door.pka + shift, door.pka_sd)
        )

    def _scored(self, one: Finalist) -> Finalist:
        """Offset, hit probability and score from the numbers that are shown; a measured value comes
        first.
        """
        goal = self.goal
        measured = isfinite(one.measured)
        pka = one.measured if measured else one.pka
        sd = max(MEASURED_SD, self.rooms.medium_sd(one.key[0])) if measured else one.sd
        centre = (goal.target_ph - goal.tolerance, goal.target_ph + goal.tolerance)
        intervals = [_interval(pka, sd, *centre)]
        intervals += [_interval(o.pka, sd if measured else o.pka_sd, *window(o.target)) for o in one.others]
        hit = float(hit_probability(intervals)[0])
        away = [abs(pka - goal.target_ph)]
        away += [abs(o.pka - o.target.ph) for o in one.others if o.target.role == SWITCHES]
        costs = goal.step_costs * one.steps
        costs += goal.hundred_g_mol_costs * (one.mass - goal.reference_mass_g_mol) / 100.0
        return replace(one, hit=hit, offset=max(away), score=hit - costs - one.other_costs)


def _interval(pka: float, sd: float, low: float, high: float) -> Interval:
    return Interval(np.array([pka]), np.array([sd]), low, high)


def removed_lines(removed: Mapping[str, int]) -> tuple[tuple[str, int], ...]:
    """What was set aside among the finalists, most frequent first."""
    return tuple((f"of the best, set aside: {why}", n) for why, n in sorted(removed.items(), key=_most_first))


def _most_first(item: tuple[str, int]) -> tuple[int, str]:
    return -item[1], item[0]
