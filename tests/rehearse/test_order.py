"""What may be ordered, what is refused, and that the same order gives the same bytes."""

from __future__ import annotations

import io
import json
import tomllib
from pathlib import Path
from typing import Any

import pytest
from rehearsals import GAS, WOOD, made

from reporter import cli
from reporter.cli import OK, UNWRITTEN, USAGE, main
from reporter.errors import RecordError
from reporter.rehearse import Fault, Order, Profile, rehearse
from reporter.rehearse.order import INTERVALS
from reporter.resources import table_text


def run(*arguments: str | Path) -> tuple[int, str, str]:
    out, err = io.StringIO(), io.StringIO()
    code = main([str(a) for a in arguments], out, err)
    return code, out.getvalue(), err.getvalue()


def test_the_same_order_gives_the_same_bytes_and_another_seed_others() -> None:
    first, second, other = rehearse(Order()), rehearse(Order()), rehearse(Order(seed=2))
    assert first.workbook == second.workbook
    assert first.truth == second.truth
    assert first.workbook != other.workbook


def test_a_fault_of_one_run_leaves_the_others_as_they_were() -> None:
    """What is drawn does not depend on what else is drawn: run 1 reads the same with and without a leak in run 2."""
    clean, leak = made(Order())[1], made(Order(fault=Fault.AIR_LEAK))[1]
    for key in ("nox.mean", "o2.mean", "moisture", "heat_input", "flow.dry_standard"):
        assert clean.ledger[f"run.1.{key}"].value == leak.ledger[f"run.1.{key}"].value, key


@pytest.mark.parametrize(
    ("entries", "words"),
    [
        ({"fuel": "unicorn"}, "unicorn"),
        ({"fuel": "C 87 H 13"}, "heating value"),
        ({"gases": ()}, "O2 or CO2"),
        ({"gases": ("NOx", "CO")}, "O2 or CO2"),
        ({"gases": ("O2", "CO2")}, "pollutant"),
        ({"gases": ("NOx", "NO2", "O2")}, "NO2"),
        ({"gases": ("NOx", "nox", "O2")}, "twice"),
        ({"runs": 0}, "number of runs"),
        ({"run_minutes": 5}, "length of a run"),
        ({"oxygen": 20.9}, "oxygen"),
        ({"interval": 7}, "interval of 7 s"),
        ({"interval": 900, "run_minutes": 20}, "whole number"),
    ],
)
def test_orders_that_are_refused(entries: dict[str, Any], words: str) -> None:
    with pytest.raises(RecordError, match=words):
        Order(**entries)


def test_a_day_that_does_not_hold_the_runs_is_refused() -> None:
    with pytest.raises(RecordError, match="one day holds"):
        rehearse(Order(runs=9, run_minutes=240))


@pytest.mark.parametrize("interval", [i for i in INTERVALS if i not in (1, 2, 3, 4)])
def test_every_interval_fills_the_runs(interval: int) -> None:
    order = Order(fuel=GAS, gases=("NOx", "O2"), runs=1, run_minutes=60, interval=interval)
    outcome = made(order)[1]
    assert outcome.ledger["run.1.nox.count"].value == 3600 / interval
    assert not {p.code for p in outcome.problems} & {"coverage-low", "interval-differs"}


def test_response_after_a_change_of_gas_is_of_first_order() -> None:
    """Zero gas after ambient air: after one time constant exp(-1) of the change is left (a definition)."""
    rehearsal, outcome = made(Order(fuel=GAS, gases=("NOx", "O2"), interval=1, runs=1, run_minutes=15, seed=5))
    analyzer = next(one for one in rehearsal.truth["analyzers"] if one["channel"] == "O2")
    seconds = analyzer["time_constant_seconds"] * 0.5  # gas goes direct
    column = outcome.record.readings.index("O2")
    readings = [float(row.readings[column].value or 0.0) for row in outcome.record.readings.rows]
    start = 5 * 60
    before, after = sum(readings[start - 60 : start]) / 60, sum(readings[start + 180 : start + 240]) / 60
    left = (readings[start + round(seconds)] - after) / (before - after)
    assert left == pytest.approx(0.368, abs=0.05)


def test_the_command_writes_both_files_and_overwrites_neither(tmp_path: Path) -> None:
    book, truth = tmp_path / "dry.xlsx", tmp_path / "dry.json"
    arguments = ("rehearse", book, "--fuel", WOOD, "--gases", "NOx, O2", "--runs", "1", "--run-minutes", "30")
    more = ("--units", "SI", "--oxygen", "8", "--load-profile", "ramp", "--interval", "30", "--seed", "4")
    code, out, err = run(*arguments, *more, "--fault", "wrong-fuel", "--truth", truth)
    assert (code, err) == (OK, "")
    assert "SYNTHETIC" in out
    told = json.loads(truth.read_text(encoding="utf-8"))
    assert told["synthetic"] == "yes, made by fluebook rehearse, seed 4"
    assert told["order"]["load_profile"] == "ramp"
    assert told["fault"]["name"] == "wrong-fuel"
    before = book.read_bytes()
    code, _, err = run(*arguments)
    assert code == UNWRITTEN
    assert "dry.xlsx" in err
    assert book.read_bytes() == before


@pytest.mark.parametrize(
    "arguments",
    [("dry.xls",), ("dry.xlsx", "--truth", "dry.xlsx"), ("dry.xlsx", "--fuel", "unicorn"), ("dry.xlsx", "--runs", "0")],
)
def test_wrong_commands_are_usage_errors_and_write_nothing(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, arguments: tuple[str, ...]
) -> None:
    monkeypatch.chdir(tmp_path)
    code, _, err = run("rehearse", *arguments)
    assert code == USAGE
    assert err
    assert list(tmp_path.iterdir()) == []


def test_the_command_line_offers_every_fault_and_profile() -> None:
    assert {fault.value for fault in Fault} == set(cli._FAULTS)
    assert {profile.value for profile in Profile} == set(cli._PROFILES)
    table = tomllib.loads(table_text("rehearse.toml"))
    assert set(table["fault"]) == set(cli._FAULTS)
    assert set(table["load"]) == set(cli._PROFILES)
