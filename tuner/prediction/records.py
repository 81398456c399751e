"""What does the molecule door hand back?"""

from __future__ import annotations

from dataclasses import dataclass
from math import nan

from tuner.library.records import MeasuredPka


@dataclass(frozen=True, slots=True)
class Term:
    """One line of a pKa written as a sum. `value` in pKa units; sigma and rho NaN where they do not apply."""

    label: str  # "parent", a locant, a pair of locants, "temperature" ...
    what: str  # group or effect in words
    value: float
    sd: float = nan
    sigma: float = nan
    rho: float = nan
    source: str = ""
    note: str = ""


@dataclass(frozen=True, slots=True)
class SitePrediction:
    """One ionising site with everything else in its neutral form. pKa's are thermodynamic, 25 degC, water."""

    kind: str
    atom: int  # number in the treated SMILES
    core: str  # "" for sites that are no phenol or aniline
    substitution: str
    pka25: float
    sd: float
    terms: tuple[Term, ...]
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Prediction:
    """The answer for one molecule.

    Attributes
    ----------
    smiles : as given
    treated : canonical SMILES in the form that was treated; "" where nothing could be done
    core, substitution : the reporting site in words
    reporting_atom : atom number in the given SMILES, -1 where there is none
    pka : conditional pKa' of the reporting site in the medium: the pH at which it is half ionised. NaN where
    there is none
    pka_sd : its standard error, pKa units
    pka25 : thermodynamic counterpart at 25 degC and zero ionic strength
    dpka_dt : change of pKa' with temperature, per kelvin
    macroscopic_pkas : stepwise constants of the whole molecule in the medium, ascending
    macroscopic_sds : their standard errors
    macroscopic_kinds : kind of the site that mainly loses its proton in each step
    sites : every ionising site, the reporting one first
    terms : the reporting site's pKa25 as a sum
    medium_terms : what the medium adds to it, cause by cause
    known : a measured value of this compound, if the library holds one
    notes : what was assumed, and why there is no number where there is none
    """

    smiles: str
    treated: str = ""
    core: str = ""
    substitution: str = ""
    reporting_atom: int = -1
    pka: float = nan
    pka_sd: float = nan
    pka25: float = nan
    dpka_dt: float = nan
    macroscopic_pkas: tuple[float, ...] = ()
    macroscopic_sds: tuple[float, ...] = ()
    macroscopic_kinds: tuple[str, ...] = ()
    sites: tuple[SitePrediction, ...] = ()
    terms: tuple[Term, ...] = ()
    medium_terms: tuple[Term, ...] = ()
    known: MeasuredPka | None = None
    notes: tuple[str, ...] = ()

    @property
    def found(self) -> bool:
        """Whether there is a number."""
        return self.pka == self.pka
