"""Cases: words and strange numbers in the cells of readings, and units mixed in a column."""

from __future__ import annotations

from tests.corpus.case import END, HEADERS, Case, plain, text
from tests.corpus.truth import TRUTH

AT = 25
_KEY = (AT, "NOx")
_UNITLESS = (("Time", "NOx dry", "CO [ppm dry]", "O2 [% dry]", "CO2 [% dry]"),)


def word(written: str, kind: str, value: float | None = None, *, arrives: str = "", asks: str = "") -> Case:
    """A file with one word in a cell of NOx, and what that cell holds."""
    answers = {**END, asks: kind} if asks else END
    named = written or "nothing"
    return Case(
        f"cell {named}", arrives or f"`{named}` in a cell of NOx", plain(put={(AT, 1): written}), answers=answers,
        cells={_KEY: (kind, value)},
    )  # fmt: skip


WORDS = [
    word("", "blank"), word("-", "blank"), word("---", "blank"), word("N/A", "blank"), word("NA", "blank"),
    word("ND", "not detected"), word("BDL", "not detected"), word("<0.5", "below a stated value", 0.5),
    word(">100", "over range", 100.0), word("OVER", "over range"), word("CAL", "calibration"),
    word("Under", "error value"), word("Inst", "error value"), word("****", "error value"),
    word("#DIV/0!", "error value"), word("#N/A", "error value"), word("#VALUE!", "error value"),
    word("#REF!", "error value"), word("NaN", "error value"),
    word("-999", "error value"), word("1E+30", "error value"),
    word("9999", "error value", asks="word.9999"),
    word("purged", "calibration", asks="word.purged"),
    word("0.00", "number", 0.0), word("-0.00", "number", 0.0), word("-0.15", "number", -0.15),
    word("−0.15", "number", -0.15, arrives="a true minus sign"),
    word("=2+3", "error value", asks="word.=2+3"), word("@24.1", "error value", asks="word.@24.1"),
    word("+24.1", "number", 24.1),
]  # fmt: skip

_MIXED = "\n".join([
    "Time,NOx dry,CO [ppm dry],O2 [% dry],CO2 [% dry]",
    *(f"{t},{n if k < 30 else n * 2} {'ppm' if k < 30 else 'mg/m3'},{c},{o},{d}"
      for k, (t, n, c, o, d) in enumerate(TRUTH)), "",
]).encode()  # fmt: skip
_PERCENT_INSIDE = "\n".join([
    "Time,NOx [ppm dry],CO [ppm dry],O2 [% dry],CO2 [% dry]",
    *(f"{t},{n},{c if k != AT else '0.112 %'},{o},{d}" for k, (t, n, c, o, d) in enumerate(TRUTH)), "",
]).encode()  # fmt: skip

VALUES = [
    Case("oxygen below zero", "-0.1 % oxygen, as a drifted zero gives it", plain(put={(AT, 3): "-0.10"}),
         cells={(AT, "O2"): ("number", -0.1)}, notes=frozenset({"negative-reading"})),
    Case("oxygen above air", "21.3 % oxygen, as a drifted span gives it", plain(put={(AT, 3): "21.30"}),
         cells={(AT, "O2"): ("number", 21.3)}),
    Case("more than the whole gas", "209 in a column of percent", plain(put={(AT, 3): "209"}), stops="out-of-range"),
    Case("units mixed in a column", "ppm in the first half of a column's cells, mg/m3 in the second", _MIXED,
         stops="column.B.unit"),
    Case("one cell in another unit", "0.112 % in a column of ppm", _PERCENT_INSIDE, stops="column.C.unit"),
    Case("oxygen as a fraction", "0.045 under a header that says %", plain(
        put={(k, 3): f"{TRUTH[k][3] / 100:.5f}" for k in range(60)}), stops="column.D.fraction"),
    Case("milliampere", "4 to 20 mA of the analyzer's output under `NOx [mA]`", plain(
        headers=(("Time", "NOx [mA] dry", *HEADERS[2:]),), put={(k,
             1): f"{4 + TRUTH[k][1] * 0.16:.3f}" for k in range(60)}),
        stops="column.B.signal"),
    Case("volt", "0 to 10 V of the analyzer's output under `O2 (V)`", plain(
        headers=(("Time", "NOx [ppm dry]", "CO [ppm dry]", "O2 (V) dry", "CO2 [% dry]"),),
        put={(k, 3): f"{TRUTH[k][3] * 0.4:.4f}" for k in range(60)}), stops="column.D.signal"),
    Case("output without a unit", "milliampere under a header with no unit", plain(
        headers=_UNITLESS, put={(k, 1): f"{4 + TRUTH[k][1] * 0.16:.3f}" for k in range(60)}), stops="column.B.unit"),
    Case("text like formulas", "lines and notes that begin with = + - @", plain(
        above=["=HYPERLINK(\"x\")", "+1+1", "-2", "@SUM(A1)"])),
    Case("text like formulas in a column", "a column of notes that begin with = + - @", "\n".join([
        ",".join((*HEADERS, "Note")),
        *(f"{line},{'=+-@'[k % 4]}cmd" for k, line in enumerate(text().splitlines()[1:])), ""]).encode()),
]  # fmt: skip

CASES = {"Words in cells": WORDS, "Strange values and units": VALUES}
