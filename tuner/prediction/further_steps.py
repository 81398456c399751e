"""Which protons does a dye gain or lose that no site of its own stands for?

Two cases, both far outside the pH range of the reporting group, so that they are listed as steps of their
own and take no part in the microstates:

- the azo groups of hydroxyazo dyes, which take up a proton in strong acid;
- the NH of anilines and diarylamines that two or three nitro groups make an acid, given off in strong base.
"""

from __future__ import annotations

from math import hypot

from tuner.library.records import Substituent
from tuner.prediction.estimate import Estimator, effect_of
from tuner.prediction.held import AZO_PROTONATION, AZO_PROTONATION_RHO
from tuner.structure.anatomy import anatomy
from tuner.structure.records import Dissection, PlacedGroup, SiteView

Steps = tuple[tuple[float, float, str], ...]
"""(pKa, standard error, kind of site) of some macroscopic steps."""

NITRO = "*[N+](=O)[O-]"
CONJUGATING = ("2", "4", "6")
DIARYLAMINE_NH = {1: 15.9, 2: 13.84, 3: 10.38}
PRIMARY_NH = {2: 15.0, 3: 12.2}
NH_RHO, NH_SD = 1.2, 0.5
"""pKa of the NH of 4-nitro-, 2,4-dinitro- and 2,4,6-trinitrodiphenylamine and of the anilines, by the number
of nitro groups ortho and para to it (memory:Stewart1963); fall per sigma-minus of what the other ring bears
(4,4'-di- and 2,4,4'-trinitrodiphenylamine); error by what their analogs (Serjeant1979) leave open."""
ANION_BESIDE_NH = 1.8
ANION_BESIDE_NH_SAME_RING = 0.6
"""Rise by a carboxylate or sulfonate ortho on the other ring, which holds the proton; on the nitrated ring a
nitro group already does. Sized on picrylanthranilic and picrylorthanilic acid (Serjeant1979)."""
ANION_FAR = 0.1
"""Rise by an anion elsewhere on the other ring (dinitrophenyl- and picrylmetanilic acid, Serjeant1979)."""
ACID_FORMS = {"*C(=O)O": "*C(=O)[O-]", "*S(=O)(=O)O": "*S(=O)(=O)[O-]"}


def further_steps(found: Dissection, estimator: Estimator) -> Steps:
    """All such steps of a dissected molecule, the reporting site first."""
    steps = list(_azo_steps(found.sites[0], found, estimator))
    for view in found.sites:
        if view.kind == "aniline" and view.scaffold == "aniline":
            steps += _nh_step(view, estimator)
    return tuple(steps)


def _azo_steps(lead: SiteView, found: Dissection, estimator: Estimator) -> Steps:
    """Azo groups of the reporting core; groups on the far ring act in the form that they have in acid."""
    basic = {v.reporting_atom for v in found.sites if v.kind == "aniline"}
    moved = 0.0
    for group in lead.groups:
        if group.label.endswith("'"):
            record, _ = estimator.group(group.smiles)
            moved += AZO_PROTONATION_RHO * _in_acid(record, group, basic, estimator)
    return tuple((pka - moved, sd, "azo") for pka, sd in AZO_PROTONATION.get(lead.core, ()))


def _in_acid(record: Substituent, group: PlacedGroup, basic: set[int], estimator: Estimator) -> float:
    """sigma_para of a group in strong acid: an amine has taken up its proton there."""
    if not basic & set(group.atoms) or record.family != "amino":
        return effect_of(record).para
    ammonium, _ = estimator.group("*[NH3+]")
    return effect_of(ammonium).para


def _nh_step(view: SiteView, estimator: Estimator) -> Steps:
    """The NH as an acid, where enough nitro groups conjugate with it."""
    on_nitrogen = [g for g in view.scaffold_groups if g.label.startswith("N")]
    ring = {g.label: g.smiles for g in view.scaffold_groups if not g.label.startswith("N")}
    count = sum(ring.get(label) == NITRO for label in CONJUGATING)
    if len(on_nitrogen) > 1:
        return ()
    if not on_nitrogen:
        return ((PRIMARY_NH[count], NH_SD, "amine_nh"),) if count in PRIMARY_NH else ()
    far = on_nitrogen[0]
    if count not in DIARYLAMINE_NH or not far.smiles.startswith("*c1"):
        return ()
    pka, sd = DIARYLAMINE_NH[count], NH_SD
    beside = [ring.get(label) for label in ("2", "6")]
    pka += ANION_BESIDE_NH_SAME_RING * sum(s in ACID_FORMS for s in beside)
    fall, doubt = _far_ring(far.smiles, estimator)
    return ((pka - fall, hypot(sd, doubt), "amine_nh"),)


def _far_ring(smiles: str, estimator: Estimator) -> tuple[float, float]:
    """Fall of the NH acid's pKa by what the ring on nitrogen bears, and its standard error."""
    fall = 0.0
    for relation, group in anatomy(smiles).on_ring:
        acting = ACID_FORMS.get(group, group)
        if acting != group and relation == "ortho":
            fall -= ANION_BESIDE_NH
            continue
        if acting != group:
            fall -= ANION_FAR
            continue
        effect = effect_of(estimator.group(acting)[0])
        fall += NH_RHO * (effect.meta if relation == "meta" else effect.minus)
    return fall, 0.3 * abs(fall)
