"""Laws of the directing rules, on random rings."""

from __future__ import annotations

from dataclasses import replace

from hypothesis import given
from hypothesis import strategies as st

from tests.synthesis.benches import book
from tuner.library.reactions import Reaction
from tuner.synthesis.ring import BURDEN, Code, RingView

HYDROGEN = Code("", False, True)
STEERS = tuple(way for way in BURDEN if way)
RULES = tuple(rule for rule in book().reactions if rule.kind == "ring substitution")
DISTANCE = {(str(a), str(b)): min((a - b) % 6, (b - a) % 6) for a in range(6) for b in range(6)}

codes = st.one_of(st.just(HYDROGEN), st.builds(Code, st.sampled_from(STEERS), st.booleans(), st.just(False)))
rings = st.lists(codes, min_size=6, max_size=6)
rules = st.sampled_from(RULES)


def hit(rule: Reaction, ring: list[Code]) -> set[int]:
    """Places with hydrogen that the rule attacks."""
    view = RingView(tuple("012345"), DISTANCE, {str(k): (code,) for k, code in enumerate(ring)}, {})
    return {int(p) for p, mask in view.attacked(rule).items() if bool(mask.all()) and ring[int(p)].empty}


@given(rules, rings, st.integers(0, 5), st.booleans())
def test_turning_and_mirroring_the_ring_changes_nothing(
    rule: Reaction, ring: list[Code], turn: int, mirror: bool
) -> None:
    place = [(turn - k if mirror else turn + k) % 6 for k in range(6)]
    moved = [HYDROGEN] * 6
    for k, code in enumerate(ring):
        moved[place[k]] = code
    assert hit(rule, moved) == {place[k] for k in hit(rule, ring)}


@given(rules, rings)
def test_a_stronger_reagent_reaches_no_fewer_places(rule: Reaction, ring: list[Code]) -> None:
    assert hit(rule, ring) <= hit(replace(rule, burden=rule.burden + 1), ring)


@given(rules, rings)
def test_no_attack_beside_a_very_large_group(rule: Reaction, ring: list[Code]) -> None:
    for k in hit(rule, ring):
        assert not ring[(k + 1) % 6].large
        assert not ring[k - 1].large


@given(rules, st.sampled_from(STEERS[:3]))
def test_a_lone_donor_never_directs_to_meta(rule: Reaction, donor: str) -> None:
    ring = [Code(donor, False, False), *[HYDROGEN] * 5]
    assert not hit(rule, ring) & {2, 4}


@given(rules, st.sampled_from(("meta", "strong meta")))
def test_a_lone_acceptor_directs_to_meta_alone(rule: Reaction, acceptor: str) -> None:
    ring = [Code(acceptor, False, False), *[HYDROGEN] * 5]
    assert hit(replace(rule, burden=9, places="para first"), ring) == {2, 4}


@given(rings)
def test_para_comes_first_where_it_is_free(ring: list[Code]) -> None:
    ring = [
        Code("strong", False, False),
        *(replace(c, steers="meta") if not c.empty else c for c in ring[1:]),
    ]
    rule = next(r for r in RULES if r.name == "bromination")
    found = hit(replace(rule, burden=30), ring)
    if ring[3].empty:
        assert found <= {3}
    else:
        assert found <= {1, 5}
