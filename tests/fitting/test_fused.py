"""Transmission factors of fused positions are found again in values that the model itself makes."""

from __future__ import annotations

import pytest

from tuner.fitting.fused import fit_transmissions, main
from tuner.library import load_library
from tuner.prediction.acidity_face import shipped_model
from tuner.prediction.door import MoleculeDoor

SMILES = (
    "Nc1cccc2c([N+](=O)[O-])cccc12", "Nc1cccc2c(C#N)cccc12", "Nc1cccc2cc([N+](=O)[O-])ccc12",
    "Oc1cc(Cl)cc2ccccc12", "Oc1cc([N+](=O)[O-])cc2ccccc12", "Nc1ccc2ccc(Cl)cc2c1",
)  # fmt: skip


def test_shipped_factors_come_back() -> None:
    library = load_library()
    door = MoleculeDoor(library, shipped_model(library))
    rows = [{"smiles": s, "pka": str(door.predict(s).pka25)} for s in SMILES]
    found = fit_transmissions(rows, library)
    assert {(t.core, t.label) for t in found} == {
        ("1-naphthylamine", "5"), ("1-naphthylamine", "6"), ("1-naphthol", "3"), ("2-naphthylamine", "7"),
    }  # fmt: skip
    for t in found:
        assert t.value == pytest.approx(t.shipped, abs=1e-6)


def test_what_says_nothing_is_left_out() -> None:
    library = load_library()
    silent = (
        "nonsense",
        "Nc1cccc2ccccc12",
        "Oc1ccccc1",
        "O=Nc1ccc(O)c2ccccc12",
        "Nc1cccc2c(S(=O)(=O)O)cccc12",
    )
    assert fit_transmissions([{"smiles": s, "pka": "5.0"} for s in silent], library) == []


def test_the_command_says_how_it_is_called(capsys: pytest.CaptureFixture[str]) -> None:
    assert main([]) == 2
    assert "usage" in capsys.readouterr().err
