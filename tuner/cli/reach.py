"""Command `tuner reach`: which single purchases bring most further analogs of a brief within reach?"""

from __future__ import annotations

from tuner.brief import find_brief, read_brief
from tuner.cli.console import progress, say, show, table
from tuner.cli.faults import placed_in
from tuner.library import load_library
from tuner.report.digits import count
from tuner.search.shelf import Shelf

SHOWN = 15
OPENS_SHOWN = 3


def run(name: str) -> None:
    """Try every bottle of the shipped shelves that is not on the brief's own."""
    from tuner.library.stock import shipped_stock
    from tuner.search.build import build_space
    from tuner.structure.molecule import canonical_smiles
    from tuner.synthesis.reach import purchases

    brief = read_brief(find_brief(name))
    library = load_library(brief.overlay)
    limit = brief.limits.max_steps
    with progress(quiet=False) as report, placed_in(brief):
        shelf = Shelf(brief, library)
        spaces = [
            (space.core, [tuple(choice.free.short for choice in listed) for listed in space.choices])
            for space in build_space(brief, library).spaces
        ]
        pool = shipped_stock(canonical_smiles)
        now, found = purchases(
            shelf.workshop, spaces, pool, limit, lambda done, total: report("trying bottles", done, total)
        )
    say(f"{count(now)} patterns are within {limit} steps of the shelf now")
    if not found:
        say("no single bottle of the shipped shelves adds to them")
        return
    headings = (("bottle", "left"), ("further patterns", "right"), ("what it opens", "left"))
    rows = [(p.item.name, count(p.more_patterns), _opens(p.opens)) for p in found[:SHOWN]]
    more = len(found) - len(rows)
    caption = "patterns: choices at all positions multiplied, before limits on groups and mass"
    show(
        table(
            "One more bottle",
            headings,
            rows,
            f"{more} further bottles help less; {caption}" if more else caption,
        )
    )


def _opens(rules: tuple[str, ...]) -> str:
    """The first rules that a bottle opens, and how many more."""
    if not rules:
        return "a starting material"
    more = len(rules) - OPENS_SHOWN
    return "; ".join(rules[:OPENS_SHOWN]) + (f"; and {more} more" if more > 0 else "")
