"""The logged series: what each cell of the Readings sheet holds, in time order, signed and unclipped."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import datetime, time, timedelta
from functools import cache
from itertools import pairwise

from reporter.errors import UnitError
from reporter.intake.cells import LARGEST, number_text
from reporter.intake.dates import Fault, MomentRead, OrderWatch, date_of, moment_of
from reporter.intake.rows import Filled, RowReader
from reporter.intake.sheets import fold, reading_words, sentinels
from reporter.intake.table import Cell, HeaderCell, Row, SheetTable, clean, plain_number
from reporter.problems import Place
from reporter.record import Reading, ReadingKind, ReadingRow, Readings
from reporter.units import ReadUnit, convert, dimension, read_unit

_BOUND = re.compile(r"^([<>])\s*(.+)$")
#: A gas of more mass in its volume [mg/m3] is in no stack.
_DENSEST = 1e8
_BLANK = Reading(ReadingKind.BLANK, None, "")


@dataclass(frozen=True, slots=True)
class _Lane:
    """A channel and the position of its column."""

    channel: str
    header: HeaderCell
    position: int
    unit: str


def read_readings(
    table: SheetTable, channels: Sequence[Filled], reader: RowReader, find_gas_key: Callable[[str], str]
) -> Readings | None:
    """The series of the sheet Readings; None where its columns cannot be matched with channels."""
    lanes = _lanes(table, channels, reader, find_gas_key)
    clock = time_positions(table)
    if clock is None:
        place = reader.gathered.place(table.sheet, table.header[0].cell if table.header else "", "Time")
        reader.gathered.add("missing-column", place, expected="a column 'Time'")
        return None
    tally = _Tally(len(lanes))
    rows = []
    for row, moment in timed(table, clock, reader):
        readings = []
        for index, lane in enumerate(lanes):
            cell = row.cells[lane.position]
            reading = reading_of(cell, lane.unit)
            if isinstance(reading, Fault):
                place = reader.gathered.place(table.sheet, cell.cell, lane.channel)
                reader.gathered.add(reading.code, place, reading.found, expected=reading.expected)
                reading = Reading(ReadingKind.ERROR, None, cell.text)
            tally.see(index, cell, reading)
            readings.append(reading)
        rows.append(ReadingRow(moment, row.number, tuple(readings)))
    tally.say(lanes, table, reader)
    place = reader.gathered.place(table.sheet)
    ordered = _in_order(rows, table, clock[0], reader)
    return Readings(
        tuple(lane.channel for lane in lanes),
        tuple(lane.header.column for lane in lanes),
        tuple(ordered),
        place,
    )


def _lanes(
    table: SheetTable, channels: Sequence[Filled], reader: RowReader, find_gas_key: Callable[[str], str]
) -> list[_Lane]:
    """Match columns with channels: by the channel's name, else by its gas where only one channel has it."""
    by_name = {fold(c.text("channel")): c for c in channels if c.text("channel")}
    taken: dict[str, _Lane] = {}
    for position, header in enumerate(table.header):
        if is_clock(table, header) or not header.text:
            continue
        channel, unit_text = _channel_of(header, by_name, channels, find_gas_key)
        place = reader.gathered.place(table.sheet, header.cell, header.text)
        if channel is None:
            if any(not row.cells[position].blank for row in table.rows):
                reader.gathered.add("unknown-column", place, header.text, expected="the name of a channel")
            continue
        name = channel.text("channel")
        unit = _check_unit(channel, unit_text, place, reader)
        if name in taken:
            found = f"{taken[name].header.text!r} ({taken[name].header.cell}) and {header.text!r}"
            reader.gathered.add("repeated-column", place, found)
            continue
        taken[name] = _Lane(name, header, position, unit)
    for channel in channels:
        name = channel.text("channel")
        if name and name not in taken:
            place = reader.gathered.place(table.sheet, table.header[0].cell if table.header else "", name)
            reader.gathered.add("missing-column", place, expected=f"a column {name!r}, as on the sheet Channels")
    return list(taken.values())


def _channel_of(
    header: HeaderCell,
    by_name: dict[str, Filled],
    channels: Sequence[Filled],
    find_gas_key: Callable[[str], str],
) -> tuple[Filled | None, str]:
    whole = by_name.get(fold(header.text))
    if whole is not None:
        return whole, ""
    words = header.name.split()
    splits = [(header.name, header.unit)]
    splits += [(" ".join(words[:-k]), " ".join(words[-k:])) for k in (1, 2) if len(words) > k and not header.unit]
    for name, unit in splits:
        found = by_name.get(fold(name))
        if found is not None:
            return found, unit
    for name, unit in splits:
        key = find_gas_key(name)
        same = [channel for channel in channels if key and channel.text("gas") == key]
        if len(same) == 1:
            return same[0], unit
    return None, ""


def _check_unit(channel: Filled, text: str, place: Place, reader: RowReader) -> str:
    """The unit of the channel; a header that says another unit or basis is a problem."""
    given = channel.values.get("unit")
    own: ReadUnit | None = given.value if given is not None else None
    if own is None or not text:
        return own.unit if own else ""
    try:
        named = read_unit(text)
    except UnitError:
        reader.gathered.add("unknown-unit", place, text, expected=own.unit)
        return own.unit
    if named.unit != own.unit:
        reader.gathered.add("unit-contradiction", place, f"{named.unit} here, {own.unit} on the sheet Channels")
    basis = channel.values.get("moisture_basis")
    if named.moisture is not None and basis is not None and named.moisture.value != basis.value.value:
        found = f"{text!r} here, {basis.value.value} on the sheet Channels"
        reader.gathered.add("basis-contradiction", place, found)
    return own.unit


def is_clock(table: SheetTable, header: HeaderCell) -> bool:
    """Whether a header is that of the time or the date."""
    return table.spec.find(header.name) is not None


def time_positions(table: SheetTable) -> tuple[int, int | None] | None:
    """Where the time stands, and the date if it has a column of its own."""
    found: dict[str, int] = {}
    for position, header in enumerate(table.header):
        column = table.spec.find(header.name)
        if column is not None:
            found.setdefault(column.attr, position)
    return (found["time"], found.get("date")) if "time" in found else None


def timed(table: SheetTable, clock: tuple[int, int | None], reader: RowReader) -> list[tuple[Row, datetime]]:
    """Each row with its time; rows whose time cannot be read are problems."""
    found: list[tuple[Row, datetime]] = []
    watch, bare = OrderWatch(), []
    for row in table.rows:
        cell = row.cells[clock[0]]
        watch.see(cell)
        read = _moment(row, clock, reader)
        place = reader.gathered.place(table.sheet, cell.cell, "Time")
        if isinstance(read, Fault):
            reader.gathered.add(read.code, place, read.found, expected=read.expected)
        elif read is not None:
            found.append((row, read.value))
            bare.append(read.bare)
    reader.say_order(watch, table, "Time")
    for (one, before), (two, after) in pairwise(found):
        if all(bare) and before - after > timedelta(hours=12):
            place = reader.gathered.place(table.sheet, two.cells[clock[0]].cell, "Time")
            words = f"{before:%H:%M} in row {one.number}, then {after:%H:%M}, without dates"
            expected = "rows with their dates, where the readings cross midnight"
            reader.gathered.add("run-across-midnight", place, words, expected=expected)
            break
    return found


def _moment(row: Row, clock: tuple[int, int | None], reader: RowReader) -> MomentRead | Fault | None:
    cell, day = row.cells[clock[0]], reader.day
    if cell.uncalculated:
        return Fault("formula-without-value", "a formula that was never calculated")
    if cell.blank:
        return Fault("missing-entry", "a row without its time")
    if clock[1] is not None and not row.cells[clock[1]].blank:
        own = date_of(row.cells[clock[1]])
        if isinstance(own, Fault):
            return own
        clock_only = isinstance(cell.value, (time, timedelta, str))
        read = moment_of(cell, own)
        return MomentRead(read.value) if isinstance(read, MomentRead) and clock_only else read
    return moment_of(cell, day)


def reading_of(cell: Cell, unit: str) -> Reading | Fault:
    """What one cell holds: a number, nothing, or a word with a meaning."""
    value = cell.value
    if isinstance(value, float):
        if not cell.percent:
            return _number(value, plain_number(value), unit)
        if unit == "%":
            return _number(value * 100.0, cell.text, unit)
        return Fault("wrong-dimension", cell.text, f"a number in {unit}")
    if cell.uncalculated:
        return Fault("formula-without-value", "a formula that was never calculated")
    if value is None:
        return _BLANK
    if not isinstance(value, str):
        return Fault("text-for-number", cell.text)
    return _word(clean(value), unit)


@cache
def most_of(unit: str) -> float:
    """The largest reading in a unit: the whole gas, or more of it than fits its volume."""
    if unit and dimension(unit) == "fraction":
        return convert(100.0, "%", unit)
    return convert(_DENSEST, "mg/m3", unit) if unit else LARGEST


def _number(value: float, text: str, unit: str) -> Reading | Fault:
    """A measured number; one that no gas can have is asked about, so that it never enters a mean."""
    if value < 0.0 and value in sentinels():
        found = f"{text}, as loggers write for a missing value"
        return Fault("out-of-range", found, "a measured number, an empty cell, or a word for what happened")
    most = most_of(unit)
    if abs(value) > most:
        return Fault("out-of-range", f"{text} {unit}", f"a reading of at most {most:g} {unit}, or a word such as OVER")
    return Reading(ReadingKind.NUMBER, value, text)


def _word(text: str, unit: str) -> Reading | Fault:
    if not text:
        return _BLANK
    kind = reading_words().get(text.casefold())
    if kind is not None:
        return Reading(ReadingKind(kind), None, text)
    bound = _BOUND.match(text)
    read = number_text(bound[2] if bound else text)
    if isinstance(read, Fault):
        return Fault(read.code, text) if read.code != "error-value" else Reading(ReadingKind.ERROR, None, text)
    if read.unit is not None and read.unit.unit != unit:
        return Fault("wrong-dimension", text, f"a number in {unit}")
    if bound is None:
        return _number(read.value, text, unit)
    return Reading(ReadingKind.BELOW if bound[1] == "<" else ReadingKind.OVER, read.value, text)


def _count(number: int) -> str:
    return "1 reading" if number == 1 else f"{number} readings"


class _Tally:
    """Counts what is worth a note in each channel."""

    def __init__(self, lanes: int) -> None:
        self.negative: list[list[tuple[float, str]]] = [[] for _ in range(lanes)]
        self.sentinel: list[list[tuple[float, str]]] = [[] for _ in range(lanes)]
        self.texts: list[list[str]] = [[] for _ in range(lanes)]

    def see(self, index: int, cell: Cell, reading: Reading) -> None:
        """Take note of one reading."""
        if reading.kind is not ReadingKind.NUMBER or reading.value is None:
            return
        if reading.value in sentinels():
            self.sentinel[index].append((reading.value, cell.cell))
        elif reading.value < 0.0:
            self.negative[index].append((reading.value, cell.cell))
        if isinstance(cell.value, str):
            self.texts[index].append(cell.cell)

    def say(self, lanes: Sequence[_Lane], table: SheetTable, reader: RowReader) -> None:
        """One note for each channel and kind."""
        for lane, negative, sentinel, texts in zip(lanes, self.negative, self.sentinel, self.texts, strict=True):
            if sentinel:
                place = reader.gathered.place(table.sheet, sentinel[0][1], lane.channel)
                reader.gathered.add("sentinel-value", place, f"{_count(len(sentinel))} of {sentinel[0][0]:g}")
            if negative:
                lowest = min(negative)
                place = reader.gathered.place(table.sheet, lowest[1], lane.channel)
                reader.gathered.add("negative-reading", place, f"{_count(len(negative))}, the lowest {lowest[0]:g}")
            if texts:
                place = reader.gathered.place(table.sheet, texts[0], lane.channel)
                reader.gathered.add("text-as-number", place, _count(len(texts)))


def _in_order(rows: list[ReadingRow], table: SheetTable, clock: int, reader: RowReader) -> list[ReadingRow]:
    """The rows by time, with problems for rows out of order and for a time that stands twice."""
    cells = {row.number: row.cells[clock].cell for row in table.rows}
    for before, after in pairwise(rows):
        if after.time < before.time:
            place = reader.gathered.place(table.sheet, cells[after.row], "Time")
            reader.gathered.add("readings-out-of-order", place, f"{after.time:%H:%M} after {before.time:%H:%M}")
            break
    ordered = sorted(rows, key=lambda row: row.time)
    for before, after in pairwise(ordered):
        if after.time == before.time:
            place = reader.gathered.place(table.sheet, cells[after.row], "Time")
            found = f"{after.time:%Y-%m-%d %H:%M:%S}, also in {cells[before.row]}"
            reader.gathered.add("duplicate-time", place, found)
    return ordered
