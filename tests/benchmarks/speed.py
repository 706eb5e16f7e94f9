"""Ratios of what fluebook costs to what its building blocks cost, measured side by side on this machine.

    python tests/benchmarks/speed.py [ROUNDS]

Each pair is run in turn, whole process by whole process, and the median of the pairs' ratios is printed with
its target.  Times are in milliseconds and vary with the machine; read the ratios.
"""

from __future__ import annotations

import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
SAMPLE = ROOT / "sample_inputs" / "valid" / "gas_boiler_us.xlsx"
PYTHON = sys.executable

BARE = [PYTHON, "-c", "pass"]
LOAD = [PYTHON, "-c", f"import openpyxl; openpyxl.load_workbook({str(SAMPLE)!r})"]
FLOOR = [
    PYTHON,
    "-c",
    "import jinja2, weasyprint; weasyprint.HTML(string=jinja2.Template('<p>{{ x }}').render(x=1)).write_pdf()",
]
HELP = [PYTHON, "-m", "reporter", "--help"]
CHECK = [PYTHON, "-m", "reporter", "check", str(SAMPLE)]


def report_command(source: Path, folder: str) -> list[str]:
    """The main job on a workbook."""
    return [PYTHON, "-m", "reporter", "report", str(source), "--out", folder]


#: What a test of one concentration limit does not have: sheets, columns, limits.
_SHEETS = {"Process", "Attachments", "Points", "Moisture", "Fuel use"}
_COLUMNS = {"CO", "CO2", "Heat input", "Heat input source", "Stack flow", "Moisture source", "Static pressure"}
_ROWS = {"CO", "CO2", "NOX-RATE"}


def short_test(folder: str) -> Path:
    """The sample with NOx and O2 against its concentration limit alone: a report of 12 to 15 pages."""
    sys.path.insert(0, str(ROOT / "sample_inputs"))
    from make_samples import scenario, sheets, workbook

    data = scenario("gas_boiler_us")
    kept = {
        name: [
            {column: value for column, value in row.items() if column.split(" [")[0] not in _COLUMNS}
            for row in rows
            if not {row.get("Channel"), row.get("Gas"), row.get("Pollutant"), row.get("Limit id")} & _ROWS
        ]
        for name, rows in sheets.all_sheets(data).items()
        if name not in _SHEETS
    }
    path = Path(folder) / "short_test.xlsx"
    path.write_bytes(workbook.write(data["title"], kept))
    return path


def seconds(command: list[str]) -> float:
    """Wall time of one whole process."""
    begin = time.perf_counter()
    subprocess.run(command, cwd=ROOT, check=False, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
    return time.perf_counter() - begin


def pair(name: str, ours: list[str], floor: list[str], target: float, rounds: int) -> None:
    """Print the median ratio of two commands run in turn."""
    seconds(ours), seconds(floor)
    times = [(seconds(ours), seconds(floor)) for _ in range(rounds)]
    ratio = statistics.median(a / b for a, b in times)
    mine = statistics.median(a for a, _ in times) * 1000
    base = statistics.median(b for _, b in times) * 1000
    print(f"{name:<44}{mine:9.0f} ms {base:9.0f} ms   ratio {ratio:5.2f}   target {target:g}")


def pages(path: Path) -> int:
    """Pages of a PDF."""
    from pypdf import PdfReader

    return len(PdfReader(path).pages)


def inside() -> None:
    """Milliseconds of our own stages in a warm process."""
    from reporter.api import opened
    from reporter.assess.pipeline import assess
    from reporter.intake import read

    record = read(SAMPLE).record
    assert record is not None
    assess(record)
    times = []
    for _ in range(9):
        begin = time.perf_counter()
        assess(record)
        times.append(time.perf_counter() - begin)
    print(f"{'reduce and check, three runs':<44}{statistics.median(times) * 1000:9.1f} ms{'':32}target 50 ms")
    outcome = opened(SAMPLE)
    from datetime import UTC, datetime

    from reporter.output.data import to_json
    from reporter.output.workbook import write_workbook

    issued = datetime(2026, 1, 1, tzinfo=UTC)
    for name, work in (
        ("JSON", lambda: to_json(outcome, issued, "0")),
        ("workbook", lambda: write_workbook(outcome, issued=issued, version="0")),
    ):
        begin = time.perf_counter()
        work()
        print(f"{name:<44}{(time.perf_counter() - begin) * 1000:9.1f} ms")


def main() -> None:
    """Print all ratios."""
    rounds = int(sys.argv[1]) if len(sys.argv) > 1 else 5
    pair("--help / bare Python", HELP, BARE, 4, rounds)
    pair("check / import openpyxl and load the sample", CHECK, LOAD, 3, rounds)
    with tempfile.TemporaryDirectory() as folder:
        short = report_command(short_test(folder), f"{folder}/out")
        pair("report of a short test / renderer, one line", short, FLOOR, 4, rounds)
        print("   pages:", pages(Path(folder) / "out" / "short_test.pdf"))
        pair("report of the sample / renderer, one line", report_command(SAMPLE, folder), FLOOR, 4, rounds)
        print("   pages:", pages(Path(folder) / f"{SAMPLE.stem}.pdf"))
    inside()


if __name__ == "__main__":
    main()
