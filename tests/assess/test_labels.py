"""Every key of a ledger has words of its own: for headings, derivations, the results file."""

from __future__ import annotations

from collections import Counter
from dataclasses import replace
from pathlib import Path

import pytest

from reporter.api import read
from reporter.assess.pipeline import assess
from reporter.errors import LedgerError
from reporter.outcome import Outcome
from reporter.quantities import label_of, quantity_of, table
from reporter.record import Given, SamplingSystem
from tests.record_factory import (
    assessed,
    channel,
    fuel,
    fuel_use,
    identity,
    in_run,
    limit,
    number,
    readings,
    record,
    rerun,
    runs,
    train,
)

SAMPLES = sorted((Path(__file__).parents[2] / "sample_inputs" / "valid").glob("*.xlsx"))


def _sample(path: Path) -> Outcome:
    found = read(path)
    assert found.record is not None
    return assess(found.record)


def _odd() -> Outcome:
    """A record that takes the paths the samples do not: groups, exclusion, ND, mass channels, other conditions."""
    channels = (
        channel("NOx", unit="mg/m3", wet=True),
        channel("CO"),
        channel("O2", wet=True, standard_uncertainty=number(0.1, "%")),
        channel("CO2", system=Given(SamplingSystem.DILUTION), dilution_factor=number(1.0)),
        channel("NOx B", gas="nox"),
    )
    values = {"NOx": 80.0, "CO": lambda t: "ND", "O2": in_run((4.0, 9.0, 4.0)), "CO2": 9.0, "NOx B": "OVER"}
    made = record(
        test=identity(unit_system="SI"),
        channels=channels,
        readings=readings(values),  # type: ignore[arg-type]
        runs=runs(
            moisture=number(15.0, "%"),
            stack_temperature=number(60.0, "°C"),
            barometric_pressure=number(29.9, "inHg"),
            relative_humidity=number(50.0, "%"),
            ambient_temperature=number(68.0, "°F"),
            heat_input=number(50.0, "GJ/h"),
            stack_flow=number(10_000.0, "Nm3/h"),
            flow_basis="wet standard",
            load=number(10.0, "MW"),
            load_basis=number(12_000.0, "kW"),
            output=number(4.0, "MW"),
            installed_monitor_mean=number(39.0, "ppm"),
        ),
        moisture=(train("1", meter_volume_end=number(30.0, "ft3"), meter_temperature=number(80.0, "°F"),
                        meter_pressure=number(29.5, "inHg"), water_collected=number(90.0, "mL")),),
        fuels=(fuel(), fuel("distillate oil")),
        fuel_use=(
            fuel_use("1", rate=number(100.0, "m3/h"), heating_value=number(38.0, "MJ/m3")),
            fuel_use("1", rate=number(90.0, "m3/h"), heating_value=number(38.0, "MJ/m3")),
            fuel_use("1", "distillate oil", rate=number(10.0, "GJ/h")),
        ),
        limits=(
            limit("A", value=300.0, unit="mg/m3", reference_oxygen=number(3.0, "%")),
            limit("B", value=300.0, unit="mg/Nm3", averaging="each run", rounding="half up to 2 significant digits"),
            limit("C", value=3.0, unit="g/kWh"),
            limit("D", value=9.0, unit="kg/h", minimum_run_length=number(20.0, "min")),
            limit("E", value=60.0, unit="lb/MMBtu", factor_table="60.45(f)"),
            limit("F", reference_oxygen=number(3.0, "%"), diluent="CO2"),
        ),
    )  # fmt: skip
    return assess(rerun(made, "3", excluded_because="load"))


def _grouped() -> Outcome:
    made = tuple(replace(r, group=Given("high" if r.run.value == "1" else "low")) for r in runs())
    return assessed(runs=made, fuels=(fuel(),), limits=(limit(applies_when="low"),))


def _check(outcome: Outcome) -> None:
    labels: dict[str, str] = {}
    for entry in outcome.ledger:
        label = label_of(entry.key)
        labels[entry.key] = label
        assert label.strip() == label
        assert label
        assert "None" not in label
        assert len(label) < 200
        if entry.key.startswith("run."):
            assert label.endswith(f"run {entry.key.split('.')[1]}")
        quantity, _ = quantity_of(entry.key)
        assert quantity.decimals is None or 0 <= quantity.decimals <= 6
    twice = {label: count for label, count in Counter(labels.values()).items() if count > 1}
    assert not {key: label for key, label in labels.items() if label in twice}


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_every_key_of_a_sample_has_a_label_of_its_own(path: Path) -> None:
    _check(_sample(path))


def test_every_key_of_odd_records_has_one_too() -> None:
    _check(_odd())
    _check(_grouped())


@pytest.mark.parametrize(
    ("key", "label"),
    [
        ("run.1.nox.corrected", "NOx, corrected for bias and drift, run 1"),
        ("run.2.nox_b.dry", "nox b, dry, run 2"),
        ("run.span.nox.mean", "NOx, mean of valid readings, run span"),
        ("average.nox.at_reference.limit_b", "NOx, at the reference diluent, for limit b, average of runs"),
        ("average.nox.dry.group_high_load", "NOx, dry, group high load, average of runs"),
        ("limit.dry.oxygen_constant", "limit dry, percent oxygen of dry air"),
        ("comparison.l1.count", "limit l1, valid runs"),
        ("cylinder.reading.nox.certified", "cylinder reading, NOx, certified value"),
        ("calibration.nox.system_2.bias", "NOx, system 2, system bias"),
        ("fuel.natural_gas.fd", "natural gas, F factor, dry"),
        ("run.1.valid.nox_o2", "counts as valid (1) or not (0), NOx, O2, run 1"),
        ("run.1.combustion.nitrogen", "nitrogen by difference, run 1"),
        ("fuel.wood.nitrogen", "wood, nitrogen"),
    ],
)
def test_labels(key: str, label: str) -> None:
    assert label_of(key) == label


def test_a_key_of_no_quantity_is_refused() -> None:
    with pytest.raises(LedgerError):
        label_of("run.1.nox.whatever")


def test_labels_have_no_full_stop_and_no_key_words() -> None:
    for row in table().values():
        assert not row.label.endswith(".")
        assert "_" not in row.label
