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
    following = min((other for other in runs if other.start.value >= end), key=lambda r: r.start.value, default=None)
    later = None if following is None else following.start.value
    before = _side(found, run, When.BEFORE, lambda t: t <= start and (earlier is None or t >= earlier))
    after = _side(found, run, When.AFTER, lambda t: t >= end and (later is None or t <= later))
    made = Pairing(run)
    mean = book.ledger.get(found.lane.key(run, "mean"))
    made.before_low, made.after_low = _of_one_gas(before, after, None, low=True)
    made.before_up, made.after_up = _of_one_gas(before, after, None if mean is None else mean.value, low=False)
    _void_after_adjustment(book, found.lane, made)
    _missing(book, found, made, following)
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


def _missing(book: Book, found: Calibrations, made: Pairing, following: Run | None) -> None:
    """Say which check of a run is missing, and whether it was made at a wrong time instead."""
    lane, run = found.lane, made.run
    voided = bool(made.missing)
    for side, low, up in (("before", made.before_low, made.before_up), ("after", made.after_low, made.after_up)):
        if (low is not None and up is not None) or (side == "after" and voided):
            continue
        gas = "zero or low-level gas" if low is None else "upscale gas"
        what = "system check" if low is None and up is None else f"system check of the {gas}"
        wanted = [i for i in found.system if (low is None and i.low) or (up is None and not i.low)]
        stray = _opening_late(made, wanted) if side == "before" else _closing_stray(made, wanted, following)
        said = f"no {what} {side} the run" + (f": it was made {stray}" if stray else "")
        place = run.start.place if side == "before" else run.end.place
        code = "calibration-missing"
        if stray:
            code = "calibration-late" if side == "before" else "closing-check-misplaced"
        about = f"{lane.name}, run {run.run.value}: {said}"
        book.trouble(code, place, about, concerns=(lane.key(run, "corrected"),))
        made.missing.append(said)


def _opening_late(made: Pairing, wanted: Sequence[Injection]) -> str:
    """When a check that had to open a run was made instead: after the run had begun; nothing where none was."""
    start = made.run.start.value
    inside = [i.time for i in wanted if start < i.time < made.run.end.value and not _closes(made, i)]
    return f"at {min(inside):%H:%M}, after the run had begun at {start:%H:%M}" if inside else ""


def _closing_stray(made: Pairing, wanted: Sequence[Injection], following: Run | None) -> str:
    """When a check that had to close a run was made instead: before its end, or within the next run."""
    end = made.run.end.value
    inside = [i.time for i in wanted if made.run.start.value < i.time < end and _closes(made, i)]
    if inside:
        return f"at {max(inside):%H:%M}, before the run ended at {end:%H:%M}"
    if following is None:
        return ""
    begun = following.start.value
    after = [i.time for i in wanted if begun < i.time < following.end.value]
    return f"at {min(after):%H:%M}, after the next run had begun at {begun:%H:%M}" if after else ""


def _closes(made: Pairing, check: Injection) -> bool:
    """Whether a check within a run is taken for its closing one: where only that is missing, else by the nearer end."""
    has_opening = made.before_low is not None and made.before_up is not None
    has_closing = made.after_low is not None and made.after_up is not None
    if has_opening != has_closing:
        return has_opening
    return check.time - made.run.start.value > made.run.end.value - check.time


def _mixed(book: Book, lane: Lane, made: Pairing) -> None:
    """Gases before and after a run that are not the same: their readings say nothing about each other."""
    pairs = (("zero or low-level", made.before_low, made.after_low), ("upscale", made.before_up, made.after_up))
    for name, pre, post in pairs:
        if pre is None or post is None or pre.certified.key == post.certified.key:
            continue
        made.mixed = True
        said = f"the {name} gases before and after the run are not the same"
        concerns = (lane.key(made.run, "corrected"),)
        about = f"{lane.name}, run {made.run.run.value}: {said}"
        book.trouble("calibration-missing", post.row.place, about, concerns=concerns)
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
