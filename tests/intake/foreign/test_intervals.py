"""Mixed logging intervals on one: exact means weighted by time, coverage, words, stamps at the start and at the end."""

from __future__ import annotations

import numpy as np
import pytest

from reporter.intake.foreign.intervals import (
    LEAST_COVERAGE,
    SECOND,
    Averages,
    Clockwork,
    Floats,
    Series,
    Ticks,
    average,
    clockwork,
    common_interval,
    intervals_of,
    lengths,
)
from reporter.record import ReadingKind

KINDS = tuple(ReadingKind)
NINE = 9 * 3600


def ticks(*seconds: float) -> Ticks:
    return np.array([round((NINE + one) * SECOND) for one in seconds], dtype=np.int64)


def series(values: list[float | str], step: float, begin: float = 0.0) -> Series:
    """Readings one after the other: numbers, and words by their kind."""
    start = ticks(*(begin + step * place for place in range(len(values))))
    numbers = [value if isinstance(value, float) else np.nan for value in values]
    kinds = [ReadingKind.NUMBER if isinstance(value, float) else ReadingKind(value) for value in values]
    return Series(
        start,
        start + round(step * SECOND),
        np.array(numbers, dtype=np.float64),
        np.array([KINDS.index(kind) for kind in kinds], dtype=np.uint8),
    )


def minutes(count: int, step: float = 60.0) -> Clockwork:
    return Clockwork(NINE * SECOND, round(step * SECOND), count)


def kinds(made: Averages) -> list[str]:
    return [KINDS[code].value for code in made.kind]


def test_seconds_become_the_mean_of_each_minute_exactly() -> None:
    values = [float(place % 7) for place in range(180)]
    made = average(series(list(values), 1.0), minutes(3))
    for place in range(3):
        assert made.value[place] == sum(values[60 * place : 60 * place + 60]) / 60
    assert made.coverage.tolist() == [1.0, 1.0, 1.0]
    assert made.row.tolist() == [0, 60, 120]


def test_an_interval_that_straddles_two_gives_to_each_by_its_time() -> None:
    """Rows from 09:00:30: minute two is half of the first value and half of the second."""
    made = average(series([10.0, 20.0, 40.0], 60.0, begin=30.0), minutes(4))
    assert made.value[1] == 15.0
    assert made.value[2] == 30.0
    assert made.coverage.tolist() == [0.5, 1.0, 1.0, 0.5]
    assert kinds(made) == ["blank", "number", "number", "blank"]
    assert made.short == 2


def test_the_mean_is_weighted_by_time_where_the_interval_changes() -> None:
    """30 s at 1 s of the value 2, then three rows of 10 s of the value 8: (30*2 + 30*8)/60 = 5."""
    first, second = series([2.0] * 30, 1.0), series([8.0] * 3, 10.0, begin=30.0)
    both = Series(*(np.concatenate([getattr(first, n), getattr(second, n)]) for n in ("begin", "end", "value", "kind")))
    made = average(both, minutes(1))
    assert made.value[0] == 5.0


@pytest.mark.parametrize(("filled", "kind"), [(45, "number"), (44, "blank")])
def test_too_little_coverage_leaves_the_value_blank(filled: int, kind: str) -> None:
    made = average(series([*[3.0] * filled, *["blank"] * (60 - filled)], 1.0), minutes(1))
    assert made.coverage[0] == filled / 60
    assert (made.coverage[0] >= LEAST_COVERAGE) == (kind == "number")
    assert kinds(made) == [kind]


@pytest.mark.parametrize(
    ("inside", "kind"),
    [
        (["calibration"], "calibration"),
        (["over range"], "over range"),
        (["over range", "calibration"], "calibration"),
        (["not detected"], "error value"),
        (["error value"], "number"),
        (["error value"] * 16, "error value"),
    ],
)
def test_a_word_is_never_averaged_away(inside: list[str], kind: str) -> None:
    made = average(series([*[3.0] * (60 - len(inside)), *inside], 1.0), minutes(1))
    assert kinds(made) == [kind]
    assert np.isnan(made.value[0]) == (kind != "number")
    if kind not in ("number", "error value"):
        assert KINDS[series([3.0, *inside], 1.0).kind[1 + inside.index(kind)]].value == kind
        assert made.row[0] == 60 - len(inside) + inside.index(kind)


def test_not_detected_throughout_stays_so_and_bounds_are_averaged() -> None:
    nothing = average(series(["not detected"] * 60, 1.0), minutes(1))
    assert kinds(nothing) == ["not detected"]
    bounded = series(["below a stated value"] * 60, 1.0)
    bounded.value[:30], bounded.value[30:] = 0.5, 1.5
    made = average(bounded, minutes(1))
    assert kinds(made) == ["below a stated value"]
    assert made.value[0] == 1.0


def test_an_over_range_with_its_bound_makes_a_lower_bound() -> None:
    part = series([10.0] * 30 + ["over range"] * 30, 1.0)
    part.value[30:] = 50.0
    assert average(part, minutes(1)).value[0] == 30.0


def test_a_coarse_reading_is_never_repeated_on_a_finer_interval() -> None:
    made = average(series([7.0, 8.0], 900.0), minutes(30))
    assert set(kinds(made)) == {"blank"}
    assert made.too_long == 2
    assert not np.isfinite(made.value).any()


def test_the_mean_over_all_is_the_same_before_and_after() -> None:
    """The integral of the readings over time is kept, whatever the two intervals."""
    values: list[float | str] = [float((37 * place) % 101) for place in range(1200)]
    truth = sum(value for value in values if isinstance(value, float)) / len(values)
    for step in (60.0, 120.0, 300.0, 600.0):
        made = average(series(values, 1.0), minutes(round(1200 / step), step))
        assert float(made.value.mean()) == pytest.approx(truth, rel=1e-14)


def stamped(steps: list[float]) -> Ticks:
    return ticks(0.0, *np.cumsum(steps).tolist())


def test_the_interval_of_each_row_by_stamps_at_the_end_and_at_the_start() -> None:
    stamps = stamped([60.0] * 5 + [900.0] * 4)
    end, start = lengths(stamps, at_start=False) // SECOND, lengths(stamps, at_start=True) // SECOND
    assert end.tolist() == [60] * 6 + [900] * 4
    assert start.tolist() == [60] * 5 + [900] * 5


def test_a_gap_is_no_interval() -> None:
    stamps = stamped([60.0] * 4 + [1200.0] + [60.0] * 4)
    for at_start in (False, True):
        assert set((lengths(stamps, at_start=at_start) // SECOND).tolist()) == {60}
    assert intervals_of(stamps) == (60.0,)


def test_rows_that_are_too_few_to_tell() -> None:
    assert lengths(ticks(), at_start=False).tolist() == []
    assert (lengths(ticks(0.0, 60.0), at_start=False) // SECOND).tolist() == [60, 60]
    assert intervals_of(ticks(0.0)) == ()


def test_intervals_are_found_in_their_order_and_jitter_is_none() -> None:
    assert intervals_of(stamped([1.0] * 10 + [10.0] * 10)) == (1.0, 10.0)
    assert intervals_of(stamped([59.8, 60.2, 60.1, 59.9] * 5)) == (60.0,)


def test_the_common_interval_is_the_coarsest_that_fits_the_clock() -> None:
    assert common_interval([1.0, 900.0, 60.0]) == 900.0
    assert common_interval([1.0, 7.0]) == 10.0


def test_common_intervals_begin_on_the_clock() -> None:
    grid = clockwork(NINE * SECOND + 70 * SECOND, NINE * SECOND + 500 * SECOND, 60 * SECOND)
    assert grid.first == (NINE + 60) * SECOND
    assert grid.count == 8
    ends: Ticks = grid.ends
    assert ends[0] == (NINE + 120) * SECOND
    floats: Floats = ends / SECOND
    assert floats[-1] == NINE + 540
