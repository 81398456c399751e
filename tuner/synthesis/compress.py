"""Which choices are made alike? From reached patterns to a small dense table over classes of choices."""

from __future__ import annotations

from collections.abc import Sequence
from math import prod

import numpy as np
from numpy.typing import NDArray

from tuner.errors import RouteError
from tuner.synthesis.lattice import Lattice
from tuner.synthesis.records import NO_ROUTE, StepPart

LARGEST_TABLE = 400_000_000
"""Entries (bytes) of a dense step table; beyond, a brief must name fewer groups."""


def step_part(lattice: Lattice, positions: Sequence[int], choices: Sequence[Sequence[str]]) -> StepPart:
    """The counts of a lattice over lists of choices, one list per label of the lattice.

    Parameters
    ----------
    positions : for each label of the lattice its position among the open positions of the core
    choices : for each label the short names that may stand there

    Raises
    ------
    RouteError
        Where the table would not fit into memory.
    """
    rows, counts = lattice.reached()
    alphabet = lattice.frame.alphabet
    place = []
    for listed in choices:
        column = np.full(len(alphabet.shorts), -1, dtype=np.int64)
        for k, short in enumerate(listed):
            if short in alphabet.index:
                column[alphabet.index[short]] = k
        place.append(column)
    index = np.stack([place[axis][rows[:, axis]] for axis in range(rows.shape[1])], axis=1) if len(rows) else rows
    kept = (index >= 0).all(axis=1) if len(rows) else np.zeros(0, dtype=bool)
    index, counts = index[kept], counts[kept]
    class_of = [_classes(index, counts, axis, len(listed)) for axis, listed in enumerate(choices)]
    shape = tuple(int(c.max(initial=0)) + 1 for c in class_of)
    if prod(shape) > LARGEST_TABLE:
        raise RouteError(
            f"the step counts of {lattice.stage.core.name} would take {prod(shape):.1e} table entries",
            place="key groups.allow",
            remedy="name fewer groups",
        )
    table = np.full(shape, NO_ROUTE, dtype=np.uint8)
    at = tuple(class_of[axis][index[:, axis]] for axis in range(len(choices)))
    np.minimum.at(table, at, counts)
    return StepPart(tuple(positions), tuple(class_of), table)


def _classes(
    index: NDArray[np.int64], counts: NDArray[np.uint8], axis: int, n_choices: int
) -> NDArray[np.int64]:
    """Class of each choice on one axis: equal where the counts over all other axes are equal."""
    rest = np.delete(index, axis, axis=1)
    signatures: dict[bytes, int] = {}
    classes = np.zeros(n_choices, dtype=np.int64)
    for k in range(n_choices):
        here = index[:, axis] == k
        lines = np.concatenate((rest[here], counts[here][:, None].astype(np.int64)), axis=1)
        lines = lines[np.lexsort(lines.T[::-1])] if len(lines) else lines
        classes[k] = signatures.setdefault(lines.tobytes(), len(signatures))
    return classes
