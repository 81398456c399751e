"""Which analogs of the brief's spaces have been measured?

A measured dye may be a certain hit although its prediction misses the window, so that no search by
prediction would list it. The few that there are join the pool whatever their prediction.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import numpy as np

from tuner.errors import TunerError
from tuner.library.records import HYDROGEN_SHORT, MeasuredPka
from tuner.search.evaluate import evaluate_admitted
from tuner.search.rows import Analogs, join, no_analogs
from tuner.search.space import CoreSpace
from tuner.search.symmetry import canonical_form
from tuner.search.tables import Goal, Int64, SpaceTables
from tuner.structure.templates import fit_core


def known_analogs(
    spaces: Sequence[CoreSpace], tables: Sequence[SpaceTables], goal: Goal, measured: Iterable[MeasuredPka]
) -> Analogs:
    """The measured compounds that are analogs of these spaces and within the limits that the tables can
    tell.

    Parameters
    ----------
    spaces : the spaces by rank
    tables : look-ups of those that are searched
    measured : measured compounds; those that fit no core are passed over
    """
    listed = list(measured)
    parts = [no_analogs()]
    for own in tables:
        rows = [row for value in listed if (row := _row_of(spaces[own.rank], value)) is not None]
        if rows:
            index = np.unique(canonical_form(np.array(rows, dtype=np.int64), own.symmetry), axis=0)
            parts.append(evaluate_admitted(own, goal, index))
    return join(parts)


def _row_of(space: CoreSpace, value: MeasuredPka) -> Int64 | None:
    """The choices of a measured compound, or None where it is no analog of the space."""
    try:
        patterns = fit_core(space.core, value.smiles)
    except TunerError:
        return None
    for pattern in patterns:
        row = [_choice(space, p, pattern.get(label)) for p, label in enumerate(space.prepared.open_labels)]
        if None not in row:
            return np.array(row, dtype=np.int64)
    return None


def _choice(space: CoreSpace, position: int, smiles: str | None) -> int | None:
    """The choice with this group, hydrogen where none is named; None where it is not offered."""
    for k, choice in enumerate(space.choices[position]):
        if choice.free.smiles == smiles or (smiles is None and choice.free.short == HYDROGEN_SHORT):
            return k
    return None
