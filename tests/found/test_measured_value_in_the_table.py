"""Found: a measured analog showed its predicted value beside the hit probability of the measured one.

An offset of +0.26 then stood in one row with "> 99 %" for a window of 0.3.
"""

from __future__ import annotations

from dataclasses import replace

import pytest

from tests.report.sample import sample_result
from tuner.cli.console import show
from tuner.cli.design import candidate_table


def test_the_number_that_ranks_is_the_number_that_is_shown(capsys: pytest.CaptureFixture[str]) -> None:
    result = sample_result()
    target = result.brief.target.ph
    one = replace(result.candidates[0], pka=target + 0.26, offset=0.26, measured_pka=target + 0.1)
    show(candidate_table(replace(result, candidates=(one, *result.candidates[1:]))))
    row = next(line for line in capsys.readouterr().out.splitlines() if line.strip().startswith("1 "))
    assert f"{target + 0.1:.2f} m" in row
    assert "+0.10" in row
    assert "+0.26" not in row
