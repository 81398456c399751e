"""Which face does the acidity model show to the molecule door?"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Protocol

from tuner.library.records import Substituent
from tuner.prediction.records import Term
from tuner.structure.records import PreparedCore


class RingModel(Protocol):
    """Evaluates a phenol or aniline with groups at its open positions."""

    def evaluate(
        self, prepared: PreparedCore, groups: Mapping[str, Substituent]
    ) -> tuple[float, float, tuple[Term, ...]]:
        """pKa25, its standard error, and the pKa as a sum of terms."""
        ...
