"""What does a finished search hand to the report and to the terminal?

Frozen records only: no method, no molecule, no file. A missing number is NaN. pKa values are conditional pKa'
in the medium of the brief's target unless a field says otherwise.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from math import nan

from tuner.brief.records import Brief, Target
from tuner.synthesis.records import Route

Progress = Callable[[str, int, int], None]
"""Called as progress(stage, done, total) with a stage in words; total 0 where it is not known yet."""


@dataclass(frozen=True, slots=True)
class OtherTarget:
    """How a candidate does at one of the brief's further targets."""

    target: Target
    pka: float  # conditional pKa' in that target's medium
    pka_sd: float
    probability: float  # of doing there what the target asks


@dataclass(frozen=True, slots=True)
class Candidate:
    """One ranked analog. `smiles` is the free dye; where an anchor binds it, `pka` is of the bound form."""

    rank: int  # from 1
    analog: str  # short name, unique within the run
    smiles: str
    core: str  # name of the core
    substitution: str  # "2-Cl, 4'-NO2" in the order of the core's positions; else "unsubstituted"
    pka: float
    pka_sd: float
    offset: float  # pka - target
    hit_probability: float  # 0 to 1
    steps: int
    molar_mass_g_mol: float
    working_range_low: float  # pH
    working_range_high: float  # pH
    dpka_dt: float  # per kelvin
    front: bool  # on the trade-off front of |offset|, steps and molar mass
    layer: int = 0  # non-dominated layer, 1 = front; 0 = not worked out
    knee: bool = False  # the knee of the front
    score: float = nan  # what the ranking sorts by, in hit probability
    stability: float = nan  # share of resampled rankings that keep it among the listed rows, 0 to 1
    measured_pka: float = nan  # as measured, brought to the brief's medium
    measured_source: str = ""
    macroscopic_pkas: tuple[float, ...] = ()  # ascending
    clogp: float = nan
    tpsa_a2: float = nan
    cautions: tuple[str, ...] = ()
    flags: tuple[str, ...] = ()  # names of screening flags that were raised
    notes: tuple[str, ...] = ()
    route: Route | None = None
    other_targets: tuple[OtherTarget, ...] = ()


@dataclass(frozen=True, slots=True)
class TradePoint:
    """One analog in the trade-off picture. `rank` is 0 where it is not listed."""

    core: str
    substitution: str
    offset: float  # pKa' - target
    steps: int
    molar_mass_g_mol: float
    front: bool
    rank: int = 0


@dataclass(frozen=True, slots=True)
class SpaceSummary:
    """What was searched on one core."""

    core: str
    title: str
    positions: tuple[tuple[str, int], ...]  # (locant, number of choices)
    patterns: int  # product of the choices
    analogs: int  # after symmetry and count limits
    makeable: int = -1  # analogs with a route within the step limit; -1 = not counted
    colours: tuple[str, str] = ("", "")  # acid form, base form


@dataclass(frozen=True, slots=True)
class Campaign:
    """Making the top candidates together: shared intermediates and the saving."""

    candidates: int  # the first so many ranks
    reactions_alone: int
    reactions_together: int
    shared: tuple[tuple[str, int], ...] = ()  # (intermediate SMILES, candidates through it)


@dataclass(frozen=True, slots=True)
class InputFile:
    """A file that the result depends on; `name` is what the brief calls it, never a path of this machine."""

    name: str
    role: str  # "brief", "shelf", "measured", "library overlay", "user objective"
    sha256: str


@dataclass(frozen=True)
class DesignResult:
    """Everything that a run found out. `candidates` are in rank order."""

    brief: Brief
    candidates: tuple[Candidate, ...]
    spaces: tuple[SpaceSummary, ...]
    front: tuple[TradePoint, ...]
    cloud: tuple[TradePoint, ...]  # a seeded sample of makeable analogs, the backdrop of the picture
    method: str  # "exact", "certified", "evolutionary"
    method_reason: str  # why, one sentence
    certificate: str  # what is certain: analogs covered, resolution, bound; one or two sentences
    counts: tuple[tuple[str, int], ...]  # (what, how many analogs), in the order in which they were set aside
    notes: tuple[str, ...] = ()
    campaign: Campaign | None = None
    inputs: tuple[InputFile, ...] = ()
    library_version: str = ""
    seed: int = 1
    timings_s: tuple[tuple[str, float], ...] = field(default=(), compare=False)  # (stage, seconds)
