"""Which words of caution stand under every table, page and report?

One place for the texts that are not tied to a rule of `hazards.toml` or to a reaction.
"""

from __future__ import annotations

GENERAL_CAUTIONS = (
    "All pKa values are estimates unless marked as measured; confirm by titration in your own medium.",
    "A route is a suggestion on paper; conditions and purification are for a trained chemist to settle.",
    "Read the safety data sheet of every compound; work in a fume hood with trained people.",
    "Institutional and local rules and licensed practice decide what may be made, kept and disposed of.",
    "Flags are advice, not a classification; a compound without a flag is not thereby harmless.",
)
"""Under every table and report, in this order."""

SHORT_CAUTION = (
    "Estimates, not measurements. Safety data sheets, local rules and licensed practice come first."
)
"""Where one line must do."""

WITHHELD_WORDS = "energetic analogs are withheld from ranking and get no route"
"""Beside the count of withheld analogs."""

NO_FLAG = "none known"
"""In the cautions cell of a row without a flag."""
