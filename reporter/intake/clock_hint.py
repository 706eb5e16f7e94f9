"""A hint where a run has no readings: perhaps it is the clock, by the calibrations entered."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime

import numpy as np

from reporter.clock_words import SAME, differs, shift_words
from reporter.clocks import Known, Log, shift_of_gases
from reporter.intake.rows import Filled
from reporter.record import Level, Readings

_EPOCH = datetime(2000, 1, 1)


def clock_hint(calibrations: Sequence[Filled], readings: Readings, *, at_start: bool) -> str:
    """By how much the clock of the readings seems to differ from that of the calibrations, in words; empty if not.

    Parameters
    ----------
    calibrations
        The rows of the sheet Calibrations.
    readings
        The logged series.
    at_start
        Whether a stamp names the start of its interval.
    """
    stamps = (readings.times - np.datetime64(_EPOCH, "us")).astype(np.int64) / 1e6
    if len(stamps) < 2:
        return ""
    step = float(np.median(np.diff(stamps)))
    begin = stamps if at_start else stamps - step
    known: list[Known] = []
    for name in readings.channels:
        log = Log(begin, begin + step, readings.column(name).measured)
        rows = [row for row in calibrations if row.text("channel") == name and {"time", "reading"} <= row.values.keys()]
        highest = max((abs(row.values["reading"].value) for row in rows), default=0.0)
        known += [
            Known((row.values["time"].value - _EPOCH).total_seconds(), row.values["reading"].value, SAME * highest, log)
            for row in rows
            if "level" in row.values and row.values["level"].value is not Level.NO2 and highest > 0.0
        ]
    shift = shift_of_gases(known, step) if step > 0.0 else None
    return shift_words(shift) if shift is not None and differs(shift, step) else ""
