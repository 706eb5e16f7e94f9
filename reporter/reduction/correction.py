"""Runs and their calibrations: pairing by time, drift, corrected mean, and whether the run is valid.

Consequences follow Method 7E: bias not met makes the run invalid; drift not met with bias met leaves it
valid; after either, no later run is valid until a three-point set and a bias check are met.  Validity is a
chain of indicator entries, so that a changed reading changes it in the workbook as it does here.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from reporter.ledger import Entry
from reporter.methods.criteria import all_met, any_met, at_or_below, reading_difference
from reporter.methods.method_7e import corrected_low, corrected_zero, drift, mean_of_two
from reporter.outcome import Check
from reporter.record import Level, Run, When
from reporter.reduction.book import Book, Lane
from reporter.reduction.calibration import Calibrations, Injection, judge, latest_set, note_check

_ADJUST = ("adjust",)


@dataclass
class Pairing:
    """The system checks of one run: last before it, first after it, low and upscale."""

    run: Run
    before_low: Injection | None = None
    before_up: Injection | None = None
    after_low: Injection | None = None
    after_up: Injection | None = None
    missing: list[str] = field(default_factory=list)

    def all(self) -> list[Injection]:
        """The checks that are there."""
        return [i for i in (self.before_low, self.before_up, self.after_low, self.after_up) if i is not None]

    @property
    def whole(self) -> bool:
        """Whether all four readings are there."""
        return len(self.all()) == 4


@dataclass(frozen=True, slots=True)
class Corrected:
    """What the calibrations make of one run of a channel."""

    run: Run
    lane: Lane
    pairing: Pairing | None
    value: Entry | None
    valid: Entry
    reasons: tuple[str, ...]
    span: Entry | None


def pair(book: Book, found: Calibrations, runs: Sequence[Run]) -> list[Pairing]:
    """Pair the system checks with the runs, by time unless Run and When say otherwise."""
    paired: list[Pairing] = []
    for position, run in enumerate(runs):
        earlier = runs[position - 1].end.value if position else None
        later = runs[position + 1].start.value if position + 1 < len(runs) else None
        mine = [i for i in found.system if _named(i, run, When.BEFORE)]
        before = mine or [
            i
            for i in found.system
            if i.time <= run.start.value
            and (earlier is None or i.time >= earlier)
            and not _elsewhere(i, run, When.BEFORE)
        ]
        mine = [i for i in found.system if _named(i, run, When.AFTER)]
        after = mine or [
            i
            for i in found.system
            if i.time >= run.end.value
            and (later is None or i.time <= later)
            and not _elsewhere(i, run, When.AFTER)
        ]
        made = Pairing(run)
        made.after_low = next((i for i in after if i.low), None)
        made.before_low = next((i for i in reversed(before) if i.low), None)
        made.after_up, made.before_up = _upscale(book, found.lane, run, before, after)
        _void_after_adjustment(book, found.lane, made)
        _missing(book, found, made, later is not None)
        paired.append(made)
    return paired


def _named(injection: Injection, run: Run, when: When) -> bool:
    row = injection.row
    return (
        row.run is not None
        and row.run.value == run.run.value
        and row.when is not None
        and row.when.value is when
    )


def _elsewhere(injection: Injection, run: Run, when: When) -> bool:
    """Whether a check was given by hand to another run, or to the other side of this one."""
    row = injection.row
    if row.run is None or row.when is None or row.when.value is When.INITIAL:
        return False
    return not _named(injection, run, when) and row.run.value == run.run.value


def _upscale(
    book: Book, lane: Lane, run: Run, before: list[Injection], after: list[Injection]
) -> tuple[Injection | None, Injection | None]:
    """The upscale checks after and before a run, of one gas; of two, the one closer to the run mean."""
    mean = book.ledger.get(lane.key(run, "mean"))
    pairs: list[tuple[float, Injection, Injection]] = []
    for post in (i for i in after if not i.low):
        pre = next((i for i in reversed(before) if i.certified.key == post.certified.key), None)
        if pre is not None:
            distance = abs(post.certified.value - mean.value) if mean is not None else 0.0
            pairs.append((distance, post, pre))
    if pairs:
        _, post, pre = min(pairs, key=lambda p: p[0])
        return post, pre
    return next((i for i in after if not i.low), None), next((i for i in reversed(before) if not i.low), None)


def _void_after_adjustment(book: Book, lane: Lane, made: Pairing) -> None:
    """An adjustment between the end of a run and its check after it voids that check."""
    for event in book.record.events:
        words = event.what.value.lower()
        if not any(word in words for word in _ADJUST):
            continue
        about = [other for other in book.record.channels if other.channel.value.lower() in words]
        if about and lane.channel not in about:
            continue
        for name in ("after_low", "after_up"):
            check = getattr(made, name)
            if check is not None and made.run.end.value <= event.time.value <= check.time:
                setattr(made, name, None)
                said = (
                    f"{event.what.value} at {event.time.value:%H:%M}, before the check at {check.time:%H:%M}"
                )
                if said not in made.missing:
                    made.missing.append(said)
                    book.trouble(
                        "adjustment-before-check",
                        event.place,
                        said,
                        concerns=(lane.key(made.run, "corrected"),),
                    )


def _missing(book: Book, found: Calibrations, made: Pairing, more_runs: bool) -> None:
    lane, run = found.lane, made.run
    sides = (("before", made.before_low, made.before_up), ("after", made.after_low, made.after_up))
    for side, low, up in sides:
        if low is not None and up is not None:
            continue
        if side == "after" and made.missing:
            continue
        what = (
            "system check"
            if low is None and up is None
            else "zero or low-level gas"
            if low is None
            else "upscale gas"
        )
        said = f"{lane.name}, run {run.run.value}: no {what} {side} the run"
        late = side == "after" and more_runs and any(i.time >= run.end.value for i in found.system)
        book.trouble(
            "calibration-late" if late else "calibration-missing",
            run.end.place if side == "after" else run.start.place,
            said,
            concerns=(lane.key(run, "corrected"),),
        )
        made.missing.append(said)


def correct(book: Book, found: Calibrations, runs: Sequence[Run]) -> list[Corrected]:
    """Corrected mean and validity of every run of a channel."""
    pairings = pair(book, found, runs) if found.held is not None else []
    results: list[Corrected] = []
    clean: Entry | None = None
    for position, run in enumerate(runs):
        if found.held is None:
            results.append(_without_criteria(book, found, run))
            continue
        made = pairings[position]
        value = _corrected(book, found, made)
        drifts = _drifts(book, found, made)
        standing, why = _standing(book, found, run, made, clean)
        results.append(_validity(book, found, made, value, standing, why))
        after = [i.met for i in (made.after_low, made.after_up) if i is not None and i.met is not None]
        flags = [standing, *after, *drifts]
        clean = book.apply(all_met, found.lane.key(run, "clean"), {"flags": flags})
    return results


def _without_criteria(book: Book, found: Calibrations, run: Run) -> Corrected:
    """A method whose criteria are not held: the mean stands uncorrected, and nothing is said to be met."""
    value = book.ledger.get(found.lane.key(run, "mean"))
    reason = "no valid mean" if value is None else "no criteria are held for its method"
    valid = book.state(found.lane.key(run, "valid"), 0.0 if value is None else 1.0, "1", reason)
    return Corrected(run, found.lane, None, value, valid, () if value is not None else (reason,), None)


def _corrected(book: Book, found: Calibrations, made: Pairing) -> Entry | None:
    """Run mean by 7E-5a or 7E-5b from the mean of the readings before and after."""
    lane, run = found.lane, made.run
    mean = book.ledger.get(lane.key(run, "mean"))
    low_pre, low_post, up_pre, up_post = made.before_low, made.after_low, made.before_up, made.after_up
    if mean is None or low_pre is None or low_post is None or up_pre is None or up_post is None:
        return None
    low = book.apply(
        mean_of_two, lane.key(run, "zero"), {"before": low_pre.reading, "after": low_post.reading}
    )
    upscale = book.apply(
        mean_of_two, lane.key(run, "upscale"), {"before": up_pre.reading, "after": up_post.reading}
    )
    common = {"average": mean, "upscale": upscale, "certified": up_post.certified}
    if low_post.row.level.value is Level.ZERO:
        return book.attempt(corrected_zero, lane.key(run, "corrected"), {**common, "zero": low})
    inputs = {**common, "low": low, "low_certified": low_post.certified}
    return book.attempt(corrected_low, lane.key(run, "corrected"), inputs)


def _drifts(book: Book, found: Calibrations, made: Pairing) -> list[Entry]:
    """Drift of the low and the upscale gas over a run, with its criterion."""
    lane, run = found.lane, made.run
    assert found.held is not None
    flags: list[Entry] = []
    pairs = (("zero", made.before_low, made.after_low), ("upscale", made.before_up, made.after_up))
    for name, pre, post in pairs:
        if pre is None or post is None or pre.share is None or post.share is None:
            continue
        stem = lane.key(run, f"drift.{name}")
        share = book.apply(drift, stem, {"after": post.share, "before": pre.share})
        both = {"reading": post.reading, "other": pre.reading}
        difference = book.apply(reading_difference, lane.key(run, f"drift_difference.{name}"), both)
        met = judge(book, lane, found.held["drift"], stem, share, difference)
        gas = "zero or low-level" if name == "zero" else "upscale"
        note_check(book, lane, found.held["drift"], f"Drift, {gas} gas, run {run.run.value}", met, (run.key,))
        biased = any(i.met is not None and i.met.value != 1.0 for i in (pre, post))
        if met.value != 1.0 and not biased:
            said = f"{lane.name}, run {run.run.value}: drift of the {gas} gas is not met; the run stays valid"
            book.say(f"{said}, and no later run is valid until a three-point set and a bias check are met.")
        flags.append(met)
    return flags


def _standing(
    book: Book, found: Calibrations, run: Run, made: Pairing, clean: Entry | None
) -> tuple[Entry, str]:
    """Whether the measuring system may be used for a run: an accepted set, and no open failure since."""
    key = found.lane.key(run, "standing")
    last = latest_set(found.sets, run.start.value)
    if last is None or last.accepted is None:
        why = f"no whole direct set (zero or low, mid, high) of {found.lane.name} before run {run.run.value}"
        book.trouble("span-missing", run.start.place, why, concerns=(found.lane.key(run, "corrected"),))
        return book.state(key, 0.0, "1", why), why
    checks = [i.met for i in (made.before_low, made.before_up) if i is not None and i.met is not None]
    if clean is None:
        return book.apply(all_met, key, {"flags": [last.accepted]}), "the calibration error test is not met"
    runs = [r for r in book.record.runs if r.end.value <= run.start.value]
    since = max(r.end.value for r in runs)
    renewed = last.end >= since and all(i.time >= last.end for i in (made.before_low, made.before_up) if i)
    why = "an earlier bias or drift was not met and no three-point set with a bias check followed"
    if not renewed or len(checks) < 2:
        return book.apply(all_met, key, {"flags": [clean, last.accepted]}), why
    again = book.apply(all_met, f"{key}.renewed", {"flags": [last.accepted, *checks]})
    return book.apply(any_met, key, {"flags": [clean, again]}), why


def _validity(
    book: Book, found: Calibrations, made: Pairing, value: Entry | None, standing: Entry, why: str
) -> Corrected:
    """Put together whether a run of a channel is valid, and the reasons where it is not."""
    lane, run = found.lane, made.run
    assert found.held is not None
    flags: list[Entry] = [standing]
    reasons: list[str] = [why] if standing.value != 1.0 else []
    names = {"before": (made.before_low, made.before_up), "after": (made.after_low, made.after_up)}
    for side, checks in names.items():
        for injection in checks:
            if injection is None or injection.met is None:
                continue
            flags.append(injection.met)
            gas = "zero or low-level" if injection.low else "upscale"
            title = f"System bias, {gas} gas, {side} run {run.run.value}"
            note_check(book, lane, found.held["system_bias"], title, injection.met, (run.key,))
            if injection.met.value != 1.0:
                reasons.append(f"bias of the {gas} gas {side} the run is not met")
    span_set = latest_set(found.sets, run.start.value)
    span = span_set.span if span_set is not None else None
    mean = book.ledger.get(lane.key(run, "mean"))
    if span is not None and mean is not None:
        flags.append(_within_span(book, lane, run, mean, span, reasons))
    blocks = [*made.missing, *found.papers]
    if mean is None:
        blocks.append("there is no mean of valid readings")
    elif value is None and not blocks:
        blocks.append("the correction for bias and drift has no value")
    if blocks:
        reasons.extend(blocks)
        flags.append(book.state(lane.key(run, "valid.papers"), 0.0, "1", "; ".join(blocks)))
    valid = book.apply(all_met, lane.key(run, "valid"), {"flags": flags})
    return Corrected(run, lane, made, value, valid, tuple(dict.fromkeys(reasons)), span)


def _within_span(book: Book, lane: Lane, run: Run, mean: Entry, span: Entry, reasons: list[str]) -> Entry:
    from reporter.equation import Citation

    met = book.apply(at_or_below, lane.key(run, "within_span"), {"value": mean, "bound": span})
    book.checks.append(
        Check(
            key=met.key,
            title=f"Run mean against the calibration span, run {run.run.value}",
            gas=lane.gas.label,
            runs=(run.key,),
            value=mean.key,
            bound=span.key,
            citation=Citation("m7e", "3.4"),
            met=met.value == 1.0,
            consequence="" if met.value == 1.0 else "the run is invalid",
            decides_validity=True,
        )
    )
    if met.value != 1.0:
        said = f"{lane.name}, run {run.run.value}: mean {mean.value:.4g}, span {span.value:.4g} {span.unit}"
        book.trouble("run-mean-above-span", run.place, said, concerns=(lane.key(run, "corrected"),))
        reasons.append("the run mean is above the calibration span")
    return met
