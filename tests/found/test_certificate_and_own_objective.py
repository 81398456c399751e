"""A run on the user's own objective once claimed that its order was exact, which only the plain score is."""

from __future__ import annotations

from pathlib import Path

from tuner.brief import read_brief
from tuner.search.run import BY_EVOLUTION, WITHOUT_OBJECTIVE, design

BRIEF = """
title = "Own objective"
cores = ["4-nitrophenol"]

[target]
ph = 6.5
tolerance = 0.3

[groups]
allow = ["F", "Cl", "Me"]

[limits]
max_steps = 2

[ranking]
rows = 5
"""


def test_the_certificate_says_what_it_leaves_out(tmp_path: Path) -> None:
    (tmp_path / "own.py").write_text("def length(smiles):\n    return float(len(smiles))\n")
    own = 'user_objective = "own.py:length"\nuser_objective_costs = 0.01\n'
    plain, with_own = tmp_path / "plain.toml", tmp_path / "own.toml"
    plain.write_text(BRIEF)
    with_own.write_text(BRIEF + own)
    assert design(read_brief(with_own)).certificate.endswith(WITHOUT_OBJECTIVE)
    told = design(read_brief(plain)).certificate
    assert WITHOUT_OBJECTIVE not in told
    assert BY_EVOLUTION not in told
