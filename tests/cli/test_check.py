"""Does `tuner check` say what would be searched, and name the place of a fault that another room found?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.cli.conftest import Tuner
from tuner.brief import read_brief
from tuner.cli.faults import placed_in
from tuner.errors import BriefError, LibraryError, TunerError

BRIEF = """\
cores = ["4-nitrophenol"]
title = "two groups"

[target]
ph = 6.5
tolerance = 0.3

[groups]
allow = ["Me", "Cl"]
"""


@pytest.fixture
def brief(tuner: Tuner) -> Path:
    """A small brief in the working folder."""
    path = Path("small.toml")
    path.write_text(BRIEF, encoding="utf-8")
    return path


def test_a_brief_is_told_back_with_its_space(tuner: Tuner, brief: Path) -> None:
    seen = tuner("check", str(brief))
    assert seen.code == 0, seen.err
    for part in ("two groups", "switch at pH 6.5 ± 0.3", "25 °C", "4-nitrophenol", "the brief is sound"):
        assert part in seen.out
    assert sorted(path.name for path in Path().iterdir()) == ["small.toml"]


def test_a_stretched_medium_is_told_before_the_search(tuner: Tuner, brief: Path) -> None:
    medium = "\n[medium]\ntemperature_c = 75\nionic_strength_m = 1.2\n"
    brief.write_text(BRIEF + medium, encoding="utf-8")
    notes = tuner("check", str(brief)).err.splitlines()
    assert any("75 degC is outside 0-60 degC" in line for line in notes)
    assert any("beyond 0.5" in line for line in notes)
    assert len(notes) == 2


def test_a_space_without_routes_is_counted_each_molecule_once(tuner: Tuner, brief: Path) -> None:
    # 3 choices at each of 2, 3, 5, 6: 81 patterns, 9 of them their own mirror image: (81 + 9) / 2
    seen = tuner("check", str(brief))
    assert " 81 " in seen.out
    assert " 45" in seen.out


@pytest.mark.parametrize(
    ("fault", "place"),
    [
        (BriefError("no", place="key groups.allow"), "small.toml, line 9, key groups.allow"),
        (BriefError("no", place="key search"), "small.toml, key search"),
        (BriefError("no"), "small.toml"),
        (LibraryError("no", place="groups.csv, row 3"), "groups.csv, row 3"),
        (LibraryError("no"), ""),
    ],
)
def test_a_fault_without_a_file_gets_the_brief_as_its_place(
    brief: Path, fault: TunerError, place: str
) -> None:
    with pytest.raises(type(fault)) as caught, placed_in(read_brief(brief)):
        raise fault
    assert caught.value.place == place
