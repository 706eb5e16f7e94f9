"""What a fuel burned in air gives: dry products, water and carbon dioxide for a measured dry oxygen.

Written apart from the package under test, so that a sample is an outside view of the same physics.
Amounts are in mol per MJ of gross heat.  Air is 20.95 % oxygen, the rest is counted as nitrogen.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

AIR_OXYGEN = 0.2095
MOLAR_MASS = {"Carbon": 12.011, "Hydrogen": 1.008, "Oxygen": 15.999, "Nitrogen": 14.007, "Sulfur": 32.06}
WATER_MOLAR_MASS = 18.015
# component: (C, H, O, N atoms; gross molar heat at 25 °C in kJ/mol, from heats of formation)
COMPONENTS: dict[str, tuple[int, int, int, int, float]] = {
    "methane": (1, 4, 0, 0, 890.6),
    "ethane": (2, 6, 0, 0, 1560.6),
    "propane": (3, 8, 0, 0, 2219.3),
    "n-butane": (4, 10, 0, 0, 2877.2),
    "carbon dioxide": (1, 0, 2, 0, 0.0),
    "nitrogen": (0, 0, 0, 2, 0.0),
}


@dataclass(frozen=True)
class Fuel:
    """Elements (and water as such) of a fuel, mol per MJ of gross heat."""

    carbon: float
    hydrogen: float
    oxygen: float = 0.0
    nitrogen: float = 0.0
    sulfur: float = 0.0
    water: float = 0.0


@dataclass(frozen=True)
class Flue:
    """Flue gas: dry amount and water in mol per MJ, moisture fraction, dry CO2 and SO2 fractions."""

    dry: float
    water: float
    carbon_dioxide: float
    sulfur_dioxide: float

    @property
    def moisture(self) -> float:
        """Water as a fraction of the wet gas."""
        return self.water / (self.dry + self.water)


def gross_heat_of_gas(fractions: Mapping[str, float]) -> float:
    """Gross heat of a gas mixture, kJ/mol, from mole fractions in percent."""
    return sum(part / 100 * COMPONENTS[name][4] for name, part in fractions.items())


def fuel_from_gas(fractions: Mapping[str, float]) -> Fuel:
    """A gas fuel from mole fractions in percent."""
    atoms = [sum(part / 100 * COMPONENTS[name][i] for name, part in fractions.items()) for i in range(4)]
    per_megajoule = 1000 / gross_heat_of_gas(fractions)
    return Fuel(*(n * per_megajoule for n in atoms))


def fuel_from_analysis(percent: Mapping[str, float], gross: float) -> Fuel:
    """A fuel from its as-fired analysis in percent by weight and gross heat in kJ/kg."""
    per_kilogram = {name: percent.get(name, 0.0) * 10 / mass for name, mass in MOLAR_MASS.items()}
    water = percent.get("Water", 0.0) * 10 / WATER_MOLAR_MASS
    scale = 1000 / gross
    return Fuel(
        carbon=per_kilogram["Carbon"] * scale,
        hydrogen=per_kilogram["Hydrogen"] * scale,
        oxygen=per_kilogram["Oxygen"] * scale,
        nitrogen=per_kilogram["Nitrogen"] * scale,
        sulfur=per_kilogram["Sulfur"] * scale,
        water=water * scale,
    )


def blend(fuels: Mapping[str, Fuel], shares: Mapping[str, float]) -> Fuel:
    """Several fuels burned together, by their shares of the heat input."""

    def mix(element: str) -> float:
        return sum(share * float(getattr(fuels[name], element)) for name, share in shares.items())

    return Fuel(*(mix(e) for e in ("carbon", "hydrogen", "oxygen", "nitrogen", "sulfur", "water")))


def burn(fuel: Fuel, oxygen: float, humidity: float) -> Flue:
    """Complete combustion that leaves `oxygen` (dry fraction) in the flue gas.

    `humidity` is the water of the combustion air in mol per mol of dry air.
    """
    needed = fuel.carbon + fuel.hydrogen / 4 + fuel.sulfur - fuel.oxygen / 2
    air = needed / AIR_OXYGEN
    dry = fuel.carbon + fuel.sulfur + fuel.nitrogen / 2 + air * (1 - AIR_OXYGEN)
    left = oxygen * dry / (1 - oxygen / AIR_OXYGEN)
    air += left / AIR_OXYGEN
    dry += left / AIR_OXYGEN
    water = fuel.hydrogen / 2 + fuel.water + humidity * air
    return Flue(dry=dry, water=water, carbon_dioxide=fuel.carbon / dry, sulfur_dioxide=fuel.sulfur / dry)


def saturation_pressure(celsius: float) -> float:
    """Saturation pressure of water in Pa (Magnus form, good to 0.3 % between 0 and 40 °C)."""
    return 610.94 * math.exp(17.625 * celsius / (celsius + 243.04))


def air_humidity(celsius: float, relative: float, pressure: float) -> float:
    """Water in ambient air, mol per mol of dry air; `relative` in percent, `pressure` in Pa."""
    partial = relative / 100 * saturation_pressure(celsius)
    return partial / (pressure - partial)
