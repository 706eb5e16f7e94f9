"""Over many seeds: without a fault nothing is said; with one the right hint is said, as far as it can be seen.

What can be seen follows from the balance: dry O2 and CO2 have one redundant number, moisture and the second route of
a rate one more each.  The faults of the table lie far beyond the bounds of these, so that each is found in every seed;
with the measurement that would show it left out, none is, and the test says which that is.
"""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from typing import Any

import pytest
from rehearsals import WOOD, codes, hints, made, not_met

from reporter.api import assess, opened
from reporter.equation import System
from reporter.outcome import Outcome
from reporter.record import Record
from reporter.rehearse import Fault, Order
from tests.output.conftest import SAMPLES

SEEDS = range(101, 107)
KINDS: dict[str, dict[str, Any]] = {
    "gas": {},
    "wood": {"fuel": WOOD, "oxygen": 7.5, "system": System.SI},
    "oil at 5 %": {"fuel": "distillate oil", "oxygen": 5.0},
}
#: The hints that are right, and those that may stand beside them.
RIGHT = {
    Fault.AIR_LEAK: ({"diluted_both"}, set[str]()),
    Fault.WRONG_CYLINDER: ({"shared_with_error"}, {"off_the_line"}),
    Fault.WET_CALLED_DRY: ({"wet_called_dry"}, {"off_the_line"}),
    Fault.WRONG_FUEL: ({"other_fuel_moist"}, {"off_the_line", "off_the_line_co2"}),
}
#: The same where the flue gas holds little water.
RIGHT_WITH_LITTLE_WATER = {
    Fault.AIR_LEAK: (set[str](), {"diluted_both", "diluted_routes"}),
    Fault.WRONG_CYLINDER: ({"shared_with_error"}, {"off_the_line", "wet_called_dry"}),
}


@cache
def outcome(kind: str, seed: int, fault: Fault | None) -> Outcome:
    return made(Order(seed=seed, run_minutes=20, fault=fault, **KINDS[kind]))[1]


@pytest.mark.parametrize("kind", KINDS)
def test_without_a_fault_nothing_is_said(kind: str) -> None:
    for seed in SEEDS:
        found = outcome(kind, seed, None)
        assert hints(found) == set(), seed
        assert codes(found) == set(), seed
        assert not_met(found) == [], seed


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("fault", RIGHT)
def test_the_share_of_seeds_in_which_the_fault_is_named(kind: str, fault: Fault) -> None:
    """All of them: a leak of 12 %, a cylinder 8 % off, 10 % of water and more, and another fuel are no small faults.

    Oil gives 10 % of water only.  A leak of 12 % moves that by less than the 1 % H2O that moisture is held to, so that
    the routes alone show it in some seeds; and reading 8 % low is told from reading 10 % low by the calibration alone.
    """
    right, beside = RIGHT[fault]
    if kind.startswith("oil"):
        right, beside = RIGHT_WITH_LITTLE_WATER.get(fault, (right, beside))
    said = [{name for _, name in hints(outcome(kind, seed, fault))} for seed in SEEDS]
    share = sum(right <= names for names in said) / len(said)
    assert share == 1.0, said
    assert all(said)
    assert all(names <= right | beside for names in said), said


@pytest.mark.parametrize("sample", sorted(SAMPLES.glob("*.xlsx")), ids=lambda path: path.stem)
def test_nothing_is_said_of_the_samples(sample: Any) -> None:
    found = opened(sample)
    assert hints(found) == set()
    assert not codes(found) & {"co2-against-fuel", "moisture-above-combustion", "moisture-below-combustion"}


# ---- what cannot be seen -------------------------------------------------------------------------------------


def without(record: Record, *, moisture: bool = False, flow: bool = False) -> Outcome:
    """The outcome of a record from which the moisture trains, or the stack flow, were left out."""
    if moisture:
        record = replace(record, moisture=())
    if flow:
        record = replace(record, runs=tuple(replace(run, stack_flow=None) for run in record.runs))
    return assess(record)


def test_a_leak_with_neither_flow_nor_moisture_is_not_seen() -> None:
    """It moves oxygen and CO2 along the line of the fuel; no other number of such a test has changed."""
    record = outcome("gas", 101, Fault.AIR_LEAK).record
    assert hints(without(record, moisture=True, flow=True)) == set()


def test_a_leak_with_one_of_them_is_seen_and_not_named_alone() -> None:
    """Each alone has other causes, which the hint names: a low flow, a high meter; droplets, water from elsewhere."""
    record = outcome("gas", 101, Fault.AIR_LEAK).record
    assert hints(without(record, moisture=True)) == {("2", "diluted_routes")}
    assert hints(without(record, flow=True)) == {("2", "moist")}


def test_a_wet_sample_without_a_moisture_is_seen_and_not_named() -> None:
    """The factor to the line is that of 16 % of water, of a cylinder, or of a fuel: nothing tells them apart."""
    found = without(outcome("gas", 101, Fault.WET_CALLED_DRY).record, moisture=True)
    assert {name for _, name in hints(found)} == {"off_the_line", "shared"}


def test_a_wrong_fuel_without_a_moisture_is_named_with_the_doubt() -> None:
    """Balance theory: a wrong fuel and a wrong CO2 reading look alike until moisture or flow is measured."""
    found = without(outcome("gas", 101, Fault.WRONG_FUEL).record, moisture=True)
    assert {name for _, name in hints(found)} == {"off_the_line_co2", "other_fuel"}
    assert any("looks the same" in finding.words for finding in found.findings)


def test_without_carbon_dioxide_the_dry_gas_has_nothing_redundant() -> None:
    for fault in (Fault.WET_CALLED_DRY, Fault.WRONG_CYLINDER, Fault.WRONG_FUEL):
        record = made(Order(gases=("NOx", "O2"), fault=fault, run_minutes=20))[1].record
        assert {name for _, name in hints(without(record, moisture=True, flow=True))} == set(), fault
