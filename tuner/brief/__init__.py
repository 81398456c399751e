"""What does the user ask for? One validated object from one TOML file."""

from __future__ import annotations

from tuner.brief.find import demo_briefs, find_brief
from tuner.brief.read import place_in_brief, read_brief
from tuner.brief.records import Brief

__all__ = ["Brief", "demo_briefs", "find_brief", "place_in_brief", "read_brief"]
