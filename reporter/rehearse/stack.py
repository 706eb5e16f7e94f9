"""The synthetic stack: what the plant does each minute, and the flue gas that its fuel and its air must give.

The gas is that of `reporter.combustion.bare.balance`; flow and rates are amounts of it by the heat released.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache

from reporter.combustion.air import air_model
from reporter.combustion.bare import balance
from reporter.combustion.fuel import Fuel, nominal_fuel
from reporter.combustion.fuel_entries import amounts
from reporter.errors import RecordError
from reporter.gases import Gas
from reporter.methods.water_vapour import ambient_moisture, saturation_pressure
from reporter.rehearse.order import Fault, Order, settings
from reporter.rehearse.timetable import Timetable

_MEMORY = 0.8  # of a minute for the one before, in what wanders


@dataclass(frozen=True, slots=True)
class Flue:
    """The flue gas of a minute: dry gases by label [% or ppm], moisture [%], heat [GJ/h], flow [mol/h]."""

    dry: dict[str, float]
    moisture: float
    load: float
    heat: float
    dry_flow: float
    excess_air: float

    def wet(self, label: str) -> float:
        """A gas in the gas as it is, its water not taken away."""
        return self.dry[label] * (1 - self.moisture / 100)


def mass_rate(flue: Flue, pollutant: Gas) -> float:
    """Mass rate [g/h] of a pollutant, as what it is expressed as."""
    return flue.dry_flow * flue.dry[pollutant.label] / 1e6 * pollutant.mass


def standard_volume(amount: float) -> float:
    """Volume [m3] of an amount of gas [mol] at 20 °C (68 °F) and 101.325 kPa (29.92 inHg), ideal."""
    physics = settings()["physics"]
    pressure = physics["standard_pressure"] * 1000
    return float(amount * physics["gas_constant"] * physics["standard_temperature"] / pressure)


def burned_fuel(order: Order) -> Fuel:
    """The fuel that burned: as entered, or another one where that is the fault."""
    entered = order.entered_fuel
    if not order.has(Fault.WRONG_FUEL):
        return entered
    rule = settings()["fault"]["wrong-fuel"]
    for name in rule["substitute"]:
        other = nominal_fuel(name)
        if abs(_fuel_factor(other) / _fuel_factor(entered) - 1) > rule["apart"]:
            return other
    raise RecordError(f"no fuel is kept that is told from {entered.name} by its flue gas")


def _fuel_factor(fuel: Fuel) -> float:
    """Oxygen taken from the air for each carbon dioxide, of a fuel burned in air: what tells fuels apart."""
    gas = balance(fuel, {"o2": 0.0})
    return air_model("physical").oxygen / gas.value("co2_expected") * 100


def heat_of_amount(fuel: Fuel) -> float:
    """Gross heat [kJ] of a mole of a gas fuel, or of a kilogram of another."""
    known = amounts(fuel)
    heat, mass = known.gross_heating_value or 0.0, known.molar_mass or 0.0
    return heat * mass / 1000 if fuel.is_gas else heat


def air_humidity() -> float:
    """Moisture of the ambient air [fraction]."""
    plant, physics = settings()["plant"], settings()["physics"]
    vapour = saturation_pressure(temperature=plant["celsius"] + physics["zero_celsius"])
    return float(
        ambient_moisture(
            relative_humidity=plant["relative_humidity"], vapour_pressure=vapour, pressure=plant["pressure"]
        )
    )


class Stack:
    """The plant of an order, minute by minute."""

    def __init__(self, order: Order, day: Timetable) -> None:
        self.order, self.day = order, day
        self.fuel = burned_fuel(order)
        self.heat_of_amount = heat_of_amount(self.fuel)
        self._air = air_humidity()
        length = day.end - day.start
        plant = settings()["plant"]
        profile = settings()["load"][order.profile.value]
        self._load_wander = self._wander("load", length, profile["wander"])
        self._oxygen_wander = self._wander("oxygen", length, plant["oxygen_wander"])
        self._wanders = {
            gas.label: self._wander(gas.label, length, plant["pollutant_wander"]) for gas in order.measured
        }
        self._phase = order.random("phase").random() * 2 * math.pi
        self.at = cache(self._at)

    def _wander(self, purpose: str, length: int, percent: float) -> list[float]:
        """A slow random walk about 1."""
        numbers = self.order.random(f"wander/{purpose}")
        fresh = math.sqrt(1 - _MEMORY**2)
        value, series = numbers.gauss(0, 1), []
        for _ in range(length):
            series.append(1 + percent / 100 * value)
            value = _MEMORY * value + fresh * numbers.gauss(0, 1)
        return series

    def load(self, minute: int) -> float:
        """Load as a share of full load."""
        profile = settings()["load"][self.order.profile.value]
        first, last = self.day.runs[0].start, self.day.runs[-1].end
        part = min(1.0, max(0.0, (minute - first) / (last - first)))
        begin, end = profile["knots"]
        height, period = profile["swing"]
        swing = height * math.sin(2 * math.pi * (minute - first) / period + self._phase)
        return float((begin + part * (end - begin) + swing) * self._load_wander[minute - self.day.start])

    def oxygen(self, minute: int) -> float:
        """Dry oxygen [%] that the burner leaves: more at lower load."""
        plant = settings()["plant"]
        by_load = plant["oxygen_by_load"] * (self.load(minute) - plant["oxygen_load"])
        wander = self._oxygen_wander[minute - self.day.start]
        return float(max(plant["least_oxygen"], (self.order.oxygen + by_load) * wander))

    def expected(self, oxygen: float | None = None) -> Flue:
        """What the stack is expected to show at full load: at the oxygen asked for, or at another one [% dry]."""
        return self._gas(self.order.oxygen if oxygen is None else oxygen, {})

    def _at(self, minute: int) -> Flue:
        wander = {label: series[minute - self.day.start] for label, series in self._wanders.items()}
        return self._gas(self.oxygen(minute), wander, self.load(minute))

    def _gas(self, oxygen: float, wander: dict[str, float], load: float = 1.0) -> Flue:
        """The flue gas at an oxygen: pollutants are diluted by the air that was not needed."""
        diluted = 1 - oxygen / 100 / air_model("physical").oxygen
        known = settings()["pollutants"][self.fuel.kind.value]
        ppm = {label: level * diluted * wander.get(label, 1.0) for label, level in known.items()}
        solved = balance(self.fuel, {"o2": oxygen, "co": ppm["CO"], "no": ppm["NOx"], "air_moisture": self._air})
        products, water = solved.value("dry_products"), solved.value("h2o")
        heat = settings()["plant"]["heat"] * load
        dry = {
            **ppm,
            "SO2": solved.value("so2") / products * 1e6,
            "O2": oxygen,
            "CO2": solved.value("co2_expected"),
        }
        return Flue(
            dry=dry,
            moisture=100 * water / (products + water),
            load=load,
            heat=heat,
            dry_flow=heat * 1e6 / self.heat_of_amount * products,
            excess_air=solved.value("excess_air"),
        )

    def minutes(self, start: int, end: int) -> Sequence[Flue]:
        """The flue gas of each minute of a span."""
        return [self.at(minute) for minute in range(start, end)]
