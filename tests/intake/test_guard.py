"""Files that must not be opened are refused fast and small; what is refused is named."""

from __future__ import annotations

import io
import random
import subprocess
import sys
import time
import zipfile
from pathlib import Path

import pytest
from field_book import found, read_sheets, rezipped, tiny, workbook

from reporter.intake import read_bytes
from reporter.intake.guard import MAX_ENTRIES, look_at

GOOD = workbook(tiny())
SHEET = "xl/worksheets/sheet4.xml"  # Runs, the fourth sheet of the tiny workbook


def in_runs(old: bytes, new: bytes) -> bytes:
    def change(name: str, data: bytes) -> bytes:
        if name != SHEET:
            return data
        assert old in data
        return data.replace(old, new, 1)

    return rezipped(GOOD, change)


def bomb(parts: int, megabytes: int) -> bytes:
    return rezipped(GOOD, more={f"xl/media/{i}.xml": b" " * (megabytes << 20) for i in range(parts)})


NOISE = random.Random(1).randbytes(1_500_000).hex().encode()  # does not pack to nothing
HOSTILE = {
    "empty": (b"", "not-a-workbook"),
    "text": (b"Time,NOx\n1,2\n", "not-a-workbook"),
    "word processor": (
        rezipped(GOOD, lambda n, d: d if "workbook" not in n else b"<a/>").replace(b"workbook.xml", b"document.xml"),
        "not-a-workbook",
    ),
    "half": (GOOD[: len(GOOD) // 2], "truncated"),
    "flat bomb": (bomb(1, 60), "zip-bomb"),
    "big bomb": (bomb(3, 80), "zip-bomb"),
    "many parts": (rezipped(GOOD, more={f"x/{i}": b"" for i in range(MAX_ENTRIES)}), "zip-bomb"),
    "dtd": (in_runs(b"<worksheet", b'<!DOCTYPE w [<!ENTITY a "b">]><worksheet'), "dtd"),
    "dtd behind a comment": (
        in_runs(b"<worksheet", b"<!--" + NOISE + b'--><!DOCTYPE w SYSTEM "f"><worksheet'),
        "dtd",
    ),
    "far column": (in_runs(b"</sheetData>", b'<row r="9"><c r="XFD9"><v>1</v></c></row></sheetData>'), "far-cell"),
    "column after SR": (in_runs(b"</sheetData>", b'<row r="9"><c r="SS9"><v>1</v></c></row></sheetData>'), "far-cell"),
    "far row": (
        in_runs(b"</sheetData>", b'<row r="1048577"><c r="A1048577"><v>1</v></c></row></sheetData>'),
        "far-cell",
    ),
    "merged sheet": (
        in_runs(b"</sheetData>", b'</sheetData><mergeCells><mergeCell ref="A1:SR1048576"/></mergeCells>'),
        "far-cell",
    ),
    "merged by other marks": (
        in_runs(b"</sheetData>", b'</sheetData><mergeCells><mergeCell a=">" ref="&#65;1:SR99"/></mergeCells>'),
        "far-cell",
    ),
    "linked sheet": (
        in_runs(b"</sheetData>", b'</sheetData><hyperlinks><hyperlink ref="A1:A1048576"/></hyperlinks>'),
        "far-cell",
    ),
    "far column in sixteen bits": (
        rezipped(
            GOOD,
            lambda n, d: d.decode().replace('r="A3"', 'r="XFD3"').encode("utf-16") if n == SHEET else d,
        ),
        "far-cell",
    ),
    "sixteen bits without a mark": (
        rezipped(GOOD, lambda n, d: d.decode().encode("utf-16-be") if n == SHEET else d),
        "not-a-workbook",
    ),
    "many sheets": (
        rezipped(GOOD, lambda n, d: d.replace(b"</sheets>", b"<sheet/>" * 256 + b"</sheets>")),
        "zip-bomb",
    ),
    "many rows": (in_runs(b"</sheetData>", b"<row></row>" * 200_001 + b"</sheetData>"), "zip-bomb"),
    "many cell formats": (
        rezipped(GOOD, lambda n, d: d.replace(b"</cellXfs>", b"<xf></xf>" * 66_000 + b"</cellXfs>")),
        "zip-bomb",
    ),
    "packed in another way": (rezipped(GOOD, packing=zipfile.ZIP_LZMA), "not-a-workbook"),
    "other code page": (
        rezipped(GOOD, lambda n, d: b"<?xml version='1.0' encoding='cp037'?>" + d if n == SHEET else d),
        "not-a-workbook",
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", sorted(HOSTILE))
def test_a_hostile_file_is_refused_in_well_under_half_a_second(name: str) -> None:
    content, code = HOSTILE[name]
    read_bytes("warm.xlsx", b"")
    start = time.process_time()
    result = read_bytes("hostile.xlsx", content)
    seconds = time.process_time() - start
    assert result.record is None
    assert [p.code for p in result.problems] == [code]
    assert seconds < 0.5


@pytest.mark.skipif(not Path("/proc/self/status").exists(), reason="peak memory is read from /proc")
def test_refusing_takes_little_memory(tmp_path: Path) -> None:
    """Peak memory of a whole process that refuses the files, against 150 MB."""
    script = (
        "import re, sys\n"
        "from pathlib import Path\n"
        "from reporter.intake import read\n"
        "codes = [read(p).problems[0].code for p in sorted(Path(sys.argv[1]).iterdir())]\n"
        "peak = re.search(r'VmHWM:\\s+(\\d+)', Path('/proc/self/status').read_text())\n"
        "print(len(codes), int(peak[1]) // 1024)\n"
    )
    for name, (content, _) in HOSTILE.items():
        (tmp_path / f"{name}.xlsx").write_bytes(content)
    done = subprocess.run([sys.executable, "-c", script, str(tmp_path)], capture_output=True, text=True, check=True)
    count, megabytes = done.stdout.split()
    assert int(count) == len(HOSTILE)
    assert int(megabytes) < 150


def test_the_far_cell_is_named() -> None:
    result = read_bytes("far.xlsx", HOSTILE["far column"][0])
    assert found(result) == [("far-cell", "Runs!XFD9")]


def test_a_stray_cell_in_the_last_allowed_row_costs_nothing() -> None:
    content = in_runs(b"</sheetData>", b'<row r="1048576"><c r="A1048576" t="str"><v> </v></c></row></sheetData>')
    start = time.process_time()
    assert read_bytes("stray.xlsx", content).record is not None
    assert time.process_time() - start < 1.0


def test_a_hidden_column_as_wide_as_a_number_can_say_costs_nothing() -> None:
    columns = b'<cols><col min="1" max="2000000000" hidden="1" width="9"/></cols><sheetData>'
    start = time.process_time()
    result = read_bytes("wide.xlsx", in_runs(b"<sheetData>", columns))
    assert time.process_time() - start < 1.0
    assert [(p.code, p.found) for p in result.problems] == [("hidden-read", "columns A, B, C")]


def test_a_table_of_many_empty_fields_is_refused_before_they_are_made() -> None:
    """Few cells, but one wide row and many short ones: each short row would be filled up to the widest."""
    letters = [a + b for a in ("", *"ABCDEFGHIJKLMNOPQR") for b in "ABCDEFGHIJKLMNOPQRSTUVWXYZ"][3:]
    wide = "".join(f'<c r="{name}9"><v>1</v></c>' for name in letters)
    tall = "".join(f'<row r="{n}"><c r="A{n}"><v>1</v></c></row>' for n in range(10, 3_000))
    content = in_runs(b"</sheetData>", f'<row r="9">{wide}</row>{tall}</sheetData>'.encode())
    problems = read_bytes("wide.xlsx", content).problems
    assert [(p.code, p.place.sheet, p.found) for p in problems] == [("zip-bomb", "Runs", "2,994 rows of 494 columns")]


def test_a_form_of_more_rows_than_a_person_enters_is_refused_before_it_is_opened() -> None:
    rows = b"".join(b'<row hidden="1" r="%d"><c r="A%d"><f>1+1</f></c></row>' % (n, n) for n in range(9, 190_000))
    content = in_runs(b"</sheetData>", rows + b"</sheetData>")
    read_bytes("warm.xlsx", GOOD)
    start = time.process_time()
    result = read_bytes("long.xlsx", content)
    assert time.process_time() - start < 1.0
    assert [(p.code, p.place.sheet, p.found) for p in result.problems] == [("zip-bomb", "Runs", "189,994 rows")]


def test_cells_are_counted_and_placed_however_they_are_written() -> None:
    rows = b'<row r="9"><c r="A9"/><c r="AB9" s="1"><v>1</v></c></row><row r="700"><c r="C700"/></row></sheetData>'
    usual, odd = look_at(in_runs(b"</sheetData>", rows)), look_at(in_runs(b"</sheetData>", rows.replace(b'"', b"'")))
    assert (usual.scans[SHEET].last_row, usual.scans[SHEET].last_column) == (700, 28)
    assert usual.counts == odd.counts
    assert (usual.scans[SHEET].odd, odd.scans[SHEET].odd) == (False, True)


def test_a_part_in_sixteen_bits_is_looked_through_and_read() -> None:
    content = rezipped(GOOD, lambda n, d: d.decode().encode("utf-16") if n == SHEET else d)
    assert read_bytes("wide.xlsx", content).record is not None


def test_a_wrong_dimension_loses_no_rows() -> None:
    def change(name: str, data: bytes) -> bytes:
        return data.replace(b'<dimension ref="A1:C3"', b'<dimension ref="A1:A1"') if name == SHEET else data

    record = read_bytes("wrong.xlsx", rezipped(GOOD, change)).record
    assert record is not None
    assert [run.run.value for run in record.runs] == ["1", "2"]


def test_formulas_without_a_stored_value_are_found_in_one_pass() -> None:
    part = (
        b'<row r="1"><c r="A1"><f>1+1</f><v></v></c><c r="B1" s="2"><f>1+1</f></c><c r="C1"><f>1+1</f><v/></c>'
        b'<c r="D1" t="shared"><f si="0"/><v>2</v></c><c r="E1"><f>1+1</f><v>2</v></c>'
        b'<c r="F1" t="str"><f>A1&amp;""</f><v></v></c><c r="G1" t="str"><f>A1</f></c></row></sheetData>'
    )
    look = look_at(in_runs(b"</sheetData>", part))
    assert look.uncalculated == {SHEET: frozenset({"A1", "B1", "C1", "G1"})}


def test_a_formula_never_calculated_is_a_problem_of_its_own() -> None:
    sheets = tiny()
    sheets["Readings"][3][1] = "=20+4"  # openpyxl stores formulas without values
    sheets["Runs"][1][2] = "=B2+5/1440"
    assert found(read_sheets(sheets)) == [
        ("formula-without-value", "Runs!C2"),
        ("formula-without-value", "Readings!B4"),
    ]


def test_a_formula_with_its_value_is_read() -> None:
    content = rezipped(
        GOOD, lambda n, d: d.replace(b"<v>24.1</v>", b"<f>20+4.1</f><v>24.1</v>") if n.endswith("sheet3.xml") else d
    )
    record = read_bytes("formula.xlsx", content).record
    assert record is not None
    assert record.readings.rows[1].readings[0].value == 24.1


def test_macros_are_said_and_not_read() -> None:
    result = read_bytes("macro.xlsm", rezipped(GOOD, more={"xl/vbaProject.bin": b"anything"}))
    assert result.record is not None
    assert found(result) == [("macro-enabled", "")]


def test_a_reader_that_lies_about_sizes_is_not_believed() -> None:
    """The declared size of a part bounds what is unpacked, whatever the part holds."""
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("[Content_Types].xml", b" " * 5_000_000)
        archive.writestr("xl/workbook.xml", b"<workbook/>")
    content = buffer.getvalue().replace((5_000_000).to_bytes(4, "little"), (1000).to_bytes(4, "little"))
    assert {p.code for p in read_bytes("liar.xlsx", content).problems} == {"truncated"}
