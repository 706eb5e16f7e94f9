"""A test as a folder gives the results of the same test in one workbook; what does not fit is said."""

from __future__ import annotations

import importlib
import io
import json
import shutil
from pathlib import Path

import pytest

from reporter.api import issue_time, opened, read_input, report_files
from reporter.cli import OK, UNREADABLE, USAGE, WITHHELD, main
from reporter.problems import Grade

ROOT = Path(__file__).resolve().parents[3]
VALID = ROOT / "sample_inputs" / "valid"
DAY = VALID / "logger_day"


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    return Path(shutil.copytree(DAY, tmp_path / "day"))


def run(*arguments: str | Path) -> tuple[int, str, str]:
    out, err = io.StringIO(), io.StringIO()
    code = main([str(a) for a in arguments], out, err)
    return code, out.getvalue(), err.getvalue()


def codes(folder: Path) -> set[str]:
    return {p.code for p in read_input(folder).problems if p.grade is Grade.UNREADABLE}


def test_the_results_are_those_of_the_workbook() -> None:
    one, two = opened(VALID / "wood_boiler_si.xlsx"), opened(DAY)
    first, second = ({entry.key: entry.value for entry in outcome.ledger} for outcome in (one, two))
    assert first.keys() == second.keys()
    for key, value in first.items():
        assert second[key] == pytest.approx(value, rel=1e-12, abs=0.0), key
    assert [c.is_met for c in one.comparisons] == [c.is_met for c in two.comparisons]
    assert one.comparisons


def test_the_committed_folder_is_what_the_script_makes(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.syspath_prepend(str(ROOT / "sample_inputs"))
    made = importlib.import_module("make_samples").logger_day()
    assert set(made) == {path.name for path in DAY.iterdir()}
    for name, content in made.items():
        if not name.endswith(".xlsx"):
            assert (DAY / name).read_bytes() == content


def test_every_input_is_named_with_its_hash() -> None:
    outcome = opened(DAY)
    names = [source.name for source in outcome.record.sources]
    assert names == ["field.xlsx", "logger.csv", "logger.map.toml"]
    data = json.loads(report_files(outcome, issue_time("2026-05-01"), folder=DAY)[".json"])
    assert [row["name"] for row in data["inputs"]] == names
    assert all(len(row["sha256"]) == 64 for row in data["inputs"])


def test_check_says_what_was_understood() -> None:
    code, out, _ = run("check", DAY)
    assert code == OK
    for words in ("220 rows of readings", "each 60 s", "NOx in ppm, dry", "Mittelwert"):
        assert words in out


def test_map_asks_writes_the_questions_and_saves_the_mapping(folder: Path) -> None:
    questions, saved = folder / "q.toml", folder / "logger.map.toml"
    before = saved.read_bytes()
    saved.unlink()
    code, out, _ = run("map", folder / "logger.csv", "--questions", questions, "--save", saved)
    assert code == WITHHELD
    assert "date-order" in out
    assert not saved.exists()
    filled = questions.read_text(encoding="utf-8")
    for answer in ("day first", "as the field workbook says"):
        filled = filled.replace('answer = ""', f'answer = "{answer}"', 1)
    questions.write_text(filled, encoding="utf-8")
    name = "Kessel 1 logger (invented)"
    code, out, _ = run("map", folder / "logger.csv", "--answers", questions, "--save", saved, "--name", name)
    assert code == OK, out
    assert saved.read_bytes() == before


def test_map_of_answers_that_cannot_be_read(folder: Path) -> None:
    (folder / "bad.toml").write_text("[[question]\n", encoding="utf-8")
    assert run("map", folder / "logger.csv", "--answers", folder / "bad.toml")[0] == USAGE
    assert run("map", folder / "answers.toml")[0] == UNREADABLE


def test_two_days_are_joined_and_an_overlap_counts_once(folder: Path) -> None:
    lines = (folder / "logger.csv").read_text(encoding="utf-8").splitlines()
    (folder / "logger.csv").write_text("\n".join(lines[:120]) + "\n", encoding="utf-8")
    (folder / "second.csv").write_text("\n".join([*lines[:5], *lines[110:]]) + "\n", encoding="utf-8")
    made, whole = read_input(folder), read_input(DAY)
    assert made.record is not None
    assert whole.record is not None
    assert [(r.time, r.readings) for r in made.record.readings.rows] == [
        (r.time, r.readings) for r in whole.record.readings.rows
    ]


def test_files_that_contradict_each_other_stop(folder: Path) -> None:
    lines = (folder / "logger.csv").read_text(encoding="utf-8").splitlines()
    row = lines[100].split(";")
    row[2] = "88,8"
    (folder / "second.csv").write_text("\n".join([*lines[:5], ";".join(row)]) + "\n", encoding="utf-8")
    assert codes(folder) == {"readings-contradict"}


def test_another_basis_than_the_workbook_stops(folder: Path) -> None:
    file = folder / "logger.map.toml"
    file.write_text(file.read_text(encoding="utf-8").replace('basis = "dry"', 'basis = "wet"', 1), encoding="utf-8")
    assert codes(folder) == {"mapping-against-channels"}


def test_a_changed_header_is_shown_as_the_difference(folder: Path) -> None:
    file = folder / "logger.csv"
    file.write_text(file.read_text(encoding="utf-8").replace("Sauerstoff", "Sauerstoff 2", 1), encoding="utf-8")
    problems = [p for p in read_input(folder).problems if p.code == "mapping-differs"]
    assert len(problems) == 1
    assert "no column 'Sauerstoff | Vol% tr.'" in problems[0].found
    assert "a new column 'Sauerstoff 2 | Vol% tr.'" in problems[0].found


def test_a_decimal_mark_that_changed_is_noticed(folder: Path) -> None:
    file = folder / "logger.csv"
    file.write_text(file.read_text(encoding="utf-8").replace(",", "."), encoding="utf-8")
    assert "mapping-differs" in codes(folder)


def test_the_list_of_files_decides(folder: Path) -> None:
    (folder / "notes.txt").write_text("a note\n", encoding="utf-8")
    assert codes(folder)
    (folder / "folder.toml").write_text('workbook = "field.xlsx"\nreadings = ["logger.csv"]\n', encoding="utf-8")
    assert not codes(folder)
    (folder / "folder.toml").write_text('workbook = "../field.xlsx"\n', encoding="utf-8")
    assert codes(folder) == {"folder-inputs"}


def test_a_mapping_from_elsewhere(folder: Path, tmp_path: Path) -> None:
    elsewhere = tmp_path / "kept.map.toml"
    (folder / "logger.map.toml").rename(elsewhere)
    assert codes(folder) == {"mapping-missing"}
    assert run("check", folder, "--mapping", elsewhere)[0] == OK
    assert run("check", folder, "--mapping", tmp_path / "none.map.toml")[0] == UNREADABLE


def test_readings_in_both_places_stop(folder: Path) -> None:
    shutil.copy(VALID / "wood_boiler_si.xlsx", folder / "field.xlsx")
    assert codes(folder) == {"folder-inputs"}


def test_the_report_of_a_folder_has_its_name(tmp_path: Path) -> None:
    code, _, _ = run("report", DAY, "--out", tmp_path, "--issued", "2026-05-01T12:00:00+00:00")
    assert code == OK
    assert {p.name for p in tmp_path.iterdir()} == {"logger_day.json", "logger_day.xlsx", "logger_day.pdf"}
