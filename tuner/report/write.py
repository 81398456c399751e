"""Which files does a run leave, and how do they come into being together?"""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path

from tuner.report.folder import MANIFEST, write_folder
from tuner.report.manifest import manifest
from tuner.report.page import page
from tuner.report.records import Exhibit
from tuner.report.structure_file import candidates_sdf
from tuner.report.tables import candidates_csv, candidates_workbook
from tuner.search.result import DesignResult


def run_files(result: DesignResult, exhibits: Mapping[str, Exhibit], command: str) -> dict[str, bytes]:
    """Name -> content of every file of a run. All but the manifest are the same bytes for the same result."""
    files = {
        "candidates.csv": candidates_csv(result),
        "candidates.xlsx": candidates_workbook(result),
        "candidates.sdf": candidates_sdf(result, exhibits),
        "report.html": page(result, exhibits),
    }
    files[MANIFEST] = manifest(result, files, command)
    return files


def write_run(
    result: DesignResult,
    exhibits: Mapping[str, Exhibit],
    folder: Path,
    *,
    command: str = "",
    again: bool = False,
) -> tuple[Path, ...]:
    """Write a run's folder whole or not at all; gives the paths of its files.

    Parameters
    ----------
    result : DesignResult
    exhibits : drawings, connection tables and response curves by SMILES
    folder : must not exist, unless `again` is set and it holds an earlier run
    command : the command line, for the manifest

    Raises
    ------
    TunerError
        The folder is taken, or cannot be written.
    """
    files = run_files(result, exhibits, command)
    write_folder(folder, files, again=again)
    return tuple(folder / name for name in files)
