"""Cases: workbooks, and files that cannot be opened."""

from __future__ import annotations

import io
import zipfile
from datetime import datetime
from typing import Any

from openpyxl.comments import Comment

from tests.corpus.case import END, HEADERS, Case, book, plain, rows_on, text
from tests.corpus.truth import TRUTH

LOG = "logger.xlsx"
EPOCH = datetime(1904, 1, 1)
PLAIN = b"application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml"
MACROS = b"application/vnd.ms-excel.sheet.macroEnabled.main+xml"
OLE = bytes.fromhex("d0cf11e0a1b11ae1")


def merged(made: Any) -> None:
    sheet = made.active
    sheet.append(["Emission log of a boiler (invented)"])
    sheet.append(["Time", "Analyzers, dry", None, None, None])
    sheet.append([None, "NOx", "CO", "O2", "CO2"])
    sheet.append([None, "ppm", "ppm", "%", "%"])
    for row in TRUTH:
        sheet.append(list(row))
    for cells in ("A1:E1", "B2:E2", "A2:A4"):
        sheet.merge_cells(cells)


def hidden_row(made: Any) -> None:
    rows_on(made.active)
    made.active.row_dimensions[5].hidden = True


def hidden_columns(made: Any) -> None:
    rows_on(made.active)
    for letter in "BC":
        made.active.column_dimensions[letter].hidden = True


def hidden_sheet(made: Any) -> None:
    rows_on(made.active)
    other = made.create_sheet("Old")
    rows_on(other, rows=[(row[0], 1.0, 1.0, 1.0, 1.0) for row in TRUTH])
    other.sheet_state = "hidden"


def only_hidden(made: Any) -> None:
    made.active.append(["nothing here"])
    rows_on(made.create_sheet("Log"))
    made["Log"].sheet_state = "hidden"


def three_sheets(made: Any) -> None:
    rows_on(made.active, rows=TRUTH[:20])
    for number, start in ((2, 20), (3, 40)):
        rows_on(made.create_sheet(f"Run {number}"), rows=TRUTH[start : start + 20])


def stacked(made: Any) -> None:
    for number, start in ((1, 0), (2, 20), (3, 40)):
        made.active.append([f"Run {number}"])
        rows_on(made.active, rows=TRUTH[start : start + 20])
        made.active.append([])


def beside(made: Any) -> None:
    made.active.append(["Run 1", *[None] * 5, "Run 2", *[None] * 5, "Run 3"])
    made.active.append([*HEADERS, None, *HEADERS, None, *HEADERS])
    for one, two, three in zip(TRUTH[:20], TRUTH[20:40], TRUTH[40:], strict=True):
        made.active.append([*one, None, *two, None, *three])


def beside_close(made: Any) -> None:
    made.active.append([*HEADERS, *HEADERS])
    for one, two in zip(TRUTH[:30], TRUTH[30:], strict=True):
        made.active.append([*one, *two])


def summary_sheet(made: Any) -> None:
    rows_on(made.active)
    made.create_sheet("Summary").append(["Run", "Start time", "NOx ppm", "O2 %"])
    made["Summary"].append(["1", TRUTH[0][0], 24.6, 4.5])


def summary_above(made: Any) -> None:
    made.active.append(["Run", "Start time", "NOx ppm dry", "O2 % dry"])
    made.active.append(["1", TRUTH[0][0], 24.6, 4.5])
    made.active.append([])
    rows_on(made.active)


def typed_parts(made: Any) -> None:
    rows_on(made.active, ("Date", "Clock", *HEADERS[1:]), rows=[(r[0].date(), r[0].time(), *r[1:]) for r in TRUTH])


def percent_cells(made: Any) -> None:
    rows_on(made.active, rows=[(t, n, c, o / 100, k / 100) for t, n, c, o, k in TRUTH])
    for row in range(2, 62):
        for column in (4, 5):
            made.active.cell(row, column).number_format = "0.00%"


def serials(made: Any) -> None:
    rows_on(made.active, rows=[((r[0] - datetime(1899, 12, 30)).total_seconds() / 86400, *r[1:]) for r in TRUTH])


def serials_1904(made: Any) -> None:
    made.epoch = EPOCH
    rows_on(made.active, rows=[((r[0] - EPOCH).total_seconds() / 86400, *r[1:]) for r in TRUTH])


def dates_1904(made: Any) -> None:
    made.epoch = EPOCH
    rows_on(made.active)


def formulas(made: Any) -> None:
    rows_on(made.active)
    made.active["B7"] = "=B6*1.01"


def commented(made: Any) -> None:
    rows_on(made.active)
    made.active["B7"].comment = Comment("probe moved (invented)", "T. Samplewright")
    made.active.auto_filter.ref = "A1:E61"


def numbers_as_text(made: Any) -> None:
    rows_on(made.active, rows=[(r[0], *map(str, r[1:])) for r in TRUTH])


def half_converted(made: Any) -> None:
    """Days up to the 12th made a date with day and month exchanged, the others left as text."""
    rows_on(made.active, rows=[
        (datetime(2026, 12, 4, 9, k) if k < 30 else f"13/04/2026 09:{k:02d}", *row[1:]) for k, row in enumerate(TRUTH)
    ])  # fmt: skip


def error_cells(made: Any) -> None:
    rows_on(made.active)
    made.active["B7"] = "#DIV/0!"
    made.active["B7"].data_type = "e"


def far(made: Any) -> None:
    rows_on(made.active)
    made.active["ZZZ3"] = 1.0


def with_macros() -> bytes:
    """A workbook with a part of macros, which are never run."""
    source = io.BytesIO(book(lambda made: rows_on(made.active)))
    target = io.BytesIO()
    with zipfile.ZipFile(source) as old, zipfile.ZipFile(target, "w", zipfile.ZIP_DEFLATED) as new:
        for name in old.namelist():
            data = old.read(name)
            if name == "[Content_Types].xml":
                data = data.replace(PLAIN, MACROS)
            new.writestr(name, data)
        new.writestr("xl/vbaProject.bin", b"\x00" * 64)
    return target.getvalue()


def bomb() -> bytes:
    """A workbook whose sheet unpacks to far more than it is."""
    target = io.BytesIO()
    with zipfile.ZipFile(target, "w", zipfile.ZIP_DEFLATED) as made:
        made.writestr("[Content_Types].xml", "<Types/>")
        made.writestr("xl/worksheets/sheet1.xml", b"<c/>" * 8_000_000)
    return target.getvalue()


BOOKS = [
    Case("workbook", "a plain workbook", book(lambda made: rows_on(made.active)), LOG),
    Case("workbook with title block", "four lines above the table", book(lambda made: rows_on(made.active, top=4)),
         LOG),
    Case("merged headers", "merged title and group cells, three header rows", book(merged), LOG),
    Case("hidden row", "a hidden row among the readings", book(hidden_row), LOG, notes=frozenset({"hidden-read"})),
    Case("hidden columns", "the columns of NOx and CO are hidden", book(hidden_columns), LOG,
         notes=frozenset({"hidden-read"}), says=("columns B, C",)),
    Case("hidden sheet", "older readings on a hidden sheet", book(hidden_sheet), LOG,
         answers={**END, "hidden-sheets": "leave out"}),
    Case("all on a hidden sheet", "the only readings on a hidden sheet", book(only_hidden), LOG,
         notes=frozenset({"hidden-read"})),
    Case("a sheet for each run", "three sheets of one shape", book(three_sheets), LOG),
    Case("runs stacked", "three tables below each other", book(stacked), LOG),
    Case("runs side by side", "three tables beside each other, an empty column between", book(beside), LOG),
    Case("runs side by side without a gap", "two tables that touch", book(beside_close), LOG, stops="time-column"),
    Case("summary sheet", "a sheet of averages beside the readings", book(summary_sheet), LOG,
         answers={**END, "table": "1"}, notes=frozenset({"rows-left-out"}), says=("a table: sheet 'Summary'",)),
    Case("summary above the readings", "a table of averages on the same sheet", book(summary_above), LOG,
         answers={**END, "table": "2"}),
    Case("percent cells", "0.045 shown as 4.50 %", book(percent_cells), LOG),
    Case("date and time cells", "a column of date cells and one of time cells", book(typed_parts), LOG),
    Case("serials of 1900", "day numbers, the usual date system", book(serials), LOG),
    Case("serials of 1904", "day numbers, the date system that begins in 1904", book(serials_1904), LOG),
    Case("dates of 1904", "date cells in the date system that begins in 1904", book(dates_1904), LOG),
    Case("numbers as text", "numbers stored as text", book(numbers_as_text), LOG),
    Case("comments and filters", "a comment at a cell, a filter over the table", book(commented), LOG,
         says=("comment at B7: probe moved (invented)",)),
    Case("half-converted dates in cells", "date cells with day and month exchanged beside dates left as text",
         book(half_converted), LOG, stops="date-order"),
    Case("error cells", "#DIV/0! as a cell's value", book(error_cells), LOG,
         cells={(5, "NOx"): ("error value", None)}),
    Case("formulas never calculated", "a formula without its value", book(formulas), LOG,
         stops="formula-without-value"),
    Case("workbook called csv", "a workbook with the ending .csv", book(lambda made: rows_on(made.active)), "a.csv"),
    Case("text called workbook", "a text table with the ending .xlsx", plain(), "a.xlsx"),
    Case("macro-enabled", "a workbook with macros, which are not run", with_macros(), "logger.xlsm",
         notes=frozenset({"macro-enabled"})),
]  # fmt: skip

BROKEN = [
    Case("empty", "a file of blanks", b"  \n", stops="no-readings-table"),
    Case("nothing", "a file of no bytes", b"", stops="no-readings-table"),
    Case("old workbook", "a workbook of the old binary kind (.xls)", OLE + bytes(504), "a.xls", stops="old-workbook"),
    Case("password", "a workbook that opens with a password",
         OLE + bytes(504) + "EncryptedPackage".encode("utf-16-le") + bytes(512), LOG, stops="encrypted"),
    Case("broken workbook", "half of a workbook", book(lambda made: rows_on(made.active))[:3000], LOG,
         stops="truncated"),
    Case("bytes", "bytes that are no text", bytes(range(256)) * 8, stops="not-a-workbook"),
    Case("picture", "a picture with the ending .csv", b"\x89PNG\r\n\x1a\n" + bytes(100), stops="not-a-workbook"),
    Case("bomb", "a small file that unpacks to 32 MB of nothing", bomb(), LOG, stops="zip-bomb"),
    Case("very wide", "a text of more than 512 columns", ("x," * 600 + "\n").encode() * 4, stops="zip-bomb"),
    Case("stray cell", "a cell far outside the table", book(far), LOG, stops="far-cell"),
    Case("web page", "a table of a web page with the ending .xls", (
        b"<html><table><tr><td>Time</td><td>NOx</td></tr><tr><td>2026-04-20 09:50</td><td>24.1</td></tr></table></html>"
    ), "a.xls", stops="no-readings-table"),
    Case("quotation mark left open", "a quotation mark that is never closed", text().replace(
        "2026-04-20 09:58", '"2026-04-20 09:58').encode(), stops="row-out-of-line"),
]  # fmt: skip

CASES = {"Workbooks": BOOKS, "Files that cannot be read": BROKEN}
