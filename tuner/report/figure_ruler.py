"""Where on the pH scale do the first candidates switch?"""

from __future__ import annotations

from math import ceil, floor

from tuner.report.columns import shown_pka
from tuner.report.digits import pka_text
from tuner.report.svg import Scale, element, hover, picture, text
from tuner.search.result import DesignResult

WIDTH, HEIGHT, MARGIN = 960.0, 74.0, 20.0
LINE = 40.0
SHOWN = 20
HALF_WIDTH = 3.0
"""pH units to either side of the target, so that single pins can be told apart."""


def ruler_picture(result: DesignResult) -> str:
    """A ruler of whole pH units with the window and one tick per candidate."""
    target = result.brief.target
    shown = result.candidates[:SHOWN]
    values = [target.ph - target.tolerance, target.ph + target.tolerance]
    low, high = floor(target.ph - HALF_WIDTH), ceil(target.ph + HALF_WIDTH)
    x = Scale(low, high, MARGIN, WIDTH - MARGIN)
    parts = [
        element(
            "rect",
            x=x(values[0]),
            y=12.0,
            width=x(values[1]) - x(values[0]),
            height=LINE - 12,
            class_="window",
        ),
        element("line", x1=x.start, x2=x.end, y1=LINE, y2=LINE, class_="rule"),
    ]
    for tenth in range(10 * low, 10 * high + 1):
        whole, half = tenth % 10 == 0, tenth % 5 == 0
        depth = 9.0 if whole else 6.0 if half else 3.0
        place = x(tenth / 10)
        parts.append(element("line", x1=place, x2=place, y1=LINE, y2=LINE + depth, class_="rule thin"))
        if whole:
            parts.append(text(f"{tenth // 10}".replace("-", "−"), place, LINE + 24, "tick", "middle"))
    for candidate in reversed(shown):
        pka = shown_pka(candidate)
        if x.holds(pka):
            words = f"rank {candidate.rank}: pKa′ {pka_text(candidate.pka, candidate.pka_sd)}"
            parts.append(
                element(
                    "line",
                    hover(words),
                    x1=x(pka),
                    x2=x(pka),
                    y1=18.0,
                    y2=LINE,
                    class_="pin first" if candidate.rank == 1 else "pin",
                )
            )
    return picture("".join(parts), WIDTH, HEIGHT, "pH scale with the target window", "figure ruler")
