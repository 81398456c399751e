"""What does the report need beside the result itself?"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Exhibit:
    """What is shown of one molecule; made by rooms that know molecules, keyed by SMILES in a mapping.

    `svg` is a drawing (an `<svg>` element), `mol_block` a connection table (V2000 or V3000), `response` the
    ionised share at each pH of `ph_grid`. Each may be empty; intermediates of routes have a drawing only.
    """

    svg: str = ""
    mol_block: str = ""
    response: tuple[float, ...] = ()


def ph_grid(target: float, half_width: float = 3.5, step: float = 0.05) -> tuple[float, ...]:
    """The pH values at which response curves are given, around the target.

    >>> ph_grid(7.0, 0.1, 0.05)
    (6.9, 6.95, 7.0, 7.05, 7.1)
    """
    n = round(half_width / step)
    return tuple(round(target + i * step, 6) for i in range(-n, n + 1))
