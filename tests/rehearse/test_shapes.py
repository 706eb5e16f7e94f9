"""A rehearsal in a firm's own shape is the plain rehearsal again, exactly; one edit does not lose its marks."""

from __future__ import annotations

import io
import json
import shutil
from collections.abc import Callable
from dataclasses import replace
from functools import cache
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from reporter.api import assess, read_input
from reporter.cli import OK, USAGE, main
from reporter.errors import RecordError
from reporter.intake.foreign import Mapping, look, mapping_of
from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.look import look_at_grid
from reporter.intake.foreign.mapping import dump
from reporter.problems import Grade
from reporter.record import Readings, Record
from reporter.rehearse import Fault, Order, in_shape, parts
from reporter.rehearse.book import written
from reporter.rehearse.shape import ordered_in_shape
from reporter.synthetic import MARK, STAMP, is_marked, is_synthetic
from tests.corpus.case import plain
from tests.corpus.corpus import CASES
from tests.output.conftest import SAMPLES

SHORT = Order(fuel="CH4 94, C2H6 4, N2 2", runs=1, run_minutes=15)
#: Units of a mapping in which a rehearsal has no analyzers.
_USUAL = {"nox": "ppm", "co": "ppm", "so2": "ppm", "o2": "%", "co2": "%"}


@cache
def mappings() -> dict[str, Mapping]:
    """The mappings of the corpus, each shape once, by the first case that has it."""
    found: dict[str, tuple[str, Mapping]] = {}
    for name, case in CASES.items():
        if case.stops:
            continue
        seen = look_at_grid(grid_of(case.file, case.content), case.answers)
        mapping = mapping_of(seen, name="logger of the firm")
        found.setdefault(dump(mapping), (name, mapping))
    return dict(found.values())


def fits(mapping: Mapping) -> bool:
    """Whether a rehearsal has the gases and units of a mapping, a pollutant and a diluent among them."""
    lanes = {column.gas: column.unit for column in mapping.columns if column.use == "reading"}
    known = all(_USUAL.get(gas) == unit for gas, unit in lanes.items())
    return known and bool(lanes.keys() & {"o2", "co2"}) and bool(lanes.keys() - {"o2", "co2"})


def usual() -> Mapping:
    """The mapping of the plainest file."""
    return mapping_of(look_at_grid(grid_of("logger.csv", plain()), {"stamp": "interval end"}))


FITTING = [name for name, mapping in mappings().items() if fits(mapping)]


def shaped(order: Order, mapping: Mapping, folder: Path) -> Path:
    """The folder of a rehearsal in a shape."""
    folder.mkdir()
    for name, content in in_shape(order, mapping, ("firm.map.toml", dump(mapping).encode()))[0].items():
        (folder / name).write_bytes(content)
    return folder


def read(path: Path) -> Record:
    result = read_input(path)
    stopped = [problem.text() for problem in result.problems if problem.grade is Grade.UNREADABLE]
    assert result.record is not None, stopped
    return result.record


def plainly(order: Order, folder: Path) -> Record:
    """The record of the plain rehearsal, its workbook named as the one of the folder."""
    path = folder / f"{STAMP} field.xlsx"
    folder.mkdir()
    path.write_bytes(written(parts(order).tables))
    return read(path)


def bare(record: Record) -> Record:
    """A record without the files it came from and without its readings, which are compared on their own."""
    return replace(
        record,
        readings=Readings((), (), ()),
        source=replace(record.source, sha256="", size=0, content=b""),
        sources=(),
        sheets=tuple(sheet for sheet in record.sheets if sheet.sheet != "Readings"),
    )


def numbers(readings: Readings) -> list[tuple[Any, ...]]:
    return [(row.time, *((r.kind, r.value) for r in row.readings)) for row in readings.rows]


def test_the_corpus_gives_many_shapes() -> None:
    assert len(FITTING) >= 50
    kinds = {mappings()[name].kind for name in FITTING}
    assert kinds == {"text", "workbook"}


@pytest.mark.parametrize("name", FITTING)
def test_the_folder_reads_as_the_plain_rehearsal(name: str, tmp_path: Path) -> None:
    mapping = mappings()[name]
    order = ordered_in_shape(SHORT, mapping)
    found, wanted = read(shaped(SHORT, mapping, tmp_path / "firm")), plainly(order, tmp_path / "plain")
    assert bare(found) == bare(wanted)
    assert found.readings.channels == wanted.readings.channels
    assert numbers(found.readings) == numbers(wanted.readings)


def test_every_result_is_that_of_the_plain_rehearsal(tmp_path: Path) -> None:
    mapping = look_mapping(SAMPLES / "logger_day" / "logger.csv")
    order = replace(SHORT, fault=Fault.WET_CALLED_DRY, runs=2)
    one = assess(read(shaped(order, mapping, tmp_path / "firm")))
    two = assess(plainly(ordered_in_shape(order, mapping), tmp_path / "plain"))
    assert {e.key: e.value for e in one.ledger} == {e.key: e.value for e in two.ledger}
    assert [f.words for f in one.findings] == [f.words for f in two.findings]


def look_mapping(path: Path) -> Mapping:
    answers = {"date-order": "day first", "stamp": "as the field workbook says"}
    return mapping_of(look(path, answers))


def test_the_headers_order_and_marks_of_the_firm_are_in_the_file(tmp_path: Path) -> None:
    """The sample logger: German headers in two rows, a column already corrected, decimal commas, day first."""
    mapping = look_mapping(SAMPLES / "logger_day" / "logger.csv")
    folder = shaped(SHORT, mapping, tmp_path / "firm")
    lines = (folder / f"{STAMP} logger.csv").read_text(encoding="utf-8").splitlines()
    own = (SAMPLES / "logger_day" / "logger.csv").read_text(encoding="utf-8").splitlines()
    assert lines[3:5] == own[3:5]
    cells = lines[5].split(";")
    assert cells[:2] == ["09.06.2026", "06:00:00"]
    assert cells[7:] == [MARK, MARK]
    assert all("," in cell and "." not in cell for cell in cells[2:7])
    assert (folder / "firm.map.toml").read_text(encoding="utf-8") == dump(mapping)


# ---- what cannot be written ----------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ('unit = "ppm"', 'unit = "mg/m3"', "in mg/m3; a rehearsal has it in ppm"),
        ('gas = "nox"', 'gas = "no"', "not one a rehearsal knows"),
        ('header = "CO [ppm dry]"', 'header = "CO [ppm dry] | more | and | more | rows | than | five"', "reads back"),
    ],
)
def test_a_mapping_that_a_rehearsal_cannot_follow_is_refused(tmp_path: Path, old: str, new: str, words: str) -> None:
    text = dump(usual())
    assert old in text
    (tmp_path / "firm.map.toml").write_text(text.replace(old, new, 1), encoding="utf-8")
    code, _, err = run("rehearse", tmp_path / "out", "--shape", tmp_path / "firm.map.toml", "--runs", "1")
    assert code == USAGE
    assert words in err
    assert not (tmp_path / "out").exists()


def test_channels_called_wet_cannot_be_wet_called_dry() -> None:
    wet = next(mapping for mapping in mappings().values() if any(c.basis == "wet" for c in mapping.columns))
    with pytest.raises(RecordError, match="called wet"):
        ordered_in_shape(replace(SHORT, fault=Fault.WET_CALLED_DRY), wet)


# ---- the command ---------------------------------------------------------------------------------------------


def run(*arguments: str | Path) -> tuple[int, str, str]:
    out, err = io.StringIO(), io.StringIO()
    code = main([str(a) for a in arguments], out, err)
    return code, out.getvalue(), err.getvalue()


def test_the_command_writes_a_folder_that_check_reads(tmp_path: Path) -> None:
    mapping = SAMPLES / "logger_day" / "logger.map.toml"
    more = ("--runs", "1", "--run-minutes", "20", "--units", "SI", "--truth", tmp_path / "truth.json")
    assert run("rehearse", tmp_path / "dry", "--shape", mapping, *more)[0] == OK
    assert {path.name for path in (tmp_path / "dry").iterdir()} == {
        f"{STAMP}.md", f"{STAMP} field.xlsx", f"{STAMP} logger.csv", "logger.map.toml"
    }  # fmt: skip
    assert json.loads((tmp_path / "truth.json").read_text(encoding="utf-8"))["synthetic"].startswith("yes")
    code, out, _ = run("check", tmp_path / "dry")
    assert code == OK
    assert f"\n{STAMP}, " in out
    assert "decimal" not in run("rehearse", tmp_path / "dry", "--shape", mapping)[1]
    assert run("rehearse", tmp_path / "new", "--shape", mapping, "--gases", "NOx,O2")[0] == USAGE


# ---- marks ---------------------------------------------------------------------------------------------------


@pytest.fixture(params=["text", "workbook"])
def folder(request: pytest.FixtureRequest, tmp_path: Path) -> Path:
    books = (mappings()[name] for name in FITTING if mappings()[name].kind == "workbook")
    return shaped(SHORT, usual() if request.param == "text" else next(books), tmp_path / "firm")


def logger(folder: Path) -> Path:
    return next(path for path in folder.iterdir() if path.name.startswith(f"{STAMP} logger"))


def test_every_file_but_the_firms_own_mapping_says_it(folder: Path) -> None:
    for path in folder.iterdir():
        assert path.name.startswith(STAMP) or path.name == "firm.map.toml"
        assert is_marked(path.read_bytes()) == (path.name != "firm.map.toml"), path.name


def _unmarked_field(folder: Path) -> None:
    """The field workbook made to look real in all its texts."""
    path = folder / f"{STAMP} field.xlsx"
    book = openpyxl.load_workbook(path)
    for sheet in book:
        for row in sheet.iter_rows():
            for cell in row:
                if isinstance(cell.value, str) and (MARK in cell.value or STAMP in cell.value):
                    cell.value = f"Example Works (invented) {cell.coordinate}"
        if sheet.title == "Test":
            rows = {row[0].value: row for row in sheet.iter_rows(min_row=4)}
            rows["Status"][1].value = "final"
            sheet.delete_rows(rows["Synthetic"][0].row)
    book.save(folder / "field.xlsx")
    path.unlink()


def _without_line(number: int) -> Callable[[Path], None]:
    def edit(folder: Path) -> None:
        path = logger(folder)
        if path.suffix == ".csv":
            lines = path.read_text(encoding="utf-8").splitlines()
            lines[number] = ""
            path.write_text("\n".join(lines) + "\n", encoding="utf-8")
            return
        book = openpyxl.load_workbook(path)
        sheet = book.active
        sheet.cell(sheet.max_row if number < 0 else number + 1, 1).value = None
        book.save(path)

    return edit


@pytest.mark.parametrize("edit", [_without_line(0), _without_line(1), _without_line(-1)], ids=["title", "note", "foot"])
def test_the_logger_file_alone_makes_the_test_synthetic_whatever_one_edit_takes_away(
    folder: Path, edit: Callable[[Path], None]
) -> None:
    _unmarked_field(folder)
    edit(folder)
    shutil.move(logger(folder), folder / f"day_1{logger(folder).suffix}")
    (folder / f"{STAMP}.md").unlink()
    record = read(folder)
    assert is_synthetic(record)
    outcome = assess(record)
    assert outcome.record.test.status is not None
    assert outcome.record.test.status.value == "draft"
    assert "synthetic-test" in {problem.code for problem in outcome.problems}


def test_a_real_logger_file_is_not_marked(tmp_path: Path) -> None:
    assert not is_synthetic(read(SAMPLES / "logger_day"))
    assert not is_marked(plain())
    assert is_marked(plain(above=[MARK]).decode().encode("utf-16"))
    assert not is_marked(b"PK\x03\x04 and no more")
