"""Method 19's tables as typed rows: F factors of fuels and the factors from ppm to mass per volume.

F factors are used from the ft3/MMBtu column, converted exactly where a test is in SI; the printed metric
value stands beside with its difference.  The factors from ppm are used as printed in either system.
"""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from typing import Any

from reporter.basis import EPA_STANDARD, EPA_STANDARD_SI, Basis
from reporter.equation import Citation, System
from reporter.errors import RecordError
from reporter.gases import gas
from reporter.methods.mass_rate import mass_factor
from reporter.resources import table_text
from reporter.units import factor

DEFAULT_TABLE = "19-2"


@dataclass(frozen=True, slots=True)
class FuelFactor:
    """One F factor as printed: in ft3/MMBtu, in m3/J (None where not printed), and how sure each is."""

    us: float
    si: float | None
    status_us: str
    status_si: str

    def value(self, system: System) -> float:
        """The factor [ft3/MMBtu or m3/J]; in SI the exact conversion of the ft3/MMBtu value."""
        return self.us if system is System.US else self.us * factor("ft3/MMBtu", "m3/J")

    @property
    def difference(self) -> float | None:
        """Printed metric value against the exact conversion, relative; None where none is printed."""
        return None if self.si is None else self.si / self.value(System.SI) - 1.0


@dataclass(frozen=True, slots=True)
class FuelFactors:
    """The F factors of one fuel: dry, wet (None where the table has none) and carbon dioxide."""

    fuel: str
    row: str
    table: str
    citation: Citation
    fd: FuelFactor
    fw: FuelFactor | None
    fc: FuelFactor
    note: str


@dataclass(frozen=True, slots=True)
class MassFactor:
    """Factor from ppm to mass per volume: `us` [lb/ft3/ppm], `si` [ng/m3/ppm], printed or derived.

    `molar_mass` [g/mol] is the mass a derived factor follows from; None where the factor is printed.
    """

    gas: str
    us: float
    si: float
    printed: bool
    expressed_as: str
    molar_mass: float | None
    status_us: str
    status_si: str
    citation: Citation

    def value(self, system: System) -> float:
        """The factor in the unit of a system."""
        return self.us if system is System.US else self.si

    def basis(self, system: System) -> Basis:
        """Basis of the factor as a ledger entry."""
        standard = EPA_STANDARD if system is System.US else EPA_STANDARD_SI
        return Basis(standard=standard, expressed_as=self.expressed_as)


@dataclass(frozen=True, slots=True)
class UnitRow:
    """A row of Table 19-1 that only changes a unit."""

    source: str
    target: str
    printed: float
    status: str


@cache
def _tables() -> dict[str, Any]:
    return tomllib.loads(table_text("method_19.toml"))


def factor_tables() -> tuple[str, ...]:
    """Names of the tables of F factors, the first the default."""
    return tuple(_tables()["factor_tables"])


def fuel_names(table: str = DEFAULT_TABLE) -> tuple[str, ...]:
    """Fuels of a table of F factors."""
    return tuple(_tables()["fuels"][table])


def fuel_factors(fuel: str, table: str = DEFAULT_TABLE) -> FuelFactors:
    """The F factors of a fuel.

    Parameters
    ----------
    fuel
        Published fuel name, in any case.
    table
        One of `factor_tables`.

    Raises
    ------
    RecordError
        The table or the fuel is not known.
    """
    if table not in _tables()["fuels"]:
        raise RecordError(f"no table of F factors is called {table!r}")
    name = " ".join(fuel.lower().split())
    row = _tables()["fuels"][table].get(name)
    if row is None:
        raise RecordError(f"{fuel!r} is not a fuel of table {table}: {', '.join(fuel_names(table))}")
    about = _tables()["factor_tables"][table]
    return FuelFactors(
        fuel=name,
        row=row.get("row", name),
        table=table,
        citation=Citation(about["document"], "", about["number"]),
        fd=_cell(row["fd"]),
        fw=_cell(row["fw"]) if "fw" in row else None,
        fc=_cell(row["fc"]),
        note=row.get("note", ""),
    )


def _cell(cell: Mapping[str, Any]) -> FuelFactor:
    si = cell.get("si")
    return FuelFactor(
        float(cell["us"]), None if si is None else float(si), cell["status_us"], cell.get("status_si", "")
    )


@cache
def conversion(key: str) -> MassFactor:
    """The factor from ppm to mass per volume of a gas: as printed, else from its method molar mass.

    Parameters
    ----------
    key
        Key of a gas, e.g. ``nox``.
    """
    row = _tables()["conversions"].get(key)
    if row is not None:
        return MassFactor(
            gas=key,
            us=float(row["us"]),
            si=float(row["si"]),
            printed=True,
            expressed_as=row["expressed_as"],
            molar_mass=None,
            status_us=row["status_us"],
            status_si=row["status_si"],
            citation=Citation("m19", "", "Table 19-1"),
        )
    found = gas(key)
    return MassFactor(
        gas=key,
        us=mass_factor.evaluate({"molar_mass": found.method_mass}, System.US),
        si=mass_factor.evaluate({"molar_mass": found.method_mass}, System.SI),
        printed=False,
        expressed_as=found.expressed_as,
        molar_mass=found.method_mass,
        status_us="derived",
        status_si="derived",
        citation=mass_factor.citation,
    )


def unit_rows() -> tuple[UnitRow, ...]:
    """The rows of Table 19-1 that only change a unit."""
    return tuple(
        UnitRow(row["from"], row["to"], float(row["printed"]), row["status"])
        for row in _tables()["conversions_of_unit"]
    )
