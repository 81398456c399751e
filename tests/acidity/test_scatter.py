"""What a core says about the scatter of its analogs widens every analog alike and trusts its parent more."""

from __future__ import annotations

from dataclasses import replace
from math import sqrt

import pytest

from tuner.acidity.model import AcidityModel
from tuner.library import load_library
from tuner.library.catalogue import Library
from tuner.prediction.estimate import Estimator
from tuner.structure.cores import prepare_core


def model_with(library: Library, name: str, scatter: float) -> AcidityModel:
    cores = {**library.cores, name: replace(library.cores[name], scatter=scatter)}
    return AcidityModel(replace(library, cores=cores), lambda s: Estimator(library).group(s)[0])


def test_a_scaffold_of_its_own_gets_just_the_further_error() -> None:
    library = load_library()
    prepared = prepare_core(library.cores["1-naphthol"])
    groups = {"4": library.substituents["Cl"]}
    sharp = model_with(library, "1-naphthol", 0.0).evaluate(prepared, groups)
    wide = model_with(library, "1-naphthol", 0.4).evaluate(prepared, groups)
    assert wide.pka25 == pytest.approx(sharp.pka25, abs=1e-12)
    assert wide.sd == pytest.approx(sqrt(sharp.sd**2 + 0.16), abs=1e-9)


def test_a_view_of_a_lone_ring_follows_its_parent_more_closely() -> None:
    library = load_library()
    name = "4-(dimethylamino)azobenzene"
    prepared = prepare_core(library.cores[name])
    parent = library.cores[name].parent_pka.value
    near = model_with(library, name, 1.0).evaluate(prepared, {})
    far = model_with(library, name, 0.0).evaluate(prepared, {})
    assert abs(near.pka25 - parent) < abs(far.pka25 - parent)
    assert near.sd > 0.9
