"""What stands in the tables? Reading, checking, and the user's own folder laid over the shipped one."""

from __future__ import annotations

from tuner.library.catalogue import Library
from tuner.library.folders import data_folder, data_version
from tuner.library.load import load_library, read_own_measured

__all__ = ["Library", "data_folder", "data_version", "load_library", "read_own_measured"]
