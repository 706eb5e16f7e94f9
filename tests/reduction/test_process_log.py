"""Means of the process log: shown with one decimal more than was logged."""

from __future__ import annotations

from reporter.output.numbers import shown
from reporter.record import ProcessLog
from reporter.units import read_unit
from tests.record_factory import assessed, at


def test_a_mean_has_one_decimal_more_than_its_readings() -> None:
    """Steam at 46.1, 46.2 and 46.2 t/h and a temperature of 309, 310 and 310 °F: 46.17 and 309.7."""
    times = tuple(at(clock) for clock in ("08:05", "08:15", "08:25"))
    log = ProcessLog(
        ("Steam flow", "Stack temperature"),
        (read_unit("t/h"), read_unit("°F")),
        times,
        ((46.1, 309.0), (46.2, 310.0), (46.2, 310.0)),
        letters=("B", "C"),
        rows=(2, 3, 4),
    )
    ledger = assessed(process=log).ledger
    assert shown(ledger["run.1.process.steam_flow"]) == "46.17"
    assert shown(ledger["run.1.process.stack_temperature"]) == "309.7"
