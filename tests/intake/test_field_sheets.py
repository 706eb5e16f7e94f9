"""The description of the field sheets fits the record, the unit table and a spreadsheet's limits."""

from __future__ import annotations

import dataclasses
import re

import pytest

from reporter import record
from reporter.intake.build import ROW_CLASSES
from reporter.intake.sheets import (
    ANY,
    Kind,
    Sheet,
    Type,
    choice_words,
    find_sheet,
    fold,
    footer_words,
    months,
    reading_words,
    sheet,
    sheets,
    suggestions,
)
from reporter.record import ReadingKind
from reporter.units import dimension, read_unit, spellings_of

CLASSES = {"test": record.Test, "location": record.Location, **ROW_CLASSES}
# A dimension exists if the unit table knows units of it.
EVERY = [s for s in sheets() if s.attr in CLASSES]


@pytest.mark.parametrize("spec", EVERY, ids=lambda s: s.name)
def test_columns_are_the_fields_of_the_record(spec: Sheet) -> None:
    fields = {f.name: f for f in dataclasses.fields(CLASSES[spec.attr]) if f.name not in ("place", "extra")}
    assert {c.attr for c in spec.columns} == set(fields)
    for column in spec.columns:
        without_default = fields[column.attr].default is dataclasses.MISSING
        assert column.required == without_default, column.name


def test_required_sheets_are_those_of_the_field_workbook() -> None:
    assert [s.name for s in sheets() if s.required] == ["Test", "Channels", "Readings", "Runs"]


@pytest.mark.parametrize("spec", sheets(), ids=lambda s: s.name)
def test_each_column_is_described_without_contradiction(spec: Sheet) -> None:
    for column in spec.columns:
        assert column.note.endswith((".", "?")), column.name
        for name in column.dimensions:
            assert name == ANY or spellings_of(name), (column.name, name)
        for unit in {column.us, column.si} - {""}:
            assert dimension(read_unit(unit).unit) in column.dimensions, (column.name, unit)
        assert bool(column.us) == bool(column.si)
        if column.type is Type.CHOICE or column.type is Type.BOOL:
            assert len(",".join(column.choices)) < 255  # limit of a list typed into a spreadsheet's validation
        if column.enum:
            assert {member.value for member in getattr(record, column.enum)} == set(column.choices)
        if column.refers:
            assert sheet(column.refers)
        if column.suggest:
            assert len(",".join(suggestions(column.suggest))) < 255
        if column.unit_from == "Unit":
            assert spec.column("Unit").type is Type.UNIT
        if column.type is Type.UNIT and column.suggest:
            for unit in suggestions(column.suggest):
                assert dimension(read_unit(unit).unit) in column.dimensions, (spec.name, unit)
    for name in (*spec.unique, *spec.counts_when):
        assert spec.column(name)


@pytest.mark.parametrize("spec", sheets(), ids=lambda s: s.name)
def test_no_two_columns_share_a_way_to_be_written(spec: Sheet) -> None:
    names = [name for column in spec.columns for name in column.names]
    assert len(names) == len(set(names)), [name for name in names if names.count(name) > 1]


def test_no_two_sheets_share_a_name() -> None:
    names = [fold(name) for s in sheets() for name in (s.name, *s.synonyms)]
    assert len(names) == len(set(names))
    assert find_sheet("RUNS ") is sheet("Runs")
    assert find_sheet("Minute data") is sheet("Readings")
    assert find_sheet("Summary") is None


def test_words_of_readings_and_months() -> None:
    assert set(reading_words().values()) <= {kind.value for kind in ReadingKind}
    assert all(word == word.casefold() for word in (*reading_words(), *footer_words(), *months()))
    assert months()["september"] == months()["sep"] == 9
    assert months()["août"] == 8
    assert all(re.fullmatch(r"[^\W\d_]+", name) for name in months())


def test_choice_words_belong_to_a_choice() -> None:
    choices = {choice for s in sheets() for c in s.columns for choice in c.choices}
    assert set(choice_words()) <= choices


def test_readings_and_process_begin_with_the_time() -> None:
    for spec in sheets():
        if spec.kind in (Kind.READINGS, Kind.PROCESS):
            assert spec.columns[0].name == "Time"
            assert spec.columns[0].required
