"""What must not be made, and what needs a caution?"""

from __future__ import annotations

from collections.abc import Iterable

from tuner.errors import BriefError, StructureError
from tuner.library.catalogue import Library
from tuner.library.checks import nearest
from tuner.screening.amines import amine_flag, released_amines
from tuner.screening.energetic import nitro_count, too_rich_in_oxygen
from tuner.screening.match import applying
from tuner.screening.records import SEVERITIES, WITHHOLD, Flags
from tuner.screening.rules import ENERGETIC, HazardRules, RestrictedAmine, load_rules
from tuner.structure.molecule import canonical_smiles


def screen(smiles_list: Iterable[str], library: Library) -> list[Flags]:
    """The flags of each molecule, in the order given.

    Parameters
    ----------
    smiles_list : iterable of str
        Molecules as made (free dye, charged or neutral).
    library : Library
        Its overlay folder may hold further rules.

    Returns
    -------
    list of Flags
        One per molecule; `withheld` is True for energetic ones.

    Raises
    ------
    StructureError
        A molecule cannot be read.
    """
    rules = load_rules(library)
    return [_screen_one(canonical_smiles(smiles), rules) for smiles in smiles_list]


def is_energetic(smiles: str, library: Library) -> bool:
    """Whether a molecule is withheld as energetic; StructureError where it cannot be read."""
    found = screen([smiles], library)[0]
    return any(flag.severity == WITHHOLD and flag.kind == ENERGETIC for flag in found.flags)


def flag_names(library: Library) -> tuple[str, ...]:
    """Every word that a brief may use for a flag (rule names and classes), sorted."""
    return load_rules(library).names()


def require_known_flags(names: Iterable[str], library: Library) -> None:
    """BriefError where a brief names a flag that no rule raises, with the nearest one; a misspelt flag would
    otherwise let pass what it was meant to exclude."""
    known = flag_names(library)
    for name in names:
        if name not in known:
            remedy = f"{nearest(name, known)} (rules and classes of hazards.toml)"
            raise BriefError(f'there is no flag "{name}"', place="key limits.flags", remedy=remedy)


def _screen_one(smiles: str, rules: HazardRules) -> Flags:
    """All flags of one canonical structure, most serious first."""
    flags = [rule.flag for rule in applying(smiles, rules.rules)]
    if too_rich_in_oxygen(smiles, nitro_count(smiles, rules), rules):
        flags.append(rules.oxygen.flag)
    flags += [amine_flag(amine) for amine in _released(smiles, rules)]
    return Flags(smiles, tuple(sorted(flags, key=lambda flag: SEVERITIES.index(flag.severity))))


def _released(smiles: str, rules: HazardRules) -> tuple[RestrictedAmine, ...]:
    """The listed amines that a structure can release; none where it is not treated (a metal, a mixture)."""
    try:
        return released_amines(smiles, rules)
    except StructureError:
        return ()
