"""Which arguments and options do several commands share?"""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

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
