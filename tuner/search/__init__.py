"""Which analogs are best, and is nothing better missed? `design` runs a brief, `survey` only measures its
space.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from tuner.brief.records import Brief
    from tuner.library import Library
    from tuner.search.result import DesignResult, Progress, SpaceSummary


def design(
    brief: Brief, library: Library | None = None, progress: Progress | None = None, scheduler: str = ""
) -> DesignResult:
    """Run a brief; see `tuner.search.run.design`."""
    from tuner.search.run import design as run

    return run(brief, library, progress, scheduler)


def survey(brief: Brief, library: Library | None = None) -> tuple[SpaceSummary, ...]:
    """The design space of a brief, counted but not searched; see `tuner.search.run.survey`."""
    from tuner.search.extent import survey as run

    return run(brief, library)
