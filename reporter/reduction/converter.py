"""NO2 converter efficiency from readings of an NO2 gas."""

from __future__ import annotations

from reporter.ledger import slug
from reporter.methods.criteria import at_or_above, criteria
from reporter.methods.method_7e import converter_efficiency
from reporter.outcome import Check
from reporter.record import Level
from reporter.reduction.book import Book, Lane
from reporter.reduction.calibration import method_of


def check_converter(book: Book, lane: Lane) -> None:
    """Enter the converter efficiency of a NOx channel; a note where no reading was entered."""
    held = criteria(method_of(lane))
    if lane.gas.key != "nox" or held is None or "converter_efficiency" not in held:
        return
    criterion = held["converter_efficiency"]
    rows = [
        row
        for row in book.record.calibrations
        if row.channel.value == lane.name and row.level.value is Level.NO2
    ]
    if not rows:
        book.trouble("converter-missing", lane.channel.place, lane.name)
        return
    bound = book.table(
        f"criterion.{lane.segment}.converter_efficiency.bound", criterion.bound, "%", criterion.citation
    )
    for number, row in enumerate(rows, 1):
        stem = f"calibration.{lane.segment}.converter_{number}"
        certified = row.certified_value
        origin = certified
        name = row.cylinder.value if row.cylinder is not None else ""
        certificate = next(
            (c for c in book.record.cylinders if c.cylinder.value == name and slug(c.gas.value) == "no2"),
            None,
        )
        if certificate is not None:
            origin = certificate.certified_value
        if origin is None:
            book.trouble("certificate-missing", row.place, f"NO2 gas {name or 'without a cylinder'}")
            continue
        inputs = {
            "direct": book.given(f"{stem}.reading", row.reading, lane.unit),
            "certified": book.given(f"{stem}.certified", origin, lane.unit),
        }
        share = book.apply(converter_efficiency, f"{stem}.converter_efficiency", inputs)
        met = book.apply(at_or_above, f"{stem}.met", {"value": share, "bound": bound})
        book.checks.append(
            Check(
                key=met.key,
                title=f"{criterion.label}, {row.time.value:%H:%M}",
                gas=lane.gas.label,
                runs=(),
                value=share.key,
                bound=bound.key,
                citation=criterion.citation,
                met=met.value == 1.0,
                consequence="" if met.value == 1.0 else criterion.consequence,
                relation="at least",
            )
        )
