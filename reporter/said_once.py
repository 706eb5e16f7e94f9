"""What the reading of an input and its assessment say of the same minutes is said once."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from datetime import datetime, timedelta

from reporter.problems import Problem
from reporter.record import Record, Run

#: A note of the series, and that of the assessment which knows the calibrations entered.
SERIES, ENTERED = "gas-in-run", "calibration-gas-in-run"
_AIR = "ambient air"
#: How near to the minutes of the log a calibration was entered: stamps and notes of the hand are whole minutes.
NEAR = timedelta(minutes=2)


def said_once(record: Record, read: Sequence[Problem], own: Sequence[Problem]) -> tuple[Problem, ...]:
    """The problems of reading and of assessing an input, in this order.

    A note that a cylinder's gas stands in the log of a run is left out where the assessment names that run and a
    calibration was entered for these minutes; the assessment then says the minutes.

    Parameters
    ----------
    record
        The test.
    read, own
        The problems of reading it, and those of its assessment.
    """
    runs = {run.place: run for run in record.runs}
    entered = [row.time.value for row in record.calibrations]
    kept = list(read)
    told = []
    for problem in own:
        run = runs.get(problem.place) if problem.code == ENTERED else None
        same = [] if run is None else [note for note in kept if _of_these(note, run, entered)]
        kept = [note for note in kept if note not in same]
        spans = ", ".join(dict.fromkeys(_minutes(note) for note in same))
        told.append(replace(problem, found=f"{problem.found}; in the log {spans}") if same else problem)
    return (*kept, *told)


def _of_these(note: Problem, run: Run, entered: Sequence[datetime]) -> bool:
    """Whether a note of the series is of minutes of a run for which a calibration was entered."""
    from reporter.intake.series_notes import span_of

    span = span_of(note.found) if note.code == SERIES else None
    if span is None or _AIR in note.found or span[0] < run.start.value - NEAR or span[1] > run.end.value + NEAR:
        return False
    return any(span[0] - NEAR <= moment <= span[1] + NEAR for moment in entered)


def _minutes(note: Problem) -> str:
    words = note.found.split(": ")[0]
    return words.split(" ", 1)[1]
