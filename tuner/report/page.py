"""How does a run look on one page that opens without a network?"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import isfinite
from string import ascii_lowercase
from typing import Any

from tuner import __version__
from tuner.report import digits
from tuner.report.figure_response import SHOWN, response_picture
from tuner.report.figure_ruler import ruler_picture
from tuner.report.figure_trade import trade_caption, trade_picture
from tuner.report.records import Exhibit
from tuner.report.routes import ToldStep, told_steps
from tuner.report.svg import themed
from tuner.report.wording import (
    CAUTIONS,
    HOW_SURE,
    anchor_in_words,
    medium_in_words,
    target_in_words,
)
from tuner.search.result import Candidate, DesignResult

CARDS = 10
"""Candidates that get a card with their route."""

TEMPLATE = "page.html.j2"


@dataclass(frozen=True, slots=True)
class Shown:
    """One candidate as the page writes it: text only, and drawings that are safe to put in."""

    rank: int
    analog: str
    smiles: str
    core: str
    substitution: str
    drawing: Any
    pka: str
    offset: str
    hit: str
    hit_share: str
    steps: int
    mass: str
    working_range: str
    drift: str
    front: bool
    knee: bool
    stability: str
    measured: str
    cautions: tuple[str, ...]
    letters: str
    own_cautions: tuple[str, ...]
    notes: tuple[str, ...]
    others: tuple[tuple[str, str], ...]
    starting: tuple[str, ...]
    route: tuple[ToldStep, ...]
    route_notes: tuple[str, ...]
    has_route: bool
    makes: tuple[Any, ...]


def page(result: DesignResult, exhibits: Mapping[str, Exhibit]) -> bytes:
    """The whole page as one HTML file: styles and pictures inside, no script, nothing to load.

    Parameters
    ----------
    result : DesignResult
    exhibits : drawings and response curves by SMILES; what is missing is left out
    """
    from jinja2 import Environment, PackageLoader, StrictUndefined
    from markupsafe import Markup

    environment = Environment(
        loader=PackageLoader("tuner.report"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    letters = caution_letters(result)
    shown = [_shown(c, exhibits, letters, Markup) for c in result.candidates]
    html = environment.get_template(TEMPLATE).render(
        result=result,
        brief=result.brief,
        version=__version__,
        verdict=_verdict(result),
        target=_sentence(target_in_words(result.brief.target)),
        medium=medium_in_words(result.brief.target.medium),
        further=[
            (t.name or "further target", target_in_words(t), medium_in_words(t.medium))
            for t in result.brief.also
        ],
        anchor=anchor_in_words(result.brief),
        ruler=Markup(ruler_picture(result)),
        trade=Markup(trade_picture(result)),
        trade_caption=trade_caption(result),
        response=Markup(response_picture(result, exhibits)),
        curves=min(SHOWN, len(shown)),
        candidates=shown,
        cards=shown[:CARDS],
        spaces=_spaces(result),
        counts=[(what, digits.count(n)) for what, n in result.counts],
        shared=_shared(result, exhibits, Markup),
        lettered=[(letter, caution) for caution, letter in letters.items()],
        cautions=CAUTIONS,
        how_sure=HOW_SURE,
    )
    return html.encode("utf-8")


def _drawing(smiles: str, exhibits: Mapping[str, Exhibit], markup: Any) -> Any:
    """A drawing for the page; empty where there is none."""
    exhibit = exhibits.get(smiles)
    return markup(themed(exhibit.svg)) if exhibit and exhibit.svg else ""


def caution_letters(result: DesignResult) -> dict[str, str]:
    """Each caution of the run -> its letter (a, b ... z, then aa, ab ...), in order of first appearance."""
    seen = dict.fromkeys(caution for c in result.candidates for caution in c.cautions)
    signs = [*ascii_lowercase, *(a + b for a in ascii_lowercase for b in ascii_lowercase)]
    return dict(zip(seen, signs, strict=False))


def _shown(
    candidate: Candidate, exhibits: Mapping[str, Exhibit], letters: Mapping[str, str], markup: Any
) -> Shown:
    """A candidate in the words and digits of the page."""
    c = candidate
    steps = told_steps(c.route)
    on_the_way = {text for step in steps for text in step.cautions}
    step_notes = {step.note for step in steps}
    return Shown(
        rank=c.rank,
        analog=c.analog,
        smiles=c.smiles,
        core=c.core,
        substitution=c.substitution,
        drawing=_drawing(c.smiles, exhibits, markup),
        pka=digits.pka_text(c.pka, c.pka_sd),
        offset=digits.signed(c.offset),
        hit=digits.percent(c.hit_probability),
        hit_share=f"{100.0 * c.hit_probability:.0f}" if isfinite(c.hit_probability) else "0",
        steps=c.steps,
        mass=digits.mass(c.molar_mass_g_mol),
        working_range=f"{c.working_range_low:.1f} – {c.working_range_high:.1f}",
        drift=digits.drift(c.dpka_dt),
        front=c.front,
        knee=c.knee,
        stability=digits.percent(c.stability) if isfinite(c.stability) else "",
        measured=f"{c.measured_pka:.2f} ({c.measured_source})" if isfinite(c.measured_pka) else "",
        cautions=c.cautions,
        own_cautions=tuple(text for text in c.cautions if text not in on_the_way),
        letters=" ".join(letters.get(caution, "") for caution in c.cautions),
        notes=tuple(n for n in c.notes if c.route is None or n not in c.route.notes),
        others=tuple(
            (t.target.name or target_in_words(t.target), digits.percent(t.probability))
            for t in c.other_targets
        ),
        starting=c.route.starting_materials if c.route else (),
        route=steps,
        route_notes=tuple(n for n in c.route.notes if n not in step_notes) if c.route else (),
        has_route=c.route is not None,
        makes=tuple(_drawing(step.product, exhibits, markup) for step in steps),
    )


def _sentence(words: str) -> str:
    """Words with a capital at the start and nothing else changed."""
    return words[:1].upper() + words[1:]


def _verdict(result: DesignResult) -> str:
    """The outcome in one sentence."""
    if not result.candidates:
        return "No analog meets the brief."
    best = result.candidates[0]
    name = f"{best.substitution} on {best.core}"
    made = (
        "bought as it is" if best.steps == 0 else f"{best.steps} step{'s' * (best.steps > 1)} from the shelf"
    )
    return (
        f"First choice: {name}, pKa′ {digits.pka_text(best.pka, best.pka_sd)}, "
        f"{digits.percent(best.hit_probability)} chance to fall in the window, {made}."
    )


def _spaces(result: DesignResult) -> list[dict[str, str]]:
    """What was searched, core by core."""
    return [
        {
            "title": space.title,
            "colours": " → ".join(space.colours) if any(space.colours) else digits.MISSING,
            "positions": digits.choices_in_words(space.positions),
            "patterns": digits.count(space.patterns),
            "analogs": digits.count(space.analogs),
            "makeable": digits.count(space.makeable) if space.makeable >= 0 else digits.MISSING,
        }
        for space in result.spaces
    ]


def _shared(result: DesignResult, exhibits: Mapping[str, Exhibit], markup: Any) -> list[dict[str, Any]]:
    """Intermediates through which several candidates pass."""
    shared = result.campaign.shared if result.campaign else ()
    return [{"smiles": s, "times": n, "drawing": _drawing(s, exhibits, markup)} for s, n in shared]
