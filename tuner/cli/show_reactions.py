"""Command `tuner show reactions`: which rules may the planner use, and what does one of them say?"""

from __future__ import annotations

from pathlib import Path

from tuner.cli.console import LONG_LINES, facts, show, table
from tuner.errors import TunerError
from tuner.library import Library, data_folder
from tuner.library.checks import nearest
from tuner.library.stock import REACTIONS_FILE
from tuner.library.tables import Table, read_toml

KINDS = ("reaction", "joining", "protection")
"""Tables of the file, in the order in which they are shown."""


MOST_GIVEN = 8
"""Groups that are named; a rule for any alkyl halide gives a dozen."""


def all_reactions(library: Library) -> None:
    """Every rule with what it puts on and which roles it asks for."""
    headings = (("reaction", "left"), ("kind", "left"), ("gives", "left"), ("roles asked for", "left"))
    rows = [
        (name, _kind(section, rule), _gives(rule), ", ".join(_roles(rule)))
        for name, (section, rule) in _rules(library).items()
    ]
    caption = 'to switch one off: [reagents] switched_off = ["NAME"]; in full: tuner show reactions NAME'
    show(table(f"{len(rows)} reactions", headings, rows, caption), piped=LONG_LINES)


def one_reaction(library: Library, name: str) -> None:
    """One rule in full."""
    rules = _rules(library)
    if name not in rules:
        raise TunerError(f'there is no reaction "{name}"', remedy=nearest(name, rules))
    section, rule = rules[name]
    facts(
        f"{rule.text('title', name)} ({name})",
        [
            ("kind", _kind(section, rule)),
            ("acts on", ", ".join(rule.texts("takes"))),
            ("gives", _gives(rule)),
            ("roles asked for", ", ".join(_roles(rule))),
            ("conditions", ", ".join(rule.texts("tags"))),
            ("must not meet", ", ".join(rule.texts("spoils"))),
            ("where", rule.text("places", "")),
            ("with a free phenol", rule.text("on_phenol", "")),
            ("with a free amine", rule.text("on_amine", "")),
            ("with a tertiary amine", rule.text("on_tertiary_amine", "")),
            ("builds", ", ".join(rule.table("cores").values)),
            ("cautions", "; ".join(rule.texts("cautions"))),
            ("note", rule.text("note", "")),
            ("source", library.reference(rule.text("source"))),
        ],
    )


def _rules(library: Library) -> dict[str, tuple[str, Table]]:
    """Name -> section and rule; those of the user's folder replace or follow the shipped ones."""
    found: dict[str, tuple[str, Table]] = {}
    folders = [data_folder(), *([library.overlay] if library.overlay is not None else [])]
    for path in (folder / REACTIONS_FILE for folder in folders):
        if path.is_file():
            found |= _read(path)
    return found


def _read(path: Path) -> dict[str, tuple[str, Table]]:
    """The rules of one file."""
    whole = read_toml(path)
    return {
        name: (section, rule) for section in KINDS for name, rule in whole.table(section).tables().items()
    }


def _kind(section: str, rule: Table) -> str:
    """What sort of rule it is."""
    return rule.text("kind", section)


def _gives(rule: Table) -> str:
    """Groups that the rule puts on, at most as many as a line holds."""
    names = list(rule.table("gives").values)
    return ", ".join(names) if len(names) <= MOST_GIVEN else ", ".join(names[:MOST_GIVEN]) + " ..."


def _roles(rule: Table) -> tuple[str, ...]:
    """Roles of the bottles that must be on the shelf."""
    return (*rule.texts("roles"), *rule.texts("roles_on"), *rule.texts("roles_off"))
