"""Can an azo dye release one of the amines that the law lists?"""

from __future__ import annotations

from tuner.screening.records import WARN, Flag
from tuner.screening.rules import LISTED_AMINE, HazardRules, RestrictedAmine
from tuner.structure.cleavage import cleave_azo
from tuner.structure.molecule import identity_key

RESTRICTED = "restricted dye"
"""The wider class of the flag."""


def released_amines(smiles: str, rules: HazardRules) -> tuple[RestrictedAmine, ...]:
    """The listed amines that reductive cleavage of the azo bonds of a dye can release, in the order of the
    list.

    Regulation (EC) No 1907/2006, Annex XVII, entry 43, Appendix 8. Partial cleavage counts too. A dye that is
    itself on the list counts as releasing it. Raises StructureError where the structure cannot be treated.
    """
    pieces = {*cleave_azo(smiles), identity_key(smiles)}
    return tuple(amine for amine in rules.amines if amine.smiles in pieces)


def amine_flag(amine: RestrictedAmine) -> Flag:
    """The flag of a dye that can release this amine."""
    words = f"azo cleavage can release {amine.name} (listed: no skin-contact textile or leather use)"
    return Flag(LISTED_AMINE, RESTRICTED, WARN, words, amine.source)
