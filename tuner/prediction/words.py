"""How are a core and its groups written in one cell of a table?"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from tuner.library.records import Substituent
from tuner.structure.records import PlacedGroup


def substitution(groups: Iterable[PlacedGroup], resolved: Mapping[str, Substituent]) -> str:
    """Groups in locant order as "2-Cl, 4-NO2"; "unsubstituted" where there is none.

    Parameters
    ----------
    groups : placed groups of one site, in the order to be shown
    resolved : label -> group record
    """
    words = [f"{g.label}-{resolved[g.label].short}" for g in groups if g.label in resolved]
    return ", ".join(words) if words else "unsubstituted"
