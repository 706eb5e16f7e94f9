"""Criteria applied: bound and alternative as entries, the indicator, and the line in the list of checks."""

from __future__ import annotations

from reporter.ledger import Entry, FromEquation
from reporter.methods.criteria import Criterion, criterion_met
from reporter.outcome import Check
from reporter.reduction.book import Book, Lane
from reporter.reduction.channel_units import in_channel_unit


def _bounds(book: Book, lane: Lane, criterion: Criterion) -> tuple[Entry, Entry]:
    """Bound and alternative of a criterion as entries from the method's text, the alternative in the channel's unit."""
    stem = f"criterion.{lane.segment}.{criterion.name}"
    bound = book.table(f"{stem}.bound", criterion.bound, criterion.unit, criterion.citation)
    key = f"{stem}.alternative"
    found = book.ledger.get(key)
    if found is not None:
        return bound, found
    if criterion.alternative is None:
        return bound, book.state(key, -1.0, lane.unit, "no alternative is printed: never met by it")
    if criterion.alternative_unit == lane.unit:
        return bound, book.table(key, criterion.alternative, lane.unit, criterion.citation)
    printed = book.table(f"{key}.printed", criterion.alternative, criterion.alternative_unit, criterion.citation)
    return bound, in_channel_unit(book, lane, key, printed)


def judge(book: Book, lane: Lane, criterion: Criterion, stem: str, share: Entry, difference: Entry) -> Entry:
    """Whether a share of span meets its criterion, as an indicator entry ``<stem>.met``."""
    bound, alternative = _bounds(book, lane, criterion)
    inputs = {"share": share, "bound": bound, "difference": difference, "alternative": alternative}
    return book.apply(criterion_met, f"{stem}.met", inputs)


def note_check(book: Book, lane: Lane, criterion: Criterion, title: str, met: Entry, runs: tuple[str, ...]) -> None:
    """List a criterion as it was applied; the entries it compared stand beside its indicator."""
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
