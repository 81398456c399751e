"""How does a pKa go from its groups to the working medium, summand by summand?

What the ring model gives are summands of one site beside neighbours in one state. Where neighbours change
their state near the transition, the pH of half ionisation lies elsewhere; the difference is a summand of its
own, so that the sum as shown adds up.
"""

from __future__ import annotations

from tuner.acidity.cosolvent import cosolvent_shift
from tuner.acidity.medium import davies_term, surface_potential_shift, vant_hoff_line
from tuner.brief.records import Medium
from tuner.library.records import Series
from tuner.prediction.records import Prediction, Term

SMALLEST = 5e-4
"""pKa units; smaller summands are not listed."""
SMALLEST_SHOWN = 5e-3
"""pKa units; the same where two decimals are shown and nothing but rounding would be told."""


def medium_terms(series: Series, medium: Medium, pka25: float, charge: int) -> tuple[Term, ...]:
    """What the medium adds to a pKa25, one term per cause; they add up to pKa' - pKa25 of a single site.

    Parameters
    ----------
    series : Series
        Equilibrium of the site; its enthalpy regularity is used.
    medium : Medium
        Checked beforehand.
    pka25 : float
        Thermodynamic pKa at 25 degC, pKa units.
    charge : int
        Charge of the molecule's protonated form.

    Returns
    -------
    tuple of Term
        Values in pKa units; causes that add nothing are left out.

    Examples
    --------
    >>> from tuner.library.records import Value
    >>> phenol = Series("phenol", "", Value(9.9, 0.1), Value(2.2, 0.1), 0, 0.0, 2.353, 1.9, True, "", -146.0)
    >>> [(t.label, round(t.value, 2)) for t in medium_terms(phenol, Medium(40.0, 0.1), 9.0, 0)]
    [('temperature', -0.17), ('ionic strength', -0.11)]
    """
    scale, intercept = vant_hoff_line(series, medium.temperature_c)
    neutral, per_charge, solvent_sd = cosolvent_shift(medium.cosolvent, medium.cosolvent_mass_percent)
    bracket = davies_term(medium.ionic_strength_m, medium.temperature_c)
    surface = surface_potential_shift(medium.surface_potential_mv, medium.temperature_c)
    terms = (
        Term(
            "temperature",
            f"25 to {medium.temperature_c:g} degC, by van 't Hoff",
            scale * pka25 + intercept - pka25,
            source=series.source,
        ),
        Term(
            "ionic strength",
            f"{medium.ionic_strength_m:g} mol/L, charge of the acid form {charge:d}, by Davies",
            (2 * charge - 1) * bracket,
            source="memory:Davies1962",
        ),
        Term(
            "cosolvent",
            f"{medium.cosolvent_mass_percent:g} % {medium.cosolvent} by mass, rough estimate",
            neutral + per_charge * charge,
            solvent_sd,
            source="convention",
        ),
        Term("film", "measured offset", medium.offset, medium.offset_sd, source="own"),
        Term("surface", f"potential of {medium.surface_potential_mv:g} mV", surface, source="definition"),
    )
    return tuple(term for term in terms if abs(term.value) >= SMALLEST)


def sites_terms(answer: Prediction) -> tuple[Term, ...]:
    """What other ionising groups add to the sum of the terms at 25 degC without salt; none where they add
    nothing.
    """
    rest = answer.pka25 - sum(term.value for term in answer.terms)
    return (_of_others(rest),) if abs(rest) >= SMALLEST_SHOWN else ()


def medium_rest(answer: Prediction) -> tuple[Term, ...]:
    """What the medium adds, cause by cause, and a last term for what it does by way of other ionising
    groups; they add up to pKa' - pKa25.
    """
    rest = answer.pka - answer.pka25 - sum(term.value for term in answer.medium_terms)
    return (*answer.medium_terms, _of_others(rest)) if abs(rest) >= SMALLEST_SHOWN else answer.medium_terms


def _of_others(value: float) -> Term:
    """The summand of other ionising groups."""
    return Term("sites", "other ionising groups", value, source="definition")
