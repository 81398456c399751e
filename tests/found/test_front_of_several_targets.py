"""Found: with several targets the front seemed wrong, since no word said that the worst one counts.

An analog at -0.07 stood on the front beside one at -0.01 that was no longer and lighter.
"""

from __future__ import annotations

from dataclasses import replace

import pytest

from tests.report.sample import sample_result
from tuner.cli.console import show
from tuner.cli.design import candidate_table
from tuner.report.figure_trade import trade_caption


@pytest.mark.parametrize(("role", "told"), [("switches", True), ("stays_off", False)])
def test_the_worst_target_is_named_where_it_counts(
    role: str, told: bool, capsys: pytest.CaptureFixture[str]
) -> None:
    result = sample_result()
    other = replace(result.brief.target, role=role, name="elsewhere")
    result = replace(result, brief=replace(result.brief, also=(other,)))
    show(candidate_table(result))
    shown = " ".join(capsys.readouterr().out.split())
    assert ("worst of the targets" in shown) is told
    assert ("worst of the targets" in trade_caption(result)) is told
