"""Sheet tables to a record, or to the problems that stand in its way: all of them, in one pass."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, Protocol

from reporter import record as domain
from reporter.equation import System
from reporter.gases import find_gas
from reporter.intake import checks
from reporter.intake.clock_hint import clock_hint
from reporter.intake.gather import Gathered
from reporter.intake.process import read_process
from reporter.intake.readings import read_readings
from reporter.intake.rows import Filled, RowReader
from reporter.intake.sheets import Kind, Sheet, fold, sheets
from reporter.intake.table import SheetTable
from reporter.intake.windows import candidates, day_of
from reporter.record import ProcessLog, Readings, Record, SheetCopy, SourceFile
from reporter.units import ReadUnit, convert

#: The class of a row of each table sheet, by the attribute of the record that holds the rows.
ROW_CLASSES: dict[str, type[Any]] = {
    "fuels": domain.FuelRow,
    "fuel_gas": domain.FuelComponent,
    "fuel_use": domain.FuelUse,
    "channels": domain.Channel,
    "cylinders": domain.Cylinder,
    "calibrations": domain.Calibration,
    "runs": domain.Run,
    "points": domain.Point,
    "moisture": domain.MoistureTrain,
    "traverse": domain.TraverseReading,
    "particulate": domain.ParticulateTrain,
    "dilution_check": domain.DilutionCheck,
    "analyses": domain.Analysis,
    "limits": domain.Limit,
    "events": domain.Event,
    "attachments": domain.Attachment,
}


class Series(Protocol):
    """What stands in files beside the workbook: readings, process log, corrections of clocks."""

    @property
    def has_readings(self) -> bool:
        """Whether the readings stand in the files."""

    def readings(self, channels: Sequence[Filled], reader: RowReader, test: dict[str, Any]) -> Readings | None:
        """The readings of the files by the channels of the workbook; None where something stops."""

    def corrected(self, file: str, readings: Readings) -> Readings:
        """The readings of the workbook by its corrected clock."""

    def process(self, own: ProcessLog, reader: RowReader, test: dict[str, Any]) -> ProcessLog:
        """The process log of the files and of the workbook together."""


class _Builder:
    """One file's tables on their way to a record."""

    def __init__(self, tables: Sequence[SheetTable], gathered: Gathered, series: Series | None) -> None:
        self.series = series
        self.gathered = gathered
        self.tables = self._by_attr(tables)
        self.reader = RowReader(gathered)
        self.rows: dict[str, list[Filled]] = {}
        self.items: dict[str, Any] = {}
        self.readings: Readings | None = None
        self.process = ProcessLog()

    def _by_attr(self, tables: Sequence[SheetTable]) -> dict[str, SheetTable]:
        found: dict[str, SheetTable] = {}
        for table in tables:
            if table.spec.attr in found:
                names = f"{found[table.spec.attr].sheet!r} and {table.sheet!r}"
                self.gathered.add("repeated-sheet", self.gathered.place(table.sheet), names)
                continue
            found[table.spec.attr] = table
            checks.text_lengths(table, self.gathered)
            if table.hidden:
                self.gathered.add("hidden-read", self.gathered.place(table.sheet), ", ".join(table.hidden))
            if table.footers:
                cell = next(c for c in table.footers[0].cells if not c.blank)
                self.gathered.add("footer-row", self.gathered.place(table.sheet, cell.cell), repr(cell.text))
        return found

    def read(self) -> None:
        """Read every sheet, those first that others need."""
        names = ", ".join(table.sheet for table in self.tables.values()) or "none of the field workbook"
        for spec in sheets():
            elsewhere = spec.attr == "readings" and self.series is not None and self.series.has_readings
            if spec.required and spec.attr not in self.tables and not elsewhere:
                place = self.gathered.place(spec.name)
                self.gathered.add("missing-sheet", place, f"the sheets {names}", expected=f"a sheet {spec.name!r}")
        for spec in sheets():
            if spec.kind is Kind.ITEMS:
                self._read_items(spec)
        self._share()
        for spec in sheets():
            if spec.kind is Kind.TABLE:
                self._read_rows(spec)
                if spec.attr == "channels":
                    self._share_channels()
        self._read_series()

    def _read_items(self, spec: Sheet) -> None:
        table = self.tables.get(spec.attr)
        if table is not None and table.header_found:
            self.items[spec.attr] = self.reader.items(table)

    def _share(self) -> None:
        """Unit system and test date are needed to read everything else."""
        if "test" not in self.items:
            return
        made: Filled = self.items["test"][0]
        system, day = made.values.get("unit_system"), made.values.get("test_date")
        if system is not None:
            self.reader.system = System(system.value)
        elif "unit_system" not in made.bare:
            self.gathered.add("unit-system-assumed", self.gathered.place(made.place.sheet, "", "Unit system"))
        self.reader.day = day.value if day is not None else None

    def _read_rows(self, spec: Sheet) -> None:
        table = self.tables.get(spec.attr)
        if table is None or not table.header_found:
            return
        rows = self.rows[spec.attr] = self.reader.rows(table)
        if spec.required and not rows and spec.attr != "runs":
            self.gathered.add("no-rows", self.gathered.place(table.sheet))

    def _share_channels(self) -> None:
        units = {
            fold(row.text("channel")): row.values["unit"].value
            for row in self.rows.get("channels", ())
            if "unit" in row.values
        }

        def unit(name: str) -> ReadUnit | None:
            return units.get(fold(name))

        self.reader.channel_units = unit

    def _read_series(self) -> None:
        table = self.tables.get("readings")
        channels = self.rows.get("channels", [])
        test = self.items["test"][0].values if "test" in self.items else {}
        if self.series is not None and self.series.has_readings:
            if table is not None and table.rows:
                found = f"readings on the sheet {table.sheet!r}, and logger files beside the workbook"
                self.gathered.add("folder-inputs", self.gathered.place(table.sheet), found)
            self.readings = self.series.readings(channels, self.reader, test)
        elif table is not None and table.header_found:
            self.readings = read_readings(table, channels, self.reader, _gas_key)
            if not table.rows:
                self.gathered.add("no-rows", self.gathered.place(table.sheet))
            if self.series is not None and self.readings is not None:
                self.readings = self.series.corrected(self.gathered.file, self.readings)
        process = self.tables.get("process")
        if process is not None and process.header_found:
            self.process = read_process(process, self.reader)
        if self.series is not None:
            self.process = self.series.process(self.process, self.reader, test)

    def check(self) -> None:
        """Hold the sheets against each other."""
        rows, gathered = self.rows, self.gathered
        names = {
            spec.name: checks.names_of(rows[attr], key)
            for spec in sheets()
            for attr, key in (("channels", "channel"), ("runs", "run"), ("fuels", "fuel"), ("cylinders", "cylinder"))
            if spec.attr == attr and rows.get(attr)
        }
        for spec in sheets():
            if spec.attr in rows:
                checks.unique_names(spec, rows[spec.attr], gathered)
                checks.references(spec, rows[spec.attr], names, gathered)
        checks.unit_against_basis([*rows.get("channels", ()), *rows.get("limits", ())], gathered)
        runs = rows.get("runs", [])
        if all("start" not in row.values and "end" not in row.values for row in runs) and "runs" in self.tables:
            self._propose_runs(self.tables["runs"])
        checks.flow_against_basis(runs, gathered)
        checks.events(rows.get("events", []), gathered)
        checks.run_times(runs, gathered, (self.reader.day, self._item("last_test_day")))
        if self.readings is not None and self.readings.rows:
            seconds, at_start = self._interval(), self._item("reading_stamp") == "interval start"
            checks.runs_with_readings(runs, self.readings, gathered, seconds=seconds, at_start=at_start)
            if gathered.has("run-without-readings"):
                hint = clock_hint(rows.get("calibrations", ()), self.readings, at_start=at_start)
                if hint:
                    gathered.add("clock-differs", gathered.place(self.readings.place.sheet), hint)
            checks.logging_interval(self.readings, seconds, gathered)
        self.reader.say_assumed()

    def _propose_runs(self, table: SheetTable) -> None:
        """Say which times the runs could have, where none are entered; nothing is chosen."""
        runs, readings = self.rows.get("runs"), self.readings
        if readings is None or not len(readings.times):
            if runs == []:
                self.gathered.add("no-rows", self.gathered.place(table.sheet))
            return
        if runs is None:
            return
        at_start = self._item("reading_stamp") == "interval start"
        day = day_of(self.rows, readings, self.process, at_start=at_start)
        said = [f"{number}) {one.words()}" for number, one in enumerate(candidates(day), start=1)]
        least = f"{day.least.total_seconds() / 60:g} min"
        found = f"no start and no end of a run; possible by the rules: {'; '.join(said) or f'no stretch of {least}'}"
        cell = runs[0].place.cell if runs else table.header[0].cell
        self.gathered.add("run-times-missing", self.gathered.place(table.sheet, cell, "Start"), found)

    def _item(self, attr: str) -> Any:
        """The value of an item of the sheet Test; None where there is none."""
        made = self.items["test"][0].values.get(attr) if "test" in self.items else None
        return made.value if made is not None else None

    def _interval(self) -> float | None:
        given = self.items["test"][0].values.get("logging_interval") if "test" in self.items else None
        return None if given is None else convert(given.value, given.unit.unit, "s")

    def record(self, source: SourceFile) -> Record | None:
        """The record, unless something gathered makes the file unreadable."""
        if self.gathered.unreadable or self.readings is None:
            return None
        made, extra = self.items["test"]
        parts: dict[str, Any] = {"test": domain.Test(**made.values, extra=extra)}
        if "location" in self.items:
            made, extra = self.items["location"]
            parts["location"] = domain.Location(**made.values, extra=extra)
        for attr, rows in self.rows.items():
            parts[attr] = tuple(ROW_CLASSES[attr](place=row.place, **row.values) for row in rows)
        return Record(
            **parts, readings=self.readings, process=self.process, source=source, sheets=tuple(self._copies())
        )

    def _copies(self) -> list[SheetCopy]:
        return [
            SheetCopy(
                table.sheet,
                tuple(header.text for header in table.header),
                tuple(tuple(cell.text for cell in row.cells) for row in (*table.rows, *table.footers)),
                "the sheet" in table.hidden,
            )
            for table in self.tables.values()
        ]


def build(
    tables: Sequence[SheetTable], gathered: Gathered, source: SourceFile, series: Series | None = None
) -> Record | None:
    """The record of a file's tables; None if any problem gathered makes it unreadable.

    `series` gives the readings where they do not stand on the sheet Readings.
    """
    builder = _Builder(tables, gathered, series)
    builder.read()
    builder.check()
    return builder.record(source)


def _gas_key(text: str) -> str:
    found = find_gas(text)
    return "" if found is None else found.key
