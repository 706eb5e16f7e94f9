"""How far a corrected mean may be from the truth, from what the analyzers and cylinders are said to do.

The corrected mean is (mean - zero) x certified / (upscale - zero), so that errors of adjustment and of the sampling
system cancel.  What is left, each in the unit of the gas:

certificate   the certificate's uncertainty, as a share of the concentration (its error lies within it)
drift         the mean of two checks stands for their middle, not for that of the run: rate x the time between, for the
              zero (the two gases in the parts in which they enter) and for the gain, a share of the concentration
response      a first-order lag moves the mean by its time constant x (end - start) / length of the run
rounding      half of the last digit stored, in the zero and in the upscale readings
noise         four standard deviations of what the mean and the four check readings carry
"""

from __future__ import annotations

import math

from reporter.rehearse.analyzers import Analyzer, CylinderGas
from reporter.rehearse.order import Order, settings
from reporter.rehearse.stack import Stack
from reporter.rehearse.timetable import Injection, RunTime

#: Standard deviations of noise that are allowed for.
COVERAGE = 4.0


def allowance(
    order: Order, stack: Stack, run: RunTime, *, one: Analyzer, upscale: CylinderGas, value: float
) -> dict[str, float]:
    """The parts of the allowance of one gas in one run, by name, with their sum as ``total`` [% or ppm].

    Parameters
    ----------
    order, stack, run
        The rehearsal and the run.
    one, upscale
        The channel, and the gas of its system checks.
    value
        The true dry concentration [% or ppm].
    """
    share = value / upscale.certified
    label = one.gas.label
    flue = stack.minutes(run.start, run.end)
    first, last = flue[0].dry[label], flue[-1].dry[label]
    parts = {
        "certificate": upscale.uncertainty / 100 * value,
        "drift": _drift(stack, run, one, value=value, share=share),
        "response": one.seconds * abs(last - first) / (60 * len(flue)),
        "rounding": 0.5 * 10**-one.decimals * (abs(1 - share) + abs(share)),
        "noise": COVERAGE * _noise(order, one, run, share),
    }
    return {**parts, "total": sum(parts.values())}


def _drift(stack: Stack, run: RunTime, one: Analyzer, *, value: float, share: float) -> float:
    rule = settings()["analyzer"]
    before, after = stack.day.checks_around(run)
    middle = (run.start + run.end) / 2

    def apart(level_is_zero: bool) -> float:
        ends = [_read(checks, one, level_is_zero) for checks in (before, after)]
        return abs(middle - sum(ends) / 2) / 60

    at_zero, at_upscale = apart(True), apart(False)
    zero = rule["zero_per_hour"] / 100 * one.span * (abs(1 - share) * at_zero + share * at_upscale)
    return float(zero + rule["gain_per_hour"] / 100 * value * at_upscale)


def _read(checks: list[Injection], one: Analyzer, level_is_zero: bool) -> int:
    return next(c.end for c in checks if one.gas in c.gases and (c.level == "zero") is level_is_zero)


def _noise(order: Order, one: Analyzer, run: RunTime, share: float) -> float:
    count = (run.end - run.start) * 60 / order.interval
    mean = one.noise * math.sqrt(60 / order.interval) / math.sqrt(count)
    check = one.check_noise / math.sqrt(2)
    return math.hypot(mean, (1 - share) * check, share * check)
