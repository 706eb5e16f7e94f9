"""Text stays text, nothing is run or fetched, and no damaged file gives a traceback."""

from __future__ import annotations

import random
import socket
import subprocess
import sys
import time
import zipfile
from io import BytesIO
from pathlib import Path
from typing import Any

import pytest
from field_book import SAMPLES, read_sheets, record_of, rezipped, tiny, workbook

from reporter.intake import ReadResult, read, read_bytes
from reporter.intake.foreign.grid import grid_of
from reporter.problems import Grade

INERT = [
    "<b>bold</b>",
    "<img src='file:///etc/hostname' onerror='alert(1)'>",
    "<script>alert(1)</script>",
    "{{ 7 * 7 }}{% raw %}",
    "https://example.invalid/page",
    "@SUM(1+1)",
    "+1+cmd|' /C calc'!A0",
    "-2+3",
    "&lt;tag&gt; &amp; ]]>",
    "\u202etxt.exe",
]


@pytest.mark.parametrize("text", INERT)
def test_text_of_a_cell_stays_the_text_it_is(text: str) -> None:
    sheets = tiny()
    sheets["Test"][1][1] = text
    sheets["Test"].append([text, text, text])
    sheets["Runs"][1][0] = text
    record = record_of(sheets)
    assert record.test.facility.value == text
    assert record.test.extra[0].item == text
    assert record.runs[0].run.value == text
    assert text in record.sheets[0].rows[0]


def test_a_text_that_begins_like_a_formula_stays_text() -> None:
    sheets = tiny()
    sheets["Test"][1][1] = "placeholder"

    def as_text(book: Any) -> None:
        cell = book["Test"]["B2"]
        cell.value = "=cmd|' /C calc'!A0"
        cell.data_type = "s"

    assert record_of(sheets, as_text).test.facility.value == "=cmd|' /C calc'!A0"


def test_links_are_not_followed_and_their_text_is_read(monkeypatch: pytest.MonkeyPatch) -> None:
    def never(*args: object, **kwargs: object) -> None:
        raise AssertionError("the network was touched")

    monkeypatch.setattr(socket, "socket", never)

    def link(book: Any) -> None:
        book["Test"]["B2"].hyperlink = "http://192.0.2.1/collect?x"

    assert record_of(tiny(), link).test.facility.value == "Alder Creek Works (invented)"


def test_a_link_to_another_workbook_is_its_stored_value() -> None:
    content = rezipped(
        workbook(tiny()),
        lambda n, d: d.replace(b"<v>24.1</v>", b"<f>[1]Data!$B$2</f><v>24.1</v>") if n.endswith("sheet3.xml") else d,
    )
    record = read_bytes("linked.xlsx", content).record
    assert record is not None
    assert record.readings.rows[1].readings[0].value == 24.1


def test_entities_are_never_expanded() -> None:
    laughs = b'<!DOCTYPE r [<!ENTITY a "ha"><!ENTITY b "&a;&a;&a;&a;&a;&a;&a;&a;">]>'
    content = rezipped(workbook(tiny()), lambda n, d: d.replace(b"<styleSheet", laughs + b"<styleSheet", 1))
    assert [p.code for p in read_bytes("laughs.xlsx", content).problems] == ["dtd"]


def whole(result: ReadResult) -> bool:
    """A result is a record, or problems of the grade unreadable, never both and never neither."""
    unreadable = any(p.grade is Grade.UNREADABLE for p in result.problems)
    return (result.record is None) == unreadable and all(p.expected and p.remedy for p in result.problems)


def test_two_hundred_damaged_files_give_no_traceback() -> None:
    """Truncated, and bytes flipped in the container itself."""
    content = (SAMPLES / "bias_invalid_run.xlsx").read_bytes()
    dice = random.Random(20260414)
    for number in range(200):
        damaged = bytearray(content)
        if number % 4 == 0:
            damaged = damaged[: dice.randrange(len(damaged))]
        else:
            for _ in range(dice.choice((1, 3, 20, 200))):
                damaged[dice.randrange(len(damaged))] = dice.randrange(256)
        assert whole(read_bytes("damaged.xlsx", bytes(damaged))), number


def test_damaged_parts_give_no_traceback() -> None:
    """Bytes flipped inside the XML parts, where the container's own checks see nothing."""
    content = workbook(tiny())
    with zipfile.ZipFile(BytesIO(content)) as archive:
        names = archive.namelist()
    dice = random.Random(7)
    for number in range(150):
        victim = dice.choice(names)

        def change(name: str, data: bytes, victim: str = victim) -> bytes:
            if name != victim:
                return data
            damaged = bytearray(data)
            for _ in range(dice.choice((1, 2, 8))):
                damaged[dice.randrange(len(damaged))] = dice.choice(b"<>&\"'/= 0919AZ#!-.,:")
            return bytes(damaged)

        assert whole(read_bytes("damaged.xlsx", rezipped(content, change))), number


def test_random_cells_give_no_traceback() -> None:
    """Any value in any cell: words, dates, huge numbers, nothing."""
    dice = random.Random(11)
    words = ["", " ", "x", "1,5", "04/05/2026", "2026-04-14", "25:61", "<0", ">", "<", "ND", "#N/A", "½", "- ", "[ppm]"]
    odd: list[Any] = [*words, "9" * 400, "\u0660\u0661", "1e400", -1, 0, 1e308, -1e308, 10**300, True, None]
    for _ in range(60):
        sheets = tiny()
        for _ in range(4):
            rows = sheets[dice.choice(list(sheets))]
            row = dice.choice(rows)
            row[dice.randrange(len(row))] = dice.choice(odd)
        assert whole(read_sheets(sheets))


def test_what_is_no_file(tmp_path: Path) -> None:
    for path in (tmp_path, tmp_path / "missing.xlsx"):
        result = read(path)
        assert result.record is None
        assert [p.code for p in result.problems] == ["not-a-workbook"]
        assert result.problems[0].found


def test_reading_needs_no_heavy_library() -> None:
    script = (
        "import sys\nfrom reporter.intake import read\n"
        "assert read(sys.argv[1]).record is not None\n"
        "print(sorted({'pandas', 'pint', 'weasyprint', 'jinja2', 'xlsxwriter', 'pypdf'} & set(sys.modules)))\n"
    )
    path = str(SAMPLES / "gas_boiler_us.xlsx")
    done = subprocess.run([sys.executable, "-c", script, path], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


LONG_TEXTS = {
    "one line": b"1,2,3," * 10_000_000,
    "many cells": b"1,2,3,4\n" * 1_250_000,
    "many quotation marks": b'"1",2,3,4\n' * 1_250_000,
    "no text": bytes(range(256)) * 100_000,
}


@pytest.mark.parametrize("name", sorted(LONG_TEXTS))
def test_a_text_of_too_many_cells_is_refused_before_it_is_split(name: str) -> None:
    grid_of("warm.csv", b"Time,NOx\n")
    start = time.process_time()
    grid = grid_of("long.csv", LONG_TEXTS[name])
    assert time.process_time() - start < 0.5
    assert [p.code for p in grid.problems] == ["not-a-workbook" if name == "no text" else "zip-bomb"]
