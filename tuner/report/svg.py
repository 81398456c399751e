"""How is a picture written as SVG that follows the page's colours?"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from math import ceil, floor, log10
from xml.sax.saxutils import escape, quoteattr

DECLARATION = re.compile(r"<\?xml[^>]*\?>|<!DOCTYPE[^>]*>|<!--.*?-->", re.DOTALL)
BACKDROP = re.compile(
    r"<rect[^>]*(?:fill:\s*#FFFFFF|fill=['\"]#?(?:FFFFFF|white)['\"])[^>]*(?:/>|>\s*</rect>)", re.I
)
BLACK = re.compile(r"#000000|(?<=[:'\"])black\b", re.I)
VIEW = re.compile(r"viewBox=('[^']*'|\"[^\"]*\")")
PATH = re.compile(r"<path(?:\s+class='[^']*')?\s+d='([^']*)'\s*([^>]*?)\s*(?:/>|>\s*</path>)")
SIZE = re.compile(r"(<svg\b[^>]*?)\s(?:width|height)=['\"][^'\"]*['\"]")


@dataclass(frozen=True, slots=True)
class Scale:
    """A straight line from data to pixels."""

    low: float
    high: float
    start: float
    end: float

    def __call__(self, value: float) -> float:
        """Pixel of a value."""
        span = self.high - self.low
        return self.start + (value - self.low) / span * (self.end - self.start) if span else self.start

    def holds(self, value: float) -> bool:
        """Whether the value, in the unit of the axis, lies on it."""
        return self.low <= value <= self.high


def ticks(low: float, high: float, wanted: int = 8) -> tuple[float, ...]:
    """Round numbers within [low, high], about as many as wanted.

    >>> ticks(-1.0, 1.0, 4)
    (-1.0, -0.5, 0.0, 0.5, 1.0)
    """
    if not high > low:
        return (low,)
    raw = (high - low) / wanted
    power = 10.0 ** floor(log10(raw))
    step = next(power * m for m in (1.0, 2.0, 5.0, 10.0) if power * m >= raw * 0.999)
    first, last = ceil(low / step - 1e-9), floor(high / step + 1e-9)
    return tuple(round(i * step, 10) + 0.0 for i in range(first, last + 1))


def element(name: str, content: str = "", **attributes: object) -> str:
    """An element; `class_` gives class, underscores in names become hyphens, numbers get one decimal."""
    parts = [name]
    for key, value in attributes.items():
        shown = f"{value:.1f}" if isinstance(value, float) else str(value)
        parts.append(f"{key.rstrip('_').replace('_', '-')}={quoteattr(shown)}")
    opening = " ".join(parts)
    return f"<{opening}>{content}</{name}>" if content else f"<{opening}/>"


def text(words: str, x: float, y: float, class_: str = "", anchor: str = "start", **more: object) -> str:
    """A line of text at (x, y) [pixels], escaped."""
    return element("text", escape(words), x=x, y=y, class_=class_, text_anchor=anchor, **more)


def hover(words: str) -> str:
    """A title that shows when the pointer rests on the element around it."""
    return element("title", escape(words))


def picture(content: str, width: float, height: float, label: str, class_: str) -> str:
    """The whole picture of width x height [pixels], scalable, with words for those who cannot see it."""
    return (
        f'<svg xmlns="http://www.w3.org/2000/svg" class={quoteattr(class_)} '
        f'viewBox="0 0 {width:.0f} {height:.0f}" role="img" aria-label={quoteattr(label)}>{content}</svg>'
    )


def themed(svg: str) -> str:
    """A structure drawing for the page: without declaration and white backdrop, black turned into the page's
    ink, its size left to the page (the drawing's own units, px, stay in its viewBox), and lines of one style
    joined, which makes it a third as long.
    """
    bare = BACKDROP.sub("", DECLARATION.sub("", svg))
    bare = BLACK.sub("currentColor", bare)
    while SIZE.search(bare):
        bare = SIZE.sub(r"\1", bare)
    head, _, body = bare.strip().partition(">")
    view = VIEW.search(head)
    opening = f"<svg viewBox={view.group(1)}" if view else head
    return f"{opening}>{_joined(body)}"


def _joined(body: str) -> str:
    """Neighbouring paths that are alike in all but their course, as one path."""
    parts: list[str] = []
    held: tuple[str, str] | None = None  # course and look of the path that may still grow
    for piece in _pieces(body):
        if isinstance(piece, tuple):
            course, look = piece
            if held is not None and held[1] == look:
                held = (f"{held[0]} {course}", look)
                continue
            parts += _path(held)
            held = piece
        elif piece.strip():
            parts += _path(held)
            held = None
            parts.append(piece.strip())
    return "".join([*parts, *_path(held)])


def _pieces(body: str) -> Iterator[str | tuple[str, str]]:
    """Paths as (course, look), whatever stands between them as text."""
    end = 0
    for match in PATH.finditer(body):
        yield body[end : match.start()]
        yield match.group(1), match.group(2).strip()
        end = match.end()
    yield body[end:]


def _path(held: tuple[str, str] | None) -> list[str]:
    """A path as an element; none where none is held."""
    return [f"<path d='{held[0]}' {held[1]}/>"] if held else []
