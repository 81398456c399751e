"""An invented result, small and complete, for the tests of the report and of the terminal tables."""

from __future__ import annotations

from dataclasses import replace
from math import nan
from pathlib import Path

from tuner.brief.records import Brief, Groups, Limits, Medium, Ranking, Reagents, SearchPlan, Target
from tuner.report.records import Exhibit, ph_grid
from tuner.search.result import (
    Campaign,
    Candidate,
    DesignResult,
    InputFile,
    OtherTarget,
    SpaceSummary,
    TradePoint,
)
from tuner.synthesis.records import Route, Step

HOSTILE = "<b>&\"'"
"""Text that would break a page written by hand."""

AZO_STEP = Step(
    kind="azo-coupling",
    title="azo coupling",
    substrate="Oc1ccccc1Cl",
    product="Oc1ccc(/N=N/c2ccccc2)cc1Cl",
    reagents=("aniline", "sodium nitrite", "hydrochloric acid"),
    cautions=("diazonium salt: cold, in solution, never isolated",),
)


def sample_brief() -> Brief:
    """A brief that asks for a switch at 6.4 in a cool hydrogel."""
    medium = Medium(temperature_c=6.0, ionic_strength_m=0.1)
    warm = Target(5.5, 0.0, Medium(temperature_c=40.0), role="stays_off", name="warm")
    return Brief(
        title="Label with <angle> & sign",
        target=Target(6.4, 0.2, medium),
        also=(warm,),
        cores=("4-arylazophenol",),
        reagents=Reagents(),
        groups=Groups(),
        limits=Limits(),
        ranking=Ranking(),
        search=SearchPlan(),
        overlay=None,
        measured=None,
        path=Path("label.toml"),
        sha256="0" * 64,
    )


def sample_candidates() -> tuple[Candidate, ...]:
    """Four candidates: with a measured value, without a route, bought, and with hostile text."""
    brief = sample_brief()
    first = Candidate(
        rank=1,
        analog="4-arylazophenol-0007",
        smiles="Oc1ccc(/N=N/c2ccccc2)cc1Cl",
        core="4-arylazophenol",
        substitution="2-Cl",
        pka=6.4312,
        pka_sd=0.1821,
        offset=0.0312,
        hit_probability=0.7149,
        steps=1,
        molar_mass_g_mol=232.6671,
        working_range_low=5.4312,
        working_range_high=7.4312,
        dpka_dt=-0.01172,
        front=True,
        layer=1,
        knee=True,
        score=0.6012,
        stability=0.93,
        measured_pka=6.5,
        measured_source="own",
        macroscopic_pkas=(6.43, 11.2),
        clogp=3.9,
        tpsa_a2=44.9,
        cautions=("azo dye",),
        notes=("remote group estimated",),
        route=Route("Oc1ccc(/N=N/c2ccccc2)cc1Cl", ("2-chlorophenol",), (AZO_STEP,)),
        other_targets=(OtherTarget(brief.also[0], 6.31, 0.2, 0.999),),
    )
    second = replace(
        first, rank=2, analog="x-2", substitution="2-F", smiles="Oc1ccc(/N=N/c2ccccc2)cc1F", front=False,
        knee=False, layer=2, offset=-0.31, pka=6.09, pka_sd=0.61, hit_probability=0.004, steps=2,
        measured_pka=nan, measured_source="", macroscopic_pkas=(), route=None, cautions=(), notes=(),
        other_targets=(),
    )  # fmt: skip
    third = replace(second, rank=3, analog="x-3", steps=0, front=True, layer=1, smiles="Oc1ccccc1",
                    route=Route("Oc1ccccc1", ("phenol",), (), ("bottle is old",)))  # fmt: skip
    fourth = replace(second, rank=4, smiles="Oc1ccccc1C", analog="x-4", substitution=HOSTILE, core=HOSTILE,
                     cautions=(HOSTILE,), notes=("=1+1",), offset=2.0, pka=8.4)  # fmt: skip
    return first, second, third, fourth


def sample_result() -> DesignResult:
    """The whole result."""
    candidates = sample_candidates()
    front = tuple(
        TradePoint(c.core, c.substitution, c.offset, c.steps, c.molar_mass_g_mol, True, c.rank)
        for c in candidates
        if c.front
    )
    cloud = tuple(
        TradePoint("4-arylazophenol", f"cloud {n}", -1.0 + 0.1 * n, n % 4, 200.0 + 5 * n, False)
        for n in range(21)
    )
    return DesignResult(
        brief=sample_brief(),
        candidates=candidates,
        spaces=(
            SpaceSummary("4-arylazophenol", "4-(phenylazo)phenol", (("2", 60), ("3", 41)), 2460, 1300, 700,
                         ("yellow", "orange")),
        ),
        front=front,
        cloud=cloud,
        method="exact",
        method_reason="The space is small enough to go through.",
        certificate="All 1300 analogs were evaluated.",
        counts=(("no route from the shelf", 600), ("more than 6 steps", 12)),
        notes=("the enthalpy was extrapolated",),
        campaign=Campaign(4, 5, 3, (("Oc1ccccc1Cl", 2),)),
        inputs=(InputFile("label.toml", "brief", "0" * 64),),
        library_version="abcdef012345",
        seed=1,
        timings_s=(("search", 1.23456),),
    )  # fmt: skip


def sample_exhibits() -> dict[str, Exhibit]:
    """Drawings, connection tables and flat response curves for all but the last candidate."""
    grid = ph_grid(6.4)
    block = "\n     invented\n\n  0  0  0  0  0  0  0  0  0  0999 V2000\nM  END\n"
    backdrop = "<rect style='fill:#FFFFFF'/>"
    drawing = f"<?xml version='1.0'?><svg width='10px' height='5px' viewBox='0 0 10 5'>{backdrop}</svg>"
    curve = tuple(0.5 for _ in grid)
    return {c.smiles: Exhibit(drawing, block, curve) for c in sample_candidates()[:3]}
