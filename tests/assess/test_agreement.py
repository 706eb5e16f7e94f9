"""Measured against expected in a record: bounds that hold what is assumed, live criteria, hints in a firm's words."""

from __future__ import annotations

from typing import Any

import pytest

from reporter.outcome import Outcome
from reporter.output.phrases import load_phrases
from reporter.output.view.combustion import combustion
from reporter.output.view.desk import Desk
from tests.output.conftest import ISSUED
from tests.output.test_phrases import FORBIDDEN
from tests.record_factory import assessed, channel, codes, fuel, fuel_use, number, readings, runs, value

STEM = "run.1.combustion.agreement"


def _of(co2: float, o2: float = 5.0, **parts: Any) -> Outcome:
    made = readings({"NOx": 40.0, "CO": 10.0, "O2": o2, "CO2": co2})
    return assessed(readings=made, **({"fuels": (fuel(),)} | parts))


def test_the_bound_holds_cylinder_drift_accepted_error_and_spread() -> None:
    """JCGM 100, Eq. 10 and 4.3.7, from the entries the sheets give: span 20 %, 2 % of it accepted (7E, 13.1)."""
    outcome = _of(9.0)
    expected, oxygen = value(outcome, "run.1.combustion.co2_expected"), value(outcome, "run.1.o2.dry")
    slope = expected / (20.95 - oxygen)
    doubts = {}
    for gas in ("o2", "co2"):
        known = outcome.ledger.get(f"run.1.{gas}.uncertainty")
        doubts[gas] = ((0.0 if known is None else float(known.value)) ** 2 + 0.4**2 / 3) ** 0.5
    spread = value(outcome, f"{STEM}.co2_spread")
    bound = 2 * (doubts["co2"] ** 2 + (slope * doubts["o2"]) ** 2) ** 0.5 + spread
    assert value(outcome, f"{STEM}.co2_bound") == pytest.approx(bound, rel=1e-12)
    assert spread > 0


def test_an_entered_uncertainty_is_taken_as_it_is() -> None:
    channels = (channel("NOx"), channel("CO"), *(channel(n, standard_uncertainty=number(0.1)) for n in ("O2", "CO2")))
    outcome = _of(9.0, channels=channels)
    slope, spread = value(outcome, f"{STEM}.slope"), value(outcome, f"{STEM}.co2_spread")
    assert value(outcome, f"{STEM}.co2_bound") == pytest.approx(0.2 * (1 + slope**2) ** 0.5 + spread, rel=1e-12)


def test_the_spread_of_assumed_fuels_burned_together_counts() -> None:
    """A blend of two nominal compositions reaches about as far as either of them."""
    uses = [
        row
        for name in ("1", "2", "3")
        for row in (
            fuel_use(name, rate=number(10_000.0, "ft3/h"), heating_value=number(1030.0, "Btu/ft3")),
            fuel_use(
                name,
                "distillate oil",
                rate=number(500.0, "lb/h"),
                heating_value=number(19_400.0, "Btu/lb"),
            ),
        )
    ]
    both = _of(10.5, fuels=(fuel(), fuel("distillate oil")), fuel_use=tuple(uses))
    alone = [_of(10.5, fuels=(fuel(name),)) for name in ("natural gas", "distillate oil")]
    spreads = sorted(value(outcome, f"{STEM}.co2_spread") for outcome in alone)
    assert value(both, f"{STEM}.co2_spread") == pytest.approx(sum(spreads) / 2, rel=0.5)
    assert value(both, f"{STEM}.co2_spread") > 0


def test_a_changed_reading_changes_the_criterion() -> None:
    """The criterion is an entry: replayed with another reading it says what a new computation would."""
    outcome = _of(9.0)
    assert "co2-against-fuel" not in codes(outcome)
    key = f"{STEM}.co2_met"
    assert value(outcome, key) == 1.0
    mean = next(k for k in outcome.ledger.roots([key]) if k.startswith("run.1.co2.") and k.endswith("readings"))
    series = outcome.ledger[mean].value
    changed = outcome.ledger.replay({mean: [10.2] * len(series)}, only=[key])  # type: ignore[arg-type]
    assert changed[key] == 0.0
    assert value(_of(10.2), key) == 0.0


def test_moisture_may_hold_the_water_of_air_that_was_not_entered() -> None:
    """Air of 2.7 % water (Method 19, 12.2.2.1) adds about as much to the flue gas; with the air entered it counts."""
    without = _of(9.0, runs=runs(moisture=number(16.0, "%")))
    within = _of(9.0, runs=runs(moisture=number(16.0, "%"), ambient_moisture=number(1.0, "%")))
    high, low = (value(outcome, f"{STEM}.moisture_highest") for outcome in (without, within))
    assert high - low == pytest.approx(0.027 * 0.8, abs=0.004)


def test_without_criteria_of_a_method_nothing_is_held_against_the_line() -> None:
    channels = (channel("NOx"), channel("CO"), *(channel(name, method="EN 14789") for name in ("O2", "CO2")))
    outcome = _of(9.0, channels=channels)
    assert f"{STEM}.co2_met" not in outcome.ledger


def test_every_key_of_a_hint_is_an_entry_and_no_hint_decides() -> None:
    moist = {"runs": runs(moisture=number(22.0, "%"))}
    outcomes = [
        _of(7.0),
        _of(12.0),
        _of(7.0, **moist),
        _of(9.0, **moist),
        _of(13.0, runs=runs(moisture=number(9.0, "%"))),
    ]
    phrases = set()
    for outcome in outcomes:
        for finding in outcome.findings:
            phrases.add(finding.phrase)
            assert all(key in outcome.ledger for key in finding.keys), finding.words
            assert not FORBIDDEN.search(finding.words)
    assert len(phrases) >= 5


def test_a_firms_own_wording_of_a_hint_reaches_the_report(tmp_path: Any) -> None:
    (tmp_path / "phrases.toml").write_text('[hint]\nshared = "Our words, {scales}."\n', encoding="utf-8")
    outcome = _of(8.0)
    blocks = combustion(Desk(outcome, ISSUED, "0.1.0", load_phrases(tmp_path)))
    notes = [note for block in blocks for note in block.notes]
    assert any(note.startswith("Our words, 1.") for note in notes)
    assert any("Measured dry CO2" in finding.words for finding in outcome.findings)
