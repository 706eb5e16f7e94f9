"""The shapes by name."""

from __future__ import annotations

from datetime import datetime
from typing import Any

from shapes import CO, END, HEADERS, NOX, O2, START, TRUTH, Shape, book, csv, number, rows_on, text


def comma(value: float) -> str:
    return number(value, ",")


def german(moment: datetime) -> str:
    return f"{moment:%d.%m.%Y;%H:%M:%S}"


TWO = (("Datum", "Uhrzeit", "NOx", "CO", "O2"), ("", "", "ppm tr", "ppm tr", "% tr"))
SPANISH = (("Fecha", "Hora", "NOx ppm seco", "Monóxido de carbono ppm seco", "Oxígeno % seco"),)
FRENCH = (("Date", "Heure", "Oxydes d'azote (ppm sec)", "Monoxyde de carbone (ppm sec)", "Oxygène (% sec)"),)
CORRECTED = [n * (20.9 - 3.0) / (20.9 - o) for n, o in zip(NOX, O2, strict=True)]


def with_corrected(header: str) -> str:
    lines = [",".join((*HEADERS, header))]
    for (moment, *values), more in zip(TRUTH, CORRECTED, strict=True):
        lines.append(",".join([f"{moment:%Y-%m-%d %H:%M}", *map(number, values), f"{more:.2f}"]))
    return "\n".join(lines) + "\n"


def changed(old: str, new: str, **how: Any) -> bytes:
    made = text(**how)
    assert old in made
    return made.replace(old, new, 1).encode()


def merged(made: Any) -> None:
    sheet = made.active
    sheet.append(["Emission log"])
    sheet.append(["Time", "Analyzer, dry", None, None])
    sheet.append([None, "NOx", "CO", "O2"])
    sheet.append([None, "ppm", "ppm", "%"])
    for row in TRUTH:
        sheet.append(list(row))
    sheet.merge_cells("B2:D2")
    sheet.merge_cells("A2:A4")


def hidden_row(made: Any) -> None:
    rows_on(made.active)
    made.active.row_dimensions[5].hidden = True


def hidden_sheet(made: Any) -> None:
    rows_on(made.active)
    other = made.create_sheet("Old")
    rows_on(other, rows=[(t, 1.0, 1.0, 1.0) for t, *_ in TRUTH])
    other.sheet_state = "hidden"


def stacked(made: Any) -> None:
    rows_on(made.active, rows=TRUTH[:6])
    made.active.append([])
    made.active.append(["Run 2"])
    rows_on(made.active, rows=TRUTH[6:])


def beside(made: Any) -> None:
    made.active.append([*HEADERS, None, *HEADERS])
    for one, two in zip(TRUTH[:6], TRUTH[6:], strict=True):
        made.active.append([*one, None, *two])


def summary_too(made: Any) -> None:
    rows_on(made.active)
    made.create_sheet("Summary").append(["Run", "Start time", "NOx ppm", "O2 %"])
    made["Summary"].append(["1", START, 24.6, 4.5])


def typed_parts(made: Any) -> None:
    rows_on(made.active, ("Date", "Time", *HEADERS[1:]), rows=[(t.date(), t.time(), *v) for t, *v in TRUTH])


def percent_cells(made: Any) -> None:
    rows_on(made.active, rows=[(t, n, c, o / 100) for t, n, c, o in TRUTH])
    for row in range(2, 14):
        made.active.cell(row, 4).number_format = "0.00%"


def serials(made: Any) -> None:
    rows_on(made.active, rows=[((t - datetime(1899, 12, 30)).total_seconds() / 86400, *v) for t, *v in TRUTH])


def serials_1904(made: Any) -> None:
    made.epoch = openpyxl_1904
    rows_on(made.active, rows=[((t - openpyxl_1904).total_seconds() / 86400, *v) for t, *v in TRUTH])


openpyxl_1904 = datetime(1904, 1, 1)

SHAPES: dict[str, Shape] = {
    "comma": csv(),
    "tab": csv(delimiter="\t"),
    "semicolon": csv(delimiter=";"),
    "bar": csv(delimiter="|"),
    "utf-8 with mark": csv("utf-8-sig"),
    "utf-16": csv("utf-16"),
    "utf-16 without mark": csv("utf-16-le"),
    "cp1252 with degrees": csv("cp1252", above=["Gas temperature 180 °C, sample line 120 °C, µ-controller"]),
    "title block": csv(above=["Alder Creek Works (invented)", "Logger,DL-1", "Serial,0001", ""]),
    "decimal comma": csv(delimiter=";", show=comma),
    "decimal comma in tabs": csv(delimiter="\t", show=comma),
    "thousands comma": csv(delimiter=";", show=lambda v: number(v, ".", ",")),
    "thousands point": csv(delimiter=";", show=lambda v: number(v, ",", ".")),
    "thousands blank": csv(delimiter=";", show=lambda v: number(v, ",", " ")),
    "thousands no-break blank": csv(delimiter=";", show=lambda v: number(v, ",", "\u00a0")),
    "thousands apostrophe": csv(delimiter=";", show=lambda v: number(v, ".", "'")),
    "day first": csv(clock=lambda t: f"{t:%d/%m/%Y %H:%M}"),
    "month first": csv(clock=lambda t: f"{t:%m/%d/%Y %H:%M}"),
    "twelve hours": csv(clock=lambda t: f"{t:%m/%d/%Y %I:%M:%S %p}"),
    "two-digit year": csv(clock=lambda t: f"{t:%m/%d/%y %H:%M}"),
    "two-digit year, day first": csv(clock=lambda t: f"{t:%d.%m.%y %H:%M}", answers={**END, "date-order": "day first"}),
    "month name": csv(clock=lambda t: f"{t:%d-%b-%Y %H:%M}"),
    "compact day": csv(clock=lambda t: f"{t:%Y%m%d %H:%M:%S}"),
    "iso with T": csv(clock=lambda t: f"{t:%Y-%m-%dT%H:%M:%S}"),
    "iso with offset kept": csv(
        clock=lambda t: f"{t:%Y-%m-%dT%H:%M:%S}-06:00", answers={**END, "time-zone": "as written"}
    ),
    "utc converted": csv(
        clock=lambda t: f"{t.replace(hour=t.hour + 6):%Y-%m-%dT%H:%M:%S}Z",
        answers={**END, "time-zone": "America/Denver"},
    ),
    "spanish": csv(delimiter=";", headers=SPANISH, clock=lambda t: f"{t:%d/%m/%Y;%H:%M}", show=comma),
    "french": csv(delimiter=";", headers=FRENCH, clock=lambda t: f"{t:%d/%m/%Y;%H:%M}", show=comma),
    "german, units in a row": csv(delimiter=";", headers=TWO, clock=german, show=comma),
    "spellings": csv(headers=(("Date/Time", "NO_x ppmvd", "Carbon monoxide ppmvd", "02% dry"),)),
    "oxides of nitrogen": csv(
        headers=(("Timestamp", "Oxides of nitrogen (ppmvd)", "CO (ppmvd)", '"Oxygen (%, dry)"'),)
    ),
    "no basis": csv(
        headers=(("Time", "NOx ppm", "CO ppm", "O2 %"),), answers={**END, "column.*.basis": "dry"}
    ),
    "no unit": csv(
        headers=(("Time", "NOx dry", "CO dry", "O2 dry"),),
        answers={**END, "column.B.unit": "ppm", "column.C.unit": "ppm"},
    ),
    "stamp in the header": csv(headers=(("Interval end time", *HEADERS[1:]),), answers={}),
    "foot": csv(below=[f"Average,{sum(NOX) / 12:.2f},{sum(CO) / 12:.2f},{sum(O2) / 12:.2f}", "Max,26.20,1234.50,5.15"]),
    "foot without a word": csv(below=[f",{sum(NOX) / 12:.3f},{sum(CO) / 12:.3f},{sum(O2) / 12:.3f}"]),
    "rows of text": Shape(changed("\n2026-04-20 10:00", "\nPORT B,,,\n2026-04-20 10:00")),
    "out of order": Shape(
        text(order=[3, 2, 1, 0, *range(4, 12)]).encode(), notes=frozenset({"readings-out-of-order"})
    ),
    "a row twice": Shape(changed("\n2026-04-20 10:00", "\n2026-04-20 09:59:00,24.60,3.10,4.05\n2026-04-20 10:00")),
    "no-break blanks": csv(show=lambda v: f"\u00a0{v:.2f} "),
    "units in cells": Shape(
        "\n".join(["Time;NOx dry;CO dry;O2 dry", *(f"{t};{n} ppm;{c} ppm;{o} %" for t, n, c, o in TRUTH), ""]).encode()
    ),
    "corrected by words": Shape(with_corrected("NOx @3% O2").encode()),
    "corrected by ratio": Shape(with_corrected("NOx ppmvd").encode(), answers={**END, "gas.nox.columns": "B"}),
    "letter for digit": Shape(changed("23.95", "23.9S").replace(b"23.9S", b"23.95").replace(b"24.00", b"24.OO"),
                              answers={**END, "word.24.OO": "24.00"}),
    "workbook": book(lambda made: rows_on(made.active)),
    "workbook with title": book(lambda made: rows_on(made.active, top=4)),
    "merged headers": book(merged),
    "hidden row": book(hidden_row, notes=frozenset({"hidden-read"})),
    "hidden sheet": book(hidden_sheet, {**END, "hidden-sheets": "leave out"}),
    "runs stacked": book(stacked),
    "runs side by side": book(beside),
    "summary sheet": book(summary_too, {**END, "table": "1"}),
    "percent cells": book(percent_cells),
    "serials 1900": book(serials),
    "serials 1904": book(serials_1904),
    "numbers as text": book(lambda made: rows_on(made.active, rows=[(t, *map(str, v)) for t, *v in TRUTH])),
    "date and time cells": book(typed_parts),
    "header on each page": Shape(
        changed("\n2026-04-20 10:01", "\n" + ",".join(HEADERS) + "\n2026-04-20 10:01"),
    ),
    "quoted decimal comma": csv(show=lambda v: '"' + comma(v) + '"'),
    "no gas": Shape(b"Time,Load\n2026-04-20 09:55,3\n", problem="no-readings-table"),
    "empty": Shape(b"  \n", problem="no-readings-table"),
    "old workbook": Shape(b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(504), "a.xls", problem="old-workbook"),
    "broken workbook": Shape(b"PK\x03\x04 and no more", "a.xlsx", problem="truncated"),
    "bytes": Shape(bytes(range(256)) * 8, problem="not-a-workbook"),
}  # fmt: skip
