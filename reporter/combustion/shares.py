"""Readings as fractions of the flue gas, and the two sums of them that enter the balances.

Every reading counts on its own moisture basis.  A sum takes readings of one basis; a reading on the other
basis enters the other sum.  Nitrogen oxides count as NO, hydrocarbons as C_pH_q as the analyzer reports them.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from reporter.basis import Basis, Moisture, Need, OxygenKind
from reporter.combustion.air import BALANCE
from reporter.equation import Citation, Value, constant, equation
from reporter.errors import BasisError

_UNIT = Citation("units")
_READING = Need(oxygen=OxygenKind.AS_MEASURED)
_SYMBOLS = {
    "o2": "y_O2",
    "co2": "y_CO2",
    "co": "y_CO",
    "no": "y_NO",
    "hydrocarbon": "y_HC",
    "carbon_atoms": "p",
    "hydrogen_atoms": "q",
}


def one_moisture(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    """The moisture basis all inputs that have one share (`BasisError` where they differ)."""
    facets = {basis.moisture for basis in bases.values()} - {Moisture.NONE}
    if len(facets) > 1:
        found = ", ".join(f"{name} {basis.moisture.value}" for name, basis in bases.items())
        raise BasisError(f"a balance needs readings of one moisture basis, but has: {found}")
    return Basis(moisture=facets.pop() if facets else Moisture.NONE)


@equation("y", "1", {"reading": "%"}, _UNIT, needs={"reading": _READING}, gives="reading")
def fraction_of_percent(*, reading: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """A reading in percent as a fraction.

    Parameters
    ----------
    reading
        Concentration as measured [%, wet or dry].
    hundred
        All of it [%].

    Returns
    -------
    float
        y [1, same moisture basis].
    """
    return reading / hundred


@equation("y", "1", {"reading": "ppm"}, _UNIT, needs={"reading": _READING}, gives="reading")
def fraction_of_ppm(*, reading: Value, million: Value = constant(1e6, "ppm")) -> Value:
    """A reading in ppm as a fraction.

    Parameters
    ----------
    reading
        Concentration as measured [ppm, wet or dry].
    million
        All of it [ppm].

    Returns
    -------
    float
        y [1, same moisture basis].
    """
    return reading / million


_OXYGEN_INPUTS = ("o2", "co", "no", "hydrocarbon", "carbon_atoms", "hydrogen_atoms")


@equation(
    "g_O",
    "1",
    dict.fromkeys(_OXYGEN_INPUTS, "1"),
    BALANCE,
    symbols=_SYMBOLS,
    gives=one_moisture,
    difference=True,
)
def net_oxygen(
    *, o2: Value, co: Value, no: Value, hydrocarbon: Value, carbon_atoms: Value, hydrogen_atoms: Value
) -> Value:
    """Oxygen left beyond what the unburned gases would take, per mole of flue gas.

    Parameters
    ----------
    o2, co, no, hydrocarbon
        Fractions of the flue gas [1, one moisture basis].
    carbon_atoms, hydrogen_atoms
        p and q of the hydrocarbon as it is reported [1].

    Returns
    -------
    float
        g_O [mol O2 per mol of flue gas].
    """
    return o2 - co / 2 + no / 2 - (carbon_atoms + hydrogen_atoms / 4) * hydrocarbon


@equation(
    "g_D",
    "1",
    dict.fromkeys(("o2", "no", "hydrocarbon", "carbon_atoms"), "1"),
    BALANCE,
    symbols=_SYMBOLS,
    gives=one_moisture,
)
def added_moles(*, o2: Value, no: Value, hydrocarbon: Value, carbon_atoms: Value) -> Value:
    """Moles the measured gases add to the products of complete combustion, per mole of flue gas.

    Parameters
    ----------
    o2, no, hydrocarbon
        Fractions of the flue gas [1, one moisture basis]; CO takes the place of CO2 and adds nothing.
    carbon_atoms
        p of the hydrocarbon as it is reported [1].

    Returns
    -------
    float
        g_D [mol per mol of flue gas].
    """
    return o2 + no / 2 + (1 - carbon_atoms) * hydrocarbon


@equation(
    "g_C",
    "1",
    dict.fromkeys(("co2", "co", "hydrocarbon", "carbon_atoms"), "1"),
    BALANCE,
    symbols=_SYMBOLS,
    gives=one_moisture,
)
def measured_carbon(*, co2: Value, co: Value, hydrocarbon: Value, carbon_atoms: Value) -> Value:
    """Carbon in the measured gases, per mole of flue gas.

    Parameters
    ----------
    co2, co, hydrocarbon
        Fractions of the flue gas [1, one moisture basis].
    carbon_atoms
        p of the hydrocarbon as it is reported [1].

    Returns
    -------
    float
        g_C [mol C per mol of flue gas].
    """
    return co2 + co + carbon_atoms * hydrocarbon


@equation(
    "g_U",
    "1",
    dict.fromkeys(("co", "hydrocarbon", "hydrogen_atoms"), "1"),
    BALANCE,
    symbols=_SYMBOLS,
    gives=one_moisture,
)
def unburned_moles(*, co: Value, hydrocarbon: Value, hydrogen_atoms: Value) -> Value:
    """Moles by which unburned gases raise the dry products over the air, per mole of flue gas.

    It is the added moles less the net oxygen, with no O2 in either: where CO2 decides, O2 is an unknown.

    Parameters
    ----------
    co, hydrocarbon
        Fractions of the flue gas [1, one moisture basis].
    hydrogen_atoms
        q of the hydrocarbon as it is reported [1].

    Returns
    -------
    float
        g_U [mol per mol of flue gas].
    """
    return co / 2 + (1 + hydrogen_atoms / 4) * hydrocarbon
