"""Impossible combinations are named with the readings that would have to be wrong, and by how much."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reporter.combustion.bare import balance
from reporter.combustion.findings import BalanceFinding, FindingKind, findings
from reporter.combustion.fuel import fuel_from_gas, nominal_fuel
from reporter.combustion.fuel_entries import spreads
from reporter.combustion.state import State

GAS = fuel_from_gas("site gas", {"CH4": 95.0, "C2H6": 3.0, "N2": 2.0})
DOUBTS = {"reading.o2": 0.1, "reading.co2": 0.1, "reading.co": 2.0, "reading.moisture": 0.003}


def impossible(state: State, **more: dict[str, float]) -> list[BalanceFinding]:
    return [found for found in findings(state, DOUBTS, **more) if found.kind is FindingKind.IMPOSSIBLE]


def test_an_ordinary_run_has_no_findings() -> None:
    state = balance(GAS, {"o2": 3.0, "co": 40.0, "no": 30.0, "moisture": 0.175, "air_moisture": 0.01})
    assert findings(state, DOUBTS) == ()


def test_carbon_dioxide_above_the_highest_possible_leaves_negative_oxygen() -> None:
    (found,) = impossible(balance(GAS, {"co2": 13.0}))
    assert found.species == "oxygen"
    assert found.amount < 0
    (suspect,) = found.suspects
    # At the CO2 that is needed no oxygen is left: it is the highest CO2 of the fuel.
    most = balance(GAS, {"o2": 0.0}).value("co2_expected")
    assert suspect.needed == pytest.approx(most, rel=1e-6)
    assert suspect.change == pytest.approx(most - 13.0, rel=1e-5)
    assert "carbon dioxide" in found.text()
    assert "13 %" in found.text()


def test_a_small_excess_within_twice_the_uncertainty_is_no_finding() -> None:
    most = balance(GAS, {"o2": 0.0}).value("co2_expected")
    assert impossible(balance(GAS, {"co2": most + 0.15})) == []
    assert len(impossible(balance(GAS, {"co2": most + 0.25}))) == 1


def test_oxygen_above_that_of_air_is_one_finding_not_many() -> None:
    state = balance(GAS, {"o2": 21.3})
    (found,) = impossible(state)
    assert found.key == "run.it.combustion.determinant"
    assert [suspect.key for suspect in found.suspects] == ["reading.o2"]
    assert found.suspects[0].needed == pytest.approx(20.95, abs=1e-6)
    assert "no room for combustion" in found.text()


def test_less_moisture_than_the_fuel_makes() -> None:
    (found,) = impossible(balance(GAS, {"o2": 3.0, "moisture": 0.05}))
    assert found.species == "water in the combustion air"
    by_key = {suspect.key: suspect for suspect in found.suspects}
    dry_air = balance(GAS, {"o2": 3.0})
    assert by_key["reading.moisture"].needed == pytest.approx(dry_air.value("moisture_expected"), rel=1e-6)
    # Or the oxygen: more air would thin the water of combustion down to what was measured.
    thinned = balance(GAS, {"o2": by_key["reading.o2"].needed})
    assert thinned.value("moisture_expected") == pytest.approx(0.05, rel=1e-6)


def test_more_carbon_monoxide_than_the_fuel_has_carbon() -> None:
    found = impossible(balance(GAS, {"o2": 12.0, "co": 150000.0}))
    assert "carbon dioxide" in {one.species for one in found}
    for one in found:
        for suspect in one.suspects:
            assert suspect.value != suspect.needed


def test_given_air_that_the_oxygen_contradicts() -> None:
    (found,) = impossible(balance(GAS, {"o2": 3.0}, air_burned=13.0))
    assert found.species == "carbon monoxide"
    by_key = {suspect.key: suspect.needed for suspect in found.suspects}
    assert balance(GAS, {"o2": 3.0}).value("air_dry") == pytest.approx(by_key["reading.air"], rel=1e-6)
    assert balance(GAS, {"o2": by_key["reading.o2"]}).value("air_dry") == pytest.approx(13.0, rel=1e-6)


def test_a_negative_reading_is_carried_and_noted_not_blamed() -> None:
    state = balance(GAS, {"o2": 3.0, "co": -0.3})
    (found,) = findings(state)
    assert found.kind is FindingKind.NEGATIVE_READING
    assert found.key == "reading.co"
    assert state.value("co") < 0
    assert "carried as read" in found.text()
    assert "−0.3 ppm" in found.text()


def test_an_assumed_composition_claims_nothing_within_its_spread() -> None:
    fuel = nominal_fuel("natural gas")
    most = balance(fuel, {"o2": 0.0}).value("co2_expected")
    just_above, far_above = balance(fuel, {"co2": most + 0.3}), balance(fuel, {"co2": most + 3.0})
    wide = spreads(fuel, "fuel.it")
    assert len(impossible(just_above)) == 1
    assert impossible(just_above, spreads=wide) == []
    (found,) = impossible(far_above, spreads=wide)
    assert found.assumed
    assert "assumed composition" in found.text()


@settings(max_examples=25, deadline=None)
@given(excess=st.floats(0.5, 6.0), co=st.floats(0.0, 2000.0))
def test_the_needed_reading_brings_the_amount_to_zero(excess: float, co: float) -> None:
    most = balance(GAS, {"o2": 0.0}).value("co2_expected")
    state = balance(GAS, {"co2": most + excess, "co": co})
    for found in impossible(state):
        for suspect in found.suspects:
            again = state.ledger.replay({suspect.key: suspect.needed}, only=[found.key])
            assert abs(again[found.key]) < 1e-6 * abs(found.amount)


def test_findings_never_use_words_of_judgement() -> None:
    states = [balance(GAS, {"co2": 13.0}), balance(GAS, {"o2": 21.3}), balance(GAS, {"o2": 3.0, "co": -2.0})]
    text = " ".join(found.text() for state in states for found in findings(state, DOUBTS)).lower()
    for word in ("pass", "fail", "compliant", "violation", "verdict"):
        assert word not in text
