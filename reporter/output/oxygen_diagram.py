"""The O2-CO2 diagram: measured points of the runs beside the line of complete combustion of the fuel.

Two panels show the same: the left one the whole line, the right one the neighbourhood of the points.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reporter.output import svg
from reporter.output.chart_key import Key, filled, key_rows, stroke
from reporter.output.placing import Box, place_label
from reporter.output.scale import Axis, Ticks, ticks
from reporter.output.svg import Attributes, Style

# Places on the paper [pt]: heading, plot height, labels below; share of the width of the whole line's panel.
_TOP, _HEIGHT, _FOOT, _SHARE = 16.0, 158.0, 22.0, 0.44
# The right panel never spans less than this [%], so that scatter of instruments does not look large.
_LEAST = 0.8


@dataclass(frozen=True, slots=True)
class FuelLine:
    """Dry CO2 of complete combustion, from its maximum at no oxygen to none at that of air [%]."""

    label: str
    carbon_dioxide_max: float
    oxygen_in_air: float


@dataclass(frozen=True, slots=True)
class FactorBand:
    """Where the fuel factor (oxygen_in_air - O2)/CO2 lies from `low` to `high`."""

    label: str
    low: float
    high: float
    oxygen_in_air: float


@dataclass(frozen=True, slots=True)
class DiagramPoint:
    """A run's dry O2 and CO2 [%] with the half lengths of its bars, and the CO2 expected at that O2."""

    label: str
    oxygen: float
    carbon_dioxide: float
    oxygen_half: float = 0.0
    carbon_dioxide_half: float = 0.0
    expected: float | None = None


@dataclass(frozen=True, slots=True)
class OxygenDiagram:
    """What the diagram shows; `bars` says what the bars of the points mean (empty: no bars)."""

    line: FuelLine | None
    points: tuple[DiagramPoint, ...]
    band: FactorBand | None = None
    bars: str = ""


def oxygen_diagram(diagram: OxygenDiagram, style: Style | None = None, *, title: str) -> str:
    """The diagram as one SVG; `title` is its text alternative, in a sentence."""
    look = style or Style()
    bottom = _TOP + _HEIGHT
    split = look.width * _SHARE
    whole = _Panel(diagram, *_whole_axes(diagram, 22.0, split - 12.0, bottom), look)
    if not diagram.points:
        parts = [whole.draw("", labelled=False)]
    else:
        axes = _near_axes(diagram.points, split + 26.0, look.width - 6.0, bottom)
        near = _Panel(diagram, *axes, look)
        parts = [
            whole.draw(look.words.whole, labelled=False),
            whole.outline(near),
            near.draw(look.words.near, labelled=True),
        ]
    keys, height = key_rows(_keys(diagram, look), 22.0, bottom + _FOOT, look)
    return svg.document(look.width, bottom + _FOOT + height, title, "".join(parts) + keys, look)


def _whole_axes(diagram: OxygenDiagram, left: float, right: float, bottom: float) -> tuple[Axis, Axis]:
    oxygen = [point.oxygen + point.oxygen_half for point in diagram.points]
    dioxide = [point.carbon_dioxide + point.carbon_dioxide_half for point in diagram.points]
    if diagram.line:
        oxygen.append(diagram.line.oxygen_in_air)
        dioxide.append(diagram.line.carbon_dioxide_max)
    if diagram.band:
        oxygen.append(diagram.band.oxygen_in_air)
        dioxide.append(diagram.band.oxygen_in_air / diagram.band.low)
    across = Axis(0.0, max(oxygen, default=21.0) * 1.04, left, right)
    return across, Axis(0.0, max(dioxide, default=20.0) * 1.06, bottom, _TOP)


def _near_axes(points: Sequence[DiagramPoint], left: float, right: float, bottom: float) -> tuple[Axis, Axis]:
    oxygen = [p.oxygen + side * p.oxygen_half for p in points for side in (-1, 1)]
    dioxide = [p.carbon_dioxide + side * p.carbon_dioxide_half for p in points for side in (-1, 1)]
    dioxide += [point.expected for point in points if point.expected is not None]
    return Axis(*_around(oxygen), left, right), Axis(*_around(dioxide), bottom, _TOP)


def _around(values: Sequence[float]) -> tuple[float, float]:
    """Ends around values with room on both sides, never closer than `_LEAST`."""
    low, high = min(values), max(values)
    span = max((high - low) * 1.5, _LEAST)
    middle = (low + high) / 2
    return middle - span / 2, middle + span / 2


@dataclass(frozen=True, slots=True)
class _Panel:
    """One view of the diagram: O2 across, CO2 up."""

    diagram: OxygenDiagram
    across: Axis
    up: Axis
    look: Style

    @property
    def frame(self) -> Box:
        return Box(self.across.start, self.up.end, self.across.end, self.up.start)

    def at(self, oxygen: float, carbon_dioxide: float) -> svg.Point:
        """The place of a gas on paper."""
        return self.across.at(oxygen), self.up.at(carbon_dioxide)

    def draw(self, words: str, *, labelled: bool) -> str:
        """Everything in this view; with `labelled` points have bars, expected values and names."""
        box = self.frame
        inside = self.band() + self.rules() + self.line() + self.expected(labelled) + self.measured(labelled)
        size = (box.right - box.left, box.bottom - box.top)
        edges = [[(box.left, box.top), (box.left, box.bottom), (box.right, box.bottom)]]
        frame: Attributes = {"fill": "none", "stroke": self.look.grey, "stroke_width": 0.6}
        return (
            svg.window(box.left, box.top, *size, inside)
            + svg.element("path", d=svg.path_data(edges), **frame)
            + self.ticks()
            + svg.label(box.left - 20, box.top - 7, self.look.words.carbon_dioxide, font_weight=600)
            + svg.label(box.right, box.top - 7, words, text_anchor="end", fill=self.look.muted)
            + svg.label(box.right, box.bottom + 19, self.look.words.oxygen, text_anchor="end", font_weight=600)
            + (self.names() if labelled else "")
        )

    def band(self) -> str:
        """The range of the fuel factor."""
        band = self.diagram.band
        if band is None:
            return ""
        corners = [
            self.at(0.0, band.oxygen_in_air / band.low),
            self.at(band.oxygen_in_air, 0.0),
            self.at(0.0, band.oxygen_in_air / band.high),
        ]
        return svg.element(
            "path", d=svg.polygon_data(corners), fill=self.look.band, stroke=self.look.grey, stroke_width=0.4
        )

    def line(self) -> str:
        """Complete combustion of the fuel."""
        line = self.diagram.line
        if line is None:
            return ""
        a, b = self.at(0.0, line.carbon_dioxide_max), self.at(line.oxygen_in_air, 0.0)
        return svg.line(a, b, stroke=self.look.accent, stroke_width=1.1)

    def rules(self) -> str:
        """Light rules at the ticks."""
        box = self.frame
        lines = [[(x, box.top), (x, box.bottom)] for x in map(self.across.at, self._ticks(self.across).values)]
        lines += [[(box.left, y), (box.right, y)] for y in map(self.up.at, self._ticks(self.up).values)]
        return svg.element("path", d=svg.path_data(lines), stroke=self.look.rule, stroke_width=0.5)

    def ticks(self) -> str:
        """The values on both axes."""
        box = self.frame
        across, up = self._ticks(self.across), self._ticks(self.up)
        muted = self.look.muted
        below = [
            svg.label(self.across.at(v), box.bottom + 9.5, across.text(v), text_anchor="middle", fill=muted)
            for v in across.values
        ]
        beside = [
            svg.label(box.left - 4, self.up.at(v) + 2.4, up.text(v), text_anchor="end", fill=muted) for v in up.values
        ]
        return "".join(below + beside)

    def _ticks(self, axis: Axis) -> Ticks:
        return ticks(axis.low, axis.high, 7)

    def expected(self, labelled: bool) -> str:
        """The CO2 expected at each point's O2, joined with the point."""
        parts = []
        for point in self.diagram.points if labelled else ():
            if point.expected is None:
                continue
            x, y = self.at(point.oxygen, point.expected)
            measured = self.at(point.oxygen, point.carbon_dioxide)
            joined: Attributes = {
                "stroke": self.look.accent,
                "stroke_width": 0.6,
                "stroke_dasharray": "1 1.2",
            }
            parts.append(svg.line((x, y), measured, **joined))
            parts.append(_expected(self.look, x, y))
        return "".join(parts)

    def measured(self, labelled: bool) -> str:
        """The measured points, with their bars where `labelled`."""
        parts = []
        for point in self.diagram.points:
            x, y = self.at(point.oxygen, point.carbon_dioxide)
            if labelled:
                lines = [[(a.left, a.top), (a.right, a.bottom)] for a in self.bars(point)]
                parts.append(svg.element("path", d=svg.path_data(lines), stroke=self.look.ink, stroke_width=0.7))
            parts.append(_measured(self.look, x, y) if labelled else svg.circle(x, y, 1.4))
        return "".join(parts)

    def bars(self, point: DiagramPoint) -> list[Box]:
        """The two bars of a point, as areas without width."""
        x, y = self.at(point.oxygen, point.carbon_dioxide)
        left, right = (self.across.at(point.oxygen + s * point.oxygen_half) for s in (-1, 1))
        bottom, top = (self.up.at(point.carbon_dioxide + s * point.carbon_dioxide_half) for s in (-1, 1))
        across = [Box(left, y, right, y)] if point.oxygen_half else []
        return across + ([Box(x, top, x, bottom)] if point.carbon_dioxide_half else [])

    def names(self) -> str:
        """The names of the points, where they cover least, each joined with its point by a thin line."""
        points = self.diagram.points
        places = [self.at(point.oxygen, point.carbon_dioxide) for point in points]
        taken = [Box(x - 4, y - 4, x + 4, y + 4) for x, y in places] + self.along_line()
        for point in points:
            taken += [Box(b.left - 1, b.top - 1, b.right + 1, b.bottom + 1) for b in self.bars(point)]
            if point.expected is not None:
                x, y = self.at(point.oxygen, point.expected)
                taken.append(Box(x - 4, y - 4, x + 4, y + 4))
        parts = []
        for point, place in zip(points, places, strict=True):
            size = (svg.text_width(point.label, self.look.size), self.look.size * 0.8)
            put = place_label(place, size, taken=taken, others=places, frame=self.frame)
            taken.append(put.box)
            parts.append(svg.line(place, put.joint, stroke=self.look.muted, stroke_width=0.4))
            parts.append(svg.label(put.box.left, put.baseline, point.label, font_weight=600))
        return "".join(parts)

    def along_line(self) -> list[Box]:
        """The fuel's line in this view, as small areas that a name should not cover."""
        line = self.diagram.line
        if line is None:
            return []
        (x1, y1), (x2, y2) = self.at(0.0, line.carbon_dioxide_max), self.at(line.oxygen_in_air, 0.0)
        first, last = int(self.across.start), int(self.across.end)
        places = [(x, y1 + (x - x1) / (x2 - x1) * (y2 - y1)) for x in range(first, last, 6)]
        return [Box(x - 3, y - 3, x + 3, y + 3) for x, y in places]

    def outline(self, near: _Panel) -> str:
        """Where the other view lies in this one."""
        left, top = self.at(max(near.across.low, self.across.low), min(near.up.high, self.up.high))
        right, bottom = self.at(min(near.across.high, self.across.high), max(near.up.low, self.up.low))
        drawn: Attributes = {"fill": "none", "stroke": self.look.ink, "stroke_width": 0.6}
        return svg.rectangle(left, top, right - left, bottom - top, **drawn)


def _measured(look: Style, x: float, y: float) -> str:
    return svg.circle(x, y, 2.4, fill=look.ink, stroke=look.paper, stroke_width=0.5)


def _expected(look: Style, x: float, y: float) -> str:
    return svg.circle(x, y, 2.0, fill=look.paper, stroke=look.accent, stroke_width=0.9)


def _keys(diagram: OxygenDiagram, look: Style) -> list[Key]:
    keys: list[Key] = []
    if diagram.line:
        keys.append((stroke(look.accent, stroke_width=1.1), diagram.line.label))
    if diagram.band:
        keys.append((filled(look.band), diagram.band.label))
    if diagram.points:
        said = look.words.measured_bars if diagram.bars else look.words.measured
        words = said.format(bars=diagram.bars)
        keys.append((lambda x, y: _measured(look, x + 5.5, y), words))
    if any(point.expected is not None for point in diagram.points):
        keys.append((lambda x, y: _expected(look, x + 5.5, y), look.words.expected))
    return keys
