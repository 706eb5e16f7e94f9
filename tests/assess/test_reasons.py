"""The words of a reason: what is missing, by the names people use, each once."""

from __future__ import annotations

from tests.record_factory import (
    assess,
    assessed,
    channel,
    comparison,
    fuel,
    limit,
    readings,
    record,
    without_calibrations,
)


def test_a_reason_names_what_is_missing_in_words() -> None:
    """Two fuels without shares, a fuel without factors, a gas without channel: no symbol of an equation, no key."""
    rate = limit(unit="lb/MMBtu")
    without_shares = assessed(fuels=(fuel(), fuel("distillate oil")), limits=(rate,))
    words = "the share of heat input of each fuel is missing: Fuel use of the run, or the shares on the sheet Fuel"
    assert comparison(without_shares).reason == f"run 1: {words}"
    assert "run 1: no fuel is entered" in comparison(assessed(limits=(rate,))).reason
    unknown = comparison(assessed(fuels=(fuel("mill gas"),), limits=(rate,))).reason
    assert unknown == "run 1: the dry F factor (F_d) of the fuel is missing"
    alone = assessed(channels=(channel("O2"),), readings=readings({"O2": 5.0}), limits=(limit(pollutant="nox"),))
    assert comparison(alone).reason == "no channel measures NOx"


def test_a_channel_is_named_once_in_a_reason() -> None:
    outcome = assess(without_calibrations(record(), "NOx", "10:40", "10:42"))
    assert outcome.run("3").reasons == ("NOx: no system check after the run",)
    invalid = next(problem for problem in outcome.problems if problem.code == "run-invalid")
    assert invalid.found == "NOx, run 3: no system check after the run"
