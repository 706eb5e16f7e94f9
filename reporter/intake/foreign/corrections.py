"""Corrections of clocks: entered by the user in folder.toml, applied to the stamps of a file, and said."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from datetime import timedelta
from typing import Any

import numpy as np

from reporter.logged import LoggedRows
from reporter.record import ProcessLog, Readings

#: No clock is corrected by more [s]: beyond a day it is the date that is wrong.
MOST = 86_400.0
_KEYS = {"file", "add_seconds", "said_by"}


@dataclass(frozen=True, slots=True)
class Correction:
    """What is added to the stamps of a file [s], and who says so."""

    file: str
    seconds: float
    said_by: str

    def words(self) -> str:
        """The correction in a sentence."""
        return f"{self.file}: {self.seconds:+g} s added to every time stamp; said by {self.said_by}"

    def of_readings(self, readings: Readings) -> Readings:
        """Readings with their stamps corrected."""
        logged = readings.logged
        times = logged.times + np.timedelta64(round(self.seconds * 1e6), "us")
        return replace(readings, rows=LoggedRows(times, logged.rows, logged.columns))

    def of_process(self, log: ProcessLog) -> ProcessLog:
        """A process log with its times corrected."""
        return replace(log, times=tuple(time + timedelta(seconds=self.seconds) for time in log.times))


def corrections(data: Mapping[str, Any]) -> dict[str, Correction]:
    """The corrections of the entries ``[[clock]]``, by file.

    Raises
    ------
    ValueError
        An entry has other keys than ``file``, ``add_seconds``, ``said_by``, no number of seconds within a day, nobody
        who says so, or names a file twice.
    """
    entries = data.get("clock", [])
    if not isinstance(entries, list) or not all(isinstance(entry, dict) for entry in entries):
        raise ValueError("clock: each stands under [[clock]]")
    found: dict[str, Correction] = {}
    for entry in entries:
        if set(entry) != _KEYS:
            raise ValueError(f"[[clock]]: it has {', '.join(sorted(entry)) or 'nothing'}")
        file, seconds, said_by = entry["file"], entry["add_seconds"], entry["said_by"]
        if isinstance(seconds, bool) or not isinstance(seconds, (int, float)) or not abs(seconds) <= MOST:
            raise ValueError(f"[[clock]]: add_seconds = {seconds!r}")
        if not isinstance(said_by, str) or not said_by.strip():
            raise ValueError(f"[[clock]]: said_by = {said_by!r}")
        if not isinstance(file, str) or file in found:
            raise ValueError(f"[[clock]]: file = {file!r}")
        found[file] = Correction(file, float(seconds), said_by.strip())
    return found
