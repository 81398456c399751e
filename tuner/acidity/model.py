"""What is the pKa of one pattern, or of a whole space of patterns, on any prepared core?

Lone benzene rings ("phenol", "aniline") start from the fitted parent; what the core carries itself counts as
groups, and the core's own measured parent shifts the sum. Every other scaffold starts from its own measured
parent and borrows the constants of its series.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from math import hypot
from pathlib import Path

from tuner.acidity.constants import SCAFFOLDS, AcidityConstants, load_constants
from tuner.acidity.medium import to_25_c
from tuner.acidity.pattern import Base, CoreShift, PatternPka, core_shift, evaluate_pattern
from tuner.acidity.space_tables import SpaceTables, build_space_tables
from tuner.errors import LibraryError
from tuner.library.catalogue import Library
from tuner.library.records import Substituent, Value
from tuner.structure.records import PreparedCore

UNSTATED_PARENT_SD = 0.2
"""Standard error of a core's parent pKa that states none; common practice, no source."""

Resolve = Callable[[str], Substituent]
"""Canonical `*...` SMILES to a group, tabulated or estimated."""


def _trusted(parent: Value, scatter: float, model_sd: float) -> Value:
    """A core's measured parent with the error by which it is weighed against the model.

    Where analogs scatter around the model, the model is less sure of the bare core too; a smaller error of
    the parent gives the weight (s^2 + scatter^2) / (s^2 + scatter^2 + sd^2) in the place of
    s^2 / (s^2 + sd^2).
    """
    if not parent.known or not scatter:
        return parent
    return Value(parent.value, parent.sd * model_sd / hypot(model_sd, scatter))


class AcidityModel:
    """The fitted model with one library.

    Parameters
    ----------
    library : Library
        Cores with their parents, series.
    resolve : callable
        How the SMILES of a core's own fixed groups become groups.
    folder : Path
        Folder of the fitted constants; the shipped one where none is given.
    """

    def __init__(self, library: Library, resolve: Resolve, folder: Path | None = None) -> None:
        self._library = library
        self._resolve = resolve
        self._constants = load_constants(folder)
        self._starts: dict[PreparedCore, tuple[Base, CoreShift, dict[str, Substituent]]] = {}

    def constants(self, prepared: PreparedCore) -> AcidityConstants:
        """The fitted constants that a core uses."""
        if prepared.scaffold in SCAFFOLDS:
            return self._constants[prepared.scaffold]
        return self._constants["phenol" if prepared.series == "phenol" else "aniline"]

    def evaluate(self, prepared: PreparedCore, groups: Mapping[str, Substituent]) -> PatternPka:
        """pKa25 of one pattern: `groups` at the open positions, in their acting forms."""
        base, shift, fixed = self.start(prepared)
        standing = {**fixed, **groups}
        return evaluate_pattern(self.constants(prepared), prepared, standing, base=base, shift=shift)

    def tables(self, prepared: PreparedCore, choices: Sequence[Sequence[Substituent]]) -> SpaceTables:
        """Look-up tables of a space; `choices` in the order of `prepared.open_labels`, in their acting
        forms."""
        base, shift, fixed = self.start(prepared)
        listed = dict(zip(prepared.open_labels, choices, strict=True))
        series = self._library.series[prepared.series]
        return build_space_tables(
            self.constants(prepared),
            prepared,
            listed,
            fixed,
            base=base,
            shift=shift,
            bare_charge=series.acid_charge,
        )

    def start(self, prepared: PreparedCore) -> tuple[Base, CoreShift, dict[str, Substituent]]:
        """Where the sum starts, what the core's measured parent adds, and the groups that the core
        carries."""
        if prepared not in self._starts:
            self._starts[prepared] = self._work_out_start(prepared)
        return self._starts[prepared]

    def _work_out_start(self, prepared: PreparedCore) -> tuple[Base, CoreShift, dict[str, Substituent]]:
        core = self._library.cores.get(prepared.name)
        parent, source = Value(), ""
        if core is not None and core.parent_pka.known:
            series = self._library.series[core.series]
            sd = core.parent_pka.sd if core.parent_pka.sd == core.parent_pka.sd else UNSTATED_PARENT_SD
            parent = Value(to_25_c(core.parent_pka.value, series, core.parent_temperature_c), sd)
            source = core.parent_pka_source or core.source
        scatter = core.scatter if core is not None else 0.0
        if prepared.scaffold not in SCAFFOLDS:
            if not parent.known:
                raise LibraryError(
                    f"core '{prepared.name}' has no parent_pka", remedy="give value, sd and source"
                )
            return Base(parent, source), CoreShift(variance_taken=-(scatter**2)), {}
        fixed = {slot.label: self._resolve(slot.fixed) for slot in prepared.slots if slot.fixed}
        constants = self._constants[prepared.scaffold]
        trusted = _trusted(parent, scatter, evaluate_pattern(constants, prepared, fixed).sd)
        shift = core_shift(constants, prepared, fixed, trusted, source)
        return Base(None), replace(shift, variance_taken=shift.variance_taken - scatter**2), fixed
