"""Small shelves for the tests: bottles by structure, and one reagent with all the roles asked for."""

from __future__ import annotations

from collections.abc import Iterable
from functools import lru_cache

from tuner.library import Library, load_library
from tuner.library.reactions import ReactionBook, load_reactions
from tuner.library.records import HYDROGEN_SHORT, Core, StockItem
from tuner.structure.cores import prepare_core
from tuner.structure.molecule import canonical_smiles
from tuner.structure.templates import fit_core
from tuner.synthesis.planner import CorePlan, plan_core
from tuner.synthesis.setting import Workshop


@lru_cache(maxsize=1)
def library() -> Library:
    """The shipped tables."""
    return load_library()


@lru_cache(maxsize=1)
def book() -> ReactionBook:
    """The shipped rules."""
    return load_reactions(library().substituents)


def workshop(bottles: Iterable[str], roles: Iterable[str], rules: ReactionBook | None = None) -> Workshop:
    """A workshop whose shelf holds these structures, and water that has all these roles."""
    shelf = [StockItem(name=s, smiles=canonical_smiles(s), roles=(), in_stock=True) for s in bottles]
    shelf.append(StockItem(name="reagents", smiles="O", roles=tuple(roles), in_stock=True))
    return Workshop(library(), rules or book(), tuple(shelf))


def patterns(bench: Workshop, core: Core, smiles: str) -> list[dict[str, str]]:
    """Every way to see a molecule as a pattern of the core, in short names."""
    seen = (bench.named(groups) for groups in fit_core(core, canonical_smiles(smiles)))
    return [pattern for pattern in seen if pattern is not None]


def plan_for(bench: Workshop, core: Core, pattern: dict[str, str], max_steps: int) -> CorePlan:
    """A plan for the space of hydrogen and the groups of one pattern."""
    labels = prepare_core(core).open_labels
    listed = [tuple(dict.fromkeys((HYDROGEN_SHORT, pattern.get(label, HYDROGEN_SHORT)))) for label in labels]
    return plan_core(bench, core, listed, max_steps)
