"""Command `tuner explain`: one pKa as a sum that a chemist can follow."""

from __future__ import annotations

from math import isfinite
from pathlib import Path
from textwrap import fill

from rich.table import Table

from tuner.brief.records import Medium
from tuner.cli.console import WIDEST, note, say, show, table
from tuner.cli.predict import Desk, open_desk
from tuner.errors import StructureError
from tuner.library import Library, load_library
from tuner.library.catalogue import split_citation
from tuner.prediction.explain import medium_rest, sites_terms
from tuner.prediction.records import Prediction, Term
from tuner.report.digits import drift, pka_text, signed
from tuner.report.wording import CAUTIONS, medium_in_words

LONGEST = 60
"""Signs of a SMILES that an error repeats."""
SAME_PH = 0.05
"""A group that shares its proton is half ionised elsewhere than at the step that is given."""


def run(
    smiles: str, medium: Medium, overlay: Path | None, *, measured: Path | None, at_ph: float | None
) -> None:
    """Predict and print the sum, the medium, the constants of the whole molecule, and what was assumed."""
    desk = open_desk(medium, overlay, measured, at_ph)
    answer = desk.predict(smiles)
    if not answer.found:
        reason = "; ".join(answer.notes) or "no value"
        shown = smiles if len(smiles) <= LONGEST else smiles[: LONGEST - 3] + "..."
        raise StructureError(f"no pKa for {shown}: {reason}")
    name = f"{answer.substitution} on {answer.core}" if answer.core else answer.substitution
    say(f"{answer.treated}: {name}, reporting atom {answer.reporting_atom}")
    show(_sum_table(answer))
    for subject, text in _results(answer, medium, desk, at_ph):
        say(f"  {subject:<18}{text}")
    say(f"  {CAUTIONS[0]}")
    for line in _sources(_cited(answer), load_library(overlay)):
        say(line)
    note(answer.notes)


def _cited(answer: Prediction) -> dict[str, int]:
    """Every source of the sum in order of first appearance, with the number by which rows cite it."""
    terms = (*answer.terms, *sites_terms(answer), *medium_rest(answer))
    keys = dict.fromkeys(key for term in terms for key, _ in split_citation(term.source))
    return {key: n for n, key in enumerate(keys, start=1)}


def _sources(cited: dict[str, int], library: Library) -> list[str]:
    """Where the constants of the sum come from, each once, in full, with its number."""
    lines = []
    for key, n in cited.items():
        text = library.sources[key].text if key in library.sources else key
        lines.append(fill(text, WIDEST, initial_indent=f"  from {n:>2}  ", subsequent_indent=" " * 11))
    return lines


def _sum_table(answer: Prediction) -> Table:
    """Parent first, then each group at its position, pairs, and the sum; then the medium and its sum."""
    headings = (
        ("at", "left"),
        ("what", "left"),
        ("sigma", "right"),
        ("rho", "right"),
        ("pKa units", "right"),
        ("sd", "right"),
        ("from", "left"),
    )
    cited = _cited(answer)
    rows = [_term_row(n, term, cited) for n, term in enumerate((*answer.terms, *sites_terms(answer)))]
    rows.append(("", "sum: pKa at 25 °C, no salt", "", "", f"{answer.pka25:.2f}", "", ""))
    moved = medium_rest(answer)
    rows += [_term_row(1, term, cited) for term in moved]
    if moved:
        rows.append(("", "sum: pKa' in the medium", "", "", f"{answer.pka:.2f}", "", ""))
    return table("pKa of the reporting group as a sum", headings, rows)


def _term_row(n: int, term: Term, cited: dict[str, int]) -> tuple[str, ...]:
    """One term; the first is the parent and has no sign. Its sources are cited by their numbers."""
    value = f"{term.value:.2f}" if n == 0 else signed(term.value)
    numbers = dict.fromkeys(cited[key] for key, _ in split_citation(term.source))
    return (
        term.label,
        term.what,
        signed(term.sigma) if isfinite(term.sigma) else "",
        f"{term.rho:.2f}" if isfinite(term.rho) else "",
        value,
        f"{term.sd:.2f}" if isfinite(term.sd) else "",
        ", ".join(str(number) for number in numbers),
    )


def _steps(answer: Prediction) -> str:
    """Constants of the whole molecule, each with the group that mainly loses its proton in that step."""
    kinds = answer.macroscopic_kinds or ("",) * len(answer.macroscopic_pkas)
    return ", ".join(
        f"{pka:.2f}" + (f" ({kind.replace('_', ' ')})" if kind else "")
        for pka, kind in zip(answer.macroscopic_pkas, kinds, strict=True)
    )


def _results(answer: Prediction, medium: Medium, desk: Desk, at_ph: float | None) -> list[tuple[str, str]]:
    """The numbers that follow from the sum: what, and how much."""
    told = [("conditional pKa'", f"{pka_text(answer.pka, answer.pka_sd)} in {medium_in_words(medium)}")]
    if isfinite(answer.dpka_dt):
        told.append(("drift", f"{drift(answer.dpka_dt)} pKa units per 10 K"))
    if len(answer.sites) > 1:
        alone = ", ".join(f"{site.kind.replace('_', ' ')} {site.pka25:.2f}" for site in answer.sites)
        told.append(("each site alone", f"{alone} (25 °C, all others uncharged)"))
    if answer.macroscopic_pkas:
        told.append(("whole molecule", f"macroscopic pKa' {_steps(answer)}"))
    low, half, high = desk.ph_of_shares(answer.smiles, (0.1, 0.5, 0.9))
    if isfinite(low + half + high):
        alone = " (this group alone)" if abs(half - answer.pka) > SAME_PH else ""
        told.append(("base form", f"10 % at pH {low:.2f}, 50 % at {half:.2f}, 90 % at {high:.2f}{alone}"))
    if desk.alpha is not None:
        told.append(("", f"{100 * desk.alpha(answer.smiles):.3g} % at pH {at_ph:g}"))
    if answer.known is not None:
        known, there = answer.known, desk.measured(answer)
        told.append(("measured", f"{known.pka:.2f} at {known.temperature_c:g} °C ({known.source})"))
        told.append(("", f"in the medium, as the prediction changes: {there:.2f}"))
    return told
