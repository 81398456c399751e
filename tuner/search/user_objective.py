"""What does a user's own Python function say about an analog, and what happens when it fails?

An analog for which the function raises or gives no finite number is set aside, counted and named; the run
goes on.
"""

from __future__ import annotations

import importlib.util
from collections.abc import Callable
from dataclasses import dataclass, field
from math import isfinite
from pathlib import Path

from tuner.errors import BriefError

NAMED = 5
"""How many analogs that were set aside are named in the notes."""

Objective = Callable[[str], float]


def load_objective(words: str, base: Path) -> Objective:
    """The function that `file.py:function` names, the file being relative to the brief's folder.

    Raises
    ------
    BriefError
        No such file or function, or a file that fails while it is read.
    """
    place = "key ranking.user_objective"
    file, _, name = words.rpartition(":")
    path = base / file
    if not file or not path.is_file():
        raise BriefError(f'there is no file "{file or words}"', place=place, remedy="write file.py:function")
    spec = importlib.util.spec_from_file_location("tuner_user_objective", path)
    if spec is None or spec.loader is None:
        raise BriefError(f'"{file}" is no Python file', place=place, remedy="write file.py:function")
    module = importlib.util.module_from_spec(spec)
    try:
        spec.loader.exec_module(module)
    except Exception as fault:
        what = f'"{file}" fails while it is read ({type(fault).__name__}: {fault})'
        raise BriefError(what, place=place, remedy="mend the file") from fault
    function = getattr(module, name, None)
    if not callable(function):
        raise BriefError(f'"{file}" has no function "{name}"', place=place, remedy="check the name")
    return function  # type: ignore[no-any-return]


@dataclass
class UserObjective:
    """Calls the function once per molecule and remembers what failed."""

    function: Objective
    values: dict[str, float] = field(default_factory=dict)
    failures: dict[str, str] = field(default_factory=dict)

    def __call__(self, smiles: str) -> float:
        """The value for a molecule; NaN where the function raised or gave no finite number."""
        if smiles not in self.values:
            self.values[smiles] = self._value(smiles)
        return self.values[smiles]

    def _value(self, smiles: str) -> float:
        try:
            value = float(self.function(smiles))
        except Exception as fault:
            self.failures[smiles] = f"{type(fault).__name__}: {fault}"
            return float("nan")
        if not isfinite(value):
            self.failures[smiles] = f"gave {value}"
            return float("nan")
        return value

    def note(self) -> str:
        """One line on what was set aside; empty where nothing was."""
        if not self.failures:
            return ""
        names = sorted(self.failures)[:NAMED]
        named = ", ".join(f"{smiles} ({self.failures[smiles]})" for smiles in names)
        more = len(self.failures) - len(names)
        rest = f" and {more} more" if more else ""
        return f"the user's own objective set aside {len(self.failures)} analogs: {named}{rest}"
