"""The words inside the charts; a firm's phrases may replace any of them."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class ChartWords:
    """Keys and axes of the charts, as shipped; names in braces are filled in."""

    used: str = "readings in the mean"
    other: str = "other readings"
    mean: str = "mean of the run"
    mean_value: str = "mean {value}"
    not_counting: str = "run that does not count"
    zero: str = "zero or low gas"
    upscale: str = "upscale gas"
    converter: str = "NO₂ to the converter"
    direct: str = "hollow: straight to the analyzer"
    left_out: str = "left out, with the number of its reason"
    limit: str = "limit as entered"
    beyond_one: str = "1 other reading beyond the scale"
    beyond: str = "{count} other readings beyond the scale"
    whole: str = "whole line"
    near: str = "around the runs"
    oxygen: str = "O₂, %, dry"
    carbon_dioxide: str = "CO₂, %, dry"
    measured: str = "measured"
    measured_bars: str = "measured; bars: {bars}"
    expected: str = "expected at the measured oxygen"
