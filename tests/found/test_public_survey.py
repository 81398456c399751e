"""The public `survey` was once hidden by a module of the same name as soon as a run had been made."""

from __future__ import annotations

import tuner.search
import tuner.search.run


def test_survey_stays_a_function() -> None:
    assert callable(tuner.search.survey)
    assert tuner.search.run.design is not tuner.search.design
