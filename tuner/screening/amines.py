"""Can an azo dye release one of the amines that the law lists?"""

from __future__ import annotations

from tuner.screening.records import WARN, Flag
from tuner.screening.rules import LISTED_AMINE, HazardRules, RestrictedAmine
from tuner.structure.cleavage import cleave_azo
from tuner.structure.molecule import canonical_smiles, identity_key

RESTRICTED = "restricted dye"
"""The wider class of the flag."""

SALT_SIGNS = frozenset(".+")
"""A SMILES with one of these may be the salt of a listed amine."""

AZO_TEXTS = ("N=N", "NN=", "=NN")


def released_amines(smiles: str, rules: HazardRules) -> tuple[RestrictedAmine, ...]:
    """The listed amines that reductive cleavage of the azo bonds of a dye can release, in the order of the
    list.

    Regulation (EC) No 1907/2006, Annex XVII, entry 43, Appendix 8. Partial cleavage counts too. A dye that is
    itself on the list counts as releasing it. Raises StructureError where the structure cannot be treated.
    """
    pieces = {canonical_smiles(smiles)}
    azo = may_hold_azo(smiles)
    if azo:
        pieces |= set(cleave_azo(smiles))
    if azo or set(smiles) & SALT_SIGNS:  # drawn with its geometry, or as a salt, it is the same compound
        pieces.add(identity_key(smiles))
    return tuple(amine for amine in rules.amines if amine.smiles in pieces)


def may_hold_azo(smiles: str) -> bool:
    """Whether two nitrogen atoms stand side by side in the text: an azo bond, or its hydrazone.

    A look at the text spares most molecules a second reading. Right for any SMILES whose azo nitrogen atoms
    are not in brackets and bear no ring-closure digit, as in every canonical one.
    """
    plain = smiles.replace("/", "").replace("\\", "")
    return any(piece in plain for piece in AZO_TEXTS)


def amine_flag(amine: RestrictedAmine) -> Flag:
    """The flag of a dye that can release this amine."""
    words = f"azo cleavage can release {amine.name} (listed: no skin-contact textile or leather use)"
    return Flag(LISTED_AMINE, RESTRICTED, WARN, words, amine.source)
