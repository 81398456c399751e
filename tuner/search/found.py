"""What does a search return, and what may be relied on?"""

from __future__ import annotations

from dataclasses import dataclass

from tuner.search.rows import Analogs


@dataclass(frozen=True)
class Certificate:
    """What is certain about a result.

    `covered` analogs (patterns, symmetry duplicates included) were either evaluated (`visited`) or shown by
    an admissible bound to be no better than what is listed. `resolution_pka` is the step in which offsets
    were compared for the front (pKa units); scores were compared exactly. `bound`: no unlisted analog has a
    higher score (minus infinity where everything is listed).
    """

    covered: int
    visited: int
    resolution_pka: float
    bound: float

    @property
    def text(self) -> str:
        """Two or three sentences for a reader. `visited` is left out: it varies with the number of
        workers.
        """
        exact = self.resolution_pka < 1e-6
        front = "exact" if exact else f"exact for offsets in steps of {self.resolution_pka:.2g} pKa units"
        rest = (
            "" if self.bound == float("-inf") else f" No analog beyond those scores above {self.bound:.3f}."
        )
        return (
            f"All {self.covered:,} patterns are covered: each was evaluated, or an admissible bound shows "
            f"that it is no better than what is listed. The trade-off front is {front}, the best by score "
            f"exact.{rest}"
        )


@dataclass(frozen=True)
class Found:
    """The front (sorted by steps, mass) and the best N (sorted by falling score) with their certificate."""

    front: Analogs
    best: Analogs
    certificate: Certificate
