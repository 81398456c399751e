"""How do two groups act on each other?

Every coupling is a product of one number of each group (see `nature`), times one parameter. So the couplings
of all choices at two positions are outer products, and a single molecule uses the same table.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from tuner.acidity.nature import Nature
from tuner.acidity.tables import FloatArray
from tuner.structure.records import Slot

AMINE_FREE, AMINE_ALKYL, AMINE_DIALKYL = 0, 1, 2
"""How many groups the reporting nitrogen bears (0 for phenols)."""


@dataclass(frozen=True, slots=True)
class Coupling:
    """parameter * first-group number * second-group number.

    `pair` is the relations of the two positions by initials (o, m, p, n); `beside` asks for neighbours on
    the ring; `amine` restricts to one count of groups on the nitrogen (-1: any).
    """

    parameter: str
    pair: str
    one: str
    two: str
    beside: bool = False
    amine: int = -1


COUPLINGS = (
    Coupling("acceptors_oo", "oo", "pull_ortho", "pull_ortho"),
    Coupling("acceptors_om", "om", "pull_ortho", "pull_meta"),
    Coupling("acceptors_op", "op", "pull_ortho", "pull_para"),
    Coupling("acceptors_mm", "mm", "pull_meta", "pull_meta"),
    Coupling("acceptors_mp", "mp", "pull_meta", "pull_para"),
    Coupling("solvation", "oo", "hydrocarbon", "hydrocarbon"),
    Coupling("two_large", "oo", "large_hydrocarbon", "large_hydrocarbon"),
    Coupling("crowding", "oo", "bulky", "bulky"),
    Coupling("buttressing", "om", "bulky", "bulky", beside=True),
    Coupling("ortho_bulk_para_acceptor", "op", "hydrocarbon", "resonance_pull"),
    Coupling("ortho_large_para_acceptor", "op", "large_hydrocarbon", "resonance_pull"),
    Coupling("ortho_ether_para_acceptor", "op", "ether", "resonance_pull"),
    Coupling("ortho_field_para_acceptor", "op", "field_pull", "resonance_pull"),
    Coupling("ortho_bulk_para_field", "op", "hydrocarbon", "field_pull"),
    Coupling("neighbours_para_field", "mp", "bulky", "field_pull", beside=True),
    Coupling("twist_para", "mp", "press", "turned_acceptor", beside=True),
    Coupling("twist_ortho", "om", "turned_acceptor", "press", beside=True),
    Coupling("twist_ether_para", "mp", "press", "turned_ether", beside=True),
    Coupling("twist_ether_ortho", "om", "turned_ether", "press", beside=True),
    Coupling("alkyl_between", "oo", "bulky", "bulky", amine=AMINE_ALKYL),
    Coupling("alkyl_between_acceptors", "oo", "bulky_pull", "bulky_pull", amine=AMINE_ALKYL),
    Coupling("dialkyl_between", "oo", "bulky", "bulky", amine=AMINE_DIALKYL),
    Coupling("dialkyl_between_acceptors", "oo", "bulky_pull", "bulky_pull", amine=AMINE_DIALKYL),
    Coupling("alkyl_acceptors_op", "op", "pull_ortho", "pull_para", amine=AMINE_ALKYL),
    Coupling("dialkyl_acceptors_op", "op", "pull_ortho", "pull_para", amine=AMINE_DIALKYL),
    Coupling("acceptor_and_oxide", "om", "turned_acceptor", "oxide"),
    Coupling("acceptor_and_oxide", "mp", "oxide", "turned_acceptor"),
    Coupling("acceptor_and_donor_op", "op", "pull_ortho", "push_para"),
    Coupling("dialkyl_longer_acceptor", "pn", "resonance_pull", "longer", amine=AMINE_DIALKYL),
    Coupling("dialkyl_longer_nitroso", "pn", "takes_proton", "longer", amine=AMINE_DIALKYL),
    Coupling("dialkyl", "nn", "present", "present"),
    Coupling("dialkyl_longer", "nn", "longer", "present"),
    Coupling("dialkyl_longer", "nn", "present", "longer"),
    Coupling("dialkyl_large", "nn", "largest", "present"),
    Coupling("dialkyl_large", "nn", "present", "largest"),
)
"""Justified by residuals of several compounds each; see the table that `python -m tuner.fitting check`
prints."""

COUPLING_PARAMETERS = tuple(dict.fromkeys(c.parameter for c in COUPLINGS))

_ORDER = {"ortho": 0, "meta": 1, "para": 2, "nitrogen": 3}


def _applies(coupling: Coupling, first: Slot, second: Slot, amine: int) -> bool:
    """Whether a coupling acts between two positions, `first` not after `second` in the order o, m, p, n."""
    if first.relation[0] + second.relation[0] != coupling.pair or coupling.amine not in (-1, amine):
        return False
    return not coupling.beside or second.label in first.neighbours or first.label in second.neighbours


def couple(
    first: Slot, ones: Sequence[Nature], second: Slot, twos: Sequence[Nature], amine: int
) -> dict[str, FloatArray]:
    """Coupling features between all choices at two positions.

    Parameters
    ----------
    first, second : Slot
        Only positions on one reporting ring (a dye may have two) and on the reporting nitrogen couple.
    ones, twos : sequences of Nature
        The choices at each.
    amine : int
        Number of groups on the reporting nitrogen.

    Returns
    -------
    dict
        Parameter -> array of shape (len(ones), len(twos)).
    """
    if first.relation not in _ORDER or second.relation not in _ORDER or first.ring != second.ring:
        return {}
    swapped = _ORDER[first.relation] > _ORDER[second.relation]
    if swapped:
        first, ones, second, twos = second, twos, first, ones
    found: dict[str, FloatArray] = {}
    for coupling in COUPLINGS:
        if not _applies(coupling, first, second, amine):
            continue
        left = np.array([getattr(n, coupling.one) for n in ones])
        right = np.array([getattr(n, coupling.two) for n in twos])
        if not left.any() or not right.any():
            continue
        table = np.outer(left, right) * (first.transmission * second.transmission)
        found[coupling.parameter] = found.get(coupling.parameter, 0.0) + (table.T if swapped else table)
    return found


def acceptor_product(first: Slot, ones: Sequence[Nature], second: Slot, twos: Sequence[Nature]) -> FloatArray:
    """Product of the pulls of the groups at two ring positions, shape (len(ones), len(twos)); 0 elsewhere.

    The model is less sure where two strong acceptors act together; the misfit variance goes with this
    product squared.
    """
    if first.ring != second.ring:
        return np.zeros((len(ones), len(twos)))
    pulls = []
    for slot, natures in ((first, ones), (second, twos)):
        name = {"ortho": "pull_ortho", "meta": "pull_meta", "para": "pull_para"}.get(slot.relation)
        pulls.append(np.array([getattr(n, name) if name is not None else 0.0 for n in natures]))
    return np.asarray(np.outer(pulls[0], pulls[1]))
