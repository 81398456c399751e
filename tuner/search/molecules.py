"""Which molecule is a row of choices, and how is it written?"""

from __future__ import annotations

from collections.abc import Sequence

from tuner.library.records import HYDROGEN_SHORT
from tuner.search.space import CoreSpace
from tuner.structure.assemble import assemble

UNSUBSTITUTED = "unsubstituted"


def groups_of(space: CoreSpace, row: Sequence[int], *, bound: bool = False) -> dict[str, str]:
    """Label -> `*...` SMILES of the groups that are not hydrogen; `bound`: handles as bound to the
    carrier.
    """
    found = {}
    for label, listed, k in zip(space.prepared.open_labels, space.choices, row, strict=False):
        choice = listed[int(k)]
        group = choice.acting if bound and choice.is_anchor else choice.free
        if group.short != HYDROGEN_SHORT:
            found[label] = group.smiles
    return found


def smiles_of(space: CoreSpace, row: Sequence[int], *, bound: bool = False) -> str:
    """Canonical SMILES of an analog: the free dye, or with its handle as bound."""
    return assemble(space.core, groups_of(space, row, bound=bound))


def substitution_of(space: CoreSpace, row: Sequence[int]) -> str:
    """The pattern as a chemist writes it: "2-Cl, 4'-NO2", in the order of the positions, with the lowest
    locants that symmetry allows, then the groups in alphabetical order.
    """
    names = [listed[int(k)].free.short for listed, k in zip(space.choices, row, strict=False)]
    images = [[names[q] for q in permutation] for permutation in space.prepared.symmetry] or [names]
    best = min(images, key=_locants_then_names)
    labelled = zip(space.prepared.open_labels, best, strict=True)
    return ", ".join(f"{label}-{name}" for label, name in labelled if name != HYDROGEN_SHORT) or UNSUBSTITUTED


def _locants_then_names(names: Sequence[str]) -> tuple[list[bool], list[str]]:
    """Sort key: occupied positions first, then names."""
    return [name == HYDROGEN_SHORT for name in names], [name.casefold() for name in names]


def short_names(space: CoreSpace, row: Sequence[int]) -> list[str]:
    """Short names of the groups of an analog, hydrogen left out."""
    names = [listed[int(k)].free.short for listed, k in zip(space.choices, row, strict=False)]
    return [name for name in names if name != HYDROGEN_SHORT]


def has_anchor(space: CoreSpace, row: Sequence[int]) -> bool:
    """Whether a handle is among the groups."""
    return any(listed[int(k)].is_anchor for listed, k in zip(space.choices, row, strict=False))
