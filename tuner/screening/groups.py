"""Which flags does a group bring along, whatever it is put on?

A search asks this before it starts: a group whose own flag a brief excludes need not be offered at all,
instead of being found and set aside again and again.
"""

from __future__ import annotations

from tuner.library.catalogue import Library
from tuner.library.records import Substituent
from tuner.screening.energetic import PHENYL_CAP
from tuner.screening.match import applying
from tuner.screening.rules import load_rules
from tuner.structure.assemble import branch_of


def flags_of_group(group: Substituent, library: Library) -> tuple[str, ...]:
    """Names of rules and classes that apply to every aromatic compound which bears this group.

    Found on the group's benzene derivative. Rules that something else in the molecule can lift (`unless`) are
    left out, and so is what needs more of the ring than the group's own place; `screen` on the whole molecule
    has the last word.

    Parameters
    ----------
    group : Substituent
        As made, not as bound.
    library : Library

    Returns
    -------
    tuple of str
        Each name once, in the order of the rules; empty for most groups.
    """
    certain = tuple(rule for rule in load_rules(library).rules if not rule.unless)
    found = applying(PHENYL_CAP + branch_of(group.smiles), certain)
    return tuple(dict.fromkeys(name for rule in found for name in (rule.flag.rule, rule.flag.kind)))
