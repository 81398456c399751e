"""Command `tuner route`: how is this analog made from the brief's shelf, or what is missing?"""

from __future__ import annotations

from collections.abc import Sequence
from textwrap import fill

from tuner.brief import find_brief, read_brief
from tuner.brief.records import Brief
from tuner.cli.console import WIDEST, note, say
from tuner.cli.faults import placed_in
from tuner.errors import RouteError
from tuner.library import Library, load_library
from tuner.library.records import HYDROGEN_SHORT, Core
from tuner.report.wording import CAUTIONS
from tuner.search.shelf import Shelf
from tuner.synthesis.records import Route, Step

ALTERNATIVES = 4
"""Routes of equal length that are looked for beyond the first."""
PURCHASES_SHOWN = 20

Seat = tuple[Core, dict[str, str]]
"""A core of the brief and the groups (short names by locant) with which it is this molecule."""


def run(name: str, smiles: str) -> None:
    """Find the cores that the molecule is an analog of, plan, print."""
    from tuner.screening.records import WITHHOLD
    from tuner.screening.screen import screen
    from tuner.structure.molecule import canonical_smiles

    brief = read_brief(find_brief(name))
    library = load_library(brief.overlay)
    molecule = canonical_smiles(smiles)
    flags = screen([molecule], library)[0]
    if flags.withheld:
        words = "; ".join(dict.fromkeys(flag.words for flag in flags.flags if flag.severity == WITHHOLD))
        raise RouteError(f"{smiles}: {words}", remedy="energetic compounds get no route")
    shelf = Shelf(brief, library)
    with placed_in(brief):
        seats = _seats(brief, library, shelf, molecule)
        routes = _routes(brief, shelf, seats)
        if routes:
            _tell(routes)
        else:
            _tell_missing(brief, shelf, seats)
    note(dict.fromkeys(flag.words for flag in flags.flags))


def _seats(brief: Brief, library: Library, shelf: Shelf, molecule: str) -> list[Seat]:
    """Every way to see the molecule as an analog of a core of the brief.

    Raises
    ------
    RouteError
        It is no analog of any of them, or bears a group that no table has.
    """
    from tuner.structure.templates import fit_core

    found: list[Seat] = []
    fits = False
    for core in (library.cores[name] for name in brief.cores):
        for groups in fit_core(core, molecule):
            fits = True
            pattern = shelf.workshop.named(groups)
            if pattern is not None and (core, pattern) not in found:
                found.append((core, pattern))
    if found:
        return found
    if fits:
        remedy = "add it to substituents.csv in a folder of your own, so that rules know it"
        raise RouteError(f"{molecule} bears a group that is not tabulated", remedy=remedy)
    remedy = f"the brief's cores are {', '.join(brief.cores)}"
    raise RouteError(f"{molecule} is no analog of a core of the brief", remedy=remedy)


def _routes(brief: Brief, shelf: Shelf, seats: Sequence[Seat]) -> tuple[Route, ...]:
    """Shortest routes over all ways to see the molecule."""
    from tuner.structure.cores import prepare_core
    from tuner.synthesis.planner import plan_core
    from tuner.synthesis.routes import routes_to

    found: list[Route] = []
    for core, pattern in seats:
        labels = prepare_core(core).open_labels
        choices = [tuple(dict.fromkeys((HYDROGEN_SHORT, pattern.get(p, HYDROGEN_SHORT)))) for p in labels]
        plan = plan_core(shelf.workshop, core, choices, brief.limits.max_steps)
        found += routes_to(plan, pattern, ALTERNATIVES + 1)
    least = min((len(route.steps) for route in found), default=0)
    return tuple(dict.fromkeys(route for route in found if len(route.steps) == least))


def _tell(routes: Sequence[Route]) -> None:
    """The first route step by step, the others in short."""
    first = routes[0]
    steps = len(first.steps)
    length = f"{steps} step{'s' * (steps > 1)}" if steps else "no step: bought as it is"
    say(f"{first.target}: {length}")
    say(f"  from {', '.join(first.starting_materials)}")
    for n, step in enumerate(first.steps, start=1):
        _tell_step(n, step)
    told = {step.note for step in first.steps}
    note(line for line in first.notes if line not in told)
    for n, other in enumerate(routes[1 : ALTERNATIVES + 1], start=1):
        words = ", then ".join(step.title for step in other.steps)
        text = f"or as short ({n}): from {', '.join(other.starting_materials)}: {words}"
        say(fill(text, WIDEST, initial_indent="  ", subsequent_indent="    "))
    say(" ".join(CAUTIONS[1:2]))


def _tell_step(number: int, step: Step) -> None:
    """One step."""
    say(f"  {number}  {step.title}")
    for head, text in (("with", ", ".join(step.reagents)), ("gives", step.product)):
        if text:
            say(f"       {head} {text}")
    for text in (*(f"caution: {c}" for c in step.cautions), step.note):
        if text:
            say(f"       {text}")


def _tell_missing(brief: Brief, shelf: Shelf, seats: Sequence[Seat]) -> None:
    """Single bottles that would open a route."""
    from tuner.library.stock import shipped_stock
    from tuner.structure.cores import prepare_core
    from tuner.structure.molecule import canonical_smiles
    from tuner.synthesis.reach import purchases

    say(f"no route within {brief.limits.max_steps} steps from this shelf")
    spaces = [
        (core, [(pattern.get(label, HYDROGEN_SHORT),) for label in prepare_core(core).open_labels])
        for core, pattern in seats
    ]
    _, found = purchases(shelf.workshop, spaces, shipped_stock(canonical_smiles), brief.limits.max_steps)
    if not found:
        say("no single bottle of the shipped shelves would open one")
        return
    names = [purchase.item.name for purchase in found[:PURCHASES_SHOWN]]
    more = f" and {len(found) - len(names)} more" if len(found) > len(names) else ""
    text = f"one of these bottles would open one: {', '.join(names)}{more}"
    say(fill(text, WIDEST, initial_indent="  ", subsequent_indent="    "))
