"""The value of each run and the average beside a limit, as bars from zero and the limit as a line."""

from __future__ import annotations

from dataclasses import dataclass

from reporter.output import svg
from reporter.output.scale import Axis, ticks
from reporter.output.svg import Attributes, Style

_ROW = 11.5
_TOP = 12.0


@dataclass(frozen=True, slots=True)
class Bar:
    """One value: its name, the rounded value as text, and whether it counts in the average."""

    label: str
    value: float
    text: str
    counts: bool = True


@dataclass(frozen=True, slots=True)
class ComparisonBars:
    """Runs, their average (None where none is formed) and a limit (None where none is compared).

    `limit_text` is printed at the line, e.g. ``limit: at most 30``; `unit` behind the axis.
    """

    runs: tuple[Bar, ...]
    average: Bar | None
    limit: float | None
    limit_text: str
    unit: str

    def ends(self) -> tuple[float, float]:
        """The ends of the axis: from zero, or below it where a value is negative, with some room above."""
        values = [bar.value for bar in self.runs]
        values += [] if self.average is None else [self.average.value]
        values += [] if self.limit is None else [self.limit]
        low, high = min(0.0, *values, 0.0), max(0.0, *values, 0.0)
        room = (high - low) * 0.06 or 1.0
        return (low - room if low < 0 else 0.0), high + room


def comparison_bars(bars: ComparisonBars, style: Style | None = None, *, title: str) -> str:
    """One row per run and one for the average: name, value, bar, as one SVG."""
    look = style or Style()
    rows = [*bars.runs, *(() if bars.average is None else (bars.average,))]
    names = max((svg.text_width(bar.label, look.size) for bar in rows), default=0.0)
    texts = max(svg.text_width(text, look.size) for text in (bars.unit, *(bar.text for bar in rows)))
    values = names + 12 + texts
    axis = Axis(*bars.ends(), values + 14, look.width - 10)
    bottom = _TOP + _ROW * len(rows) + 1
    parts = [_axis(axis, bottom, look)]
    parts.append(svg.label(values, bottom + 8.5, bars.unit, text_anchor="end", fill=look.muted))
    for index, bar in enumerate(rows):
        top = _TOP + _ROW * index
        parts.append(_words(bar, values, top, look, average=bar is bars.average))
        parts.append(_bar(bar, axis, top, look, average=bar is bars.average))
    parts.append(svg.line((axis.at(0), _TOP - 2), (axis.at(0), bottom), stroke=look.ink, stroke_width=0.6))
    parts.append(_limit(bars, axis, bottom, look))
    return svg.document(look.width, bottom + 11, title, "".join(parts), look)


def _axis(axis: Axis, bottom: float, look: Style) -> str:
    marks = ticks(axis.low, axis.high, 5)
    parts = []
    for value in marks.values:
        x = axis.at(value)
        parts.append(svg.line((x, _TOP - 2), (x, bottom), stroke=look.rule, stroke_width=0.5))
        parts.append(svg.label(x, bottom + 8.5, marks.text(value), text_anchor="middle", fill=look.muted))
    return "".join(parts)


def _words(bar: Bar, values: float, top: float, look: Style, *, average: bool) -> str:
    set_as: Attributes = {
        "font_weight": 600 if average else 400,
        "fill": look.ink if bar.counts else look.muted,
    }
    baseline = top + _ROW / 2 + look.size * 0.34
    name = svg.label(0, baseline, bar.label, **set_as)
    return name + svg.label(values, baseline, bar.text, text_anchor="end", **set_as)


def _bar(bar: Bar, axis: Axis, top: float, look: Style, *, average: bool) -> str:
    thickness = 7.0 if average else 5.0
    left, right = sorted((axis.at(0), axis.at(bar.value)))
    place = (left, top + (_ROW - thickness) / 2, right - left, thickness)
    if not bar.counts:
        return svg.rectangle(*place, fill=look.paper, stroke=look.grey, stroke_width=0.6)
    return svg.rectangle(*place, fill=look.accent if average else look.grey)


def _limit(bars: ComparisonBars, axis: Axis, bottom: float, look: Style) -> str:
    if bars.limit is None:
        return ""
    x = axis.at(bars.limit)
    before = x > (axis.start + axis.end) / 2
    words = svg.label(
        x + (-4 if before else 4),
        _TOP - 4,
        bars.limit_text,
        text_anchor="end" if before else "start",
        font_weight=600,
    )
    return svg.line((x, _TOP - 10), (x, bottom), stroke=look.ink, stroke_width=1.4) + words


def comparison_strip(bars: ComparisonBars, style: Style | None = None, *, title: str) -> str:
    """The same in one line for a table cell: average as bar, runs as ticks, limit as line; no words."""
    look = style or Style(width=120.0)
    low, high = bars.ends()
    axis = Axis(low, high, 1.0, look.width - 1)
    zero = axis.at(0)
    parts = [svg.rectangle(1, 3.5, look.width - 2, 5, fill=look.band)]
    if bars.average is not None:
        x = axis.at(bars.average.value)
        parts.append(svg.rectangle(min(zero, x), 3.5, abs(x - zero), 5, fill=look.accent, fill_opacity=0.45))
    for bar in bars.runs:
        x = axis.at(bar.value)
        dash: Attributes = {} if bar.counts else {"stroke_dasharray": "1 1"}
        parts.append(svg.line((x, 2.5), (x, 9.5), stroke=look.ink, stroke_width=0.7, **dash))
    if bars.limit is not None:
        x = axis.at(bars.limit)
        parts.append(svg.line((x, 0), (x, 12), stroke=look.ink, stroke_width=1.6))
    return svg.document(look.width, 12, title, "".join(parts), look)
