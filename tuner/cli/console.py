"""How do tables, notes and progress look in a terminal, and when the output goes to a file?"""

from __future__ import annotations

import sys
from collections.abc import Iterable, Iterator, Sequence
from contextlib import contextmanager
from textwrap import fill

from rich import box
from rich.console import Console
from rich.markup import escape
from rich.progress import (
    BarColumn,
    Progress,
    TaskID,
    TextColumn,
    TimeElapsedColumn,
    TimeRemainingColumn,
)
from rich.table import Table

from tuner.search.result import Progress as Report

WIDEST = 100
"""Columns that a table may take on a screen."""

PIPED = 160
"""Columns where the output is no screen: rows then stay on one line."""


def out() -> Console:
    """The console for results."""
    return _console(sys.stdout.isatty(), stderr=False)


def err() -> Console:
    """The console for notes and progress."""
    return _console(sys.stderr.isatty(), stderr=True)


def _console(is_screen: bool, *, stderr: bool) -> Console:
    """A console of bounded width, without automatic colouring of numbers."""
    console = Console(stderr=stderr, highlight=False, emoji=False)
    width = min(console.width, WIDEST) if is_screen else PIPED
    return Console(stderr=stderr, highlight=False, emoji=False, width=width)


def table(
    title: str, headings: Sequence[tuple[str, str]], rows: Iterable[Sequence[str]], caption: str = ""
) -> Table:
    """A table.

    Parameters
    ----------
    title, caption : text above and below
    headings : (heading with its unit, "left" or "right")
    rows : texts, as many per row as headings; taken literally
    """
    drawn = Table(
        title=escape(title) or None,
        caption=escape(caption) or None,
        box=box.SIMPLE_HEAD,
        title_justify="left",
        caption_justify="left",
        title_style="bold",
        caption_style="dim",
        pad_edge=False,
    )
    for heading, side in headings:
        drawn.add_column(
            escape(heading), justify="right" if side == "right" else "left", no_wrap=side == "right"
        )
    for row in rows:
        drawn.add_row(*(escape(text) for text in row))
    return drawn


def show(drawn: Table) -> None:
    """A table on standard output; where that is no screen, without blanks at the ends of lines."""
    console = out()
    if sys.stdout.isatty():
        console.print(drawn)
        return
    with console.capture() as held:
        console.print(drawn)
    print("\n".join(line.rstrip() for line in held.get().splitlines()))


def say(text: str, *, quiet: bool = False) -> None:
    """One line of result on standard output, never wrapped."""
    if not quiet:
        print(text)


def facts(title: str, pairs: list[tuple[str, str]]) -> None:
    """One entry, fact by fact; empty ones are left out."""
    say(title)
    width = max(len(subject) for subject, _ in pairs)
    for subject, text in pairs:
        if text:
            head = f"  {subject.ljust(width)}  "
            say(
                fill(
                    text,
                    WIDEST,
                    initial_indent=head,
                    subsequent_indent=" " * len(head),
                    break_long_words=False,
                )
            )


def note(lines: Iterable[str]) -> None:
    """Doubts and warnings on standard error, one line each."""
    for line in lines:
        print(f"note: {line}", file=sys.stderr)


@contextmanager
def progress(quiet: bool) -> Iterator[Report]:
    """A progress bar on standard error; silent where it is no screen or where quiet was asked for.

    Gives a function (stage, done, total) as `search.result.Progress` describes.
    """
    if quiet or not sys.stderr.isatty():
        yield lambda stage, done, total: None
        return
    columns = (
        TextColumn("{task.description}"),
        BarColumn(bar_width=28),
        TextColumn("{task.percentage:>3.0f} %"),
        TimeElapsedColumn(),
        TimeRemainingColumn(),
    )
    with Progress(*columns, console=err(), transient=True) as bars:
        tasks: dict[str, TaskID] = {}

        def report(stage: str, done: int, total: int) -> None:
            if stage not in tasks:
                tasks[stage] = bars.add_task(escape(stage), total=total or None)
            bars.update(tasks[stage], completed=done, total=total or None)

        yield report
