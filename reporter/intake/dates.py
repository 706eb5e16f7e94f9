"""Dates and times as people write them.  What could be read two ways is never guessed."""

from __future__ import annotations

import re
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta

from reporter.intake.sheets import months
from reporter.intake.table import Cell, clean, show

_ISO = re.compile(r"^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})(?:[T ]++(?P<rest>.+))?$")
_NUMERIC = re.compile(r"^(\d{1,2})[-/.](\d{1,2})[-/.](\d{4}|\d{2})(?:,?\s++(?P<rest>.+))?$")
_DAY_FIRST = re.compile(r"^(\d{1,2})(?:st|nd|rd|th)?[\s.\-]*([^\W\d_]+)\.?[\s.,\-]*(\d{4})(?:,?\s++(?P<rest>.+))?$")
_MONTH_FIRST = re.compile(r"^([^\W\d_]+)\.?\s+(\d{1,2})(?:st|nd|rd|th)?,?\s+(\d{4})(?:,?\s++(?P<rest>.+))?$")
_CLOCK = re.compile(r"^(\d{1,2}):(\d{2})(?::(\d{2})(?:[.,]\d+)?)?\s*(?:([ap])\.?m\.?)?$", re.IGNORECASE)
_CLOCK_PLAIN = re.compile(r"^(\d{2})(\d{2})$")
_YEARS = range(1980, 2101)


@dataclass(frozen=True, slots=True)
class Fault:
    """Why a cell cannot be read: a code of the catalogue, what was found, what was expected instead."""

    code: str
    found: str
    expected: str = ""


@dataclass(frozen=True, slots=True)
class MomentRead:
    """A moment, and whether its date was taken from the test date."""

    value: datetime
    bare: bool = False


def date_of(cell: Cell) -> date | Fault:
    """The date a cell holds."""
    value = cell.value
    if isinstance(value, datetime):
        return value.date()
    if isinstance(value, date):
        return value
    if isinstance(value, str):
        found = _date_text(clean(value))
        if isinstance(found, Fault):
            return found
        if found is not None and not found[1]:
            return found[0]
    return Fault("not-a-date", cell.text)


def moment_of(cell: Cell, day: date | None) -> MomentRead | Fault | None:
    """The moment a cell holds; a time without a date joins `day` (None if the day is not known)."""
    value = cell.value
    if isinstance(value, datetime):
        return MomentRead(whole(value))
    if isinstance(value, time):
        return _join(day, timedelta(hours=value.hour, minutes=value.minute, seconds=value.second))
    if isinstance(value, timedelta) and timedelta(0) <= value <= timedelta(days=1):
        return _join(day, value)
    if isinstance(value, str):
        return _moment_text(clean(value), day)
    return Fault("not-a-time", cell.text)


def whole(moment: datetime) -> datetime:
    """A moment to the millisecond: what is finer is the spreadsheet's rounding."""
    late = moment + timedelta(microseconds=500)
    return late.replace(microsecond=late.microsecond // 1000 * 1000)


def _join(day: date | None, clock: timedelta) -> MomentRead | None:
    return None if day is None else MomentRead(datetime(day.year, day.month, day.day) + clock, bare=True)


def _moment_text(text: str, day: date | None) -> MomentRead | Fault | None:
    clock = _clock(text)
    if clock is not None:
        return _join(day, clock)
    found = _date_text(text)
    if isinstance(found, Fault):
        return found
    if found is None or not found[1]:
        return Fault("not-a-time", text)
    clock = _clock(found[1])
    if clock is None:
        return Fault("not-a-time", text)
    on = found[0]
    return MomentRead(datetime(on.year, on.month, on.day) + clock)


def _clock(text: str) -> timedelta | None:
    """The time of day a text holds; 24:00 is the end of the day."""
    match = _CLOCK.match(text)
    if match is None:
        plain = _CLOCK_PLAIN.match(text)
        if plain is None:
            return None
        hour, minute, second, half = int(plain[1]), int(plain[2]), 0, None
    else:
        hour, minute, second, half = int(match[1]), int(match[2]), int(match[3] or 0), match[4]
    if half is not None:
        if not 1 <= hour <= 12:
            return None
        hour = hour % 12 + (12 if half.lower() == "p" else 0)
    if minute > 59 or second > 59 or hour > 24 or (hour == 24 and (minute or second)):
        return None
    return timedelta(hours=hour, minutes=minute, seconds=second)


def _date_text(text: str) -> tuple[date, str] | Fault | None:
    """Date and the text after it; a fault where day and month could be exchanged; None if there is no date."""
    if match := _ISO.match(text):
        return _day(int(match[1]), int(match[2]), int(match[3]), match["rest"])
    if match := _NUMERIC.match(text):
        return _numeric(int(match[1]), int(match[2]), match[3], match["rest"], text)
    if match := _DAY_FIRST.match(text):
        month = months().get(match[2].casefold(), 0)
        return _day(int(match[3]), month, int(match[1]), match["rest"])
    if match := _MONTH_FIRST.match(text):
        month = months().get(match[1].casefold(), 0)
        return _day(int(match[3]), month, int(match[2]), match["rest"])
    return None


def _numeric(first: int, second: int, year: str, rest: str | None, text: str) -> tuple[date, str] | Fault | None:
    """Two numbers and a year: decided only where one number cannot be a month, or both are equal."""
    if len(year) == 2:
        return Fault("ambiguous-date", text)
    if first > 12 or first == second:
        return _day(int(year), second, first, rest)
    if second > 12:
        return _day(int(year), first, second, rest)
    return Fault("ambiguous-date", text)


def _day(year: int, month: int, day: int, rest: str | None) -> tuple[date, str] | None:
    if year not in _YEARS:
        return None
    try:
        return date(year, month, day), (rest or "").strip()
    except ValueError:
        return None


class OrderWatch:
    """Watches one column for dates that a spreadsheet program half converted.

    A program set to month-first turns day-first texts into wrong dates where the day is at most 12 and
    leaves the others as text; then both kinds stand in one column.
    """

    def __init__(self) -> None:
        self._doubtful: Cell | None = None
        self._numeric_text: Cell | None = None

    def see(self, cell: Cell) -> None:
        """Take note of one cell."""
        value = cell.value
        if isinstance(value, datetime):
            if self._doubtful is None and value.day <= 12 and value.day != value.month:
                self._doubtful = cell
        elif isinstance(value, str) and self._numeric_text is None and _NUMERIC.match(clean(value)):
            self._numeric_text = cell

    def fault(self) -> tuple[Cell, Fault] | None:
        """The doubtful date cell, if numeric date texts stand in the same column."""
        if self._doubtful is None or self._numeric_text is None:
            return None
        found = (
            f"{show(self._doubtful.value)} as a date, {self._numeric_text.text!r} as text "
            f"({self._numeric_text.cell}): part of the column may have been converted with day and month exchanged"
        )
        return self._doubtful, Fault("ambiguous-date", found)
