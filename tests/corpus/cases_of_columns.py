"""Cases: what a column is, by its header and its numbers."""

from __future__ import annotations

from collections.abc import Sequence

from tests.corpus.case import END, HEADERS, Case, plain, text
from tests.corpus.truth import TRUTH

DRY = ("CO [ppm dry]", "O2 [% dry]", "CO2 [% dry]")


def headed(*headers: str, **how: object) -> bytes:
    """The plain file with another header row."""
    return plain(headers=(headers,), **how)


def one_more(header: str, values: Sequence[object], headers: Sequence[str] = HEADERS) -> bytes:
    """The plain file with a further column."""
    lines = text(headers=(headers,)).splitlines()
    return "\n".join(
        [f"{lines[0]},{header}", *(f"{a},{b}" for a, b in zip(lines[1:], values, strict=True)), ""]
    ).encode()


#: Formula of the correction to a reference oxygen, as 40 CFR 60 prints it with 20.9: the corpus makes its own column.
TO_THREE = [f"{n * (20.9 - 3.0) / (20.9 - o):.2f}" for _, n, _, o, _ in TRUTH]
SECOND = [f"{n + 1.37:.2f}" for _, n, *_ in TRUTH]

SPELLINGS = [
    Case("oxides", "`Oxides` for NOx", headed("Time", "Oxides ppm dry", *DRY)),
    Case("oxides of nitrogen", "names in words", headed(
        "Timestamp", "Oxides of nitrogen (ppmvd)", "Carbon monoxide (ppmvd)", "Oxygen (% dry)",
        "Carbon dioxide (% dry)")),
    Case("zero-two for oxygen", "`02% dry`: a zero for the letter O", headed(
        "Date/Time", "NO_x ppmvd", "CO ppmvd", "02% dry", "C02% dry")),
    Case("oxygen with its unit", "`O2%`, no blank between", headed("Time", "NOX ppmvd", "CO ppmvd", "O2% dry",
         "CO2% dry")),
    Case("lowered digits", "NOₓ, O₂ and CO₂", headed("Time", "NOₓ ppm dry", "CO ppm dry", "O₂ % dry", "CO₂ % dry")),
    Case("a lost letter", "`NO?` and `CO?`, as an old program writes NOₓ and CO₂", headed(
        "Time", "NO? ppm dry", "CO ppm dry", "O? % dry", "CO? % dry"), answers={
            **END, "column.B.gas": "NOx", "column.D.gas": "O2", "column.E.gas": "CO2"}),
    Case("gas and unit in one word", "NOxppm, ppmCO, O2percent", headed(
        "Time", "NOxppm dry", "ppmCO dry", "O2percent dry", "CO2-% dry")),
    Case("capitals", "OXYGEN, NOX", headed("TIME", "NOX PPM DRY", "CO PPM DRY", "OXYGEN % DRY", "CO2 % DRY")),
    Case("basis in the unit", "ppmvd, %vd", headed("Time", "NOx ppmvd", "CO ppmvd", "O2 %vd", "CO2 %vd")),
    Case("wet", "ppmvw, and % wet", headed("Time", "NOx ppmvw", "CO ppmvw", "O2 % wet", "CO2 % wet"), basis="wet"),
    Case("wet in one letter", "ppm w", headed("Time", "NOx ppm w", "CO ppm w", "O2 % w", "CO2 % w"), basis="wet"),
    Case("no basis", "neither dry nor wet", headed("Time", "NOx ppm", "CO ppm", "O2 %", "CO2 %"),
         answers={**END, "column.*.basis": "dry"}),
    Case("dry and wet at once", "`NOx ppm dry (wet probe)`", headed("Time", "NOx ppm dry (wet probe)", *DRY),
         stops="column.B.basis"),
    Case("no unit", "gases without units", headed("Time", "NOx dry", "CO dry", "O2 dry", "CO2 dry"),
         answers={**END, "column.B.unit": "ppm", "column.C.unit": "ppm"}),
    Case("parts per billion", "NOx in ppb", headed("Time", "NOx ppb dry", *DRY), units={
        "nox": "ppb", "co": "ppm", "o2": "%", "co2": "%"}),
    Case("a header without a gas", "`ppm dry` alone", headed("Time", "ppm dry", *DRY), stops="column.B.gas"),
    Case("a column without a header", "numbers with nothing above them", headed("Time", "", *DRY),
         stops="column.B.gas"),
    Case("a column of a status", "`NOx status` beside NOx: `0`, and `1` in four rows", one_more(
        "NOx status", ["1" if 20 <= k < 24 else "0" for k in range(60)]), says=("'1' in 4 rows", "changes no reading")),
    Case("other columns", "a load and a temperature between the readings", one_more("Load [MW]", ["3.1"] * 60)),
    Case("remarks beside the readings", "`PORT B` in a column of remarks", one_more(
        "Remark", ["PORT B" if k == 20 else "" for k in range(60)]), says=("'PORT B' in F22",)),
    Case("time last", "the time in the last column", "\n".join(
        ",".join([*line.split(",")[1:], line.split(",")[0]]) for line in text().splitlines()).encode() + b"\n"),
    Case("start and end", "a column for the start and one for the end of each interval", "\n".join([
        ",".join(("Start time", "End time", *HEADERS[1:])),
        *(f"{line.split(',')[0]},{line}" for line in text().splitlines()[1:]), ""]).encode(), answers={},
        says=("the start is read",)),
]  # fmt: skip

TWICE = [
    Case("two columns of one gas", "analyzers A and B", one_more("NOx B [ppm dry]", SECOND, (
        "Time", "NOx A [ppm dry]", *DRY)), answers={**END, "gas.nox.columns": "B"}, channels=("NOx", "CO", "O2",
             "CO2")),
    Case("two columns of one gas, open", "analyzers A and B, no answer", one_more("NOx B [ppm dry]", SECOND, (
        "Time", "NOx A [ppm dry]", *DRY)), stops="gas.nox.columns"),
    Case("inlet and outlet", "oxygen before and after", one_more("O2 inlet [% dry]", ["7.70"] * 60, (
        "Time", "NOx [ppm dry]", "CO [ppm dry]", "O2 outlet [% dry]", "CO2 [% dry]")),
        stops="gas.o2.columns"),
    Case("corrected by words", "`NOx @3% O2` beside NOx", one_more("NOx @3% O2", TO_THREE),
         says=("already corrected",)),
    Case("corrected, dry corr", "`NOx dry corr` beside NOx", one_more("NOx ppm dry corr", TO_THREE),
         says=("already corrected",)),
    Case("corrected by its ratio", "two columns of NOx; their ratio is that of a correction", one_more(
        "NOx ppmvd", TO_THREE), answers={**END, "gas.nox.columns": "B"}),
    Case("corrected in words, not in numbers", "`NOx @3% O2` whose numbers are not corrected", one_more(
        "NOx @3% O2", SECOND), stops="column.F.corrected"),
    Case("corrected, reference unsaid", "`NOx@O2ref` and no column as measured", headed(
        "Time", "NOx@O2ref [ppm dry]", *DRY), stops="column.B.corrected"),
    Case("corrected by its unit", "`NOx ppmvdc`", headed("Time", "NOx ppmvdc", *DRY), stops="column.B.corrected"),
    Case("corrected alone", "`NOx @15% O2` and no column as measured", headed("Time", "NOx @15% O2 [ppm dry]", *DRY),
         stops="column.B.corrected"),
    Case("reference in words", "`bezogen auf 3 % O2` beside NOx", one_more("NOx bezogen auf 3 % O2 ppm tr", TO_THREE),
         says=("already corrected",)),
]  # fmt: skip

CASES = {"What a column is": SPELLINGS, "Two columns of a gas, corrected columns": TWICE}
