"""The tables of one file on their way to one series: ordinary rows of long tables by column, others cell by cell."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from datetime import date, datetime

import numpy as np

from reporter.intake.dates import Fault
from reporter.intake.foreign import bulk
from reporter.intake.foreign.grid import Grid, Page, letters
from reporter.intake.foreign.mapping import Mapping
from reporter.intake.foreign.model import Desk
from reporter.intake.foreign.moments import moments_of
from reporter.intake.foreign.numbers import FRACTION_BELOW, hundredfold, style_of
from reporter.intake.foreign.parts import Column, Lane, Part, put_among
from reporter.intake.foreign.sort import Sorted, sort_rows, usual_length
from reporter.intake.foreign.tables import Table, at
from reporter.intake.foreign.times import joined, order_of
from reporter.intake.foreign.unit_rows import other_units
from reporter.intake.foreign.wording import read_cell
from reporter.intake.gather import Gathered
from reporter.intake.table import Raw
from reporter.logged import CODE, STAMPS, Counts, LoggedColumn, LoggedRows, Texts, Where, objects
from reporter.problems import Place
from reporter.record import Reading, ReadingKind

#: Rows whose texts are taken out at a time.
_CHUNK = 2_000


@dataclass(frozen=True, slots=True)
class LeftOut:
    """A row that is no reading: its place and why."""

    place: Place
    why: str


@dataclass(frozen=True, slots=True)
class _Said:
    """A problem of one cell, with what its turn among the problems of a table follows from."""

    turn: tuple[bool, int, int]
    code: str
    place: Place
    found: str
    expected: str = ""


@dataclass(slots=True)
class Reader:
    """Reads the tables of a file by a mapping; what is wrong goes to `gathered`, what is no reading to `left_out`."""

    grid: Grid
    mapping: Mapping
    gathered: Gathered
    day: date | None
    left_out: list[LeftOut] = field(default_factory=list)
    merged: int = 0
    _parts: list[Part] = field(default_factory=list)
    _said: list[_Said] = field(default_factory=list)
    _words: dict[str, str] = field(init=False)

    def __post_init__(self) -> None:
        self._words = dict(self.mapping.words)

    def read(self, table: Table) -> None:
        """Read one table."""
        columns = list(zip(table.columns, self.mapping.columns, strict=True))
        times = [column for column, mapped in columns if mapped.use == "time"]
        lanes = [(column, mapped) for column, mapped in columns if mapped.use == "reading"]
        self._still_so(table, times, [column for column, _ in lanes])
        part = self._ordinary(table, times, lanes)
        rows, moments, readings = self._others(table, times, lanes, part.rows.tolist())
        if rows:
            put_among(part, rows, moments, readings)
        self._parts.append(part)
        for one in sorted(self._said, key=lambda said: said.turn):
            self.gathered.add(one.code, one.place, one.found, expected=one.expected)
        self._said = []

    def _ordinary(self, table: Table, times: Sequence[int], lanes: Sequence[Lane]) -> Part:
        """The rows of a long table that are surely readings; none of a short one."""
        nothing = np.zeros(0, dtype=np.int64)
        part = Part(table.page, times[0], lanes, nothing, nothing, [])
        if table.last - table.first < bulk.LONG:
            part.columns = [Column(np.zeros(0), np.zeros(0, dtype=np.uint8), objects([])) for _ in lanes]
            return part
        readings, order = [column for column, _ in lanes], self.mapping.time.order
        known = bulk.ordinary_rows(
            table, times, readings, order, usual=usual_length(table), cut_off=self.grid.cut_off
        )  # fmt: skip
        moments, timed = moments_of(known.stamps, self._day, self.mapping.time)
        if not timed.all():
            known, moments = known.take(timed), moments[timed]
        part.rows, part.moments = known.rows, moments
        part.columns = [self._lane(table.page, known, number, lane) for number, lane in enumerate(lanes)]
        return part

    @property
    def _day(self) -> date | None:
        return self.day if self.mapping.time.day else None

    def _lane(self, page: Page, known: bulk.Ordinary, number: int, lane: Lane) -> Column:
        """The readings of ordinary rows in one column: each different cell read once, special cells by themselves."""
        column, mapped = lane
        cells = known.cells[column]
        held = bulk.held(cells.distinct, mapped.unit, self.mapping.numbers, self._words)
        made = Column(held.values[cells.codes], held.kinds[cells.codes], held.texts[cells.codes])
        special = {row for row, own in (*page.percent, *page.uncalculated) if own == column}
        alone = np.flatnonzero(np.isin(known.rows, list(special))) if special else np.zeros(0, dtype=np.int64)
        for index in alone.tolist():
            reading = self._reading(page, int(known.rows[index]), number, lane)
            value = np.nan if reading.value is None else reading.value
            made.values[index], made.kinds[index], made.texts[index] = value, CODE[reading.kind], reading.text
        if held.faults:
            wrong = np.setdiff1d(np.flatnonzero(np.isin(cells.codes, list(held.faults))), alone)
            for index in wrong.tolist():
                self._say(page, int(known.rows[index]), number, lane, held.faults[int(cells.codes[index])])
        return made

    def _others(
        self, table: Table, times: Sequence[int], lanes: Sequence[Lane], known: Sequence[int]
    ) -> tuple[list[int], list[datetime], list[list[Reading]]]:
        """The further rows of readings, row by row; what is none is left out or a problem."""
        rows: list[int] = []
        moments: list[datetime] = []
        readings: list[list[Reading]] = []
        cache: list[dict[Raw, Reading]] = [{} for _ in lanes]
        order, columns = self.mapping.time.order, [column for column, _ in lanes]
        for found in sort_rows(table, times, columns, order, cut_off=self.grid.cut_off, known=known):
            place = self.grid.place(table.page, found.row, times[0], "Time")
            if found.fault:
                self._fault_of_row(table, times, found, place)
                continue
            if not found.stamps:
                self.left_out.append(LeftOut(place, found.why))
                if words := other_units(table, found.row, self.mapping.columns):
                    self._said.append(_Said((False, found.row, -1), "unit-changes", place, words))
                if found.note:
                    self._said.append(_Said((False, found.row, -1), found.note, place, found.why))
                continue
            moment = joined(found.stamps, self._day, self.mapping.time)
            if moment is None:
                words = "a stamp without its day or its time of day"
                self._said.append(_Said((False, found.row, -1), "not-a-time", place, words))
                continue
            rows.append(found.row)
            moments.append(moment)
            readings.append(
                [self._reading(table.page, found.row, n, lane, cache[n]) for n, lane in enumerate(lanes)]
            )  # fmt: skip
        return rows, moments, readings

    def _fault_of_row(self, table: Table, times: Sequence[int], found: Sorted, place: Place) -> None:
        shown = " ".join(str(at(table.page.rows[found.row], c) or "") for c in times).strip()
        untimed = found.fault == "not-a-time"
        expected = f"a time, {self.mapping.time.order}" if untimed else ""
        words = repr(shown) if untimed else found.why
        self._said.append(_Said((untimed, found.row, -1), found.fault, place, words, expected))

    def _reading(
        self, page: Page, row: int, number: int, lane: Lane, known: dict[Raw, Reading] | None = None
    ) -> Reading:
        """What one cell holds."""
        column, mapped = lane
        value = at(page.rows[row], column)
        if (row, column) in page.uncalculated:
            self._say(page, row, number, lane, Fault("formula-without-value", "a formula that was never calculated"))
            return Reading(ReadingKind.ERROR, None, "")
        percent = (row, column) in page.percent
        if not percent and known is not None and (ready := known.get(value)) is not None:
            return ready
        if percent and isinstance(value, float) and mapped.unit == "%":
            value = hundredfold(value)
        read = read_cell(value, mapped.unit, self.mapping.numbers, self._words)
        if percent and mapped.unit not in ("%", "1"):
            read = Fault("wrong-dimension", f"{value} as a percentage", f"a number in {mapped.unit}")
        if isinstance(read, Fault):
            self._say(page, row, number, lane, read)
            return Reading(ReadingKind.ERROR, None, str(value))
        if not percent and known is not None:
            known[value] = read
        return read

    def _say(self, page: Page, row: int, number: int, lane: Lane, fault: Fault) -> None:
        place = self.grid.place(page, row, lane[0], lane[1].channel)
        self._said.append(_Said((False, row, number), fault.code, place, fault.found, fault.expected))

    def _still_so(self, table: Table, times: Sequence[int], lanes: Sequence[int]) -> None:
        """Hold the order of the dates and the decimal mark of the mapping against the file."""
        rows = range(table.first, table.last)
        for column, cells in zip(times, table.page.columns(times, rows), strict=True):
            desk = Desk({}, self.grid.source.name)
            place = self.grid.place(table.page, table.first, column, "Time")
            order = order_of(cells, desk, place, epoch="")
            own = self.mapping.time.order
            if order in ("day first", "month first") and order != own and own in ("day first", "month first"):
                self.gathered.add("mapping-differs", place, f"dates are {order}, in the mapping {own}")
        desk = Desk({}, self.grid.source.name)
        style = style_of(_texts(table, lanes), (), desk)
        telling = bool(desk.evidence) and not desk.open
        if telling and style.decimal != self.mapping.numbers.decimal:
            found = f"the decimal mark is {style.decimal!r}, in the mapping {self.mapping.numbers.decimal!r}"
            self.gathered.add("mapping-differs", self.gathered.place(table.page.sheet), found)

    def say_negative(self) -> None:
        """Note the negative readings of each channel; they are kept."""
        found: dict[str, tuple[tuple[int, int, int], Place, int, float]] = {}
        for turn, part in enumerate(self._parts):
            for number, ((column, mapped), own) in enumerate(zip(part.lanes, part.columns, strict=True)):
                where = np.flatnonzero((own.kinds == CODE[ReadingKind.NUMBER]) & (own.values < 0.0))
                if not len(where):
                    continue
                row = int(part.rows[where[0]])
                place = self.grid.place(part.page, row, column, mapped.channel)
                first, place, count, lowest = found.get(mapped.channel, ((turn, row, number), place, 0, 0.0))
                low = min(lowest, float(own.values[where].min()))
                found[mapped.channel] = (first, place, count + len(where), low)
        for _, place, count, lowest in sorted(found.values(), key=lambda one: one[0]):
            self.gathered.add("negative-reading", place, f"{count} readings, the lowest {lowest:g}")

    def say_fractions(self) -> None:
        """Hold O2 and CO2 read as percent against their numbers: where all are very small, they may be fractions."""
        parts = [part for part in self._parts if len(part.rows)]
        for number, mapped in enumerate(column for column in self.mapping.columns if column.use == "reading"):
            if not parts or mapped.unit != "%" or mapped.gas not in ("o2", "co2") or mapped.why:
                continue
            if any(own == part.lanes[number][0] for part in parts for _, own in part.page.percent):
                continue
            every = np.concatenate([part.columns[number].values for part in parts])
            highest = float(np.max(every, initial=0.0, where=~np.isnan(every)))
            if 0.0 < highest < FRACTION_BELOW:
                place = self.grid.place(parts[0].page, int(parts[0].rows[0]), parts[0].lanes[number][0], mapped.channel)
                found = (
                    f'no reading above {highest:g} in a column of percent: a fraction has its unit "1" in the mapping; '
                    f'if it is percent, write why = "percent" below the column'
                )
                self.gathered.add("mapping-differs", place, found)

    def in_order(self) -> LoggedRows:
        """The rows by time; a time that stands twice with the same readings counts once, else is a problem."""
        parts = self._parts
        sizes = [len(part.rows) for part in parts]
        source = np.repeat(np.arange(len(parts)), sizes)
        times = np.concatenate([part.moments for part in parts]).astype(STAMPS)
        numbers = np.concatenate([part.numbers for part in parts])
        columns = []
        for index in range(len(parts[0].lanes)):
            own = [part.columns[index] for part in parts]
            values, kinds, texts = (
                np.concatenate([getattr(one, name) for one in own]) for name in ("values", "kinds", "texts")
            )
            columns.append(LoggedColumn(values, kinds, Texts(texts, values), numbers, self._sources(index), source))
        self._out_of_order(times)
        order = np.argsort(times, kind="stable")
        kept = self._once(times, columns, order)
        if len(kept) == len(times) and np.all(np.diff(kept) == 1):
            return LoggedRows(times, numbers, columns)
        return LoggedRows(times[kept], numbers[kept], [column.take(kept) for column in columns])

    def _sources(self, index: int) -> tuple[Place, ...]:
        return tuple(
            Place(self.grid.source.name, part.page.sheet, letters(part.lanes[index][0])) for part in self._parts
        )

    def _place(self, index: int) -> Place:
        """The place of the time of a row, by its position among all rows."""
        for part in self._parts:
            if index < len(part.rows):
                return self.grid.place(part.page, int(part.rows[index]), part.clock, "Time")
            index -= len(part.rows)
        raise IndexError(index)

    def _out_of_order(self, times: Where) -> None:
        back = np.flatnonzero(np.diff(times) < np.timedelta64(0, "us"))
        if len(back):
            before, after = times[back[0]].item(), times[back[0] + 1].item()
            found = f"{after:%Y-%m-%d %H:%M:%S} after {before:%Y-%m-%d %H:%M:%S}"
            code = "run-across-midnight" if self.mapping.time.day else "readings-out-of-order"
            self.gathered.add(code, self._place(int(back[0]) + 1), found)

    def _once(self, times: Where, columns: Sequence[LoggedColumn], order: Counts) -> Counts:
        """The rows in time order without those that say again what the row before them says."""
        twice = np.flatnonzero(times[order][1:] == times[order][:-1]) + 1
        if not len(twice):
            return order
        one, two = order[twice - 1], order[twice]
        same = np.ones(len(twice), dtype=bool)
        for column in columns:
            a, b = column.values[one], column.values[two]
            same &= (column.kinds[one] == column.kinds[two]) & ((a == b) | (np.isnan(a) & np.isnan(b)))
        self.merged += int(np.count_nonzero(same))
        again = np.zeros(len(order), dtype=bool)
        again[twice[same]] = True
        last = np.maximum.accumulate(np.where(again, 0, np.arange(len(order))))
        for at_ in twice[~same].tolist():
            number = int(columns[0].rows[order[last[at_ - 1]]]) if columns else 0
            found = f"{times[order[at_]].item():%Y-%m-%d %H:%M:%S}, also in row {number}, with other readings"
            self.gathered.add("duplicate-time", self._place(int(order[at_])), found)
        return order[~again]


def _texts(table: Table, columns: Sequence[int]) -> Iterator[str]:
    """The texts of some columns, row by row, as far as they are asked for."""
    for first in range(table.first, table.last, _CHUNK):
        cells = table.page.columns(columns, range(first, min(first + _CHUNK, table.last)))
        with_texts = [own for own in cells if str in map(type, own)]
        yield from (cell for row in zip(*with_texts, strict=True) for cell in row if isinstance(cell, str))
