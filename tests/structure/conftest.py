"""The shipped cores, prepared once for the tests of this room."""

from __future__ import annotations

from collections.abc import Mapping

import pytest

from tuner.library import load_library
from tuner.library.records import Core
from tuner.structure.scaffolds import CoreIndex, index_cores


@pytest.fixture(scope="session")
def cores() -> Mapping[str, Core]:
    """The shipped library's cores."""
    return load_library().cores


@pytest.fixture(scope="session")
def index(cores: Mapping[str, Core]) -> CoreIndex:
    """The same, ready for dissection."""
    return index_cores(cores)
