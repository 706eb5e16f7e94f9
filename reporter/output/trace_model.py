"""What a trace chart shows: readings, runs, calibration gases, periods left out, a limit."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from enum import Enum

TimedValue = tuple[datetime, float]


class MarkKind(Enum):
    """What a calibration mark stands for."""

    ZERO = "zero"
    UPSCALE = "upscale"
    CONVERTER = "converter"


@dataclass(frozen=True, slots=True)
class CalibrationMark:
    """One calibration reading; `system` is False when the gas went straight to the analyzer."""

    time: datetime
    value: float
    kind: MarkKind
    system: bool = True


@dataclass(frozen=True, slots=True)
class RunWindow:
    """A run in one panel: its readings in the mean, the mean (of readings, in the panel's unit) and its text.

    `note` is added to the name, e.g. ``invalid``.
    """

    name: str
    start: datetime
    end: datetime
    used: Sequence[TimedValue] = ()
    mean: float | None = None
    mean_text: str = ""
    note: str = ""


@dataclass(frozen=True, slots=True)
class ExcludedPeriod:
    """A period whose readings were left out; `number` refers to the list of reasons below the chart."""

    start: datetime
    end: datetime
    number: str


@dataclass(frozen=True, slots=True)
class LimitLine:
    """A limit on the same basis and in the unit of the panel (the caller sees to that)."""

    value: float
    text: str


@dataclass(frozen=True, slots=True)
class Trace:
    """One panel: the readings of one channel in time order (numbers only) and what is shown with them.

    `name` is the gas, `unit` the words behind it (``ppm, dry``); `interval` the logging interval: two
    readings further apart than one and a half of it are not joined.
    """

    name: str
    unit: str
    readings: tuple[TimedValue, ...]
    interval: timedelta
    runs: tuple[RunWindow, ...] = ()
    excluded: tuple[ExcludedPeriod, ...] = ()
    marks: tuple[CalibrationMark, ...] = ()
    limit: LimitLine | None = None
