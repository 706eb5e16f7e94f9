"""The key below a chart: small samples with their words, wrapped to the width."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from reporter.output import svg
from reporter.output.svg import Style

#: Draws a sample whose left end and middle height are given.
Sample = Callable[[float, float], str]
Key = tuple[Sample, str]

_SAMPLE, _GAP, _LINE = 11.0, 12.0, 10.0


def key_rows(keys: Sequence[Key], left: float, top: float, look: Style) -> tuple[str, float]:
    """The samples with their words in rows, and the height they take."""
    if not keys:
        return "", 2.0
    x, y = left, top + 8
    parts = []
    for draw, words in keys:
        width = _SAMPLE + 4 + svg.text_width(words, look.size)
        if x + width > look.width and x > left:
            x, y = left, y + _LINE
        parts.append(draw(x, y - look.size * 0.34))
        parts.append(svg.label(x + _SAMPLE + 4, y, words, fill=look.muted))
        x += width + _GAP
    return "".join(parts), y - top + 4


def stroke(colour: str, **attributes: str | float) -> Sample:
    """A sample of a line."""
    return lambda x, y: svg.line((x, y), (x + _SAMPLE, y), stroke=colour, **attributes)


def filled(colour: str) -> Sample:
    """A sample of an area."""
    return lambda x, y: svg.rectangle(x, y - 3, _SAMPLE, 6, fill=colour)


def framed(look: Style) -> Sample:
    """A sample of an area in a broken frame."""
    frame: svg.Attributes = {"stroke": look.grey, "stroke_width": 0.6, "stroke_dasharray": "2 1.5"}
    return lambda x, y: svg.rectangle(x, y - 3, _SAMPLE, 6, fill=look.paper, **frame)


def hatched(colour: str) -> Sample:
    """A sample of hatching."""
    return lambda x, y: svg.element("path", d=svg.hatch_data(x, y - 3, _SAMPLE, 6), stroke=colour, stroke_width=0.5)
