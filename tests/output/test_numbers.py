"""How numbers, units and moments are written."""

from __future__ import annotations

from dataclasses import replace
from datetime import datetime

import pytest

from reporter.basis import NO_BASIS
from reporter.ledger import Entry, Stated
from reporter.outcome import Outcome
from reporter.output.numbers import decimals_in, fixed, formulas, period, shortest, shown, significant, unit_text


@pytest.mark.parametrize(
    ("value", "decimals", "text"),
    [
        (0.125, 2, "0.12"),  # half to even
        (0.135, 2, "0.14"),  # the decimal value decides, not the binary value below it
        ((25.04 + 25.25) / 2, 2, "25.14"),  # 25.145 and a residue: half to even
        ((0.16 + 0.17) / 2, 2, "0.16"),
        (9.134999999999, 2, "9.13"),  # twelve nines are below the half
        (-0.004, 2, "0.00"),  # no minus before a printed zero
        (-3.25, 1, "−3.2"),
        (12345.6, 0, "12\u202f346"),
        (9999.5, 0, "10\u202f000"),
    ],
)
def test_fixed_decimals(value: float, decimals: int, text: str) -> None:
    assert fixed(value, decimals) == text


@pytest.mark.parametrize(
    ("value", "digits", "text"),
    [
        (0.0291368, 4, "0.02914"),
        (1234567.0, 3, "1\u202f230\u202f000"),
        (1.194e-7, 4, "1.194×10^−7"),
        (2.5e9, 2, "2.5×10^9"),
        (0.0, 4, "0"),
    ],
)
def test_significant_digits(value: float, digits: int, text: str) -> None:
    assert significant(value, digits) == text


def test_shortest_drops_zeros_behind_the_point_only() -> None:
    assert shortest(0.2150, 6) == "0.215"
    assert shortest(1200.0, 6) == "1200"
    assert shortest(1.2e-7, 6) == "1.2×10^−7"


def test_an_entry_is_rounded_by_its_own_decimals_else_by_its_quantity() -> None:
    def entry(key: str, decimals: int | None = None) -> Entry:
        return Entry(key, 24.05791, "ppm", NO_BASIS, Stated("test"), decimals=decimals)

    assert shown(entry("run.1.nox.corrected")) == "24.06"
    assert shown(entry("run.1.nox.corrected", decimals=0)) == "24"
    assert shown(entry("run.1.nox.emission_rate")) == "24.06"


def test_decimals_follow_the_unit_where_it_is_coarse() -> None:
    static = Entry("run.1.static_pressure", -0.085, "kPa", NO_BASIS, Stated("test"))
    assert (shown(static), shown(replace(static, unit="inH2O"))) == ("−0.085", "−0.08")
    load = Entry("run.1.load", 4.71, "MW", NO_BASIS, Stated("test"))
    assert (shown(load), shown(replace(load, unit="klb/h"))) == ("4.71", "4.7")


def test_the_mean_of_two_readings_has_a_decimal_more(boiler: Outcome) -> None:
    ledger = boiler.ledger
    assert shown(ledger["run.1.nox.zero"]) == "0.165"
    assert shown(ledger["calibration.nox.system_1.reading"]) == "0.16"


def test_decimals_are_counted_for_alignment() -> None:
    assert [decimals_in(text) for text in ("−3.25", "12\u202f346", "yes", "1.2×10^−7")] == [2, 0, 0, 0]


@pytest.mark.parametrize(
    ("unit", "text"),
    [
        ("ft3/MMBtu", "ft³/MMBtu"),
        ("mg/m3", "mg/m³"),
        ("inH2O", "inH₂O"),
        ("lb/MMBtu", "lb/MMBtu"),
        ("1", ""),
        ("m2", "m²"),
    ],
)
def test_units_as_printed(unit: str, text: str) -> None:
    assert unit_text(unit) == text


def test_only_formulas_of_gases_are_lowered() -> None:
    assert formulas("CO2 and O2 of tank MO2X, run 2") == "CO₂ and O₂ of tank MO2X, run 2"


def test_a_period_names_the_day_only_where_it_changes() -> None:
    assert period(datetime(2026, 4, 14, 9, 0), datetime(2026, 4, 14, 10, 0)) == "09:00–10:00"
    assert period(datetime(2026, 4, 14, 23, 0), datetime(2026, 4, 15, 1, 0)) == ("2026-04-14 23:00 – 2026-04-15 01:00")
