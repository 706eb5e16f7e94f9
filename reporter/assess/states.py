"""The state of each run and of each gas in it, with reasons; invalid and excluded are different states."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from reporter.outcome import GasResult, RunResult, RunState, Series
from reporter.record import text_of
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book, Lane
from reporter.reduction.window import Window


def run_results(
    book: Book,
    tracks: Sequence[Lane],
    abouts: Sequence[RunBook],
    windows: Mapping[str, Window],
    series: Mapping[tuple[str, str], Series | None],
) -> tuple[RunResult, ...]:
    """All runs in time order."""
    return tuple(_run(book, tracks, about, windows[about.run.key], series) for about in abouts)


def _run(
    book: Book,
    tracks: Sequence[Lane],
    about: RunBook,
    span: Window,
    series: Mapping[tuple[str, str], Series | None],
) -> RunResult:
    gases = tuple(_gas(about, lane, series) for lane in tracks if lane.segment in about.corrected)
    invalid = [gas for gas in gases if not gas.is_valid]
    reasons: list[str] = []
    state = RunState.VALID
    if invalid:
        state = RunState.INVALID
        reasons = [f"{gas.channel.channel.value}: {reason}" for gas in invalid for reason in gas.reasons]
    excluded = text_of(about.run.excluded_because).strip()
    if excluded:
        state = RunState.EXCLUDED
        reasons.insert(0, excluded)
    return RunResult(
        run=about.run,
        key=about.run.key,
        state=state,
        reasons=tuple(reasons),
        gases=gases,
        exclusions=span.exclusions,
    )


def _gas(about: RunBook, lane: Lane, series: Mapping[tuple[str, str], Series | None]) -> GasResult:
    corrected = about.corrected[lane.segment]
    return GasResult(
        gas=lane.gas.label,
        segment=lane.segment,
        channel=lane.channel,
        run=about.run.key,
        is_valid=corrected.valid.value == 1.0,
        valid=corrected.valid.key,
        reasons=corrected.reasons,
        series=series.get((lane.segment, about.run.key)),
        pollutant=not lane.gas.is_diluent,
    )
