"""Runs one command line inside the process and gives what a user sees."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import pytest

from tuner.cli import run


@dataclass(frozen=True)
class Seen:
    """Exit code, standard output, standard error."""

    code: int
    out: str
    err: str

    @property
    def fault(self) -> str:
        """The one line of an error; fails where there is more or less than one."""
        lines = self.err.splitlines()
        assert len(lines) == 1, self.err
        return lines[0]


Tuner = Callable[..., Seen]


@pytest.fixture
def tuner(capsys: pytest.CaptureFixture[str], tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Tuner:
    """Runs `tuner ARGUMENTS` in an empty folder."""
    monkeypatch.chdir(tmp_path)

    def call(*arguments: str) -> Seen:
        capsys.readouterr()
        code = run(arguments)
        shown = capsys.readouterr()
        return Seen(code, shown.out, shown.err)

    return call
