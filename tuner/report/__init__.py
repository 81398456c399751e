"""How does a finished run look on paper? Tables, workbook, structure file, page, manifest; results only."""

from __future__ import annotations

from tuner.report.records import Exhibit, ph_grid
from tuner.report.write import run_files, write_run

__all__ = ["Exhibit", "ph_grid", "run_files", "write_run"]
