"""A barometer is doubted where it stands nearer to sea level than to the site, and the site lies high."""

from __future__ import annotations

import pytest

from reporter.record import Location
from tests.record_factory import assessed, codes, number, runs


@pytest.mark.parametrize(
    ("elevation", "unit", "pressure", "pressure_unit", "noted"),
    [
        (5280.0, "ft", 29.95, "inHg", True),  # a mile high: 24.6 inHg is usual there (common knowledge of the trade)
        (5280.0, "ft", 24.7, "inHg", False),
        (1600.0, "m", 101.2, "kPa", True),
        (1600.0, "m", 83.5, "kPa", False),
        (780.0, "ft", 29.9, "inHg", False),  # the weather alone can do this
        (0.0, "ft", 29.92, "inHg", False),
    ],
)
def test_the_barometer_against_the_elevation(
    elevation: float, unit: str, pressure: float, pressure_unit: str, noted: bool
) -> None:
    made = assessed(
        location=Location(elevation=number(elevation, unit)),
        runs=runs(barometric_pressure=number(pressure, pressure_unit)),
    )
    assert ("barometer-at-sea-level" in codes(made)) is noted
