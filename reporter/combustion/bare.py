"""The balance of bare numbers: a ledger of its own behind the scenes, so that no equation is written twice."""

from __future__ import annotations

from collections.abc import Collection, Mapping

from reporter.basis import DRY, NO_BASIS, WET
from reporter.combustion.air import Air
from reporter.combustion.fuel import Fuel
from reporter.combustion.fuel_entries import enter_fuel
from reporter.combustion.run import balance_given_air, balance_run
from reporter.combustion.run_book import GASES, FlueGas
from reporter.combustion.state import State
from reporter.equation import System
from reporter.errors import RecordError
from reporter.ledger import Entry, Ledger, Stated

_UNITS = {"o2": "%", "co2": "%", "co": "ppm", "no": "ppm", "hydrocarbon": "ppm"}
_FRACTIONS = ("moisture", "air_moisture")


def balance(
    fuel: Fuel,
    readings: Mapping[str, float],
    *,
    wet: Collection[str] = (),
    hydrocarbon_formula: str = "CH4",
    air: Air | None = None,
    air_burned: float | None = None,
) -> State:
    """Solve the balance of one set of readings.

    Parameters
    ----------
    fuel
        The fuel.
    readings
        `o2`, `co2` [%]; `co`, `no`, `hydrocarbon` [ppm]; `moisture` of the flue gas and `air_moisture` of the
        combustion air [fraction].
    wet
        Names of the readings on wet gas; the others are dry.
    hydrocarbon_formula
        What the hydrocarbon is reported as.
    air
        The model of dry air; 20.95 % oxygen where absent.
    air_burned
        Dry air [mol per kg or mol of fuel], where it is known.

    Raises
    ------
    RecordError
        A reading of another name.

    Examples
    --------
    >>> from reporter.combustion.fuel import fuel_from_formula
    >>> round(balance(fuel_from_formula("CH4"), {"o2": 3.0}).value("co2_expected"), 2)
    10.03
    """
    unknown = [name for name in readings if name not in (*GASES, *_FRACTIONS)]
    if unknown:
        raise RecordError(f"{unknown[0]!r} is no reading of a balance: {', '.join((*GASES, *_FRACTIONS))}")
    ledger = Ledger(System.SI)
    enter_fuel(ledger, "fuel.it", fuel)
    given = {name: _enter(ledger, name, value, name in wet) for name, value in readings.items()}
    gas = FlueGas(**given, hydrocarbon_formula=hydrocarbon_formula)
    if air_burned is None:
        return balance_run(ledger, "run.it.combustion", "fuel.it", gas, air=air)
    origin = Stated("as given")
    burned = ledger.enter("reading.air", air_burned, fuel.amount_unit, origin, label="dry air burned")
    return balance_given_air(ledger, "run.it.combustion", "fuel.it", burned, gas=gas, air=air)


def _enter(ledger: Ledger, name: str, value: float, is_wet: bool) -> Entry:
    basis = NO_BASIS if name in _FRACTIONS else WET if is_wet else DRY
    label = GASES.get(name, name.replace("_", " "))
    unit = _UNITS.get(name, "1")
    return ledger.enter(f"reading.{name}", value, unit, Stated("as given"), basis=basis, label=label)
