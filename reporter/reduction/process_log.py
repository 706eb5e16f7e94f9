"""The process log averaged over each run."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime
from decimal import Decimal

from reporter.equation import Citation, Value, equation
from reporter.functions import mean
from reporter.ledger import FromCells, slug
from reporter.problems import Place
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.places import cell_ranges


@equation(
    "mean",
    "*p",
    {"readings": "*p"},
    Citation("practice", "", "mean of the process readings of a run"),
    symbols={"readings": "x_i"},
    series=("readings",),
)
def process_mean(*, readings: Value) -> Value:
    """Arithmetic mean of the process readings of a run.

    Parameters
    ----------
    readings
        Readings [the column's unit], a series.

    Returns
    -------
    float
        Mean [same unit].
    """
    return mean(readings)


def reduce_process_log(book: Book, about: RunBook) -> None:
    """Enter the mean of each numeric process column over a run, keys ``run.<run>.process.<column>``."""
    log = book.record.process
    inside = [i for i, time in enumerate(log.times) if _within(about, time)]
    taken: set[str] = set()
    for position, column in enumerate(log.columns):
        with_number = [i for i in inside if isinstance(log.values[i][position], float)]
        values = [value for i in with_number if isinstance(value := log.values[i][position], float)]
        name = slug(column)
        if not values or name in taken:
            continue
        taken.add(name)
        unit = log.units[position]
        rows = [log.rows[i] for i in with_number] if log.rows else []
        letter = log.letters[position] if log.letters else ""
        file = log.place.file or book.record.source.name
        sheet = log.place.sheet or ("Process" if file == book.record.source.name else "")
        place = Place(file, sheet, cell_ranges(letter, rows, file), column)
        words = f"{len(values)} readings from {log.times[inside[0]]:%H:%M} to {log.times[inside[-1]]:%H:%M}"
        key = about.key(f"process.{name}")
        series = book.ledger.enter(
            f"{key}.readings",
            values,
            unit.unit if unit is not None else "1",
            FromCells(place, words),
            label=f"{column}, readings of run {about.run.run.value}",
        )
        label = f"{column}, mean of run {about.run.run.value}"
        whole = [value for row in log.values if isinstance(value := row[position], float)]
        book.ledger.apply(process_mean, key, {"readings": series}, label=label, decimals=_decimals(whole))


def _decimals(values: Sequence[float]) -> int:
    """Decimals shown of a mean: one more than its readings were logged with."""
    exponents = (Decimal(f"{value:.10g}").as_tuple().exponent for value in values)
    return 1 + max(-exponent if isinstance(exponent, int) and exponent < 0 else 0 for exponent in exponents)


def _within(about: RunBook, time: datetime) -> bool:
    return about.run.start.value <= time <= about.run.end.value
