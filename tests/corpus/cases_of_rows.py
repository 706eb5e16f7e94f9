"""Cases: title blocks, header rows, rows that are no readings, and what only the series itself shows."""

from __future__ import annotations

from statistics import fmean

from tests.corpus.case import HEADERS, Case, Held, plain, text
from tests.corpus.truth import TRUTH

_MEANS = [fmean(row[c] for row in TRUTH) for c in range(1, 5)]
_SUMS = [sum(row[c] for row in TRUTH) for c in range(1, 5)]
AVERAGE = "Average," + ",".join(f"{m:.2f}" for m in _MEANS)
WRONG = "Average," + ",".join(f"{m + (1.9 if k == 0 else 0):.2f}" for k, m in enumerate(_MEANS))
TOTAL = "Total," + ",".join(f"{s:.2f}" for s in _SUMS)
LARGEST = "Max," + ",".join(f"{max(row[c] for row in TRUTH):.2f}" for c in range(1, 5))
LEFT = frozenset({"rows-left-out"})

HEADED = [
    Case("title block", "five lines of names and serial numbers above the table", plain(
        above=["Alder Creek Works (invented)", "Logger,DL-1", "Serial,0001", "Interval,60 s", ""])),
    Case("title block with numbers and dates", "lines such as `Exported,2026-04-21 08:00` above the table", plain(
        above=["Exported,2026-04-21 08:00", "Range,0,100", "Barometer,29.1", "", ""])),
    Case("two header rows", "names, below them units", plain(
        headers=(("Time", "NOx", "CO", "O2", "CO2"), ("", "ppm dry", "ppm dry", "% dry", "% dry")))),
    Case("three header rows", "names, units, dry", plain(headers=(
        ("Time", "NOx", "CO", "O2", "CO2"), ("", "ppm", "ppm", "%", "%"), ("", "dry", "dry", "dry", "dry")))),
    Case("four header rows", "analyzer, names, units, dry", plain(headers=(
        ("Clock", "Analyzer 1", "Analyzer 2", "Analyzer 3", "Analyzer 4"), ("Time", "NOx", "CO", "O2", "CO2"),
        ("", "ppm", "ppm", "%", "%"), ("", "dry", "dry", "dry", "dry")))),
    Case("header on each page", "the header row again after every twenty readings", plain(
        before={20: [",".join(HEADERS)], 40: [",".join(HEADERS)]})),
    Case("captions between runs", "`Run 2` and an empty line before each run", plain(
        before={20: ["", "Run 2"], 40: ["", "Run 3"]}), notes=LEFT),
    Case("header without readings", "a header and nothing below", (",".join(HEADERS) + "\n").encode(),
         stops="no-readings-table"),
    Case("no gas", "times and a level alone", b"Time,Level\n2026-04-20 09:55,3\n2026-04-20 09:56,4\n",
         stops="no-readings-table"),
    Case("time along the row", "gases below each other, a column for each minute", "\n".join([
        "Time," + ",".join(f"{row[0]}" for row in TRUTH),
        *(f"{h}," + ",".join(f"{row[c]:.2f}" for row in TRUTH) for c, h in enumerate(HEADERS[1:], 1)), ""]).encode(),
        stops="no-readings-table"),
]  # fmt: skip

NO_READINGS = [
    Case("averages at the foot", "`Average` and `Max`, as they are", plain(below=[AVERAGE, LARGEST]), notes=LEFT,
         says=("Average",)),
    Case("totals at the foot", "`Total`, as it is", plain(below=["", TOTAL]), notes=LEFT, says=("Total",)),
    Case("an average that is none", "`Average` of NOx that is not the average of the column", plain(below=[WRONG]),
         notes=frozenset({"foot-differs"}), says=("Average",)),
    Case("averages without a word", "the means alone below the table", plain(below=[AVERAGE.replace("Average", "")]),
         notes=LEFT, says=("statistic",)),
    Case("numbers at the foot that are no average", "numbers without a time below the table", plain(
        below=[",77.00,88.00,9.00,3.00"]), stops="not-a-time"),
    Case("averages after each run", "a row `Run average` after each twenty readings", plain(before={
        k: ["Run average," + ",".join(f"{fmean(r[c] for r in TRUTH[k - 20 : k]):.2f}" for c in range(1, 5))]
        for k in (20, 40)}), notes=LEFT),
    Case("port changes", "`PORT B` as a row of its own", plain(before={10: ["PORT B,,,,"], 30: ["PORT C"]}), notes=LEFT,
         says=("PORT B",)),
    Case("pauses with a time", "a time and `PAUSE - probe moved` in place of readings", plain(
        before={20: ["2026-04-20 10:15:00,PAUSE - probe moved,,,"]}), notes=LEFT, says=("PAUSE",)),
    Case("end of file mark", "`End of data` as last line", plain(below=["End of data"]), notes=LEFT),
    Case("a cell too many", "a row with one cell more than the others", plain(put={(9, 2): "1120.10,7"}),
         stops="row-out-of-line"),
    Case("a cell too few", "a row with one cell less than the others", text().replace(
        f",{TRUTH[9][2]:.2f},{TRUTH[9][3]:.2f}", f",{TRUTH[9][2]:.2f}", 1).encode(), stops="row-out-of-line"),
    Case("cut off inside a row", "a file that ends within its last row", plain() + b"2026-04-20 12:10:00,24.1",
         notes=LEFT, says=("the file ends inside this row",)),
]  # fmt: skip


def held(column: int, values: dict[int, float], code: str, name: str, arrives: str) -> Case:
    """The truth with some readings changed, which stay as they are and are noted."""
    channel = ("NOx", "CO", "O2", "CO2")[column - 1]
    cells: dict[tuple[int, str], Held] = {(k, channel): ("number", v) for k, v in values.items()}
    put = {(k, column): f"{v:.2f}" for k, v in values.items()}
    return Case(name, arrives, plain(put=put), cells=cells, notes=frozenset({code}))


def gases(at: range, values: tuple[float, ...], code: str, name: str, arrives: str) -> Case:
    """The truth with all channels changed for some minutes."""
    names = ("NOx", "CO", "O2", "CO2")
    cells: dict[tuple[int, str], Held] = {(k, n): ("number", v) for k in at for n, v in zip(names, values, strict=True)}
    put = {(k, c): f"{v:.2f}" for k in at for c, v in enumerate(values, start=1)}
    return Case(name, arrives, plain(put=put), cells=cells, notes=frozenset({code}))


SERIES = [
    held(3, dict.fromkeys(range(22, 36), 4.44), "stuck-readings", "a value that stands still",
         "the same 4.44 % oxygen for fourteen minutes"),
    held(1, {27: 197.3}, "spike-reading", "a spike", "one NOx reading eight times its neighbours"),
    held(1, dict.fromkeys(range(44, 52), 50.0), "rail-readings", "a rail",
         "NOx at exactly 50 for eight minutes, and never above"),
    held(1, {k: float(round(TRUTH[k][1])) * 10 for k in range(30, 60)}, "range-switch", "range switching",
         "NOx ten times as high from one minute to the next, and without decimals"),
    gases(range(24, 30), (0.02, 0.4, 20.91, 0.03), "gas-in-run", "ambient air inside a run",
          "six minutes of air: oxygen 20.9 %, the others near zero"),
    gases(range(44, 49), (0.05, 0.3, 0.02, 0.01), "gas-in-run", "zero gas inside a run",
          "five minutes of zero gas: all channels near zero"),
]  # fmt: skip

CASES = {
    "Title blocks and header rows": HEADED, "Rows that are no readings": NO_READINGS,
    "What only the series shows": SERIES,
}  # fmt: skip
