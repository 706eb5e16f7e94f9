"""Cases of whole folders: a field workbook without readings, logger files beside it, and a mapping for each shape."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import datetime, timedelta
from typing import Any

from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.look import look_at_grid, mapping_of
from reporter.intake.foreign.mapping import dump
from reporter.problems import catalogue
from tests.corpus.case import END, HEADERS, book, plain, rows_on, text
from tests.corpus.truth import STARTS, TRUTH, Row

Sheets = dict[str, list[list[Any]]]


@dataclass(frozen=True)
class Folder:
    """The files of a test, and what must come of them."""

    name: str
    arrives: str
    files: Mapping[str, bytes]
    stops: str = ""
    rows: tuple[Row, ...] = TRUTH
    notes: frozenset[str] = field(default_factory=frozenset)


def field_book(changes: Mapping[str, list[list[Any]]] | None = None) -> bytes:
    """The field workbook, with some sheets in place of its own."""
    sheets: Sheets = {
        "Test": [
            ["Item", "Entry"], ["Facility", "Alder Creek Works (invented)"], ["Unit tested", "Boiler 2"],
            ["Authority", "Example Air Authority (invented)"],
            ["Testing firm", "Paper Lantern Stack Testing (invented)"],
            ["Test lead", "T. Samplewright"], ["Test date", STARTS[0].replace(hour=0, minute=0)],
            ["Time zone", "America/Denver"], ["Reading stamp", "interval end"], ["Unit system", "US"],
        ],
        "Channels": [
            ["Channel", "Gas", "Unit", "Moisture basis"], ["NOx", "NOx", "ppm", "dry"], ["CO", "CO", "ppm", "dry"],
            ["O2", "O2", "%", "dry"], ["CO2", "CO2", "%", "dry"],
        ],
        "Runs": runs(),
    }  # fmt: skip
    sheets |= changes or {}

    def fill(made: Any) -> None:
        made.remove(made.active)
        for name, rows in sheets.items():
            page = made.create_sheet(name)
            for row in rows:
                page.append(row)

    return book(fill)


def runs(*more: tuple[str, Any]) -> list[list[Any]]:
    """The rows of the sheet Runs, with further columns."""
    head = ["Run", "Start", "End", *(name for name, _ in more)]
    lines = [
        [str(n), start - timedelta(minutes=1), start + timedelta(minutes=19), *(value for _, value in more)]
        for n, start in enumerate(STARTS, start=1)
    ]
    return [head, *lines]


def mapping(content: bytes, answers: Mapping[str, str] = END, file: str = "logger.csv") -> bytes:
    """The mapping that `fluebook map` makes of a file and its answers."""
    return dump(mapping_of(look_at_grid(grid_of(file, content), answers))).encode()


def folder(*logs: bytes, changes: Mapping[str, list[list[Any]]] | None = None, **more: bytes) -> dict[str, bytes]:
    """Field workbook, logger files, and the mapping of the first."""
    files = {"field.xlsx": field_book(changes), "logger.map.toml": mapping(logs[0])}
    return files | {f"logger{n}.csv": log for n, log in enumerate(logs, start=1)} | more


def channels(row: int, column: int, entry: str) -> dict[str, list[list[Any]]]:
    """The sheet Channels with one entry changed."""
    rows = [["Channel", "Gas", "Unit", "Moisture basis"], ["NOx", "NOx", "ppm", "dry"], ["CO", "CO", "ppm", "dry"],
            ["O2", "O2", "%", "dry"], ["CO2", "CO2", "%", "dry"]]  # fmt: skip
    rows[row][column] = entry
    return {"Channels": rows}


def part(*columns: int) -> bytes:
    """The plain file with some of its channels."""
    lines = [line.split(",") for line in text().splitlines()]
    return "\n".join(",".join(line[c] for c in (0, *columns)) for line in lines).encode() + b"\n"


LOG = plain()
HIGH = [["Item", "Entry"], ["Elevation [ft]", 5280]]
AIR = plain(put={(k, c): f"{v}" for k in range(24, 30) for c, v in enumerate((0.02, 0.4, 20.91, 0.03), start=1)})
AIR_ROWS = tuple(row if not 24 <= k < 30 else (row[0], 0.02, 0.4, 20.91, 0.03) for k, row in enumerate(TRUTH))
UTC = plain(clock=lambda t: f"{t + timedelta(hours=6):%Y-%m-%dT%H:%M:%S}Z")

FOLDERS = [
    Folder("one logger file", "the field workbook without readings and one export", folder(LOG)),
    Folder("a file for each run", "three exports, one after the other", folder(
        *(plain(rows=TRUTH[k : k + 20]) for k in (0, 20, 40)))),
    Folder("two analyzers in two files", "NOx and CO in one export, O2 and CO2 in another", folder(part(1, 2)) | {
        "diluents.csv": part(3, 4), "diluents.map.toml": mapping(part(3, 4))}),
    Folder("exports that overlap", "two exports with ten readings in both", folder(
        plain(rows=TRUTH[:35]), plain(rows=TRUTH[25:]))),
    Folder("a workbook as logger file", "the readings as a workbook of another shape", {
        "field.xlsx": field_book(), "log.xlsx": book(lambda made: rows_on(made.active, top=3)),
        "log.map.toml": mapping(book(lambda made: rows_on(made.active, top=3)), file="log.xlsx")}),
    Folder("a file sent again with one changed cell", "the old and the new export side by side", folder(
        LOG, plain(put={(9, 1): "99.99"})), stops="readings-contradict"),
    Folder("another unit in the title", "`Unit: Boiler 7` above the table, Boiler 2 on the sheet Test", folder(
        LOG, plain(above=["Unit: Boiler 7", ""])), stops="file-of-another-test"),
    Folder("another facility in the title", "`Client,Cedar Mill (invented)` above the table", folder(
        LOG, plain(above=["Client,Cedar Mill"])), stops="file-of-another-test"),
    Folder("the same unit in other words", "`Unit: B-02` above the table, Boiler 2 on the sheet Test", folder(
        plain(above=["Facility,ALDER CREEK WORKS", "Unit: B-02"]))),
    Folder("wet in the mapping", "the columns are wet, the sheet Channels says dry", folder(
        plain(headers=(("Time", "NOx ppm wet", *HEADERS[2:]),))), stops="mapping-against-channels"),
    Folder("another unit on the sheet Channels", "NOx in ppm in the file, in mg/m3 on the sheet", folder(
        LOG, changes=channels(1, 2, "mg/m3")), stops="mapping-against-channels"),
    Folder("a channel without a column", "no CO2 in the export", folder(part(1, 2, 3)),
           stops="mapping-against-channels"),
    Folder("start against end", "stamps are the start by the header, the end on the sheet Test", {
        "field.xlsx": field_book(), "logger.csv": plain(headers=(("Interval start time", *HEADERS[1:]),)),
        "logger.map.toml": mapping(plain(headers=(("Interval start time", *HEADERS[1:]),)))},
        stops="mapping-against-channels"),
    Folder("UTC converted", "a logger in UTC, a test in Denver", {
        "field.xlsx": field_book(), "logger.csv": UTC,
        "logger.map.toml": mapping(UTC, {**END, "time-zone": "America/Denver"})}),
    Folder("converted to another zone", "stamps converted to a zone that is not that of the sheet Test", {
        "field.xlsx": field_book(), "logger.csv": UTC,
        "logger.map.toml": mapping(UTC, {**END, "time-zone": "America/Chicago"})}, stops="mapping-against-channels"),
    Folder("a header that changed", "the mapping of last year, a column renamed since", folder(LOG) | {
        "logger1.csv": plain(headers=(("Time", "NOx A [ppm dry]", *HEADERS[2:]),))}, stops="mapping-differs"),
    Folder("an order of dates that changed", "a mapping with the day first, a file with the month first", {
        "field.xlsx": field_book(), "logger.csv": plain(clock=lambda t: f"{t:%m/%d/%Y %H:%M}"),
        "logger.map.toml": mapping(plain(clock=lambda t: f"{t:%d/%m/%Y %H:%M}"))}, stops="mapping-differs"),
    Folder("no mapping", "an export and nothing that says how it is read",
           {"field.xlsx": field_book(), "logger.csv": LOG}, stops="mapping-missing"),
    Folder("two field workbooks", "two workbooks with a sheet Test", folder(LOG) | {"other.xlsx": field_book()},
           stops="folder-inputs"),
    Folder("readings of another day", "an export of the day before", folder(
        plain(rows=tuple((row[0] - timedelta(days=1), *row[1:]) for row in TRUTH))), stops="run-without-readings"),
    Folder("barometer of sea level", "29.95 inHg entered at 5280 ft", folder(LOG, changes={
        "Location": HIGH, "Runs": runs(("Barometric pressure [inHg]", 29.95))}),
        notes=frozenset({"barometer-at-sea-level"})),
    Folder("barometer of the station", "24.7 inHg entered at 5280 ft", folder(LOG, changes={
        "Location": HIGH, "Runs": runs(("Barometric pressure [inHg]", 24.7))})),
    Folder("moisture as a fraction", "0.12 in the column Moisture, which is percent", folder(LOG, changes={
        "Runs": runs(("Moisture [%]", 0.12))}), stops="ambiguous-moisture"),
    Folder("ambient air inside a run", "six minutes of air in run 2", folder(AIR), rows=AIR_ROWS,
           notes=frozenset({"gas-in-run"})),
    Folder("ambient air, excluded", "the same, with an event that excludes the minutes", folder(AIR, changes={
        "Events": [
        ["Time", "What", "Until", "Readings excluded", "Reason"],
        [datetime(2026, 4, 20, 10, 33), "air at the probe", datetime(2026, 4, 20, 10, 39), "yes", "probe moved"]]}),
        rows=AIR_ROWS),
]  # fmt: skip


def readme() -> str:
    """The part of the README on folders."""
    lines = ["## Whole folders\n", "| Case | What arrives | What fluebook does |", "|---|---|---|"]
    for case in FOLDERS:
        done = "the truth" + "".join(f"; notes `{code}`" for code in sorted(case.notes))
        if case.stops:
            title = catalogue()[case.stops].title
            done = f"stops: {title[0].lower()}{title[1:]} (`{case.stops}`)"
        lines.append(f"| {case.name} | {case.arrives} | {done} |")
    return "\n".join(lines) + "\n"
