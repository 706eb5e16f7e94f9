"""The sampling plane in diameters of the duct, beside the distances Method 1 gives at best and at least."""

from __future__ import annotations

from reporter.ledger import Entry
from reporter.methods.method_1 import DISTANCES, equivalent_diameter, in_diameters
from reporter.record import Location, Real, text_of
from reporter.reduction.book import Book

#: Diameters behind the last disturbance and before the next: at best, and at least.
DIAMETERS = {"upstream": (8.0, 2.0), "downstream": (2.0, 0.5)}


def sampling_plane(book: Book) -> None:
    """Enter the diameter of the duct and the distances in diameters, as far as the sheet Location has them."""
    place = book.record.location
    diameter = _diameter(book, place)
    if diameter is None or diameter.value <= 0.0:
        return
    distances = {"upstream": place.disturbance_upstream, "downstream": place.disturbance_downstream}
    for side, given in distances.items():
        if given is None:
            continue
        inputs = {"distance": _length(book, f"disturbance_{side}", given), "diameter": diameter}
        book.apply(in_diameters, f"location.disturbance_{side}.diameters", inputs)
        for name, value in zip(("ideal", "least"), DIAMETERS[side], strict=True):
            book.table(f"location.criterion.{side}.{name}", value, "1", DISTANCES)


def _diameter(book: Book, place: Location) -> Entry | None:
    """The inside diameter of a round duct, the equivalent one of a rectangular duct."""
    sides = (place.width, place.depth)
    round_duct = place.diameter is not None and text_of(place.duct_shape) != "rectangular"
    if place.diameter is not None and (round_duct or None in sides):
        return _length(book, "diameter", place.diameter)
    if place.width is None or place.depth is None:
        return None
    inputs = {"length": _length(book, "width", place.width), "width": _length(book, "depth", place.depth)}
    return book.attempt(equivalent_diameter, "location.equivalent_diameter", inputs)


def _length(book: Book, name: str, value: Real) -> Entry:
    return book.given(f"location.{name}", value, book.unit("in", "m"))
