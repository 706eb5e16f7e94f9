"""Load of a run: as entered, and its share of the permitted maximum."""

from __future__ import annotations

from reporter.ledger import Entry, FromCells
from reporter.record import Real
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.equations import load_share


def reduce_load(book: Book, about: RunBook) -> None:
    """Enter load, share of the permitted maximum, output and the mean of an installed monitor."""
    run = about.run
    unit = run.load_unit.value if run.load_unit is not None else ""
    if run.load is not None:
        load = _plain(book, about.key("load"), run.load, unit)
        if run.load_basis is not None and run.load_basis.value > 0.0:
            basis = _plain(book, about.key("load.permitted"), run.load_basis, unit)
            book.apply(load_share, about.key("load.share"), {"load": load, "permitted": basis})
    if run.output is not None:
        book.given(about.key("output"), run.output, "MW")


def _plain(book: Book, key: str, value: Real, unit: str) -> Entry:
    """A number in a unit of the plant's own (klb/h of steam, tiles per hour), kept as written."""
    found = book.ledger.get(key)
    entered = value.unit.unit if value.unit is not None else unit or "1"
    return found or book.ledger.enter(key, value.value, entered, FromCells(value.place, value.text))
