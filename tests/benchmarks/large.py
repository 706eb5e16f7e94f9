"""A long logger file, read, mapped and reduced, against what its plain loading costs on this machine.

    python tests/benchmarks/large.py [ROUNDS]

An invented test of 36.8 hours, logged each second in twelve channels, with three runs of twelve hours that cover
nearly all of it, is written into a temporary folder: field workbook, mapping, and the readings as CSV and as
workbook.  Each figure is the processor time of a whole process, so that what else the machine does weighs little;
pairs are run in turn and the median ratio is printed with its target.
"""

from __future__ import annotations

import os
import random
import shutil
import statistics
import subprocess
import sys
import tempfile
import zipfile
from datetime import datetime, timedelta
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
ROWS = 132_480
START = datetime(2026, 3, 10, 6)
#: Channel, unit, middle and spread of the readings.
CHANNELS = (
    ("NOx", "ppm", 142.0, 4.0), ("NO", "ppm", 131.0, 4.0), ("NO2", "ppm", 11.0, 1.0), ("CO", "ppm", 23.0, 6.0),
    ("SO2", "ppm", 58.0, 2.0), ("O2", "%", 6.4, 0.2), ("CO2", "%", 12.1, 0.2), ("THC", "ppm", 3.0, 0.5),
    ("CH4", "ppm", 1.9, 0.2), ("HCl", "ppm", 4.0, 0.5), ("NH3", "ppm", 2.0, 0.4), ("N2O", "ppm", 0.9, 0.1),
)  # fmt: skip
#: Where the modules stand compiled.
CACHE = Path(tempfile.gettempdir()) / f"fluebook-benchmark-{os.getpid()}"
#: A whole process that says its processor seconds and its peak memory in megabytes.
MEASURED = "import resource,subprocess,sys,time\n" \
    "code=subprocess.call(sys.argv[1:],stdout=subprocess.DEVNULL,stderr=subprocess.DEVNULL)\n" \
    "used = resource.getrusage(resource.RUSAGE_CHILDREN)\n" \
    "print(used.ru_utime+used.ru_stime, used.ru_maxrss/1024, code)\n"  # fmt: skip


def readings() -> list[list[float]]:
    """The invented readings, row by row, with two decimals."""
    chance = random.Random(3)
    state = [middle for _, _, middle, _ in CHANNELS]
    rows = []
    for _ in range(ROWS):
        for index, (_, _, middle, spread) in enumerate(CHANNELS):
            state[index] += 0.02 * (middle - state[index]) + chance.gauss(0.0, 0.1 * spread)
        rows.append([round(value, 2) for value in state])
    return rows


def write_field_workbook(path: Path) -> None:
    """Identity, channels and runs of the test; the readings stand in the logger's file."""
    import openpyxl

    hour = timedelta(hours=1)
    runs = [(str(n + 1), START + 12.2 * n * hour, START + (12.2 * n + 12) * hour) for n in range(3)]
    sheets: dict[str, list[tuple[object, ...]]] = {
        "Test": [
            ("Item", "Entry", "Note"), ("Facility", "Alder Creek Works (invented)"), ("Unit tested", "Boiler 2"),
            ("Authority", "Example Air Authority (invented)"), ("Test lead", "T. Samplewright"),
            ("Testing firm", "Paper Lantern Stack Testing (invented)"), ("Test date", START.date()),
            ("Test end date", (START + timedelta(days=1)).date()), ("Time zone", "UTC-06:00"), ("Unit system", "US"),
            ("Reading stamp", "interval end"),
        ],
        "Channels": [("Channel", "Gas", "Unit", "Moisture basis"), *((n, n, u, "dry") for n, u, _, _ in CHANNELS)],
        "Runs": [("Run", "Start", "End"), *runs],
    }  # fmt: skip
    book = openpyxl.Workbook()
    book.remove(book.active)
    for name, rows in sheets.items():
        page = book.create_sheet(name)
        for row in rows:
            page.append(row)
    book.save(path)


def write_folder(folder: Path, rows: list[list[float]], kind: str) -> Path:
    """A folder with the test; the path of its logger file."""
    folder.mkdir()
    write_field_workbook(folder / "field.xlsx")
    headers = ["Time", *(f"{name} [{unit}]" for name, unit, _, _ in CHANNELS)]
    stamps = [START + timedelta(seconds=number + 1) for number in range(len(rows))]
    if kind == "text":
        path = folder / "logger.csv"
        with path.open("w", encoding="utf-8") as file:
            print(",".join(headers), file=file)
            for stamp, row in zip(stamps, rows, strict=True):
                print(f"{stamp:%Y-%m-%d %H:%M:%S},{','.join(map('{:.2f}'.format, row))}", file=file)
    else:
        path = folder / "logger.xlsx"
        write_workbook(path, headers, stamps, rows)
    (folder / "logger.map.toml").write_text(mapping(kind, headers), encoding="utf-8")
    return path


def write_workbook(path: Path, headers: list[str], stamps: list[datetime], rows: list[list[float]]) -> None:
    """The same readings as a workbook of one sheet."""
    import xlsxwriter

    with xlsxwriter.Workbook(path, {"constant_memory": True}) as book:
        page, moment = book.add_worksheet("Data"), book.add_format({"num_format": "yyyy-mm-dd hh:mm:ss"})
        page.write_row(0, 0, headers)
        for number, (stamp, row) in enumerate(zip(stamps, rows, strict=True), start=1):
            page.write_datetime(number, 0, stamp, moment)
            for column, value in enumerate(row, start=1):
                page.write_number(number, column, value)


def mapping(kind: str, headers: list[str]) -> str:
    """The mapping a person would have saved."""
    from reporter.intake.foreign.mapping import MappedColumn, Mapping, dump
    from reporter.intake.foreign.times import TimeStyle

    columns = [MappedColumn(headers[0], "time")]
    for header, (name, unit, _, _) in zip(headers[1:], CHANNELS, strict=True):
        columns.append(MappedColumn(header, "reading", name, name.lower(), unit, "dry"))
    style = TimeStyle("year first" if kind == "text" else "serial 1900", "interval end")
    return dump(Mapping("Logger (invented)", kind, tuple(columns), style))


def measured(command: list[str]) -> tuple[float, float, int]:
    """Processor seconds, peak memory [MB] and exit code of a whole process; modules are compiled beforehand."""
    environment = {name: value for name, value in os.environ.items() if name != "PYTHONDONTWRITEBYTECODE"}
    environment["PYTHONPYCACHEPREFIX"] = str(CACHE)
    done = subprocess.run(
        [sys.executable, "-c", MEASURED, *command], cwd=ROOT, capture_output=True, check=True, env=environment
    )
    took, peak, code = done.stdout.split()
    return float(took), float(peak), int(code)


def pair(name: str, ours: list[str], plain: list[str], target: str, rounds: int) -> None:
    """Print the median ratio of two commands run in turn, and what memory ours took."""
    measured(ours)
    figures = [(measured(ours), measured(plain)) for _ in range(rounds)]
    ratio = statistics.median(a[0] / b[0] for a, b in figures)
    mine, base = (statistics.median(pair[side][0] for pair in figures) for side in (0, 1))
    peak, code = max(a[1] for a, _ in figures), figures[0][0][2]
    print(f"{name:<52}{mine:7.2f} s {base:7.2f} s   ratio {ratio:5.2f}   {target}")
    print(f"{'   peak memory':<52}{peak:7.0f} MB  target 600 MB   exit code {code}")


def refusals(folder: Path, workbook: Path) -> None:
    """Seconds and memory of a process that refuses a large file made hostile at its very end."""
    start = "import sys; from reporter.intake.foreign.grid import read_grid; g = read_grid(sys.argv[1]); "
    idle = measured([sys.executable, "-c", start.replace("g = read_grid(sys.argv[1]); ", "")])
    for name, old, new in (
        ("a far cell", b"</sheetData>", b'<row r="1048577"><c r="A1048577"><v>1</v></c></row></sheetData>'),
        ("a document type", b"</worksheet>", b"</worksheet><!DOCTYPE a>"),
        ("a broken end", b"</sheetData>", None),
    ):
        hostile = folder / "hostile.xlsx"
        with zipfile.ZipFile(workbook) as whole, zipfile.ZipFile(hostile, "w", zipfile.ZIP_DEFLATED) as made:
            for part in whole.namelist():
                data = whole.read(part)
                if part.endswith("sheet1.xml"):
                    data = data.replace(old, new) if new is not None else data[: data.index(old)]
                made.writestr(part, data)
        took, peak, code = measured([sys.executable, "-c", start + "sys.exit(not g.pages)", str(hostile)])
        print(f"{'refused: ' + name + ' behind 1.7 million cells':<52}{took:7.2f} s {idle[0]:7.2f} s   ", end="")
        print(f"{took - idle[0]:.2f} s more than the imports, {peak:.0f} MB, refused {code == 1}")


def main() -> None:
    """Print all ratios."""
    rounds = int(sys.argv[1]) if len(sys.argv) > 1 else 3
    sys.path.insert(0, str(ROOT))
    with tempfile.TemporaryDirectory() as name:
        folder, rows = Path(name), readings()
        text = write_folder(folder / "text", rows, "text")
        book = write_folder(folder / "book", rows, "workbook")
        check = [sys.executable, "-m", "reporter", "check"]
        look = [sys.executable, "-m", "reporter", "map"]
        load = [sys.executable, "-c", f"import pandas; pandas.read_csv({str(text)!r})"]
        plain = (
            "import openpyxl; [[c.value for c in row] for row in "
            f"openpyxl.load_workbook({str(book)!r}, read_only=True).worksheets[0].iter_rows()]"
        )
        pair("check of a CSV folder / import pandas, read_csv", [*check, str(text.parent)], load, "target 4", rounds)
        pair("map of the CSV / import pandas, read_csv", [*look, str(text)], load, "no target", rounds)
        refusals(folder, book)
        loaded = [sys.executable, "-c", plain]
        pair("check of a workbook folder / openpyxl read-only", [*check, str(book.parent)], loaded, "target 0.3", 1)


if __name__ == "__main__":
    try:
        main()
    finally:
        shutil.rmtree(CACHE, ignore_errors=True)
