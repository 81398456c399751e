"""How does the molecule door ask the fitted acidity model?"""

from __future__ import annotations

from collections.abc import Mapping

from tuner.acidity.model import AcidityModel
from tuner.acidity.pattern import Term as AcidityTerm
from tuner.library.catalogue import Library
from tuner.library.records import Substituent
from tuner.prediction.estimate import Estimator
from tuner.prediction.records import Term
from tuner.structure.records import PreparedCore


class AcidityFace:
    """The fitted model as a `RingModel`.

    Parameters
    ----------
    model : AcidityModel
    """

    def __init__(self, model: AcidityModel) -> None:
        self.model = model

    def evaluate(
        self, prepared: PreparedCore, groups: Mapping[str, Substituent]
    ) -> tuple[float, float, tuple[Term, ...]]:
        """pKa25, its standard error, and its summands."""
        found = self.model.evaluate(prepared, groups)
        return found.pka25, found.sd, tuple(_as_shown(term) for term in found.terms)


def _as_shown(term: AcidityTerm) -> Term:
    """A summand of the ring model as a line for the reader."""
    return Term(
        label=", ".join(term.labels) or term.kind,
        what=term.title,
        value=term.value,
        sd=term.sd,
        sigma=term.sigma,
        rho=term.rho,
        source=term.source,
    )


def shipped_model(library: Library) -> AcidityFace:
    """The fitted model with this library; groups of cores that no table lists are estimated."""
    estimator = Estimator(library)
    return AcidityFace(AcidityModel(library, lambda smiles: estimator.group(smiles)[0]))
