"""Found: a group whose open valence the toolkit writes in brackets gave broken molecules.

The text of the branch was cut after one character, which left `*]` behind.
"""

from __future__ import annotations

import pytest

from tuner.library import load_library
from tuner.library.records import Substituent
from tuner.structure.assemble import assemble
from tuner.structure.molecule import canonical_smiles

LIBRARY = load_library()
METALLOID_GROUPS = [g for g in LIBRARY.substituents.values() if "[*]" in canonical_smiles(g.smiles)]


def test_the_case_still_occurs() -> None:
    assert METALLOID_GROUPS


@pytest.mark.parametrize("group", METALLOID_GROUPS, ids=lambda group: group.short)
def test_such_a_group_can_be_put_on_a_core(group: Substituent) -> None:
    by_hand = group.smiles.replace("[*]", "c1cc(O)ccc1")  # the last ring atom stands para to the hydroxyl
    assert assemble(LIBRARY.cores["phenol"], {"4": group.smiles}) == canonical_smiles(by_hand)
