"""Command `tuner predict`: a table of molecules in, the same table with predictions out."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import isfinite, nan
from pathlib import Path

from rich.table import Table

from tuner.brief.records import Medium
from tuner.cli.console import note, progress, say, show, table
from tuner.cli.molecules import Molecules, read_molecules, renamed, with_columns
from tuner.errors import StructureError, TunerError
from tuner.prediction.records import Prediction
from tuner.report.digits import pka_text
from tuner.report.wording import CAUTIONS, medium_in_words

BEFORE = ("core", "substitution", "reporting_atom", "pka", "pka_sd")
AFTER = ("macroscopic_pkas", "measured_pka", "measured_source", "note")
ADDED = (*BEFORE, *AFTER)
"""Columns that are added, in order. `pka` and `measured_pka` are conditional in the medium;
`macroscopic_pkas` ascend. `alpha`, the share of the base form, comes after `pka_sd` where a pH is given."""
ALPHA = "alpha"

TABLES = (".csv", ".tsv", ".txt")

NOTE_SEPARATOR = "; "
ODD_ROW = "the row had too few or too many cells"
EMPTY = "no structure in this row"
DEFECT = "a defect of the program: please report this molecule"
SHOWN = 20
PH_LIMITS = (-12.0, 16.0)
ALPHA_DECIMALS = 4


@dataclass(frozen=True, slots=True)
class Desk:
    """What predicts one molecule, and what follows from a prediction."""

    predict: Callable[[str], Prediction]
    measured: Callable[[Prediction], float]  # a measured value in the medium; NaN where there is none
    ph_of_shares: Callable[[str, tuple[float, ...]], tuple[float, ...]]  # where shares of base form are met
    alpha: Callable[[str], float] | None = None  # share of the base form at the pH asked for

    @property
    def added(self) -> tuple[str, ...]:
        """Columns that are added."""
        return ADDED if self.alpha is None else (*BEFORE, ALPHA, *AFTER)


def run(
    path: Path,
    target: Path | None,
    medium: Medium,
    overlay: Path | None,
    *,
    measured: Path | None,
    at_ph: float | None,
    quiet: bool,
) -> None:
    """Read, predict row by row, write whole; a row that cannot be treated gets a note and no number."""
    if not path.exists() and path.suffix.lower() not in TABLES:
        raise TunerError(
            "there is no such file",
            place=path,
            remedy="predict takes a CSV with a column smiles; for one molecule: tuner explain SMILES",
        )
    molecules = read_molecules(path)
    if target is not None and target.exists() and target.samefile(path):
        raise TunerError(
            "the predictions would replace the input", place=target, remedy="choose another --out"
        )
    desk = open_desk(medium, overlay, measured, at_ph)
    answers = []
    with progress(quiet) as report:
        for n in range(len(molecules.rows)):
            answers.append(_row(desk, molecules, n))
            report("predicting", n + 1, len(molecules.rows))
    given = sum(1 for _, answer in answers if answer.found)
    if target is None:
        if not quiet:
            show(_table(molecules, answers, medium))
    else:
        from tuner.report.folder import write_file

        write_file(target, with_columns(molecules, desk.added, (cells for cells, _ in answers)))
        kept = renamed(molecules.columns, desk.added)
        moved = [n for n, k in zip(molecules.columns, kept, strict=True) if n != k]
        note(f"input column {name} is kept as given_{name}" for name in moved)
        say(
            f"{given} of {len(answers)} molecules got a pKa' in {medium_in_words(medium)}: {target}",
            quiet=quiet,
        )
    say(CAUTIONS[0], quiet=quiet)


def open_desk(medium: Medium, overlay: Path | None, measured: Path | None, at_ph: float | None) -> Desk:
    """The desk for one medium; medium and pH, library and the user's measured values are checked here."""
    import numpy as np

    from tuner.acidity.medium import require_valid
    from tuner.prediction.acidity_face import shipped_model
    from tuner.prediction.base_form import BaseForm
    from tuner.prediction.door import MoleculeDoor
    from tuner.prediction.measured import measured_in_medium
    from tuner.structure.own_library import load_checked_library, read_checked_measured

    require_valid(medium)
    require_ph(at_ph)
    library = load_checked_library(overlay)
    model = shipped_model(library)
    own = read_checked_measured(measured) if measured is not None else ()
    door = MoleculeDoor(library, model, medium, own)
    curves = BaseForm(library, model, medium)
    return Desk(
        predict=door.predict,
        measured=lambda answer: measured_in_medium(answer, library),
        ph_of_shares=curves.ph_of_shares,
        alpha=None if at_ph is None else lambda smiles: float(curves.shares(smiles, np.array([at_ph]))[0]),
    )


def require_ph(at_ph: float | None) -> None:
    """TunerError for a pH that no water has."""
    low, high = PH_LIMITS
    if at_ph is not None and not low <= at_ph <= high:
        raise TunerError(
            f"pH {at_ph:g} is outside {low:g} to {high:g}", place="--at-ph", remedy="give one pH of water"
        )


def _row(desk: Desk, molecules: Molecules, n: int) -> tuple[tuple[str, ...], Prediction]:
    """The added cells of one row, and the prediction itself."""
    smiles = molecules.smiles(n)
    answer, alpha, measured = _safely(desk, smiles) if smiles else _nothing(smiles, EMPTY)
    notes = (*((ODD_ROW,) if n in molecules.odd else ()), *answer.notes)
    cells = (
        answer.core,
        answer.substitution,
        str(answer.reporting_atom) if answer.reporting_atom >= 0 else "",
        _plain(answer.pka),
        _plain(answer.pka_sd),
        *((_plain(alpha, ALPHA_DECIMALS),) if desk.alpha is not None else ()),
        ";".join(_plain(pka) for pka in answer.macroscopic_pkas),
        _plain(measured),
        answer.known.source if answer.known is not None and isfinite(measured) else "",
        NOTE_SEPARATOR.join(notes),
    )
    return cells, answer


def _nothing(smiles: str, why: str) -> tuple[Prediction, float, float]:
    """No prediction, with the reason."""
    return Prediction(smiles, notes=(why,)), nan, nan


def _safely(desk: Desk, smiles: str) -> tuple[Prediction, float, float]:
    """Prediction, share of the base form, measured value; a defect of the program costs this row its
    numbers, never the rest of the table.
    """
    try:
        answer = desk.predict(smiles)
        alpha = desk.alpha(smiles) if desk.alpha is not None and answer.found else nan
        return answer, alpha, desk.measured(answer)
    except StructureError as fault:  # one molecule's fault stops no table
        return _nothing(smiles, fault.text)
    except TunerError:  # not the molecule's fault: a table of the library is malformed
        raise
    except Exception as fault:
        return _nothing(smiles, f"{DEFECT} ({type(fault).__name__})")


def _plain(value: float, decimals: int = 2) -> str:
    """A number in plain digits; empty where there is none."""
    return f"{value + 0.0:.{decimals}f}" if value == value else ""


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
