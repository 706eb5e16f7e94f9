"""Saturation pressure against independent formulations, and what humid air carries."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from chemicals.iapws import iapws95_Psat
from CoolProp.CoolProp import PropsSI

from reporter.methods.water_vapour import ambient_moisture, saturation_pressure, water_per_dry_air

WATER = Path(__file__).parents[1] / "published" / "water"

# 40 CFR 1065.645(a) prints the Goff equation of 1957: its boiling point is 101.325 kPa at 100 °C by definition, where
# IAPWS-95 on today's temperature scale has 101.418 kPa (0.092 % more).  The whole curve lies 0.08 to 0.11 % below.
LOW, HIGH = -1.1e-3, -0.8e-3


@pytest.mark.parametrize("celsius", [0.01, 10.0, 20.0, 25.0, 37.8, 50.0, 60.0, 80.0, 95.0, 100.0])
def test_against_iapws_95(celsius: float) -> None:
    kelvin = celsius + 273.15
    found = saturation_pressure(temperature=kelvin)
    assert LOW < found / (iapws95_Psat(kelvin) / 1000.0) - 1.0 < HIGH
    assert LOW < found / (PropsSI("P", "T", kelvin, "Q", 0, "Water") / 1000.0) - 1.0 < HIGH


def test_boiling_point_is_one_atmosphere_by_definition() -> None:
    assert saturation_pressure(temperature=373.15) == pytest.approx(101.325, abs=5e-4)


def _crc() -> list[dict[str, Any]]:
    rows: list[dict[str, Any]] = json.loads((WATER / "crc_vapour_pressure_table.json").read_text("utf-8"))["table"]
    return rows


@pytest.mark.parametrize("row", _crc(), ids=lambda row: f"{row['t']} degC")
def test_against_a_printed_table(row: dict[str, Any]) -> None:
    if row["t"] == 38:
        pytest.skip("the printed cell at 38 °C looks misprinted: its neighbours do not fit it")
    assert saturation_pressure(temperature=row["t"] + 273.15) == pytest.approx(row["p"], rel=1.2e-3)


def test_air_carries_what_its_partial_pressure_says() -> None:
    w = water_per_dry_air(relative_humidity=50.0, vapour_pressure=3.17, pressure=101.325)
    bwa = ambient_moisture(relative_humidity=50.0, vapour_pressure=3.17, pressure=101.325)
    assert bwa == pytest.approx(1.585 / 101.325, rel=1e-14)
    assert w == pytest.approx(bwa / (1.0 - bwa), rel=1e-14)
    assert water_per_dry_air(relative_humidity=0.0, vapour_pressure=3.17, pressure=101.325) == 0.0


def test_the_methods_default_of_ambient_moisture_is_a_warm_humid_day() -> None:
    # Method 19, 12.2.2.1 lets 0.027 stand for the ambient air: saturated air at 23 °C.
    vapour = saturation_pressure(temperature=296.15)
    bwa = ambient_moisture(relative_humidity=100.0, vapour_pressure=vapour, pressure=101.325)
    assert bwa == pytest.approx(0.027, abs=1e-3)
