"""Corrected means on a dry and a wet basis, in the gas's usual unit."""

from __future__ import annotations

from dataclasses import dataclass, field

from reporter.basis import Moisture
from reporter.conversions import convert_entry
from reporter.ledger import Entry
from reporter.methods.method_7e import dry_from_wet, wet_from_dry
from reporter.record import Run
from reporter.reduction.book import Book, Lane
from reporter.reduction.correction import Corrected
from reporter.reduction.equations import carried


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
        value = convert_entry(
            book.ledger,
            lane.key(run, f"corrected.in_{'ppm' if lane.gas.unit == 'ppm' else 'percent'}"),
            value,
            lane.gas.unit,
        )
    about.measured[lane.segment] = value
    wet_channel = value.basis.moisture is Moisture.WET
    direct, other = (about.wet, about.dry) if wet_channel else (about.dry, about.wet)
    names = ("wet", "dry") if wet_channel else ("dry", "wet")
    direct[lane.segment] = book.apply(carried, lane.key(run, names[0]), {"value": value})
    if about.moisture is None:
        if wet_channel:
            said = f"{lane.name} is read wet, and run {run.run.value} has no moisture"
            book.trouble("moisture-missing", run.place, said, concerns=(lane.key(run, "dry"),))
        return
    bridge = dry_from_wet if wet_channel else wet_from_dry
    inputs = {"c": direct[lane.segment], "bws": about.moisture}
    made = book.attempt(bridge, lane.key(run, names[1]), inputs)
    if made is not None:
        other[lane.segment] = made
