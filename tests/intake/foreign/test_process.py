"""A plant's own log beside the logger's file: recognised or asked about, read, averaged over the runs."""

from __future__ import annotations

import shutil
from datetime import datetime, timedelta
from pathlib import Path

import openpyxl
import pytest

from reporter.api import opened, read_input
from reporter.errors import RecordError
from reporter.intake.foreign import look, mapping_of, save
from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.look import Look, look_at_grid
from reporter.intake.foreign.mapping import dump, load, parse
from reporter.intake.foreign.process_words import process_in, split_name

ROOT = Path(__file__).resolve().parents[3]
SAMPLE = ROOT / "sample_inputs" / "valid" / "gas_boiler_us.xlsx"
MOMENTS = {"stamp": "moment"}
START = datetime(2026, 4, 14, 8, 0)
#: Steam flow each quarter of an hour: it rises by 0.1 each time.
STEAM = [40.0 + 0.1 * k for k in range(24)]


def plant(header: str = "Timestamp,Steam flow [klb/h],Mode", *, zone: str = "", hours: int = 0) -> bytes:
    """The plant's export."""
    lines = ["Plant historian (invented)", header]
    times = (START + timedelta(minutes=15 * k, hours=hours) for k in range(len(STEAM)))
    lines += [f"{t:%Y-%m-%dT%H:%M:%S}{zone},{value:.1f},auto" for t, value in zip(times, STEAM, strict=True)]
    return ("\n".join(lines) + "\n").encode()


def seen(content: bytes, answers: dict[str, str] | None = None) -> Look:
    return look_at_grid(grid_of("plant.csv", content), answers or MOMENTS)


def asked(found: Look) -> set[str]:
    return {question.key for question in found.questions}


def folder(path: Path, content: bytes, answers: dict[str, str], *, own: bool = False) -> Path:
    """The sample workbook with its readings, without its sheet Process unless it keeps it, and the plant's export."""
    path.mkdir()
    book = openpyxl.load_workbook(SAMPLE)
    if not own:
        del book["Process"]
    book.save(path / "field.xlsx")
    (path / "plant.csv").write_bytes(content)
    save(mapping_of(look(path / "plant.csv", answers)), path / "plant.map.toml")
    return path


@pytest.mark.parametrize(
    ("header", "key"),
    [
        ("Boiler load", "load"), ("Steam flow [klb/h]", "steam"), ("Fuel gas flow, scfh", "fuel"),
        ("HEAT_INPUT mmBtu/hr", "heat"), ("Stack temp °F", "temperature"), ("Dampfmenge t/h", "steam"),
        ("NOx ppm", ""), ("Remark", ""), ("Level", ""), ("", ""),
    ],
)  # fmt: skip
def test_quantities_by_their_words(header: str, key: str) -> None:
    assert process_in(header) == key


@pytest.mark.parametrize(
    ("header", "name", "unit"),
    [
        ("Steam flow [klb/h]", "Steam flow", "klb/h"), ("Stack temp °F", "Stack temp", "°F"),
        ("Heat input, MMBtu/hr", "Heat input", "MMBtu/h"), ("Steam | t/h", "Steam", "t/h"), ("Damper", "Damper", ""),
        ("Gas (main) flow", "Gas (main) flow", ""),
    ],
)  # fmt: skip
def test_name_and_unit_of_a_header(header: str, name: str, unit: str) -> None:
    assert split_name(header) == (name, unit)


def test_a_plant_log_is_recognised_and_its_mapping_kept() -> None:
    found = seen(plant())
    assert asked(found) == set()
    mapping = mapping_of(found)
    assert [(column.use, column.channel, column.unit) for column in mapping.columns] == [
        ("time", "", ""), ("process", "Steam flow", "klb/h"), ("ignore", "", ""),
    ]  # fmt: skip
    assert mapping.has("process")
    assert not mapping.has("reading")


def test_the_mapping_is_read_back_as_it_was(tmp_path: Path) -> None:
    mapping = mapping_of(seen(plant()))
    save(mapping, tmp_path / "plant.map.toml")
    assert load(tmp_path / "plant.map.toml") == mapping
    (tmp_path / "bad.map.toml").write_text(dump(mapping).replace('channel = "Steam flow"\n', ""), encoding="utf-8")
    with pytest.raises(RecordError, match="channel"):
        load(tmp_path / "bad.map.toml")
    mixed = dump(mapping).replace(
        'use = "ignore"', 'use = "reading"\nchannel = "O2"\ngas = "o2"\nunit = "%"\nbasis = "dry"'
    )
    (tmp_path / "mixed.map.toml").write_text(mixed, encoding="utf-8")
    with pytest.raises(RecordError, match="moment"):
        load(tmp_path / "mixed.map.toml")
    with pytest.raises(ValueError, match="form"):
        parse({"form": 0})


def test_a_missing_unit_and_an_unknown_column_are_asked_about() -> None:
    found = seen(plant("Timestamp,Steam flow,Mode"))
    assert asked(found) == {"column.B.process"}
    assert [o.answer for o in found.questions[0].options][-2:] == ["no unit", "ignore"]
    assert "klb/h" in found.questions[0].answers
    mapping = mapping_of(found, {"column.B.process": "t/h"})
    assert mapping.columns[1].unit == "t/h"
    unknown = seen(plant("Timestamp,Steam flow [klb/h],Mode").replace(b"auto", b"7"))
    assert asked(unknown) == {"column.C.process"}


def test_gases_beside_a_load_are_asked_about() -> None:
    header = "Timestamp,Steam flow [klb/h],Fuel flow [ft3/h],O2 [% wet]"
    lines = [header, *(f"2026-04-14 08:{k:02d},40.{k},51000,3.{k}" for k in range(10, 40))]
    content = ("\n".join(lines) + "\n").encode()
    assert asked(seen(content)) == {"whose-log"}
    uses = [c.use for c in mapping_of(seen(content, MOMENTS | {"whose-log": "plant"})).columns]
    assert uses == ["time", "process", "process", "process"]
    other = mapping_of(seen(content, {"stamp": "interval end", "whose-log": "analyzers"}))
    assert [c.use for c in other.columns] == ["time", "ignore", "ignore", "reading"]


def mean(first: str, last: str) -> float:
    """The mean of the steam flow from a time to a time, both counted: plain arithmetic."""
    times = [START + timedelta(minutes=15 * k) for k in range(len(STEAM))]
    inside = [v for t, v in zip(times, STEAM, strict=True) if first <= f"{t:%H:%M}" <= last]
    return sum(round(v, 1) for v in inside) / len(inside)


def test_the_means_of_the_runs_follow(tmp_path: Path) -> None:
    """Run 1 is from 09:00 to 10:00; moments at its ends count."""
    path = folder(tmp_path / "test", plant(), MOMENTS)
    outcome = opened(path)
    entry = outcome.ledger["run.1.process.steam_flow"]
    assert entry.value == pytest.approx(mean("09:00", "10:00"), rel=1e-14)
    assert entry.unit == "klb/h"
    place = outcome.ledger["run.1.process.steam_flow.readings"].origin
    assert "plant.csv" in str(place)
    assert "B7:B11" in str(place)
    assert [source.name for source in outcome.record.sources] == ["field.xlsx", "plant.csv", "plant.map.toml"]


def test_values_of_an_interval_stand_at_its_middle(tmp_path: Path) -> None:
    """Stamps at the end: run 1 holds the quarters that end at 09:15, 09:30, 09:45 and 10:00."""
    outcome = opened(folder(tmp_path / "test", plant(), {"stamp": "interval end"}))
    value = outcome.ledger["run.1.process.steam_flow"].value
    assert value == pytest.approx(mean("09:15", "10:00"), rel=1e-14)


def test_a_clock_in_another_zone_is_converted(tmp_path: Path) -> None:
    """The plant logs in UTC, six hours ahead of the clock of the test."""
    answers = MOMENTS | {"time-zone": "UTC-06:00"}
    outcome = opened(folder(tmp_path / "test", plant(zone="Z", hours=6), answers))
    value = outcome.ledger["run.1.process.steam_flow"].value
    assert value == pytest.approx(mean("09:00", "10:00"), rel=1e-14)


def test_a_zone_that_is_not_that_of_the_test_stops(tmp_path: Path) -> None:
    answers = MOMENTS | {"time-zone": "UTC+03:00"}
    found = read_input(folder(tmp_path / "test", plant(zone="Z", hours=5), answers))
    assert found.record is None
    assert [p.code for p in found.problems if "UTC+03:00" in p.found] == ["mapping-against-channels"]


def test_the_clock_of_the_plant_may_be_corrected(tmp_path: Path) -> None:
    path = folder(tmp_path / "test", plant(), MOMENTS)
    entry = '[[clock]]\nfile = "plant.csv"\nadd_seconds = 900\nsaid_by = "A. Nobody"\n'
    (path / "folder.toml").write_text(entry, encoding="utf-8")
    outcome = opened(path)
    assert outcome.ledger["run.1.process.steam_flow"].value == pytest.approx(mean("08:45", "09:45"), rel=1e-14)
    assert outcome.record.prepared == ("plant.csv: +900 s added to every time stamp; said by A. Nobody",)


def test_files_of_two_days_and_the_sheet_are_one_log(tmp_path: Path) -> None:
    path = folder(tmp_path / "test", plant("Timestamp,Boiler draft [Pa],Mode"), MOMENTS, own=True)
    shutil.copy(path / "plant.csv", path / "again.csv")
    found = read_input(path)
    assert found.record is not None
    log = found.record.process
    assert "Boiler draft" in log.columns
    assert "Steam flow" in log.columns
    assert list(log.times) == sorted(set(log.times))


def test_files_that_contradict_each_other_stop(tmp_path: Path) -> None:
    path = folder(tmp_path / "test", plant(), MOMENTS)
    (path / "again.csv").write_bytes(plant().replace(b",40.5,", b",40.6,"))
    found = read_input(path)
    assert found.record is None
    (said,) = [p for p in found.problems if p.code == "readings-contradict"]
    assert "Steam flow at 2026-04-14 09:15:00" in said.found


def test_words_and_marks_never_enter_a_mean(tmp_path: Path) -> None:
    content = plant().replace(b",40.5,", b",n/a,").replace(b",40.6,", b",-999,").replace(b",40.7,", b",,")
    outcome = opened(folder(tmp_path / "test", content, MOMENTS))
    value = outcome.ledger["run.1.process.steam_flow"].value
    assert value == pytest.approx((40.4 + 40.8) / 2, rel=1e-14)


def test_another_shape_is_said(tmp_path: Path) -> None:
    path = folder(tmp_path / "test", plant(), MOMENTS)
    (path / "plant.csv").write_bytes(plant("Timestamp,Steam rate [klb/h],Mode"))
    found = read_input(path)
    assert found.record is None
    assert [p.code for p in found.problems if p.code == "mapping-differs"] == ["mapping-differs"]
