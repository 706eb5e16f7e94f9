"""Method 19: emission rates by F factors, Eqs. 19-1 to 19-9, and what is needed to choose and use them.

The oxygen of dry air is 20.9 percent here, always, whatever constant a limit uses for its reference oxygen.
Moisture is a fraction.  Concentrations are masses per volume at 68 °F and 29.92 inHg; the moisture, oxygen
and standard-condition facets end with the emission rate, expressed-as goes on.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from enum import Enum
from typing import Any, ParamSpec

from reporter.basis import (
    EPA_STANDARD,
    NEED_DRY,
    NEED_WET,
    Basis,
    Moisture,
    Need,
    OxygenKind,
)
from reporter.equation import Citation, Equation, UnitSpec, Value, constant, equation
from reporter.errors import BasisError

P = ParamSpec("P")
_RATE = ("lb/MMBtu", "ng/J")
_MASS = ("lb/ft3", "ng/m3")
_FACTOR = ("ft3/MMBtu", "m3/J")
_C_DRY = Need(Moisture.DRY, OxygenKind.AS_MEASURED, EPA_STANDARD)
_C_WET = Need(Moisture.WET, OxygenKind.AS_MEASURED, EPA_STANDARD)
_FD = Need(moisture=Moisture.DRY, standard=EPA_STANDARD)
_FW = Need(moisture=Moisture.WET, standard=EPA_STANDARD)
_FC = Need(standard=EPA_STANDARD)
_SYMBOLS = {
    "cd": "C_d",
    "cw": "C_w",
    "fd": "F_d",
    "fw": "F_w",
    "fc": "F_c",
    "bws": "B_ws",
    "bwa": "B_wa",
}
#: Basis of the F factors as ledger entries: dry, wet and carbon dioxide, at Method 19's standard conditions.
FD_BASIS = Basis(moisture=Moisture.DRY, standard=EPA_STANDARD)
FW_BASIS = Basis(moisture=Moisture.WET, standard=EPA_STANDARD)
FC_BASIS = Basis(standard=EPA_STANDARD)


def _cite(section: str, number: str = "") -> Citation:
    return Citation("m19", section, number)


def _rate(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
    concentration = bases["cd"] if "cd" in bases else bases["cw"]
    return Basis(expressed_as=concentration.expressed_as)


_NEEDS = {"cd": _C_DRY, "cw": _C_WET, "fd": _FD, "fw": _FW, "fc": _FC}
_UNITS: Mapping[str, UnitSpec] = {
    "cd": _MASS,
    "cw": _MASS,
    "fd": _FACTOR,
    "fw": _FACTOR,
    "fc": _FACTOR,
    "bws": "1",
    "bwa": "1",
}


def _form(
    number: int, section: str, names: tuple[str, ...], diluent: str, dry: bool
) -> Callable[[Callable[P, Any]], Equation[P]]:
    """The decorator of one of the nine forms: the common part of their units, symbols and needs."""
    units: dict[str, UnitSpec] = {name: _UNITS[name] for name in names}
    return equation(
        "E",
        _RATE,
        {**units, diluent: "%"},
        _cite(section, f"Eq. 19-{number}"),
        symbols=_SYMBOLS | {diluent: f"%{diluent.upper()}_{'d' if dry else 'w'}"},
        needs={n: _NEEDS[n] for n in names if n in _NEEDS} | {diluent: NEED_DRY if dry else NEED_WET},
        gives=_rate,
    )


@_form(1, "12.2.1", ("cd", "fd"), "o2", True)
def eq_19_1(*, cd: Value, fd: Value, o2: Value, air: Value = constant(20.9, "%")) -> Value:
    """Emission rate from a dry concentration and dry oxygen.

    Parameters
    ----------
    cd
        Pollutant concentration [lb/ft3 or ng/m3; dry].
    fd
        Dry F factor [ft3/MMBtu or m3/J].
    o2
        Oxygen [%; dry], below 20.9.
    air
        Oxygen of dry air, 20.9 [%].

    Returns
    -------
    float
        E [lb/MMBtu or ng/J].
    """
    return cd * fd * air / (air - o2)


@_form(2, "12.2.2.1", ("cw", "fw", "bwa"), "o2", False)
def eq_19_2(*, cw: Value, fw: Value, bwa: Value, o2: Value, air: Value = constant(20.9, "%")) -> Value:
    """Emission rate from a wet concentration and wet oxygen, with the moisture of the ambient air.

    Not for a stack where water is added or removed, e.g. behind a wet scrubber.

    Parameters
    ----------
    cw
        Pollutant concentration [lb/ft3 or ng/m3; wet].
    fw
        Wet F factor [ft3/MMBtu or m3/J].
    bwa
        Moisture of the ambient air as a fraction [1].
    o2
        Oxygen [%; wet].
    air
        Oxygen of dry air, 20.9 [%].

    Returns
    -------
    float
        E [lb/MMBtu or ng/J].
    """
    return cw * fw * air / (air * (1 - bwa) - o2)


@_form(3, "12.2.2.2", ("cw", "fd", "bws"), "o2", False)
def eq_19_3(*, cw: Value, fd: Value, bws: Value, o2: Value, air: Value = constant(20.9, "%")) -> Value:
    """Emission rate from a wet concentration and wet oxygen, with the moisture of the stack gas.

    Parameters
    ----------
    cw
        Pollutant concentration [lb/ft3 or ng/m3; wet].
    fd
        Dry F factor [ft3/MMBtu or m3/J].
    bws
        Moisture of the stack gas as a fraction [1].
    o2
        Oxygen [%; wet].
    air
        Oxygen of dry air, 20.9 [%].

    Returns
    -------
    float
        E [lb/MMBtu or ng/J].
    """
    return cw * fd * air / (air * (1 - bws) - o2)


@_form(4, "12.2.3.1", ("cw", "fd", "bws"), "o2", True)
def eq_19_4(*, cw: Value, fd: Value, bws: Value, o2: Value, air: Value = constant(20.9, "%")) -> Value:
    """Emission rate from a wet concentration and dry oxygen.

    Parameters
    ----------
    cw
        Pollutant concentration [lb/ft3 or ng/m3; wet].
    fd
        Dry F factor [ft3/MMBtu or m3/J].
    bws
        Moisture of the stack gas as a fraction [1].
    o2
        Oxygen [%; dry], below 20.9.
    air
        Oxygen of dry air, 20.9 [%].

    Returns
    -------
    float
        E [lb/MMBtu or ng/J].
    """
    return cw * fd * air / ((1 - bws) * (air - o2))


@_form(5, "12.2.3.2", ("cd", "fd", "bws"), "o2", False)
def eq_19_5(*, cd: Value, fd: Value, bws: Value, o2: Value, air: Value = constant(20.9, "%")) -> Value:
    """Emission rate from a dry concentration and wet oxygen.

    Parameters
    ----------
    cd
        Pollutant concentration [lb/ft3 or ng/m3; dry].
    fd
        Dry F factor [ft3/MMBtu or m3/J].
    bws
        Moisture of the stack gas as a fraction [1].
    o2
        Oxygen [%; wet].
    air
        Oxygen of dry air, 20.9 [%].

    Returns
    -------
    float
        E [lb/MMBtu or ng/J].
    """
    return cd * fd * air / (air - o2 / (1 - bws))


@_form(6, "12.2.4", ("cd", "fc"), "co2", True)
def eq_19_6(*, cd: Value, fc: Value, co2: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Emission rate from a dry concentration and dry carbon dioxide.

    Parameters
    ----------
    cd
        Pollutant concentration [lb/ft3 or ng/m3; dry].
    fc
        Carbon dioxide F factor [ft3/MMBtu or m3/J].
    co2
        Carbon dioxide [%; dry], above zero.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        E [lb/MMBtu or ng/J].
    """
    return cd * fc * hundred / co2


@_form(7, "12.2.5", ("cw", "fc"), "co2", False)
def eq_19_7(*, cw: Value, fc: Value, co2: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Emission rate from a wet concentration and wet carbon dioxide.

    Parameters
    ----------
    cw
        Pollutant concentration [lb/ft3 or ng/m3; wet].
    fc
        Carbon dioxide F factor [ft3/MMBtu or m3/J].
    co2
        Carbon dioxide [%; wet], above zero.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        E [lb/MMBtu or ng/J].
    """
    return cw * fc * hundred / co2


@_form(8, "12.2.6.1", ("cw", "fc", "bws"), "co2", True)
def eq_19_8(*, cw: Value, fc: Value, bws: Value, co2: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Emission rate from a wet concentration and dry carbon dioxide.

    Parameters
    ----------
    cw
        Pollutant concentration [lb/ft3 or ng/m3; wet].
    fc
        Carbon dioxide F factor [ft3/MMBtu or m3/J].
    bws
        Moisture of the stack gas as a fraction [1].
    co2
        Carbon dioxide [%; dry], above zero.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        E [lb/MMBtu or ng/J].
    """
    return cw * fc * hundred / ((1 - bws) * co2)


@_form(9, "12.2.6.2", ("cd", "fc", "bws"), "co2", False)
def eq_19_9(*, cd: Value, fc: Value, bws: Value, co2: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Emission rate from a dry concentration and wet carbon dioxide.

    Parameters
    ----------
    cd
        Pollutant concentration [lb/ft3 or ng/m3; dry].
    fc
        Carbon dioxide F factor [ft3/MMBtu or m3/J].
    bws
        Moisture of the stack gas as a fraction [1].
    co2
        Carbon dioxide [%; wet], above zero.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        E [lb/MMBtu or ng/J].
    """
    return cd * (1 - bws) * fc * hundred / co2


class Diluent(Enum):
    """The diluent an emission rate is computed with."""

    O2 = "O2"
    CO2 = "CO2"


class MoistureOf(Enum):
    """Which moisture is at hand for an emission rate."""

    STACK = "stack gas"
    AMBIENT = "ambient air"
    NONE = "none"


@dataclass(frozen=True, slots=True)
class Form:
    """One of the nine forms: the equation and the names of the inputs it needs."""

    equation: Equation[Any]
    inputs: tuple[str, ...]


_NINE: Mapping[tuple[Moisture, Diluent, Moisture], Equation[Any]] = {
    (Moisture.DRY, Diluent.O2, Moisture.DRY): eq_19_1,
    (Moisture.WET, Diluent.O2, Moisture.WET): eq_19_3,
    (Moisture.WET, Diluent.O2, Moisture.DRY): eq_19_4,
    (Moisture.DRY, Diluent.O2, Moisture.WET): eq_19_5,
    (Moisture.DRY, Diluent.CO2, Moisture.DRY): eq_19_6,
    (Moisture.WET, Diluent.CO2, Moisture.WET): eq_19_7,
    (Moisture.WET, Diluent.CO2, Moisture.DRY): eq_19_8,
    (Moisture.DRY, Diluent.CO2, Moisture.WET): eq_19_9,
}


def select(c_basis: Basis, diluent: Diluent, diluent_basis: Basis, moisture: MoistureOf) -> Form:
    """The form of Method 19 for the bases at hand.

    With wet concentration and wet oxygen, Eq. 19-3 serves where the moisture of the stack gas is known and
    Eq. 19-2 where only that of the ambient air is.

    Parameters
    ----------
    c_basis, diluent_basis
        Basis of the pollutant concentration and of the diluent.
    diluent
        O2 or CO2.
    moisture
        The moisture at hand.

    Raises
    ------
    BasisError
        A moisture facet is unknown, or the form needs a moisture that is not at hand.
    """
    eq = _NINE.get((c_basis.moisture, diluent, diluent_basis.moisture))
    if eq is None:
        raise BasisError(
            "an emission rate needs a concentration and a diluent that are each dry or wet, but they are "
            f"{c_basis.moisture.value or 'without moisture basis'} and "
            f"{diluent_basis.moisture.value or 'without moisture basis'}"
        )
    if eq is eq_19_3 and moisture is MoistureOf.AMBIENT:
        eq = eq_19_2
    inputs = tuple(name for name, parameter in eq.parameters.items() if parameter.constant is None)
    if "bws" in inputs and moisture is not MoistureOf.STACK:
        raise BasisError(f"{eq.citation.text()} needs the moisture of the stack gas, which is not known")
    return Form(eq, inputs)
