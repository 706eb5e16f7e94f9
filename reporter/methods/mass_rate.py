"""From parts per million to mass per volume (Method 19, Table 19-1) and on to a mass rate."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from reporter.basis import EPA_STANDARD, NO_VOLUME, Basis, Need, OxygenKind
from reporter.equation import Citation, Value, constant, equation
from reporter.errors import BasisError

_MASS = ("lb/ft3", "ng/m3")
_RATE = ("lb/h", "kg/h")
_UNITS = Citation("units")
_TABLE_19_1 = Citation("m19", "", "Table 19-1")


def _mass_basis(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    volume, factor = bases["c"], bases["k"]
    names = {name for name in (volume.expressed_as, factor.expressed_as) if name}
    if len(names) > 1:
        raise BasisError(f"ppm_to_mass: c is expressed as {volume.expressed_as}, but k is for {factor.expressed_as}")
    return volume.but(standard=factor.standard, expressed_as=names.pop() if names else "")


@equation(
    "C",
    _MASS,
    {"c": "ppm", "k": ("lb/ft3/ppm", "ng/m3/ppm")},
    _TABLE_19_1,
    symbols={"c": "C_ppm", "k": "K"},
    needs={"c": Need(standard=NO_VOLUME), "k": Need(standard=EPA_STANDARD)},
    gives=_mass_basis,
)
def ppm_to_mass(*, c: Value, k: Value) -> Value:
    """Mass per standard volume from parts per million by volume.

    Parameters
    ----------
    c
        Concentration [ppm].
    k
        Factor of Table 19-1 for the gas [lb/ft3/ppm or ng/m3/ppm; at 68 °F and 29.92 inHg].

    Returns
    -------
    float
        Concentration [lb/ft3 or ng/m3], on the moisture and oxygen basis of `c` at standard conditions.

    Raises
    ------
    BasisError
        In a ledger, where `k` is for another gas than `c` is expressed as.
    """
    return c * k


@equation(
    "K",
    ("lb/ft3/ppm", "ng/m3/ppm"),
    {"molar_mass": ("lb/lbmol", "g/mol")},
    Citation("m19", "", "Table 19-1, extended by the molar volume at 68 °F and 29.92 inHg"),
    symbols={"molar_mass": "M"},
    gives=Basis(standard=EPA_STANDARD),
)
def mass_factor(
    *,
    molar_mass: Value,
    molar_volume: Value = constant(385.3, ("ft3/lbmol", "m3/mol"), "V_m", si=0.024055),
    per_ppm: Value = constant(1e-6, ("1/ppm", "ng/g/ppm"), si=1e3),
) -> Value:
    """Factor from ppm to mass per standard volume for a gas that Table 19-1 does not list.

    Parameters
    ----------
    molar_mass
        Molar mass of the gas, or of what it is expressed as [lb/lbmol or g/mol].
    molar_volume
        Volume of one mole at 68 °F and 29.92 inHg [385.3 ft3/lbmol or 0.024055 m3/mol].
    per_ppm
        One part per million, in SI with the nanograms of a gram.

    Returns
    -------
    float
        K [lb/ft3/ppm or ng/m3/ppm].
    """
    return molar_mass / molar_volume * per_ppm


def _kept(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    return Basis(expressed_as=bases["e"].expressed_as)


@equation(
    "W",
    _RATE,
    {"e": ("lb/MMBtu", "ng/J"), "heat_input": ("MMBtu/h", "GJ/h")},
    Citation("practice", "", "emission rate times heat input"),
    symbols={"e": "E", "heat_input": "H"},
    gives=_kept,
)
def mass_rate_by_heat_input(
    *,
    e: Value,
    heat_input: Value,
    scale: Value = constant(1.0, ("1", "kg*J/ng/GJ"), "k_u", si=1e-3, cite=_UNITS),
) -> Value:
    """Mass rate from an emission rate and the heat input.

    Parameters
    ----------
    e
        Emission rate [lb/MMBtu or ng/J].
    heat_input
        Heat input, gross [MMBtu/h or GJ/h].
    scale
        Factor between the units: 1, in SI 0.001 kg·J/(ng·GJ).

    Returns
    -------
    float
        Mass rate [lb/h or kg/h].
    """
    return e * heat_input * scale


def _matched(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    c, flow = bases["c"], bases["flow"]
    if c.moisture is not flow.moisture or not c.standard.same(flow.standard):
        raise BasisError(
            f"mass_rate_by_flow: the concentration is {c.text() or 'without basis'}, "
            f"but the flow is {flow.text() or 'without basis'}"
        )
    return Basis(expressed_as=c.expressed_as)


@equation(
    "W",
    _RATE,
    {"c": _MASS, "flow": ("ft3/h", "m3/h")},
    Citation("practice", "", "concentration times flow"),
    symbols={"c": "C", "flow": "Q"},
    needs={"c": Need(oxygen=OxygenKind.AS_MEASURED)},
    gives=_matched,
)
def mass_rate_by_flow(
    *,
    c: Value,
    flow: Value,
    scale: Value = constant(1.0, ("1", "kg/ng"), "k_u", si=1e-12, cite=_UNITS),
) -> Value:
    """Mass rate from a concentration and a flow on the same moisture basis and at the same conditions.

    Parameters
    ----------
    c
        Concentration [lb/ft3 or ng/m3; as measured].
    flow
        Flow [ft3/h or m3/h; moisture and standard conditions of `c`].
    scale
        Factor between the units: 1, in SI 1e-12 kg/ng.

    Returns
    -------
    float
        Mass rate [lb/h or kg/h].

    Raises
    ------
    BasisError
        In a ledger, where moisture or standard conditions of the two differ.
    """
    return c * flow * scale
