"""NO2 converter efficiency from readings of an NO2 gas."""

from __future__ import annotations

from reporter.ledger import Entry
from reporter.methods.criteria import at_or_above, criteria
from reporter.methods.method_7e import converter_efficiency
from reporter.outcome import Check
from reporter.record import Calibration, Level
from reporter.reduction.book import Book, Lane, runs_in_order
from reporter.reduction.calibration import method_of
from reporter.reduction.certificates import certificate_entry, expiry_fault
from reporter.reduction.channel_units import given_in_channel_unit


def check_converter(book: Book, lane: Lane) -> None:
    """Enter the converter efficiency of a NOx channel; a note where no reading was entered."""
    held = criteria(method_of(lane))
    if lane.gas.key != "nox" or held is None or "converter_efficiency" not in held:
        return
    criterion = held["converter_efficiency"]
    rows = [row for row in book.record.calibrations if row.channel.value == lane.name and row.level.value is Level.NO2]
    if not rows:
        book.trouble("converter-missing", lane.channel.place, lane.name)
        return
    bound = book.table(f"criterion.{lane.segment}.converter_efficiency.bound", criterion.bound, "%", criterion.citation)
    for number, row in enumerate(rows, 1):
        stem = f"calibration.{lane.segment}.converter_{number}"
        certified = _certified(book, lane, row, stem)
        if certified is None:
            continue
        inputs = {"direct": book.given(f"{stem}.reading", row.reading, lane.unit), "certified": certified}
        share = book.attempt(converter_efficiency, f"{stem}.converter_efficiency", inputs)
        if share is None:
            continue
        met = book.apply(at_or_above, f"{stem}.met", {"value": share, "bound": bound})
        book.checks.append(
            Check(
                key=met.key,
                title=f"{criterion.label}, {row.time.value:%H:%M}",
                gas=lane.gas.label,
                runs=tuple(run.key for run in runs_in_order(book.record)),
                value=share.key,
                bound=bound.key,
                citation=criterion.citation,
                met=met.value == 1.0,
                consequence="" if met.value == 1.0 else criterion.consequence,
                relation="at least",
            )
        )


def _certified(book: Book, lane: Lane, row: Calibration, stem: str) -> Entry | None:
    """The certified NO2 of the converter's gas, from its certificate or typed beside the reading."""
    name = row.cylinder.value if row.cylinder is not None else ""
    certificate = book.record.cylinder(name, "no2")
    if certificate is not None:
        fault = expiry_fault(row, certificate)
        if fault is not None:
            book.trouble("cylinder-expired", fault[1], fault[0], concerns=(stem,))
        return certificate_entry(book, lane, certificate)
    if row.certified_value is None:
        book.trouble("certificate-missing", row.place, f"NO2 gas {name or 'without a cylinder'}")
        return None
    return given_in_channel_unit(book, lane, f"{stem}.certified", row.certified_value)
