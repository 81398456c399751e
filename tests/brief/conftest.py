"""A sound brief as text, and a way to write a changed one."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

SOUND = """\
title = "a test"
cores = ["4-nitrophenol"]

[target]
ph = 6.5
tolerance = 0.3

[medium]
temperature_c = 25
"""


@pytest.fixture
def written(tmp_path: Path) -> Callable[[str], Path]:
    """Writes a brief's text into a file and gives its path."""

    def write(text: str) -> Path:
        path = tmp_path / "brief.toml"
        path.write_text(text, encoding="utf-8")
        return path

    return write


@pytest.fixture
def changed(written: Callable[[str], Path]) -> Callable[[str, str], Path]:
    """Writes the sound brief with one text replaced (the first time it stands there)."""

    def write(old: str, new: str) -> Path:
        assert old in SOUND
        return written(SOUND.replace(old, new, 1))

    return write
