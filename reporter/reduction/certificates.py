"""Certified values of calibration gases, and whether their papers bear the readings."""

from __future__ import annotations

from dataclasses import dataclass, field

from reporter.conversions import converted
from reporter.ledger import Entry, slug
from reporter.problems import Place
from reporter.record import Calibration, Cylinder, Level, Real
from reporter.reduction.book import Book, Lane
from reporter.reduction.channel_units import given_in_channel_unit
from reporter.units import dimension


@dataclass
class Papers:
    """What is wrong with the certificates of a channel's gases, by the key of the certified value."""

    faults: dict[str, list[str]] = field(default_factory=dict)

    def of(self, certified: Entry) -> list[str]:
        """The faults of one gas."""
        return self.faults.get(certified.key, [])

    def add(self, book: Book, code: str, lane: Lane, place: Place, said: str, certified: Entry | None) -> None:
        """Note a fault as a problem, and against the gas it belongs to."""
        book.trouble(code, place, said, concerns=(f"channel.{lane.segment}",))
        if certified is not None and said not in self.of(certified):
            self.faults.setdefault(certified.key, []).append(said)


def certified_value(book: Book, lane: Lane, row: Calibration, papers: Papers) -> Entry | None:
    """The certified value of a calibration gas: the certificate's, else the one typed beside the reading."""
    cylinder = book.record.cylinder(row.cylinder.value, lane.channel.gas.value) if row.cylinder is not None else None
    if cylinder is not None:
        return _examined(book, lane, row, cylinder, papers)
    name = row.cylinder.value if row.cylinder is not None else ""
    key = f"cylinder.{slug(name or row.level.value.value)}.{lane.segment}.certified"
    if row.level.value is Level.ZERO and row.certified_value is None:
        return book.state(key, 0.0, lane.unit, "zero gas: the certified value is taken as zero")
    typed = None if row.certified_value is None else _typed(book, lane, key, row.certified_value)
    if row.level.value is not Level.ZERO:
        said = f"no certificate in Cylinders for {name or row.level.value.value + ' gas'} ({lane.gas.label})"
        papers.add(book, "certificate-missing", lane, row.place, said, typed)
    return typed


def certificate_entry(book: Book, lane: Lane, cylinder: Cylinder) -> Entry:
    """The certified value of a cylinder in the unit of a channel."""
    segment = lane.segment if cylinder.gas.value == lane.channel.gas.value else f"{lane.segment}.{cylinder.gas.value}"
    key = f"cylinder.{slug(cylinder.cylinder.value)}.{segment}.certified"
    unit = cylinder.unit.value if cylinder.unit is not None else None
    return given_in_channel_unit(book, lane, key, cylinder.certified_value, unit=unit)


def expiry_fault(row: Calibration, cylinder: Cylinder) -> tuple[str, Place] | None:
    """Why a cylinder's date does not cover a reading, and where it stands; None where it does."""
    day = row.time.value.date()
    kind = cylinder.kind.value if cylinder.kind is not None else "protocol"
    if cylinder.expires is not None:
        if cylinder.expires.value >= day:
            return None
        said = f"cylinder {cylinder.cylinder.value} expired on {cylinder.expires.value}, used on {day}"
        return said, cylinder.expires.place
    if kind == "protocol" and row.level.value is not Level.ZERO:
        return f"cylinder {cylinder.cylinder.value} has no expiry date", cylinder.place
    return None


def _typed(book: Book, lane: Lane, key: str, value: Real) -> Entry:
    """A certified value typed beside a reading; another value under the same name has an entry of its own."""
    number, name = 1, key
    while (found := book.ledger.get(name)) is not None and found.value != value.value:
        number += 1
        name = f"{key}.typed_{number}"
    return found or given_in_channel_unit(book, lane, name, value)


def _examined(book: Book, lane: Lane, row: Calibration, cylinder: Cylinder, papers: Papers) -> Entry:
    """A certificate's value, with its expiry and its agreement with the value typed beside the reading looked at."""
    certified, typed = certificate_entry(book, lane, cylinder), row.certified_value
    fault = expiry_fault(row, cylinder)
    if fault is not None:
        papers.add(book, "cylinder-expired", lane, fault[1], fault[0], certified)
    if typed is None:
        return certified
    unit = typed.unit.unit if typed.unit is not None else lane.unit
    value = converted(typed.value, unit, lane.unit) if dimension(unit) == dimension(lane.unit) else None
    if value is None or abs(value - certified.value) > 1e-9 * abs(certified.value):
        said = f"typed {typed.text or f'{typed.value:g}'} {unit}, certificate {certified.value:g} {certified.unit}"
        papers.add(book, "certificate-differs", lane, typed.place, said, certified)
    return certified
