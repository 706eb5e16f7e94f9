"""Cases: whole exports as trade and general data loggers write them, each with several things of its own."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from datetime import datetime, timedelta
from typing import Any

from tests.corpus.case import END, HEADERS, Case, book, comma, number, plain, rows_on, text
from tests.corpus.truth import TRUTH, Row

DRY = tuple(HEADERS)
NAMES, UNITS = ("NOx", "CO", "O2", "CO2"), ("ppm", "ppm", "%", "%")


def lines(head: str, row: Callable[[int, Row], str], *, end: str = "\n", encoding: str = "utf-8") -> bytes:
    """A file of a head and a line for each row of the truth."""
    return end.join([head, *(row(k, own) for k, own in enumerate(TRUTH)), ""]).encode(encoding)


def triplets(*statistics: tuple[float, str]) -> Callable[[int, Row], str]:
    """A row with several statistics of each channel: factors to the mean."""
    return lambda _, row: ",".join([str(row[0]), *(number(v * f) for v in row[1:] for f, _ in statistics)])


def plus(*more: str) -> Callable[[int, Row], str]:
    """A plain row with further cells."""
    return lambda _, row: ",".join([str(row[0]), *map(number, row[1:]), *more])


def between(line: str, factor: float = 1.25) -> bytes:
    """Names and units in two rows; after thirty readings a line, and NOx and CO in another unit."""
    other = [(t, a * factor, b * factor, o, c) for t, a, b, o, c in TRUTH]
    rows = [*TRUTH[:30], *other[30:]]
    headers = (("Time", *NAMES), ("", *(f"{unit} dry" for unit in UNITS)))
    return plain(headers=headers, rows=rows, before={30: [line]})


def tagged(names: Sequence[str] = NAMES) -> bytes:
    """A row for each channel and time."""
    head = "Timestamp,Channel,Value,Unit"
    return lines(head, lambda _, r: "\n".join(
        f"{r[0]},{n} dry,{number(v)},{u}" for n, u, v in zip(names, UNITS, r[1:], strict=True)))  # fmt: skip


def of_days(sheets: Sequence[str]) -> bytes:
    """A workbook with twenty readings on each sheet, times without a date."""

    def fill(made: Any) -> None:
        made.remove(made.active)
        for at, name in enumerate(sheets):
            rows = [(row[0].time(), *row[1:]) for row in TRUTH[20 * at : 20 * at + 20]]
            rows_on(made.create_sheet(name), rows=rows)

    return book(fill)


LOST = {(at, "CO"): ("error value", None) for at in (5, 6)}
THREE = ((1.0, "Avg"), (0.98, "Min"), (1.02, "Max"))

LOGGERS = [
    Case("milliseconds and an empty last column", "two header rows with the form of the time, a semicolon at each end",
         lines(";".join(("Zeit", *NAMES, "\ndd.MM.yyyy HH:mm:ss.SSS", "ppm tr.", "ppm tr.", "Vol.-% tr.", "Vol.-% tr.",
                         "")).replace(";\n", ";\r\n"),
               lambda k, r: f"{r[0]:%d.%m.%Y %H:%M:%S}.{k % 7:03d};{';'.join(map(comma, r[1:]))};", end="\r\n"),
         rows=[(row[0] + timedelta(milliseconds=k % 7), *row[1:]) for k, row in enumerate(TRUTH)]),
    Case("average, lowest, highest", "three columns of each channel: `NOx Avg`, `NOx Min`, `NOx Max`", lines(
        ",".join(["Time", *(f"{n} {s} ({u} dry)" for n, u in zip(NAMES, UNITS, strict=True) for _, s in THREE)]),
        triplets(*THREE)), says=("the lowest of each interval",)),
    Case("lowest, average, highest below a group",
         "the gas above the first of three columns, `Min`, `Avg`, `Max` below",
         lines(",".join(["Time", *(f"{n} [{u} dry],," for n, u in zip(NAMES, UNITS, strict=True))])
               + "\n," + ",".join(["Min,Avg,Max"] * 4), triplets((0.98, ""), (1.0, ""), (1.02, "")))),
    Case("highest alone", "`NOx Max` and no other column of NOx", plain(
        headers=(("Time", "NOx Max [ppm dry]", *DRY[2:]),)),
         stops="column.B.gas"),
    Case("average beside a plain column", "`NOx avg` beside `NOx`", lines(
        ",".join((*DRY, "NOx avg [ppm dry]")), plus("24.40")), stops="column.F.gas"),
    Case("environment line and process types", "station, TIMESTAMP, RECORD, units, `Avg` below each", lines(
        '"DL","ST1","0001","prog"\n"TIMESTAMP","RECORD","NOx_Avg","CO_Avg","O2_Avg","CO2_Avg"\n'
        '"TS","RN","ppm","ppm","%","%"\n"","","Avg","Avg","Avg","Avg"',
        lambda k, r: ",".join([f'"{r[0]}"', str(k), *map(number, r[1:])])), answers={**END, "column.*.basis": "dry"}),
    Case("one-letter status", "a column `S` beside each channel: V, and C in four rows", lines(
        "Time," + ",".join(f"{h},S" for h in DRY[1:]),
        lambda k, r: ",".join([str(r[0]), *(f"{number(v)},{'C' if 20 <= k < 24 else 'V'}" for v in r[1:])])),
        says=("'V' in 56 rows, first in C2, 'C' in 4 rows, first in C22",)),
    Case("a row for each channel", "one line for each channel and minute", tagged(), stops="no-readings-table"),
    Case("the channel in the title", "`Channel: NOx` above Date, Time, Value", lines(
        "Channel: NOx\nUnit: ppm dry\n\nDate,Time,Value", lambda _, r: f"{r[0]:%Y-%m-%d,%H:%M:%S},{number(r[1])}"),
        stops="no-readings-table"),
    Case("cells parted by blanks", "columns of fixed width", lines(
        "Date       Time     NOx   CO  O2   CO2", lambda _, r: f"{r[0]}  " + "  ".join(f"{v:8.2f}" for v in r[1:])),
        stops="no-readings-table"),
    Case("units in another row half way", "after thirty readings a row of units: mg/m3 in place of ppm",
         between(",mg/m3 dry,mg/m3 dry,% dry,% dry"), stops="unit-changes"),
    Case("units in a remark half way", "after thirty readings the line `Units changed: NOx mg/m3 CO mg/m3`",
         between("Units changed: NOx mg/m3 CO mg/m3"), stops="unit-changes"),
    Case("a gas in a remark", "the line `Span with 45.1 mg/m3 NO in N2` between readings", plain(
        before={30: ["Span with 45.1 mg/m3 NO in N2"]}), notes=frozenset({"rows-left-out"})),
    Case("another header half way", "after thirty readings a header with mg/m3 in place of ppm", plain(
        before={30: [",".join(DRY).replace("ppm", "mg/m3")]}), stops="table"),
    Case("a reference oxygen in each row", "a column `O2 ref` with 3.00 in every row", lines(
        ",".join((*DRY, "O2 ref [%]")), plus("3.00")), says=("a reference oxygen",)),
    Case("reference in brackets", "`NOx(3%) ppm` beside NOx", lines(
        ",".join((*DRY, "NOx(3%) [ppm dry]")),
        lambda _, r: ",".join([str(r[0]), *map(number, r[1:]), f"{r[1] * 17.9 / (20.9 - r[3]):.2f}"]))),
    Case("rates beside concentrations", "`NOx lb/hr` and `NOx lb/MMBtu` beside NOx", lines(
        ",".join((*DRY, "NOx lb/hr", "NOx lb/MMBtu")), plus("4.2", "0.03")), says=("a rate in lb/hr",)),
    Case("efficiency and excess air", "`Eff %` and `ExAir %` beside the gases", lines(
        ",".join((*DRY, "Eff %", "ExAir %")), plus("83.1", "25.0"))),
    Case("multiples of a unit", "`NOx x10 [ppm dry]`: 244 for 24.4", plain(
        headers=(("Time", "NOx x10 [ppm dry]", *DRY[2:]),)), stops="column.B.multiple"),
    Case("a range in the header", "`NOx 100 ppm dry`, the range of the analyzer", plain(
        headers=(("Time", "NOx 100 ppm dry", *DRY[2:]),)), answers={**END, "column.B.multiple": "as written"}),
    Case("milliampere in the title", "`All channels 4-20 mA` above columns without units", plain(
        above=["All channels 4-20 mA"], headers=(("Time", *(f"{n} dry" for n in NAMES)),)), stops="column.D.signal"),
    Case("scientific notation, time in one number", "20260420095000, then 2.494000E+01", text(
        headers=(("TIME", "NOX_PPMVD", "CO_PPMVD", "O2_%VD", "CO2_%VD"),), delimiter="\t",
        clock=lambda t: f"{t:%Y%m%d%H%M%S}", show=lambda v: f"{v:.6E}").encode()),
    Case("hundredths behind a colon", "09:50:00:07", plain(clock=lambda t: f"{t:%Y-%m-%d %H:%M:%S}:07"), rows=[
        (row[0] + timedelta(milliseconds=70), *row[1:]) for row in TRUTH]),
    Case("minutes and seconds alone", "50:00.0, as a spreadsheet program shows and saves a time", plain(
        clock=lambda t: f"{t:%M:%S}.0"), stops="time-form"),
    Case("a column too narrow", "######## in place of each time", plain(clock=lambda _: "########"),
         stops="no-readings-table"),
    Case("cells too narrow", "`######` in two cells of CO", plain(put={(at, 2): "######" for at in (5, 6)}),
         answers={**END, "word.######": "error value"}, cells=LOST),
    Case("seconds from a start in the title", "`Start: 2026-04-20 09:50`, then 0, 60, 120 under `Elapsed (s)`", plain(
        above=["Start: 2026-04-20 09:50", ""], headers=(("Elapsed (s)", *DRY[1:]),),
        clock=lambda t: f"{(t - TRUTH[0][0]).total_seconds():.0f}"), stops="no-readings-table"),
    Case("time from a start in the title", "`Start: 2026-04-20 09:50`, then 00:00:00, 00:01:00 under `Time`", plain(
        above=["Start: 2026-04-20 09:50"], clock=lambda t: f"{t - TRUTH[0][0]}".rjust(8, "0")), stops="day"),
    Case("seconds since 1970", "1776700200", plain(
        clock=lambda t: f"{(t - datetime(1970, 1, 1)).total_seconds():.0f}"), stops="no-readings-table"),
    Case("a sheet for each day", "sheets named 2026-04-20, -21, -22 with times without a date", of_days(
        ("2026-04-20", "2026-04-21", "2026-04-22")), "logger.xlsx", stops="day"),
    Case("a sheet for each run, times alone", "sheets named Run 1, Run 2, Run 3 with times without a date", of_days(
        ("Run 1", "Run 2", "Run 3")), "logger.xlsx", answers={**END, "day": "test date"}, day=True),
    Case("UTC in the header", "`Time (UTC)` above 15:50 for 09:50 in Denver", plain(
        headers=(("Time (UTC)", *DRY[1:]),), clock=lambda t: f"{t + timedelta(hours=6)}"),
        answers={**END, "time-zone": "America/Denver"}),
    Case("hours from UTC in a line above", "`Time zone: UTC-06:00`, kept as the clock of the test", plain(
        above=["Time zone: UTC-06:00"]), answers={**END, "time-zone": "as written"}),
    Case("a title that says data", "`Survey data,NOx and CO at Boiler 2` above the table", plain(
        above=["Survey data,NOx and CO at Boiler 2", ""])),
    Case("polish file", "Data and Godzina, suchy, in the old code page", text(
        headers=(("Data i godzina", "Tlenki azotu [ppm, suchy]", "Tlenek węgla [ppm, suchy]", "Tlen [% obj., suchy]",
                  "Dwutlenek węgla [%, suchy]"),), delimiter=";", show=comma).encode("cp1250")),
    Case("italian file", "Data and Ora, secco, day first", text(
        headers=(("Data", "Ora", "Ossidi di azoto (ppm secco)", "Monossido di carbonio (ppm secco)",
                  "Ossigeno (% secco)",
                  "Anidride carbonica (% secco)"),), delimiter=";", show=comma,
        clock=lambda t: f"{t:%d/%m/%Y;%H:%M}").encode("cp1252")),
    Case("five columns of two hundred", "196 columns of tags around the four gases", lines(
        ",".join(["Time", *(f"TAG{k:03d}" for k in range(100)), *DRY[1:], *(f"TAG{k:03d}" for k in range(100, 196))]),
        lambda k, r: ",".join([str(r[0]), *[str(k)] * 100, *map(number, r[1:]), *[str(k)] * 96]))),
]  # fmt: skip

CASES = {"Exports of loggers": LOGGERS}
