"""Cases: dates, clocks, zones, daylight saving, order, duplicates, gaps, and intervals."""

from __future__ import annotations

from datetime import datetime, timedelta

from tests.corpus.case import END, HEADERS, Case, comma, plain, text, usual, without
from tests.corpus.truth import TRUTH, Row, at, from_start

DAY_FIRST = {**END, "date-order": "day first"}
_SHIFT = timedelta(days=-15)
EARLY = at(lambda t: t + _SHIFT)  # 5 April: both numbers may be a month
SPANISH = (("Fecha", "Hora", "NOx ppm seco", "Monóxido de carbono ppm seco", "Oxígeno % seco", "CO2 % seco"),)
FRENCH = (("Date", "Heure", "Oxydes d'azote (ppm sec)", "Monoxyde de carbone (ppm sec)", "Oxygène (% sec)",
           "Dioxyde de carbone (% sec)"),)  # fmt: skip
GERMAN = (("Datum", "Uhrzeit", "NOx", "CO", "O2", "CO2"), ("", "", "ppm tr", "ppm tr", "% tr", "% tr"))
TWO = (("Date", "Clock", *HEADERS[1:]),)
_NIGHT = from_start(datetime(2026, 4, 19, 23, 30))
_MIDNIGHT = from_start(datetime(2026, 4, 20, 0, 0))


def clocked(form: str) -> bytes:
    """The plain file with its times in another form."""
    return plain(clock=lambda t: t.strftime(form))


def named(names: dict[int, str], form: str) -> bytes:
    """The plain file with the name of the month in another language."""
    return plain(clock=lambda t: form.format(d=t.day, m=names[t.month], y=t.year) + f" {t:%H:%M}")


def end_of_day(moment: datetime) -> str:
    """Midnight as 24:00 of the day before."""
    if moment.hour or moment.minute:
        return usual(moment)
    return f"{moment - timedelta(days=1):%Y-%m-%d} 24:00:00"


DATES = [
    Case("day first", "20/04/2026", clocked("%d/%m/%Y %H:%M")),
    Case("month first", "04/20/2026", clocked("%m/%d/%Y %H:%M")),
    Case("day or month first", "05/04/2026 in every row", plain(rows=EARLY, clock=lambda t: f"{t:%d/%m/%Y %H:%M}"),
         answers=DAY_FIRST, rows=EARLY),
    Case("month or day first", "04/05/2026 in every row", plain(rows=EARLY, clock=lambda t: f"{t:%m/%d/%Y %H:%M}"),
         answers={**END, "date-order": "month first"}, rows=EARLY),
    Case("year first", "2026/04/20", clocked("%Y/%m/%d %H:%M")),
    Case("two-digit year", "04/20/26", clocked("%m/%d/%y %H:%M")),
    Case("two-digit year, day first", "20.04.26", clocked("%d.%m.%y %H:%M"), answers=DAY_FIRST),
    Case("compact day", "20260420 09:50:00", clocked("%Y%m%d %H:%M:%S")),
    Case("month name", "20-Apr-2026", clocked("%d-%b-%Y %H:%M")),
    Case("month name first", "April 20, 2026, in quotation marks", clocked('"%B %d, %Y %H:%M"')),
    Case("month in spanish", "20 abr 2026", named({4: "abr"}, "{d} {m} {y}")),
    Case("month in french", "20 avril 2026", named({4: "avril"}, "{d} {m} {y}")),
    Case("month in german", "5. März 2026", plain(
        rows=at(lambda t: t - timedelta(days=46)), clock=lambda t: f"{t.day}. März {t.year} {t:%H:%M}"),
        rows=at(lambda t: t - timedelta(days=46))),
    Case("date and time apart", "a column of dates and one of times", plain(
        headers=TWO, clock=lambda t: f"{t:%Y-%m-%d},{t:%H:%M}")),
    Case("spanish file", "Fecha and Hora, decimal comma", plain(
        delimiter=";", headers=SPANISH, clock=lambda t: f"{t:%d/%m/%Y;%H:%M}", show=comma)),
    Case("french file", "Date and Heure, accents, decimal comma", plain(
        delimiter=";", headers=FRENCH, clock=lambda t: f"{t:%d/%m/%Y;%H:%M}", show=comma)),
    Case("german file", "Datum and Uhrzeit, units in a row, points in dates", plain(
        delimiter=";", headers=GERMAN, clock=lambda t: f"{t:%d.%m.%Y;%H:%M:%S}", show=comma)),
    Case("half-converted dates", "days up to the 12th exchanged by a program, the others left as text",
         plain(rows=from_start(datetime(2026, 4, 12, 23, 30)),
               clock=lambda t: f"{t:%Y-%d-%m %H:%M:%S}" if t.day <= 12 else f"{t:%d/%m/%Y %H:%M}"), stops="date-order"),
    Case("dates of two orders", "20/04/2026 and 4/20/2026 in one column", plain(
        put={(k, 0): f"{TRUTH[k][0]:%d/%m/%Y %H:%M}" for k in range(30)},
        clock=lambda t: f"{t:%m/%d/%Y %H:%M}"), stops="date-order"),
    Case("day numbers in a text", "46132.40972: days since an unknown year", plain(
        clock=lambda t: f"{(t - datetime(1899, 12, 30)) / timedelta(days=1):.8f}"),
        answers={**END, "date-order": "serial 1900"}),
    Case("times alone", "09:50 without a date", clocked("%H:%M"), answers={**END, "day": "test date"}, day=True),
    Case("elapsed seconds", "seconds since an unknown start", plain(
        headers=(("Elapsed [s]", *HEADERS[1:]),), clock=lambda t: f"{(t - TRUTH[0][0]).total_seconds():g}"),
        stops="no-readings-table"),
]  # fmt: skip

_HALF = "%m/%d/%Y %I:%M:%S %p"
_NOON = from_start(datetime(2026, 4, 20, 11, 30))

CLOCKS = [
    Case("twelve hours", "01:05:00 PM", clocked(_HALF)),
    Case("twelve a.m.", "12:00:00 AM for midnight", plain(rows=_NIGHT, clock=lambda t: t.strftime(_HALF)), rows=_NIGHT),
    Case("a. m. in spanish", "11:50 a. m.", plain(
        clock=lambda t: f"{t:%d/%m/%Y %I:%M} {'a. m.' if t.hour < 12 else 'p. m.'}")),
    Case("twelve hours without a.m.", "12:59, then 1:00 on the same day", plain(
        rows=from_start(datetime(2026, 4, 20, 12, 30)), clock=lambda t: f"{t:%Y-%m-%d %I:%M}"), stops="half-day-clock"),
    Case("24:00", "midnight as 24:00 of the day before", plain(rows=_NIGHT, clock=end_of_day), rows=_NIGHT),
    Case("midnight as 00:00", "23:59, then 00:00 of the next day", plain(rows=_NIGHT), rows=_NIGHT),
    Case("seconds with a fraction", "09:50:00.250", plain(
        clock=lambda t: f"{t:%Y-%m-%d %H:%M:%S}.250"), rows=at(lambda t: t + timedelta(milliseconds=250))),
    Case("iso with T", "2026-04-20T09:50:00", clocked("%Y-%m-%dT%H:%M:%S")),
    Case("iso with offset", "2026-04-20T09:50:00-06:00, kept as the clock of the test",
         clocked("%Y-%m-%dT%H:%M:%S-06:00"), answers={**END, "time-zone": "as written"}),
    Case("iso in UTC", "15:50Z for 09:50 in Denver", plain(
        clock=lambda t: f"{t + timedelta(hours=6):%Y-%m-%dT%H:%M:%S}Z"), answers={**END,
             "time-zone": "America/Denver"}),
    Case("zone in letters", "09:50:00 MDT", clocked("%Y-%m-%d %H:%M:%S MDT"),
         answers={**END, "time-zone": "as written"}),
    Case("zone in letters, converted", "15:50:00 GMT for 09:50 in Denver", plain(
        clock=lambda t: f"{t + timedelta(hours=6):%Y-%m-%d %H:%M:%S} GMT"),
        answers={**END, "time-zone": "America/Denver"}),
    Case("letters that are no zone", "09:50:00 XYZ", clocked("%Y-%m-%d %H:%M:%S XYZ"), stops="time-form"),
    Case("start in the header", "`Interval start` above the times", plain(
        headers=(("Interval start time", *HEADERS[1:]),)), answers={}, says=("start of the interval",)),
    Case("end in the header", "`Interval end` above the times", plain(
        headers=(("Interval end time", *HEADERS[1:]),)), answers={}, says=("end of the interval",)),
    Case("start or end open", "a header that says neither", plain(), stops="stamp"),
]  # fmt: skip

SPRING = at(lambda t: t + timedelta(hours=1), from_start(datetime(2026, 3, 8, 1, 30))[30:])
SPRING = (*from_start(datetime(2026, 3, 8, 1, 30))[:30], *SPRING)
_AUTUMN = from_start(datetime(2026, 11, 1, 0, 30))


def autumn(offset: bool) -> bytes:
    """Two hours of which the second repeats the first: 01:30 daylight time to 01:29 standard time."""
    rows = from_start(datetime(2026, 11, 1, 1, 30))
    clocks = [row[0] if k < 30 else row[0] - timedelta(hours=1) for k, row in enumerate(rows)]
    zones = ["-06:00" if k < 30 else "-07:00" for k in range(60)] if offset else [""] * 60
    return plain(put={(k, 0): f"{c:%Y-%m-%d %H:%M:%S}{z}" for k, (c, z) in enumerate(zip(clocks, zones, strict=True))})


def autumn_doubled() -> bytes:
    """A clock that goes back at 02:00: the times 01:30 to 01:59 stand twice, with other readings."""
    rows = from_start(datetime(2026, 11, 1, 1, 30))
    return plain(rows=tuple((r[0] if k < 30 else r[0] - timedelta(minutes=30), *r[1:]) for k, r in enumerate(rows)))


SAVING = [
    Case("spring, a clock that leaps", "01:59, then 03:00 on the day the clocks change", plain(rows=SPRING),
         rows=SPRING,
         says=("01:59:00", "03:00:00")),
    Case("autumn, an hour twice", "01:30 to 01:59 twice, with other readings", autumn_doubled(),
         stops="duplicate-time"),
    Case("autumn, an hour twice with offsets", "01:30-06:00, an hour later 01:30-07:00", autumn(offset=True),
         answers={**END, "time-zone": "UTC-07:00"}, rows=from_start(datetime(2026, 11, 1, 0, 30))),
    Case("autumn, a clock that goes back", "the same; as written the second half would come first",
         autumn(offset=True), stops="time-zone"),
]  # fmt: skip


def mixed(seconds: int) -> tuple[Row, ...]:
    """The truth as one series that goes on at another interval after its half."""
    start = datetime(2026, 4, 20, 9, 50)
    middle = start + timedelta(minutes=30)
    return tuple(
        (start + timedelta(minutes=k) if k < 30 else middle + timedelta(seconds=seconds * (k - 30)), *row[1:])
        for k, row in enumerate(TRUTH)
    )


_LINES = text().splitlines()

ORDER = [
    Case("newest first", "the last reading at the top", plain(order=range(59, -1, -1)),
         notes=frozenset({"readings-out-of-order"})),
    Case("rows out of order", "two blocks exchanged", plain(order=[*range(30, 60), *range(30)]),
         notes=frozenset({"readings-out-of-order"})),
    Case("a row twice", "one row repeated as it is", plain(before={8: [_LINES[8]]}), says=("count once",)),
    Case("a row twice, another number", "one time with two readings",
         plain(before={8: [_LINES[8].replace(",", ",9", 1)]}), stops="duplicate-time"),
    Case("overlap", "two exports of one day in one file, ten rows in both", plain(
        order=[*range(40), *range(30, 60)]), notes=frozenset({"readings-out-of-order"}), says=("count once",)),
    Case("two exports in one file", "the header again between two exports of one day",
         plain(before={30: [",".join(HEADERS)]})),
    Case("gaps", "seven minutes missing", plain(order=[*range(5), *range(12, 60)]), rows=without(*range(5, 12)),
         says=("nothing between",)),
    Case("interval changes", "a reading each minute, then each ten seconds", plain(rows=mixed(10)), rows=mixed(10),
         notes=frozenset({"interval-changes"})),
    Case("interval changes to fifteen minutes", "a reading each minute, then each quarter of an hour",
         plain(rows=mixed(900)), rows=mixed(900), notes=frozenset({"interval-changes"})),
    Case("a row without its time", "numbers, and no time before them", plain(put={(9, 0): ""}), stops="not-a-time"),
    Case("a time that is none", "`soon` in the column of times", plain(put={(9, 0): "soon"}), stops="not-a-time"),
]  # fmt: skip

CASES = {"Dates": DATES, "Clocks and stamps": CLOCKS, "Daylight saving": SAVING, "Order, repeats, gaps": ORDER}
