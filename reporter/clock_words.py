"""What is said of two clocks that differ, and when it is said: the same words wherever the difference is found."""

from __future__ import annotations

from reporter.clocks import Lag, Shift

#: A logged value is the entered one within this share of the channel's highest calibration reading.
SAME = 0.02
#: Differences of clocks below this are not said [s].
SLACK = 120.0


def differs(shift: Shift | None, step: float) -> bool:
    """Whether a shift is one to speak of, for a log of intervals of `step` [s]: as stamped no gas is near its place."""
    slack = max(SLACK, step)
    return shift is not None and not shift.first - slack <= 0.0 <= shift.last + slack


def shift_words(shift: Shift) -> str:
    """A shift of the log against the calibrations, in words."""
    behind = "behind" if shift.seconds < 0.0 else "ahead of"
    return (
        f"the clock of the readings stands {span(shift.seconds)} {behind} that of the calibrations "
        f"({-shift.seconds:+g} s to be added to the stamps): "
        f"{shift.found} of {shift.total} calibration readings stand in the log at that shift, {shift.as_stamped} as "
        f"stamped, at most {shift.elsewhere} at any other; confidence {shift.confidence:.2f}, of 1"
    )


def lag_words(lag: Lag, log: str, other: str) -> str:
    """A lag in words: the clock of `log` against that of `other`, which its readings follow or lead."""
    side = "ahead of" if lag.seconds > 0.0 else "behind"
    return (
        f"the clock of {log} stands {span(lag.seconds)} {side} that of {other} "
        f"({-lag.seconds:+g} s to be added to its stamps): correlation "
        f"{lag.correlation:.2f} at that lag, {lag.as_stamped:.2f} as stamped, at most {abs(lag.elsewhere):.2f} in size "
        f"at any other, over {lag.points} points; confidence {lag.confidence:.2f}, of 1"
    )


def span(seconds_apart: float) -> str:
    """A length of time in words."""
    size = abs(seconds_apart)
    return f"{size / 60.0:.3g} min" if size >= 60.0 else f"{size:g} s"
