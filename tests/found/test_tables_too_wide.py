"""Found: tables of `tuner show` and of a design with several cores ran over the screen or cut names."""

from __future__ import annotations

from dataclasses import replace

import pytest

from tests.cli.conftest import Tuner, tuner
from tests.report.sample import sample_result
from tuner.cli.console import WIDEST, show
from tuner.cli.design import candidate_table

__all__ = ["tuner"]


@pytest.mark.parametrize("kind", ["series", "cores", "substituents"])
def test_a_table_fits_the_screen_and_cuts_no_word(tuner: Tuner, kind: str) -> None:
    shown = tuner("show", kind).out
    assert max(len(line) for line in shown.splitlines()) <= WIDEST
    assert "…" not in shown


def test_a_design_with_two_cores_names_each_by_a_letter(capsys: pytest.CaptureFixture[str]) -> None:
    """Two long names of cores per row took 134 columns."""
    result = sample_result()
    first, second, *rest = result.candidates
    long_names = (replace(first, core="7-hydroxy-4-methylcoumarin"), replace(second, core="phenolphthalein"))
    show(candidate_table(replace(result, candidates=(*long_names, *rest))))
    lines = capsys.readouterr().out.splitlines()
    assert max(map(len, lines)) <= WIDEST
    assert "cores: a 7-hydroxy-4-methylcoumarin, b phenolphthalein" in "\n".join(lines)
