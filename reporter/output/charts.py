"""The charts of the report: typed values in, inline SVG text out.

Nothing here knows the ledger or the record; the view fills the dataclasses, and words and rounded numbers
come in as text.  One user unit is one point, so sizes match the page; equal inputs give equal text.

- `trace_chart`: gases over time, stacked on one time axis;
- `oxygen_diagram`: measured O2 and CO2 beside the line of the fuel;
- `comparison_bars`, `comparison_strip`: the value of each run and the average beside a limit.
"""

from __future__ import annotations

from reporter.output.chart_words import ChartWords
from reporter.output.comparison_chart import Bar, ComparisonBars, comparison_bars, comparison_strip
from reporter.output.oxygen_diagram import (
    DiagramPoint,
    FactorBand,
    FuelLine,
    OxygenDiagram,
    oxygen_diagram,
)
from reporter.output.svg import Style
from reporter.output.trace_chart import trace_chart
from reporter.output.trace_model import (
    CalibrationMark,
    ExcludedPeriod,
    LimitLine,
    MarkKind,
    RunWindow,
    Trace,
)

__all__ = [
    "Bar",
    "CalibrationMark",
    "ChartWords",
    "ComparisonBars",
    "DiagramPoint",
    "ExcludedPeriod",
    "FactorBand",
    "FuelLine",
    "LimitLine",
    "MarkKind",
    "OxygenDiagram",
    "RunWindow",
    "Style",
    "Trace",
    "comparison_bars",
    "comparison_strip",
    "oxygen_diagram",
    "trace_chart",
]
