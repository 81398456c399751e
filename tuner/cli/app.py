"""Which commands are there? Each parses, calls one function, and leaves; heavy imports wait until then."""

from __future__ import annotations

from enum import StrEnum
from pathlib import Path
from typing import Annotated

import typer

from tuner.cli.options import (
    AtPh,
    BriefArgument,
    Cosolvent,
    CosolventMassPercent,
    IonicStrengthM,
    Measured,
    Offset,
    OffsetSd,
    Overlay,
    Quiet,
    Seed,
    SmilesArgument,
    SurfacePotentialMv,
    TemperatureC,
    medium_of,
)

app = typer.Typer(
    name="tuner",
    help="Choose substituents that put the colour change of a phenol or aniline dye at a wanted pH.",
    epilog="Estimates, not measurements. Safety data sheets, local rules and licensed practice decide.",
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
)


class Kind(StrEnum):
    """What `tuner show` can show."""

    substituents = "substituents"
    series = "series"
    cores = "cores"
    stock = "stock"
    reactions = "reactions"


def _version(asked: bool) -> None:
    """Print the versions of program and data."""
    if asked:
        from tuner import __version__
        from tuner.library import data_version

        typer.echo(f"tuner {__version__}, library data {data_version()}")
        raise typer.Exit


@app.callback()
def _shared(
    version: Annotated[
        bool,
        typer.Option(
            "--version", callback=_version, is_eager=True, help="Print the versions of program and data."
        ),
    ] = False,
) -> None:
    """Options before the command."""


@app.command()
def check(brief: BriefArgument) -> None:
    """Check a brief; say what would be searched."""
    from tuner.cli.check import run

    run(brief)


@app.command()
def design(
    brief: BriefArgument,
    out: Annotated[
        Path | None,
        typer.Option("--out", metavar="FOLDER", help="Folder of results; default: a new one under outputs/."),
    ] = None,
    seed: Seed = None,
    again: Annotated[
        bool, typer.Option("--again", help="Replace an earlier run in the folder --out.")
    ] = False,
    scheduler: Annotated[
        str, typer.Option("--scheduler", metavar="ADDRESS", help="Dask scheduler that shares the work out.")
    ] = "",
    quiet: Quiet = False,
) -> None:
    """Find the best analogs that can be made."""
    from tuner.cli.design import run

    run(brief, out=out, seed=seed, again=again, scheduler=scheduler, quiet=quiet)


@app.command()
def predict(
    molecules: Annotated[Path, typer.Argument(metavar="MOLECULES.csv", help="A CSV with a column smiles.")],
    out: Annotated[
        Path | None,
        typer.Option("--out", metavar="PREDICTIONS.csv", help="Where to write; default: the screen."),
    ] = None,
    temperature_c: TemperatureC = 25.0,
    ionic_strength_m: IonicStrengthM = 0.0,
    cosolvent: Cosolvent = "",
    cosolvent_mass_percent: CosolventMassPercent = 0.0,
    offset: Offset = 0.0,
    offset_sd: OffsetSd = 0.0,
    surface_potential_mv: SurfacePotentialMv = 0.0,
    at_ph: AtPh = None,
    measured: Measured = None,
    overlay: Overlay = None,
    quiet: Quiet = False,
) -> None:
    """Predict the pKa of every molecule of a table."""
    from tuner.cli.predict import run

    medium = medium_of(
        temperature_c,
        ionic_strength_m,
        cosolvent,
        cosolvent_mass_percent,
        offset,
        offset_sd,
        surface_potential_mv,
    )
    run(molecules, out, medium, overlay, measured=measured, at_ph=at_ph, quiet=quiet)


@app.command()
def explain(
    smiles: SmilesArgument,
    temperature_c: TemperatureC = 25.0,
    ionic_strength_m: IonicStrengthM = 0.0,
    cosolvent: Cosolvent = "",
    cosolvent_mass_percent: CosolventMassPercent = 0.0,
    offset: Offset = 0.0,
    offset_sd: OffsetSd = 0.0,
    surface_potential_mv: SurfacePotentialMv = 0.0,
    at_ph: AtPh = None,
    measured: Measured = None,
    overlay: Overlay = None,
) -> None:
    """Show one pKa as a sum of its parts."""
    from tuner.cli.explain import run

    medium = medium_of(
        temperature_c,
        ionic_strength_m,
        cosolvent,
        cosolvent_mass_percent,
        offset,
        offset_sd,
        surface_potential_mv,
    )
    run(smiles, medium, overlay, measured=measured, at_ph=at_ph)


@app.command()
def route(brief: BriefArgument, smiles: SmilesArgument) -> None:
    """Show a shortest route to one analog."""
    from tuner.cli.route import run

    run(brief, smiles)


@app.command()
def reach(brief: BriefArgument) -> None:
    """Name purchases that open more analogs."""
    from tuner.cli.reach import run

    run(brief)


@app.command()
def show(
    kind: Annotated[Kind, typer.Argument(help="What to show.")],
    name: Annotated[str, typer.Argument(metavar="[NAME]", help="One entry in full.")] = "",
    overlay: Overlay = None,
    out: Annotated[
        Path | None,
        typer.Option(
            "--out", metavar="FILE.svg", help="Where the drawing of a core goes; default: NAME.svg here."
        ),
    ] = None,
) -> None:
    """Show the library: groups, cores, stock ..."""
    from tuner.cli.show import run

    run(kind.value, name, overlay, out)


@app.command()
def accuracy(
    reference: Annotated[
        Path | None,
        typer.Option(
            "--reference", metavar="FOLDER", help="Tables of measured values; default: the shipped ones."
        ),
    ] = None,
) -> None:
    """Compare predictions with measured values."""
    from tuner.cli.accuracy import run

    run(reference)
