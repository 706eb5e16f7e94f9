"""One panel of a trace chart: layers of lines, marks and words on one value axis."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reporter.output import svg
from reporter.output.scale import Axis, TimeAxis, padded, thinned, ticks, unbroken
from reporter.output.svg import Attributes, Style
from reporter.output.trace_model import MarkKind, TimedValue, Trace

#: Room for the value labels left of the plot [pt].
LEFT = 30.0
MEAN_LINE: Attributes = {"stroke_width": 0.7, "stroke_dasharray": "2 1.4"}
LIMIT_LINE: Attributes = {"stroke_width": 1.1, "stroke_dasharray": "6 2.5"}
# Height of the lane of run names [pt].
_LANE = 11.0
# A series of more readings is thinned to one envelope per this width [pt].
_MANY, _THIN = 2000, 0.7


@dataclass(frozen=True, slots=True)
class TracePanel:
    """One panel on its place; `top` and `height` are those of its plot [pt]."""

    trace: Trace
    times: TimeAxis
    top: float
    height: float
    look: Style

    @property
    def bottom(self) -> float:
        """The lower edge of the plot."""
        return self.top + self.height

    def draw(self) -> str:
        """All layers, from the back to the front."""
        axis = self.axis()
        frame = (self.times.start, self.top, self.times.end - self.times.start, self.height)
        layers = [self.bands(), self.rules(axis), self.exclusions()]
        layers.append(svg.window(*frame, self.lines(axis)))
        layers += [self.limit(axis), self.means(axis), self.calibrations(axis)]
        layers += [self.numbers(), self.heading(axis), self.names()]
        return "".join(layers)

    def axis(self) -> Axis:
        """The value axis: what was used, gases through the system, means, limit; room for names above."""
        trace = self.trace
        values = [value for run in trace.runs for _, value in run.used]
        values += [mark.value for mark in trace.marks if mark.system]
        values += [run.mean for run in trace.runs if run.mean is not None]
        values += [] if trace.limit is None else [trace.limit.value]
        values = values or [value for _, value in trace.readings] or [0.0]
        low, high = padded(min(values), max(values))
        return Axis(low, high, self.bottom, self.top + _LANE)

    def bands(self) -> str:
        """The run windows, one with a note as an empty broken frame."""
        look = self.look
        frame: Attributes = {"stroke": look.grey, "stroke_width": 0.6, "stroke_dasharray": "2 1.5"}
        parts = []
        for run in self.trace.runs:
            x, end = self.times.at(run.start), self.times.at(run.end)
            drawn: Attributes = {"fill": look.paper, **frame} if run.note else {"fill": look.band}
            parts.append(svg.rectangle(x, self.top, end - x, self.height, **drawn))
        return "".join(parts)

    def rules(self, axis: Axis) -> str:
        """Horizontal rules with their values."""
        marks = ticks(axis.low, axis.high, _about(self.height))
        edge = ((LEFT, self.bottom), (self.times.end, self.bottom))
        parts = [svg.line(*edge, stroke=self.look.grey, stroke_width=0.6)]
        for value in marks.values:
            y = axis.at(value)
            parts.append(svg.line((LEFT, y), (self.times.end, y), stroke=self.look.rule, stroke_width=0.5))
            parts.append(
                svg.label(LEFT - 4, y + self.look.size * 0.34, marks.text(value), text_anchor="end",
                          fill=self.look.muted)
            )  # fmt: skip
        return "".join(parts)

    def lines(self, axis: Axis) -> str:
        """All readings in grey, the used ones in the accent colour over them."""
        used = [piece for run in self.trace.runs for piece in self.placed(run.used, axis)]
        every = svg.path_data(self.placed(self.trace.readings, axis))
        over = svg.path_data(used)
        thin: Attributes = {"fill": "none", "stroke_linejoin": "round"}
        return (svg.element("path", d=every, stroke=self.look.grey, stroke_width=0.6, **thin) if every else "") + (
            svg.element("path", d=over, stroke=self.look.accent, stroke_width=0.9, **thin) if over else ""
        )

    def placed(self, readings: Sequence[TimedValue], axis: Axis) -> list[list[svg.Point]]:
        """Readings as polylines on paper, cut at gaps, thinned where there are more than paper can show."""
        pieces = unbroken(readings, self.trace.interval * 1.5)
        lines = [[(self.times.at(time), axis.at(value)) for time, value in piece] for piece in pieces]
        return [thinned(points, _THIN) for points in lines] if len(readings) > _MANY else lines

    def exclusions(self) -> str:
        """Excluded periods, hatched."""
        parts = []
        for period in self.trace.excluded:
            x, end = self.times.at(period.start), self.times.at(period.end)
            data = svg.hatch_data(x, self.top + _LANE, max(end - x, 1.5), self.height - _LANE)
            parts.append(svg.element("path", d=data, stroke=self.look.grey, stroke_width=0.5))
        return "".join(parts)

    def numbers(self) -> str:
        """The number of the reason at the foot of each excluded period."""
        look = self.look
        frame: Attributes = {"fill": look.paper, "stroke": look.muted, "stroke_width": 0.5}
        parts = []
        for period in self.trace.excluded:
            x = (self.times.at(period.start) + self.times.at(period.end)) / 2
            width, baseline = svg.text_width(period.number, look.size) + 4, self.bottom - 4
            parts.append(svg.rectangle(x - width / 2, baseline - 6.5, width, 8.5, **frame))
            parts.append(svg.label(x, baseline, period.number, text_anchor="middle"))
        return "".join(parts)

    def limit(self, axis: Axis) -> str:
        """The limit as a heavy broken line across the panel; its words stand in the heading."""
        if self.trace.limit is None:
            return ""
        y = axis.at(self.trace.limit.value)
        return svg.line((LEFT, y), (self.times.end, y), stroke=self.look.ink, **LIMIT_LINE)

    def means(self, axis: Axis) -> str:
        """The mean of each run across its window."""
        parts = []
        for run in self.trace.runs:
            if run.mean is not None:
                y = axis.at(run.mean)
                a, b = (self.times.at(run.start), y), (self.times.at(run.end), y)
                parts.append(svg.line(a, b, stroke=self.look.ink, **MEAN_LINE))
        return "".join(parts)

    def calibrations(self, axis: Axis) -> str:
        """Calibration readings; one beyond the scale stands on the panel's edge with a stroke outwards."""
        parts = []
        for mark in self.trace.marks:
            x, y = self.times.at(mark.time), axis.at(mark.value)
            shown = min(max(y, self.top + 6), self.bottom)
            if shown != y:
                out = (x, shown - 7 if y < shown else shown + 7)
                parts.append(svg.line((x, shown), out, stroke=self.look.ink, stroke_width=0.7))
            parts.append(mark_svg(mark.kind, mark.system, x, shown, self.look))
        return "".join(parts)

    def heading(self, axis: Axis) -> str:
        """The gas, its unit, and on the right the limit's words and how many readings are out of sight."""
        size, baseline = self.look.size + 1, self.top - 4
        x = svg.text_width(self.trace.name, size) + 5
        edges = (axis.high + (axis.high - axis.low) * _LANE / (self.height - _LANE), axis.low)
        beyond = sum(1 for _, value in self.trace.readings if not edges[1] <= value <= edges[0])
        words = [self.trace.limit.text] if self.trace.limit else []
        if beyond:
            shipped = self.look.words
            words.append(shipped.beyond_one if beyond == 1 else shipped.beyond.format(count=beyond))
        return (
            svg.label(0, baseline, self.trace.name, font_size=size, font_weight=600)
            + svg.label(x, baseline, self.trace.unit, fill=self.look.muted)
            + svg.label(self.times.end, baseline, "; ".join(words), text_anchor="end", fill=self.look.muted)
        )

    def names(self) -> str:
        """Run names with what else fits of note and mean, in the lane above the values."""
        parts = []
        for run in self.trace.runs:
            x, end = self.times.at(run.start), self.times.at(run.end)
            mean = self.look.words.mean_value.format(value=run.mean_text) if run.mean_text else ""
            noted = f"{run.name}, {run.note}" if run.note else run.name
            choices = [f"{noted}: {mean}", f"{run.name}: {mean}"] if mean else []
            choices += [noted, run.name]
            room = end - x - 4
            fitting = (words for words in choices if svg.text_width(words, self.look.size) <= room)
            words = next(fitting, run.name)
            parts.append(svg.label((x + end) / 2, self.top + 7.5, words, text_anchor="middle"))
        return "".join(parts)


def _about(height: float) -> int:
    return max(2, round(height / 16))


def mark_svg(kind: MarkKind, system: bool, x: float, y: float, look: Style) -> str:
    """The shape tells the gas; filled where it came through the whole system, hollow where not."""
    draw = {MarkKind.ZERO: svg.circle, MarkKind.UPSCALE: svg.triangle}.get(kind, svg.diamond)
    fill, edge = (look.ink, look.paper) if system else (look.paper, look.ink)
    return draw(x, y, 2.2, fill=fill, stroke=edge, stroke_width=0.5 if system else 0.8)
