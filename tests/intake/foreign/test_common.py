"""Logger files of different intervals, stamps and clocks as one test, against the truth they were made from."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from split_tests import Logger, changing, folder, means, source

from reporter.api import assessed, issue_time, read_input
from reporter.intake.read import ReadResult
from reporter.logged import is_kind
from reporter.outcome import Outcome
from reporter.output.phrases import load_phrases
from reporter.output.view.desk import Desk
from reporter.output.view.inputs import inputs
from reporter.record import ReadingKind, Readings
from reporter.version import VERSION

POLLUTANTS, DILUENTS = ("NOx", "CO"), ("O2", "CO2")
FINE, COARSE = Logger(POLLUTANTS, 10), Logger(DILUENTS, 60)


def readings(found: ReadResult) -> Readings:
    assert found.record is not None, [p.text() for p in found.problems]
    return found.record.readings


def codes(found: ReadResult) -> list[str]:
    return sorted(p.code for p in found.problems if p.code not in ("negative-reading", "unfilled-row", "footer-row"))


def same(made: Readings, step: int, *, at_end: bool = False) -> None:
    """Every channel is the plain mean of its ten-second readings over each interval."""
    for name in (*POLLUTANTS, *DILUENTS):
        times, values = means(source()[1], name, step)
        stamps = np.array(times, dtype="datetime64[us]") + np.timedelta64(step if at_end else 0, "s")
        assert np.array_equal(made.times, stamps)
        assert made.column(name).values == pytest.approx(values, rel=1e-13, abs=1e-13)


def printed(outcome: Outcome) -> list[str]:
    """The lines that the report prints of the inputs."""
    desk = Desk(outcome, issue_time("2026-06-10"), VERSION, load_phrases(None))
    return [line for block in inputs(desk, minute_data=False) for line in block.lines]


def test_a_finer_logger_is_averaged_to_the_coarser(tmp_path: Path) -> None:
    found = read_input(folder(tmp_path / "day", {"fine": FINE, "coarse": COARSE}))
    same(readings(found), 60)
    assert codes(found) == []
    assert "NOx (fine.csv): 10 s averaged to 1 min, coverage 100 %" in found.understood
    assert any("at least 75% of it (common practice)" in line for line in found.understood)
    test = found.record.test if found.record is not None else None
    assert test is not None
    assert test.logging_interval is not None
    assert test.logging_interval.value == 60.0
    assert test.reading_stamp is not None
    assert test.reading_stamp.value == "interval start"


def test_quarter_hours_make_quarter_hours_of_all(tmp_path: Path) -> None:
    """The coarsest is the common interval: a coarse reading is not repeated in each minute."""
    found = read_input(folder(tmp_path / "day", {"fine": FINE, "coarse": Logger(DILUENTS, 900)}))
    same(readings(found), 900)


def test_an_interval_that_was_entered_wins_and_the_coarser_channel_stays_blank(tmp_path: Path) -> None:
    """The rehearsal enters its logging interval of 10 s."""
    made = folder(tmp_path / "day", {"fine": FINE, "coarse": COARSE}, keep=("Logging interval",))
    found = read_input(made)
    own = readings(found)
    assert is_kind(own.column("O2").kinds, ReadingKind.BLANK).all()
    assert own.column("NOx").values == pytest.approx(source()[1].readings.column("NOx").values, rel=0, abs=0)
    said = [p.found for p in found.problems if p.code == "interval-blank"]
    assert len(said) == 2
    assert said[0].endswith("readings stand for more than 10 s each")


@pytest.mark.parametrize(("first", "second"), [(10, 60), (60, 10), (60, 300), (10, 900)])
def test_an_interval_that_changes_inside_a_file(first: int, second: int, tmp_path: Path) -> None:
    """An hour at one interval, then another: the coarser is the common one, and each mean is that of its time."""
    record = source()[1]
    path = folder(tmp_path / "day", {"one": Logger((*POLLUTANTS, *DILUENTS), 10)})
    (path / "one.csv").write_bytes(changing(record, first, second, 60)[0])
    found = read_input(path)
    own, step = readings(found), max(first, second)
    size = step // 10
    for name in (*POLLUTANTS, *DILUENTS):
        values = record.readings.column(name).values
        whole = len(values) // size * size
        truth = np.mean(values[:whole].reshape(-1, size), axis=1)
        made = own.column(name)
        assert is_kind(made.kinds, ReadingKind.NUMBER)[: len(truth)].all()
        assert made.values[: len(truth)] == pytest.approx(truth, rel=1e-12, abs=1e-12)
    words = f"averaged to {step // 60} min, coverage 100 %"
    assert sum(words in line for line in found.understood) == 4


def test_stamps_at_the_start_and_at_the_end_are_brought_together(tmp_path: Path) -> None:
    late = Logger(DILUENTS, 60, stamp="interval end")
    same(readings(read_input(folder(tmp_path / "day", {"fine": FINE, "coarse": late}))), 60, at_end=True)


def test_equal_intervals_of_two_stamps_are_brought_together(tmp_path: Path) -> None:
    late = {"fine": Logger(POLLUTANTS, 60), "coarse": Logger(DILUENTS, 60, stamp="interval end")}
    same(readings(read_input(folder(tmp_path / "day", late))), 60, at_end=True)


def test_a_stamp_that_contradicts_the_sheet_stops(tmp_path: Path) -> None:
    late = {"fine": FINE, "coarse": Logger(DILUENTS, 60, stamp="interval end")}
    found = read_input(folder(tmp_path / "day", late, keep=("Reading stamp",)))
    assert found.record is None
    assert "mapping-against-channels" in codes(found)


def test_one_logger_keeps_its_interval(tmp_path: Path) -> None:
    found = read_input(folder(tmp_path / "day", {"fine": Logger((*POLLUTANTS, *DILUENTS), 10)}))
    for name in (*POLLUTANTS, *DILUENTS):
        assert readings(found).column(name).values.tolist() == source()[1].readings.column(name).values.tolist()
    assert readings(found).made == ""
    assert not any("averaged" in line for line in found.understood)


def test_words_stand_in_the_interval_and_in_the_place_they_came_from(tmp_path: Path) -> None:
    fine = Logger(POLLUTANTS, 10, words=((61, "CAL"), (126, "OVER"), (190, "ND"), (240, ""), (241, "")))
    own = readings(read_input(folder(tmp_path / "day", {"fine": fine, "coarse": COARSE})))
    nox = own.column("NOx")
    assert nox.reading(10).kind is ReadingKind.CALIBRATION
    assert nox.reading(10).text == "CAL"
    assert nox.rows[10] == 63  # the header is line 1
    assert nox.reading(21).kind is ReadingKind.OVER
    assert nox.reading(31).kind is ReadingKind.ERROR
    assert nox.reading(31).text == "ND"
    assert nox.reading(40).kind is ReadingKind.BLANK
    assert nox.reading(40).text == "coverage 67%"
    assert own.column("O2").reading(10).kind is ReadingKind.NUMBER


def test_the_means_of_the_runs_follow_and_say_that_they_are_of_averages(tmp_path: Path) -> None:
    path = folder(tmp_path / "day", {"fine": FINE, "coarse": COARSE})
    outcome = assessed(path, read_input(path))
    run = outcome.record.runs[0]
    for name in ("nox", "o2"):
        times, values = means(source()[1], {"nox": "NOx", "o2": "O2"}[name], 60)
        inside = [v for t, v in zip(times, values, strict=True) if run.start.value <= t < run.end.value]
        assert outcome.ledger[f"run.1.{name}.mean"].value == pytest.approx(np.mean(inside), rel=1e-12)
    assert "30 means over 1 min" in str(outcome.ledger["run.1.nox.readings"].origin)
    assert any("10 s averaged to 1 min" in line for line in printed(outcome))


def test_the_clocks_of_two_loggers_are_compared_and_nothing_is_shifted(tmp_path: Path) -> None:
    for seed in (1, 2, 3):
        late = {"fine": FINE, "coarse": Logger(DILUENTS, 60, behind=540)}
        test = source(seed, 60)
        found = read_input(folder(tmp_path / f"late{seed}", late, test=test))
        (said,) = [p for p in found.problems if p.code == "loggers-differ"]
        assert said.place.file == "fine.csv"
        assert said.found.startswith("the clock of fine.csv stands 9 min ahead (")
        seconds = float(said.found.split("(")[1].split(" s to be added")[0])
        assert abs(seconds + 540.0) <= 60.0
        assert "confidence" in said.found
        first = readings(found).times[0].item()
        assert first == test[1].readings.times[0].item() - np.timedelta64(540, "s").item()


@pytest.mark.parametrize("seed", range(1, 9))
def test_clocks_that_agree_are_not_spoken_of(seed: int, tmp_path: Path) -> None:
    test = source(seed, 60 if seed % 2 else 30)
    found = read_input(folder(tmp_path / "day", {"fine": FINE, "coarse": COARSE}, test=test))
    assert "loggers-differ" not in codes(found)


CLOCK = """
[[clock]]
file = "coarse.csv"
add_seconds = {seconds}
said_by = "A. Nobody, by the clock of the control room"
"""


def test_a_correction_that_is_entered_is_applied_and_printed(tmp_path: Path) -> None:
    path = folder(tmp_path / "day", {"fine": FINE, "coarse": Logger(DILUENTS, 60, behind=540)})
    (path / "folder.toml").write_text(CLOCK.format(seconds=540), encoding="utf-8")
    found = read_input(path)
    same(readings(found), 60)
    assert "loggers-differ" not in codes(found)
    words = "coarse.csv: +540 s added to every time stamp; said by A. Nobody, by the clock of the control room"
    assert words in found.understood
    outcome = assessed(path, found)
    assert not any(p.code == "clock-differs" for p in outcome.problems)
    assert [source.name for source in outcome.record.sources][-1] == "folder.toml"
    assert words in printed(outcome)


def test_the_workbook_itself_may_have_its_clock_corrected(tmp_path: Path) -> None:
    content, record = source()
    (tmp_path / "field.xlsx").write_bytes(content)
    entry = CLOCK.format(seconds=-60).replace("coarse.csv", "field.xlsx")
    (tmp_path / "folder.toml").write_text(entry, encoding="utf-8")
    own = readings(read_input(tmp_path))
    assert np.array_equal(own.times, record.readings.times - np.timedelta64(60, "s"))


@pytest.mark.parametrize(
    "entry",
    [
        CLOCK.format(seconds=100_000),
        CLOCK.format(seconds="true"),
        CLOCK.format(seconds=60).replace("coarse.csv", "other.csv"),
        CLOCK.format(seconds=60).replace("A. Nobody, by the clock of the control room", " "),
        CLOCK.format(seconds=60) * 2,
        '[[clock]]\nfile = "coarse.csv"\n',
        '[clock]\nfile = "coarse.csv"\n',
        "clock = 3\n",
    ],
)
def test_a_correction_that_cannot_be_stops(entry: str, tmp_path: Path) -> None:
    path = folder(tmp_path / "day", {"fine": FINE, "coarse": COARSE})
    (path / "folder.toml").write_text(entry, encoding="utf-8")
    found = read_input(path)
    assert found.record is None
    assert codes(found) == ["folder-inputs"]
    assert found.problems[0].place.file == "folder.toml"
