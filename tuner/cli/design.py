"""Command `tuner design`: from a brief to a folder of results."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from math import isfinite
from pathlib import Path
from string import ascii_lowercase
from textwrap import fill
from time import perf_counter

from rich.table import Table

from tuner.brief import Brief, find_brief, read_brief
from tuner.cli.console import WIDEST, note, progress, say, show, table
from tuner.cli.faults import placed_in
from tuner.report import digits, write_run
from tuner.report.folder import check_free, free_folder
from tuner.report.wording import CAUTIONS, closeness_in_words, medium_in_words, target_in_words
from tuner.search.result import Candidate, DesignResult

OUTPUTS = Path("outputs")
ROWS_SHOWN = 12


def run(name: str, *, out: Path | None, seed: int | None, again: bool, scheduler: str, quiet: bool) -> None:
    """Read the brief, search, write the folder, print a short table."""
    brief = read_brief(find_brief(name))
    if seed is not None:
        brief = replace(brief, search=replace(brief.search, seed=seed))
    folder = out if out is not None else free_folder(OUTPUTS, brief.path.stem)
    check_free(folder, again)
    result, files = _make(brief, folder, name, again=again, scheduler=scheduler, quiet=quiet)
    if not quiet:
        _print(result, files)


def _make(
    brief: Brief, folder: Path, name: str, *, again: bool, scheduler: str, quiet: bool
) -> tuple[DesignResult, tuple[Path, ...]]:
    """Search and write."""
    from tuner.cli.exhibits import exhibits_of
    from tuner.search.run import design

    with progress(quiet) as report, placed_in(brief):
        result = design(brief, progress=report, scheduler=scheduler)
        start = perf_counter()
        exhibits = exhibits_of(result, report)
        drawn = ("drawing", perf_counter() - start)
    result = replace(result, timings_s=(*result.timings_s, drawn))
    command = f"tuner design {name} --seed {brief.search.seed}"
    return result, write_run(result, exhibits, folder, command=command, again=again)


def _print(result: DesignResult, files: tuple[Path, ...]) -> None:
    """The short table, the doubts, and where the files are."""
    target = result.brief.target
    say(result.brief.title)
    say(f"{target_in_words(target)} in {medium_in_words(target.medium)}")
    show(candidate_table(result))
    say("")
    say(fill(f"{result.method.capitalize()} search. {result.certificate}", WIDEST))
    say("")
    say(f"Written to {files[0].parent}{_separator(files[0])}")
    say("  " + ", ".join(path.name for path in files))
    say(f"  open {_page(files)} to look at structures and routes")
    say("")
    say(fill(" ".join(CAUTIONS[:2]), WIDEST))
    note(result.notes)


def _separator(path: Path) -> str:
    """The sign between folder and file, as this system writes it."""
    return str(path)[len(str(path.parent))]


def _page(files: tuple[Path, ...]) -> Path:
    """The page among the files."""
    return next(path for path in files if path.suffix == ".html")


def candidate_table(result: DesignResult) -> Table:
    """The first candidates, with units in the headings."""
    shown = result.candidates[:ROWS_SHOWN]
    letters = _core_letters(shown)
    headings = [("rank", "right"), ("substitution", "left")]
    headings += [("core", "left")] if letters else []
    headings += [
        ("pKa' ± sd", "right"),
        ("offset, pH", "right"),
        ("in window", "right"),
        ("steps", "right"),
        ("g/mol", "right"),
        ("front", "left"),
        ("cautions", "right"),
    ]
    more = len(result.candidates) - len(shown)
    caption = "front: nothing is closer, shorter and lighter at once; cautions: number"
    if worst := closeness_in_words(result.brief):
        caption += f"; {worst}"
    if any(isfinite(c.measured_pka) for c in shown):
        caption += "; m: measured, in this medium"
    caption = f"{more} more rows in the files; {caption}" if more else caption
    if letters:
        caption = f"cores: {', '.join(f'{letter} {core}' for core, letter in letters.items())}\n{caption}"
    return table("", headings, [_row(c, letters, result.brief.target.ph) for c in shown], caption)


def _core_letters(shown: Sequence[Candidate]) -> dict[str, str]:
    """A letter for each core, in order of first rank; none where there is one core only.

    Names of cores are long, and a row of them would not fit a screen.
    """
    cores = list(dict.fromkeys(c.core for c in shown))
    return dict(zip(cores, ascii_lowercase, strict=False)) if len(cores) > 1 else {}


def _row(candidate: Candidate, letters: Mapping[str, str], target_ph: float) -> tuple[str, ...]:
    """One candidate in words; a measured value stands in place of the predicted one, as it ranks."""
    c = candidate
    measured = isfinite(c.measured_pka)
    return (
        str(c.rank),
        c.substitution,
        *((letters.get(c.core, c.core),) if letters else ()),
        f"{c.measured_pka:.2f} m" if measured else digits.pka_text(c.pka, c.pka_sd),
        digits.signed(c.measured_pka - target_ph if measured else c.offset),
        digits.percent(c.hit_probability),
        str(c.steps),
        digits.mass(c.molar_mass_g_mol),
        "knee" if c.knee else "yes" if c.front else "",
        str(len(c.cautions)) if c.cautions else "",
    )
