"""SVG elements as text: the few shapes the charts are made of.  One user unit is one point."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from html import escape

from reporter.output.chart_words import ChartWords

Point = tuple[float, float]
Attributes = dict[str, str | float]
_FORBIDDEN = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
_NARROW = frozenset(" .,:;'|!()[]ijlIft")
_WIDE = frozenset("mwMWGOQ%@ΔΣ")
_LOWERED = frozenset("₀₁₂₃₄₅₆₇₈₉ₓ")


@dataclass(frozen=True, slots=True)
class Style:
    """Colours, typeface, width [pt] and words of a chart; the defaults are those of the report's style sheet.

    The renderer does not hand a page's typeface or variables down into a picture, so they are given here.
    """

    accent: str = "#1b5e8c"
    ink: str = "#20262c"
    muted: str = "#69727b"
    grey: str = "#a3abb3"
    rule: str = "#dde1e5"
    band: str = "#eef1f4"
    paper: str = "#ffffff"
    font: str = "Source Sans Pro"
    size: float = 7.0
    width: float = 500.0
    words: ChartWords = field(default_factory=ChartWords)


def number(value: float) -> str:
    """A coordinate with at most two decimals."""
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def escaped(text: str) -> str:
    """Text that is only text in XML; characters XML does not know are left out."""
    return escape(_FORBIDDEN.sub("", text))


def text_width(text: str, size: float) -> float:
    """About how wide a text is set [pt]."""
    return size * sum(_share(c) for c in text)


def _share(char: str) -> float:
    if char in _NARROW:
        return 0.28
    if char in _WIDE:
        return 0.8
    if char in _LOWERED:
        return 0.36
    return 0.6 if char.isupper() else 0.51


def element(tag: str, content: str = "", /, **attributes: str | float) -> str:
    """One element; an underscore in an attribute's name stands for a hyphen."""
    parts = [tag]
    for name, value in attributes.items():
        shown = escaped(value) if isinstance(value, str) else number(value)
        parts.append(f'{name.rstrip("_").replace("_", "-")}="{shown}"')
    head = " ".join(parts)
    return f"<{head}>{content}</{tag}>" if content else f"<{head}/>"


def label(x: float, y: float, text: str, **attributes: str | float) -> str:
    """Text at a place; `text_anchor` as in SVG."""
    return element("text", escaped(text), x=x, y=y, **attributes) if text else ""


def line(a: Point, b: Point, **attributes: str | float) -> str:
    """A straight line."""
    return element("path", d=path_data([[a, b]]), **attributes)


def path_data(lines: Iterable[Sequence[Point]]) -> str:
    """Path data of open polylines; a single point becomes a short dash, so that it is seen."""
    parts: list[str] = []
    for points in lines:
        if len(points) == 1:
            x, y = points[0]
            points = [(x - 0.5, y), (x + 0.5, y)]
        for index, (x, y) in enumerate(points):
            parts.append(f"{'L' if index else 'M'}{number(x)} {number(y)}")
    return "".join(parts)


def polygon_data(points: Sequence[Point]) -> str:
    """Path data of a closed outline."""
    return path_data([points]) + "Z"


def rectangle(x: float, y: float, width: float, height: float, **attributes: str | float) -> str:
    """A rectangle."""
    return element("rect", x=x, y=y, width=width, height=height, **attributes)


def hatch_data(x: float, y: float, width: float, height: float, step: float = 3.5) -> str:
    """Path data of 45° hatching inside a rectangle (drawn out, so that no pattern needs a name)."""
    lines: list[list[Point]] = []
    first = int((x + y) // step) + 1
    for index in range(first, int((x + width + y + height) // step) + 1):
        total = index * step
        left = max(x, total - y - height)
        right = min(x + width, total - y)
        if right > left:
            lines.append([(left, total - left), (right, total - right)])
    return path_data(lines)


def circle(x: float, y: float, radius: float, **attributes: str | float) -> str:
    """A circle."""
    return element("circle", cx=x, cy=y, r=radius, **attributes)


def triangle(x: float, y: float, radius: float, **attributes: str | float) -> str:
    """A triangle with its point up, of about the weight of a circle of that radius."""
    low, side = y + radius * 0.85, radius * 1.15
    return element("path", d=polygon_data([(x, y - radius * 1.25), (x + side, low), (x - side, low)]), **attributes)


def diamond(x: float, y: float, radius: float, **attributes: str | float) -> str:
    """A square on its corner, of about the weight of a circle of that radius."""
    r = radius * 1.25
    return element("path", d=polygon_data([(x, y - r), (x + r, y), (x, y + r), (x - r, y)]), **attributes)


def window(x: float, y: float, width: float, height: float, content: str) -> str:
    """Content clipped to a rectangle, in the same coordinates."""
    view = " ".join(number(v) for v in (x, y, width, height))
    return element("svg", content, x=x, y=y, width=width, height=height, viewBox=view) if content else ""


def document(width: float, height: float, title: str, content: str, style: Style) -> str:
    """The whole picture; `title` is its text alternative."""
    size = f'width="{number(width)}pt" height="{number(height)}pt"'
    view = f'viewBox="0 0 {number(width)} {number(height)}"'
    group = element("g", content, font_family=style.font, font_size=style.size, fill=style.ink, stroke="none")
    name = f"<title>{escaped(title)}</title>"
    return f'<svg xmlns="http://www.w3.org/2000/svg" role="img" {size} {view}>{name}{group}</svg>'
