"""Does the command line answer fast, list itself, and fail in one line?"""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path
from time import perf_counter

import pytest

import tuner.cli.check as check_command
from tests.cli.conftest import Tuner
from tuner import __version__
from tuner.cli import main
from tuner.library import data_version

COMMANDS = ("check", "design", "predict", "explain", "route", "reach", "show", "accuracy")


def call(*arguments: str) -> tuple[float, subprocess.CompletedProcess[str]]:
    """Seconds and outcome of one command line in a process of its own."""
    code = "from tuner.cli import main; main()"
    start = perf_counter()
    done = subprocess.run(
        [sys.executable, "-c", code, *arguments], capture_output=True, text=True, check=False, timeout=60
    )
    return perf_counter() - start, done


def test_help_answers_in_half_a_second_and_lists_every_command() -> None:
    runs = [call("--help") for _ in range(3)]
    for command in COMMANDS:
        assert f"  {command} " in runs[0][1].stdout
    # the quickest of three: the promise is about the program, not about what else the machine does
    assert min(seconds for seconds, _ in runs) < 0.5


def test_help_loads_no_heavy_library() -> None:
    code = (
        "import sys\nfrom tuner.cli import run\nrun(['--help'])\n"
        "print(sorted({'numpy', 'scipy', 'pandas', 'rdkit', 'pymoo', 'jinja2'} & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.splitlines()[-1] == "[]"


@pytest.mark.parametrize("command", COMMANDS)
def test_every_command_explains_itself(tuner: Tuner, command: str) -> None:
    seen = tuner(command, "--help")
    assert seen.code == 0
    assert f"tuner {command}" in seen.out or command in seen.out


def test_the_version_names_program_and_data(tuner: Tuner) -> None:
    seen = tuner("--version")
    assert (seen.code, seen.out.strip()) == (0, f"tuner {__version__}, library data {data_version()}")


@pytest.mark.parametrize(
    ("arguments", "part"),
    [
        (("chekc", "x"), "chekc"),
        (("check",), "BRIEF"),
        (("show", "substitutents"), "substituents"),
        (("design", "freshness-label", "--seed", "many"), "seed"),
        (("design", "freshness-label", "--sede", "1"), "--sede"),
        (("check", "no-such-brief"), 'no brief "no-such-brief"'),
    ],
)
def test_a_slip_on_the_command_line_is_one_line_and_exit_2(
    tuner: Tuner, arguments: tuple[str, ...], part: str
) -> None:
    seen = tuner(*arguments)
    assert seen.code == 2
    assert part in seen.fault
    assert seen.fault.startswith("tuner: ")
    assert seen.out == ""


def test_an_interruption_is_one_line_and_exit_130(tuner: Tuner, monkeypatch: pytest.MonkeyPatch) -> None:
    def interrupt(name: str) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(check_command, "run", interrupt)
    seen = tuner("check", "freshness-label")
    assert (seen.code, seen.out) == (130, "")
    assert "interrupted" in seen.fault


def test_a_defect_is_not_hidden(tuner: Tuner, monkeypatch: pytest.MonkeyPatch) -> None:
    def break_down(name: str) -> None:
        raise ZeroDivisionError

    monkeypatch.setattr(check_command, "run", break_down)
    with pytest.raises(ZeroDivisionError):
        tuner("check", "freshness-label")


def test_main_ends_the_process_with_the_code() -> None:
    with pytest.raises(SystemExit) as left:
        main(["check", "no-such-brief"])
    assert left.value.code == 2


def test_a_closed_pipe_is_no_fault() -> None:
    code = "from tuner.cli import main; main()"
    command = f"{sys.executable} -c '{code}' show substituents | head -1"
    done = subprocess.run(["bash", "-c", command], capture_output=True, text=True, check=True)
    assert "Traceback" not in done.stderr
    assert "groups" in done.stdout


@pytest.mark.parametrize(
    "command",
    [
        "-c 'from tuner.cli import main; main()' explain Oc1ccccc1",
        "-m tuner.fitting fit --in-project --keep-spreads --out FOLDER",
    ],
)
def test_a_reader_that_reads_nothing_is_no_fault(command: str, tmp_path: Path) -> None:
    """Code 0 and silence, also where the command parser or the interpreter meets the pipe first."""
    words = command.replace("FOLDER", str(tmp_path))
    shell = f"{sys.executable} {words} | true; exit ${{PIPESTATUS[0]}}"
    done = subprocess.run(["bash", "-c", shell], capture_output=True, text=True, check=False)
    lines = [line for line in done.stderr.splitlines() if not line.startswith("note: ")]
    assert (done.returncode, lines) == (0, [])


def test_an_unknown_kind_is_told_in_plain_words(tuner: Tuner) -> None:
    seen = tuner("show", "nix")
    assert seen.code == 2
    assert "Value error" not in seen.fault
    assert "'nix' is not one of 'substituents', 'series', 'cores', 'stock', 'reactions'" in seen.fault
