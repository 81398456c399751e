"""Are routes chemistry that one can follow: every step from a molecule at hand to the next, changing only
what it says?
"""

from __future__ import annotations

from functools import cache, lru_cache

import numpy as np
import pytest

from tests.synthesis.benches import book, library
from tuner.library.reactions import Reaction
from tuner.library.records import HYDROGEN_SHORT, Core
from tuner.library.stock import shipped_stock
from tuner.structure.cores import prepare_core
from tuner.structure.molecule import canonical_smiles
from tuner.structure.templates import fit_core
from tuner.synthesis.planner import plan_core, steps_over
from tuner.synthesis.records import NO_ROUTE, Route, Step
from tuner.synthesis.routes import routes_to
from tuner.synthesis.setting import Workshop

GROUPS = ("H", "Me", "OMe", "Cl", "Br", "NO2", "CO2H", "CO2Et", "COMe", "CN", "NHAc", "tBu", "Ph")
CORES = {
    "phenol": 4,
    "aniline": 4,
    "N,N-dimethylaniline": 4,
    "4-nitrophenol": 4,
    "2-naphthol": 2,
    "7-hydroxycoumarin": 4,
    "4-arylazophenol": 4,
    "4-hydroxychalcone": 4,
    "phenolsulfonephthalein": 4,
}
ROUTES_EACH = 40
RULES = {rule.name: rule for rule in book().reactions}
CAPPED = ("protection", "deprotection")


@lru_cache(maxsize=1)
def bench() -> Workshop:
    """The whole shipped shelf, bottles that are out of stock as well."""
    return Workshop(library(), book(), tuple(shipped_stock(canonical_smiles)))


@cache
def sampled(name: str) -> tuple[tuple[int, Route], ...]:
    """Routes to analogs of one core, spread over all that can be made, each with the planner's count."""
    core = library().cores[name]
    labels = prepare_core(core).open_labels
    listed = [GROUPS] * len(labels)
    plan = plan_core(bench(), core, listed, CORES[name])
    table = steps_over(plan, listed)
    draws = np.random.default_rng(11).integers(0, len(GROUPS), (60_000, len(labels)))
    draws[np.random.default_rng(12).random(draws.shape) < 0.6] = 0
    draws = np.unique(draws, axis=0)
    counts = table.at(draws)
    chosen = np.flatnonzero((counts > 0) & (counts < NO_ROUTE) & (counts <= CORES[name]))
    found = []
    for k in chosen[:: max(1, len(chosen) // ROUTES_EACH)][:ROUTES_EACH]:
        pattern = {label: GROUPS[g] for label, g in zip(labels, draws[k], strict=True)}
        found += [(int(counts[k]), route) for route in routes_to(plan, pattern, 2)]
    return tuple(found)


@pytest.mark.parametrize("name", CORES)
def test_routes_are_as_long_as_counted(name: str) -> None:
    assert sampled(name)
    assert all(len(route.steps) == count for count, route in sampled(name))


@pytest.mark.parametrize("name", CORES)
def test_every_substrate_is_a_bottle_or_an_earlier_product(name: str) -> None:
    shelf = {item.smiles for item in bench().shelf} | {
        part for item in bench().shelf for part in item.smiles.split(".")
    }
    names = {item.name for item in bench().shelf}
    for _, route in sampled(name):
        made: set[str] = set()
        used: set[str] = set()
        for step in route.steps:
            parts = set(step.substrate.split("."))
            assert parts <= shelf | made, (
                f"{parts - shelf - made} came from nowhere on the way to {route.target}"
            )
            used |= parts
            made.add(step.product)
        assert route.steps[-1].product == route.target
        assert made - used == {route.target}
        assert set(route.starting_materials) <= names
        assert all(set(step.reagents) <= names for step in route.steps)


@pytest.mark.parametrize("name", CORES)
def test_molecules_are_spelled_canonically(name: str) -> None:
    for _, route in sampled(name):
        for step in route.steps:
            assert step.product == canonical_smiles(step.product)
            assert step.substrate != step.product


@pytest.mark.parametrize("name", CORES)
def test_a_step_changes_only_what_its_rule_names(name: str) -> None:
    seen = 0
    for _, route in sampled(name):
        for step in route.steps:
            if step.kind in RULES:
                assert any(
                    explains(core, RULES[step.kind], step) for core in library().cores.values()
                ) or capped(route, step)
                seen += 1
    assert seen > 10


def capped(route: Route, step: Step) -> bool:
    """Whether the step is done under a protecting group, so that no core fits its molecules."""
    before = route.steps[: route.steps.index(step)]
    return any(s.kind == "protection" for s in before)


def explains(core: Core, rule: Reaction, step: Step) -> bool:
    """Whether both molecules are patterns of the core that differ only in groups that the rule takes and
    gives.
    """
    takes = set(rule.takes) or {HYDROGEN_SHORT}
    for one in fit_core(core, step.substrate):
        for two in fit_core(core, step.product):
            before, after = bench().named(one), bench().named(two)
            if before is None or after is None:
                continue
            changed = [k for k in {*before, *after} if before.get(k) != after.get(k)]
            if changed and all(
                before.get(k, HYDROGEN_SHORT) in takes and after.get(k, HYDROGEN_SHORT) in rule.gives
                for k in changed
            ):
                return True
    return False


def test_no_route_to_what_cannot_be_made() -> None:
    core = library().cores["phenol"]
    listed = [("H", "NO2")] * 5
    plan = plan_core(bench(), core, listed, 6)
    assert routes_to(plan, {"2": "NO2", "4": "NO2", "6": "NO2"}) == ()
    assert routes_to(plan, {"2": "NO2", "4": "NO2"})
