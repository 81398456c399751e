"""Found: faults of a brief that were told without their place, or with the wrong remedy."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.cli.conftest import Tuner, tuner

__all__ = ["tuner"]

BRIEF = """\
title = "small"
cores = ["4-nitrophenol"]
[target]
ph = 6.0
tolerance = 0.3
"""


@pytest.mark.parametrize("key", ["allow", "forbid", "require"])
def test_a_pattern_that_cannot_be_read_is_named_with_line_and_key(tuner: Tuner, key: str) -> None:
    """It was told without file and line."""
    Path("b.toml").write_text(f'{BRIEF}[groups]\n{key} = ["F", "smarts:[C"]\n', encoding="utf-8")
    seen = tuner("check", "b.toml")
    assert seen.code == 2
    assert seen.fault.startswith(f"tuner: b.toml, line 7, key groups.{key}: '[C' cannot be read as SMARTS")


@pytest.mark.parametrize("command", ["check", "design"])
def test_a_shelf_that_leads_nowhere_is_blamed_itself(tuner: Tuner, command: str) -> None:
    """The target was said to be out of reach, and `check` called the brief sound."""
    Path("shelf.csv").write_text("name,smiles,roles\nethanol,CCO,alcohol\n", encoding="utf-8")
    text = f'{BRIEF}[reagents]\nshelf = "shelf.csv"\n[groups]\nallow = ["F"]\n[limits]\nmax_steps = 3\n'
    Path("b.toml").write_text(text, encoding="utf-8")
    seen = tuner(command, "b.toml")
    assert seen.code == 2
    assert seen.fault.startswith(
        "tuner: b.toml, line 7, key reagents.shelf: nothing can be made from the shelf"
    )
    assert 'shelf "shelf.csv" within 3 steps on 4-nitrophenol' in seen.fault
    assert sorted(path.name for path in Path().iterdir()) == ["b.toml", "shelf.csv"]
