"""Which cautions and explanations stand on every table and page?

The only place where these texts stand.
"""

from __future__ import annotations

from tuner.brief.records import Brief, Medium, Target

CAUTIONS: tuple[str, ...] = (
    "These are estimates, not measurements. Titrate what you make before you rely on it.",
    "Read the safety data sheet of every substance, intermediates included. Fume hood, trained people.",
    "Institutional and local rules and licensed practice decide, for making, use and disposal alike.",
    "A missing caution means that no rule of this program was met, not that a substance is harmless.",
    "Analogs with energetic groups are withheld and get no route.",
)
"""General cautions, in order."""

HOW_SURE: tuple[str, ...] = (
    "pKa' is conditional: the pH at which half of the reporting groups are ionised in the stated medium.",
    "Its error joins those of all constants, their correlations, the misfit of the model and the medium.",
    "The hit probability is the chance that the true pKa' lies in the window, given that error.",
    "The working range is pKa' - 1 to pKa' + 1, what an eye can read of a two-colour dye.",
    "Steps are the fewest reactions from the shelf by the rules switched on; yields are not foretold.",
)
"""What the numbers mean, in order."""

NO_ROUTE = "no route from this shelf"
UNSUBSTITUTED = "unsubstituted"


def medium_in_words(medium: Medium) -> str:
    """The medium on one line, with units.

    >>> medium_in_words(Medium(temperature_c=37.0, ionic_strength_m=0.15))
    'water, 37 °C, ionic strength 0.15 mol/L'
    """
    solvent = "water"
    if medium.cosolvent:
        solvent = f"water with {medium.cosolvent_mass_percent:g} % {medium.cosolvent} by mass"
    parts = [solvent, f"{medium.temperature_c:g} °C", f"ionic strength {medium.ionic_strength_m:g} mol/L"]
    if medium.offset or medium.offset_sd:
        parts.append(f"measured offset {medium.offset:+g} ± {medium.offset_sd:g} pKa units")
    if medium.surface_potential_mv:
        parts.append(f"surface potential {medium.surface_potential_mv:+g} mV")
    return ", ".join(parts)


def closeness_in_words(brief: Brief) -> str:
    """How closeness counts where the dye must switch at several targets; else ""."""
    several = any(target.role == "switches" for target in brief.also)
    return "closeness counts at the worst of the targets at which it must switch" if several else ""


def target_in_words(target: Target) -> str:
    """What the dye must do, without the medium.

    >>> target_in_words(Target(6.4, 0.2, Medium()))
    'switch at pH 6.4 ± 0.2'
    """
    if target.role == "stays_off":
        return f"stay in its acid form up to pH {target.ph + target.tolerance:g}"
    if target.role == "stays_on":
        return f"stay in its base form down to pH {target.ph - target.tolerance:g}"
    return f"switch at pH {target.ph:g} ± {target.tolerance:g}"


def anchor_in_words(brief: Brief) -> str:
    """How the dye is to be bound; empty where it is not."""
    if not brief.groups.anchors:
        return ""
    return (
        f"bound through one of {', '.join(brief.groups.anchors)}; "
        "pKa' is that of the bound form, route and mass are those of the free dye"
    )
