"""Command `tuner explain`: one pKa as a sum that a chemist can follow."""

from __future__ import annotations

from math import isfinite
from pathlib import Path
from textwrap import fill

from rich.table import Table

from tuner.brief.records import Medium
from tuner.cli.console import WIDEST, note, say, show, table
from tuner.cli.predict import predictor
from tuner.errors import StructureError
from tuner.library import Library, load_library
from tuner.library.catalogue import split_citation
from tuner.prediction.records import Prediction, Term
from tuner.report.digits import drift, pka_text, signed
from tuner.report.wording import CAUTIONS, medium_in_words

LONGEST = 60
"""Signs of a SMILES that an error repeats."""


def run(smiles: str, temperature_c: float, ionic_strength_m: float, overlay: Path | None) -> None:
    """Predict and print the sum, the medium, the constants of the whole molecule, and what was assumed."""
    medium = Medium(temperature_c=temperature_c, ionic_strength_m=ionic_strength_m)
    answer = predictor(medium, overlay)(smiles)
    if not answer.found:
        reason = "; ".join(answer.notes) or "no value"
        shown = smiles if len(smiles) <= LONGEST else smiles[: LONGEST - 3] + "..."
        raise StructureError(f"no pKa for {shown}: {reason}")
    name = f"{answer.substitution} on {answer.core}" if answer.core else answer.substitution
    say(f"{answer.treated}: {name}, reporting atom {answer.reporting_atom}")
    show(_sum_table(answer))
    for line in _results(answer, medium):
        say(line)
    for line in _sources(answer, load_library(overlay)):
        say(line)
    note(answer.notes)


def _sources(answer: Prediction, library: Library) -> list[str]:
    """Where the constants of the sum come from, each once, in full."""
    keys = dict.fromkeys(
        key for term in (*answer.terms, *answer.medium_terms) for key, _ in split_citation(term.source)
    )
    texts = [library.sources[key].text if key in library.sources else key for key in keys]
    head, rest = "  from  ", " " * 8
    return [fill(text, WIDEST, initial_indent=head, subsequent_indent=rest) for text in texts]


def _sum_table(answer: Prediction) -> Table:
    """Parent first, then each group at its position, pairs, and the sum."""
    headings = (
        ("at", "left"),
        ("what", "left"),
        ("sigma", "right"),
        ("rho", "right"),
        ("pKa units", "right"),
        ("sd", "right"),
        ("remark", "left"),
    )
    rows = [_term_row(n, term) for n, term in enumerate(answer.terms)]
    total = sum(term.value for term in answer.terms)
    rows.append(("", "sum: pKa at 25 °C, no salt", "", "", f"{total:.2f}", "", ""))
    rows += [_term_row(1, term) for term in answer.medium_terms]
    return table("Thermodynamic pKa of the reporting group as a sum", headings, rows)


def _term_row(n: int, term: Term) -> tuple[str, ...]:
    """One term; the first is the parent and has no sign."""
    value = f"{term.value:.2f}" if n == 0 else signed(term.value)
    return (
        term.label,
        term.what,
        signed(term.sigma) if isfinite(term.sigma) else "",
        f"{term.rho:.2f}" if isfinite(term.rho) else "",
        value,
        f"{term.sd:.2f}" if isfinite(term.sd) else "",
        term.note,
    )


def _steps(answer: Prediction) -> str:
    """Constants of the whole molecule, each with the group that mainly loses its proton in that step."""
    kinds = answer.macroscopic_kinds or ("",) * len(answer.macroscopic_pkas)
    return ", ".join(
        f"{pka:.2f}" + (f" ({kind.replace('_', ' ')})" if kind else "")
        for pka, kind in zip(answer.macroscopic_pkas, kinds, strict=True)
    )


def _results(answer: Prediction, medium: Medium) -> list[str]:
    """The numbers that follow from the sum."""
    lines = [f"  conditional pKa'  {pka_text(answer.pka, answer.pka_sd)} in {medium_in_words(medium)}"]
    if isfinite(answer.dpka_dt):
        lines.append(f"  drift             {drift(answer.dpka_dt)} pKa units per 10 K")
    if answer.macroscopic_pkas:
        lines.append(f"  whole molecule    macroscopic pKa' {_steps(answer)}")
    if answer.known is not None:
        known = answer.known
        lines.append(f"  measured          {known.pka:.2f} at {known.temperature_c:g} °C ({known.source})")
    lines.append(f"  {CAUTIONS[0]}")
    return lines
