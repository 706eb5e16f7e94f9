"""Fuels burned together as one fuel: amounts per kilogram of the mixture, by shares of heat input."""

from __future__ import annotations

from collections.abc import Mapping

from reporter.combustion.fuel_entries import by_mass
from reporter.combustion.stoichiometry_entries import enter_stoichiometry
from reporter.equation import Citation, Value, equation
from reporter.functions import dot, total
from reporter.ledger import Entry
from reporter.reduction.book import Book

_BALANCE = Citation("balance", "", "fuels burned together")
_HEAT = ("Btu/lb", "kJ/kg")
#: What a mixture needs of each fuel, all per kilogram.
AMOUNTS = ("carbon", "hydrogen", "oxygen", "nitrogen", "sulfur", "water", "inert", "combustion_water")


@equation(
    "m_k",
    ("lb/Btu", "kg/kJ"),
    {"share": "1", "heat": _HEAT},
    _BALANCE,
    symbols={"share": "X_k", "heat": "GCV_k"},
)
def mass_per_heat(*, share: Value, heat: Value) -> Value:
    """Mass of one fuel per unit of the heat of all.

    Parameters
    ----------
    share
        Share of heat input [1].
    heat
        Gross heating value of the fuel [Btu/lb or kJ/kg], not zero.

    Returns
    -------
    float
        Mass per heat [lb/Btu or kg/kJ].
    """
    return share / heat


@equation(
    "n",
    "mol/kg",
    {"masses": "*m", "amounts": "mol/kg"},
    _BALANCE,
    symbols={"masses": "m_k", "amounts": "n_k"},
    series=("masses", "amounts"),
)
def mixed_amount(*, masses: Value, amounts: Value) -> Value:
    """Amount per kilogram of fuels burned together.

    Parameters
    ----------
    masses
        Mass of each fuel per unit of heat [lb/Btu or kg/kJ], a series.
    amounts
        Amount in each fuel [mol/kg], a series.

    Returns
    -------
    float
        Amount in the mixture [mol/kg].
    """
    return dot(masses, amounts) / total(masses)


@equation(
    "GCV",
    _HEAT,
    {"masses": ("lb/Btu", "kg/kJ"), "shares": "1"},
    _BALANCE,
    symbols={"masses": "m_k", "shares": "X_k"},
    series=("masses", "shares"),
)
def mixed_heat(*, masses: Value, shares: Value) -> Value:
    """Gross heating value of fuels burned together.

    Parameters
    ----------
    masses
        Mass of each fuel per unit of heat [lb/Btu or kg/kJ], a series.
    shares
        Share of heat input of each fuel [1], a series that sums to 1.

    Returns
    -------
    float
        Gross heating value [Btu/lb or kJ/kg].
    """
    return total(shares) / total(masses)


def enter_blend(
    book: Book,
    stem: str,
    fuels: Mapping[str, str],
    shares: Mapping[str, Entry],
    heats: Mapping[str, Entry | None],
) -> str | None:
    """Enter the mixture of a run under `stem`, from compositions (key stems by fuel name), shares and heats.

    None where a fuel has no heating value to weigh it by.
    """
    if any(heat is None for heat in heats.values()):
        return None
    masses = [
        book.apply(mass_per_heat, f"{stem}.mass_per_heat_{number}", {"share": shares[name], "heat": heat})
        for number, (name, heat) in enumerate(heats.items(), 1)
        if heat is not None
    ]
    for amount in AMOUNTS:
        each = [by_mass(book.ledger, prefix, amount) for prefix in fuels.values()]
        book.apply(mixed_amount, f"{stem}.{amount}", {"masses": masses, "amounts": each})
    weights = {"masses": masses, "shares": [shares[name] for name in fuels]}
    book.apply(mixed_heat, f"{stem}.gross_heating_value", weights)
    enter_stoichiometry(book.ledger, stem)
    return stem
