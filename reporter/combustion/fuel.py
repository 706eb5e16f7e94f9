"""Fuels as they are given: an analysis by weight, a gas composition, a published name.

By weight, hydrogen and oxygen are those of the fuel substance; the fuel's moisture is the share `water`, and
its hydrogen and oxygen are not counted again, unless `hydrogen_includes_water` says that they are in the
figures.  In a gas, the carbon and oxygen of CO2 and the nitrogen of N2 belong to the fuel; inert gas is argon
and helium only.
"""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from enum import Enum
from functools import cache
from typing import Any

from reporter.combustion.components import atoms_of, find_component
from reporter.equation import Citation
from reporter.errors import RecordError
from reporter.resources import table_text

#: Shares of an analysis by weight, in the order they are printed.
ANALYSIS = ("carbon", "hydrogen", "oxygen", "nitrogen", "sulfur", "ash", "water")
#: How far the shares may be from 100 %: by weight (rounding, oxygen by difference), by mole.
WEIGHT_TOLERANCE = 1.0
MOLE_TOLERANCE = 0.5
ENTERED = Citation("record")


class FuelKind(Enum):
    """What a fuel is given by: weight (solid, liquid) or moles (gas)."""

    SOLID = "solid"
    LIQUID = "liquid"
    GAS = "gas"


class AnalysisBasis(Enum):
    """What the percentages by weight and the heating value are of."""

    AS_FIRED = "as fired"
    DRY = "dry"


@dataclass(frozen=True, slots=True)
class Share:
    """Percent of one element, of ash or water (by weight), or of one component (by mole).

    `spread` is half of the usual range, in the same percent, where the composition is assumed.
    """

    name: str
    percent: float
    spread: float = 0.0


@dataclass(frozen=True, slots=True)
class Fuel:
    """A fuel as given.

    `heat` is the gross heating value by weight [kJ/kg] on `basis` (None: not given; a gas has it from its
    components).  `assumed` says that the composition is a nominal one and not that of the fuel burned.
    """

    name: str
    kind: FuelKind
    shares: tuple[Share, ...]
    heat: float | None = None
    heat_spread: float = 0.0
    basis: AnalysisBasis = AnalysisBasis.AS_FIRED
    hydrogen_includes_water: bool = False
    assumed: bool = False
    citation: Citation = ENTERED

    @property
    def is_gas(self) -> bool:
        """Whether amounts are per mole of fuel; else per kg."""
        return self.kind is FuelKind.GAS

    @property
    def amount_unit(self) -> str:
        """Unit of its amounts."""
        return "mol/mol" if self.is_gas else "mol/kg"

    def percent(self, name: str) -> float:
        """The percent of a share; 0 where there is none."""
        return next((share.percent for share in self.shares if share.name == name), 0.0)


def fuel_from_analysis(
    name: str,
    percents: Mapping[str, float],
    *,
    heat: float | None = None,
    basis: AnalysisBasis = AnalysisBasis.AS_FIRED,
    kind: FuelKind = FuelKind.SOLID,
    hydrogen_includes_water: bool = False,
) -> Fuel:
    """A fuel from its ultimate analysis.

    Parameters
    ----------
    name
        What it is called.
    percents
        Percent by weight of `carbon`, `hydrogen`, `oxygen`, `nitrogen`, `sulfur`, `ash` and `water`; a share
        not named is zero.  On a dry basis `water` is that of the fuel as fired, the others are of dry fuel.
    heat
        Gross heating value [kJ/kg, on `basis`].
    basis
        What the percentages and the heating value are of.
    kind
        Solid or liquid.
    hydrogen_includes_water
        Whether as-fired hydrogen and oxygen include those of the water.

    Raises
    ------
    RecordError
        An unknown share, one below zero or above 100 %, or a sum off 100 % by more than `WEIGHT_TOLERANCE`.
    """
    unknown = [share for share in percents if share not in ANALYSIS]
    if unknown:
        raise RecordError(f"{name}: {unknown[0]!r} is no share of an analysis: {', '.join(ANALYSIS)}")
    if hydrogen_includes_water and basis is AnalysisBasis.DRY:
        raise RecordError(f"{name}: hydrogen on a dry basis cannot include that of the water")
    shares = tuple(Share(share, float(percents[share])) for share in ANALYSIS if share in percents)
    _check_range(name, shares)
    apart = basis is AnalysisBasis.DRY or hydrogen_includes_water
    total = sum(share.percent for share in shares if not (apart and share.name == "water"))
    _check_sum(name, total, WEIGHT_TOLERANCE, "weight")
    if heat is not None and heat <= 0:
        raise RecordError(f"{name}: a heating value of {heat:g} kJ/kg was found; it must be above zero")
    return Fuel(
        name,
        kind,
        shares,
        heat=heat,
        basis=basis,
        hydrogen_includes_water=hydrogen_includes_water,
    )


def fuel_from_gas(name: str, percents: Mapping[str, float]) -> Fuel:
    """A gas fuel from its composition.

    Parameters
    ----------
    name
        What it is called.
    percents
        Mole percent by component, as people write it (``CH4``, ``methane``, ``n-butane``).  Amounts are per
        mole of the sum, which must be 100 within `MOLE_TOLERANCE`.

    Raises
    ------
    RecordError
        An unknown or repeated component, a share below zero or above 100 %, or a sum off 100 %.
    """
    found: dict[str, float] = {}
    for text, percent in percents.items():
        row = find_component(text)
        if row is None:
            raise RecordError(f"{name}: {text!r} is not a component of gas fuels known here")
        if row.key in found:
            raise RecordError(f"{name}: {row.label} is given twice")
        found[row.key] = float(percent)
    shares = tuple(Share(key, percent) for key, percent in found.items())
    _check_range(name, shares)
    _check_sum(name, sum(found.values()), MOLE_TOLERANCE, "mole")
    return Fuel(name, FuelKind.GAS, shares)


def fuel_from_formula(formula: str) -> Fuel:
    """A fuel of one kind of molecule, e.g. ``C12H23``; its heating value is known for components only.

    Raises
    ------
    RecordError
        It is no formula of C, H, O, N, S, Ar and He.
    """
    atoms = atoms_of(formula)
    row = find_component(formula)
    key = row.key if row is not None and row.atoms == atoms else formula
    return Fuel(formula, FuelKind.GAS, (Share(key, 100.0),))


@cache
def _nominal() -> dict[str, Any]:
    return tomllib.loads(table_text("nominal_fuels.toml"))


def nominal_names() -> tuple[str, ...]:
    """The published fuel names that have a nominal composition."""
    return tuple(_nominal())


def nominal_fuel(name: str) -> Fuel:
    """The assumed composition of a published fuel name, with its spread.

    Raises
    ------
    RecordError
        No such name is published.
    """
    known = " ".join(name.lower().split())
    row = _nominal().get(known)
    if row is None:
        raise RecordError(f"{name!r} is not a published fuel name: {', '.join(nominal_names())}")
    return Fuel(
        name=known,
        kind=FuelKind(row["kind"]),
        shares=tuple(Share(key, share, row["spread"][key]) for key, share in row["share"].items()),
        heat=row.get("heat"),
        heat_spread=row.get("heat_spread", 0.0),
        assumed=True,
        citation=Citation("practice", "", "typical composition"),
    )


def nominal_reach(name: str) -> tuple[float, float]:
    """How far the spread of a published fuel reaches in its highest CO2, and in its water for each dry gas [%].

    Examples
    --------
    >>> nominal_reach("natural gas")
    (1.473, 1.316)
    """
    row = _nominal()[" ".join(name.lower().split())]["reach"]
    return row["co2"], row["water"]


def _check_range(name: str, shares: tuple[Share, ...]) -> None:
    for share in shares:
        if not 0.0 <= share.percent <= 100.0:
            raise RecordError(f"{name}: {share.percent:g} % of {share.name} was found; 0 to 100 % is expected")


def _check_sum(name: str, total: float, tolerance: float, by: str) -> None:
    if abs(total - 100.0) > tolerance:
        raise RecordError(
            f"{name}: the shares by {by} sum to {total:.2f} %; 100 % within {tolerance:g} % is expected. "
            "Look for a share left out, or for percentages on two bases"
        )
