"""Cases: delimiters, encodings, ends of lines, and how numbers are written."""

from __future__ import annotations

from functools import partial

from tests.corpus.case import END, HEADERS, Case, comma, number, plain, text
from tests.corpus.truth import TRUTH

_DEGREES = ["Gas 180 °C, sample line 120 °C, µ-controller"]
_UNITS = (("Time", "NOx dry", "CO dry", "O2 dry", "CO2 dry"),)
_SUFFIXED = "\n".join([
    ";".join(_UNITS[0]), *(f"{t};{n} ppm;{c} ppm;{o} %;{k} %" for t, n, c, o, k in TRUTH), ""
]).encode()  # fmt: skip

DELIMITERS = [
    Case("comma", "a comma between cells", plain()),
    Case("tab", "a tab between cells", plain(delimiter="\t"), "logger.tsv"),
    Case("semicolon", "a semicolon between cells", plain(delimiter=";")),
    Case("bar", "an upright bar between cells", plain(delimiter="|"), "logger.txt"),
    Case("quoted cells", "every cell in quotation marks", plain(
        show=lambda v: f'"{v:.2f}"', headers=([f'"{h}"' for h in HEADERS],), clock=lambda t: f'"{t}"')),
    Case("line that names the delimiter", "`sep=;` as first line, as spreadsheet programs write it",
         plain(delimiter=";", above=["sep=;"])),
    Case("windows lines", "lines that end in CR LF", plain(end="\r\n")),
    Case("old mac lines", "lines that end in CR alone", plain(end="\r")),
    Case("no last line end", "a last line without its end", text().rstrip("\n").encode()),
    Case("empty lines", "an empty line after each reading",
         plain(before={k: [""] for k in range(1, 60)})),
    Case("commas at the end of lines", "a delimiter after the last cell of each row",
         plain(headers=([*HEADERS, ""],), show=number).replace(b"\n2026", b",\n2026").rstrip(b"\n") + b",\n"),
]  # fmt: skip

ENCODINGS = [
    Case("utf-8 with mark", "UTF-8 with a byte order mark", plain("utf-8-sig", above=_DEGREES)),
    Case("utf-16 little-endian", "UTF-16 with its mark, low byte first", b"\xff\xfe" + plain("utf-16-le")),
    Case("utf-16 big-endian", "UTF-16 with its mark, high byte first", b"\xfe\xff" + plain("utf-16-be")),
    Case("utf-16 without mark", "UTF-16 without a mark, low byte first", plain("utf-16-le", above=_DEGREES)),
    Case("utf-16 big-endian without mark", "UTF-16 without a mark, high byte first", plain("utf-16-be")),
    Case("cp1252", "the old Western code page, with ° and µ", plain("cp1252", above=_DEGREES)),
    Case("mac roman", "the old Mac code page, with ° and µ", plain("mac_roman", above=_DEGREES)),
    Case("utf-8 with degrees", "UTF-8 without a mark, with ° and µ", plain(above=_DEGREES)),
]

_semi = partial(plain, delimiter=";")

NUMBERS = [
    Case("decimal comma", "24,10 for twenty-four and a tenth", _semi(show=comma)),
    Case("decimal comma in tabs", "24,10, cells parted by tabs", plain(delimiter="\t", show=comma)),
    Case("quoted decimal comma", '"24,10" in a comma separated file', plain(show=lambda v: f'"{comma(v)}"')),
    Case("thousands comma", "1,120.35", _semi(show=lambda v: number(v, ".", ","))),
    Case("thousands point", "1.120,35", _semi(show=lambda v: number(v, ",", "."))),
    Case("thousands blank", "1 120,35", _semi(show=lambda v: number(v, ",", " "))),
    Case("thousands no-break blank", "1 120,35 with a no-break blank", _semi(show=lambda v: number(v, ",", "\u00a0"))),
    Case("thousands narrow blank", "1 120,35 with a narrow blank", _semi(show=lambda v: number(v, ",", "\u202f"))),
    Case("thousands apostrophe", "1'120.35", _semi(show=lambda v: number(v, ".", "'"))),
    Case("thousands curly apostrophe", "1’120.35", _semi(show=lambda v: number(v, ".", "’"))),
    Case("no-break blanks", "blanks that are none, around each number", plain(show=lambda v: f"\u00a0{v:.2f} ")),
    Case("exponents", "2.410E+01", plain(show=lambda v: f"{v:.6E}")),
    Case("leading apostrophe", "'24.10, as text was kept from being a number", plain(show=lambda v: f"'{v:.2f}")),
    Case("trailing percent", "4.50 % in the cells of O2 and CO2", plain(
        put={(k, c): f"{TRUTH[k][c]:.2f} %" for k in range(60) for c in (3, 4)})),
    Case("unit in each cell", "24.10 ppm and 4.50 % in the cells, no unit above", _SUFFIXED),
    Case("plus signs", "+24.10", plain(show=lambda v: f"+{v:.2f}")),
    Case("marks undecided", "24,100 everywhere: thousands or thousandths", "\n".join([
        "Time;NOx [ppm dry];CO [ppm dry]",
        *(f"{row[0]};{number(row[1], ',', digits=3)};{row[2]:.0f}" for row in TRUTH), ""]).encode(),
             stops="decimal-mark"),
    Case("marks of two kinds", "one 24,10 among points", _semi(put={(7, 1): "24,10"}), stops="decimal-mark"),
    Case("decimal comma is the delimiter too", "24,10 unquoted in a comma separated file",
         plain(show=comma), stops="cells-without-header"),
    Case("letters for digits", "2O.l5 with the letters O and l, in one cell", plain(put={(7, 1): "2O.l5"}),
         answers={**END, "word.2O.l5": "20.15"}, cells={(7, "NOx"): ("number", 20.15)}),
    Case("letters for digits, no reading", "2O.l5, answered as no reading", plain(put={(7, 1): "2O.l5"}),
         answers={**END, "word.2O.l5": "error value"}, cells={(7, "NOx"): ("error value", None)}),
]  # fmt: skip

CASES = {"Delimiters and lines": DELIMITERS, "Encodings": ENCODINGS, "How numbers are written": NUMBERS}
