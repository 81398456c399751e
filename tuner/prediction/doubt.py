"""How much less sure is a site than the ring model says, by the way in which it was seen?

The model's own error covers tabulated groups on the cores that it knows. A ring that had to be opened, a
group on the nitrogen that no table lists, and some classes of molecules are known less well; what is added
here was sized on the residuals of each class in the tables of Serjeant & Dempsey (1979) and Perrin (1965,
1972), rounded. It never applies to what a design space offers, so both doors state the same error for an
analog.
"""

from __future__ import annotations

import re
from collections.abc import Collection
from math import hypot

from tuner.structure.molecule import has_match
from tuner.structure.records import SiteView

OPENED_SD = 0.7
"""A ring that was opened into two groups on the reporting ring (indanes, chromanes, aminofluorenes)."""
OPENED_ALKYL_SD = 0.2
"""The same where only saturated carbon stood there (indanols, tetralols, aminoindanes)."""
TIED_RING_SD = 0.5
"""A ring that ties both valences of the nitrogen together and touches no other ring (N-phenylpiperidine)."""
OPENED_AT_NITROGEN_SD = 0.9
"""The same where the ring holds the reporting nitrogen, whose lone pair it turns (tetrahydroquinolines and
-quinoxalines, julolidines, benzoquinuclidines)."""
ESTIMATED_ON_NITROGEN_SD = 0.8
"""A group on the nitrogen that no table lists (glycosyl, indanyl, substituted benzyl, imidazolinylmethyl)."""
ESTIMATED_SD = 0.3
"""A group on the ring that no table lists."""
SEVERAL_RINGS_ON_NITROGEN_SD = 0.4
"""Two aryl groups on the nitrogen, one with nitro groups: values far down on acidity functions
that differ."""

TIED = frozenset({"N", "N'"})
"""Both valences of the reporting nitrogen."""
SATURATED = re.compile(r"\*C[C()]*")
"""A chain of saturated carbon."""

PERI_OF_AZO = "[OX2H1]c1cccc2ccc(N=Nc)c(N)c12"
PERI_OF_AZO_SD = 1.4
"""A hydroxyl beside (peri) a nitrogen group that an azo group binds, on whatever core: one such dye is
known, three units off."""

DOUBTED: tuple[tuple[str, str, float], ...] = (
    ("phenol", "[OX2H1]c1ccc(cc1)[CH2]c1ccccc1[OX2H1]", 1.2),
    ("phenol", "[OX2H1]c1ccc(cc1)[CH2]c1ccc([OX2H1])cc1", 1.2),
    ("phenol", "[OX2H1]-c:c-N=N-[a;!c,$(c:[!c])]", 1.5),
    ("aniline", "[NX3](-c)-[CX4]-[OX2]", 1.2),
    ("aniline", "[NX3](-c)(-c)-c", 1.5),
    ("aniline", "[NX3](-c)(-c)-[CX4]", SEVERAL_RINGS_ON_NITROGEN_SD),
)
"""Kind of site, pattern, further standard error (pKa units): dihydroxydiphenylmethanes, whose printed steps
lie three pKa units apart without a reason that this model knows; aminals and
glycosylamines; triarylamines; diarylalkylamines. Only for sites that are
seen as a bare phenol or aniline."""


def site_doubt(view: SiteView, smiles: str, opened: Collection[str], estimated: Collection[str]) -> float:
    """Further standard error of one phenol or aniline site (pKa units).

    Parameters
    ----------
    view : SiteView
    smiles : str
        The molecule.
    opened, estimated : labels of groups that opened rings gave, and of groups that no table lists
    """
    parts = []
    if opened:
        parts.append(_opened_doubt(view, opened))
    for label in estimated:
        parts.append(ESTIMATED_ON_NITROGEN_SD if label.startswith("N") else ESTIMATED_SD)
    if view.core == view.kind:
        parts += [sd for kind, pattern, sd in DOUBTED if kind == view.kind and has_match(smiles, pattern)]
    if view.kind == "phenol" and has_match(smiles, PERI_OF_AZO):
        parts.append(PERI_OF_AZO_SD)
    return hypot(*parts) if parts else 0.0


def _opened_doubt(view: SiteView, opened: Collection[str]) -> float:
    """What an opened ring adds."""
    if frozenset(opened) == TIED:
        return TIED_RING_SD
    if any(label.startswith("N") for label in opened):
        return OPENED_AT_NITROGEN_SD
    ends = [g.smiles for g in view.groups if g.label in opened]
    return OPENED_ALKYL_SD if all(SATURATED.fullmatch(smiles) for smiles in ends) else OPENED_SD
