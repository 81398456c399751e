"""Found: routes that oxidised a side chain with permanganate on a finished dye.

Permanganate cleaves the pyrone of a coumarin and attacks azo and fused hydroxy compounds (March, Advanced
Organic Chemistry, oxidation of alkenes and of activated rings); acids are made on the halves instead.
"""

from __future__ import annotations

import pytest

from tuner.library import load_library

LIBRARY = load_library()


@pytest.mark.parametrize(
    "core",
    ["7-hydroxycoumarin", "7-hydroxy-4-methylcoumarin", "4-arylazophenol", "4-aminoazobenzene", "2-naphthol"],
)
def test_a_dye_does_not_survive_permanganate(core: str) -> None:
    assert "strong oxidation" in LIBRARY.cores[core].destroyed_by
