"""How do a brief's further targets bind the search?

Every target has its own medium, hence its own table of pKa'. A dye that "switches" there must have its pKa'
within the window, one that "stays off" above ph + tolerance (not ionised at that pH), one that "stays on"
below ph - tolerance. The point estimate must meet every further target; the hit probability is that of
meeting all of them (errors shared).
"""

from __future__ import annotations

from math import inf

import numpy as np

from tuner.acidity.tables import CoreTables
from tuner.brief.records import Target
from tuner.search.probability import LEAST_SD, normal_share
from tuner.search.tables import HIGHEST_WHOLE, PKA_UNIT, Condition, fixed_sum

SWITCHES, STAYS_OFF, STAYS_ON = "switches", "stays_off", "stays_on"


def window(target: Target) -> tuple[float, float]:
    """The interval of pKa' that a target asks for (pKa units; infinite on the open side).

    Examples
    --------
    >>> from tuner.brief.records import Medium
    >>> window(Target(5.5, 0.5, Medium(), role="stays_off"))
    (6.0, inf)
    """
    if target.role == STAYS_OFF:
        return target.ph + target.tolerance, inf
    if target.role == STAYS_ON:
        return -inf, target.ph - target.tolerance
    return target.ph - target.tolerance, target.ph + target.tolerance


def target_name(target: Target) -> str:
    """What a target is called where analogs that miss it are counted."""
    words = {
        SWITCHES: f"switches at {target.ph:g} ± {target.tolerance:g}",
        STAYS_OFF: f"stays off up to pH {target.ph:g}",
        STAYS_ON: f"stays on from pH {target.ph:g}",
    }[target.role]
    where = target.name or f"{target.medium.temperature_c:g} °C"
    return f"misses the target in {where} ({words})"


def condition(target: Target, tables: CoreTables) -> Condition:
    """A further target as the search sees it, on one core's tables in that target's medium."""
    low, high = window(target)
    return Condition(
        name=target_name(target),
        pka=fixed_sum(tables.pka, PKA_UNIT),
        variance=fixed_sum(tables.variance),
        low=-HIGHEST_WHOLE if low == -inf else round(low / PKA_UNIT),
        high=HIGHEST_WHOLE if high == inf else round(high / PKA_UNIT),
        centre=round(target.ph / PKA_UNIT) if target.role == SWITCHES else None,
    )


def probability(target: Target, pka: float, sd: float) -> float:
    """Probability that a dye with this pKa' and standard error does what the target asks (0 to 1)."""
    low, high = window(target)
    spread = max(sd, LEAST_SD)
    return float(normal_share(np.array((low - pka) / spread), np.array((high - pka) / spread)))
