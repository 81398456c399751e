"""Which choices are made alike? From reached patterns to a small dense table over classes of choices."""

from __future__ import annotations

from collections.abc import Sequence
from math import prod

import numpy as np
from numpy.typing import NDArray

from tuner.errors import RouteError
from tuner.synthesis.lattice import Lattice
from tuner.synthesis.records import NO_ROUTE, ListedPart, StepPart

LARGEST_TABLE = 4_000_000
"""Entries (bytes) of a dense step table; beyond, the patterns with a route are listed one by one."""

LARGEST_KEY = 2**62


def step_part(
    lattice: Lattice, positions: Sequence[int], choices: Sequence[Sequence[str]]
) -> StepPart | ListedPart:
    """The counts of a lattice over lists of choices, one list per label of the lattice.

    A small dense table over classes of choices where it fits, otherwise the list of what can be made.

    Parameters
    ----------
    positions : for each label of the lattice its position among the open positions of the core
    choices : for each label the short names that may stand there

    Raises
    ------
    RouteError
        Where the patterns are too many to be numbered.
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
    index = (
        np.stack([place[axis][rows[:, axis]] for axis in range(rows.shape[1])], axis=1)
        if len(rows)
        else np.zeros(rows.shape, dtype=np.int64)
    )
    kept = (index >= 0).all(axis=1) if len(rows) else np.zeros(0, dtype=bool)
    index, counts = index[kept], counts[kept]
    class_of = [_classes(index, counts, axis, len(listed)) for axis, listed in enumerate(choices)]
    shape = tuple(int(c.max(initial=0)) + 1 for c in class_of)
    if prod(shape) > LARGEST_TABLE:
        if prod(len(listed) for listed in choices) > LARGEST_KEY:
            what = f"the patterns of {lattice.stage.core.name} are too many to be numbered"
            raise RouteError(what, place="key groups.allow", remedy="name fewer groups")
        return _listed(index, counts, positions, [len(listed) for listed in choices])
    table = np.full(shape, NO_ROUTE, dtype=np.uint8)
    at = tuple(class_of[axis][index[:, axis]] for axis in range(len(choices)))
    np.minimum.at(table, at, counts)
    return StepPart(tuple(positions), tuple(class_of), table)


def _listed(
    index: NDArray[np.int64], counts: NDArray[np.uint8], positions: Sequence[int], sizes: Sequence[int]
) -> ListedPart:
    """The patterns with a route, numbered with positions in ascending order."""
    order = sorted(range(len(positions)), key=lambda axis: positions[axis])
    keys = np.zeros(len(index), dtype=np.int64)
    for axis in order:
        keys = keys * sizes[axis] + index[:, axis]
    by = np.lexsort((counts, keys))
    keys, counts = keys[by], counts[by]
    first = np.concatenate(([True], keys[1:] != keys[:-1])) if len(keys) else np.zeros(0, dtype=np.bool_)
    places = tuple(positions[axis] for axis in order)
    return ListedPart(places, tuple(sizes[axis] for axis in order), keys[first], counts[first])


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
