"""How much of the objective space does a front dominate?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from tuner.acidity.tables import FloatArray
from tuner.search.rows import Analogs
from tuner.search.tables import Goal


@dataclass(frozen=True)
class Box:
    """Ideal (`low`) and reference (`high`) point of the objectives; points beyond the reference count
    nothing.
    """

    low: FloatArray
    high: FloatArray


def usual_box(goal: Goal, lightest: float, heaviest: float) -> Box:
    """Offset 0 to twice the tolerance, steps 0 to one more than the limit, mass from lightest to heaviest
    (g/mol).
    """
    return Box(
        np.array([0.0, 0.0, lightest]), np.array([2.0 * goal.tolerance, goal.max_steps + 1.0, heaviest])
    )


def hypervolume(front: Analogs, extra: FloatArray | None, box: Box) -> float:
    """Dominated share of the box, 0 to 1; `extra` holds whole-molecule objectives, shape (n, k)."""
    if not len(front):
        return 0.0
    from pymoo.indicators.hv import HV

    values = np.stack([front.offset_values, front.steps.astype(np.float64), front.mass_values], axis=1)
    if extra is not None and extra.shape[1]:
        values = np.concatenate((values, extra), axis=1)
    scaled = (values - box.low) / (box.high - box.low)
    inside = scaled[np.all(scaled < 1.0, axis=1)]
    if not len(inside):
        return 0.0
    return float(HV(ref_point=np.ones(len(box.high)))(np.maximum(inside, 0.0)))
