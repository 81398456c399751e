"""How do finalists become the rows that a reader sees?"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import isfinite, sqrt

import numpy as np

from tuner.acidity.response import working_range_by_eye
from tuner.errors import BriefError
from tuner.library.records import HYDROGEN_SHORT
from tuner.search.evaluate import evaluate_admitted
from tuner.search.finalists import Finalist
from tuner.search.molecules import short_names, substitution_of
from tuner.search.pool import Pooled
from tuner.search.ranking import composition, diverse_order, knee, layers
from tuner.search.result import Candidate, TradePoint
from tuner.search.rooms import Rooms
from tuner.search.sample import sample_rows
from tuner.search.stability import Constant, Pool, stability
from tuner.search.stages import Stages
from tuner.search.standing import front_rows
from tuner.search.tables import MASS_UNIT, Goal, SpaceTables

HOPE = 1e-3
"""Least hit probability of the best analog; below it the target is out of reach."""

CLOUD = 600
"""Analogs in the backdrop of the trade-off picture."""

ROUTES = "planning routes"


@dataclass(frozen=True)
class Standings:
    """The finalists in the order shown, how many of them are listed, and what marks each (arrays in that
    order).
    """

    finalists: list[Finalist]
    listed: int
    front: np.ndarray[tuple[int], np.dtype[np.bool_]]
    layer: np.ndarray[tuple[int], np.dtype[np.int64]]
    knee: int
    stability: np.ndarray[tuple[int], np.dtype[np.float64]]


def require_hope(pooled: Pooled, rooms: Rooms, goal: Goal) -> None:
    """An error where the target lies outside what the cores can reach under this brief.

    Raises
    ------
    BriefError
        Names the analog that comes closest.
    """
    if not pooled.finalists or max(f.hit for f in pooled.finalists) >= HOPE:
        return
    closest = min(pooled.finalists, key=lambda f: (f.offset, f.key))
    space = rooms.space.spaces[closest.key[0]]
    raise BriefError(
        f"the target {goal.target_ph:g} is out of reach: of all analogs {space.core.name} with "
        f"{substitution_of(space, closest.key[1:])} comes closest, with pKa' {closest.pka:.1f}",
        place="key target.ph",
        remedy="choose another core or allow more groups",
    )


def rank(rooms: Rooms, goal: Goal, pooled: Pooled, resolution_pka: float) -> Standings:
    """Order the finalists (by score, or diverse), find front, layers and knee among them, and their
    stability.
    """
    brief = rooms.brief
    ordered = pooled.finalists
    wanted = min(brief.ranking.rows, len(ordered))
    if brief.ranking.diverse:
        chosen = diverse_order(np.array([f.score for f in ordered]), _compositions(rooms, ordered), wanted)
        rest = [n for n in range(len(ordered)) if n not in set(chosen.tolist())]
        ordered = [ordered[n] for n in (*chosen.tolist(), *rest)]
    offset = np.array([int(f.offset / resolution_pka + 1e-9) for f in ordered], dtype=np.int64)
    steps = np.array([f.steps for f in ordered], dtype=np.int64)
    mass = np.array([round(f.mass / MASS_UNIT) for f in ordered], dtype=np.int64)
    by = np.array(
        sorted(range(len(ordered)), key=lambda n: (ordered[n].offset, ordered[n].key)), dtype=np.intp
    )
    front = np.zeros(len(ordered), dtype=np.bool_)
    on_front = front_rows(offset, steps, mass, by)
    front[on_front] = True
    away = np.array([f.offset for f in ordered])
    masses = np.array([f.mass for f in ordered])
    at = knee(away[on_front], steps[on_front].astype(np.float64), masses[on_front], goal.tolerance)
    shares = stability(_pool(rooms, ordered), goal, wanted, brief.search.seed)
    return Standings(
        ordered, wanted, front, layers(offset, steps, mass), int(on_front[at]) if at >= 0 else -1, shares
    )


def _compositions(
    rooms: Rooms, finalists: Sequence[Finalist]
) -> np.ndarray[tuple[int, int], np.dtype[np.float64]]:
    """Groups and core of each finalist, counted."""
    spaces = rooms.space.spaces
    words = [
        [f"core {spaces[f.key[0]].core.name}", *short_names(spaces[f.key[0]], f.key[1:])] for f in finalists
    ]
    return composition(words)


def _pool(rooms: Rooms, finalists: Sequence[Finalist]) -> Pool:
    """The finalists as the stability figure needs them."""
    shown = [f.measured if isfinite(f.measured) else f.pka for f in finalists]
    return Pool(
        pka=np.array(shown),
        sd=np.array([f.sd for f in finalists]),
        steps=np.array([float(f.steps) for f in finalists]),
        mass=np.array([f.mass for f in finalists]),
        other_costs=np.array([f.other_costs for f in finalists]),
        constants=[_constants(rooms, f) for f in finalists],
    )


def _constants(rooms: Rooms, one: Finalist) -> list[Constant]:
    """The uncertain constants of one analog: the core's parent, then each group at its kind of position."""
    if isfinite(one.measured):
        return []
    space, tables = rooms.space.spaces[one.key[0]], rooms.core_tables(one.key[0])
    found = [Constant(("core", space.core.name), sqrt(max(tables.variance.base, 0.0)))]
    for p, k in enumerate(one.key[1:]):
        group = space.choices[p][k].acting
        if group.short != HYDROGEN_SHORT:
            relation = space.prepared.slot(space.prepared.open_labels[p]).relation
            found.append(
                Constant((group.short, relation), sqrt(max(float(tables.variance.unary[p][k]), 0.0)))
            )
    return found


def candidates_of(rooms: Rooms, standings: Standings, stages: Stages) -> tuple[Candidate, ...]:
    """The listed rows, routes included."""
    found = []
    for row in range(standings.listed):
        stages.report(ROUTES, row, standings.listed)
        found.append(_candidate(rooms, standings, row))
    stages.report(ROUTES, standings.listed, standings.listed)
    return tuple(found)


def _candidate(rooms: Rooms, standings: Standings, row: int) -> Candidate:
    """One row."""
    one = standings.finalists[row]
    space = rooms.space.spaces[one.key[0]]
    shown = one.measured if isfinite(one.measured) else one.pka
    low, high = working_range_by_eye(np.array(shown))
    route = rooms.route(space, one.key[1:])
    on_the_way = () if route is None else tuple(c for step in route.steps for c in step.cautions)
    return Candidate(
        rank=row + 1,
        analog=f"A{row + 1:03d}",
        smiles=one.smiles,
        core=space.core.name,
        substitution=substitution_of(space, one.key[1:]),
        pka=one.pka,
        pka_sd=one.sd,
        offset=one.pka - rooms.brief.target.ph,
        hit_probability=one.hit,
        steps=one.steps,
        molar_mass_g_mol=one.mass,
        working_range_low=float(low),
        working_range_high=float(high),
        dpka_dt=one.dpka_dt,
        front=bool(standings.front[row]),
        layer=int(standings.layer[row]),
        knee=row == standings.knee,
        score=one.score,
        stability=float(standings.stability[row]),
        measured_pka=one.measured,
        measured_source=one.measured_source,
        macroscopic_pkas=one.macroscopic,
        clogp=one.clogp,
        tpsa_a2=one.tpsa,
        cautions=tuple(dict.fromkeys((*one.cautions, *space.core.cautions, *on_the_way))),
        flags=one.flags,
        notes=tuple(dict.fromkeys((*one.notes, *(route.notes if route is not None else ())))),
        route=route,
        other_targets=one.others,
    )


def front_of(rooms: Rooms, standings: Standings) -> tuple[TradePoint, ...]:
    """The trade-off front, lightest of the shortest first; rows that are listed carry their rank."""
    rows = [n for n in range(len(standings.finalists)) if standings.front[n]]
    rows.sort(
        key=lambda n: (standings.finalists[n].steps, standings.finalists[n].mass, standings.finalists[n].key)
    )
    points = []
    for n in rows:
        one = standings.finalists[n]
        space = rooms.space.spaces[one.key[0]]
        words = substitution_of(space, one.key[1:])
        offset = (one.measured if isfinite(one.measured) else one.pka) - rooms.brief.target.ph
        shown = n + 1 if n < standings.listed else 0
        points.append(TradePoint(space.core.name, words, offset, one.steps, one.mass, True, shown))
    return tuple(points)


def cloud_of(rooms: Rooms, goal: Goal, spaces: Sequence[SpaceTables]) -> tuple[TradePoint, ...]:
    """A seeded sample of makeable analogs, as the backdrop of the trade-off picture."""
    points = []
    for tables in spaces:
        sample = sample_rows(tables, 20 * CLOUD // len(spaces), rooms.brief.search.seed)
        rows = evaluate_admitted(tables, goal, sample)
        space = rooms.space.spaces[tables.rank]
        step = max(1, len(rows) // max(1, CLOUD // len(spaces)))
        for n in range(0, len(rows), step):
            key = rows.key(n)
            away = float(rows.pka_values[n]) - goal.target_ph
            points.append(
                TradePoint(
                    space.core.name, substitution_of(space, key[1:]), away, int(rows.steps[n]),
                    float(rows.mass_values[n]), False,
                )
            )  # fmt: skip
    return tuple(points)
