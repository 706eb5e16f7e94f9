"""Calibration readings in the order they were given, cylinders, events."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.outcome import CalibrationPoint
from reporter.output.numbers import day, formulas, moment, period, shortest, unit_text
from reporter.output.view.desk import Desk, entered, gas_name, said
from reporter.output.view.model import AnyCell, Block, Column, Row, Table
from reporter.output.view.tabular import aligned, group_row
from reporter.record import Cylinder

_LEVELS = ("zero", "low", "mid", "high", "NO2")


def calibrations(desk: Desk) -> tuple[Block, ...]:
    """Calibration readings, cylinders, events."""
    blocks = []
    if desk.outcome.calibration_points:
        blocks.append(Block(text=(desk.words("lead.calibrations"),), tables=(_readings(desk),)))
    if desk.outcome.record.cylinders:
        blocks.append(Block(title="Cylinders", text=(desk.words("lead.cylinders"),), tables=(_cylinders(desk),)))
    blocks.append(_events(desk))
    return tuple(blocks)


def _sets(points: Sequence[CalibrationPoint]) -> list[list[CalibrationPoint]]:
    """Readings given one after the other: a new set where the route changes or a level comes again."""
    sets: list[list[CalibrationPoint]] = []
    for point in points:
        last = sets[-1] if sets else []
        if not last or last[0].route != point.route or any(p.level == point.level for p in last):
            sets.append([point])
        else:
            last.append(point)
    return sets


def _readings(desk: Desk) -> Table:
    """One row per set and channel, one column per level; the gases stand in the row of the channel."""
    points = desk.outcome.calibration_points
    levels = [level for level in _LEVELS if any(point.level == level for point in points)]
    columns = [Column("Route, time", width=2.2)]
    columns += [Column(level if level == "NO2" else level.capitalize(), number=True) for level in levels]
    columns.append(Column("Cells", width=2.4))
    rows: list[Row] = []
    for channel in dict.fromkeys(point.channel for point in points):
        mine = sorted((p for p in points if p.channel == channel), key=lambda p: p.time)
        rows.append(group_row(_gases(desk, channel, mine), len(columns)))
        for one in _sets(mine):
            by_level = {point.level: point for point in one}
            cells: list[AnyCell] = [f"{one[0].route}, {period(one[0].time, one[-1].time)}"]
            cells += [desk.show(by_level[level].reading) if level in by_level else "" for level in levels]
            read = [point.reading for point in one if desk.is_read(point.reading)]
            cells.append(desk.cells(read))
            rows.append(Row(tuple(cells), anchor=desk.place(read)))
    return aligned(Table(tuple(columns), tuple(rows)))


def _gases(desk: Desk, channel: str, points: Sequence[CalibrationPoint]) -> str:
    unit = unit_text(desk.outcome.record.channel(channel).unit.value.unit)
    gases = dict.fromkeys((point.level, point.cylinder, point.certified) for point in points)
    ordered = sorted(gases, key=lambda one: _LEVELS.index(one[0]) if one[0] in _LEVELS else len(_LEVELS))
    texts = [
        " ".join(part for part in (level, cylinder, _number(desk, certified)) if part)
        for level, cylinder, certified in ordered
    ]
    return f"{formulas(channel)} [{unit}]: {', '.join(texts)}"


def _number(desk: Desk, key: str) -> str:
    cell = desk.show(key)
    return cell if isinstance(cell, str) else cell.text


def _cylinders(desk: Desk) -> Table:
    """A row per gas under the row of its cylinder."""
    certified = {
        (point.cylinder, gas_name(desk.outcome.record.channel(point.channel).gas.value)): point.certified
        for point in desk.outcome.calibration_points
    }
    columns = (
        Column("Gas", width=1.4), Column("Certified", width=1, number=True), Column("Unit", width=0.8),
        Column("Uncertainty", "%", 1, number=True), Column("Cell", width=4),
    )  # fmt: skip
    by_name: dict[str, list[Cylinder]] = {}
    for cylinder in desk.outcome.record.cylinders:
        by_name.setdefault(cylinder.cylinder.value, []).append(cylinder)
    rows: list[Row] = []
    for name, gases in by_name.items():
        rows.append(group_row(f"{name}: {_papers(desk, gases[0])}", len(columns)))
        rows += [_gas(desk, one, certified.get((name, gas_name(one.gas.value)), "")) for one in gases]
    return aligned(Table(columns, tuple(rows)))


def _gas(desk: Desk, cylinder: Cylinder, key: str) -> Row:
    value = cylinder.certified_value
    unit = cylinder.unit.value if cylinder.unit is not None else value.unit
    read = [key] if key and desk.is_read(key) else []
    cells: tuple[AnyCell, ...] = (
        gas_name(cylinder.gas.value),
        desk.show(key) if key else shortest(value.value, 8),
        unit_text(unit.unit) if unit is not None else "",
        desk.missing if cylinder.uncertainty is None else shortest(cylinder.uncertainty.value, 4),
        desk.cells(read),
    )
    return Row(cells, anchor=desk.place(read))


def _papers(desk: Desk, cylinder: Cylinder) -> str:
    """Kind, balance gas, producer, certificate, dates and pressure of a cylinder."""
    assay = f"assayed {day(cylinder.assay_date.value)}" if cylinder.assay_date is not None else ""
    expires = f"expires {day(cylinder.expires.value)}" if cylinder.expires is not None else ""
    number = f"certificate {cylinder.certificate_number.value}" if cylinder.certificate_number is not None else ""
    balance = f"in {cylinder.balance_gas.value}" if cylinder.balance_gas is not None else ""
    parts = (
        said(cylinder.kind),
        balance,
        said(cylinder.producer),
        number,
        assay,
        expires,
        entered(cylinder.pressure, ""),
    )
    return ", ".join(part for part in parts if part) or desk.words("missing.text")


def _events(desk: Desk) -> Block:
    events = desk.outcome.record.events
    if not events:
        return Block(title="Events", notes=(desk.words("lead.no_events"),))
    columns = (
        Column("Time", width=1.4), Column("What", width=4), Column("Run", width=0.7),
        Column("Readings left out", width=1.5), Column("Reason", width=4),
    )  # fmt: skip
    rows = []
    for event in events:
        times = period(event.time.value, event.until.value) if event.until is not None else moment(event.time.value)
        left = event.readings_excluded
        rows.append(
            Row(
                (
                    times,
                    event.what.value,
                    said(event.run),
                    "yes" if left is not None and left.value else "no",
                    said(event.reason),
                )
            )
        )
    return Block(title="Events", tables=(Table(columns, tuple(rows)),))
