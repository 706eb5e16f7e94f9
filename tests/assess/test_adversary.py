"""Random records of every kind of trouble: the assessment never breaks, and what it states holds together."""

from __future__ import annotations

import math
import random
from dataclasses import replace
from datetime import date, timedelta
from typing import Any

import pytest

from reporter.ledger import FromEquation
from reporter.outcome import Outcome, RunState
from reporter.record import Given, Record
from tests.record_factory import (
    DAY,
    assess,
    at,
    calibrations,
    channel,
    component,
    cylinders,
    event,
    fuel,
    fuel_use,
    identity,
    limit,
    number,
    readings,
    record,
    run,
    train,
)

WORDS = ("", "ND", "<0.4", "OVER", ">90", "CAL", "ERR")
UNITS = ("ppm", "%", "mg/m3", "mg/Nm3", "lb/MMBtu", "ng/J", "lb/h", "kg/h", "lb/MWh", "g/kWh", "µg/m3")
ROUNDING = (None, "none", "half up", "half even to 1 decimal", "truncated to 2 significant digits", "as usual")
HEATS = ("Btu/ft3", "Btu/lb", "MJ/m3", "kJ/kg", "Btu/gal", "MJ/L")
AMOUNTS = ("ft3/h", "lb/h", "gal/h", "MMBtu/h", "kg/h", "m3/h", "MW")


def _maybe(rng: random.Random, value: Any, share: float = 0.5) -> Any:
    return value if rng.random() < share else None


def _size(rng: random.Random) -> float:
    return rng.choice((0.0, -0.5, 1e-6, 0.1, 5.0, 20.89, 20.9, 21.5, 40.0, 99.0, 100.0, 101.0, 1e6))


def _channels(rng: random.Random) -> tuple[Any, ...]:
    made = []
    for name in rng.sample(["NOx", "CO", "O2", "CO2"], rng.randint(1, 4)):
        unit = rng.choice(("ppm", "%")) if name in ("O2", "CO2") else rng.choice(("ppm", "%", "mg/m3", "mg/Nm3"))
        method = _maybe(rng, rng.choice(("Method 7E", "3A", "25A", "EN 14792")), 0.3)
        more = {
            "method": method,
            "calibration_span": _maybe(rng, number(_size(rng)), 0.3),
            "system": _maybe(rng, rng.choice(("extractive", "dilution", "in situ")), 0.3),
            "dilution_factor": _maybe(rng, number(abs(_size(rng))), 0.3),
            "detection_limit": _maybe(rng, number(0.5), 0.3),
            "standard_uncertainty": _maybe(rng, number(0.1), 0.3),
        }
        made.append(channel(name, unit=rng.choice(("", unit)), wet=rng.random() < 0.3, **more))
    if rng.random() < 0.2:
        made.append(channel("spare", gas="nox", unit="ppm"))
    return tuple(made)


def _readings(rng: random.Random, names: tuple[str, ...]) -> Any:
    usual = {"NOx": 40.0, "CO": 10.0, "O2": 5.0, "CO2": 9.0, "spare": 41.0}

    def of(name: str) -> Any:
        base = usual[name] if rng.random() < 0.6 else _size(rng)
        spoiled = rng.random() < 0.3
        return lambda time: rng.choice(WORDS) if spoiled and rng.random() < 0.1 else base + rng.gauss(0.0, 0.1)

    step = rng.choice((60.0, 60.0, 15.0, 300.0, 37.0))
    return readings({name: of(name) for name in names}, step=step)


def _calibrations(rng: random.Random) -> tuple[Any, ...]:
    rows = []
    for row in calibrations():
        if rng.random() < 0.04:
            continue
        shift = rng.choice((0.0, 0.0, 0.0, 0.3, -0.6, 4.0, 12.0))
        row = replace(row, reading=number(row.reading.value + shift))
        if rng.random() < 0.03:
            row = replace(row, time=replace(row.time, value=row.time.value + timedelta(minutes=rng.randint(-70, 70))))
        if rng.random() < 0.05:
            row = replace(row, cylinder=None, certified_value=_maybe(rng, number(_size(rng))))
        rows.append(row)
    return tuple(rows)


def _cylinders(rng: random.Random) -> tuple[Any, ...]:
    made = []
    for bottle in cylinders():
        if rng.random() < 0.05:
            continue
        if rng.random() < 0.1:
            bottle = replace(bottle, certified_value=number(abs(_size(rng))))
        if rng.random() < 0.05:
            bottle = replace(bottle, expires=_maybe(rng, Given(date(2024, 1, 1))))
        made.append(bottle)
    return tuple(made)


def _runs(rng: random.Random) -> tuple[Any, ...]:
    def more() -> dict[str, Any]:
        sources = ("Method 4", "saturation", "fuel calculation", "assumed")
        return {
            "moisture": _maybe(rng, number(rng.choice((0.0, 5.0, 16.0, 99.9, 100.0)), "%")),
            "moisture_source": _maybe(rng, rng.choice(sources)),
            "ambient_moisture": _maybe(rng, number(1.0, "%"), 0.2),
            "relative_humidity": _maybe(rng, number(50.0, "%")),
            "ambient_temperature": _maybe(rng, number(rng.choice((10.0, 70.0)), "°F")),
            "barometric_pressure": _maybe(rng, number(rng.choice((0.0, 29.9)), "inHg")),
            "static_pressure": _maybe(rng, number(rng.choice((-0.5, -400.0)), "inH2O")),
            "stack_temperature": _maybe(rng, number(rng.choice((140.0, 212.0, 350.0, -460.0)), "°F")),
            "stack_flow": _maybe(
                rng, number(rng.choice((0.0, 2e4)), rng.choice(("ft3/min", "Nm3/h", "dscfh", "acfm")))
            ),
            "flow_basis": _maybe(rng, rng.choice(("dry standard", "wet standard", "actual"))),
            "flow_standard_temperature": _maybe(rng, number(60.0, "°F")),
            "flow_standard_pressure": _maybe(rng, number(29.92, "inHg")),
            "heat_input": _maybe(rng, number(rng.choice((0.0, 50.0)), rng.choice(("MMBtu/h", "MW")))),
            "output": _maybe(rng, number(rng.choice((0.0, 4.0)), "MW")),
            "load": _maybe(rng, number(42.0, rng.choice(("", "MW")))),
            "load_basis": _maybe(rng, number(rng.choice((0.0, 50.0)), rng.choice(("", "klb/h")))),
            "installed_monitor_mean": _maybe(rng, number(41.0, "ppm")),
            "excluded_because": _maybe(rng, "trip", 0.1),
            "approval_reference": _maybe(rng, "letter 7", 0.1),
            "group": _maybe(rng, rng.choice(("A", "B")), 0.2),
        }

    times = (("1", "08:00", "08:30"), ("2", "09:00", "09:30"), ("3", "10:00", rng.choice(("10:20", "10:30"))))
    return tuple(run(*row, **more()) for row in times[: rng.randint(1, 3)])


def _fuels(rng: random.Random) -> dict[str, Any]:
    names = ("natural gas", "Distillate Oil", "mill gas", "wood")
    rows, gas = [], []
    for name in rng.sample(names, rng.randint(0, 2)):
        source = rng.choice(("published", "analysis", "gas analysis"))
        parts = {
            part: number(size, "%")
            for part, size in (("carbon", 50.0), ("hydrogen", 6.0), ("oxygen", 40.0), ("water", 20.0), ("ash", 1.0))
            if rng.random() < 0.7
        }
        heat = _maybe(rng, number(rng.choice((0.0, 9000.0)), rng.choice(("Btu/lb", "kJ/kg", "MJ/m3"))))
        share = _maybe(rng, number(rng.choice((40.0, 60.0, 100.0)), "%"))
        rows.append(fuel(name, source, gross_heating_value=heat, share_of_heat_input=share, **parts))
        if rng.random() < 0.5:
            gas += [component(name, "CH4", rng.choice((90.0, 95.0))), component(name, "N2", 10.0)]
    uses = []
    for _ in range(rng.randint(0, 3) if rows else 0):
        amount = {"rate": number(rng.choice((0.0, 1e4)), rng.choice(AMOUNTS))}
        if rng.random() < 0.4:
            unit = rng.choice(("ft3", "gal", "lb", "therm"))
            amount = {"meter_start": number(10.0, unit), "meter_end": number(rng.choice((5.0, 500.0)), unit)}
        uses.append(
            fuel_use(
                rng.choice(("1", "2")),
                rng.choice(rows).fuel.value,
                heating_value=_maybe(rng, number(1000.0, rng.choice(HEATS)), 0.8),
                heating_value_kind=_maybe(rng, rng.choice(("gross", "net"))),
                **amount,
            )
        )
    return {"fuels": tuple(rows), "fuel_gas": tuple(gas), "fuel_use": tuple(uses)}


def _limits(rng: random.Random) -> tuple[Any, ...]:
    made = []
    for place in range(rng.randint(0, 5)):
        more = {
            "reference_oxygen": _maybe(rng, number(rng.choice((0.0, 3.0, 15.0, 20.9)), "%")),
            "reference_carbon_dioxide": _maybe(rng, number(12.0, "%"), 0.2),
            "oxygen_constant": _maybe(rng, number(rng.choice((20.9, 21.0)), "%")),
            "diluent": _maybe(rng, rng.choice(("O2", "CO2")), 0.3),
            "relation": _maybe(rng, rng.choice(("at most", "less than", "at least")), 0.8),
            "averaging": _maybe(rng, rng.choice(("mean of runs", "each run"))),
            "rounding": rng.choice(ROUNDING),
            "runs_required": _maybe(rng, number(float(rng.randint(1, 4)))),
            "minimum_run_length": _maybe(rng, number(rng.choice((25.0, 60.0)), "min"), 0.3),
            "mass_rate_route": _maybe(rng, rng.choice(("heat input", "flow"))),
            "factor_table": _maybe(rng, rng.choice(("60.45(f)", "19-2", "mine")), 0.3),
            "expressed_as": _maybe(rng, rng.choice(("NO2", "NO", "CO", "coal")), 0.3),
            "standard_temperature": _maybe(rng, number(32.0, "°F"), 0.3),
            "standard_pressure": _maybe(rng, number(29.92, "inHg"), 0.3),
            "citation": _maybe(rng, "condition 2", 0.9),
            "in_force_from": _maybe(rng, rng.choice((date(2020, 1, 1), date(2030, 1, 1))), 0.9),
            "applies_when": _maybe(rng, "A"),
            "wet": rng.random() < 0.2,
        }
        size = rng.choice((0.0, 0.1, 50.0, 300.0))
        made.append(limit(f"L{place}", rng.choice(("NOx", "CO", "SO2", "O2")), size, rng.choice(UNITS), **more))
    return tuple(made)


def _record(seed: int) -> Record:
    rng = random.Random(seed)
    channels = _channels(rng)
    trains = (
        train(
            "1",
            meter_volume_end=number(rng.choice((0.0, 30.0)), "ft3"),
            meter_temperature=_maybe(rng, number(80.0, "°F"), 0.9),
            meter_pressure=number(29.5, "inHg"),
            water_collected=number(rng.choice((0.0, 90.0)), rng.choice(("g", "mL"))),
        ),
    )
    events = (
        event("08:35", rng.choice(("NOx adjusted", "analyzers re-zeroed", "lunch"))),
        event("08:10", "pause", until=rng.choice(("", "08:12", "08:29")), excluded=rng.random() < 0.5),
    )
    return record(
        test=identity(
            unit_system=rng.choice(("US", "SI")),
            not_detected_counted_as=_maybe(rng, rng.choice(("zero", "half", "full"))),
            reading_stamp=_maybe(rng, rng.choice(("interval start", "interval end"))),
            logging_interval=_maybe(rng, number(1.0, "min")),
        ),
        channels=channels,
        readings=_readings(rng, tuple(c.channel.value for c in channels)),
        calibrations=_calibrations(rng),
        cylinders=_cylinders(rng),
        runs=_runs(rng),
        moisture=trains if rng.random() < 0.3 else (),
        events=events if rng.random() < 0.5 else (),
        limits=_limits(rng),
        **_fuels(rng),
    )


@pytest.mark.parametrize("block", range(8))
def test_random_records_hold_together(block: int) -> None:
    for seed in range(20 * block, 20 * (block + 1)):
        _holds_together(assess(_record(seed)), seed)


def _holds_together(outcome: Outcome, seed: int) -> None:
    _numbers(outcome, seed)
    _comparisons(outcome, seed)
    _runs_and_averages(outcome, seed)


def _numbers(outcome: Outcome, seed: int) -> None:
    """All finite; replaying the graph gives the same numbers; a fraction of water is one."""
    again = outcome.ledger.replay()
    for entry in outcome.ledger:
        values = entry.value if isinstance(entry.value, tuple) else (entry.value,)
        assert all(map(math.isfinite, values)), (seed, entry.key)
        if not entry.is_series:
            assert again[entry.key] == entry.value, (seed, entry.key)
    for found in outcome.runs:
        moisture = outcome.ledger.get(f"run.{found.key}.moisture")
        assert moisture is None or 0.0 <= moisture.value < 1.0, seed
        for ending in ("emission_rate", "at_reference"):
            result = outcome.ledger.get(f"run.{found.key}.nox.{ending}")
            corrected = outcome.ledger.get(f"run.{found.key}.nox.corrected")
            if result is not None and corrected is not None:
                assert result.value * corrected.value >= 0.0, (seed, ending)


def _comparisons(outcome: Outcome, seed: int) -> None:
    """Each limit once; compared, or with a reason; what is compared rests on runs that count."""
    assert [c.limit for c in outcome.comparisons] == list(outcome.record.limits), seed
    for found in outcome.comparisons:
        assert found.compared != bool(found.reason), (seed, found.reason)
        if not found.compared:
            continue
        ledger, start = outcome.ledger, found.limit.in_force_from
        assert found.limit.citation is not None
        assert start is None or start.value <= DAY
        assert ledger[found.count].value == sum(ledger[flag].value for _, _, flag in found.runs) >= 1.0
        assert ledger[found.met].value == float(bool(found.is_met))
        assert ledger[found.value].unit == ledger[found.limit_key].unit == found.limit.unit.value.unit


def _runs_and_averages(outcome: Outcome, seed: int) -> None:
    for found in outcome.runs:
        reasons = [gas.reasons for gas in found.gases if not gas.is_valid]
        assert all(reasons), (seed, "an invalid gas without its reason")
        assert (found.state is RunState.INVALID) <= bool(reasons), seed
        for gas in found.gases:
            assert gas.is_valid == (outcome.ledger[gas.valid].value == 1.0), seed
            if gas.is_valid:
                assert f"run.{found.key}.{gas.segment}.mean" in outcome.ledger, seed
    for key in outcome.averages:
        origin = outcome.ledger[key].origin
        assert isinstance(origin, FromEquation)
        keys = dict(origin.inputs)
        pairs = [
            (outcome.ledger[value].value, outcome.ledger[flag].value)
            for value, flag in zip(keys["values"], keys["flags"], strict=True)
        ]
        counted = [value for value, flag in pairs if flag == 1.0]
        assert outcome.ledger[key].value == pytest.approx(sum(counted) / len(counted), rel=1e-9, abs=1e-12), (seed, key)


def test_an_empty_readings_sheet_breaks_nothing() -> None:
    made = record()
    outcome = assess(replace(made, readings=replace(made.readings, rows=())))
    assert not any(gas.is_valid for found in outcome.runs for gas in found.gases)


def test_no_calibrations_at_all() -> None:
    outcome = assess(record(calibrations=(), cylinders=(), limits=(limit(),)))
    assert outcome.comparisons[0].is_met is None
    assert all(found.state is RunState.INVALID for found in outcome.runs)


def test_a_test_of_one_channel_and_one_run() -> None:
    outcome = assess(
        record(channels=(channel("NOx"),), readings=readings({"NOx": 40.0}), runs=(run("1", "08:00", "08:30"),))
    )
    assert {"diluent-missing"} <= {p.code for p in outcome.problems}
    assert outcome.ledger["run.1.nox.dry"].value == pytest.approx(40.0)


def test_runs_given_in_any_order_are_taken_by_time() -> None:
    made = record()
    outcome = assess(replace(made, runs=made.runs[::-1]))
    assert [found.key for found in outcome.runs] == ["1", "2", "3"]
    assert all(found.state is RunState.VALID for found in outcome.runs)


def test_readings_long_after_the_last_run() -> None:
    made = record(readings=readings(stop="10:34"))
    late = replace(made.readings.rows[-1], time=at("23:59"))
    outcome = assess(replace(made, readings=replace(made.readings, rows=(*made.readings.rows, late))))
    assert all(found.state is RunState.VALID for found in outcome.runs)
