"""What is the pKa of an ionising group that is neither a phenol nor an aniline?

Side chains of dyes carry acids, amines, thiols and the like. Each kind has a parent
(`libraries/side_sites.csv`, or the series of that name), a Hammett sensitivity where it sits on a benzene
ring, and a fall with the field effects of what the chain carries. Everything here holds with the rest of
the molecule in its neutral form; charges are dealt with by the caller.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from math import hypot

from tuner.library.catalogue import Library
from tuner.library.folders import data_folder
from tuner.library.records import Series, Substituent, Value
from tuner.library.tables import read_csv
from tuner.prediction.estimate import Estimator
from tuner.structure.anatomy import Anatomy, anatomy
from tuner.structure.records import SiteView

SIDE_SITES_FILE = "side_sites.csv"
COLUMNS = (
    "kind", "title", "acid_charge", "pka", "pka_sd", "rho", "field_slope", "second_step",
    "enthalpy_intercept", "enthalpy_slope", "enthalpy_sd", "source", "note",
)  # fmt: skip

CHAIN_ATTENUATION = 0.4  # per saturated carbon
FAR_SHARE = 0.5
ARYL_ON_NITROGEN = 0.12
"""Field effect that an aryl group adds to an amino group on a chain; its lone pair is drawn into the ring.
Sized on dialkylaminoalkylphenothiazines (Perrin1965, 1972): half a unit with three carbons between, one
with two."""
RING_LABELS = {"2": "ortho", "6": "ortho", "3": "meta", "5": "meta", "4": "para"}

ORTHO_FIELD = 2.4  # benzoic acids: fall per unit of field effect of an ortho group, on top of rho * 0
ORTHO_BULK = 0.25  # fall for any ortho group that has a size, by twist out of the ring plane
ORTHO_DONOR = 0.45  # fall for an ortho group that gives a hydrogen bond to the carboxylate
ORTHO_ETHER = 0.75  # rise for an ortho ether, which takes the acid's hydrogen bond
SULFONAMIDES = ("sulfonamide", "benzenesulfonamide")
SULFONANILIDE_FALL, SULFONANILIDE_SD = 1.6, 0.5
"""An aryl group on a sulfonamide's nitrogen (benzenesulfonanilide against benzenesulfonamide), as
remembered.
"""

BOTH_ORTHO_HYDROXYL = 0.65  # further fall where two hydroxyls bind the carboxylate
ORTHO_AMINO = 0.75  # rise for an ortho amino group, in place of the donor term
"""Set on 2-chloro-, 2-methyl-, 2-nitro-, 2-hydroxy- and 2-methoxybenzoic acid as remembered; common
practice, no source.
"""


@dataclass(frozen=True, slots=True)
class SideSite:
    """One kind of side site: its series (parent, sensitivity, charge, enthalpy) and the chain and
    second-proton rules.
    """

    series: Series
    field_slope: float
    second_step: float  # NaN where the centre holds one proton


@lru_cache(maxsize=8)
def _table(version: str) -> Mapping[str, SideSite]:
    """The shipped table as kind -> SideSite; `version` only tells the cache when to forget."""
    found = {}
    for row in read_csv(data_folder() / SIDE_SITES_FILE, COLUMNS, ()):
        kind = row.text("kind")
        series = Series(
            name=kind,
            title=row.text("title"),
            parent_pka=Value(row.number("pka", -15, 25), row.number("pka_sd", 0, 5)),
            rho=Value(row.number("rho", -10, 10), 0.0),
            acid_charge=row.whole("acid_charge", -4, 4),
            enthalpy_intercept_kj_mol=row.number("enthalpy_intercept", -200, 200, 0.0),
            enthalpy_slope_kj_mol=row.number("enthalpy_slope", -50, 50, 0.0),
            enthalpy_sd_kj_mol=row.number("enthalpy_sd", 0, 100, 10.0),
            uses_para_minus=False,
            source=row.text("source"),
        )
        found[kind] = SideSite(
            series, row.number("field_slope", -100, 100, 0.0), row.number("second_step", 0, 20)
        )
    return found


def side_site(kind: str, view: SiteView, library: Library) -> SideSite | None:
    """The rules for a kind of site, None where it is not treated. Amines are told apart by their number of
    carbon groups.
    """
    table = _table(library.version)
    if kind == "aliphatic_amine":
        kind = f"{kind}_{min(3, max(1, len(view.groups)))}"
    if kind in table:
        return table[kind]
    series = library.series.get(kind)
    return SideSite(series, 0.0, float("nan")) if series is not None else None


def chain_effect(smiles: str, estimator: Estimator) -> float:
    """How strongly a chain pulls on the site that it holds (dimensionless, plain alkyl 0).

    0.4 times the sum of the field effects on the first carbon; a further saturated carbon takes another
    factor 0.4.
    """
    if _saturated_carbon(anatomy(smiles)):
        return CHAIN_ATTENUATION * sum(_pull(b.smiles, estimator) for b in anatomy(smiles).branches)
    return CHAIN_ATTENUATION * _damped_field(smiles, estimator)


def _saturated_carbon(built: Anatomy) -> bool:
    """Whether a group begins with a neutral saturated carbon."""
    plain = built.symbol == "C" and built.entry_charge == 0 and not built.ring
    return plain and all(b.order == 1 for b in built.branches)


def _damped_field(smiles: str, estimator: Estimator) -> float:
    """Field effect of a ring, vinyl group and the like; what these carry counts by half."""
    near = estimator.relative_field(smiles)
    return near + FAR_SHARE * (estimator.field(smiles) - near) + _aryl_on_nitrogen(smiles)


def _aryl_on_nitrogen(smiles: str) -> float:
    """What aryl groups on an amine nitrogen add to its pull along a chain."""
    built = anatomy(smiles)
    if built.symbol != "N" or built.entry_charge or any(b.order > 1 for b in built.branches):
        return 0.0
    return ARYL_ON_NITROGEN * sum(bool(anatomy(b.smiles).ring) for b in built.branches)


def _pull(smiles: str, estimator: Estimator) -> float:
    """Field effect of one piece on the first carbon; saturated carbon counts only for what it carries."""
    if _saturated_carbon(anatomy(smiles)):
        return chain_effect(smiles, estimator)
    return _damped_field(smiles, estimator)


def side_pka(view: SiteView, site: SideSite, estimator: Estimator) -> tuple[float, float]:
    """pKa25 and standard error of a side site while the rest of the molecule is neutral."""
    pka, sd = site.series.parent_pka.value, site.series.parent_pka.sd
    for group in view.groups:
        relation = RING_LABELS.get(group.label, "")
        record, estimated = estimator.group(group.smiles)
        if relation and site.series.rho.value:
            fall, doubt = _ring_fall(record, relation, site, view.kind)
        else:
            fall = site.field_slope * chain_effect(group.smiles, estimator)
            doubt = 0.15 * abs(fall)
            if view.kind in SULFONAMIDES and anatomy(group.smiles).ring and group.label.startswith("N"):
                fall, doubt = SULFONANILIDE_FALL, SULFONANILIDE_SD
        pka -= fall
        sd = hypot(sd, doubt, 0.1 if estimated else 0.0)
    donors = [g for g in view.groups if RING_LABELS.get(g.label) == "ortho" and g.smiles == "*O"]
    if view.kind == "benzoic_acid" and len(donors) == 2:
        pka -= BOTH_ORTHO_HYDROXYL
    return pka, sd


def _ring_fall(group: Substituent, relation: str, site: SideSite, kind: str) -> tuple[float, float]:
    """Fall of the pKa by a group on the same benzene ring, and its standard error."""
    rho = site.series.rho.value
    if relation == "meta":
        return rho * _known(group.sigma_meta, group.field_effect), rho * 0.05
    if relation == "para":
        column = (
            group.sigma_para_minus
            if site.series.uses_para_minus and group.para_acceptor
            else group.sigma_para
        )
        return rho * _known(column, group.field_effect), rho * 0.07
    if kind != "benzoic_acid":
        return rho * _known(group.sigma_ortho_phenol, group.field_effect), 0.35 * rho
    amino = group.family == "amino" and group.charge == 0
    ether = group.family == "oxygen" and not group.hbond_donor and group.charge == 0
    fall = ORTHO_FIELD * group.field_effect + (ORTHO_BULK if group.bulk else 0.0)
    fall += ORTHO_DONOR if group.hbond_donor and not amino else 0.0
    fall -= ORTHO_AMINO if amino else 0.0
    fall -= ORTHO_ETHER if ether else 0.0
    return rho * fall, 0.35


def _known(value: Value, otherwise: float) -> float:
    """The constant, or a stand-in where the table has none."""
    return value.value if value.known else otherwise
