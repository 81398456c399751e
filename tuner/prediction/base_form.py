"""Which share of the reporting group is in its base form at a given pH?

A single group follows the common curve around its pKa'. Where other groups ionise nearby the curve is the sum
over all microstates, and no longer that of one pKa'; so it is worked out from them.
"""

from __future__ import annotations

import numpy as np

from tuner.acidity.tables import FloatArray
from tuner.brief.records import Medium
from tuner.errors import TunerError
from tuner.library.catalogue import Library
from tuner.prediction.estimate import Estimator
from tuner.prediction.ionisation import Ionisation
from tuner.prediction.ring_model import RingModel
from tuner.prediction.sites import REPORTING_KINDS, SiteMaker
from tuner.structure.charging import bonds_between, formal_charge
from tuner.structure.dissect import dissect
from tuner.structure.scaffolds import index_cores

SEARCH_PH = (-14.0, 18.0)
"""Where a wanted share is looked for; a little beyond the values that are given at all."""
STEP_PH = 0.02


class BaseForm:
    """Curves of the reporting group with one library, one ring model and one medium.

    Parameters
    ----------
    library : Library
    model : RingModel
        The fitted acidity model.
    medium : Medium
        Checked beforehand (`acidity.medium.require_valid`).
    """

    def __init__(self, library: Library, model: RingModel, medium: Medium) -> None:
        self._medium = medium
        self._index = index_cores(library.cores)
        self._maker = SiteMaker(library, self._index, model, Estimator(library))

    def shares(self, smiles: str, ph: FloatArray) -> FloatArray:
        """Share of molecules whose reporting group is in its base form.

        Parameters
        ----------
        smiles : str
        ph : float array, shape (n,)

        Returns
        -------
        float array, shape (n,)
            0 to 1; NaN where the molecule has no treatable phenol or aniline.
        """
        ph = np.asarray(ph, dtype=np.float64)
        missing = np.full(ph.shape, np.nan)
        try:
            found = dissect(smiles, self._index)
        except TunerError:
            return missing
        if not found.sites or found.sites[0].kind not in REPORTING_KINDS:
            return missing
        table = self._maker.table(found, self._medium)
        ionisation = Ionisation(
            table.ions,
            table.energies,
            lambda i, j: bonds_between(found.smiles, table.ions[i].atom, table.ions[j].atom),
            formal_charge(found.smiles),
        )
        if not ionisation.treatable:
            return missing
        return ionisation.microstates().alpha(ionisation.free.index(0), ph)

    def ph_of_shares(self, smiles: str, wanted: tuple[float, ...]) -> tuple[float, ...]:
        """The pH at which these shares are first reached; NaN where they are not."""
        grid = np.arange(SEARCH_PH[0], SEARCH_PH[1], STEP_PH)
        curve = self.shares(smiles, grid)
        return tuple(_first_reached(grid, curve, share) for share in wanted)


def _first_reached(grid: FloatArray, curve: FloatArray, share: float) -> float:
    """Where a curve on a grid first reaches a share, on a straight line between two points."""
    above = np.flatnonzero(curve >= share)
    if not above.size or not above[0]:
        return float("nan")
    k = int(above[0])
    part = (share - curve[k - 1]) / (curve[k] - curve[k - 1])
    return float(grid[k - 1] + part * (grid[k] - grid[k - 1]))
