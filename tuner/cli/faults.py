"""Where in the brief does a fault belong that another room found?"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager

from tuner.brief import Brief, place_in_brief
from tuner.errors import BriefError, TunerError

KEY = "key "


@contextmanager
def placed_in(brief: Brief) -> Iterator[None]:
    """Give a fault that names no file the brief as its place, with the line where it names a key.

    Rooms beyond the brief know keys ("key groups.allow") but neither file nor line.
    """
    try:
        yield
    except TunerError as fault:
        if fault.place and not fault.place.startswith(KEY):
            raise
        if not fault.place and not isinstance(fault, BriefError):
            raise
        place = place_in_brief(brief.path, fault.place.removeprefix(KEY))
        raise type(fault)(fault.what, place=place, remedy=fault.remedy) from None
