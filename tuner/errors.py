"""Which words does a user read when something is wrong?

Every message says what is wrong, where, and what would be right, in one line. The command line prints it
and ends with exit code 2; no traceback. Doubts that do not stop the work are collected in a `Notes` object
and shown once.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path


class TunerError(ValueError):
    """Something the user can mend; the text is one line and stands alone.

    Parameters
    ----------
    what : str
        What is wrong, with the offending value in it.
    place : str
        Where: a file, a file and row, or a file and key. Empty where there is none.
    remedy : str
        What would be right.
    """

    def __init__(self, what: str, *, place: str | Path = "", remedy: str = "") -> None:
        self.what = what
        self.place = str(place)
        self.remedy = remedy
        super().__init__(self.text)

    @property
    def text(self) -> str:
        """The whole message on one line."""
        parts = [f"{self.place}: " if self.place else "", self.what]
        if self.remedy:
            parts.append(f"; {self.remedy}")
        return " ".join("".join(parts).split())


class LibraryError(TunerError):
    """A table in a library folder is malformed."""


class BriefError(TunerError):
    """A brief cannot be understood or cannot be met."""


class StructureError(TunerError):
    """A structure cannot be read or is outside what the program treats."""


class RouteError(TunerError):
    """No synthesis can be planned, with the reason."""


class SearchError(TunerError):
    """A search cannot be carried out as asked."""


@dataclass
class Notes:
    """Doubts gathered on the way, each kept once, with a count, in order of first appearance."""

    counts: dict[str, int] = field(default_factory=dict)

    def add(self, text: str, times: int = 1) -> None:
        """Keep one note; the same text again only raises its count."""
        self.counts[text] = self.counts.get(text, 0) + times

    def lines(self) -> list[str]:
        """The notes as lines, with the count where it is more than one."""
        return [text if n == 1 else f"{text} ({n} times)" for text, n in self.counts.items()]
