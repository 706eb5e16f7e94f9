"""Gases over time: every reading, the runs, what was used and what was left out.

Readings outside the runs and readings left out are a thin grey line, readings used an accent line.  Gaps
stay gaps.  The value axis spans what was used, the gases led through the system, the means and a limit;
what lies beyond leaves the panel, and the panel says how many readings do.
"""

from __future__ import annotations

from collections.abc import Sequence
from datetime import timedelta
from functools import partial

from reporter.output import svg
from reporter.output.chart_key import Key, framed, hatched, key_rows, stroke
from reporter.output.scale import TimeAxis, time_ticks
from reporter.output.svg import Style
from reporter.output.trace_model import MarkKind, Trace
from reporter.output.trace_panel import LEFT, LIMIT_LINE, MEAN_LINE, TracePanel, mark_svg

# Places on the paper [pt]: right margin, heading of a panel, space below it.
_RIGHT, _HEADING, _SPACE = 10.0, 13.0, 7.0


def trace_chart(traces: Sequence[Trace], style: Style | None = None, *, title: str, panel_height: float = 92.0) -> str:
    """Panels of one time axis, one above the other, as one SVG.

    Parameters
    ----------
    traces
        From top to bottom, at least one.
    title
        The text alternative of the picture, in a sentence.
    panel_height
        Of each panel's plot [pt].
    """
    look = style or Style()
    times = _time_axis(traces, look)
    parts: list[str] = []
    top = 0.0
    for trace in traces:
        panel = TracePanel(trace, times, top + _HEADING, panel_height, look)
        parts.append(panel.draw())
        top += _HEADING + panel_height + _SPACE
    bottom = top - _SPACE
    parts.append(_time_labels(times, bottom, look))
    foot = bottom + (22.0 if _several_days(times) else 14.0)
    keys, height = key_rows(_keys(traces, look), LEFT, foot, look)
    return svg.document(look.width, foot + height, title, "".join(parts) + keys, look)


def _time_axis(traces: Sequence[Trace], look: Style) -> TimeAxis:
    ends = [run.start for trace in traces for run in trace.runs]
    ends += [run.end for trace in traces for run in trace.runs]
    ends += [mark.time for trace in traces for mark in trace.marks]
    ends += [trace.readings[i][0] for trace in traces if trace.readings for i in (0, -1)]
    low, high = min(ends), max(ends)
    if low == high:
        low, high = low - timedelta(minutes=1), high + timedelta(minutes=1)
    return TimeAxis(low, high, LEFT, look.width - _RIGHT)


def _several_days(times: TimeAxis) -> bool:
    return times.low.date() != times.high.date()


def _time_labels(times: TimeAxis, bottom: float, look: Style) -> str:
    parts = []
    day = None
    several = _several_days(times)
    for time in time_ticks(times.low, times.high):
        x = times.at(time)
        parts.append(svg.line((x, bottom), (x, bottom + 3), stroke=look.muted, stroke_width=0.5))
        parts.append(svg.label(x, bottom + 10.5, f"{time:%H:%M}", text_anchor="middle", fill=look.muted))
        if several and time.date() != day:
            day = time.date()
            parts.append(svg.label(x, bottom + 18.5, f"{day:%Y-%m-%d}", text_anchor="middle", fill=look.muted))
    return "".join(parts)


def _keys(traces: Sequence[Trace], look: Style) -> list[Key]:
    """The key entries of what occurs in the panels."""
    runs = [run for trace in traces for run in trace.runs]
    marks = [mark for trace in traces for mark in trace.marks]
    words = look.words
    keys: list[Key] = []
    if any(run.used for run in runs):
        keys.append((stroke(look.accent, stroke_width=1.2), words.used))
    if any(trace.readings for trace in traces):
        keys.append((stroke(look.grey, stroke_width=0.8), words.other))
    if any(run.mean is not None for run in runs):
        keys.append((stroke(look.ink, **MEAN_LINE), words.mean))
    if any(run.note for run in runs):
        keys.append((framed(look), words.not_counting))
    for kind in MarkKind:
        if any(mark.kind is kind for mark in marks):
            keys.append((partial(_key_mark, kind, True, look), getattr(words, kind.value)))
    if any(not mark.system for mark in marks):
        keys.append((partial(_key_mark, MarkKind.UPSCALE, False, look), words.direct))
    if any(trace.excluded for trace in traces):
        keys.append((hatched(look.grey), words.left_out))
    if any(trace.limit is not None for trace in traces):
        keys.append((stroke(look.ink, **LIMIT_LINE), words.limit))
    return keys


def _key_mark(kind: MarkKind, system: bool, look: Style, x: float, y: float) -> str:
    return mark_svg(kind, system, x + 5.5, y, look)
