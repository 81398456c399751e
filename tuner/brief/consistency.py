"""Does the brief contradict itself?"""

from __future__ import annotations

from tuner.brief.records import Brief
from tuner.brief.sections import FAMILY, SMARTS
from tuner.brief.table import BriefTable
from tuner.library import Library
from tuner.library.records import HYDROGEN_SHORT


def check_consistency(brief: Brief, table: BriefTable, library: Library) -> None:
    """A BriefError where two keys ask for opposite things."""
    groups = table.table("groups")
    for first, second in (("require", "forbid"), ("allow", "forbid")):
        both = sorted(set(getattr(brief.groups, first)) & set(getattr(brief.groups, second)))
        if both:
            groups.fail(f'"{both[0]}" is also under {second}', first, "keep it in one of the two lists")
    _check_allowed(brief, groups, library)
    _check_anchor(brief, table)
    _check_reagents(brief, table)
    _check_counts(brief, table)
    _check_targets(brief, table)


def _check_allowed(brief: Brief, groups: BriefTable, library: Library) -> None:
    """A required group must be allowed; hydrogen cannot be required."""
    allow = brief.groups.allow
    open_ended = any(entry.startswith(SMARTS) for entry in allow)
    for entry in brief.groups.require:
        if entry == HYDROGEN_SHORT:
            groups.fail("hydrogen is no group to require", "require", "use limits.max_substituents")
        if not allow or open_ended or entry.startswith((FAMILY, SMARTS)) or entry in allow:
            continue
        if FAMILY + library.substituents[entry].family not in allow:
            groups.fail(f'"{entry}" is required but not allowed', "require", "add it to allow")


def _check_anchor(brief: Brief, table: BriefTable) -> None:
    """A handle must not be forbidden."""
    both = sorted(set(brief.groups.anchors) & set(brief.groups.forbid))
    if both:
        remedy = "take it out of groups.forbid, or choose another handle"
        table.table("anchor").fail(f'"{both[0]}" is forbidden under [groups]', "handles", remedy)


def _check_reagents(brief: Brief, table: BriefTable) -> None:
    """Nothing both included and excluded."""
    both = sorted(set(brief.reagents.include) & set(brief.reagents.exclude))
    if both:
        remedy = "keep it in one of the two lists"
        table.table("reagents").fail(f'"{both[0]}" is also under exclude', "include", remedy)


def _check_counts(brief: Brief, table: BriefTable) -> None:
    """The number of groups allowed must hold those that are asked for."""
    needed = (1 if brief.groups.anchors else 0) + len(
        [entry for entry in brief.groups.require if entry not in brief.groups.anchors]
    )
    if needed > brief.limits.max_substituents:
        what = f"{brief.limits.max_substituents} groups cannot hold the {needed} that the brief asks for"
        table.table("limits").fail(what, "max_substituents", f"raise it to {needed} or more")


def _check_targets(brief: Brief, table: BriefTable) -> None:
    """A further target must not repeat or contradict the first in the same medium."""
    seen = [brief.target]
    for n, target in enumerate(brief.also, start=1):
        place = f"also[{n}]"
        if any((target.ph, target.medium, target.role) == (t.ph, t.medium, t.role) for t in seen):
            table.fail("this target repeats an earlier one", place, "change its ph, role or medium")
        first = brief.target
        if target.medium == first.medium:
            low, high = first.ph - first.tolerance, first.ph + first.tolerance
            edge = target.tolerance
            clash = {
                "switches": target.ph + edge < low or target.ph - edge > high,
                "stays_off": target.ph + edge > high,
                "stays_on": target.ph - edge < low,
            }[target.role]
            if clash:
                what = f"no dye can meet this and switch at {first.ph:g} in the same medium"
                table.fail(what, place, "change its ph or give it a medium of its own")
        seen.append(target)
