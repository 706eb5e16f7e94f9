"""What rows of several sheets must agree on: names, references, bases, and the times of the runs."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from datetime import date, datetime, timedelta
from itertools import pairwise

import numpy as np

from reporter.basis import ACTUAL, Moisture
from reporter.intake.gather import Gathered
from reporter.intake.rows import Filled, with_value
from reporter.intake.sheets import Kind, Sheet, fold
from reporter.intake.table import MAX_TEXT, MAX_TEXTS, SheetTable
from reporter.ledger import slug
from reporter.logged import Moments
from reporter.record import Readings

Rows = Sequence[Filled]
#: No run is longer; a mistyped year or month makes one.
LONGEST_RUN = timedelta(days=3)


def text_lengths(table: SheetTable, gathered: Gathered) -> None:
    """No text is longer than a cell of a workbook holds, and a sheet holds a report's worth of text at most."""
    total = 0
    for row in table.rows:
        for cell in row.cells:
            length = len(cell.value) if isinstance(cell.value, str) else 0
            total += length
            if length > MAX_TEXT:
                place, found = gathered.place(table.sheet, cell.cell), f"a text of {length:,} characters"
                gathered.add("out-of-range", place, found, expected=f"at most {MAX_TEXT:,} characters")
    if total > MAX_TEXTS and table.spec.kind in (Kind.ITEMS, Kind.TABLE):
        expected = f"at most {MAX_TEXTS:,} characters of text on a sheet"
        gathered.add("zip-bomb", gathered.place(table.sheet), f"{total:,} characters of text", expected=expected)


def unique_names(spec: Sheet, rows: Rows, gathered: Gathered) -> None:
    """Each row carries a name of its own; names that give one key are one name."""
    attrs = [spec.column(name).attr for name in spec.unique]
    seen: dict[tuple[str, ...], Filled] = {}
    for row in rows:
        if not attrs or any(attr not in row.values for attr in attrs):
            continue
        key = tuple(slug(row.text(attr)) for attr in attrs)
        if key in seen:
            words = ", ".join(row.values[attr].text for attr in attrs)
            place = gathered.place(row.place.sheet, row.place.cell, spec.unique[0])
            gathered.add("duplicate-id", place, f"{words}, also in {seen[key].place.cell}")
        else:
            seen[key] = row


def references(spec: Sheet, rows: Rows, names: Mapping[str, Mapping[str, str]], gathered: Gathered) -> None:
    """Each reference names a row that exists, and is written as that row writes itself."""
    for column in spec.columns:
        known = names.get(column.refers)
        if known is None:
            continue
        also = {fold(word): word for word in column.also}
        for row in rows:
            given = row.values.get(column.attr)
            if given is None:
                continue
            exact = known.get(fold(given.value)) or also.get(fold(given.value))
            if exact is not None:
                row.values[column.attr] = with_value(given, exact)
                continue
            there = ", ".join([*known.values(), *column.also]) or "none"
            expected = f"a name of the sheet {column.refers}: {there}"
            gathered.add("unknown-reference", given.place, given.text, expected=expected)


def names_of(rows: Rows, attr: str) -> dict[str, str]:
    """The names of the rows of a sheet, by their folded form."""
    return {fold(row.text(attr)): row.text(attr) for row in rows if row.text(attr)}


def unit_against_basis(rows: Rows, gathered: Gathered) -> None:
    """A unit such as ppmvw and the column Moisture basis say the same."""
    for row in rows:
        unit, basis = row.values.get("unit"), row.values.get("moisture_basis")
        if unit is None or basis is None or unit.value.moisture is None:
            continue
        if unit.value.moisture.value != basis.value.value:
            found = f"unit {unit.text!r}, moisture basis {basis.text!r} ({basis.place.cell})"
            gathered.add("basis-contradiction", unit.place, found)


def flow_against_basis(rows: Rows, gathered: Gathered) -> None:
    """A flow unit such as dscfm or acfm and the column Flow basis say the same."""
    for row in rows:
        flow, basis = row.values.get("stack_flow"), row.values.get("flow_basis")
        if flow is None or basis is None or flow.unit is None:
            continue
        hint, words = flow.unit, str(basis.value)
        actual = hint.standard is ACTUAL
        wrong = (
            (actual and words != "actual")
            or (hint.standard.words and not actual and words == "actual")
            or (hint.moisture is Moisture.DRY and words.startswith("wet"))
            or (hint.moisture is Moisture.WET and words.startswith("dry"))
        )
        if wrong:
            said = ", ".join(t for t in (hint.moisture.value if hint.moisture else "", hint.standard.words) if t)
            found = f"the unit of the column says {said}, the flow basis {words}"
            gathered.add("basis-contradiction", flow.place, found)


def run_times(rows: Rows, gathered: Gathered, days: tuple[date | None, date | None]) -> None:
    """Runs end after they start, runs of one group do not overlap, and they lie within the test days."""
    good = []
    for row in rows:
        start, end = row.values.get("start"), row.values.get("end")
        if start is None or end is None:
            continue
        place, found = end.place, f"{start.text} to {end.text}"
        if end.value - start.value > LONGEST_RUN:
            expected = f"a run of at most {LONGEST_RUN.days} days: perhaps a date is mistyped"
            gathered.add("out-of-range", place, found, expected=expected)
        elif end.value > start.value:
            good.append(row)
            _within(row, gathered, days)
        elif {"start", "end"} <= row.bare and start.value.hour >= 12 > end.value.hour:
            gathered.add("run-across-midnight", place, found)
        else:
            gathered.add("reversed-run", place, found)
    groups: dict[str, list[Filled]] = {}
    for row in good:
        groups.setdefault(fold(row.text("group")), []).append(row)
    for group in groups.values():
        ordered = sorted(group, key=lambda r: r.values["start"].value)
        for before, after in pairwise(ordered):
            if after.values["start"].value < before.values["end"].value:
                start, end = after.values["start"], before.values["end"]
                found = (
                    f"run {after.text('run')} starts {start.value:%Y-%m-%d %H:%M}, "
                    f"run {before.text('run')} ends {end.value:%Y-%m-%d %H:%M} ({end.place.cell})"
                )
                gathered.add("overlapping-runs", start.place, found)


def _within(row: Filled, gathered: Gathered, days: tuple[date | None, date | None]) -> None:
    first, last = days
    start, end = row.values["start"], row.values["end"]
    if first is None:
        return
    until = (last or first) + timedelta(days=0 if last else 1)
    if start.value.date() < first or start.value.date() > (last or first) or end.value.date() > until:
        found = f"{start.value:%Y-%m-%d} for test day {first}" + (f" to {last}" if last else "")
        gathered.add("date-outside-test", start.place, found)


def runs_with_readings(
    rows: Rows, readings: Readings, gathered: Gathered, *, seconds: float | None = None, at_start: bool = False
) -> None:
    """At least one logged interval lies within each run, whole.

    `seconds` is the logging interval (the usual step between readings if None), `at_start` whether a stamp names
    its start.
    """
    times = readings.times
    step = timedelta(seconds=seconds if seconds is not None else usual_step(readings) or 60.0)
    lead, tail = (timedelta(0), step) if at_start else (step, timedelta(0))
    for row in rows:
        start, end = row.values.get("start"), row.values.get("end")
        if start is None or end is None or end.value <= start.value:
            continue
        if _any_within(times, start.value + lead, end.value - tail):
            continue
        found = f"run {row.text('run')} from {start.value:%Y-%m-%d %H:%M} to {end.value:%Y-%m-%d %H:%M}"
        stamped = _any_within(times, start.value, end.value)
        why = f"no whole interval of {step.total_seconds():g} s" if stamped else _span(times)
        remedy = "compare the logging interval on the sheet Test with the times of the readings" if stamped else ""
        gathered.add("run-without-readings", row.place, f"{found}; {why}", remedy=remedy)


def _any_within(times: Moments, first: datetime, last: datetime) -> bool:
    """Whether a time stamp lies in a span, its ends included."""
    return bool(np.any((times >= np.datetime64(first, "us")) & (times <= np.datetime64(last, "us"))))


def _span(times: Moments) -> str:
    if not len(times):
        return "no readings"
    return f"readings from {times[0].item():%Y-%m-%d %H:%M} to {times[-1].item():%Y-%m-%d %H:%M}"


def usual_step(readings: Readings) -> float | None:
    """The usual step between readings in seconds; None where there are not two."""
    steps = np.sort(np.diff(readings.times)).astype(np.int64) / 1e6
    return float(steps[len(steps) // 2]) if len(steps) else None


def logging_interval(readings: Readings, seconds: float | None, gathered: Gathered) -> None:
    """The usual step between readings is the logging interval entered."""
    usual = usual_step(readings)
    if seconds is not None and usual is not None and abs(usual - seconds) > 0.1 * seconds:
        found = f"{usual:g} s between readings, {seconds:g} s entered"
        gathered.add("interval-differs", readings.place, found)


def events(rows: Rows, gathered: Gathered) -> None:
    """An event does not end before it begins, and readings are excluded for a reason."""
    for row in rows:
        begin, until, excluded = (row.values.get(attr) for attr in ("time", "until", "readings_excluded"))
        if begin is not None and until is not None and until.value < begin.value:
            found = f"{until.text}, and the event began at {begin.text}"
            gathered.add("out-of-range", until.place, found, expected="a time at or after the one the event began at")
        if excluded is not None and excluded.value and "reason" not in row.values:
            place = gathered.place(row.place.sheet, excluded.place.cell, "Reason")
            gathered.add("missing-entry", place, expected="the reason, where readings are excluded")
