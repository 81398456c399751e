"""Command `tuner accuracy`: how far are predictions from measured values that the fit did not see?"""

from __future__ import annotations

from collections.abc import Iterable
from pathlib import Path

from rich.table import Table

from tuner.cli.console import say, show, table
from tuner.fitting.acidity_fit import Fit
from tuner.fitting.crossval import BEST_SHARE, WITHIN, LeftOut, Score

WORST_SHOWN = 10
DOUBTED = 0.5
"""A measured value with a smaller weight in the robust fit disagrees with all that resembles it."""
UNCERTAIN = 0.3
"""A stated error (pKa units) from which a miss was to be expected."""


def run(reference: Path | None) -> None:
    """Fit anew, leave out one compound at a time, print scores and the worst compounds."""
    from tuner.fitting.__main__ import make_fit
    from tuner.fitting.crossval import leave_out, scores

    made, _ = make_fit(reference, tune=reference is not None)
    found = leave_out(made)
    whose = (
        "the measured values that ship with the program"
        if reference is None
        else f"the tables in {reference}"
    )
    say(f"Model fitted on {whose}; each compound is left out of the fit that predicts it.")
    say("pKa at 25 °C and zero ionic strength, in pKa units.")
    show(_score_table(scores(found)))
    for scaffold in dict.fromkeys(f.row.scaffold for f in found):
        show(_worst_table(scaffold, [f for f in found if f.row.scaffold == scaffold], made))
    if reference is not None:
        _show_molecules(reference)


def _show_molecules(reference: Path) -> None:
    """Scores of the shipped model on molecules with several sites, dyes and temperature series."""
    from tuner.library import load_library
    from tuner.prediction.accuracy import accuracy_report
    from tuner.prediction.acidity_face import shipped_model
    from tuner.prediction.door import MoleculeDoor

    library = load_library()
    scores = accuracy_report(MoleculeDoor(library, shipped_model(library)), reference)
    headings = (
        ("set", "left"),
        ("values", "right"),
        ("predicted", "right"),
        (f"mean, best {BEST_SHARE:.0%}".replace("%", " %"), "right"),
        ("median", "right"),
        (f"within {WITHIN:g}", "right"),
        ("90 % interval", "right"),
    )
    rows = [
        (
            s.title,
            str(s.rows),
            f"{s.given:.0%}",
            f"{s.mean_best:.2f}",
            f"{s.median:.2f}",
            f"{s.within:.0%}",
            f"{s.coverage:.0%}",
        )
        for s in scores
    ]
    show(table("Whole molecules, by the shipped model: size of the errors, pKa units", headings, rows))
    for part in (score for score in scores if not score.title.startswith(" ")):
        worst = [
            (m.name, m.label, f"{m.measured:.2f}", f"{m.predicted:.2f} ± {m.sd:.2f}") for m in part.worst
        ]
        columns = (("compound", "left"), ("step", "left"), ("measured", "right"), ("predicted ± sd", "right"))
        show(table(f"Worst of {part.title}", columns, worst))


def _score_table(scores: Iterable[Score]) -> Table:
    """One row per set of compounds."""
    headings = (
        ("set", "left"),
        ("compounds", "right"),
        (f"mean, best {BEST_SHARE:.0%}".replace("%", " %"), "right"),
        ("median", "right"),
        (f"within {WITHIN:g}", "right"),
        ("90 % interval", "right"),
    )
    rows = [
        (s.title, str(s.n), f"{s.mean_best:.2f}", f"{s.median:.2f}", f"{s.within:.0%}", f"{s.coverage:.0%}")
        for s in scores
    ]
    return table("Size of the errors, pKa units", headings, rows)


def _worst_table(scaffold: str, found: list[LeftOut], made: Fit) -> Table:
    """The compounds with the largest errors and what is known about why."""
    weights = {id(row): weight for row, weight in zip(made.design.rows, made.weights, strict=True)}
    headings = (
        ("compound", "left"),
        ("measured", "right"),
        ("predicted ± sd", "right"),
        ("why", "left"),
    )
    worst = sorted(found, key=lambda f: (-abs(f.error), f.row.name))[:WORST_SHOWN]
    rows = [
        (
            f.row.name,
            f"{f.row.pka25:.2f}",
            f"{f.predicted:.2f} ± {f.sd:.2f}",
            _why(f, float(weights[id(f.row)])),
        )
        for f in worst
    ]
    return table(f"Worst {scaffold}s", headings, rows)


def _why(found: LeftOut, weight: float) -> str:
    """What the fit itself says about a miss."""
    if weight < DOUBTED:
        return (
            "the value disagrees with what related compounds say: an effect of its own, or a doubtful value"
        )
    if found.sd >= UNCERTAIN:
        return "foretold: its groups or their coupling are little known"
    return "not foretold"
