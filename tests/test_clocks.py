"""Estimates of differing clocks against shifts that were put in, and silence where nothing can be told."""

from __future__ import annotations

import numpy as np
import pytest

from reporter.clocks import Floats, Known, Log, lag_between, shift_of_gases

MINUTE, NINE = 60.0, 9 * 3600.0
#: What the analyzer was given, from so many minutes after nine: (value, minutes).
DAY = ((0.0, 4), (80.0, 4), (40.0, 4), (25.0, 40), (0.0, 4), (40.0, 4), (24.0, 40), (0.0, 4), (40.0, 4), (26.0, 40))


def log(behind: float = 0.0) -> Log:
    """The day in minutes, stamped by a clock that is so many seconds behind."""
    value = np.repeat([one for one, _ in DAY], [minutes for _, minutes in DAY]).astype(np.float64)
    begin = NINE + MINUTE * np.arange(len(value)) - behind
    return Log(begin, begin + MINUTE, value)


def entered(made: Log) -> list[Known]:
    """The seven gases, each entered at its end by the right clock."""
    ends = np.cumsum([minutes for _, minutes in DAY])
    gases = [place for place, (_, minutes) in enumerate(DAY) if minutes == 4]
    return [Known(NINE + MINUTE * float(ends[place]), DAY[place][0], 1.6, made) for place in gases]


@pytest.mark.parametrize("behind", [0.0, 540.0, -540.0, 3600.0, 13 * 3600.0, -90.0])
def test_the_shift_of_the_gases_is_found(behind: float) -> None:
    found = shift_of_gases(entered(log(behind)), MINUTE)
    assert found is not None
    assert abs(found.seconds + behind) <= MINUTE
    assert found.found == found.total == 7
    assert found.first <= found.seconds <= found.last
    assert found.confidence == (found.found - found.elsewhere) / found.total


def test_how_many_readings_stand_in_the_log_as_stamped() -> None:
    assert (found := shift_of_gases(entered(log()), MINUTE)) is not None
    assert found.as_stamped == 7
    assert (found := shift_of_gases(entered(log(540.0)), MINUTE)) is not None
    assert found.as_stamped == 0


def test_a_log_that_shows_the_gases_nowhere_tells_nothing() -> None:
    made = log()
    flat = Log(made.begin, made.end, np.full(len(made.value), 25.0))
    assert shift_of_gases(entered(flat), MINUTE) is None


def test_gases_like_the_stack_tell_nothing() -> None:
    made = log()
    alike = [Known(one.time, 25.0, 2.0, made) for one in entered(made)]
    assert shift_of_gases(alike, MINUTE) is None


def test_too_few_gases_tell_nothing() -> None:
    assert shift_of_gases(entered(log())[:4], MINUTE) is None
    assert shift_of_gases([], MINUTE) is None


def test_the_value_of_a_time_is_that_of_the_interval_it_ends() -> None:
    made = Log(np.array([0.0, 60.0]), np.array([60.0, 120.0]), np.array([1.0, 2.0]))
    found = made.at(np.array([0.0, 1.0, 60.0, 61.0, 120.0, 121.0]))
    assert np.array_equal(found, [np.nan, 1.0, 1.0, 2.0, 2.0, np.nan], equal_nan=True)


def wandering(seed: int, count: int = 200) -> Floats:
    """Steps at random times to random heights."""
    numbers = np.random.default_rng(seed)
    value = np.repeat(numbers.normal(size=20), count // 20)
    return np.asarray(value + numbers.normal(scale=0.05, size=count), dtype=np.float64)


@pytest.mark.parametrize("lag", [-12, 0, 7, 25])
@pytest.mark.parametrize("sign", [1.0, -3.0])
def test_a_lag_between_two_series_is_found(lag: int, sign: float) -> None:
    one = wandering(5, 260)
    two = sign * one + 11.0
    moved = np.concatenate([np.full(lag, np.nan), two[: 260 - lag]]) if lag >= 0 else two[-lag:]
    size = len(moved)
    found = lag_between(one[:size], moved[:size], MINUTE, 3600.0)
    assert found is not None
    assert found.seconds == lag * MINUTE
    assert np.sign(found.correlation) == np.sign(sign)
    assert found.confidence > 0.15


def test_series_that_have_nothing_to_do_with_each_other_tell_nothing() -> None:
    for seed in range(30):
        assert lag_between(wandering(seed), wandering(seed + 1000), MINUTE, 3600.0) is None


def test_a_slow_wave_tells_nothing() -> None:
    """Its correlation is high at many lags."""
    wave = np.sin(np.arange(300) * 2 * np.pi / 40)
    assert lag_between(wave, wave, MINUTE, 3600.0) is None


def test_few_points_tell_nothing() -> None:
    assert lag_between(wandering(1)[:30], wandering(1)[:30], MINUTE, 3600.0) is None
    nothing = np.full(200, np.nan)
    assert lag_between(nothing, wandering(1), MINUTE, 3600.0) is None
