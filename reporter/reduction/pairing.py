"""Which system checks belong to which run: by time, unless Run and When say otherwise; what voids a check."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from datetime import datetime, timedelta

from reporter.record import Channel, Event, Run, When
from reporter.reduction.book import Book, Lane
from reporter.reduction.calibration import Calibrations, Injection

#: An event that touches the analyzer, and words that say it did not happen.
_ADJUSTED = re.compile(r"\badjust|\bre-?zero|\bre-?span", re.IGNORECASE)
_NOT = re.compile(r"\b(no|not|without|never)\s+(\w+\s+)?(adjust|re-?zero|re-?span)", re.IGNORECASE)
#: A check later than this after the end of its run is said to be late (common practice).
_LONG = timedelta(hours=1)


@dataclass
class Pairing:
    """The system checks of one run: last before it, first after it, low and upscale.

    `mixed` says that the gases before and after are not the same, so that no correction can be made of them.
    """

    run: Run
    before_low: Injection | None = None
    before_up: Injection | None = None
    after_low: Injection | None = None
    after_up: Injection | None = None
    mixed: bool = False
    missing: list[str] = field(default_factory=list)

    def all(self) -> list[Injection]:
        """The checks that are there."""
        return [i for i in (self.before_low, self.before_up, self.after_low, self.after_up) if i is not None]


def pair(book: Book, found: Calibrations, runs: Sequence[Run]) -> list[Pairing]:
    """Pair the system checks of a channel with the runs."""
    return [_paired(book, found, run, runs) for run in runs]


def _paired(book: Book, found: Calibrations, run: Run, runs: Sequence[Run]) -> Pairing:
    start, end = run.start.value, run.end.value
    earlier = max((other.end.value for other in runs if other.end.value <= start), default=None)
    later = min((other.start.value for other in runs if other.start.value >= end), default=None)
    before = _side(found, run, When.BEFORE, lambda t: t <= start and (earlier is None or t >= earlier))
    after = _side(found, run, When.AFTER, lambda t: t >= end and (later is None or t <= later))
    made = Pairing(run)
    mean = book.ledger.get(found.lane.key(run, "mean"))
    made.before_low, made.after_low = _of_one_gas(before, after, None, low=True)
    made.before_up, made.after_up = _of_one_gas(before, after, None if mean is None else mean.value, low=False)
    _void_after_adjustment(book, found.lane, made)
    _missing(book, found, made, later)
    _mixed(book, found.lane, made)
    _late(book, found.lane, made)
    return made


def _side(found: Calibrations, run: Run, when: When, in_time: Callable[[datetime], bool]) -> list[Injection]:
    """The checks of one side of a run, nearest in meaning last before it and first after it: those named for it win."""
    named = [i for i in found.system if _named(i, run, when)]
    timed = [i for i in found.system if in_time(i.time) and i not in named and not _other_side(i, run, when)]
    return [*timed, *named] if when is When.BEFORE else [*named, *timed]


def _named(injection: Injection, run: Run, when: When) -> bool:
    row = injection.row
    return row.run is not None and row.run.value == run.run.value and row.when is not None and row.when.value is when


def _other_side(injection: Injection, run: Run, when: When) -> bool:
    """Whether a check was given by hand to the other side of this run."""
    row = injection.row
    if row.run is None or row.when is None or row.when.value is When.INITIAL:
        return False
    return row.run.value == run.run.value and row.when.value is not when


def _of_one_gas(
    before: Sequence[Injection], after: Sequence[Injection], mean: float | None, *, low: bool
) -> tuple[Injection | None, Injection | None]:
    """The checks before and after of one gas; of two upscale gases, the one nearer to the run mean."""
    pres, posts = [i for i in before if i.low is low], [i for i in after if i.low is low]
    pairs: list[tuple[float, Injection, Injection]] = []
    for post in posts:
        pre = next((i for i in reversed(pres) if i.certified.key == post.certified.key), None)
        if pre is not None:
            distance = 0.0 if mean is None else abs(post.certified.value - mean)
            pairs.append((distance, pre, post))
    if pairs:
        _, pre, post = min(pairs, key=lambda p: p[0])
        return pre, post
    return (pres[-1] if pres else None), (posts[0] if posts else None)


def _void_after_adjustment(book: Book, lane: Lane, made: Pairing) -> None:
    """An adjustment between the end of a run and its check after it voids that check."""
    run = made.run
    for event in book.record.events:
        if not _adjusts(event, lane.channel, book.record.channels):
            continue
        voided = [
            i for i in (made.after_low, made.after_up) if i is not None and run.end.value <= event.time.value <= i.time
        ]
        if not voided:
            continue
        made.after_low = None if made.after_low in voided else made.after_low
        made.after_up = None if made.after_up in voided else made.after_up
        said = f"{event.what.value} at {event.time.value:%H:%M}, before the check at {voided[0].time:%H:%M}"
        made.missing.append(said)
        book.trouble("adjustment-before-check", event.place, said, concerns=(lane.key(run, "corrected"),))


def _adjusts(event: Event, channel: Channel, channels: Sequence[Channel]) -> bool:
    """Whether an event is an adjustment of a channel: of the channels it names, or of all where it names none."""
    words = event.what.value
    if _ADJUSTED.search(words) is None or _NOT.search(words) is not None:
        return False
    named = [other for other in channels if _names(words, other.channel.value)]
    named = named or [other for other in channels if _names(words, other.gas.value)]
    return not named or channel in named


def _names(words: str, name: str) -> bool:
    return re.search(rf"(?<!\w){re.escape(name)}(?!\w)", words, re.IGNORECASE) is not None


def _missing(book: Book, found: Calibrations, made: Pairing, later: datetime | None) -> None:
    lane, run = found.lane, made.run
    sides = (("before", made.before_low, made.before_up), ("after", made.after_low, made.after_up))
    voided = bool(made.missing)
    for side, low, up in sides:
        if (low is not None and up is not None) or (side == "after" and voided):
            continue
        gas = "zero or low-level gas" if low is None else "upscale gas"
        what = "system check" if low is None and up is None else gas
        said = f"{lane.name}, run {run.run.value}: no {what} {side} the run"
        if side == "after":
            late = later is not None and any(i.time >= later for i in found.system)
        else:
            late = any(run.start.value < i.time < run.end.value for i in found.system)
        place = run.end.place if side == "after" else run.start.place
        code = "calibration-late" if late else "calibration-missing"
        book.trouble(code, place, said, concerns=(lane.key(run, "corrected"),))
        made.missing.append(said)


def _mixed(book: Book, lane: Lane, made: Pairing) -> None:
    """Gases before and after a run that are not the same: their readings say nothing about each other."""
    pairs = (("zero or low-level", made.before_low, made.after_low), ("upscale", made.before_up, made.after_up))
    for name, pre, post in pairs:
        if pre is None or post is None or pre.certified.key == post.certified.key:
            continue
        made.mixed = True
        said = f"{lane.name}, run {made.run.run.value}: the {name} gases before and after the run are not the same"
        concerns = (lane.key(made.run, "corrected"),)
        book.trouble("calibration-missing", post.row.place, said, concerns=concerns)
        made.missing.append(said)


def _late(book: Book, lane: Lane, made: Pairing) -> None:
    """A closing check long after its run."""
    checks = [i for i in (made.after_low, made.after_up) if i is not None]
    if not checks:
        return
    last = max(checks, key=lambda i: i.time)
    passed = last.time - made.run.end.value
    if passed > _LONG:
        minutes = passed.total_seconds() / 60.0
        said = f"{lane.name}, run {made.run.run.value}: {minutes:.0f} minutes after its end"
        book.trouble("sequence-late", last.row.place, said)
