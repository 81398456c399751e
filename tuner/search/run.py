"""Which analogs does this brief lead to? The whole chain: space, look-up tables, search, molecules,
ranking, routes.
"""

from __future__ import annotations

import hashlib
from pathlib import Path
from tempfile import gettempdir

from tuner.brief.records import Brief
from tuner.library import Library
from tuner.search.exact import Search
from tuner.search.extent import summaries
from tuner.search.finalists import Judge, removed_lines
from tuner.search.found import Found
from tuner.search.outcome import Standings, candidates_of, cloud_of, front_of, rank, require_hope
from tuner.search.pool import Pooled, Searcher, gather
from tuner.search.result import Candidate, DesignResult, InputFile, Progress, SpaceSummary
from tuner.search.rooms import Rooms
from tuner.search.stages import Stages
from tuner.search.strategy import (
    Method,
    choose_method,
    nothing_left,
    require_bottles,
    require_reach,
    resolution,
    run_search,
)
from tuner.search.tables import PKA_UNIT, Goal, SpaceTables
from tuner.search.user_objective import UserObjective, load_objective
from tuner.structure.own_library import load_checked_library

TABLES = "filling look-up tables"


WITHOUT_OBJECTIVE = (
    "That holds without your own objective; with it, the order is the best that evolution found, "
    "with no bound."
)
BY_EVOLUTION = "That is the seed of the evolution; what evolution added carries no bound of its own."


def design(
    brief: Brief, library: Library | None = None, progress: Progress | None = None, scheduler: str = ""
) -> DesignResult:
    """Run a brief.

    Parameters
    ----------
    brief : Brief
    library : Library, optional
        The shipped tables with the brief's overlay unless given.
    progress : callable, optional
        See `result.Progress`.
    scheduler : str
        Address of a Dask scheduler; "" searches on this machine.

    Returns
    -------
    DesignResult
        The same for the same brief, library and seed, wherever and with however many workers it was
        computed (timings apart).

    Raises
    ------
    TunerError
        With one line that says what to change: reagents that are unknown, a target out of reach, limits
        that exclude everything, a cluster that is not there.
    """
    stages = Stages(progress)
    rooms = Rooms(brief, library or load_checked_library(brief.overlay))
    user = _user_objective(brief)
    with stages.timed("space"):
        summary = summaries(rooms.space)
    with stages.timed("tables"):
        spaces = _search_tables(rooms, stages)
        goal = rooms.goal()
        require_bottles(brief, spaces)
        require_reach(spaces, goal)
    method = choose_method(brief, spaces)
    judge = Judge(rooms, goal, user)
    with stages.timed("search and molecules"):
        searcher = _searcher(brief, spaces, goal, method, scheduler, stages)
        pooled = gather(brief, spaces, goal, judge, searcher, stages)
    require_hope(pooled, rooms, goal)
    if not pooled.finalists:
        raise nothing_left(spaces, goal, brief.search.seed) if not pooled.pooled else judge.nothing_passed()
    with stages.timed("ranking"):
        standings = rank(rooms, goal, pooled, resolution(brief) * PKA_UNIT)
    with stages.timed("routes"):
        candidates = candidates_of(rooms, standings, stages)
    run = _Run(rooms, spaces, goal, method, judge, pooled, standings, summary)
    return run.result(candidates, user, stages)


def _search_tables(rooms: Rooms, stages: Stages) -> list[SpaceTables]:
    """The look-up tables of every space."""
    spaces = []
    total = len(rooms.space.spaces)
    for number in range(total):
        stages.report(TABLES, number, total)
        spaces.append(rooms.search_tables(number))
    stages.report(TABLES, total, total)
    return [tables for tables in spaces if tables.size > 0]


def _user_objective(brief: Brief) -> UserObjective | None:
    """The user's own objective, where the brief names one."""
    if not brief.ranking.user_objective:
        return None
    return UserObjective(load_objective(brief.ranking.user_objective, brief.path.parent))


def _searcher(
    brief: Brief, spaces: list[SpaceTables], goal: Goal, method: Method, scheduler: str, stages: Stages
) -> Searcher:
    """Runs the search for a number of rows; an interrupted one is taken up where it stopped."""

    def search(best_n: int) -> Found:
        plan = Search(tuple(spaces), goal, best_n, resolution(brief))
        kept = Path(gettempdir()) / f"tuner-search-{brief.sha256[:16]}-{best_n}.npz" if brief.sha256 else None
        return run_search(
            plan,
            method,
            workers=brief.search.workers,
            scheduler=scheduler,
            progress=stages.report,
            checkpoint=kept,
        )

    return search


class _Run:
    """A finished run, put together for the report."""

    def __init__(
        self,
        rooms: Rooms,
        spaces: list[SpaceTables],
        goal: Goal,
        method: Method,
        judge: Judge,
        pooled: Pooled,
        standings: Standings,
        summary: tuple[SpaceSummary, ...],
    ) -> None:
        self.rooms, self.spaces, self.goal, self.method = rooms, spaces, goal, method
        self.judge, self.pooled, self.standings, self.summary = judge, pooled, standings, summary

    def result(
        self, candidates: tuple[Candidate, ...], user: UserObjective | None, stages: Stages
    ) -> DesignResult:
        """Everything that was found out."""
        brief = self.rooms.brief
        with stages.timed("summary"):
            cloud = cloud_of(self.rooms, self.goal, self.spaces)
            campaign = self.rooms.shelf.campaign([c.route for c in candidates])
        return DesignResult(
            brief=brief,
            candidates=candidates,
            spaces=self.summary,
            front=front_of(self.rooms, self.standings),
            cloud=cloud,
            method="evolutionary" if self.pooled.evolved else self.method.name,
            method_reason=self._reason(),
            certificate=self._certificate(),
            counts=self._counts(),
            notes=self._notes(user),
            campaign=campaign,
            inputs=_inputs(brief),
            library_version=self.rooms.library.version,
            seed=brief.search.seed,
            timings_s=tuple(stages.seconds),
        )

    def _certificate(self) -> str:
        """What is certain; evolution and a user's own objective add what no bound covers."""
        text = self.pooled.found.certificate.text
        if self.judge.user:
            return f"{text} {WITHOUT_OBJECTIVE}"
        return f"{text} {BY_EVOLUTION}" if self.pooled.evolved else text

    def _reason(self) -> str:
        """Which method was used and why."""
        if not self.pooled.evolved:
            return self.method.reason
        why = "an objective needs the whole molecule" if self.judge.user else "asked for in the brief"
        return f"{why}; evolution was seeded with the {self.method.name} front ({self.method.reason})"

    def _counts(self) -> tuple[tuple[str, int], ...]:
        """How many analogs there were, and what was set aside on the way."""
        patterns = sum(s.patterns for s in self.summary)
        analogs = sum(s.analogs for s in self.summary)
        listed = self.standings.listed
        return (
            ("patterns", patterns),
            ("analogs, each molecule once, within the counting limits", analogs),
            *((what, n) for what, n in self.rooms.shelf.route_counts(self.spaces, self.goal.max_steps) if n),
            ("looked at as molecules", self.pooled.pooled),
            *removed_lines(self.judge.removed),
            ("listed", listed),
        )

    def _notes(self, user: UserObjective | None) -> tuple[str, ...]:
        """Doubts about the whole run."""
        from tuner.acidity.medium import medium_notes

        brief = self.rooms.brief
        notes = [*self.pooled.notes, *medium_notes(brief.target.medium), *self.rooms.faults.lines()]
        if user is not None and user.note():
            notes.append(user.note())
        return tuple(dict.fromkeys(notes))


def _inputs(brief: Brief) -> tuple[InputFile, ...]:
    """The files that the result depends on."""
    found = [InputFile(brief.path.name, "brief", brief.sha256)]
    named = [
        (brief.measured, "measured"),
        (_beside(brief, brief.ranking.user_objective.rpartition(":")[0]), "user objective"),
        (_beside(brief, brief.reagents.shelf), "shelf"),
    ]
    for path, role in named:
        if path is not None and path.is_file():
            found.append(InputFile(path.name, role, hashlib.sha256(path.read_bytes()).hexdigest()))
    return tuple(found)


def _beside(brief: Brief, name: str) -> Path | None:
    """A file named relative to the brief."""
    return brief.path.parent / name if name else None
