"""Rows of a sheet to named values, each with its place, text and unit; faults become problems."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from datetime import date
from typing import Any

from reporter import record
from reporter.equation import System
from reporter.intake.cells import (
    choice_of,
    gas_of,
    number_of,
    out_of_range,
    perhaps_fraction,
    unit_of,
)
from reporter.intake.dates import Fault, MomentRead, OrderWatch, date_of, moment_of
from reporter.intake.gather import Gathered
from reporter.intake.headers import Matched, header_unit, match_columns, match_name, misspelt
from reporter.intake.sheets import ANY, Column, Sheet, Type
from reporter.intake.table import Cell, HeaderCell, Row, SheetTable, split_header
from reporter.problems import Place
from reporter.record import ExtraItem, Given
from reporter.units import ReadUnit, dimension

Values = dict[str, Given[Any]]


@dataclass(slots=True)
class Filled:
    """One filled row: its place and number, its values by attribute, and which times had no date."""

    place: Place
    number: int
    values: Values = field(default_factory=dict)
    bare: set[str] = field(default_factory=set)

    def text(self, attr: str) -> str:
        """The text of a value, or nothing."""
        given = self.values.get(attr)
        return "" if given is None else str(given.value)


class RowReader:
    """Reads the rows of sheets with what the whole file shares: unit system, test date, channel units."""

    def __init__(self, gathered: Gathered, system: System = System.US, day: date | None = None) -> None:
        self.gathered = gathered
        self.system = system
        self.day = day
        self.channel_units: Callable[[str], ReadUnit | None] = lambda name: None
        self._assumed: dict[str, tuple[Place, dict[str, str]]] = {}

    def rows(self, table: SheetTable) -> list[Filled]:
        """All filled rows of a table sheet."""
        matched = match_columns(table, self.gathered)
        named = {m.column.name: m for m in matched}
        filled, empty = [], []
        for row in table.rows:
            if _printed_only(table.spec, named, row):
                empty.append(row.number)
            else:
                filled.append(self._row(table, matched, row))
        if empty:
            found = f"{len(empty)} rows, the first in row {empty[0]}"
            self.gathered.add("unfilled-row", self.gathered.place(table.sheet), found)
        for m in matched:
            if m.column.type is Type.DATETIME:
                self._watch_order(table, m.position, m.column.name)
        return filled

    def _row(self, table: SheetTable, matched: tuple[Matched, ...], row: Row) -> Filled:
        first = next((c for c in row.cells if not c.blank), row.cells[0])
        made = Filled(self.gathered.place(table.sheet, first.cell), row.number)
        late = [m for m in matched if m.column.unit_from]
        for m in (*(m for m in matched if not m.column.unit_from), *late):
            self.take(made, m.column, row.cells[m.position], unit=m.unit, sheet=table.sheet)
        for column in table.spec.columns:
            if column.required and column.attr not in made.values and any(m.column is column for m in matched):
                cell = next(row.cells[m.position] for m in matched if m.column is column)
                if cell.blank:
                    place = self.gathered.place(table.sheet, cell.cell, column.name)
                    self.gathered.add("missing-entry", place, remedy="fill in the cell, or clear the whole row")
        return made

    def take(self, made: Filled, column: Column, cell: Cell, *, unit: ReadUnit | None = None, sheet: str = "") -> None:
        """Put the value of one cell into a row, or a problem into the gathered ones."""
        place = self.gathered.place(sheet, cell.cell, column.name)
        if cell.uncalculated:
            self.gathered.add("formula-without-value", place, "a formula that was never calculated")
            return
        if cell.blank:
            return
        read = self._value(made, column, cell, unit=unit, place=place)
        if isinstance(read, Fault):
            if read.code:
                self.gathered.add(read.code, place, read.found, expected=read.expected)
        else:
            made.values[column.attr] = read

    def _value(
        self, made: Filled, column: Column, cell: Cell, *, unit: ReadUnit | None, place: Place
    ) -> Given[Any] | Fault:
        kind, text = column.type, cell.text
        if kind is Type.NUMBER:
            return self._number(made, column, cell, unit=unit, place=place)
        value: Any
        if kind is Type.TEXT:
            value = text
        elif kind is Type.DATE:
            value = date_of(cell)
        elif kind is Type.DATETIME:
            value = self._moment(made, column, cell)
        elif kind is Type.UNIT:
            value = unit_of(text, column)
        elif kind is Type.GAS:
            value = gas_of(cell)
        else:
            value = choice_of(cell, column)
            if kind is Type.BOOL and not isinstance(value, Fault):
                value = value == column.choices[0]
            elif column.enum and not isinstance(value, Fault):
                value = getattr(record, column.enum)(value)
        return value if isinstance(value, Fault) else Given(value, place, text)

    def _moment(self, made: Filled, column: Column, cell: Cell) -> Any:
        read = moment_of(cell, self.day)
        if isinstance(read, MomentRead):
            if read.bare:
                made.bare.add(column.attr)
            return read.value
        return Fault("", "") if read is None else read

    def _number(
        self, made: Filled, column: Column, cell: Cell, *, unit: ReadUnit | None, place: Place
    ) -> Given[Any] | Fault:
        read = number_of(cell)
        if isinstance(read, Fault):
            return read
        if read.from_text:
            self.gathered.add("text-as-number", place, repr(cell.text))
        used = self._unit(made, column, unit or read.unit, place=place)
        if isinstance(used, Fault):
            return used
        value = read.value
        if used is None and column.unit_from == "Unit" and value != 0.0:
            self._assume(place, column.name, "the unit of the channel")
        if read.unit is not None:
            if used is None or not _fits(column, read.unit, used):
                known = "a number alone" if used is None else f"a number, or a number in {used.unit}"
                return Fault("wrong-dimension", cell.text, known)
            used = read.unit if read.unit.unit != used.unit else used
        fault = out_of_range(value, used, column)
        if fault is None and read.unit is None:
            fault = perhaps_fraction(value, used, column)
        return fault or Given(value, place, cell.text, used)

    def _unit(self, made: Filled, column: Column, named: ReadUnit | None, *, place: Place) -> ReadUnit | Fault | None:
        """The unit of a number: of its header or cell, of its row, of its channel, or of the unit system."""
        if column.unit_from:
            own = self._unit_of_row(made, column)
            if named is None or own is None:
                return own or named
            if named.unit != own.unit:
                return Fault("unit-contradiction", f"{named.unit} and {own.unit}")
            return own
        if named is not None or not column.dimensions or ANY in column.dimensions:
            return named
        unit = column.default_unit(self.system)
        if column.us != column.si:
            self._assume(place, column.name, unit)
        return ReadUnit(unit)

    def _assume(self, place: Place, name: str, unit: str) -> None:
        self._assumed.setdefault(place.sheet, (place, {}))[1].setdefault(name, unit)

    def _unit_of_row(self, made: Filled, column: Column) -> ReadUnit | None:
        if column.unit_from == "Unit":
            given = made.values.get("unit")
            return given.value if given is not None else None
        return self.channel_units(made.text("channel"))

    def items(self, table: SheetTable) -> tuple[Filled, tuple[ExtraItem, ...]]:
        """The items of a sheet of items, and the rows that are none of its items."""
        made = Filled(self.gathered.place(table.sheet), 0)
        positions = {h.text.casefold(): i for i, h in enumerate(table.header)}
        note_at = positions.get("note")
        extra = []
        for row in table.rows:
            item, entry = row.cells[positions["item"]], row.cells[positions["entry"]]
            if item.blank:
                continue
            named = match_name(table.spec, item.text)
            if named is None:
                misspelt(self.gathered, table, item, item.text)
                note = row.cells[note_at].text if note_at is not None else ""
                place = self.gathered.place(table.sheet, entry.cell, item.text)
                extra.append(ExtraItem(item.text, entry.text, note, place))
                continue
            self._item(made, table, named[0], unit_text=split_header(item.text)[1] or named[1], entry=entry)
        for column in table.spec.columns:
            blank = column.attr not in made.values and column.attr not in made.bare
            if column.required and blank:
                place = self.gathered.place(table.sheet, self._cell_of(table, column), column.name)
                self.gathered.add("missing-entry", place, expected=f"a row {column.name!r} with its entry")
        return made, tuple(extra)

    def _item(self, made: Filled, table: SheetTable, column: Column, *, unit_text: str, entry: Cell) -> None:
        header = HeaderCell(entry.cell, "", column.name, column.name, unit_text)
        unit = header_unit(column, unit_text, place_of=(self.gathered, table, header))
        if isinstance(unit, Fault):
            made.bare.add(column.attr)
            return
        before = made.values.get(column.attr)
        self.take(made, column, entry, unit=unit, sheet=table.sheet)
        after = made.values.get(column.attr)
        if not entry.blank and after is None:
            made.bare.add(column.attr)
        if before is not None and after is not None and before.value != after.value:
            place = self.gathered.place(table.sheet, entry.cell, column.name)
            self.gathered.add("repeated-item", place, f"{before.text!r} and {after.text!r}")

    @staticmethod
    def _cell_of(table: SheetTable, column: Column) -> str:
        positions = {h.text.casefold(): i for i, h in enumerate(table.header)}
        for row in table.rows:
            named = match_name(table.spec, row.cells[positions["item"]].text)
            if named is not None and named[0] is column:
                return row.cells[positions["entry"]].cell
        return ""

    def _watch_order(self, table: SheetTable, position: int, name: str) -> None:
        watch = OrderWatch()
        for row in table.rows:
            watch.see(row.cells[position])
        self.say_order(watch, table, name)

    def say_order(self, watch: OrderWatch, table: SheetTable, name: str) -> None:
        """Report a column whose dates a spreadsheet program half converted."""
        found = watch.fault()
        if found is not None:
            cell, fault = found
            self.gathered.add(fault.code, self.gathered.place(table.sheet, cell.cell, name), fault.found)

    def say_assumed(self) -> None:
        """One note for each sheet with the units that were taken from the unit system."""
        for sheet, (_, units) in self._assumed.items():
            found = ", ".join(f"{name} in {unit}" for name, unit in units.items())
            self.gathered.add("unit-assumed", self.gathered.place(sheet), found)


def _fits(column: Column, own: ReadUnit, used: ReadUnit) -> bool:
    """Whether the unit written in a cell may stand in the column."""
    if column.unit_from:
        return own.unit == used.unit
    return dimension(own.unit) in column.dimensions or ANY in column.dimensions


_MEASURED = (Type.NUMBER, Type.DATE, Type.DATETIME)


def _printed_only(spec: Sheet, named: Mapping[str, Matched], row: Row) -> bool:
    """Whether a row holds only what a blank form prints: names and choices, nothing that was read or dated."""
    deciding = [m for m in named.values() if m.column.name in spec.counts_when or m.column.type in _MEASURED]
    asked = any(m.column.name in spec.counts_when for m in deciding)
    return asked and all(row.cells[m.position].blank for m in deciding)


def with_value(given: Given[Any], value: Any) -> Given[Any]:
    """The same entry with its value written as the sheet it refers to writes it."""
    return replace(given, value=value)
