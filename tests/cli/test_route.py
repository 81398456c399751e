"""Do `tuner route` and `tuner reach` show ways that a chemist can follow, and what is missing?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.cli.conftest import Tuner

BRIEF = """\
cores = ["4-arylazophenol"]

[target]
ph = 6.4
tolerance = 0.3

[reagents]
shelf = "mine.csv"

[groups]
allow = ["Cl", "Me"]

[limits]
max_steps = 2
"""

SHELF = """\
name,smiles,roles
2-chlorophenol,Oc1ccccc1Cl,phenol
aniline,Nc1ccccc1,aniline
4-chloroaniline,Nc1ccc(Cl)cc1,aniline
hydrochloric acid,Cl,acid
sodium hydroxide,[Na+].[OH-],base
"""
NITRITE = "sodium nitrite,O=N[O-].[Na+],nitrosating\n"


def write(shelf: str) -> str:
    """A brief with its shelf in the working folder; its name."""
    Path("mine.csv").write_text(shelf, encoding="utf-8")
    Path("azo.toml").write_text(BRIEF, encoding="utf-8")
    return "azo.toml"


@pytest.fixture
def brief(tuner: Tuner) -> str:
    """A brief whose shelf suffices for an azo coupling."""
    return write(SHELF + NITRITE)


def test_a_route_is_told_step_by_step(tuner: Tuner, brief: str) -> None:
    seen = tuner("route", brief, "Oc1ccc(/N=N/c2ccc(Cl)cc2)cc1Cl")
    assert seen.code == 0, seen.err
    for part in ("1 step", "2-chlorophenol", "4-chloroaniline", "sodium nitrite", "caution: diazonium salt"):
        assert part in seen.out


def test_another_spelling_gives_the_same_route(tuner: Tuner, brief: str) -> None:
    first = tuner("route", brief, "Oc1ccc(/N=N/c2ccc(Cl)cc2)cc1Cl")
    assert tuner("route", brief, "c1(O)c(Cl)cc(cc1)N=Nc1ccc(Cl)cc1").out == first.out


def test_a_missing_bottle_is_named(tuner: Tuner) -> None:
    seen = tuner("route", write(SHELF), "Oc1ccc(/N=N/c2ccccc2)cc1Cl")
    assert seen.code == 0
    assert "no route within 2 steps" in seen.out
    assert "sodium nitrite" in seen.out


@pytest.mark.parametrize(
    ("smiles", "part"),
    [
        ("xyz", "cannot be read"),
        ("Nc1ccccc1", "no analog of a core of the brief"),
        ("Oc1ccc(/N=N/c2ccccc2)cc1[Pt]", ""),
        ("Oc1c([N+](=O)[O-])cc(/N=N/c2ccc([N+](=O)[O-])cc2[N+](=O)[O-])cc1", "withheld: energetic"),
    ],
)
def test_what_has_no_route_says_why_in_one_line(tuner: Tuner, brief: str, smiles: str, part: str) -> None:
    seen = tuner("route", brief, smiles)
    assert seen.code == 2
    assert part in seen.fault
    assert seen.out == ""


def test_rewarding_purchases_are_listed(tuner: Tuner) -> None:
    seen = tuner("reach", write(SHELF))
    assert seen.code == 0, seen.err
    assert "sodium nitrite" in seen.out
    assert "and " in seen.out
    assert "further patterns" in seen.out


def test_a_fault_in_the_shelf_is_named(tuner: Tuner) -> None:
    seen = tuner("route", write(SHELF + "aniline,Nc1ccccc1,aniline\n"), "Oc1ccc(/N=N/c2ccccc2)cc1Cl")
    assert seen.code == 2
    assert "mine.csv" in seen.fault
