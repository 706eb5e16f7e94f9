"""What a careful reader of the record would say: coverage, missing papers, invalid runs, odd readings."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from reporter.minutes import minutes_text
from reporter.outcome import Series
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book, Lane
from reporter.reduction.window import Window


def look_at_record(
    book: Book,
    tracks: Sequence[Lane],
    abouts: Sequence[RunBook],
    windows: Mapping[str, Window],
    series: Mapping[tuple[str, str], Series | None],
) -> None:
    """Note what the record shows apart from its results."""
    for lane in tracks:
        channel = lane.channel
        if channel.response_time_up is None and channel.response_time_down is None:
            book.trouble("response-time-missing", channel.place, lane.name)
        for about in abouts:
            found = series.get((lane.segment, about.run.key))
            if found is not None:
                _coverage(book, lane, about, found)
            _invalid(book, lane, about)
    _needed(book, tracks)
    _spans(book, abouts)


def _coverage(book: Book, lane: Lane, about: RunBook, found: Series) -> None:
    if not found.missing_minutes:
        return
    excluded = sum(1 for _, reading, why in found.left_out if why != reading.kind.value)
    said = f"{lane.name}, run {about.run.run.value}: {minutes_text(found.missing_minutes)}"
    said += f" of {found.minutes}; the mean rests on {len(found.used)} reading(s)"
    if excluded:
        said += f", {excluded} reading(s) are excluded by an event"
    book.trouble("coverage-low", about.run.place, said)


def _invalid(book: Book, lane: Lane, about: RunBook) -> None:
    corrected = about.corrected.get(lane.segment)
    if corrected is None or corrected.valid.value == 1.0:
        return
    said = f"{lane.name}, run {about.run.run.value}: {'; '.join(corrected.reasons)}"
    book.trouble("run-invalid", about.run.place, said, concerns=(lane.key(about.run, "corrected"),))


def _needed(book: Book, tracks: Sequence[Lane]) -> None:
    if not any(lane.gas.is_diluent for lane in tracks):
        book.trouble("diluent-missing", book.file_place(), "no channel measures O2 or CO2")
    if all(lane.gas.is_diluent for lane in tracks):
        book.trouble("pollutant-missing", book.file_place(), "no channel measures a pollutant")


def _spans(book: Book, abouts: Sequence[RunBook]) -> None:
    """A span typed in Channels against the one that follows from the accepted direct set."""
    for about in abouts:
        for corrected in about.corrected.values():
            entered, span = corrected.lane.channel.calibration_span, corrected.span
            if entered is not None and span is not None and abs(entered.value - span.value) > 1e-6 * span.value:
                said = f"{corrected.lane.name}: entered {entered.value:g}, high-level gas {span.value:g} {span.unit}"
                book.trouble("span-differs", entered.place, said)
