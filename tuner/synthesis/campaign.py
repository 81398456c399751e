"""How many reactions does it take to make a whole list of analogs, if shared intermediates are made once?

Choosing among equally short routes so that as much as possible is shared is a Steiner problem; the list is
short, so routes are taken in order, each time the one that adds the fewest new reactions.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass

from tuner.synthesis.records import Route

Reaction = tuple[str, str, str]


@dataclass(frozen=True, slots=True)
class SharedWork:
    """`chosen[k]` is the route taken for analog k; counts of reactions alone and together; shared
    intermediates with how many use them.
    """

    chosen: tuple[Route | None, ...]
    alone: int
    together: int
    shared: tuple[tuple[str, int], ...]


def _reactions(route: Route) -> frozenset[Reaction]:
    return frozenset((step.kind, step.substrate, step.product) for step in route.steps)


def share(options: Sequence[Sequence[Route]]) -> SharedWork:
    """Choose one route for each analog so that few different reactions are needed.

    Parameters
    ----------
    options : for each analog its shortest routes (empty where it has none)

    Examples
    --------
    >>> from tuner.synthesis.records import Step
    >>> a = Step("x", "", "A", "B", (), ())
    >>> b, c = Step("y", "", "B", "C", (), ()), Step("z", "", "B", "D", (), ())
    >>> work = share([[Route("C", ("A",), (a, b))], [Route("D", ("A",), (a, c))]])
    >>> work.alone, work.together, work.shared
    (4, 3, (('B', 2),))
    """
    done: set[Reaction] = set()
    chosen: list[Route | None] = []
    for routes in options:
        if not routes:
            chosen.append(None)
            continue
        best = min(routes, key=lambda route: len(_reactions(route) - done))
        chosen.append(best)
        done |= _reactions(best)
    taken = [route for route in chosen if route is not None]
    through: Counter[str] = Counter()
    for route in taken:
        through.update({step.product for step in route.steps if step.product != route.target})
    shared = sorted(
        ((smiles, n) for smiles, n in through.items() if n > 1), key=lambda pair: (-pair[1], pair[0])
    )
    alone = sum(len(route.steps) for route in taken)
    return SharedWork(tuple(chosen), alone, len(done), tuple(shared))
