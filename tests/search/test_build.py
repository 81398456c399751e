"""The space of a brief: choices, limits, acting forms, anchors, parts by groups on nitrogen."""

from __future__ import annotations

from dataclasses import replace
from itertools import product
from pathlib import Path

import pytest

from tuner.brief.records import Brief, Groups, Limits, Medium, Ranking, Reagents, SearchPlan, Target
from tuner.errors import BriefError
from tuner.library import load_library
from tuner.library.records import Core
from tuner.search.anchors import bound_form, bound_forms
from tuner.search.build import build_space, count_analogs, nitrogen_parts
from tuner.search.molecules import smiles_of, substitution_of
from tuner.search.palette import acting_form, is_free_form, near_target
from tuner.search.space import Choice, CoreSpace
from tuner.structure.cores import prepare_core

LIBRARY = load_library()
NITROPHENOL = Brief(
    title="test",
    target=Target(6.4, 0.2, Medium()),
    also=(),
    cores=("4-nitrophenol",),
    reagents=Reagents(),
    groups=Groups(allow=("Cl", "Me", "CO2H", "family:halogen")),
    limits=Limits(),
    ranking=Ranking(),
    search=SearchPlan(),
    overlay=None,
    measured=None,
    path=Path("test.toml"),
    sha256="",
)


def shorts(space, position=0):
    return [choice.free.short for choice in space.choices[position]]


def space_of(**changes):
    return build_space(replace(NITROPHENOL, **changes), LIBRARY).spaces[0]


def test_hydrogen_comes_first_then_groups_in_the_order_of_the_table():
    assert shorts(space_of()) == ["H", "Me", "F", "Cl", "Br", "I", "CO2H"]


def test_forbidden_groups_go_whatever_allows_them():
    groups = Groups(allow=("family:halogen", "Me"), forbid=("smarts:[Br,I]", "F"))
    assert shorts(space_of(groups=groups)) == ["H", "Me", "Cl"]


def test_the_form_that_acts_is_the_one_that_dominates_at_the_target():
    choice = next(c for c in space_of().choices[0] if c.free.short == "CO2H")
    assert choice.acting.short == "CO2-"
    acid = replace(NITROPHENOL.target, ph=2.0)
    assert next(c for c in space_of(target=acid).choices[0] if c.free.short == "CO2H").acting.short == "CO2H"


def test_of_two_protonation_states_the_one_with_less_charge_is_made():
    assert is_free_form(LIBRARY.substituents["CO2H"], LIBRARY)
    assert not is_free_form(LIBRARY.substituents["CO2-"], LIBRARY)
    assert acting_form(LIBRARY.substituents["NMe2"], 2.0, LIBRARY).short == "NHMe2+"
    assert near_target(LIBRARY.substituents["CO2H"], 5.0, LIBRARY)
    assert not near_target(LIBRARY.substituents["CO2H"], 7.0, LIBRARY)


def test_exactly_one_handle_and_its_bound_form_acts():
    space = space_of(groups=Groups(allow=("Cl",), anchors=("CO2H", "CH2NH2")))
    handles = [choice for choice in space.choices[0] if choice.is_anchor]
    assert {(c.free.short, c.acting.short) for c in handles} == {("CO2H", "CONHMe"), ("CH2NH2", "CH2NHAc")}
    # four positions, two handles, the other three bear H or Cl: 4 * 2 * 2^3 patterns, halved by the mirror
    assert count_analogs(space) == (4**4, 32)


def test_a_required_group_is_counted():
    groups = Groups(allow=("Cl", "Me"), require=("Cl",))
    space = space_of(groups=groups)
    # with a mirror n choices at four positions make (n^4 + n^2) / 2 molecules; those without any Cl are
    # taken off
    assert count_analogs(space)[1] == (3**4 + 3**2) // 2 - (2**4 + 2**2) // 2


def test_numbers_of_substituents_are_limited():
    space = space_of(groups=Groups(allow=("Cl",)), limits=Limits(min_substituents=1, max_substituents=2))
    # one or two Cl on four positions with a mirror: 2 + 4 molecules
    assert count_analogs(space)[1] == 6


def test_nitro_groups_that_would_make_an_explosive_are_kept_out():
    space = space_of(groups=Groups(allow=("NO2",)))
    analogs = count_analogs(space)[1]
    # 4-nitrophenol bears one already: one more may be added, at 2 or at 3
    assert analogs == 3


def test_parts_by_groups_on_nitrogen_are_disjoint_and_complete():
    core = Core("n-open", "", "N([*:7])([*:8])c1ccc([*:4])cc1", "anilinium", labels={7: "N", 8: "N'"})
    prepared = prepare_core(core)
    listed = tuple(Choice(LIBRARY.substituents[s], LIBRARY.substituents[s]) for s in ("H", "Me", "Et"))
    parts = nitrogen_parts(prepared, (listed,) * 3)
    on = [p for p, label in enumerate(prepared.open_labels) if prepared.slot(label).relation == "nitrogen"]
    assert len(on) == 2
    bears = [tuple(part[p][0].free.short != "H" for p in on) for _, part in parts]
    assert bears == [
        (False, False),
        (False, True),
        (True, True),
    ]  # (True, False) is the same as (False, True)
    for _, part in parts:
        assert all(len({c.free.short == "H" for c in part[p]}) == 1 for p in on)
    molecules = {
        smiles_of(CoreSpace(core, kept, part, ()), row)
        for kept, part in parts
        for row in product(*(range(len(own)) for own in part))
    }
    whole = CoreSpace(core, prepared, (listed,) * 3, ())
    assert molecules == {smiles_of(whole, row) for row in product(range(3), repeat=3)}


def test_a_handle_without_a_bound_form_is_named():
    with pytest.raises(BriefError, match='handle "Cl" becomes'):
        bound_form("Cl", LIBRARY)


def test_every_handle_of_the_table_has_known_groups():
    forms = bound_forms(LIBRARY)
    assert len(forms) >= 12
    assert all(short in LIBRARY.substituents and group.short for short, group in forms.items())


def test_substitution_is_written_with_the_lowest_locants():
    space = space_of(groups=Groups(allow=("Cl",)))
    assert substitution_of(space, [0, 0, 0, 1]) == "2-Cl"
    assert substitution_of(space, [0, 0, 0, 0]) == "unsubstituted"
    assert smiles_of(space, [0, 0, 0, 1]) == smiles_of(space, [1, 0, 0, 0])
