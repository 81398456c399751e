"""Where does each analog stand between closeness to the target, steps and molar mass?

One band per number of steps. Across: how far the transition lies from the target. Within a band, and by the
size of the mark: the molar mass. So the three objectives are seen at once and analogs with equal steps do
not hide one another.
"""

from __future__ import annotations

from tuner.report.columns import shown_pka
from tuner.report.digits import mass, signed
from tuner.report.svg import Scale, element, hover, picture, text, ticks
from tuner.report.wording import closeness_in_words
from tuner.search.result import DesignResult, TradePoint

WIDTH, LEFT, RIGHT, TOP, BOTTOM = 960.0, 92.0, 96.0, 34.0, 58.0
BAND, BAND_MARGIN = 84.0, 11.0
SMALLEST, LARGEST = 2.6, 7.0  # radius of a mark, pixels
LABELLED_RANKS = 12
MIN_HALF_WIDTH, WINDOWS_SHOWN = 0.8, 3.0  # pKa units; in tolerances
LABEL_GAP_X, LABEL_GAP_Y = 20.0, 11.0


class _Frame:
    """The axes of one picture."""

    def __init__(self, result: DesignResult, points: tuple[TradePoint, ...]) -> None:
        tolerance = result.brief.target.tolerance
        half = max(MIN_HALF_WIDTH, WINDOWS_SHOWN * tolerance)
        listed = [abs(p.offset) for p in points if p.front or p.rank]
        if listed:
            half = max(half, min(max(listed) * 1.08, 3.0 * half))
        self.shown = tuple(p for p in points if abs(p.offset) <= half)
        self.bands = range(max((p.steps for p in self.shown), default=0) + 1)
        self.height = TOP + BAND * len(self.bands) + BOTTOM
        self.x = Scale(-half, half, LEFT, WIDTH - RIGHT)
        masses = [p.molar_mass_g_mol for p in self.shown] or [0.0, 1.0]
        low, high = min(masses), max(masses)
        self.masses = (low, high if high > low else low + 1.0)
        self.radius = Scale(*self.masses, SMALLEST, LARGEST)
        self.tolerance = tolerance

    def band_top(self, steps: int) -> float:
        """Upper edge of a band; no step at the bottom."""
        return TOP + BAND * (len(self.bands) - 1 - steps)

    def y(self, point: TradePoint) -> float:
        """Height of a mark within its band: light analogs low."""
        top = self.band_top(point.steps)
        return Scale(*self.masses, top + BAND - BAND_MARGIN, top + BAND_MARGIN)(point.molar_mass_g_mol)


def trade_picture(result: DesignResult) -> str:
    """The picture as an SVG element; empty where there is nothing to show."""
    points = _points(result)
    if not points:
        return ""
    frame = _Frame(result, points)
    parts = [_bands(frame), _axis(frame, result.brief.target.ph)]
    parts += [_mark(frame, p) for p in frame.shown if not p.front and not p.rank]
    parts += [_mark(frame, p) for p in frame.shown if not p.front and p.rank]
    parts += [_mark(frame, p) for p in frame.shown if p.front]
    parts.append(_rank_labels(frame))
    label = "Trade-off between distance from the target pH, number of steps and molar mass"
    return picture("".join(parts), WIDTH, frame.height, label, "figure trade")


def _points(result: DesignResult) -> tuple[TradePoint, ...]:
    """Backdrop, then listed candidates that are not on the front, then the front."""
    listed = (
        TradePoint(
            c.core,
            c.substitution,
            shown_pka(c) - result.brief.target.ph,
            c.steps,
            c.molar_mass_g_mol,
            False,
            c.rank,
        )
        for c in result.candidates
        if not c.front
    )
    return (*result.cloud, *listed, *result.front)


def _bands(frame: _Frame) -> str:
    """One band per step count, the target window across all of them."""
    parts = []
    for steps in frame.bands:
        top = frame.band_top(steps)
        shade = "band even" if steps % 2 == 0 else "band odd"
        parts.append(element("rect", x=LEFT, y=top, width=WIDTH - LEFT - RIGHT, height=BAND, class_=shade))
        parts.append(text(f"{steps}", LEFT - 14, top + BAND / 2 + 6, "tick big", "end"))
        for value, y in ((frame.masses[1], top + 14), (frame.masses[0], top + BAND - 6)):
            parts.append(text(f"{mass(value)} g/mol", WIDTH - RIGHT + 10, y, "tick faint"))
    low, high = frame.x(-frame.tolerance), frame.x(frame.tolerance)
    depth = BAND * len(frame.bands)
    parts.append(element("rect", x=low, y=TOP, width=high - low, height=depth, class_="window"))
    parts.append(element("line", x1=frame.x(0), x2=frame.x(0), y1=TOP, y2=TOP + depth, class_="target"))
    parts.append(text("window", (low + high) / 2, TOP - 10, "tick", "middle"))
    middle = TOP + depth / 2
    parts.append(
        text("steps from the shelf", 26, middle, "axis", "middle", transform=f"rotate(-90 26 {middle:.0f})")
    )
    return "".join(parts)


def _axis(frame: _Frame, target_ph: float) -> str:
    """Distance from the target below, with the pH it means."""
    base = TOP + BAND * len(frame.bands)
    parts = []
    for value in ticks(frame.x.low, frame.x.high):
        x = frame.x(value)
        parts.append(element("line", x1=x, x2=x, y1=base, y2=base + 5, class_="rule"))
        parts.append(text(signed(value, 1), x, base + 20, "tick", "middle"))
    words = f"transition pH less target (pH units; 0 is pH {target_ph:g})"
    parts.append(text(words, (LEFT + WIDTH - RIGHT) / 2, base + 44, "axis", "middle"))
    return "".join(parts)


def _mark(frame: _Frame, point: TradePoint) -> str:
    """One analog."""
    kind = "front" if point.front else "listed" if point.rank else "cloud"
    rank = f"rank {point.rank}: " if point.rank else ""
    words = (
        f"{rank}{point.substitution} on {point.core}, {signed(point.offset)} pH, "
        f"{point.steps} steps, {mass(point.molar_mass_g_mol)} g/mol"
    )
    return element(
        "circle",
        hover(words) if kind != "cloud" else "",
        cx=frame.x(point.offset),
        cy=frame.y(point),
        r=frame.radius(point.molar_mass_g_mol),
        class_=f"mark {kind}",
    )


def _rank_labels(frame: _Frame) -> str:
    """Rank beside the first marks, where there is room."""
    taken: list[tuple[float, float]] = []
    parts = []
    for point in sorted((p for p in frame.shown if 0 < p.rank <= LABELLED_RANKS), key=lambda p: p.rank):
        x = frame.x(point.offset) + frame.radius(point.molar_mass_g_mol) + 3
        y = frame.y(point) + 4
        if any(abs(x - a) < LABEL_GAP_X and abs(y - b) < LABEL_GAP_Y for a, b in taken):
            continue
        taken.append((x, y))
        parts.append(text(str(point.rank), x, y, "rank"))
    return "".join(parts)


def trade_caption(result: DesignResult) -> str:
    """What the picture shows, in words."""
    points = _points(result)
    hidden = len(points) - len(_Frame(result, points).shown) if points else 0
    words = (
        f"Filled: the {len(result.front)} analogs on the front, which nothing beats in all three at once. "
        "Rings: other listed analogs. Dots: a sample of the rest. Numbers are ranks. "
        "Within each band heavier analogs stand higher and are drawn larger."
    )
    if worst := closeness_in_words(result.brief):
        words += f" On the front {worst}; the picture shows the first."
    return words + (f" {hidden} marks lie outside the picture." if hidden else "")
