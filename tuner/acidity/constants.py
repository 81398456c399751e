"""Where do the fitted constants stand, and how sure are they together?

`libraries/acidity/constants.csv` holds one row per parameter and scaffold ("phenol", "aniline"): value,
standard error, number of measurements behind it, prior, source. `covariance_SCAFFOLD.csv` holds the
covariance of the parameters that need one position (as its Cholesky factor), given those that couple two;
the errors of the latter add pair by pair. So the variance over a space is, like the pKa, a sum of one- and
two-position look-ups. `spreads.csv` holds the misfit and the spreads of what is not fitted. All three are
written by `python -m tuner.fitting fit`.
"""

from __future__ import annotations

import csv
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path

import numpy as np

from tuner.acidity.couplings import COUPLING_PARAMETERS
from tuner.acidity.features import Features, GroupScales
from tuner.acidity.tables import FloatArray
from tuner.errors import LibraryError
from tuner.library.folders import data_folder

SCAFFOLDS = ("phenol", "aniline")
"""Lone benzene rings with a fit of their own. Every other scaffold borrows the constants of one of the
two."""

FOLDER = "acidity"
CONSTANTS_FILE, SPREADS_FILE = "constants.csv", "spreads.csv"
REFIT = "rewrite the folder with: python -m tuner.fitting fit --reference FOLDER"


@dataclass(frozen=True)
class Misfit:
    """What a new compound adds to the error of the parameters, standard deviations in pKa units.

    `base` for any compound (laboratories differ by this much), `pair` per pair of ring groups, `ortho` per
    ortho group in such a pair, `nitrogen` per group on the
    reporting nitrogen, `acceptors` times the product of the pulls of each pair of groups.
    """

    base: float
    pair: float
    ortho: float
    nitrogen: float
    acceptors: float


@dataclass(frozen=True)
class AcidityConstants:
    """The fitted model of one scaffold.

    Attributes
    ----------
    scaffold : str
    names : tuple of str, the n parameters that need one position
    mean : array (n,), pKa units
    covariance : array (n, n)
    couplings, coupling_sd : mappings parameter -> value, standard error
    scales : GroupScales
    misfit : Misfit
    rows : mapping parameter -> number of measurements behind it
    source : mapping parameter -> source keys
    """

    scaffold: str
    names: tuple[str, ...]
    mean: FloatArray
    covariance: FloatArray
    couplings: Mapping[str, float]
    coupling_sd: Mapping[str, float]
    scales: GroupScales
    misfit: Misfit
    rows: Mapping[str, int]
    source: Mapping[str, str]

    def vector(self, features: Features) -> FloatArray:
        """Weights of the parameters, shape (n,)."""
        found = np.zeros(len(self.names))
        places = _places(self.names)
        for name, weight in features.items():
            if name in places:
                found[places[name]] += weight
        return found

    def value(self, name: str) -> float:
        """Value of one parameter (pKa units per unit of its feature), 0 where it is not in the fit."""
        place = _places(self.names).get(name)
        return float(self.mean[place]) if place is not None else self.couplings.get(name, 0.0)


@lru_cache(maxsize=16)
def _places(names: tuple[str, ...]) -> dict[str, int]:
    return {name: k for k, name in enumerate(names)}


def load_constants(folder: Path | None = None) -> Mapping[str, AcidityConstants]:
    """The fitted constants of both scaffolds, kept until a file changes.

    Parameters
    ----------
    folder : Path
        The folder `acidity` of a library; the shipped one where none is given.

    Raises
    ------
    LibraryError
        A file is missing or malformed, with the command that writes it anew.
    """
    place = folder if folder is not None else data_folder() / FOLDER
    names = (CONSTANTS_FILE, SPREADS_FILE, *(covariance_file(s) for s in SCAFFOLDS))
    for name in names:
        if not (place / name).is_file():
            raise LibraryError("the fitted constants are missing", place=place / name, remedy=REFIT)
    return _load_once(place, tuple((place / name).stat().st_mtime_ns for name in names))


def covariance_file(scaffold: str) -> str:
    """Name of the file that holds a scaffold's covariance."""
    return f"covariance_{scaffold}.csv"


@lru_cache(maxsize=4)
def _load_once(folder: Path, stamps: tuple[int, ...]) -> Mapping[str, AcidityConstants]:
    table = list(_rows(folder / CONSTANTS_FILE))
    spreads = {(row["scaffold"], row["name"]): float(row["value"]) for row in _rows(folder / SPREADS_FILE)}
    try:
        return {s: _scaffold(s, [r for r in table if r["scaffold"] == s], spreads, folder) for s in SCAFFOLDS}
    except (KeyError, ValueError) as error:
        raise LibraryError(
            f"the fitted constants do not fit together ({error})", place=folder, remedy=REFIT
        ) from None


def _rows(path: Path) -> Iterator[dict[str, str]]:
    with path.open(encoding="utf-8", newline="") as lines:
        yield from csv.DictReader(line for line in lines if not line.startswith("#"))


def _scaffold(
    scaffold: str, table: list[dict[str, str]], spreads: Mapping[tuple[str, str], float], folder: Path
) -> AcidityConstants:
    single = [row for row in table if row["parameter"] not in COUPLING_PARAMETERS]
    double = [row for row in table if row["parameter"] in COUPLING_PARAMETERS]
    spread = {name: value for (of, name), value in spreads.items() if of == scaffold}
    names = tuple(row["parameter"] for row in single)
    return AcidityConstants(
        scaffold=scaffold,
        names=names,
        mean=np.array([float(row["value"]) for row in single]),
        covariance=_covariance(folder / covariance_file(scaffold), names),
        couplings={row["parameter"]: float(row["value"]) for row in double},
        coupling_sd={row["parameter"]: float(row["sd"]) for row in double},
        scales=GroupScales(
            published={row["parameter"]: float(row["published"]) for row in single if row["published"]},
            rho=spread["rho"],
            error_meta=spread["error_meta"],
            error_para=spread["error_para"],
            ortho_sd=spread["ortho_sd"],
            ortho_polar_factor=spread["ortho_polar_factor"],
            nitrogen_sd=spread["nitrogen_sd"],
            kin_share=spread["kin_share"],
            aniline=scaffold == "aniline",
        ),
        misfit=Misfit(
            *(spread[f"misfit_{name}"] for name in ("base", "pair", "ortho", "nitrogen", "acceptors"))
        ),
        rows={row["parameter"]: int(row["rows"]) for row in table},
        source={row["parameter"]: row["source"] for row in table},
    )


def _covariance(path: Path, names: tuple[str, ...]) -> FloatArray:
    """Covariance L L' from its factor L: one row per parameter, its name, then the numbers up to the
    diagonal."""
    size = len(names)
    matrix = np.zeros((size, size))
    with path.open(encoding="utf-8") as lines:
        data = [line.rstrip("\n").split(",") for line in lines if not line.startswith("#")]
    if tuple(line[0] for line in data) != names:
        raise ValueError(f"{path.name} and {CONSTANTS_FILE} list different parameters")
    for k, line in enumerate(data):
        matrix[k, : k + 1] = np.array(line[1:], dtype=np.float64)
    return np.asarray(matrix @ matrix.T)
