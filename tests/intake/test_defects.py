"""Each problem code has one defect file, and that file shows its code."""

from __future__ import annotations

import importlib.util
import io
import re
import sys
import zipfile
from pathlib import Path
from types import ModuleType

import pytest
from field_book import ROOT

from reporter.api import problems_of
from reporter.api import read_input as read
from reporter.problems import Grade, catalogue

DEFECTS = ROOT / "sample_inputs" / "defects"
FILES = {path.stem: path for path in sorted(DEFECTS.iterdir()) if path.suffix in (".xlsx", ".json") or path.is_dir()}


@pytest.fixture(scope="module")
def script() -> ModuleType:
    folder = str(ROOT / "sample_inputs")
    sys.path.insert(0, folder)
    try:
        spec = importlib.util.spec_from_file_location("make_defects", ROOT / "sample_inputs" / "make_defects.py")
        assert spec is not None
        assert spec.loader is not None
        module = importlib.util.module_from_spec(spec)
        spec.loader.exec_module(module)
    finally:
        sys.path.remove(folder)
    return module


def test_every_code_has_a_defect_file_and_no_file_is_without_a_code() -> None:
    assert set(FILES) == set(catalogue())


@pytest.mark.parametrize("code", sorted(FILES))
def test_a_defect_file_shows_its_code(code: str) -> None:
    problems = read(FILES[code]).problems
    if code not in {p.code for p in problems}:
        problems = problems_of(FILES[code])
    shown = [p for p in problems if p.code == code]
    assert shown, [p.text() for p in problems]
    for problem in shown:
        file = FILES[code]
        inside = {file.name} | ({f.name for f in file.iterdir()} if file.is_dir() else set())
        assert problem.place.file in inside
        assert problem.title
        assert problem.expected
        assert problem.remedy


@pytest.mark.parametrize("code", sorted(FILES))
def test_only_an_unreadable_grade_withholds_the_record(code: str) -> None:
    result = read(FILES[code])
    unreadable = any(p.grade is Grade.UNREADABLE for p in result.problems)
    assert (result.record is None) == unreadable
    assert unreadable == (catalogue()[code].grade is Grade.UNREADABLE)


@pytest.mark.parametrize("code", [c for c in sorted(FILES) if catalogue()[c].grade is Grade.UNREADABLE])
def test_a_problem_of_a_cell_names_the_cell(code: str) -> None:
    whole_file = {
        "mapping-missing", "mapping-unreadable", "mapping-differs", "mapping-against-channels",
        "readings-contradict", "folder-inputs", "no-readings-table",
        "not-a-workbook", "old-workbook", "encrypted", "truncated", "zip-bomb", "dtd", "bad-json"
    }  # fmt: skip
    sheet_only = {"missing-sheet", "repeated-sheet", "missing-header", "no-rows", "misspelt-name"}
    for problem in read(FILES[code]).problems:
        if problem.code == code and code not in whole_file:
            assert problem.place.sheet or FILES[code].is_dir()  # a text file has lines, and no sheet
            assert code in sheet_only or re.fullmatch(r"[A-Z]{1,3}\d+", problem.place.cell), problem


def test_the_undamaged_bases_have_none_of_the_codes(script: ModuleType, tmp_path: Path) -> None:
    title = "Alder Creek Works (invented), Boiler 2"
    for size in ("short", "full"):
        path = tmp_path / f"{size}.xlsx"
        path.write_bytes(script.make_samples.workbook.write(title, script.base(size)))
        result = read(path)
        assert result.record is not None
        assert {p.code for p in result.problems} <= {"negative-reading"}


@pytest.mark.parametrize("code", sorted(FILES))
def test_the_committed_file_is_what_the_script_makes(code: str, script: ModuleType) -> None:
    """Part by part, so that another release of the compression library does not matter."""
    if FILES[code].is_dir():
        made = script.build_folder(code)
        assert set(made) == {path.name for path in FILES[code].iterdir()}
        for name, content in made.items():
            if not name.endswith(".xlsx"):
                assert (FILES[code] / name).read_bytes() == content
        return
    name, content = script.build(code)
    kept = FILES[code].read_bytes()
    assert name == FILES[code].name
    if not zipfile.is_zipfile(io.BytesIO(kept)):
        assert len(kept) < 20_000
        return
    with zipfile.ZipFile(io.BytesIO(content)) as new, zipfile.ZipFile(io.BytesIO(kept)) as old:
        assert new.namelist() == old.namelist()
        for part in new.namelist():
            assert new.read(part) == old.read(part), part


def test_the_words_of_the_catalogue_fit_a_sentence() -> None:
    for code in catalogue().values():
        for words in (code.title, code.expected, code.remedy):
            assert words.strip() == words
            assert not words.endswith(".")
        assert code.title[0].isupper()
        never = r"\b(pass(ed|es)?|fail(ed|s)?|compliant|compliance|violations?|verdict)\b"
        assert not re.search(never, f"{code.title} {code.expected} {code.remedy}", re.IGNORECASE)
