"""Does `tuner accuracy` print scores, and the worst compounds with a reason?"""

from __future__ import annotations

from pathlib import Path
from types import SimpleNamespace
from typing import Any

import pytest

import tuner.cli.accuracy as accuracy_command
import tuner.fitting.__main__ as fitting
import tuner.fitting.crossval as crossval
from tests.cli.conftest import Tuner
from tuner.fitting.crossval import LeftOut


def compound(name: str, scaffold: str, measured: float) -> Any:
    """A measured compound, as far as this command looks at it."""
    return SimpleNamespace(name=name, scaffold=scaffold, pka25=measured, groups={})


ROWS = (compound("good", "phenol", 9.0), compound("odd", "phenol", 8.0), compound("base", "aniline", 4.0))
FOUND = [LeftOut(ROWS[0], 9.05, 0.1), LeftOut(ROWS[1], 9.5, 0.4), LeftOut(ROWS[2], 4.4, 0.5)]


@pytest.fixture
def faked(monkeypatch: pytest.MonkeyPatch) -> list[Path | None]:
    """Replaces the fit, which takes seconds and has tests of its own; gathers what it is asked to fit on."""
    asked: list[Path | None] = []
    made = SimpleNamespace(design=SimpleNamespace(rows=ROWS), weights=(1.0, 0.2, 1.0))

    def make(reference: Path | None, *, tune: bool) -> tuple[Any, list[str]]:
        asked.append(reference)
        return made, []

    monkeypatch.setattr(fitting, "make_fit", make)
    monkeypatch.setattr(crossval, "leave_out", lambda fit: FOUND)
    return asked


def test_scores_and_worst_compounds_are_told(tuner: Tuner, faked: list[Path | None]) -> None:
    seen = tuner("accuracy")
    assert seen.code == 0, seen.err
    assert faked == [None]
    assert "ship with the program" in seen.out
    assert "pKa units" in seen.out
    lines = seen.out.splitlines()
    odd = next(line for line in lines if line.strip().startswith("odd"))
    assert "9.50 ± 0.40" in odd
    assert "disagrees" in odd
    assert "foretold" in next(line for line in lines if line.strip().startswith("base"))
    assert all(line == line.rstrip() for line in lines), "no blanks at the ends of lines in a pipe"


def test_other_tables_can_be_named(tuner: Tuner, faked: list[Path | None]) -> None:
    tuner("accuracy", "--reference", "tables")
    assert faked == [Path("tables")]


@pytest.mark.parametrize(
    ("weight", "sd", "part"), [(0.2, 0.1, "disagrees"), (1.0, 0.4, "foretold: "), (1.0, 0.1, "not foretold")]
)
def test_a_miss_has_a_reason(weight: float, sd: float, part: str) -> None:
    assert accuracy_command._why(LeftOut(ROWS[0], 8.0, sd), weight).startswith(
        ("the value", "foretold", "not")
    )
    assert part in accuracy_command._why(LeftOut(ROWS[0], 8.0, sd), weight)
