"""Models of dry combustion air and the water it carries."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache

from reporter.equation import Citation, Value, equation
from reporter.ledger import Entry, FromTable, Ledger
from reporter.resources import table_text

BALANCE = Citation("balance")
#: Unit of every amount of a balance: per kg of fuel (mol/kg) or per mole of it (mol/mol).
AMOUNT = "*f"


@dataclass(frozen=True, slots=True)
class Air:
    """A model of dry air: mole fraction of oxygen (the rest counts as nitrogen), molar mass [g/mol]."""

    key: str
    label: str
    oxygen: float
    molar_mass: float
    oxygen_source: Citation
    molar_mass_source: Citation


@cache
def air_model(key: str) -> Air:
    """A model by name: ``method`` (20.9 % oxygen) or ``physical`` (20.95 %)."""
    row = tomllib.loads(table_text("air.toml"))[key]
    return Air(
        key=key,
        label=row["label"],
        oxygen=row["oxygen"],
        molar_mass=row["molar_mass"],
        oxygen_source=Citation(**row["oxygen_source"]),
        molar_mass_source=Citation(**row["molar_mass_source"]),
    )


@equation("x_N2", "1", {"air_oxygen": "1"}, BALANCE, symbols={"air_oxygen": "x_O2"})
def rest_of_air(*, air_oxygen: Value) -> Value:
    """Mole fraction of dry air that is not oxygen and counts as nitrogen.

    Parameters
    ----------
    air_oxygen
        Mole fraction of oxygen in dry air [1].

    Returns
    -------
    float
        x_N2 [1].
    """
    return 1 - air_oxygen


@equation("w", "1", {"moisture": "1"}, BALANCE, symbols={"moisture": "B_wa"})
def humidity_from_moisture(*, moisture: Value) -> Value:
    """Moles of water per mole of dry air from the moisture fraction of the air.

    Parameters
    ----------
    moisture
        Mole fraction of water in the humid air [1], below 1.

    Returns
    -------
    float
        w [mol/mol dry air].
    """
    return moisture / (1 - moisture)


@dataclass(frozen=True, slots=True)
class AirEntries:
    """The ledger entries of an air model: oxygen and nitrogen fractions, molar mass."""

    oxygen: Entry
    nitrogen: Entry
    molar_mass: Entry


def enter_air(ledger: Ledger, air: Air) -> AirEntries:
    """Enter an air model once: ``air.<model>.oxygen``, ``.nitrogen``, ``.molar_mass``."""
    prefix = f"air.{air.key}"
    oxygen = ledger.get(f"{prefix}.oxygen") or ledger.enter(
        f"{prefix}.oxygen",
        air.oxygen,
        "1",
        FromTable(air.oxygen_source, air.label),
        label=f"oxygen in dry air ({air.label})",
        symbol="x_O2",
        decimals=4,
    )
    nitrogen = ledger.get(f"{prefix}.nitrogen") or ledger.apply(
        rest_of_air,
        f"{prefix}.nitrogen",
        {"air_oxygen": oxygen},
        label="rest of dry air, counted as nitrogen",
        decimals=4,
    )
    molar_mass = ledger.get(f"{prefix}.molar_mass") or ledger.enter(
        f"{prefix}.molar_mass",
        air.molar_mass,
        "g/mol",
        FromTable(air.molar_mass_source, air.label),
        label=f"molar mass of dry air ({air.label})",
        symbol="M_air",
        decimals=3,
    )
    return AirEntries(oxygen, nitrogen, molar_mass)
