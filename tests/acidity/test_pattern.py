"""One pattern through the molecule door: sums, symmetry, unknowns, inputs left alone."""

from __future__ import annotations

from dataclasses import replace
from math import isnan, nan
from types import MappingProxyType

import numpy as np
import pytest

from tuner.acidity.constants import load_constants
from tuner.acidity.pattern import Base, PatternPka, core_shift, evaluate_pattern
from tuner.errors import StructureError
from tuner.fitting.acidity_data import MIRROR, pattern
from tuner.fitting.crossval import RING
from tuner.library import load_library
from tuner.library.records import Value

LIBRARY = load_library()
CONSTANTS = load_constants()


def told(scaffold: str, groups: str) -> PatternPka:
    return evaluate_pattern(CONSTANTS[scaffold], RING[scaffold], pattern(LIBRARY, groups))


PATTERNS = (
    ("phenol", "2:NO2 4:Cl"), ("phenol", "3:Me 4:NO2 5:Me"), ("phenol", "2:tBu 4:CN 6:tBu"),
    ("aniline", "2:Me 4:OMe"), ("aniline", "N:Me N':Et 3:CF3"), ("aniline", "N:Me 2:NO2 6:Cl"),
)  # fmt: skip


@pytest.mark.parametrize(("scaffold", "groups"), PATTERNS)
def test_terms_add_up_to_the_pka(scaffold: str, groups: str) -> None:
    answer = told(scaffold, groups)
    assert sum(term.value for term in answer.terms) == pytest.approx(answer.pka25, abs=1e-9)
    assert answer.terms[0].kind == "parent"


@pytest.mark.parametrize(("scaffold", "groups"), PATTERNS)
def test_numbering_the_other_way_round_changes_nothing(scaffold: str, groups: str) -> None:
    placed = pattern(LIBRARY, groups)
    turned = {MIRROR.get(label, label): group for label, group in placed.items()}
    here = evaluate_pattern(CONSTANTS[scaffold], RING[scaffold], placed)
    there = evaluate_pattern(CONSTANTS[scaffold], RING[scaffold], turned)
    assert (here.pka25, here.sd) == pytest.approx((there.pka25, there.sd), abs=1e-9)


def test_the_mapping_of_groups_is_not_changed() -> None:
    frozen = MappingProxyType(pattern(LIBRARY, "2:NO2 4:Cl"))
    before = dict(frozen)
    evaluate_pattern(CONSTANTS["phenol"], RING["phenol"], frozen)
    assert dict(frozen) == before


def test_hydrogen_written_out_counts_as_nothing() -> None:
    assert told("phenol", "2:Cl 3:H 4:H").pka25 == told("phenol", "2:Cl").pka25


def test_unknown_constant_gives_nan_and_not_a_number() -> None:
    nameless = replace(
        LIBRARY.substituents["Cl"], short="X", smiles="*X", sigma_meta=Value(nan, nan), field_effect=nan
    )
    answer = evaluate_pattern(CONSTANTS["phenol"], RING["phenol"], {"3": nameless})
    assert isnan(answer.pka25)


def test_a_group_of_the_users_own_constants_gets_a_wider_error() -> None:
    """The fit knows chlorine well; the same group under another constant is only as good as that constant."""
    own = replace(LIBRARY.substituents["Cl"], short="Cl-own", smiles="*[Cl]", sigma_meta=Value(0.37, 0.10))
    known = told("phenol", "3:Cl")
    answer = evaluate_pattern(CONSTANTS["phenol"], RING["phenol"], {"3": own})
    assert answer.sd > known.sd
    assert abs(answer.pka25 - known.pka25) < 0.2  # the fitted deviation of chlorine is smaller than this


def test_unlike_positions_are_told_apart_by_their_errors() -> None:
    """Two well-known meta groups about 0.1 (with the scatter of laboratories); an unforeseen ortho group far
    more."""
    strange = replace(
        LIBRARY.substituents["SOPh"], short="own", smiles="*S(=O)CC", sigma_ortho_phenol=Value(), charge=0
    )
    surprising = evaluate_pattern(CONSTANTS["phenol"], RING["phenol"], {"2": strange})
    assert told("phenol", "3:Cl 5:Me").sd < 0.2
    assert surprising.sd > 0.35


def test_a_position_that_the_core_does_not_have_is_named() -> None:
    with pytest.raises(StructureError, match="no position 9; positions are 2, 3"):
        told("phenol", "9:Cl")


def test_a_core_with_its_own_parent_starts_there() -> None:
    base = Base(Value(7.8, 0.1), "somewhere")
    answer = evaluate_pattern(CONSTANTS["phenol"], RING["phenol"], {}, base=base)
    assert answer.pka25 == pytest.approx(7.8)
    assert answer.sd == pytest.approx(np.hypot(0.1, CONSTANTS["phenol"].misfit.base))


def test_measured_parent_moves_the_model_by_its_weight() -> None:
    fixed = pattern(LIBRARY, "4:NO2")
    model = told("phenol", "4:NO2")
    sure = core_shift(CONSTANTS["phenol"], RING["phenol"], fixed, Value(model.pka25 + 0.2, 0.0), "x")
    vague = core_shift(CONSTANTS["phenol"], RING["phenol"], fixed, Value(model.pka25 + 0.2, model.sd), "x")
    assert sure.value == pytest.approx(0.2)
    assert vague.value == pytest.approx(0.1)
    assert core_shift(CONSTANTS["phenol"], RING["phenol"], {}, Value(9.0, 0.1), "x").value == 0.0


def test_every_parameter_names_a_known_source() -> None:
    for constants in CONSTANTS.values():
        assert {LIBRARY.reference(source) for source in constants.source.values()}
