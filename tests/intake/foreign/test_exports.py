"""What a mapping used again still notices, and what a folder and the terminal say of an export never seen before."""

from __future__ import annotations

import shutil
from datetime import datetime, timedelta
from pathlib import Path

import pytest

from reporter.errors import RecordError
from reporter.intake.foreign import apply, load, look, mapping_of, save
from reporter.intake.foreign.answers import questions_toml, read_answers
from reporter.intake.foreign.folder import read_folder
from reporter.intake.foreign.mapping import dump
from reporter.intake.foreign.model import together
from reporter.map_task import map_file
from tests.corpus.case import END, HEADERS, plain, text
from tests.corpus.truth import TRUTH

SAMPLES = Path(__file__).parents[3] / "sample_inputs" / "valid"


def written(folder: Path, content: bytes, name: str = "logger.csv") -> Path:
    path = folder / name
    path.write_bytes(content)
    return path


def small() -> bytes:
    """O2 and CO2 as fractions under headers that say percent."""
    rows = [(row[0], row[1], row[2], row[3] / 100, row[4] / 100) for row in TRUTH]
    return plain(rows=rows, show=lambda v: f"{v:.4f}")


def test_a_mapping_used_again_holds_percent_against_fractions(tmp_path: Path) -> None:
    mapping = mapping_of(look(written(tmp_path, plain()), END))
    made = apply(written(tmp_path, small(), "later.csv"), mapping)
    assert [(p.code, p.place.field) for p in made.problems] == [("mapping-differs", "O2"), ("mapping-differs", "CO2")]
    assert "unit" in made.problems[0].found


def test_percent_that_was_answered_is_not_asked_again(tmp_path: Path) -> None:
    path = written(tmp_path, small())
    save(mapping_of(look(path, {**END, "column.*.fraction": "%"})), tmp_path / "a.map.toml")
    assert 'why = "percent, as answered"' in (tmp_path / "a.map.toml").read_text(encoding="utf-8")
    assert not apply(path, load(tmp_path / "a.map.toml")).problems


def test_an_offset_that_changes_after_thousands_of_rows_is_seen(tmp_path: Path) -> None:
    """The clocks go back after six thousand minutes: -06:00 becomes -07:00."""
    start = datetime(2026, 10, 28, 0, 0)
    lines = [",".join(HEADERS)]
    for minute in range(6_600):
        moment = start + timedelta(minutes=minute)
        after = minute >= 6_000
        moment -= timedelta(hours=1) if after else timedelta(0)
        lines.append(f"{moment:%Y-%m-%dT%H:%M:%S}-0{7 if after else 6}:00,24.1,1120.0,4.5,9.2")
    found = look(written(tmp_path, "\n".join(lines).encode()), END)
    asked = next(question for question in found.questions if question.key == "time-zone")
    assert "-7, -6 h from UTC" in asked.found
    assert "the clock goes back" in asked.found
    assert "as written" not in asked.answers


def test_the_zone_of_a_header_is_kept_in_the_mapping(tmp_path: Path) -> None:
    content = plain(headers=(("Time UTC", *HEADERS[1:]),), clock=lambda t: f"{t + timedelta(hours=6)}")
    mapping = mapping_of(look(written(tmp_path, content), {**END, "time-zone": "America/Denver"}))
    assert (mapping.time.written, mapping.time.zone) == ("UTC+00:00", "America/Denver")
    save(mapping, tmp_path / "a.map.toml")
    assert load(tmp_path / "a.map.toml") == mapping
    bad = dump(mapping).replace('written_in_zone = "UTC+00:00"', 'written_in_zone = "America/Denver"')
    (tmp_path / "a.map.toml").write_text(bad, encoding="utf-8")
    with pytest.raises(RecordError, match="written_in_zone"):
        load(tmp_path / "a.map.toml")


def test_one_question_for_the_basis_of_all_columns(tmp_path: Path) -> None:
    path = written(tmp_path, plain(headers=(("Time", "NOx ppm", "CO ppm", "O2 %", "CO2 %"),)))
    asked = together(look(path).questions)
    assert [question.key for question in asked] == ["stamp", "column.*.basis"]
    assert asked[1].found.endswith("likewise columns C, D, E")
    sheet = tmp_path / "q.toml"
    sheet.write_text(questions_toml(path.name, asked).replace('answer = ""', 'answer = "dry"'), encoding="utf-8")
    answered = look(path, {**read_answers(sheet), **END})
    assert not answered.questions
    assert {column.basis for column in mapping_of(answered).columns if column.use == "reading"} == {"dry"}


def test_one_question_for_the_outputs_of_several_columns(tmp_path: Path) -> None:
    path = written(tmp_path, plain(headers=(("Time", "NOx ppm dry", "CO mV", "O2 V", "CO2 % dry"),)))
    asked = together(look(path).questions)
    assert [question.key for question in asked] == ["stamp", "column.*.signal"]


def test_the_terminal_says_the_commands_to_type(tmp_path: Path) -> None:
    path = written(tmp_path, plain())
    said = map_file(path).text
    assert f"fluebook map {path} --questions answers.toml" in said
    assert f"fluebook map {path} --answers answers.toml --save {tmp_path / 'logger.map.toml'}" in said
    given = map_file(path, questions=tmp_path / "q.toml").text
    assert f"fluebook map {path} --answers {tmp_path / 'q.toml'} --save" in given


def test_a_folder_takes_other_endings_and_names_what_it_does_not_read(tmp_path: Path) -> None:
    shutil.copytree(SAMPLES / "logger_day", tmp_path / "day")
    (tmp_path / "day" / "logger.csv").rename(tmp_path / "day" / "logger.DAT")
    (tmp_path / "day" / "answers.toml").unlink()
    (tmp_path / "day" / "port.jpg").write_bytes(b"a photograph")
    found = read_folder(tmp_path / "day")
    assert found.record is not None
    assert any("220 rows" in line for line in found.understood)
    assert found.understood[-1] == "not read: port.jpg"


def test_a_row_of_other_units_stops_a_mapping_used_again(tmp_path: Path) -> None:
    headers = (("Time", "NOx", "CO", "O2", "CO2"), ("", "ppm dry", "ppm dry", "% dry", "% dry"))
    mapping = mapping_of(look(written(tmp_path, plain(headers=headers)), END))
    content = text(headers=headers, before={30: [",mg/m3,,,"]}).encode()
    made = apply(written(tmp_path, content, "later.csv"), mapping)
    problem = next(p for p in made.problems if p.code == "unit-changes")
    assert problem.place.cell == "A33"
    assert problem.found == "'mg/m3' in the column of NOx, which is read in ppm"
    same = text(headers=headers, before={30: [",ppm,,,"]}).encode()
    assert {p.code for p in apply(written(tmp_path, same, "same.csv"), mapping).problems} == {"rows-left-out"}


def test_answers_given_before_are_kept_with_the_questions_that_are_left(tmp_path: Path) -> None:
    path = written(tmp_path, plain(headers=(("Time", "NOx ppm", *HEADERS[2:]),)))
    sheet = tmp_path / "answers.toml"
    map_file(path, questions=sheet)
    half = sheet.read_text(encoding="utf-8").replace('answer = ""', 'answer = "interval end"', 1)
    sheet.write_text(half, encoding="utf-8")
    assert f"--answers {sheet} --questions {sheet}" in map_file(path, answers=sheet).text
    map_file(path, answers=sheet, questions=sheet)
    assert read_answers(sheet) == {"stamp": "interval end"}
    whole = sheet.read_text(encoding="utf-8").replace('answer = ""', 'answer = "dry"')
    sheet.write_text(whole, encoding="utf-8")
    assert map_file(path, answers=sheet).code == 0
