"""Command `tuner predict`: a table of molecules in, the same table with predictions out."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

from rich.table import Table

from tuner.brief.records import Medium
from tuner.cli.console import note, progress, say, show, table
from tuner.cli.molecules import Molecules, read_molecules, renamed, with_columns
from tuner.errors import TunerError
from tuner.prediction.records import Prediction
from tuner.report.digits import pka_text
from tuner.report.wording import CAUTIONS, medium_in_words

ADDED = ("core", "substitution", "reporting_atom", "pka", "pka_sd", "macroscopic_pkas", "note")
"""Columns that are added, in order. `pka` is conditional in the medium; `macroscopic_pkas` ascend."""

NOTE_SEPARATOR = "; "
ODD_ROW = "the row had too few or too many cells"
EMPTY = "no structure in this row"
DEFECT = "a defect of the program: please report this molecule"
SHOWN = 20


def run(
    path: Path,
    target: Path | None,
    temperature_c: float,
    ionic_strength_m: float,
    overlay: Path | None,
    *,
    quiet: bool,
) -> None:
    """Read, predict row by row, write whole; a row that cannot be treated gets a note and no number."""
    molecules = read_molecules(path)
    if target is not None and target.exists() and target.samefile(path):
        raise TunerError(
            "the predictions would replace the input", place=target, remedy="choose another --out"
        )
    medium = Medium(temperature_c=temperature_c, ionic_strength_m=ionic_strength_m)
    predict = predictor(medium, overlay)
    answers = []
    with progress(quiet) as report:
        for n in range(len(molecules.rows)):
            answers.append(_row(predict, molecules, n))
            report("predicting", n + 1, len(molecules.rows))
    given = sum(1 for _, answer in answers if answer.found)
    if target is None:
        if not quiet:
            show(_table(molecules, answers, medium))
    else:
        from tuner.report.folder import write_file

        write_file(target, with_columns(molecules, ADDED, (cells for cells, _ in answers)))
        moved = [
            n for n, k in zip(molecules.columns, renamed(molecules.columns, ADDED), strict=True) if n != k
        ]
        note(f"input column {name} is kept as given_{name}" for name in moved)
        say(
            f"{given} of {len(answers)} molecules got a pKa' in {medium_in_words(medium)}: {target}",
            quiet=quiet,
        )
    say(CAUTIONS[0], quiet=quiet)


def predictor(medium: Medium, overlay: Path | None) -> Callable[[str], Prediction]:
    """A function from SMILES to prediction; the medium is checked here."""
    from tuner.acidity.medium import require_valid
    from tuner.prediction.door import predict_molecule
    from tuner.structure.own_library import load_checked_library

    require_valid(medium)
    library = load_checked_library(overlay)
    return lambda smiles: predict_molecule(smiles, medium, library)


def _row(
    predict: Callable[[str], Prediction], molecules: Molecules, n: int
) -> tuple[tuple[str, ...], Prediction]:
    """The added cells of one row, and the prediction itself."""
    smiles = molecules.smiles(n)
    answer = _safely(predict, smiles) if smiles else Prediction(smiles, notes=(EMPTY,))
    notes = (*((ODD_ROW,) if n in molecules.odd else ()), *answer.notes)
    cells = (
        answer.core,
        answer.substitution,
        str(answer.reporting_atom) if answer.reporting_atom >= 0 else "",
        _plain(answer.pka),
        _plain(answer.pka_sd),
        ";".join(_plain(pka) for pka in answer.macroscopic_pkas),
        NOTE_SEPARATOR.join(notes),
    )
    return cells, answer


def _safely(predict: Callable[[str], Prediction], smiles: str) -> Prediction:
    """A prediction; a defect of the program costs this row its number, never the rest of the table."""
    try:
        return predict(smiles)
    except TunerError:  # not the molecule's fault: a table of the library is malformed
        raise
    except Exception as fault:
        return Prediction(smiles, notes=(f"{DEFECT} ({type(fault).__name__})",))


def _plain(value: float) -> str:
    """A number with two decimals; empty where there is none."""
    return f"{value + 0.0:.2f}" if value == value else ""


def _table(molecules: Molecules, answers: list[tuple[tuple[str, ...], Prediction]], medium: Medium) -> Table:
    """The first predictions, for the screen."""
    headings = (
        ("line", "right"),
        ("SMILES", "left"),
        ("core", "left"),
        ("substitution", "left"),
        ("pKa' ± sd", "right"),
    )
    rows = [
        (str(molecules.lines[n]), a.smiles, a.core or "–", a.substitution, pka_text(a.pka, a.pka_sd))
        for n, (_, a) in enumerate(answers[:SHOWN])
    ]
    more = len(answers) - len(rows)
    caption = f"{more} more; " if more > 0 else ""
    return table(
        f"Conditional pKa' in {medium_in_words(medium)}",
        headings,
        rows,
        f"{caption}whole table with notes: --out",
    )
