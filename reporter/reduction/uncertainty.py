"""Standard uncertainty of a diluent: as entered, else from the cylinder and half the drift."""

from __future__ import annotations

from reporter.ledger import Entry
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.equations import carried, diluent_uncertainty


def reading_uncertainty(book: Book, about: RunBook, segment: str) -> Entry | None:
    """Standard uncertainty [%] of the oxygen or carbon dioxide of a run; None where nothing bears it."""
    lane, corrected = about.lanes.get(segment), about.corrected.get(segment)
    if lane is None or corrected is None:
        return None
    entered = lane.channel.standard_uncertainty
    key = about.key(f"{segment}.uncertainty")
    if entered is not None:
        value = book.given(f"channel.{segment}.uncertainty", entered, "%")
        return book.apply(carried, key, {"value": value})
    found = book.ledger.get(key)
    pairing = corrected.pairing
    if found is not None or pairing is None or pairing.after_up is None or pairing.before_up is None:
        return found
    upscale = pairing.after_up
    name = upscale.row.cylinder.value if upscale.row.cylinder is not None else ""
    cylinder = book.record.cylinder(name, lane.channel.gas.value)
    low = book.ledger.get(about.key(f"{segment}.drift_difference.zero"))
    high = book.ledger.get(about.key(f"{segment}.drift_difference.upscale"))
    if cylinder is None or cylinder.uncertainty is None or low is None or high is None:
        return None
    if upscale.certified.unit != "%":
        return None
    book.say(
        f"The standard uncertainty of {lane.gas.label} was not entered; it is taken from the cylinder's "
        "certificate and half the drift, each as a rectangular distribution."
    )
    inputs = {
        "certified": upscale.certified,
        "certificate": book.given(f"{upscale.certified.key}.uncertainty", cylinder.uncertainty, "%"),
        "low_shift": low,
        "upscale_shift": high,
    }
    return book.apply(diluent_uncertainty, key, inputs)
