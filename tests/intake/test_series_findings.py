"""A quiet series gives no finding, whatever its noise; each fault put into one is found where it stands."""

from __future__ import annotations

from datetime import datetime, timedelta

import numpy as np
import pytest

from reporter.intake.series_findings import Finding, Trace, Values, findings

COUNT = 120
START = datetime(2026, 4, 20, 9, 0)
TIMES = [START + timedelta(minutes=k) for k in range(COUNT)]


def quiet(seed: int = 1, digits: int = 2) -> dict[str, Values]:
    """Noise about a level that wanders a little, as an analyzer shows it."""
    chance = np.random.default_rng(seed)
    levels = {"NOx": (24.4, 0.4), "CO": (40.0, 3.0), "O2": (4.5, 0.08), "CO2": (9.2, 0.06)}
    return {
        name: np.round(level + np.cumsum(chance.normal(0, noise / 8, COUNT)) + chance.normal(0, noise, COUNT), digits)
        for name, (level, noise) in levels.items()
    }


def found(
    series: dict[str, Values], spans: list[tuple[int, int]] | None = None, times: list[datetime] = TIMES
) -> list[Finding]:
    traces = [Trace(name, name.lower(), values, (50.0,) if name == "NOx" else ()) for name, values in series.items()]
    return findings(np.array(times, dtype="datetime64[us]"), traces, [(0, COUNT)] if spans is None else spans)


@pytest.mark.parametrize("digits", [0, 1, 2])
@pytest.mark.parametrize("seed", range(40))
def test_a_quiet_series_gives_no_finding(seed: int, digits: int) -> None:
    series = quiet(seed, 2)
    series |= {name: np.round(series[name], digits) for name in ("NOx", "CO")}
    assert found(series) == []


@pytest.mark.parametrize(
    ("name", "where", "value", "code"),
    [
        ("O2", slice(30, 44), 4.5, "stuck-readings"),
        ("NOx", slice(30, 36), 60.0, "rail-readings"),
        ("NOx", slice(30, 36), 1.0, "rail-readings"),
        ("CO", slice(50, 51), 400.0, "spike-reading"),
        ("CO", slice(50, 52), 400.0, "spike-reading"),
    ],
)
def test_a_fault_of_one_channel(name: str, where: slice, value: float, code: str) -> None:
    series = quiet()
    series[name][where] = value
    made = found(series)
    assert [(f.code, f.channel, f.first, f.last) for f in made] == [(code, name, where.start, where.stop - 1)]


@pytest.mark.parametrize("factor", [10.0, 0.1, 100.0])
def test_a_range_that_was_switched(factor: float) -> None:
    series = quiet()
    series["NOx"][60:] *= factor
    made = [f for f in found(series) if f.code != "rail-readings"]
    assert [(f.code, f.channel, f.first) for f in made] == [("range-switch", "NOx", 60)]


def test_a_change_of_load_is_no_switched_range() -> None:
    series = quiet()
    for name in ("NOx", "CO", "O2"):
        series[name][60:] *= 10.0 if name == "NOx" else 1.5
    assert [f for f in found(series) if f.code == "range-switch"] == []


@pytest.mark.parametrize(
    ("values", "words"),
    [
        ({"NOx": 0.05, "CO": 0.1, "O2": 20.9, "CO2": 0.05}, "ambient air"),
        ({"NOx": 0.05, "CO": 0.1, "O2": 0.02, "CO2": 0.02}, "zero gas"),
        ({"NOx": 50.3, "CO": 0.1, "O2": 0.02, "CO2": 0.02}, "a plateau at 50"),
    ],
)
def test_other_gas_than_flue_gas(values: dict[str, float], words: str) -> None:
    series = quiet()
    for name, value in values.items():
        series[name][70:75] = value
    made = found(series)
    assert {(f.code, f.first, f.last) for f in made} == {("gas-in-run", 70, 74)}
    assert words in made[0].words
    assert found(series, [(0, 70), (75, COUNT)]) == []


def test_an_interval_that_changes_and_a_gap_that_is_none() -> None:
    times = [t if k < 60 else TIMES[59] + timedelta(seconds=10 * (k - 59)) for k, t in enumerate(TIMES)]
    made = found(quiet(), times=times)
    assert [(f.code, f.words) for f in made] == [("interval-changes", "a reading each 60 s, then each 10 s")]
    gap = [t if k < 60 else t + timedelta(minutes=30) for k, t in enumerate(TIMES)]
    assert found(quiet(), times=gap) == []


def test_words_among_the_readings_are_no_numbers() -> None:
    series = quiet()
    for values in series.values():
        values[20:60:3] = np.nan
    assert found(series) == []
    assert found({name: np.full(COUNT, np.nan) for name in series}) == []
