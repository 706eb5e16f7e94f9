"""Files made to harm: what would end the process, fill the memory or take forever is refused, or read as it stands."""

from __future__ import annotations

import io
import os
import random
import re
import time
import zipfile
from collections.abc import Callable
from pathlib import Path

import pytest
import xlsxwriter

from reporter.intake.cells import number_text
from reporter.intake.foreign import quick
from reporter.intake.foreign.grid import grid_of, read_grid
from reporter.intake.foreign.look import look_at_grid
from reporter.intake.foreign.model import Desk
from reporter.intake.foreign.numbers import style_of
from reporter.intake.foreign.tables import is_numberlike
from reporter.intake.foreign.times import read_stamp
from reporter.intake.foreign.words import basis_of
from reporter.intake.guard import look_at
from reporter.intake.read import read
from reporter.intake.table import split_header

SHEET = "xl/worksheets/sheet1.xml"
FAR = b"XFD1048576"


def logger() -> bytes:
    buffer = io.BytesIO()
    book = xlsxwriter.Workbook(buffer, {"in_memory": True})
    page = book.add_worksheet("Data")
    page.write_row(0, 0, ["Time", "NOx [ppm]"])
    for row in range(1, 40):
        page.write_row(row, 0, [f"2026-03-10 09:{row:02d}", 140 + row / 8])
    book.close()
    return buffer.getvalue()


def changed(change: Callable[[str, bytes], bytes], more: dict[str, bytes] | None = None) -> bytes:
    buffer = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(logger())) as old, zipfile.ZipFile(buffer, "w", zipfile.ZIP_DEFLATED) as new:
        for name in old.namelist():
            new.writestr(name, change(name, old.read(name)))
        for name, data in (more or {}).items():
            new.writestr(name, data)
    return buffer.getvalue()


def with_cell(cell: bytes) -> bytes:
    end = b"</sheetData>"
    return changed(lambda name, data: data.replace(end, cell + end) if name == SHEET else data)


FAR_CELLS = {
    "small letters": b'<row><c r="%s"><v>1</v></c></row>' % FAR.lower(),
    "two addresses": b'<row><c r="A50" r="%s"><v>1</v></c></row>' % FAR,
    "another's address first": b'<row><c x:r="A50" r="%s"><v>1</v></c></row>' % FAR,
    "a mark in an attribute": b'<row><c a=">" r="%s"><v>1</v></c></row>' % FAR,
    "a letter by its number": b'<row><c r="&#88;FD1048576"><v>1</v></c></row>',
    "a digit by its number": b'<row><c r="A1&#48;&#48;&#48;&#48;&#48;&#48;&#48;"><v>1</v></c></row>',
    "no address, row beyond all": b'<row r="99999999999"><c><v>1</v></c></row>',
    "no address, one beside the other": b"<row>" + b"<c/>" * 600 + b"</row>",
    "dollars": b'<row><c r="$A$1"><v>1</v></c></row>',
}


@pytest.mark.parametrize("name", sorted(FAR_CELLS))
def test_a_cell_far_away_is_found_however_it_is_written(name: str) -> None:
    start = time.process_time()
    grid = grid_of("far.xlsx", with_cell(FAR_CELLS[name]))
    assert time.process_time() - start < 0.5
    assert [p.code for p in grid.problems] == ["far-cell"]


VALUES = {"reference": b"1&#50;", "comment": b"1<!-- -->2", "section": b"<![CDATA[12]]>", "instruction": b"1<?x y?>2"}


@pytest.mark.parametrize("name", sorted(VALUES))
def test_a_number_written_in_parts_is_read_whole(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(quick, "MANY_CELLS", 0)
    grid = grid_of("parts.xlsx", with_cell(b'<row r="50"><c r="B50"><v>%s</v></c></row>' % VALUES[name]))
    assert grid.pages[0].rows[49][1] == 12.0


def test_sixteen_bits_are_read_by_the_usual_reader(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(quick, "MANY_CELLS", 0)
    wide = changed(lambda name, d: d.decode().replace("UTF-8", "UTF-16").encode("utf-16") if name == SHEET else d)
    assert grid_of("wide.xlsx", wide).pages[0].rows[1][1] == 140.125


def test_a_part_that_stands_for_many_sheets_is_refused() -> None:
    sheets = b"".join(b'<sheet name="n%d" sheetId="%d" r:id="rId1"/>' % (n, n) for n in range(2, 200))
    content = changed(lambda name, d: d.replace(b"</sheets>", sheets + b"</sheets>") if "workbook.xml" in name else d)
    assert [(p.code, p.found) for p in grid_of("many.xlsx", content).problems] == [
        ("not-a-workbook", "several sheets that stand in one part")
    ]


def test_two_parts_of_one_name_are_refused() -> None:
    content = changed(lambda name, data: data, {SHEET.upper(): b"<worksheet/>"})
    assert [p.code for p in grid_of("twice.xlsx", content).problems] == ["not-a-workbook"]


def test_two_lists_of_sheets_are_refused() -> None:
    content = changed(lambda name, data: data, {"a/workbook.xml": b'<workbook date1904="1"/>'})
    assert [p.code for p in grid_of("lists.xlsx", content).problems] == ["not-a-workbook"]


@pytest.mark.parametrize("end", ["behind the end", "before the start", "another kind"])
def test_a_container_others_may_read_differently_is_left_to_the_usual_reader(
    end: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(quick, "MANY_CELLS", 0)
    plain = logger()
    content = {
        "behind the end": plain[:-2] + b"\x04\x00more",
        "before the start": b"PK.." + plain,
        "another kind": changed(lambda name, data: data, {"content.xml": b"<a/>"}),
    }[end]
    assert isinstance(grid_of("a.xlsx", plain).pages[0].rows, quick.SheetRows)
    assert not isinstance(grid_of("a.xlsx", content).pages[0].rows, quick.SheetRows)


def test_a_long_text_shown_by_many_cells_is_not_copied(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(quick, "MANY_CELLS", 0)
    monkeypatch.setattr(quick, "MAX_TEXT", 50_000)
    text = re.compile(rb"<t>2026-03-10 09:01</t>")
    content = changed(lambda name, data: text.sub(b"<t>" + b"long " * 2_000 + b"</t>", data))
    assert isinstance(grid_of("once.xlsx", content).pages[0].rows, quick.SheetRows)
    monkeypatch.setattr(quick, "MAX_TEXT", 10_000)
    assert [p.code for p in grid_of("often.xlsx", content).problems] == ["zip-bomb"]


def test_a_tag_of_very_many_attributes_is_looked_at_once() -> None:
    start = time.process_time()
    look_at(with_cell(b"<row><c " + b'r="A1" ' * 100_000 + b'x="e"></c></row>'))
    assert time.process_time() - start < 0.5


LONG = 200_000
TEXTS: dict[str, Callable[[], object]] = {
    "digits": lambda: number_text("1" * LONG + "x y"),
    "commas": lambda: number_text("1," * LONG + "é"),
    "blanks": lambda: split_header("x" + "\xa0" * LONG + '"'),
    "numbers": lambda: is_numberlike("1" * LONG + "\n!"),
    "marks": lambda: style_of(["1" + " " * LONG + "!"], [], Desk({}, "a.csv")),
    "clock": lambda: read_stamp("2026-03-10 09:59" + " " * LONG + "x", "year first"),
    "seconds": lambda: basis_of("NOx " + "1" * 20_000),
}


@pytest.mark.parametrize("name", sorted(TEXTS))
def test_a_very_long_text_takes_no_time(name: str) -> None:
    start = time.process_time()
    TEXTS[name]()
    assert time.process_time() - start < 0.5


BAD_TEXTS = {
    "one line": b"a" * (60 << 20),
    "one line of blanks": b"Time,NOx\n" + b" " * (60 << 20),
    "long cell": b"Time,NOx\n2026-03-10 09:00," + b"1" * 100_000 + b"\n",
    "long quoted cell": b'Time,NOx\n2026-03-10 09:00,"' + b"1" * 100_000 + b'"\n',
}


@pytest.mark.parametrize("name", sorted(BAD_TEXTS))
def test_a_text_with_a_very_long_line_or_cell_is_refused(name: str) -> None:
    start = time.process_time()
    grid = grid_of("long.csv", BAD_TEXTS[name])
    assert time.process_time() - start < 0.5
    assert [p.code for p in grid.problems] == ["zip-bomb"]


@pytest.mark.parametrize("rows", [1, 2])
def test_a_header_without_end_is_no_log(rows: int) -> None:
    table = "Time,NOx (ppm),O2 (%)\n2026-04-20 08:00:00,10.1,4.0\n".splitlines(keepends=True)[:rows]
    start = time.process_time()
    found = look_at_grid(grid_of("many.csv", "".join(table * 40_000).encode()), {})
    assert time.process_time() - start < 5.0
    assert [(p.code, p.found) for p in found.problems] == [
        ("no-readings-table", "more than 2,000 headers in one table of rows")
    ]


def test_a_pipe_that_never_ends_is_not_opened(tmp_path: Path) -> None:
    pipe = tmp_path / "pipe.csv"
    os.mkfifo(pipe)
    assert [p.code for p in read_grid(pipe).problems] == ["not-a-workbook"]
    assert [p.code for p in read(pipe).problems] == ["not-a-workbook"]


def test_bytes_that_are_no_text_are_told_at_once() -> None:
    content = random.Random(1).randbytes(3_000_000)
    start = time.process_time()
    found = grid_of("noise.csv", content)
    assert time.process_time() - start < 0.5
    assert [(p.code, p.found) for p in found.problems] == [("not-a-workbook", "a file of bytes that are no text")]
