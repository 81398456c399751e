"""Shared, slow-to-make things of the prediction tests."""

from __future__ import annotations

import pytest

from tuner.library import load_library
from tuner.library.catalogue import Library
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor
from tuner.prediction.estimate import Estimator


@pytest.fixture(scope="session")
def library() -> Library:
    return load_library()


@pytest.fixture(scope="session")
def estimator(library: Library) -> Estimator:
    return Estimator(library)


@pytest.fixture(scope="session")
def door(library: Library) -> MoleculeDoor:
    return MoleculeDoor(library, shipped_model(library))
