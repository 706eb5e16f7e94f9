"""For every file of the corpus the record equals the truth exactly, or the file is stopped as expected."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import datetime
from fnmatch import fnmatchcase
from pathlib import Path

import pytest

from reporter.errors import RecordError
from reporter.intake.foreign import ForeignReadings, apply, load, look, mapping_of, save
from reporter.intake.series_notes import notes_of_file
from reporter.problems import Grade
from tests.corpus.case import Case, Held
from tests.corpus.corpus import CASES, README, readme
from tests.corpus.truth import CHANNELS, STARTS

READ = [name for name, case in CASES.items() if not case.stops]
#: What only the series shows; a plain file shows none of it.
SERIES = {"stuck-readings", "spike-reading", "rail-readings", "range-switch", "gas-in-run"}
STOPPED = [name for name, case in CASES.items() if case.stops]


def written(case: Case, folder: Path) -> Path:
    path = folder / case.file
    path.write_bytes(case.content)
    return path


def rows_of(made: ForeignReadings, channels: tuple[str, ...]) -> list[tuple[datetime, tuple[Held, ...]]]:
    order = [made.readings.channels.index(name) for name in channels]
    return [
        (row.time, tuple((row.readings[i].kind.value, row.readings[i].value) for i in order))
        for row in made.readings.rows
    ]


def stops(path: Path, answers: Mapping[str, str], folder: Path) -> set[str]:
    """The keys of open questions, or the codes of what keeps a file from being read."""
    found = look(path, answers)
    keys = {question.key for question in found.questions}
    keys |= {p.code for p in found.problems if p.grade is Grade.UNREADABLE}
    if keys or found.mapping is None:
        return keys
    day = STARTS[0].date()
    return {p.code for p in apply(path, mapping_of(found), day=day).problems if p.grade is Grade.UNREADABLE}


def test_the_corpus_is_large_and_every_name_is_its_own() -> None:
    assert len(CASES) >= 80
    assert len({(case.content, tuple(case.answers.items())) for case in CASES.values()}) >= len(CASES) - 10


@pytest.mark.parametrize("name", READ)
def test_the_truth_comes_of_it(name: str, tmp_path: Path) -> None:
    case = CASES[name]
    path = written(case, tmp_path)
    found = look(path, case.answers)
    assert not found.questions, [q.text() for q in found.questions]
    save(mapping_of(found), tmp_path / "a.map.toml")
    made = apply(path, load(tmp_path / "a.map.toml"), day=STARTS[0].date() if case.day else None)
    assert not [p.text() for p in made.problems if p.grade is Grade.UNREADABLE]
    assert rows_of(made, tuple(case.channels)) == case.expected()
    assert {c.gas: (c.unit, c.basis) for c in made.columns} == {
        gas: (unit, case.basis) for gas, unit in case.units.items()
    }
    problems = (*made.problems, *notes_of_file(made))
    assert case.notes <= {p.code for p in problems}
    assert case.notes or case.cells or not {p.code for p in problems} & SERIES
    shown = "\n".join([*found.evidence, *made.report.lines(), *(p.text() for p in problems)])
    assert not [words for words in case.says if words not in shown], shown


@pytest.mark.parametrize("name", [name for name in READ if CASES[name].answers])
def test_without_an_answer_it_asks(name: str, tmp_path: Path) -> None:
    case = CASES[name]
    path = written(case, tmp_path)
    for key in case.answers:
        others = {other: answer for other, answer in case.answers.items() if other != key}
        found = look(path, others)
        assert any(fnmatchcase(question.key, key) for question in found.questions), key
        with pytest.raises(RecordError, match="open questions"):
            mapping_of(found)


@pytest.mark.parametrize("name", STOPPED)
def test_it_is_stopped(name: str, tmp_path: Path) -> None:
    case = CASES[name]
    answers = {key: answer for key, answer in case.answers.items() if key != case.stops}
    found = stops(written(case, tmp_path), answers, tmp_path)
    assert any(fnmatchcase(key, case.stops) for key in found), found


def test_the_readme_is_current() -> None:
    assert README.read_text(encoding="utf-8") == readme(), "write it again: python -m tests.corpus.corpus"


def test_the_truth_is_three_runs_of_twenty_minutes_in_four_channels() -> None:
    assert len(STARTS) == 3
    assert CHANNELS == ("NOx", "CO", "O2", "CO2")
