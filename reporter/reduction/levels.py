"""Levels of the calibration gases, and of the emission, against the calibration span."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from reporter.ledger import Entry
from reporter.methods.criteria import Criterion, at_or_above, at_or_below, below, share_of_span
from reporter.outcome import Check
from reporter.record import Level, Run
from reporter.reduction.book import Book, Lane
from reporter.reduction.calibration import Calibrations, DirectSet, latest_set

_RELATIONS = {"at most": at_or_below, "at least": at_or_above, "less than": below}
_OF_LEVEL = {
    Level.ZERO: ("low_level_share",),
    Level.LOW: ("low_level_share",),
    Level.MID: ("mid_level_low", "mid_level_high"),
}


def check_levels(book: Book, found: Calibrations, runs: Sequence[Run]) -> None:
    """Enter each gas of each whole direct set, and each run mean, as a share of span with its criterion."""
    if found.held is None:
        return
    for made in found.sets:
        bears_on = tuple(run.key for run in runs if latest_set(found.sets, run.start.value) is made)
        _name_runs(book, made, bears_on)
        if made.whole and made.span is not None:
            _check_set(book, found, made, bears_on)
    for run in runs:
        _check_use(book, found, run)
    book.say(
        "Interference response (Method 7E, § 13.4) and stratification (§ 8.1.2) are not in the field record; "
        "their criteria are not applied here."
    )


def _name_runs(book: Book, made: DirectSet, runs: tuple[str, ...]) -> None:
    """Name the runs a set bears on in the checks of its calibration error, which were made before they were known."""
    mine = {injection.met.key for injection in made.injections if injection.met is not None}
    book.checks[:] = [replace(check, runs=runs) if check.key in mine else check for check in book.checks]


def _check_set(book: Book, found: Calibrations, made: DirectSet, runs: tuple[str, ...]) -> None:
    assert found.held is not None
    assert made.span is not None
    lane = found.lane
    for injection in made.injections:
        for name in _OF_LEVEL.get(injection.row.level.value, ()):
            criterion = found.held[name]
            key = f"{injection.reading.key.removesuffix('.reading')}.level"
            inputs = {"value": injection.certified, "span": made.span}
            share = book.apply(share_of_span, key, inputs)
            words = f"{criterion.label}, set {made.number}"
            _enter(book, lane, criterion, share, f"{key}.{name}", words, runs)


def _check_use(book: Book, found: Calibrations, run: Run) -> None:
    """How much of the span a run's emission uses, of the span in force."""
    assert found.held is not None
    lane = found.lane
    in_force = latest_set(found.sets, run.start.value)
    mean = book.ledger.get(lane.key(run, "mean"))
    if in_force is None or in_force.span is None or mean is None:
        return
    share = book.apply(share_of_span, lane.key(run, "span_use"), {"value": mean, "span": in_force.span})
    criterion = found.held["span_use"]
    words = f"{criterion.label}, run {run.run.value}"
    _enter(book, lane, criterion, share, lane.key(run, "span_use.enough"), words, (run.key,))


def _enter(
    book: Book, lane: Lane, criterion: Criterion, share: Entry, key: str, words: str, runs: tuple[str, ...]
) -> None:
    bound = book.table(
        f"criterion.{lane.segment}.{criterion.name}.bound", criterion.bound, criterion.unit, criterion.citation
    )
    met = book.apply(_RELATIONS[criterion.relation], f"{key}.met", {"value": share, "bound": bound})
    book.checks.append(
        Check(
            key=met.key,
            title=words,
            gas=lane.gas.label,
            runs=runs,
            value=share.key,
            bound=bound.key,
            citation=criterion.citation,
            met=met.value == 1.0,
            consequence="" if met.value == 1.0 else criterion.consequence,
            relation=criterion.relation,
        )
    )
