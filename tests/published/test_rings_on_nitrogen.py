"""Anilines whose nitrogen lies in a ring: the ring holds what two alkyl chains would turn.

Values as remembered from Perrin 1965 and its supplement of 1972, 25 degC, not checked against print, except
the dinitrophenylpiperidine, which stands in the supplement.
"""

from __future__ import annotations

import pytest

from tuner.library import load_library
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor


@pytest.fixture(scope="module")
def water() -> MoleculeDoor:
    library = load_library()
    return MoleculeDoor(library, shipped_model(library))


@pytest.mark.parametrize(
    ("name", "smiles", "core", "printed"),
    [
        ("N-phenylpiperidine", "c1ccc(N2CCCCC2)cc1", "N-phenylpiperidine", 5.20),
        ("N-phenylmorpholine", "c1ccc(N2CCOCC2)cc1", "N-phenylmorpholine", 3.33),
        (
            "N-(2,4-dinitrophenyl)piperidine",
            "O=[N+]([O-])c1ccc(N2CCCCC2)c([N+](=O)[O-])c1",
            "N-phenylpiperidine",
            -0.38,
        ),
        ("1,2,3,4-tetrahydroquinoline", "C1CCNc2ccccc21", "1,2,3,4-tetrahydroquinoline", 5.03),
    ],
)
def test_rings_as_printed(water: MoleculeDoor, name: str, smiles: str, core: str, printed: float) -> None:
    told = water.predict(smiles)
    assert told.core == core, name
    assert told.pka == pytest.approx(printed, abs=1.645 * told.pka_sd), name
    assert told.pka_sd < 0.6, name


def test_acceptors_act_on_a_ring_nitrogen_as_on_a_dialkyl_one(water: MoleculeDoor) -> None:
    """rho of the N,N-dialkyl series, not that of the primary one, though no group stands on the nitrogen."""

    def fall(amine: str) -> float:
        return water.predict(f"{amine}c1cccc(C#N)c1").pka - water.predict(f"{amine}c1ccccc1").pka

    assert fall("C1CCCCN1") == pytest.approx(fall("CN(C)"), abs=0.02)
    assert fall("C1CCCCN1") < fall("N") - 0.2
