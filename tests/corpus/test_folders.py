"""A folder of the corpus gives the truth in the channels of the field workbook, or stops with the problem expected."""

from __future__ import annotations

from pathlib import Path

import pytest

from reporter.api import assess, read_input
from reporter.problems import Grade
from reporter.record import ReadingKind
from tests.corpus.cases_of_folders import FOLDERS
from tests.corpus.truth import CHANNELS, UNITS

CASES = {case.name: case for case in FOLDERS}
#: Notes that a folder has only where its case says so.
OWN = {"barometer-at-sea-level", "gas-in-run", "stuck-readings", "spike-reading", "rail-readings", "range-switch"}


def written(name: str, folder: Path) -> Path:
    for file, content in CASES[name].files.items():
        (folder / file).write_bytes(content)
    return folder


@pytest.mark.parametrize("name", [case.name for case in FOLDERS if not case.stops])
def test_the_truth_comes_of_a_folder(name: str, tmp_path: Path) -> None:
    case = CASES[name]
    found = read_input(written(name, tmp_path))
    assert found.record is not None, [p.text() for p in found.problems]
    assert found.record.readings.channels == CHANNELS
    assert [(row.time, *(r.value for r in row.readings)) for row in found.record.readings.rows] == list(case.rows)
    assert all(r.kind is ReadingKind.NUMBER for row in found.record.readings.rows for r in row.readings)
    held = {c.gas.value: (c.unit.value.unit, c.moisture_basis.value.value) for c in found.record.channels}
    assert held == {gas: (unit, "dry") for gas, unit in UNITS.items()}
    codes = {p.code for p in (*found.problems, *assess(found.record).problems)}
    assert codes & OWN == case.notes


@pytest.mark.parametrize("name", [case.name for case in FOLDERS if case.stops])
def test_a_folder_is_stopped(name: str, tmp_path: Path) -> None:
    found = read_input(written(name, tmp_path))
    assert found.record is None
    assert CASES[name].stops in {p.code for p in found.problems if p.grade is Grade.UNREADABLE}
