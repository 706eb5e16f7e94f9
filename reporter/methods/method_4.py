"""Method 4: moisture of the stack gas from a condenser train.

Volumes are at 68 °F and 29.92 inHg.  Absolute temperatures are taken as the method does, 460 + °F and
273 + °C, which go with its 528 °R and 293 K; constants are those printed (in SI restated from mmHg to kPa).
The water constants are per gram or per millilitre, as editions of the method differ.
"""

from __future__ import annotations

from reporter.basis import EPA_STANDARD, Basis, Moisture
from reporter.equation import Citation, Value, constant, equation
from reporter.functions import lower

_VOLUME = ("ft3", "m3")
_DRY_STANDARD = Basis(moisture=Moisture.DRY, standard=EPA_STANDARD)
_VAPOUR = Basis(standard=EPA_STANDARD)
_VWC = Citation("m4", "12.1", "Eq. 4-1")
_VWSG = Citation("m4", "12.1", "Eq. 4-2")
_VM = Citation("m4", "12.1", "Eq. 4-3")
_BWS = Citation("m4", "12.1", "Eq. 4-4")
_ABSOLUTE = Citation("m2", "12.1", "absolute temperature")


@equation(
    "V_m(std)",
    _VOLUME,
    {
        "start": _VOLUME,
        "end": _VOLUME,
        "factor": "1",
        "temperature": ("°F", "°C"),
        "pressure": ("inHg", "kPa"),
    },
    _VM,
    symbols={"start": "V_1", "end": "V_2", "factor": "Y", "temperature": "t_m", "pressure": "P_m"},
    gives=_DRY_STANDARD,
)
def metered_volume(
    *,
    start: Value,
    end: Value,
    factor: Value,
    temperature: Value,
    pressure: Value,
    k: Value = constant(17.64, ("°R/inHg", "K/kPa"), "K", si=2.8937375596125423, cite=_VM),
    zero: Value = constant(460.0, ("°R", "K"), si=273.0, cite=_ABSOLUTE),
) -> Value:
    """Dry gas metered by the train, at standard conditions.

    Parameters
    ----------
    start, end
        Meter readings [ft3 or m3].
    factor
        Meter calibration factor Y [1].
    temperature
        Meter temperature [°F or °C].
    pressure
        Absolute meter pressure [inHg or kPa].
    k
        Printed 17.64 °R/inHg; in SI the printed 0.3858 K/mmHg in kPa.
    zero
        Absolute temperature of the scale's zero as the method prints it: 460 °R, 273 K.

    Returns
    -------
    float
        Volume [ft3 or m3; dry, 68 °F and 29.92 inHg].
    """
    return k * factor * (end - start) * pressure / (zero + temperature)


@equation("V_wc(std)", _VOLUME, {"mass": "g"}, _VWC, symbols={"mass": "W_c"}, gives=_VAPOUR)
def water_volume_from_mass(
    *, mass: Value, k: Value = constant(0.04716, ("ft3/g", "m3/g"), "K_1", si=0.001335, cite=_VWC)
) -> Value:
    """Volume of the condensed water as vapour, from its mass (current text of the method).

    Parameters
    ----------
    mass
        Water condensed [g].
    k
        Printed 0.04716 ft3/g or 0.001335 m3/g.

    Returns
    -------
    float
        Vapour volume [ft3 or m3; 68 °F and 29.92 inHg].
    """
    return k * mass


@equation("V_wc(std)", _VOLUME, {"volume": "mL"}, _VWC, symbols={"volume": "V_lc"}, gives=_VAPOUR)
def water_volume_from_volume(
    *, volume: Value, k: Value = constant(0.04707, ("ft3/mL", "m3/mL"), "K_1", si=0.001333, cite=_VWC)
) -> Value:
    """Volume of the condensed water as vapour, from its liquid volume (older editions of the method).

    Parameters
    ----------
    volume
        Water condensed [mL].
    k
        Printed 0.04707 ft3/mL or 0.001333 m3/mL.

    Returns
    -------
    float
        Vapour volume [ft3 or m3; 68 °F and 29.92 inHg].
    """
    return k * volume


@equation("V_wsg(std)", _VOLUME, {"mass": "g"}, _VWSG, symbols={"mass": "W_sg"}, gives=_VAPOUR)
def silica_gel_volume(
    *, mass: Value, k: Value = constant(0.04716, ("ft3/g", "m3/g"), "K_3", si=0.001335, cite=_VWSG)
) -> Value:
    """Volume of the water held by the silica gel as vapour.

    Parameters
    ----------
    mass
        Gain of the silica gel [g].
    k
        Printed 0.04716 ft3/g (0.04715 in older editions) or 0.001335 m3/g.

    Returns
    -------
    float
        Vapour volume [ft3 or m3; 68 °F and 29.92 inHg].
    """
    return k * mass


@equation(
    "B_ws",
    "1",
    {"water": _VOLUME, "silica": _VOLUME, "gas": _VOLUME},
    _BWS,
    symbols={"water": "V_wc(std)", "silica": "V_wsg(std)", "gas": "V_m(std)"},
)
def moisture_fraction(*, water: Value, silica: Value, gas: Value) -> Value:
    """Moisture of the stack gas as a fraction by volume.

    Parameters
    ----------
    water
        Vapour volume of the condensed water [ft3 or m3; standard].
    silica
        Vapour volume of the water in the silica gel [same unit; standard].
    gas
        Dry gas metered [same unit; dry standard].

    Returns
    -------
    float
        B_ws [1].
    """
    return (water + silica) / (water + silica + gas)


@equation(
    "B_ws(sat)",
    "1",
    {"vapour_pressure": "*p", "pressure": "*p"},
    Citation("m4", "4", "saturated gas"),
    symbols={"vapour_pressure": "P_sat", "pressure": "P_s"},
)
def saturation_moisture(*, vapour_pressure: Value, pressure: Value) -> Value:
    """Moisture of a gas saturated with water as a fraction by volume.

    Parameters
    ----------
    vapour_pressure
        Saturation pressure of water at the temperature of the gas [any pressure unit].
    pressure
        Absolute pressure of the gas [same unit].

    Returns
    -------
    float
        Fraction [1].
    """
    return vapour_pressure / pressure


@equation(
    "B_ws",
    "1",
    {"measured": "1", "saturation": "1"},
    Citation("m4", "12.1", "saturated gas"),
    symbols={"measured": "B_ws(meas)", "saturation": "B_ws(sat)"},
)
def lower_moisture(*, measured: Value, saturation: Value) -> Value:
    """The lower of measured moisture and moisture at saturation.

    Parameters
    ----------
    measured
        Moisture as measured [1].
    saturation
        Moisture of the saturated gas [1].

    Returns
    -------
    float
        B_ws [1].
    """
    return lower(measured, saturation)
