"""The time base of a table: which columns, in which order day and month stand, start or end of the interval.

The order is inferred from the whole column.  What the column leaves open is asked, never guessed.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta, timezone, tzinfo
from itertools import pairwise

from reporter.intake.dates import whole
from reporter.intake.foreign.model import Desk, Option
from reporter.intake.foreign.words import zone_letters
from reporter.intake.sheets import months
from reporter.intake.table import Raw, clean
from reporter.problems import Place

_THREE = re.compile(r"^(\d{1,4})([-/.])(\d{1,2})\2(\d{1,4})(?:T|,?\s+|$)")
_NAMED_DAY = re.compile(r"^(\d{1,2})(?:st|nd|rd|th)?[\s.\-/]*([^\W\d_]+)\.?[\s.,\-/]*(\d{4}|\d{2})(?:T|,?\s+|$)")
_NAMED_MONTH = re.compile(r"^([^\W\d_]+)\.?\s+(\d{1,2})(?:st|nd|rd|th)?,?\s+(\d{4})(?:,?\s+|$)")
_COMPACT = re.compile(r"^((?:19|20)\d{2})(\d{2})(\d{2})(?:T|\s+|$)")
_TOGETHER = re.compile(r"^((?:19|20)\d{6})(\d{2})(\d{2})(\d{2})?$")
_CLOCK = re.compile(
    r"^(\d{1,2})[:h](\d{2})(?:[:m](\d{2})(?:(?:[.,](?=\d)|:(?=\d{2,3}(?!\d)))(\d{1,6}))?s?)?\s*+(?:([ap])\.?\s?m\.?\s*+)?(Z|[A-Z]{2,4}|[+\-]\d{2}:?\d{2})?$",
    re.IGNORECASE,
)
_YEARS = range(1990, 2080)
SERIALS = (30_000.0, 60_000.0)
EPOCHS = {"serial 1900": datetime(1899, 12, 30), "serial 1904": datetime(1904, 1, 1)}
_ORDERS = {"year first": (0, 1, 2), "day first": (2, 1, 0), "month first": (2, 0, 1)}


@dataclass(frozen=True, slots=True)
class TimeStyle:
    """How the times of a table are written.

    `order` is ``year first``, ``day first``, ``month first``, ``serial 1900``, ``serial 1904`` or ``typed``;
    `stamp` is ``interval start``, ``interval end`` or ``as the field workbook says``; `zone` is empty where the
    clock is taken as written, else the IANA name to which stamps with an offset are converted; `day` is
    ``test date`` where the file holds no date; `written` is the zone of stamps that have no offset of their own, such
    as ``UTC``, where they are converted.
    """

    order: str = "typed"
    stamp: str = ""
    zone: str = ""
    day: str = ""
    written: str = ""


@dataclass(frozen=True, slots=True)
class Stamp:
    """One stamp as read: day (None where the cell has none), time of day, offset from UTC if written."""

    day: date | None
    clock: timedelta | None
    offset: timedelta | None = None


def read_stamp(value: Raw, order: str) -> Stamp | None:
    """The stamp a cell holds in an order; None where it holds none in that order."""
    if isinstance(value, datetime):
        exact = whole(value)
        return Stamp(exact.date(), exact - datetime(exact.year, exact.month, exact.day), exact.utcoffset())
    if isinstance(value, date):
        return Stamp(value, None)
    if isinstance(value, time):
        return Stamp(None, timedelta(hours=value.hour, minutes=value.minute, seconds=value.second))
    if isinstance(value, timedelta):
        return Stamp(None, value) if timedelta(0) <= value <= timedelta(days=1) else None
    number = _serial(value)
    if number is not None:
        return _of_serial(number, order)
    return _text_stamp(clean(value), order) if isinstance(value, str) else None


def _serial(value: Raw) -> float | None:
    if isinstance(value, float):
        return value
    if isinstance(value, str) and re.fullmatch(r"\d{5}(?:[.,]\d+)?|0?[.,]\d+", clean(value)):
        return float(clean(value).replace(",", "."))
    return None


def _of_serial(number: float, order: str) -> Stamp | None:
    if 0.0 <= number <= 1.0:
        return Stamp(None, timedelta(milliseconds=round(number * 86_400_000)))
    epoch = EPOCHS.get(order)
    if epoch is None or not SERIALS[0] <= number <= SERIALS[1]:
        return None
    moment = epoch + timedelta(milliseconds=round(number * 86_400_000))
    return read_stamp(moment, order)


def _text_stamp(text: str, order: str) -> Stamp | None:
    clock = _clock(text)
    if clock is not None:
        return clock
    if together := _TOGETHER.match(text):
        text = f"{together[1]} {together[2]}:{together[3]}:{together[4] or '00'}"
    for pattern in (_COMPACT, _THREE, _NAMED_DAY, _NAMED_MONTH):
        match = pattern.match(text)
        if match is None:
            continue
        day = _day(pattern, match, order)
        rest = text[match.end() :].strip()
        if day is None:
            continue
        if not rest:
            return Stamp(day, None)
        clock = _clock(rest)
        return None if clock is None else Stamp(day, clock.clock, clock.offset)
    return None


def _day(pattern: re.Pattern[str], match: re.Match[str], order: str) -> date | None:
    if pattern is _COMPACT:
        parts = (int(match[1]), int(match[2]), int(match[3]))
    elif pattern is _THREE:
        fields = (match[1], match[3], match[4])
        if max(map(len, fields[1:2])) > 2 or order not in _ORDERS:
            if len(fields[0]) != 4:
                return None
            order = "year first"
        if len(fields[0]) == 4:
            order = "year first"
        year, month, day = (fields[i] for i in _ORDERS[order])
        if len(year) not in (2, 4):
            return None
        parts = (_full(year), int(month), int(day))
    elif pattern is _NAMED_DAY:
        parts = (_full(match[3]), months().get(match[2].casefold(), 0), int(match[1]))
    else:
        parts = (int(match[3]), months().get(match[1].casefold(), 0), int(match[2]))
    try:
        return date(*parts) if parts[0] in _YEARS else None
    except ValueError:
        return None


def _full(year: str) -> int:
    return int(year) + (2000 if len(year) == 2 else 0)


def _clock(text: str) -> Stamp | None:
    match = _CLOCK.match(text)
    if match is None:
        return None
    hour, minute, second = int(match[1]), int(match[2]), int(match[3] or 0)
    if match[5]:
        if not 1 <= hour <= 12:
            return None
        hour = hour % 12 + (12 if match[5].lower() == "p" else 0)
    if minute > 59 or second > 59 or hour > 24 or (hour == 24 and (minute or second)):
        return None
    offset = _offset(match[6])
    if match[6] and offset is None:
        return None
    if offset is not None and abs(offset) > timedelta(hours=14):
        return None
    parts = timedelta(hours=hour, minutes=minute, seconds=second, microseconds=int((match[4] or "0").ljust(6, "0")))
    return Stamp(None, parts, offset)


def _offset(text: str | None) -> timedelta | None:
    if not text:
        return None
    if text[0] not in "+-":
        hours = zone_letters().get(text.upper())
        return None if hours is None else timedelta(hours=hours)
    digits = text[1:].replace(":", "")
    size = timedelta(hours=int(digits[:2]), minutes=int(digits[2:]))
    return -size if text[0] == "-" else size


def order_of(values: Sequence[Raw], desk: Desk, place: Place, *, epoch: str) -> str:
    """The order of a column that holds dates, from all its cells; empty while it is open.

    `epoch` is the date system of the workbook, empty for a text file.
    """
    values = _first_of_each_day(values)
    texts = [clean(v) for v in values if isinstance(v, str) and clean(v)]
    numeric = [text for text in texts if (m := _THREE.match(text)) and len(m[1]) < 4]
    others = any(isinstance(v, datetime) for v in values) or len(numeric) < sum(1 for t in texts if _THREE.match(t))
    if numeric and others:
        found = (
            f"dates of another form beside {numeric[0]!r}: a program may have exchanged day and month in part of them"
        )
        desk.ask("date-order", "Which cells are right? Export the file again, with all dates as text", found, (), place)
        return ""
    if numeric:
        return _order_of_texts(numeric, desk, place)
    numbers = [number for v in values if (number := _serial(v)) is not None and number > 1.0]
    if numbers and not any(isinstance(v, datetime) for v in values):
        return _date_system(numbers, desk, place, epoch)
    return "year first"


def _first_of_each_day(values: Sequence[Raw]) -> list[Raw]:
    """Of texts that begin with the same word the first alone; the date is in that word."""
    firsts: dict[Raw, Raw] = {}
    for value in values:
        firsts.setdefault(value.strip().partition(" ")[0] if isinstance(value, str) else value, value)
    return list(firsts.values())


def _order_of_texts(texts: Sequence[str], desk: Desk, place: Place) -> str:
    possible = [
        order for order in _ORDERS if all(read_stamp(text.split()[0].rstrip(","), order) is not None for text in texts)
    ]
    if len(possible) == 1:
        telling = next((text for text in texts if _decides(text, possible[0])), texts[0])
        desk.say(f"dates are {possible[0]}: {telling!r} can be read in no other order")
        return possible[0]
    alike = {tuple(read_stamp(text.split()[0].rstrip(","), order) for text in texts) for order in possible}
    if len(alike) == 1:
        return possible[0]
    if not possible:
        desk.ask("date-order", "In which order do the dates stand? No one order fits all", repr(texts[0]), (), place)
        return ""
    options = []
    for order in possible:
        read = read_stamp(texts[0].split()[0].rstrip(","), order)
        options.append(Option(order, f"{texts[0].split()[0]} is {read.day:%d %B %Y}" if read and read.day else ""))
    return desk.ask("date-order", "In which order do day, month and year stand?", repr(texts[0]), options, place)


def _decides(text: str, order: str) -> bool:
    plain = text.split()[0].rstrip(",")
    return all(read_stamp(plain, other) is None for other in _ORDERS if other != order)


def _date_system(numbers: Sequence[float], desk: Desk, place: Place, epoch: str) -> str:
    if epoch:
        desk.say(f"times are numbers of days in the workbook's own date system ({epoch[-4:]})")
        return epoch
    options = []
    for order in EPOCHS:
        read = _of_serial(numbers[0], order)
        options.append(Option(order, f"{read.day:%d %B %Y}" if read and read.day else "out of range"))
    return desk.ask("date-order", "From which year do the day numbers count?", f"{numbers[0]:.5f}", options, place)


def joined(stamps: Sequence[Stamp | None], day: date | None, style: TimeStyle) -> datetime | None:
    """The moment of one row from its one or two stamps; None where a part is missing."""
    if any(stamp is None for stamp in stamps):
        return None
    parts = [stamp for stamp in stamps if stamp is not None]
    on = next((stamp.day for stamp in parts if stamp.day is not None and stamp.day.year > 1904), day)
    clocks = [stamp for stamp in parts if stamp.clock is not None]
    if on is None or not clocks:
        return None
    last = clocks[-1]
    assert last.clock is not None
    moment = datetime(on.year, on.month, on.day) + last.clock
    own = timezone(last.offset) if last.offset is not None else zone_of(style.written) if style.written else None
    if style.zone and own is not None:
        return moment.replace(tzinfo=own).astimezone(zone_of(style.zone)).replace(tzinfo=None)
    return moment


def zone_of(name: str) -> tzinfo:
    """The zone of a name: an IANA name, or ``UTC-06:00`` (ValueError where it is neither)."""
    from zoneinfo import ZoneInfo, ZoneInfoNotFoundError

    match = re.fullmatch(r"(?:UTC|GMT)?\s*([+\-]\d{1,2})(?::?(\d{2}))?|UTC|GMT|Z", name.strip(), re.IGNORECASE)
    if match:
        hours = int(match[1] or 0)
        minutes = int(match[2] or 0)
        return timezone(timedelta(hours=hours, minutes=-minutes if hours < 0 else minutes))
    try:
        return ZoneInfo(name.strip())
    except (ZoneInfoNotFoundError, ValueError, OSError):
        raise ValueError(f"{name!r} is no time zone") from None


def half_day_clock(moments: Sequence[datetime], texts_have_half: bool) -> tuple[datetime, datetime] | None:
    """Where a clock without a.m. and p.m. steps from 12 back to 1 on one day; None where it does not."""
    if texts_have_half or any(moment.hour == 0 or moment.hour > 12 for moment in moments):
        return None
    for before, after in pairwise(moments):
        if before.date() == after.date() and before.hour == 12 and after.hour == 1:
            return before, after
    return None
