"""Calibrations of one channel: direct sets, system checks, what each is compared with.

Checks pair with runs by time; one system check may close a run and open the next.  Bias refers to the latest
accepted direct reading of the same cylinder.  The calibration span is the high-level gas of the accepted
direct set.  This file makes the entries of the calibrations themselves; `reporter.reduction.correction`
pairs them with runs.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime

from reporter.ledger import Entry
from reporter.methods.criteria import (
    Criterion,
    all_met,
    criteria,
    dilution_difference,
    not_held_reason,
    reading_difference,
)
from reporter.methods.method_7e import calibration_error, dilution_error, system_bias
from reporter.outcome import CalibrationPoint
from reporter.record import Calibration, Level, Route, SamplingSystem
from reporter.reduction.book import Book, Lane
from reporter.reduction.certificates import Papers, certified_value
from reporter.reduction.judging import judge, note_check

#: Level names that stand at the low end of the calibration.
LOW_LEVELS = (Level.ZERO, Level.LOW)
UPSCALE_LEVELS = (Level.MID, Level.HIGH)


@dataclass(frozen=True, slots=True)
class Injection:
    """One calibration reading with its entries; `met` is the indicator of its own criterion, if any."""

    row: Calibration
    reading: Entry
    certified: Entry
    share: Entry | None
    met: Entry | None

    @property
    def time(self) -> datetime:
        """When it was read."""
        return self.row.time.value

    @property
    def low(self) -> bool:
        """Whether it is the zero or low-level gas."""
        return self.row.level.value in LOW_LEVELS


@dataclass(frozen=True, slots=True)
class DirectSet:
    """Consecutive direct (dilution: system) readings; whole where low, mid and high level are all there."""

    number: int
    begin: datetime
    injections: tuple[Injection, ...]
    whole: bool
    accepted: Entry | None
    span: Entry | None

    @property
    def end(self) -> datetime:
        """When its last gas was read."""
        return max(injection.time for injection in self.injections)


@dataclass(frozen=True, slots=True)
class Calibrations:
    """All calibrations of a channel; `papers` holds why certificates do not bear the results."""

    lane: Lane
    held: dict[str, Criterion] | None
    sets: tuple[DirectSet, ...]
    system: tuple[Injection, ...]
    papers: Papers


def method_of(lane: Lane) -> str:
    """The method of a channel: as entered, else the one its gas is usually measured by."""
    entered = lane.channel.method
    return entered.value if entered is not None else lane.gas.method


def is_dilution(lane: Lane) -> bool:
    """Whether a channel is a dilution system."""
    return lane.channel.system is not None and lane.channel.system.value is SamplingSystem.DILUTION


def calibrations(book: Book, lane: Lane) -> Calibrations:
    """Enter every calibration of a channel and its calibration error or bias."""
    method = method_of(lane)
    held = criteria(method)
    if held is None:
        book.trouble("no-criteria-held", lane.channel.place, f"{lane.name}: {not_held_reason(method)}")
    if lane.channel.method is None and method:
        book.say(f"No method was entered for {lane.name}; Method {method} is taken.")
    rows = sorted(
        (row for row in book.record.calibrations if row.channel.value == lane.name),
        key=lambda r: r.time.value,
    )
    papers = Papers()
    sets: list[DirectSet] = []
    system: list[Injection] = []
    group: list[Injection] = []
    direct_count = 0
    for row in rows:
        if row.level.value is Level.NO2:
            continue
        certified = certified_value(book, lane, row, papers)
        if certified is None:
            continue
        in_set = _opens_set(book, lane, row, rows)
        if group and (not in_set or _runs_begun(book, row) != _runs_begun(book, group[-1].row)):
            sets.append(_close(book, lane, held, group, sets))
            group = []
        if in_set:
            direct_count += 1
            group.append(_read(book, lane, row, certified, f"direct_{direct_count}"))
        if row.route.value is Route.SYSTEM:
            injection = _system(book, lane, held, row, certified, sets, len(system) + 1)
            system.append(injection)
    if group:
        sets.append(_close(book, lane, held, group, sets))
    if is_dilution(lane):
        system = [_dilution_share(book, lane, held, injection, sets) for injection in system]
    return Calibrations(lane, dict(held) if held is not None else None, tuple(sets), tuple(system), papers)


def _opens_set(book: Book, lane: Lane, row: Calibration, rows: list[Calibration]) -> bool:
    """Direct readings form sets; so do a dilution system's readings between two runs, where mid and high are there."""
    if not is_dilution(lane):
        return row.route.value is Route.DIRECT
    near = {r.level.value for r in rows if _runs_begun(book, r) == _runs_begun(book, row)}
    return set(UPSCALE_LEVELS) <= near


def _runs_begun(book: Book, row: Calibration) -> int:
    """How many runs had begun when a reading was taken."""
    return sum(run.start.value < row.time.value for run in book.record.runs)


def _read(book: Book, lane: Lane, row: Calibration, certified: Entry, name: str) -> Injection:
    reading = book.given(f"calibration.{lane.segment}.{name}.reading", row.reading, lane.unit)
    book.points.append(
        CalibrationPoint(
            time=row.time.value,
            channel=lane.name,
            route=row.route.value.value,
            level=row.level.value.value,
            reading=reading.key,
            certified=certified.key,
            cylinder=row.cylinder.value if row.cylinder is not None else "",
            used_as=name,
        )
    )
    return Injection(row, reading, certified, None, None)


def _close(book: Book, lane: Lane, held: object, group: list[Injection], earlier: Sequence[DirectSet]) -> DirectSet:
    """Close a direct set: its span, the calibration error of each gas, and whether it is accepted.

    Readings that are no whole set are held to the span of the set before.
    """
    latest: dict[Level, Injection] = {}
    for injection in group:
        latest[injection.row.level.value] = injection
    low, high = latest.get(Level.ZERO) or latest.get(Level.LOW), latest.get(Level.HIGH)
    whole = low is not None and Level.MID in latest and high is not None and high.certified.value > 0.0
    number = len(earlier) + 1
    span = high.certified if whole and high is not None else latest_span(earlier, group[0].time)
    if span is None or not isinstance(held, dict):
        return DirectSet(number, group[0].time, tuple(latest.values()), whole, None, span)
    judged = [_error(book, lane, held["calibration_error"], injection, span) for injection in latest.values()]
    accepted = None
    if whole:
        flags = [injection.met for injection in judged if injection.met is not None]
        accepted = book.apply(all_met, f"calibration.{lane.segment}.set_{number}.accepted", {"flags": flags})
    return DirectSet(number, group[0].time, tuple(judged), whole, accepted, span)


def _error(book: Book, lane: Lane, criterion: Criterion, injection: Injection, span: Entry) -> Injection:
    stem = injection.reading.key.removesuffix(".reading")
    if is_dilution(lane):
        share, difference = _dilution_entries(book, lane, injection, stem, span)
    else:
        pair = {"direct": injection.reading, "certified": injection.certified, "span": span}
        share = book.apply(calibration_error, f"{stem}.error", pair)
        both = {"reading": injection.reading, "other": injection.certified}
        difference = book.apply(reading_difference, f"{stem}.error_difference", both)
    met = judge(book, lane, criterion, stem, share, difference)
    title = f"{criterion.label}, {injection.row.level.value.value} gas, {injection.time:%H:%M}"
    note_check(book, lane, criterion, title, met, ())
    return Injection(injection.row, injection.reading, injection.certified, share, met)


def dilution_factor(book: Book, lane: Lane) -> Entry:
    """The dilution factor of a channel; one where none was entered: its readings are undiluted already."""
    factor, key = lane.channel.dilution_factor, f"channel.{lane.segment}.dilution_factor"
    if factor is not None:
        return book.given(key, factor, "1")
    return book.state(key, 1.0, "1", "no dilution factor entered: readings are taken as undiluted")


def _dilution_entries(book: Book, lane: Lane, injection: Injection, stem: str, span: Entry) -> tuple[Entry, Entry]:
    inputs = {
        "system": injection.reading,
        "dilution_factor": dilution_factor(book, lane),
        "certified": injection.certified,
    }
    share = book.apply(dilution_error, f"{stem}.error", {**inputs, "span": span})
    return share, book.apply(dilution_difference, f"{stem}.error_difference", inputs)


def _system(
    book: Book,
    lane: Lane,
    held: object,
    row: Calibration,
    certified: Entry,
    sets: Sequence[DirectSet],
    number: int,
) -> Injection:
    """One system reading with its bias against the latest accepted direct reading of the same gas."""
    made = _read(book, lane, row, certified, f"system_{number}")
    if is_dilution(lane) or not isinstance(held, dict):
        return made
    span = latest_span(sets, row.time.value)
    direct = _direct_for(sets, row)
    if span is None or direct is None:
        return made
    stem = made.reading.key.removesuffix(".reading")
    share = book.apply(system_bias, f"{stem}.bias", {"system": made.reading, "direct": direct.reading, "span": span})
    both = {"reading": made.reading, "other": direct.reading}
    difference = book.apply(reading_difference, f"{stem}.bias_difference", both)
    return Injection(
        row, made.reading, certified, share, judge(book, lane, held["system_bias"], stem, share, difference)
    )


def _dilution_share(book: Book, lane: Lane, held: object, injection: Injection, sets: Sequence[DirectSet]) -> Injection:
    span = next((s.span for s in reversed(sets) if s.whole and s.begin <= injection.time), None)
    if span is None or not isinstance(held, dict):
        return injection
    stem = injection.reading.key.removesuffix(".reading")
    share, difference = _dilution_entries(book, lane, injection, stem, span)
    met = judge(book, lane, held["system_bias"], stem, share, difference)
    return Injection(injection.row, injection.reading, injection.certified, share, met)


def latest_set(sets: Sequence[DirectSet], before: datetime) -> DirectSet | None:
    """The latest whole direct set that ended before a time, accepted or not: a failed one is not passed over."""
    return next((s for s in reversed(sets) if s.whole and s.end <= before), None)


def latest_span(sets: Sequence[DirectSet], before: datetime) -> Entry | None:
    """The calibration span in force at a time."""
    found = latest_set(sets, before)
    return None if found is None else found.span


def _direct_for(sets: Sequence[DirectSet], row: Calibration) -> Injection | None:
    """The latest accepted direct reading of the same cylinder (the same level where no cylinder is named)."""
    best: Injection | None = None
    for injection in (injection for made in sets for injection in made.injections):
        is_accepted = injection.met is not None and injection.met.value == 1.0
        if is_accepted and injection.time <= row.time.value and _same_gas(injection.row, row):
            best = injection
    return best


def _same_gas(one: Calibration, other: Calibration) -> bool:
    if one.cylinder is not None and other.cylinder is not None:
        return one.cylinder.value == other.cylinder.value
    return one.level.value is other.level.value
