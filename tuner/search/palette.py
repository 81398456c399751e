"""Which groups may stand on a dye under this brief, and in which form do they act at the target pH?"""

from __future__ import annotations

from collections.abc import Iterable

from tuner.brief.records import Brief
from tuner.library import Library
from tuner.library.records import HYDROGEN_SHORT, Substituent
from tuner.screening.groups import flags_of_group
from tuner.structure.molecule import has_match, read_smarts
from tuner.structure.records import PreparedCore

EXCLUDE = "exclude"
"""What a brief says of a flag that no listed analog may raise."""

FAMILY_WORD = "family:"
SMARTS_WORD = "smarts:"

NITROGEN_FAMILIES = ("hydrogen", "alkyl", "substituted alkyl", "aryl")
"""Groups of these families may stand on the reporting nitrogen; an acyl group there makes an amide, which
reports nothing.
"""

AMINES = ("anilinium", "n_alkyl_anilinium", "nn_dialkyl_anilinium")

COMPETING_SD = 0.5
"""pKa units added to the error of an analog for each group that competes for the proton: the look-up tables
treat it in one form, while the molecule door sums over both; typical difference of the two, found by
running both."""

NEAR_PH = 1.5
"""A group whose own pKa lies within this distance of the target is partly ionised there; common practice,
no source.
"""


def is_named(group: Substituent, words: Iterable[str]) -> bool:
    """Whether a group is meant by any of these words: a short name, `family:NAME` or `smarts:PATTERN`."""
    for word in words:
        if word.startswith(FAMILY_WORD):
            if group.family == word.removeprefix(FAMILY_WORD).strip():
                return True
        elif word.startswith(SMARTS_WORD):
            if has_match(group.smiles, word.removeprefix(SMARTS_WORD).strip(), place="groups"):
                return True
        elif group.short == word:
            return True
    return False


def may_stand_at(group: Substituent, prepared: PreparedCore, label: str) -> bool:
    """Whether a position takes such a group at all, whatever the shelf holds."""
    on_nitrogen = prepared.slot(label).relation == "nitrogen"
    return not on_nitrogen or group.short == HYDROGEN_SHORT or group.family in NITROGEN_FAMILIES


def is_free_form(group: Substituent, library: Library) -> bool:
    """Whether a group is written as it is in the free dye: of two protonation states the one with less
    charge.
    """
    if not group.other_form:
        return True
    other = library.substituents[group.other_form]
    return (abs(group.charge), -group.charge) <= (abs(other.charge), -other.charge)


def palette(brief: Brief, library: Library) -> tuple[Substituent, ...]:
    """The groups that the brief allows, hydrogen first, then in the order of the table; handles of an
    anchor excluded, and groups that bring along a flag which the brief excludes.
    """
    groups = brief.groups
    for key in ("allow", "forbid", "require"):
        for word in getattr(groups, key):
            if word.startswith(SMARTS_WORD):
                read_smarts(word.removeprefix(SMARTS_WORD).strip(), place=f"key groups.{key}")
    barred = {flag for flag, action in brief.limits.flags if action == EXCLUDE}
    allowed = [
        group
        for group in library.substituents.values()
        if group.short != HYDROGEN_SHORT
        and is_free_form(group, library)
        and (not groups.allow or is_named(group, (*groups.allow, *groups.require)))
        and not is_named(group, groups.forbid)
        and group.short not in groups.anchors
        and not (barred and barred.intersection(flags_of_group(group, library)))
    ]
    return (library.substituents[HYDROGEN_SHORT], *allowed)


def own_pka(group: Substituent, library: Library) -> float | None:
    """pKa of a group's own acid-base equilibrium (parent of its series, 25 degC, water); None where it has
    none.
    """
    if not group.ionises or not group.other_form:
        return None
    value = library.series[group.ionises].parent_pka
    return value.value if value.known else None


def acting_form(group: Substituent, target_ph: float, library: Library) -> Substituent:
    """The protonation state of a group that dominates at this pH: of the two, the more acidic one below its
    pKa.
    """
    pka = own_pka(group, library)
    if pka is None:
        return group
    other = library.substituents[group.other_form]
    acid, base = (group, other) if group.charge > other.charge else (other, group)
    return acid if target_ph < pka else base


def competes(group: Substituent, series: str, target_ph: float, library: Library) -> bool:
    """Whether a group takes or gives its proton near where the reporting group does: it is of the same kind
    (a second hydroxyl on a phenol, a second amino group on an aniline), or its own pKa is near the target.
    """
    kinds = AMINES if series in AMINES else (series,)
    return bool(group.other_form) and (group.ionises in kinds or near_target(group, target_ph, library))


def near_target(group: Substituent, target_ph: float, library: Library) -> bool:
    """Whether the group is partly ionised at the target pH, so that one form does not describe it."""
    pka = own_pka(group, library)
    return pka is not None and abs(pka - target_ph) < NEAR_PH
