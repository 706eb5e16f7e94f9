"""Readings over time: one panel per channel on a common time axis."""

from __future__ import annotations

from reporter.logged import is_kind
from reporter.outcome import GasResult, RunResult
from reporter.output.charts import (
    CalibrationMark,
    ExcludedPeriod,
    LimitLine,
    MarkKind,
    RunWindow,
    Trace,
    trace_chart,
)
from reporter.output.numbers import period, shown, unit_text
from reporter.output.view.desk import Desk, channel_name, gas_name
from reporter.output.view.model import Block, Picture
from reporter.output.view.runs import left_out
from reporter.record import Channel, ReadingKind

#: Panels in one picture, its height, the highest panel and the room between two [pt].
_PER_PICTURE, _PICTURE, _HIGHEST, _BETWEEN = 6, 470.0, 84.0, 20.0


def traces(desk: Desk) -> tuple[Block, ...]:
    """All channels in the order of the sheet, then what was left out of the means."""
    panels = [trace for channel in desk.outcome.record.channels if (trace := _trace(desk, channel)) is not None]
    pictures = []
    for start in range(0, len(panels), _PER_PICTURE):
        some = panels[start : start + _PER_PICTURE]
        height = min(_HIGHEST, _PICTURE / len(some) - _BETWEEN)
        names = ", ".join(trace.name for trace in some)
        pictures.append(Picture(trace_chart(some, title=f"Readings over time: {names}.", panel_height=height)))
    return (Block(pictures=tuple(pictures)), *left_out(desk, _numbers(desk)))


def _trace(desk: Desk, channel: Channel) -> Trace | None:
    readings = desk.outcome.record.readings
    name = channel.channel.value
    if name not in readings.channels:
        return None
    column = readings.column(name)
    where = is_kind(column.kinds, ReadingKind.NUMBER)
    values = tuple(zip(readings.times[where].tolist(), column.values[where].tolist(), strict=True))
    results = [(run, gas) for run in desk.outcome.runs for gas in run.gases if gas.channel is channel]
    series = next((gas.series for _, gas in results if gas.series is not None), None)
    if series is None or not values:
        return None
    return Trace(
        name=channel_name(channel),
        unit=f"{unit_text(channel.unit.value.unit)}, {channel.moisture_basis.value.value}",
        readings=values,
        interval=series.interval,
        runs=tuple(_window(desk, run, gas) for run, gas in results),
        excluded=_excluded(desk),
        marks=_marks(desk, name),
        limit=_limit(desk, channel),
    )


def _window(desk: Desk, run: RunResult, gas: GasResult) -> RunWindow:
    mean = desk.outcome.ledger.get(f"run.{run.key}.{gas.segment}.mean")
    if mean is not None:
        desk.show(mean.key)
    return RunWindow(
        name=f"run {run.run.run.value}",
        start=run.run.start.value,
        end=run.run.end.value,
        used=gas.series.used if gas.series is not None else (),
        mean=None if mean is None else float(mean.value),
        mean_text="" if mean is None else shown(mean),
        note="" if gas.is_valid else desk.words("run.not_valid"),
    )


def _excluded(desk: Desk) -> tuple[ExcludedPeriod, ...]:
    """The periods left out, numbered as in the list below the picture."""
    periods = dict.fromkeys((one.start, one.end) for run in desk.outcome.runs for one in run.exclusions)
    return tuple(ExcludedPeriod(start, end, str(number)) for number, (start, end) in enumerate(periods, 1))


def _numbers(desk: Desk) -> dict[str, str]:
    return {period(one.start, one.end): one.number for one in _excluded(desk)}


def _marks(desk: Desk, channel: str) -> tuple[CalibrationMark, ...]:
    ledger = desk.outcome.ledger
    kinds = {"zero": MarkKind.ZERO, "low": MarkKind.ZERO, "NO2": MarkKind.CONVERTER}
    return tuple(
        CalibrationMark(
            time=point.time,
            value=float(ledger[point.reading].value),
            kind=kinds.get(point.level, MarkKind.UPSCALE),
            system=point.route == "system",
        )
        for point in desk.outcome.calibration_points
        if point.channel == channel
    )


def _limit(desk: Desk, channel: Channel) -> LimitLine | None:
    """A limit on the reading's own basis: same gas, unit and moisture, without a reference diluent."""
    for comparison in desk.outcome.comparisons:
        limit = comparison.limit
        plain = limit.reference_oxygen is None and limit.reference_carbon_dioxide is None
        moist = limit.moisture_basis is None or limit.moisture_basis.value is channel.moisture_basis.value
        same = gas_name(limit.pollutant.value) == gas_name(channel.gas.value)
        if plain and moist and same and limit.unit.value.unit == channel.unit.value.unit:
            return LimitLine(limit.limit.value, f"limit {limit.limit_id.value}")
    return None
