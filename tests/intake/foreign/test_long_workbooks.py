"""The fast reader of long workbooks gives what the usual reader gives, and is not let near what would end it."""

from __future__ import annotations

import io
import time
import zipfile
from collections.abc import Callable
from datetime import date, datetime, timedelta
from datetime import time as clock
from pathlib import Path
from typing import Any

import openpyxl
import pytest
import xlsxwriter

from reporter.intake.foreign import quick
from reporter.intake.foreign.grid import Grid, grid_of
from reporter.intake.table import Raw
from tests.corpus.corpus import CASES

Change = Callable[[str, bytes], bytes]


@pytest.fixture
def both(monkeypatch: pytest.MonkeyPatch) -> Callable[[bytes], tuple[Grid, Grid]]:
    """The grid by the usual reader and by the fast one."""

    def run(content: bytes) -> tuple[Grid, Grid]:
        usual = grid_of("a.xlsx", content)
        monkeypatch.setattr(quick, "MANY_CELLS", 0)
        fast = grid_of("a.xlsx", content)
        monkeypatch.undo()
        return usual, fast

    return run


def plain(rows: Any) -> list[tuple[Raw, ...]]:
    """Rows without empty cells at their ends, and without empty rows at the end."""
    made = []
    for row in rows:
        cells = list(row)
        while cells and cells[-1] is None:
            cells.pop()
        made.append(tuple(cells))
    while made and not made[-1]:
        made.pop()
    return made


def alike(one: Grid, two: Grid) -> None:
    assert one.problems == two.problems
    assert one.epoch_1904 == two.epoch_1904
    assert [page.sheet for page in one.pages] == [page.sheet for page in two.pages]
    for a, b in zip(one.pages, two.pages, strict=True):
        assert plain(a.rows) == plain(b.rows)
        for name in ("hidden", "percent", "uncalculated"):
            assert getattr(a, name) == getattr(b, name), name
        assert a.hidden_rows & set(range(len(b.rows))) == b.hidden_rows
        assert sorted(a.merged) == sorted(b.merged)
        assert [n for n, row in enumerate(plain(b.rows)) if row] == [*b.rows.filled()]  # type: ignore[attr-defined]


@pytest.mark.parametrize("name", sorted(name for name, case in CASES.items() if case.content[:2] == b"PK"))
def test_every_workbook_of_the_corpus(name: str, both: Callable[[bytes], tuple[Grid, Grid]]) -> None:
    usual, fast = both(CASES[name].content)
    if usual.pages:
        assert isinstance(fast.pages[0].rows, quick.SheetRows) or usual.pages[0].rows == fast.pages[0].rows
        alike(usual, fast) if isinstance(fast.pages[0].rows, quick.SheetRows) else None


def sample(**options: Any) -> bytes:
    """A workbook of two sheets with everything a cell may hold."""
    buffer = io.BytesIO()
    book = xlsxwriter.Workbook(buffer, {"in_memory": True, **options})
    page = book.add_worksheet("Data")
    day, share, hours = (book.add_format({"num_format": f}) for f in ("yyyy-mm-dd hh:mm", "0.0%", "[h]:mm"))
    short = book.add_format({"num_format": "hh:mm:ss"})
    page.write_row(1, 1, ["Time", "NOx [ppm]", "O2 [%]", "Remark"])
    for row in range(3, 9):
        page.write_datetime(row, 1, datetime(2026, 3, 10, 9, row), day)
        page.write_number(row, 2, 140 + row / 7)
        page.write_number(row, 3, 0.04 + row / 1000, share)
    page.write_formula(3, 4, "=1/0", None, "#DIV/0!")
    page.write_formula(4, 4, "=NA()", None, "#N/A")
    page.write_formula(5, 4, "=1+1", None, 2)
    page.write_formula(6, 4, '="a"&"b"', None, "ab")
    page.write_boolean(7, 4, True)
    page.write_string(8, 4, "  pause & so on  ")
    page.write_datetime(9, 1, datetime(2026, 3, 10), book.add_format({"num_format": "yyyy-mm-dd"}))
    page.write_datetime(10, 1, clock(9, 30), short)
    page.write_datetime(11, 1, timedelta(hours=20), hours)
    page.write_string(12, 1, "2026-03-10 09:59")
    page.write_blank(13, 1, None, day)
    page.merge_range(14, 1, 15, 2, "merged")
    page.set_row(6, None, None, {"hidden": True})
    other = book.add_worksheet("Other")
    other.write_row(0, 0, [1, "x", -2.5, date(2026, 3, 10).isoformat()])
    other.hide()
    book.close()
    return buffer.getvalue()


def changed(content: bytes, part: str, change: Callable[[bytes], bytes]) -> bytes:
    buffer = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(content)) as old, zipfile.ZipFile(buffer, "w", zipfile.ZIP_DEFLATED) as new:
        for name in old.namelist():
            new.writestr(name, change(old.read(name)) if name.endswith(part) else old.read(name))
    return buffer.getvalue()


@pytest.mark.parametrize("late", [False, True])
def test_what_a_cell_may_hold(late: bool, both: Callable[[bytes], tuple[Grid, Grid]]) -> None:
    usual, fast = both(sample(date_1904=late))
    assert isinstance(fast.pages[0].rows, quick.SheetRows)
    alike(usual, fast)
    rows = fast.pages[0].rows
    assert (rows[3][4], rows[4][4], rows[7][4]) == ("#DIV/0!", "#N/A", True)
    assert len(fast.pages[0].percent) == 6
    assert fast.pages[1].hidden
    assert [*rows] == [rows[n] for n in range(len(rows))] == list(rows[:])
    assert rows.columns([4, 1], [3, 4]) == [["#DIV/0!", "#N/A"], [row[1] for row in rows[3:5]]]


def test_formulas_without_a_value_are_told_from_blanks(both: Callable[[bytes], tuple[Grid, Grid]]) -> None:
    content = changed(sample(), "sheet1.xml", lambda data: data.replace(b"<v>2</v>", b""))
    usual, fast = both(content)
    alike(usual, fast)
    assert fast.pages[0].uncalculated == {(5, 4)}


def test_a_workbook_of_the_usual_writer(both: Callable[[bytes], tuple[Grid, Grid]]) -> None:
    book = openpyxl.Workbook()
    for row in ([None, "Time", "NOx"], [], [None, datetime(2026, 3, 10, 9, 0, 0, 400), 12], [1e300, -0.5, "=1+1"]):
        book.active.append(row)
    buffer = io.BytesIO()
    book.save(buffer)
    alike(*both(buffer.getvalue()))


def stray(cell: bytes) -> bytes:
    row = b'<row r="%s">' % cell.lstrip(b"ABCDEFGHIJKLMNOPQRSTUVWXYZ")
    return changed(
        sample(), "sheet1.xml",
        lambda data: data.replace(b"</sheetData>", row + b'<c r="%s"><v>1</v></c></row></sheetData>' % cell),
    )  # fmt: skip


@pytest.mark.parametrize("cell", [b"A900000", b"SA9999", b"SR1048576", b"H600000"])
def test_a_stray_cell_is_refused_before_its_rectangle_is_laid_out(
    cell: bytes, both: Callable[[bytes], tuple[Grid, Grid]]
) -> None:
    start = time.process_time()
    usual, fast = both(stray(cell))
    assert time.process_time() - start < 3.0
    assert usual.pages
    assert [p.code for p in fast.problems] == ["zip-bomb"]
    assert "fields" in fast.problems[0].found


@pytest.mark.parametrize(
    ("old", "new"), [(b'<c r="C4"', b"<c r='C4'"), (b'<c r="C4"', b'<c  r = "C4"'), (b'<c r="C4"', b"<c")]
)
def test_cells_written_in_an_unusual_way_are_left_to_the_usual_reader(
    old: bytes, new: bytes, both: Callable[[bytes], tuple[Grid, Grid]]
) -> None:
    usual, fast = both(changed(sample(), "sheet1.xml", lambda data: data.replace(old, new)))
    assert usual.pages
    assert not isinstance(fast.pages[0].rows, quick.SheetRows)


def test_a_damaged_workbook_is_a_problem(both: Callable[[bytes], tuple[Grid, Grid]]) -> None:
    content = changed(sample(), "sheet1.xml", lambda data: data[: data.index(b"</sheetData>")])
    _, fast = both(content)
    assert [p.code for p in fast.problems] == ["truncated"]


def test_the_fast_reader_is_not_loaded_for_a_short_file(tmp_path: Path) -> None:
    import subprocess
    import sys

    (tmp_path / "a.xlsx").write_bytes(sample())
    code = (
        "import sys; from reporter.intake.foreign import look; look(sys.argv[1]); "
        "print(sorted({'pandas', 'python_calamine'} & set(sys.modules)))"
    )
    done = subprocess.run(
        [sys.executable, "-c", code, str(tmp_path / "a.xlsx")], capture_output=True, text=True, check=True
    )
    assert done.stdout.strip() == "[]"
