"""How do the best candidates answer to pH, and how sure is the place of each curve?"""

from __future__ import annotations

from collections.abc import Mapping
from math import isfinite

from tuner.report.digits import pka_text
from tuner.report.records import Exhibit, ph_grid
from tuner.report.svg import Scale, element, hover, picture, text, ticks
from tuner.search.result import Candidate, DesignResult

SHOWN = 6
"""Curves in the picture: more cannot be told apart."""

WIDTH, LEFT, RIGHT, TOP = 960.0, 70.0, 300.0, 26.0
PLOT_HEIGHT, ROW, STRIP_GAP, BOTTOM = 250.0, 24.0, 16.0, 52.0
NORMAL_90 = 1.645
"""Half width of a 90 % interval in standard errors of a normal distribution."""


def response_picture(result: DesignResult, exhibits: Mapping[str, Exhibit]) -> str:
    """Curves above, 90 % intervals of the transition below, on one pH axis; empty where no curve is known."""
    drawn = [c for c in result.candidates[:SHOWN] if exhibits.get(c.smiles, Exhibit()).response]
    if not drawn:
        return ""
    target = result.brief.target
    grid = ph_grid(target.ph)
    x = Scale(grid[0], grid[-1], LEFT, WIDTH - RIGHT)
    height = TOP + PLOT_HEIGHT + STRIP_GAP + ROW * len(drawn) + BOTTOM
    foot = height - BOTTOM
    parts = [_window(x, target.ph, target.tolerance, foot), _axes(x, foot)]
    for n, candidate in enumerate(drawn, start=1):
        parts.append(_curve(x, grid, exhibits[candidate.smiles].response, candidate, n))
    for n, candidate in enumerate(drawn, start=1):
        parts.append(_interval(x, candidate, n))
    label = "Ionised share against pH of the best candidates, with the target window"
    return picture("".join(parts), WIDTH, height, label, "figure response")


def _window(x: Scale, ph: float, tolerance: float, foot: float) -> str:
    """The target window behind everything."""
    low, high = x(ph - tolerance), x(ph + tolerance)
    return (
        element("rect", x=low, y=TOP, width=high - low, height=foot - TOP, class_="window")
        + element("line", x1=x(ph), x2=x(ph), y1=TOP, y2=foot, class_="target")
        + text("window", (low + high) / 2, TOP - 8, "tick", "middle")
    )


def _share_y(share: float) -> float:
    """Height of an ionised share."""
    return TOP + PLOT_HEIGHT * (1.0 - share)


def _axes(x: Scale, foot: float) -> str:
    """Shares to the left, pH below."""
    parts = []
    for share in (0.0, 0.25, 0.5, 0.75, 1.0):
        y = _share_y(share)
        parts.append(element("line", x1=x.start, x2=x.end, y1=y, y2=y, class_="grid"))
        parts.append(text(f"{100 * share:.0f} %", LEFT - 10, y + 4, "tick", "end"))
    for value in ticks(x.low, x.high):
        parts.append(element("line", x1=x(value), x2=x(value), y1=foot, y2=foot + 5, class_="rule"))
        parts.append(text(f"{value:g}".replace("-", "−"), x(value), foot + 20, "tick", "middle"))
    parts.append(element("line", x1=x.start, x2=x.end, y1=foot, y2=foot, class_="rule"))
    parts.append(text("pH", (x.start + x.end) / 2, foot + 42, "axis", "middle"))
    middle = TOP + PLOT_HEIGHT / 2
    parts.append(
        text("ionised share", 18, middle, "axis", "middle", transform=f"rotate(-90 18 {middle:.0f})")
    )
    return "".join(parts)


def _curve(x: Scale, grid: tuple[float, ...], shares: tuple[float, ...], candidate: Candidate, n: int) -> str:
    """One response curve."""
    points = " ".join(
        f"{x(ph):.1f},{_share_y(share):.1f}"
        for ph, share in zip(grid, shares, strict=True)
        if isfinite(share)
    )
    words = f"rank {candidate.rank}: {candidate.substitution} on {candidate.core}"
    return element("polyline", hover(words), points=points, class_=f"curve c{n}")


def _interval(x: Scale, candidate: Candidate, n: int) -> str:
    """The 90 % interval of one transition, with its name to the right."""
    y = TOP + PLOT_HEIGHT + STRIP_GAP + ROW * (n - 0.5)
    spread = NORMAL_90 * candidate.pka_sd if isfinite(candidate.pka_sd) else 0.0
    ends = [min(max(candidate.pka + sign * spread, x.low), x.high) for sign in (-1, 1)]
    parts = [
        element("line", x1=x(ends[0]), x2=x(ends[1]), y1=y, y2=y, class_=f"interval c{n}"),
        text(f"{candidate.rank}", x.end + 14, y + 4, f"name c{n}"),
        text(_short(candidate.substitution), x.end + 34, y + 4, "tick"),
        text(pka_text(candidate.pka, candidate.pka_sd), WIDTH - 6, y + 4, "tick", "end"),
    ]
    if x.holds(candidate.pka):
        parts.append(element("circle", cx=x(candidate.pka), cy=y, r=4.2, class_=f"dot c{n}"))
    return "".join(parts)


def _short(words: str, most: int = 24) -> str:
    """Words cut to what fits."""
    return words if len(words) <= most else words[: most - 1] + "…"
