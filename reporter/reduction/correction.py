"""Runs and their calibrations: pairing by time, drift, corrected mean, and whether the run is valid.

Consequences follow Method 7E: bias not met makes the run invalid; drift not met with bias met leaves it
valid; after either, no later run is valid until a three-point set and a bias check are met.  Validity is a
chain of indicator entries, so that a changed reading changes it in the workbook as it does here.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reporter.equation import Citation
from reporter.ledger import Entry
from reporter.methods.criteria import all_met, any_met, at_or_below, reading_difference
from reporter.methods.method_7e import corrected_low, corrected_zero, drift, mean_of_two
from reporter.outcome import Check
from reporter.record import Level, Run
from reporter.reduction.book import Book, Lane
from reporter.reduction.calibration import (
    Calibrations,
    DirectSet,
    Injection,
    dilution_factor,
    is_dilution,
    latest_set,
)
from reporter.reduction.equations import undiluted
from reporter.reduction.judging import judge, note_check
from reporter.reduction.pairing import Pairing, pair

_SPAN = Citation("m7e", "3.4")


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
        standing, why = _standing(book, found, made, clean, pairings[:position])
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
    if made.mixed:
        return None
    low = book.apply(mean_of_two, lane.key(run, "zero"), {"before": low_pre.reading, "after": low_post.reading})
    upscale = book.apply(mean_of_two, lane.key(run, "upscale"), {"before": up_pre.reading, "after": up_post.reading})
    common = {"average": mean, "upscale": upscale, "certified": up_post.certified}
    if low_post.row.level.value is Level.ZERO and low_post.certified.value == 0.0:
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
        if pre is None or post is None or pre.share is None or post.share is None or made.mixed:
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
    book: Book, found: Calibrations, made: Pairing, clean: Entry | None, before: Sequence[Pairing]
) -> tuple[Entry, str]:
    """Whether the measuring system may be used for a run: an accepted set, and no open failure since."""
    run, key = made.run, found.lane.key(made.run, "standing")
    last = latest_set(found.sets, run.start.value)
    if last is None or last.accepted is None:
        return _without_set(book, found, run)
    why = "the latest calibration error test is not met"
    if clean is None:
        return book.apply(all_met, key, {"flags": [last.accepted]}), why
    if last.accepted.value == 1.0:
        why = "an earlier bias or drift was not met and no three-point set with a bias check followed"
    checks = [i.met for i in (made.before_low, made.before_up) if i is not None and i.met is not None]
    if len(checks) < 2 or not _renewed(last, made, before):
        return book.apply(all_met, key, {"flags": [clean, last.accepted]}), why
    again = book.apply(all_met, f"{key}.renewed", {"flags": [last.accepted, *checks]})
    met = book.apply(any_met, f"{key}.any", {"flags": [clean, again]})
    return book.apply(all_met, key, {"flags": [met, last.accepted]}), why


def _without_set(book: Book, found: Calibrations, run: Run) -> tuple[Entry, str]:
    """No whole set before a run: it was made too late, or not at all."""
    late = min((made.begin for made in found.sets if made.whole), default=None)
    why = "no whole direct set (zero or low, mid, high) before the run"
    if late is not None:
        why += f": the first was made at {late:%H:%M}, after the run had begun"
    code = "span-missing" if late is None else "calibration-late"
    said = f"{found.lane.name}, run {run.run.value}: {why}"
    book.trouble(code, run.start.place, said, concerns=(found.lane.key(run, "corrected"),))
    return book.state(found.lane.key(run, "standing"), 0.0, "1", why), why


def _renewed(last: DirectSet, made: Pairing, before: Sequence[Pairing]) -> bool:
    """Whether a set followed the last run's closing checks, and the checks before this run followed the set."""
    closing = [i.time for earlier in before for i in (earlier.after_low, earlier.after_up) if i is not None]
    closing += [earlier.run.end.value for earlier in before]
    checks = [i for i in (made.before_low, made.before_up) if i is not None]
    return last.end >= max(closing) and all(check.time >= last.end for check in checks)


def _validity(
    book: Book, found: Calibrations, made: Pairing, value: Entry | None, standing: Entry, why: str
) -> Corrected:
    """Put together whether a run of a channel is valid, and the reasons where it is not."""
    lane, run = found.lane, made.run
    assert found.held is not None
    flags: list[Entry] = [standing]
    reasons: list[str] = [why] if standing.value != 1.0 else []
    names = {"before": (made.before_low, made.before_up), "after": (made.after_low, made.after_up)}
    blocks = list(made.missing)
    for side, checks in names.items():
        for injection in checks:
            if injection is None:
                continue
            gas = "zero or low-level" if injection.low else "upscale"
            if injection.met is None:
                blocks.append(_without_bias(book, lane, made, injection, f"{gas} gas {side} the run"))
                continue
            flags.append(injection.met)
            title = f"System bias, {gas} gas, {side} run {run.run.value}"
            note_check(book, lane, found.held["system_bias"], title, injection.met, (run.key,))
            if injection.met.value != 1.0:
                reasons.append(f"bias of the {gas} gas {side} the run is not met")
    span_set = latest_set(found.sets, run.start.value)
    span = span_set.span if span_set is not None else None
    mean = book.ledger.get(lane.key(run, "mean"))
    if span is not None and mean is not None:
        flags.append(_within_span(book, lane, run, mean, span, reasons))
    blocks += _papers(found, made, span_set)
    if mean is None:
        blocks.append("there is no mean of valid readings")
    elif value is None and not blocks:
        blocks.append("the correction for bias and drift has no value")
    if blocks:
        reasons.extend(blocks)
        flags.append(book.state(lane.key(run, "valid.papers"), 0.0, "1", "; ".join(blocks)))
    valid = book.apply(all_met, lane.key(run, "valid"), {"flags": flags})
    return Corrected(run, lane, made, value, valid, tuple(dict.fromkeys(reasons)), span)


def _without_bias(book: Book, lane: Lane, made: Pairing, injection: Injection, words: str) -> str:
    """A system reading whose bias cannot be stated, for want of an accepted direct reading of the same gas."""
    said = f"no accepted direct reading of the {words} to state its bias against"
    about = f"{lane.name}, run {made.run.run.value}: {said}"
    book.trouble("calibration-missing", injection.row.place, about, concerns=(lane.key(made.run, "corrected"),))
    return said


def _papers(found: Calibrations, made: Pairing, span_set: DirectSet | None) -> list[str]:
    """What is wrong with the certificates of the gases a run rests on."""
    used = [*made.all(), *(span_set.injections if span_set is not None else ())]
    return list(dict.fromkeys(said for injection in used for said in found.papers.of(injection.certified)))


def _within_span(book: Book, lane: Lane, run: Run, mean: Entry, span: Entry, reasons: list[str]) -> Entry:
    if is_dilution(lane):
        inputs = {"reading": mean, "factor": dilution_factor(book, lane)}
        mean = book.apply(undiluted, lane.key(run, "mean.undiluted"), inputs)
    met = book.apply(at_or_below, lane.key(run, "within_span"), {"value": mean, "bound": span})
    book.checks.append(
        Check(
            key=met.key,
            title=f"Run mean against the calibration span, run {run.run.value}",
            gas=lane.gas.label,
            runs=(run.key,),
            value=mean.key,
            bound=span.key,
            citation=_SPAN,
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
