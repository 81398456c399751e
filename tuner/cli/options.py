"""Which arguments and options do several commands share?"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from tuner.errors import BriefError

if TYPE_CHECKING:
    from tuner.brief.records import Medium

BriefArgument = Annotated[
    str,
    typer.Argument(
        metavar="BRIEF", help="A TOML file, or the name of a demo brief, such as freshness-label."
    ),
]
SmilesArgument = Annotated[str, typer.Argument(metavar="SMILES", help="One molecule, in quotes.")]
Quiet = Annotated[bool, typer.Option("--quiet", "-q", help="Print no progress and no table.")]
Seed = Annotated[
    int | None, typer.Option("--seed", min=0, help="Seed of every random choice; default: the brief's.")
]
TemperatureC = Annotated[float, typer.Option("--temperature-c", help="Temperature, in degrees Celsius.")]
IonicStrengthM = Annotated[float, typer.Option("--ionic-strength-m", help="Ionic strength, in mol/L.")]
Overlay = Annotated[
    Path | None,
    typer.Option("--overlay", metavar="FOLDER", help="Your own library folder, laid over the shipped one."),
]
Cosolvent = Annotated[
    str, typer.Option("--cosolvent", metavar="NAME", help="Second solvent, such as ethanol.")
]
CosolventMassPercent = Annotated[
    float, typer.Option("--cosolvent-mass-percent", help="Its share, in percent by mass.")
]
Offset = Annotated[float, typer.Option("--offset", help="Measured shift in a film or micelle, in pKa units.")]
OffsetSd = Annotated[float, typer.Option("--offset-sd", min=0.0, help="Its standard error, in pKa units.")]
SurfacePotentialMv = Annotated[
    float, typer.Option("--surface-potential-mv", help="Potential of a charged surface, in mV.")
]
Measured = Annotated[
    Path | None,
    typer.Option("--measured", metavar="FILE.csv", help="Your own measured pKa: columns smiles, pka."),
]
AtPh = Annotated[
    float | None, typer.Option("--at-ph", metavar="PH", help="Also tell the share of the base form there.")
]


def medium_of(
    temperature_c: float,
    ionic_strength_m: float,
    cosolvent: str,
    cosolvent_mass_percent: float,
    offset: float,
    offset_sd: float,
    surface_potential_mv: float,
) -> Medium:
    """The medium of a command line; ranges are checked where it is used.

    Raises
    ------
    BriefError
        A cosolvent without a share.
    """
    from tuner.brief.records import Medium

    if cosolvent and not cosolvent_mass_percent:
        raise BriefError(
            f'"{cosolvent}" is named without a share',
            place="--cosolvent",
            remedy="add --cosolvent-mass-percent",
        )
    return Medium(
        temperature_c=temperature_c,
        ionic_strength_m=ionic_strength_m,
        cosolvent=cosolvent,
        cosolvent_mass_percent=cosolvent_mass_percent,
        offset=offset,
        offset_sd=offset_sd,
        surface_potential_mv=surface_potential_mv,
    )
