"""Calibrations of one channel: direct sets, system checks, what each is compared with.

Checks pair with runs by time; one system check may close a run and open the next.  Bias refers to the latest
accepted direct reading of the same cylinder.  The calibration span is the high-level gas of the accepted
direct set.  This file makes the entries of the calibrations themselves; `reporter.reduction.correction`
pairs them with runs.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime

from reporter.ledger import Entry, slug
from reporter.methods.criteria import (
    Criterion,
    all_met,
    criteria,
    criterion_met,
    dilution_difference,
    not_held_reason,
    reading_difference,
)
from reporter.methods.method_7e import calibration_error, dilution_error, system_bias
from reporter.outcome import CalibrationPoint, Check
from reporter.problems import Place
from reporter.record import Calibration, Cylinder, Level, Route, SamplingSystem
from reporter.reduction.book import Book, Lane

#: Level names that stand at the low end of the calibration.
LOW_LEVELS = (Level.ZERO, Level.LOW)
UPSCALE_LEVELS = (Level.MID, Level.HIGH)
_DEFAULT_METHODS = {"nox": "7E", "no": "7E", "no2": "7E", "o2": "3A", "co2": "3A", "co": "10", "so2": "6C"}


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
    injections: tuple[Injection, ...]
    whole: bool
    accepted: Entry | None
    span: Entry | None

    @property
    def end(self) -> datetime:
        """When its last gas was read."""
        return max(injection.time for injection in self.injections)

    @property
    def is_accepted(self) -> bool:
        """Whether it is a whole set whose every level meets the criterion."""
        return self.accepted is not None and self.accepted.value == 1.0


@dataclass(frozen=True, slots=True)
class Calibrations:
    """All calibrations of a channel; `papers` lists why its certificates do not bear the results."""

    lane: Lane
    held: dict[str, Criterion] | None
    sets: tuple[DirectSet, ...]
    system: tuple[Injection, ...]
    papers: tuple[str, ...]


def method_of(lane: Lane) -> str:
    """The method of a channel: as entered, else the one its gas is usually measured by."""
    entered = lane.channel.method
    return entered.value if entered is not None else _DEFAULT_METHODS.get(lane.gas.key, "")


def is_dilution(lane: Lane) -> bool:
    """Whether a channel is a dilution system."""
    return lane.channel.system is not None and lane.channel.system.value is SamplingSystem.DILUTION


def calibrations(book: Book, lane: Lane) -> Calibrations:
    """Enter every calibration of a channel and its calibration error or bias."""
    method = method_of(lane)
    held = criteria(method)
    if held is None:
        book.trouble("no-criteria-held", lane.channel.place, f"{lane.name}: {not_held_reason(method)}")
    if lane.channel.method is None:
        book.say(f"No method was entered for {lane.name}; Method {method} is taken." if method else "")
    rows = sorted(
        (row for row in book.record.calibrations if row.channel.value == lane.name),
        key=lambda r: r.time.value,
    )
    papers: list[str] = []
    sets: list[DirectSet] = []
    system: list[Injection] = []
    group: list[Injection] = []
    direct_count = 0
    for row in rows:
        if row.level.value is Level.NO2:
            continue
        certified = _certified(book, lane, row, papers)
        if certified is None:
            continue
        in_set = _opens_set(lane, row, rows)
        if not in_set and group:
            sets.append(_close(book, lane, held, group, len(sets) + 1))
            group = []
        if in_set:
            direct_count += 1
            group.append(_read(book, lane, row, certified, f"direct_{direct_count}"))
        if row.route.value is Route.SYSTEM:
            injection = _system(book, lane, held, row, certified, sets, len(system) + 1)
            system.append(injection)
    if group:
        sets.append(_close(book, lane, held, group, len(sets) + 1))
    if is_dilution(lane):
        system = [_dilution_share(book, lane, held, injection, sets) for injection in system]
    return Calibrations(
        lane, dict(held) if held is not None else None, tuple(sets), tuple(system), tuple(papers)
    )


def _opens_set(lane: Lane, row: Calibration, rows: list[Calibration]) -> bool:
    """Direct readings form sets; a dilution system's three-level readings through the system do."""
    if not is_dilution(lane):
        return row.route.value is Route.DIRECT
    near = [r for r in rows if abs((r.time.value - row.time.value).total_seconds()) <= 3600.0]
    return {Level.MID, Level.HIGH} <= {r.level.value for r in near}


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


def _certified(book: Book, lane: Lane, row: Calibration, papers: list[str]) -> Entry | None:
    """The certified value of a calibration gas: the certificate's, else the one typed beside the reading."""
    cylinder = _certificate(book, lane, row)
    if cylinder is not None:
        _examine(book, lane, row, cylinder, papers)
        key = f"cylinder.{slug(cylinder.cylinder.value)}.{lane.segment}.certified"
        value = cylinder.certified_value
        if value.unit is None and cylinder.unit is not None:
            value = type(value)(value.value, value.place, value.text, cylinder.unit.value)
        return book.given(key, value, lane.unit)
    name = row.cylinder.value if row.cylinder is not None else ""
    key = f"cylinder.{slug(name or row.level.value.value)}.{lane.segment}.certified"
    if row.level.value is Level.ZERO and row.certified_value is None:
        return book.state(key, 0.0, lane.unit, "zero gas: the certified value is taken as zero")
    if row.level.value is not Level.ZERO:
        said = f"no certificate in Cylinders for {name or row.level.value.value + ' gas'} ({lane.gas.label})"
        _paper(book, "certificate-missing", lane, row.place, said, papers)
    if row.certified_value is None:
        return None
    return book.given(key, row.certified_value, lane.unit)


def _certificate(book: Book, lane: Lane, row: Calibration) -> Cylinder | None:
    if row.cylinder is None:
        return None
    found = book.record.cylinder(row.cylinder.value, lane.channel.gas.value)
    if found is None and row.level.value is Level.ZERO:
        return None
    return found


def _examine(book: Book, lane: Lane, row: Calibration, cylinder: Cylinder, papers: list[str]) -> None:
    """Expiry of a certificate, and its agreement with the value typed beside the reading."""
    day = row.time.value.date()
    kind = cylinder.kind.value if cylinder.kind is not None else "protocol"
    if cylinder.expires is not None and cylinder.expires.value < day:
        said = f"cylinder {cylinder.cylinder.value} expired on {cylinder.expires.value}, used on {day}"
        _paper(book, "cylinder-expired", lane, cylinder.expires.place, said, papers)
    elif cylinder.expires is None and kind == "protocol" and row.level.value is not Level.ZERO:
        said = f"cylinder {cylinder.cylinder.value} has no expiry date"
        _paper(book, "certificate-missing", lane, cylinder.place, said, papers)
    typed = row.certified_value
    if typed is not None and abs(typed.value - cylinder.certified_value.value) > 1e-9 * abs(typed.value):
        said = f"typed {typed.text or typed.value}, certificate {cylinder.certified_value.value:g}"
        _paper(book, "certificate-differs", lane, typed.place, said, papers)


def _paper(book: Book, code: str, lane: Lane, place: Place, said: str, papers: list[str]) -> None:
    book.trouble(code, place, said, concerns=(f"channel.{lane.segment}",))
    if said not in papers:
        papers.append(said)


def _bounds(book: Book, lane: Lane, criterion: Criterion) -> tuple[Entry, Entry]:
    """Bound and alternative of a criterion as entries from the method's text."""
    stem = f"criterion.{lane.segment}.{criterion.name}"
    bound = book.table(f"{stem}.bound", criterion.bound, criterion.unit, criterion.citation)
    other = criterion.alternative if criterion.alternative is not None else -1.0
    return bound, book.table(f"{stem}.alternative", other, lane.unit, criterion.citation)


def judge(book: Book, lane: Lane, criterion: Criterion, stem: str, share: Entry, difference: Entry) -> Entry:
    """Whether a share of span meets its criterion, as an indicator entry ``<stem>.met``."""
    bound, alternative = _bounds(book, lane, criterion)
    inputs = {"share": share, "bound": bound, "difference": difference, "alternative": alternative}
    return book.apply(criterion_met, f"{stem}.met", inputs)


def note_check(
    book: Book, lane: Lane, criterion: Criterion, title: str, met: Entry, runs: tuple[str, ...]
) -> None:
    """List a criterion as it was applied; the entries it compared stand beside its indicator."""
    from reporter.ledger import FromEquation

    assert isinstance(met.origin, FromEquation)
    inputs = dict(met.origin.inputs)
    book.checks.append(
        Check(
            key=met.key,
            title=title,
            gas=lane.gas.label,
            runs=runs,
            value=str(inputs["share"]),
            bound=str(inputs["bound"]),
            citation=criterion.citation,
            met=met.value == 1.0,
            consequence="" if met.value == 1.0 else criterion.consequence,
            difference=str(inputs["difference"]),
            alternative=str(inputs["alternative"]) if criterion.alternative is not None else "",
            relation=criterion.relation,
            decides_validity=criterion.name != "drift",
        )
    )


def _close(book: Book, lane: Lane, held: object, group: list[Injection], number: int) -> DirectSet:
    """Close a direct set: its span, the calibration error of each gas, and whether it is accepted."""
    latest: dict[Level, Injection] = {}
    for injection in group:
        latest[injection.row.level.value] = injection
    low = latest.get(Level.ZERO) or latest.get(Level.LOW)
    whole = low is not None and Level.MID in latest and Level.HIGH in latest
    span = latest[Level.HIGH].certified if Level.HIGH in latest else None
    if span is None or not isinstance(held, dict):
        return DirectSet(number, tuple(latest.values()), whole, None, span)
    judged = [_error(book, lane, held["calibration_error"], injection, span) for injection in latest.values()]
    accepted = None
    if whole:
        flags = [injection.met for injection in judged if injection.met is not None]
        accepted = book.apply(all_met, f"calibration.{lane.segment}.set_{number}.accepted", {"flags": flags})
    return DirectSet(number, tuple(judged), whole, accepted, span)


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


def _dilution_entries(
    book: Book, lane: Lane, injection: Injection, stem: str, span: Entry
) -> tuple[Entry, Entry]:
    factor = lane.channel.dilution_factor
    key = f"channel.{lane.segment}.dilution_factor"
    ratio = (
        book.given(key, factor, "1")
        if factor is not None
        else book.state(key, 1.0, "1", "readings are undiluted")
    )
    inputs = {"system": injection.reading, "dilution_factor": ratio, "certified": injection.certified}
    share = book.apply(dilution_error, f"{stem}.error", {**inputs, "span": span})
    return share, book.apply(dilution_difference, f"{stem}.error_difference", inputs)


def _system(
    book: Book,
    lane: Lane,
    held: object,
    row: Calibration,
    certified: Entry,
    sets: list[DirectSet],
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
    share = book.apply(
        system_bias, f"{stem}.bias", {"system": made.reading, "direct": direct.reading, "span": span}
    )
    both = {"reading": made.reading, "other": direct.reading}
    difference = book.apply(reading_difference, f"{stem}.bias_difference", both)
    return Injection(
        row, made.reading, certified, share, judge(book, lane, held["system_bias"], stem, share, difference)
    )


def _dilution_share(
    book: Book, lane: Lane, held: object, injection: Injection, sets: list[DirectSet]
) -> Injection:
    span = latest_span(sets, injection.time)
    if span is None or not isinstance(held, dict):
        return injection
    stem = injection.reading.key.removesuffix(".reading")
    share, difference = _dilution_entries(book, lane, injection, stem, span)
    met = judge(book, lane, held["system_bias"], stem, share, difference)
    return Injection(injection.row, injection.reading, injection.certified, share, met)


def latest_set(sets: list[DirectSet] | tuple[DirectSet, ...], before: datetime) -> DirectSet | None:
    """The latest accepted whole direct set that ended before a time; the latest whole one if none is accepted."""
    earlier = [s for s in sets if s.whole and s.end <= before]
    accepted = [s for s in earlier if s.is_accepted]
    usable = accepted or earlier
    return usable[-1] if usable else None


def latest_span(sets: list[DirectSet] | tuple[DirectSet, ...], before: datetime) -> Entry | None:
    """The calibration span in force at a time."""
    found = latest_set(sets, before)
    return None if found is None else found.span


def _direct_for(sets: list[DirectSet], row: Calibration) -> Injection | None:
    """The latest accepted direct reading of the same cylinder (the same level where no cylinder is named)."""
    best: Injection | None = None
    for made in sets:
        for injection in made.injections:
            other = injection.row
            same = (
                row.cylinder.value == other.cylinder.value
                if row.cylinder is not None and other.cylinder is not None
                else row.level.value is other.level.value
            )
            usable = injection.met is None or injection.met.value == 1.0
            if same and other.level.value is row.level.value and usable and injection.time <= row.time.value:
                best = injection
    return best
