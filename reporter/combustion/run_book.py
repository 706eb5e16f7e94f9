"""What the entries of one balance share: where they go, the readings as fractions, and the sums of them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from reporter.basis import AS_MEASURED, NO_BASIS, Basis, Moisture
from reporter.combustion import shares
from reporter.combustion.air import AirEntries, humidity_from_moisture
from reporter.combustion.components import atoms_of
from reporter.combustion.products import burned_carbon
from reporter.combustion.stoichiometry import fuel_products, stoichiometric_oxygen
from reporter.combustion.stoichiometry_entries import enter_fuel_products, enter_oxygen_needed
from reporter.equation import Citation, Equation
from reporter.errors import BasisError, LedgerError
from reporter.ledger import Entry, FromTable, Given, Ledger, Stated

GASES = {
    "o2": "oxygen",
    "co2": "carbon dioxide",
    "co": "carbon monoxide",
    "no": "nitrogen oxides as NO",
    "hydrocarbon": "unburned hydrocarbon",
}


_SYMBOLS = {name: "HC" if name == "hydrocarbon" else name.upper() for name in GASES}


@dataclass(frozen=True, slots=True)
class FlueGas:
    """What was measured in one run, as ledger entries.

    Gases are in % or ppm as measured, each dry or wet by its basis; nitrogen oxides count as NO.  The
    hydrocarbon is what its analyzer reports it as (`hydrocarbon_formula`).  `moisture` is the moisture
    fraction of the flue gas, only compared; `air_moisture` that of the combustion air (absent: dry air).
    `unburned_carbon` is carbon in soot and ash [mol per kg or mol of fuel].
    """

    o2: Entry | None = None
    co2: Entry | None = None
    co: Entry | None = None
    no: Entry | None = None
    hydrocarbon: Entry | None = None
    hydrocarbon_formula: str = "CH4"
    moisture: Entry | None = None
    air_moisture: Entry | None = None
    unburned_carbon: Entry | None = None

    def reading(self, name: str) -> Entry | None:
        """The reading of one of `GASES`."""
        found: Entry | None = getattr(self, name)
        return found

    @property
    def readings(self) -> tuple[Entry, ...]:
        """All readings there are, moistures included."""
        given = (*(self.reading(name) for name in GASES), self.moisture, self.air_moisture)
        return tuple(entry for entry in given if entry is not None)

    @property
    def wet(self) -> tuple[Entry, ...]:
        """The gases read on wet gas."""
        given = (self.reading(name) for name in GASES)
        return tuple(entry for entry in given if entry and entry.basis.moisture is Moisture.WET)


@dataclass
class RunBook:
    """The ledger, the key prefix of the balance and of its fuel, the readings, the air, and entries so far."""

    ledger: Ledger
    prefix: str
    fuel: str
    gas: FlueGas
    air: AirEntries
    fractions: dict[str, Entry] = field(default_factory=dict)

    def of_fuel(self, name: str) -> Entry:
        """An entry of the fuel."""
        return self.ledger[f"{self.fuel}.{name}"]

    def apply(self, eq: Equation[Any], name: str, inputs: Mapping[str, Given], label: str, symbol: str = "") -> Entry:
        """Compute and record under this balance's prefix."""
        return self.ledger.apply(eq, f"{self.prefix}.{name}", inputs, label=label, symbol=symbol)

    def stated(
        self, name: str, value: float, reason: str, *, label: str, symbol: str = "", basis: Basis = NO_BASIS
    ) -> Entry:
        """A pure number that is stated, once."""
        key = f"{self.prefix}.{name}"
        found = self.ledger.get(key)
        if found is not None:
            return found
        return self.ledger.enter(key, value, "1", Stated(reason), basis=basis, label=label, symbol=symbol)

    def no_amount(self, name: str, reason: str, label: str) -> Entry:
        """An amount that is taken as zero, and why."""
        unit = self.of_fuel("carbon").unit
        symbol = f"n_{_SYMBOLS.get(name, name.upper())}"
        return self.ledger.enter(f"{self.prefix}.{name}", 0.0, unit, Stated(reason), label=label, symbol=symbol)

    # ---- readings -------------------------------------------------------------------------------------

    def fraction(self, name: str) -> Entry:
        """A reading as a fraction; zero, and said so, where there is none."""
        if name not in self.fractions:
            self.fractions[name] = self._fraction(name)
        return self.fractions[name]

    def _fraction(self, name: str) -> Entry:
        reading = self.gas.reading(name)
        if reading is None:
            reason = f"{GASES[name]} not measured: taken as zero"
            words = f"{GASES[name]}, fraction of the flue gas"
            dry = _as_measured(Moisture.DRY)
            return self.stated(f"{name}_fraction", 0.0, reason, label=words, symbol=f"y_{_SYMBOLS[name]}", basis=dry)
        if reading.basis.moisture not in (Moisture.DRY, Moisture.WET):
            raise BasisError(f"{reading.key} must be dry or wet, but is {reading.basis.moisture.value or 'neither'}")
        by_unit: dict[str, Equation[Any]] = {
            "%": shares.fraction_of_percent,
            "ppm": shares.fraction_of_ppm,
        }
        eq = by_unit.get(reading.unit)
        if eq is None:
            raise LedgerError(f"{reading.key} must be in % or ppm, but is in {reading.unit or '1'}")
        words = f"{GASES[name]}, fraction of the {reading.basis.moisture.value} gas"
        return self.apply(eq, f"{name}_fraction", {"reading": reading}, words, f"y_{_SYMBOLS[name]}")

    def sum_of(
        self, eq: Equation[Any], name: str, label: str, moisture: Moisture = Moisture.DRY, open_gas: str = ""
    ) -> Entry:
        """A sum of the readings of one moisture basis; `open_gas` is an unknown and stays out of it."""
        inputs: dict[str, Given] = {}
        for argument in eq.parameters:
            if argument in ("carbon_atoms", "hydrogen_atoms"):
                inputs[argument] = self.atoms(argument)
                continue
            found = None if argument == open_gas else self.fraction(argument)
            fits = found is not None and found.basis.moisture is moisture
            inputs[argument] = found if found is not None and fits else self.absent(moisture)
        return self.apply(eq, name, inputs, label)

    def absent(self, moisture: Moisture) -> Entry:
        """Zero for a gas that is not read on a moisture basis, or is the unknown."""
        reason = f"no reading on {moisture.value} gas"
        return self.stated(
            f"no_reading_{moisture.value}", 0.0, reason, label=reason, symbol="y", basis=_as_measured(moisture)
        )

    def atoms(self, argument: str) -> Entry:
        """Atoms of carbon or hydrogen in the hydrocarbon as it is reported."""
        key = f"{self.prefix}.hydrocarbon_{argument}"
        found = self.ledger.get(key)
        if found is not None:
            return found
        formula = self.gas.hydrocarbon_formula
        count = float(atoms_of(formula).get("C" if argument == "carbon_atoms" else "H", 0))
        origin = FromTable(Citation("balance", "", "formula"), formula)
        words = f"{argument.replace('_', ' ')} of the hydrocarbon as {formula}"
        return self.ledger.enter(key, count, "1", origin, label=words)

    def need_dry(self) -> None:
        """Refuse readings on wet gas.

        Raises
        ------
        BasisError
            There is one.
        """
        for entry in self.gas.wet:
            raise BasisError(f"{entry.key} must be dry for this balance, but is wet")

    # ---- air and fuel ---------------------------------------------------------------------------------

    def humidity(self) -> Entry:
        """Water per mole of dry air."""
        key = f"{self.prefix}.air_humidity"
        found = self.ledger.get(key)
        if found is not None:
            return found
        if self.gas.air_moisture is None:
            reason = "no moisture of the air entered: taken as dry"
            return self.stated("air_humidity", 0.0, reason, label="water per mole of dry air", symbol="w")
        inputs = {"moisture": self.gas.air_moisture}
        return self.apply(humidity_from_moisture, "air_humidity", inputs, "water per mole of dry air")

    def carbon(self) -> Entry:
        """Carbon that leaves as gas."""
        if self.gas.unburned_carbon is None:
            return self.of_fuel("carbon")
        inputs = {"carbon": self.of_fuel("carbon"), "unburned": self.gas.unburned_carbon}
        found = self.ledger.get(f"{self.prefix}.carbon_burned")
        return found or self.apply(burned_carbon, "carbon_burned", inputs, "carbon that leaves as gas")

    def oxygen_needed(self) -> Entry:
        """Stoichiometric oxygen of what leaves as gas."""
        if self.gas.unburned_carbon is None:
            return enter_oxygen_needed(self.ledger, self.fuel)
        inputs: dict[str, Given] = {name: self.of_fuel(name) for name in ("hydrogen", "sulfur", "oxygen")}
        inputs["carbon"] = self.carbon()
        found = self.ledger.get(f"{self.prefix}.oxygen_needed")
        words = "oxygen for what leaves as gas"
        return found or self.apply(stoichiometric_oxygen, "oxygen_needed", inputs, words)

    def from_fuel(self) -> Entry:
        """Dry products that come from the fuel itself."""
        if self.gas.unburned_carbon is None:
            return enter_fuel_products(self.ledger, self.fuel)
        inputs: dict[str, Given] = {name: self.of_fuel(name) for name in ("sulfur", "nitrogen", "inert")}
        inputs["carbon"] = self.carbon()
        found = self.ledger.get(f"{self.prefix}.fuel_products")
        words = "dry products of the fuel itself"
        return found or self.apply(fuel_products, "fuel_products", inputs, words)


def _as_measured(moisture: Moisture) -> Basis:
    return Basis(moisture=moisture, oxygen=AS_MEASURED)
