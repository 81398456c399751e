"""Refit and check the acidity model from the command line.

    python -m tuner.fitting fit --reference FOLDER     fit on all tables, write libraries/acidity
    python -m tuner.fitting fit --in-project --out F   fit on the project's own measured values, write folder
    F python -m tuner.fitting check --reference FOLDER   leave out one compound at a time, print the table of
    errors

`--keep-spreads` leaves the spreads as shipped instead of setting them by marginal likelihood.
"""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence
from pathlib import Path

from tuner.errors import TunerError
from tuner.fitting.acidity_data import project_rows, reference_rows, remembered_rows, step_rows
from tuner.fitting.acidity_fit import FIT_SOURCE, Fit, fit
from tuner.fitting.crossval import leave_out, scores
from tuner.fitting.write_constants import write_constants
from tuner.library import data_folder, load_library

WORST_SHOWN = 10
IN_PROJECT_SOURCE = "fit:in-project"


def _arguments(words: Sequence[str]) -> argparse.Namespace:
    parser = argparse.ArgumentParser(
        prog="python -m tuner.fitting", description="refit and check the acidity model"
    )
    parser.add_argument("task", choices=("fit", "check"))
    parser.add_argument("--reference", type=Path, help="folder with phenols.csv, anilines.csv, ionisable.csv")
    parser.add_argument(
        "--in-project", action="store_true", help="use the project's own measured values only"
    )
    parser.add_argument("--out", type=Path, help="folder to write (default: libraries/acidity)")
    parser.add_argument("--keep-spreads", action="store_true")
    return parser.parse_args(words)


def make_fit(reference: Path | None, *, tune: bool) -> tuple[Fit, list[str]]:
    """A fit on a folder of reference tables, or on the project's own values where none is given; and what
    was left out."""
    library = load_library()
    left_out: list[str] = []
    if reference is None:
        rows = project_rows(library)
    else:
        rows, left_out = reference_rows(library, reference)
        rows += step_rows(library, reference)
    return fit([*rows, *remembered_rows(library, rows)], tune=tune), left_out


def print_check(made: Fit) -> None:
    """The table of errors on compounds left out, and the worst of them with their weight in the fit."""
    found = leave_out(made)
    heads = f"{'set':<24}{'n':>5}{'mean, best 95 %':>18}{'median':>9}{'within 0.3':>12}"
    print(f"{heads}{'90 % interval holds':>21}")
    for s in scores(found):
        print(
            f"{s.title:<24}{s.n:>5}{s.mean_best:>18.3f}{s.median:>9.3f}{s.within:>12.1%}{s.coverage:>21.1%}"
        )
    weight = {id(row): w for row, w in zip(made.design.rows, made.weights, strict=True)}
    for scaffold in ("phenol", "aniline"):
        worst = sorted((f for f in found if f.row.scaffold == scaffold), key=lambda f: -abs(f.error))[
            :WORST_SHOWN
        ]
        print(f"\nworst {scaffold}s: measured, predicted, stated error, weight in the fit")
        for f in worst:
            print(f"{f.row.pka25:8.2f}{f.predicted:8.2f} +-{f.sd:5.2f}{weight[id(f.row)]:6.2f}  {f.row.name}")


def main(words: Sequence[str]) -> int:
    """Run one task; 2 where something is wrong with the input."""
    told = _arguments(words)
    if not told.in_project and told.reference is None:
        print("say --reference FOLDER or --in-project", file=sys.stderr)
        return 2
    try:
        made, left_out = make_fit(None if told.in_project else told.reference, tune=not told.keep_spreads)
        if told.task == "check":
            print_check(made)
            return 0
        if told.in_project and told.out is None:
            print(
                "say --out FOLDER: a fit on few values must not overwrite the shipped constants",
                file=sys.stderr,
            )
            return 2
        folder = told.out or data_folder() / "acidity"
        write_constants(made, folder, IN_PROJECT_SOURCE if told.in_project else FIT_SOURCE)
    except TunerError as error:
        print(error.text, file=sys.stderr)
        return 2
    print(f"{len(made.design.rows)} rows, {len(made.design.names)} parameters, written to {folder}")
    for name in left_out:
        print(f"left out: {name}")
    for row, weight in zip(made.design.rows, made.weights, strict=True):
        if weight < 0.1:
            print(f"set aside (weight {weight:.2f}): {row.pka25:.2f} {row.name}")
    return 0


def _command_line() -> int:
    """Run the words of the command line; a reader that leaves early, as `| head` does, is no fault."""
    try:
        code = main(sys.argv[1:])
        sys.stdout.flush()
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    return code


if __name__ == "__main__":
    raise SystemExit(_command_line())
