"""Corrected means on a dry and a wet basis, in the gas's usual unit."""

from __future__ import annotations

from dataclasses import dataclass, field

from reporter.basis import Moisture
from reporter.ledger import Entry
from reporter.methods.method_7e import dry_from_wet, wet_from_dry
from reporter.record import Run
from reporter.reduction.book import Book, Lane
from reporter.reduction.channel_units import in_parts
from reporter.reduction.correction import Corrected
from reporter.reduction.equations import carried
from reporter.reduction.moisture import is_calculated, settle_calculated


@dataclass
class RunBook:
    """What is known of one run while its results are computed."""

    run: Run
    moisture: Entry | None = None
    corrected: dict[str, Corrected] = field(default_factory=dict)
    measured: dict[str, Entry] = field(default_factory=dict)
    dry: dict[str, Entry] = field(default_factory=dict)
    wet: dict[str, Entry] = field(default_factory=dict)
    lanes: dict[str, Lane] = field(default_factory=dict)

    def key(self, rest: str) -> str:
        """A ledger key of this run."""
        return f"run.{self.run.key}.{rest}"


def put_on_bases(book: Book, about: RunBook, corrected: Corrected) -> None:
    """Enter a channel's corrected mean as measured, dry and wet; what lacks moisture becomes a problem."""
    lane, run = corrected.lane, corrected.run
    about.corrected[lane.segment] = corrected
    about.lanes[lane.segment] = lane
    value = corrected.value
    if value is None:
        return
    if value.unit != lane.gas.unit:
        name = "ppm" if lane.gas.unit == "ppm" else "percent"
        value = in_parts(book, lane, lane.key(run, f"corrected.in_{name}"), value, lane.gas.unit)
    about.measured[lane.segment] = value
    is_wet = value.basis.moisture is Moisture.WET
    direct = about.wet if is_wet else about.dry
    direct[lane.segment] = book.apply(carried, lane.key(run, "wet" if is_wet else "dry"), {"value": value})
    _bridge(book, about, lane)


def calculate_moisture(book: Book, about: RunBook) -> None:
    """Take the moisture of the combustion balance where the record says so, and bring every gas on both bases."""
    if about.moisture is not None or not is_calculated(about.run):
        return
    about.moisture = settle_calculated(book, about.run)
    for lane in about.lanes.values():
        if lane.segment in about.measured:
            _bridge(book, about, lane, last=True)


def _bridge(book: Book, about: RunBook, lane: Lane, *, last: bool = False) -> None:
    """The other of dry and wet; without moisture a problem where a wet reading needs it."""
    run, is_wet = about.run, lane.segment in about.wet
    if about.moisture is None:
        if is_wet and (last or not is_calculated(run)):
            said = f"{lane.name} is read wet, and run {run.run.value} has no moisture"
            book.trouble("moisture-missing", run.place, said, concerns=(lane.key(run, "dry"),))
        return
    direct, other, name = (about.wet, about.dry, "dry") if is_wet else (about.dry, about.wet, "wet")
    inputs = {"c": direct[lane.segment], "bws": about.moisture}
    made = book.attempt(dry_from_wet if is_wet else wet_from_dry, lane.key(run, name), inputs)
    if made is not None:
        other[lane.segment] = made
