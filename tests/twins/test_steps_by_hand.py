"""Twins: step counts over whole arrays of patterns against a search by hand, one pattern after the other."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from tests.synthesis.benches import book, library, workshop
from tests.twins.steps_by_hand import HandCore, HandPlanner, Key, around
from tuner.structure.cores import prepare_core
from tuner.synthesis.alphabet import alphabet, leading_to
from tuner.synthesis.lattice import Frame, relax
from tuner.synthesis.planner import plan_core, steps_over
from tuner.synthesis.records import NO_ROUTE
from tuner.synthesis.setting import FREE, PROTECTED, Stage, Workshop

HAND_CORES = {
    "phenol": HandCore("phenol", (around("OH! 2 3 4 5 6"),), (), ("strong oxidation",)),
    "aniline": HandCore("anilinium", (around("NH2! 2 3 4 5 6"),), (), ("oxidation",)),
    "4-nitrophenol": HandCore(
        "phenol",
        (around("OH! 2 3 =NO2 5 6"),),
        (),
        ("reduction", "hydrogenation", "organometallics", "hydride"),
    ),
    "7-hydroxycoumarin": HandCore(
        "phenol",
        (around("OH! 8 ~OMe ~Me 5 6"),),
        ("3", "4"),
        ("strong base", "strong reduction", "hydrogenation", "organometallics", "hydride"),
    ),
}
BOTTLES = {
    "phenol": (
        "Oc1ccccc1",
        "Cc1ccc(O)cc1",
        "Oc1ccccc1Br",
        "O=[N+]([O-])c1ccc(O)c([N+](=O)[O-])c1",
        "COc1ccccc1O",
    ),
    "aniline": (
        "Nc1ccccc1",
        "Nc1ccc([N+](=O)[O-])cc1",
        "Cc1cccc(N)c1",
        "Nc1ccccc1C(=O)O",
        "Nc1ccc(F)c(Cl)c1",
    ),
    "4-nitrophenol": ("O=[N+]([O-])c1ccc(O)cc1", "O=[N+]([O-])c1ccc(O)c(F)c1", "COc1cc([N+](=O)[O-])ccc1O"),
    "7-hydroxycoumarin": ("O=c1ccc2ccc(O)cc2o1", "O=c1cc(Br)c2ccc(O)cc2o1", "COc1cc2ccc(=O)oc2cc1O"),
}
REAGENTS = ("OB(O)c1ccccc1", "CNC", "C[O-].[Na+]", "CO", "CC(=O)OC(C)=O", "CC(=O)Cl", "CC(C)(C)O", "CI")
RULES = tuple(rule.name for rule in book().reactions)
ROLES = tuple(book().roles)
ENDS = ("Br", "NO2", "NH2", "CO2Me", "tBu", "COMe", "NMe2", "OMe", "SO3H", "CN", "NHAc", "CHO")
MOST_STEPS = 3
MOST_GROUPS = 9
"""More would make the search by hand slow."""


def closure(rules: tuple[str, ...], ends: set[str]) -> list[str]:
    """The ends, and groups that the rules turn into them, at most so many."""
    found = sorted(ends)
    for group in found:
        for rule in book().reactions:
            if rule.name in rules and rule.kind == "exchange" and group in rule.gives:
                found += [t for t in rule.takes if t not in found and len(found) < MOST_GROUPS]
    return found


def fill_in(bench: Workshop, name: str) -> dict[Key, int]:
    """Patterns of the core on the shelf."""
    return dict.fromkeys(bench.bought(library().cores[name]), 0)


@pytest.mark.parametrize("name", sorted(HAND_CORES))
@settings(max_examples=60, deadline=None, suppress_health_check=list(HealthCheck), derandomize=True)
@given(data=st.data())
def test_counts_equal_the_search_by_hand(name: str, data: st.DataObject) -> None:
    core = library().cores[name]
    rules = tuple(
        data.draw(st.lists(st.sampled_from(RULES), min_size=25, max_size=45, unique=True), label="rules")
    )
    missing = data.draw(st.sets(st.sampled_from(ROLES), max_size=6), label="missing")
    bottles = data.draw(st.lists(st.sampled_from(BOTTLES[name]), min_size=1, unique=True), label="bottles")
    groups = closure(rules, data.draw(st.sets(st.sampled_from(ENDS), min_size=2, max_size=5), label="ends"))
    some = book().without(set(RULES) - set(rules))
    bench = workshop((*bottles, *REAGENTS), sorted(set(ROLES) - missing), some)

    stage = Stage(bench, core)
    labels = prepare_core(core).open_labels
    frame = Frame(labels, (False,) * len(labels), alphabet(stage, groups))
    begin = fill_in(bench, name)
    fast = relax(stage, frame, [(dict(key), n) for key, n in begin.items()], MOST_STEPS)
    slow = HandPlanner(bench, HAND_CORES[name], groups).search(begin, MOST_STEPS)

    for layer, protected in ((FREE, False), (PROTECTED, True)):
        keys = fast.keys[layer] if layer < len(fast.keys) else fast.keys[0][:0]
        counts = fast.counts[layer] if layer < len(fast.keys) else fast.counts[0][:0]
        told = {
            tuple(sorted(frame.pattern_of(row).items())): int(n)
            for row, n in zip(frame.rows(keys), counts, strict=True)
        }
        # a protecting group that is still on at the last step leads nowhere, and is not kept
        last = MOST_STEPS - 1 if protected else MOST_STEPS
        assert told == {key: n for (key, hidden), n in slow.items() if hidden == protected and n <= last}


@pytest.mark.parametrize("name", ["phenol", "aniline"])
def test_a_plan_drops_nothing_that_is_wanted(name: str) -> None:
    """The plan leaves out what cannot become a wanted group in time; by hand nothing is left out."""
    ends = ["Br", "NO2", "NH2", "CO2H", "Me", "CO2Me", "CN"]
    some = book().without({joining.name for joining in book().joinings})
    bench = workshop((*BOTTLES[name], *REAGENTS), ROLES, some)
    core = library().cores[name]
    listed = [("H", "NO2", "CO2Me", "CN")] * 5
    plan = plan_core(bench, core, listed, 3)
    assert plan.whole is not None
    groups = sorted(leading_to(Stage(bench, core), {"NO2", "CO2Me", "CN"}) | set(ends))
    slow = HandPlanner(bench, HAND_CORES[name], groups).search(fill_in(bench, name), 3)
    wanted = {
        key: n
        for (key, hidden), n in slow.items()
        if not hidden and {g for _, g in key} <= {"NO2", "CO2Me", "CN"}
    }
    assert wanted
    rows, counts = plan.whole.reached()
    found = {
        tuple(sorted(plan.whole.frame.pattern_of(row).items())): int(n)
        for row, n in zip(rows, counts, strict=True)
    }
    assert {key: found.get(key) for key in wanted} == wanted
    assert not {key for key in found if {g for _, g in key} <= {"NO2", "CO2Me", "CN"}} - set(wanted)


AZO = HandCore(
    "phenol",
    (around("OH! 2 3 =N=NPh 5 6"), around("=N=NPh 2' 3' 4' 5' 6'")),
    (),
    ("reduction", "hydrogenation", "organometallics", "hydride", "nitration"),
    finishing=True,
)


def on_the_dye(key: Key, rename: Mapping[str, str]) -> Key:
    """A half's pattern in labels of the dye."""
    return tuple(sorted((rename[label], group) for label, group in key))


def test_azo_dyes_equal_the_sum_over_halves() -> None:
    """Halves by hand, coupling rules by hand, finishing by hand: every analog of the space."""
    groups = ["Br", "CO2H", "CO2Me", "Me"]
    roles = ("nitrosating", "acid", "base", "brominating", "strong acid", "acylating")
    bench = workshop(("Oc1ccccc1", "Cc1ccccc1O", "Nc1ccccc1C(=O)O", "Cc1ccc(N)cc1", "CO"), roles)
    listed = [("H", *groups)] * 9
    plan = plan_core(bench, library().cores["4-arylazophenol"], listed, 4)
    table = steps_over(plan, listed)

    wide = sorted(leading_to(Stage(bench, library().cores["4-arylazophenol"], finishing=True), groups))
    coupler = HandPlanner(bench, HAND_CORES["phenol"], wide).search(fill_in(bench, "phenol"), 3)
    diazo = HandPlanner(bench, HAND_CORES["aniline"], wide).search(fill_in(bench, "aniline"), 3)
    first = {
        on_the_dye(key, {k: k for k in "2356"}): n
        for (key, hidden), n in coupler.items()
        if not hidden and "4" not in dict(key) and not {g for _, g in key} & {"NH2", "NO2", "CN"}
    }
    second = {
        on_the_dye(key, {k: f"{k}'" for k in "23456"}): n
        for (key, hidden), n in diazo.items()
        if not hidden and "NH2" not in dict(key).values()
    }
    finish = HandPlanner(bench, AZO, wide)
    left = {key: n for (key, _), n in finish.search(first, 3).items()}
    right = {key: n for (key, _), n in finish.search(second, 3).items()}
    sought = {
        tuple(sorted((*a, *b))): 1 + n + m
        for a, n in left.items()
        for b, m in right.items()
        if 1 + n + m <= 4 and {g for _, g in (*a, *b)} <= set(groups)
    }
    assert len(sought) > 20
    order = prepare_core(library().cores["4-arylazophenol"]).open_labels
    index = [[listed[0].index(dict(key).get(label, "H")) for label in order] for key in sought]
    assert table.at(np.array(index)).tolist() == list(sought.values())
    others = np.array([[k % 5 for k in range(9)], [1] * 9, [4] * 9])
    assert (table.at(others) > 4).all()
    assert NO_ROUTE > 4
