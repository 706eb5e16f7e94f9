"""Stoichiometry of a fuel in the ledger: air need, dry products, highest CO2, fuel factor, F factors."""

from __future__ import annotations

from reporter.combustion import stoichiometry as eq
from reporter.combustion.air import Air, AirEntries, air_model, enter_air
from reporter.combustion.factors import fc_of_composition, fd_of_composition, fw_of_composition
from reporter.combustion.fuel_entries import by_mass
from reporter.ledger import Entry, Ledger


def enter_stoichiometry(ledger: Ledger, prefix: str, air: Air | None = None) -> None:
    """Enter what follows from a fuel and a model of air alone.

    Parameters
    ----------
    ledger
        Where to; the fuel stands under `prefix` already.
    prefix
        ``fuel.<slug>``.  Written: ``.stoichiometric_oxygen``, ``.stoichiometric_air`` (by mole),
        ``.stoichiometric_air.by_mass`` [1], ``.stoichiometric_dry_products``, and, where the fuel has
        carbon, ``.co2_max`` [%, dry] and ``.fuel_factor.composition``; where it has a heating value,
        ``.fd.composition``, ``.fw.composition`` and ``.fc.composition`` [ft3/MMBtu or m3/J].
    air
        The model of air; that of the methods (20.9 % oxygen) where absent, which F factors must have.
    """
    entries = enter_air(ledger, air or air_model("method"))
    needed = enter_oxygen_needed(ledger, prefix)
    dry_air = ledger.apply(
        eq.stoichiometric_air,
        f"{prefix}.stoichiometric_air",
        {"oxygen_needed": needed, "air_oxygen": entries.oxygen},
        label="stoichiometric dry air by mole",
    )
    air_fuel_by_mass(ledger, f"{prefix}.stoichiometric_air.by_mass", dry_air, prefix, entries)
    from_fuel = enter_fuel_products(ledger, prefix)
    products = ledger.apply(
        eq.stoichiometric_dry_products,
        f"{prefix}.stoichiometric_dry_products",
        {"from_fuel": from_fuel, "air": dry_air, "air_nitrogen": entries.nitrogen},
        label="dry products without excess air",
    )
    carbon = ledger[f"{prefix}.carbon"]
    if carbon.value != 0:
        ledger.apply(
            eq.co2_max,
            f"{prefix}.co2_max",
            {"carbon": carbon, "dry_products": products},
            label="highest dry CO2, complete combustion without excess air",
        )
        ledger.apply(
            eq.fuel_factor_of_composition,
            f"{prefix}.fuel_factor.composition",
            {"dry_products": products, "carbon": carbon, "air_oxygen": entries.oxygen},
            label="fuel factor of the composition",
        )
    if f"{prefix}.gross_heating_value" in ledger:
        _enter_factors(ledger, prefix)


def enter_oxygen_needed(ledger: Ledger, prefix: str) -> Entry:
    """Stoichiometric oxygen of a fuel, entered once."""
    key = f"{prefix}.stoichiometric_oxygen"
    return ledger.get(key) or ledger.apply(
        eq.stoichiometric_oxygen,
        key,
        {name: f"{prefix}.{name}" for name in ("carbon", "hydrogen", "sulfur", "oxygen")},
        label="oxygen for complete combustion",
    )


def enter_fuel_products(ledger: Ledger, prefix: str) -> Entry:
    """Dry products that come from the fuel itself, entered once."""
    key = f"{prefix}.fuel_products"
    return ledger.get(key) or ledger.apply(
        eq.fuel_products,
        key,
        {name: f"{prefix}.{name}" for name in ("carbon", "sulfur", "nitrogen", "inert")},
        label="dry products of the fuel itself",
    )


def air_fuel_by_mass(ledger: Ledger, key: str, air: Entry, prefix: str, model: AirEntries) -> Entry:
    """Enter the air-fuel ratio by mass of an amount of dry air."""
    label = "air-fuel ratio by mass, dry air"
    inputs: dict[str, Entry | str] = {"air": air, "air_mass": model.molar_mass}
    if air.unit == "mol/kg":
        return ledger.apply(eq.air_by_mass, key, inputs, label=label)
    inputs["fuel_mass"] = f"{prefix}.molar_mass"
    return ledger.apply(eq.air_by_mass_of_gas, key, inputs, label=label)


def _enter_factors(ledger: Ledger, prefix: str) -> None:
    heat = ledger[f"{prefix}.gross_heating_value"]
    dry = by_mass(ledger, prefix, "stoichiometric_dry_products")
    water = by_mass(ledger, prefix, "combustion_water")
    ledger.apply(
        fd_of_composition,
        f"{prefix}.fd.composition",
        {"dry_products": dry, "heat": heat},
        label="dry F factor of the composition",
    )
    ledger.apply(
        fw_of_composition,
        f"{prefix}.fw.composition",
        {"dry_products": dry, "water": water, "heat": heat},
        label="wet F factor of the composition",
    )
    ledger.apply(
        fc_of_composition,
        f"{prefix}.fc.composition",
        {"carbon": by_mass(ledger, prefix, "carbon"), "heat": heat},
        label="carbon dioxide F factor of the composition",
    )
