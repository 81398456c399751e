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

LONG_LINES = 160
"""Columns of long lists where the output is no screen: rows then stay on one line, for searching."""


def out(piped: int = WIDEST) -> Console:
    """The console for results; `piped` columns where the output is no screen."""
    return _console(sys.stdout.isatty(), stderr=False, piped=piped)


def err() -> Console:
    """The console for notes and progress."""
    return _console(sys.stderr.isatty(), stderr=True)


def _console(is_screen: bool, *, stderr: bool, piped: int = WIDEST) -> Console:
    """A console of bounded width, without automatic colouring of numbers."""
    console = Console(stderr=stderr, highlight=False, emoji=False)
    width = min(console.width, WIDEST) if is_screen else piped
    return Console(stderr=stderr, highlight=False, emoji=False, width=width)


def table(
    title: str, headings: Sequence[tuple[str, str]], rows: Iterable[Sequence[str]], caption: str = ""
) -> Table:
    """A table.

    Parameters
    ----------
    title, caption : text above and below
    headings : (heading with its unit, "left", "right", or "whole": left, and never folded, as for names that
        a user types)
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
        padding=(0, 1, 0, 0),  # with the blank divider two columns of gap; three cost a word per row
    )
    for heading, side in headings:
        right, kept = side == "right", side in ("right", "whole")
        # Folding loses nothing on a narrow screen, where an ellipsis would hide the end of a name.
        drawn.add_column(escape(heading), justify="right" if right else "left", no_wrap=kept, overflow="fold")
    for row in rows:
        drawn.add_row(*(escape(text) for text in row))
    return drawn


def show(drawn: Table, *, piped: int = WIDEST) -> None:
    """A table on standard output; where that is no screen, without blanks at the ends of lines."""
    console = out(piped)
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
