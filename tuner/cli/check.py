"""Command `tuner check`: is the brief sound, and which space would be searched?"""

from __future__ import annotations

from rich.table import Table

from tuner.brief import Brief, find_brief, read_brief
from tuner.cli.console import note, say, show, table
from tuner.report.digits import choices_in_words, count
from tuner.report.wording import anchor_in_words, medium_in_words, target_in_words
from tuner.search.result import SpaceSummary


def run(name: str) -> None:
    """Read, build the space, count, print."""
    from tuner.acidity.medium import medium_notes
    from tuner.cli.faults import placed_in
    from tuner.search.extent import survey

    brief = read_brief(find_brief(name))
    with placed_in(brief):
        spaces = survey(brief)
    for line in brief_lines(brief):
        say(line)
    show(space_table(spaces))
    total = sum(space.analogs for space in spaces)
    say(f"{count(total)} analogs; the brief is sound")
    media = [target.medium for target in (brief.target, *brief.also)]
    note(dict.fromkeys(line for medium in media for line in medium_notes(medium)))


def brief_lines(brief: Brief) -> list[str]:
    """What the brief asks for, line by line."""
    lines = [
        brief.title,
        f"  must {target_in_words(brief.target)} in {medium_in_words(brief.target.medium)}",
    ]
    lines += [
        f"  also {other.name or 'elsewhere'}: {target_in_words(other)} in {medium_in_words(other.medium)}"
        for other in brief.also
    ]
    if brief.groups.anchors:
        lines.append(f"  {anchor_in_words(brief)}")
    return lines


def space_table(spaces: tuple[SpaceSummary, ...]) -> Table:
    """Cores, choices per position, patterns and analogs."""
    headings = (
        ("core", "left"),
        ("choices by position", "left"),
        ("patterns", "right"),
        ("analogs", "right"),
    )
    rows = [(s.core, choices_in_words(s.positions), count(s.patterns), count(s.analogs)) for s in spaces]
    caption = "patterns: choices multiplied; analogs: each molecule once, within the limits on groups"
    return table("Design space", headings, rows, caption)
