"""Load of a run, its share of the permitted maximum, its output, and the mean of the plant's own monitor."""

from __future__ import annotations

from reporter.conversions import convert_entry
from reporter.errors import UnitError
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
            _share(book, about, load, _plain(book, about.key("load.permitted"), run.load_basis, unit))
    if run.output is not None:
        book.given(about.key("output"), run.output, "MW")
    _installed_monitor(book, about)


def _share(book: Book, about: RunBook, load: Entry, permitted: Entry) -> None:
    """Load in percent of the permitted maximum, where both are in one unit or can be brought to it."""
    if permitted.unit != load.unit:
        try:
            permitted = convert_entry(book.ledger, about.key("load.permitted.converted"), permitted, load.unit)
        except UnitError as error:
            book.say(f"Run {about.run.run.value}: the load has no share of the permitted maximum; {error.message}.")
            return
    book.apply(load_share, about.key("load.share"), {"load": load, "permitted": permitted})


def _installed_monitor(book: Book, about: RunBook) -> None:
    """The mean of the plant's own monitor beside the first pollutant; it enters no result."""
    mean = about.run.installed_monitor_mean
    lane = next((lane for lane in about.lanes.values() if not lane.gas.is_diluent), None)
    if mean is not None and lane is not None:
        unit = mean.unit.unit if mean.unit is not None else lane.unit
        book.given(about.key(f"{lane.segment}.installed_monitor"), mean, unit, note="as entered; enters no result")


def _plain(book: Book, key: str, value: Real, unit: str) -> Entry:
    """A number in a unit of the plant's own (klb/h of steam, tiles per hour), kept as written."""
    found = book.ledger.get(key)
    entered = value.unit.unit if value.unit is not None else unit or "1"
    return found or book.ledger.enter(key, value.value, entered, FromCells(value.place, value.text))
