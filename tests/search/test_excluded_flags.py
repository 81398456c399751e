"""Is a group that brings along an excluded flag not even offered, and a misspelt flag refused?"""

from __future__ import annotations

from dataclasses import replace

import pytest

from tuner.brief import read_brief
from tuner.brief.records import Brief
from tuner.errors import BriefError
from tuner.library import load_library
from tuner.library.folders import data_folder
from tuner.search.palette import palette
from tuner.search.rooms import Rooms

LIBRARY = load_library()


def with_flags(*flags: tuple[str, str]) -> Brief:
    """A demo brief that allows every group and says this about flags."""
    brief = read_brief(data_folder() / "demo" / "freshness-label.toml")
    limits = replace(brief.limits, flags=flags)
    return replace(brief, groups=replace(brief.groups, allow=(), require=()), limits=limits)


def test_only_groups_with_the_excluded_flag_are_left_out() -> None:
    offered = {group.short for group in palette(with_flags(), LIBRARY)}
    kept = {group.short for group in palette(with_flags(("persistent", "exclude")), LIBRARY)}
    assert kept < offered
    assert {"CF3", "OCF3", "SO2CF3"} <= offered - kept
    assert all("F" in short or short == "OTf" for short in offered - kept)


def test_a_penalised_flag_leaves_every_group() -> None:
    assert palette(with_flags(("persistent", "penalise")), LIBRARY) == palette(with_flags(), LIBRARY)


def test_a_misspelt_flag_is_refused() -> None:
    with pytest.raises(BriefError, match='no flag "persistant"; did you mean "persistent"'):
        Rooms(with_flags(("persistant", "exclude")), LIBRARY)
