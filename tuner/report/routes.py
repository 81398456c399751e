"""How is a route told, on one line and step by step?"""

from __future__ import annotations

from dataclasses import dataclass

from tuner.synthesis.records import Route, Step

BOUGHT = "bought as it is"
NONE_FOUND = ""


@dataclass(frozen=True, slots=True)
class ToldStep:
    """One step in words."""

    number: int
    title: str
    reagents: str
    cautions: tuple[str, ...]
    note: str
    substrate: str
    product: str


def route_on_one_line(route: Route | None) -> str:
    """Starting materials, then each step with its reagents; empty where there is no route."""
    if route is None:
        return NONE_FOUND
    start = " + ".join(route.starting_materials)
    if not route.steps:
        return f"{start}: {BOUGHT}"
    return f"{start} > " + " > ".join(_step_words(step) for step in route.steps)


def told_steps(route: Route | None) -> tuple[ToldStep, ...]:
    """The steps in order, numbered from 1."""
    if route is None:
        return ()
    return tuple(
        ToldStep(
            number=n,
            title=step.title,
            reagents=", ".join(step.reagents),
            cautions=step.cautions,
            note=step.note,
            substrate=step.substrate,
            product=step.product,
        )
        for n, step in enumerate(route.steps, start=1)
    )


def _step_words(step: Step) -> str:
    """A step and its reagents."""
    return f"{step.title} ({', '.join(step.reagents)})" if step.reagents else step.title
