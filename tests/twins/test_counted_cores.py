"""Cores whose other groups are counted in the parent: both doors agree, several sites or not."""

from __future__ import annotations

import pytest

from tuner.acidity.model import AcidityModel
from tuner.library import load_library
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor
from tuner.prediction.estimate import Estimator
from tuner.prediction.held import COUNTED_IN_PARENT
from tuner.structure.assemble import assemble

LIBRARY = load_library()
DOOR = MoleculeDoor(LIBRARY, shipped_model(LIBRARY))
ESTIMATOR = Estimator(LIBRARY)
MODEL = AcidityModel(LIBRARY, lambda smiles: ESTIMATOR.group(smiles)[0])


@pytest.mark.parametrize("name", COUNTED_IN_PARENT)
@pytest.mark.parametrize("group", ["H", "Cl", "OMe"])
def test_the_transition_is_the_cores_own(name: str, group: str) -> None:
    prepared = DOOR.index.prepared[name]
    label = prepared.open_labels[0]
    pattern = {} if group == "H" else {label: LIBRARY.substituents[group]}
    told = DOOR.predict(assemble(LIBRARY.cores[name], {k: g.smiles for k, g in pattern.items()}))
    assert told.core == name
    space = MODEL.evaluate(prepared, pattern)
    # steps of other groups lie two units off or more and move the midpoint by a hundredth at most; two equal
    # hydroxyls (bis-azo dyes) are seen by their first step
    assert told.pka25 == pytest.approx(space.pka25, abs=0.02)
