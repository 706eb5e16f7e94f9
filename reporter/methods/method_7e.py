"""Method 7E and the methods that use its equations (3A, 6C, 10): calibration, bias, drift, corrected means.

A concentration may be in ppm or percent: the unit of the first argument binds the others.  The calibration
span is the certified value of the accepted high-level gas.  Corrected means keep the basis of the run mean.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from reporter.basis import NEED_DRY, NEED_WET, Basis, Moisture
from reporter.equation import Citation, Value, constant, equation
from reporter.functions import absolute, mean


def _cite(section: str, number: str = "") -> Citation:
    return Citation("m7e", section, number)


def _made(moisture: Moisture) -> Any:
    def gives(bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
        return bases["c"].but(moisture=moisture)

    return gives


@equation(
    "ACE",
    "%",
    {"direct": "*c", "certified": "*c", "span": "*c"},
    _cite("12.2", "Eq. 7E-1"),
    symbols={"direct": "C_Dir", "certified": "C_V", "span": "CS"},
    difference=True,
)
def calibration_error(*, direct: Value, certified: Value, span: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Analyzer calibration error in percent of the calibration span.

    Parameters
    ----------
    direct
        Reading of the gas given straight to the analyzer [ppm or %].
    certified
        Certified value of that gas [same unit].
    span
        Calibration span [same unit], not zero.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        ACE [% of span], signed.
    """
    return hundred * (direct - certified) / span


@equation(
    "SB",
    "%",
    {"system": "*c", "direct": "*c", "span": "*c"},
    _cite("12.3", "Eq. 7E-2"),
    symbols={"system": "C_S", "direct": "C_Dir", "span": "CS"},
    difference=True,
)
def system_bias(*, system: Value, direct: Value, span: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """System bias in percent of the calibration span, against the direct reading of the same gas.

    Parameters
    ----------
    system
        Reading of the gas given at the probe [ppm or %].
    direct
        Latest accepted direct reading of the same gas [same unit]; not its certified value.
    span
        Calibration span [same unit], not zero.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        SB [% of span], signed.
    """
    return hundred * (system - direct) / span


@equation(
    "SCE",
    "%",
    {"system": "*c", "dilution_factor": "1", "certified": "*c", "span": "*c"},
    _cite("12.4", "Eq. 7E-3"),
    symbols={"system": "C_S", "dilution_factor": "DF", "certified": "C_V", "span": "CS"},
    difference=True,
)
def dilution_error(
    *,
    system: Value,
    dilution_factor: Value,
    certified: Value,
    span: Value,
    hundred: Value = constant(100.0, "%"),
) -> Value:
    """System calibration error of a dilution system in percent of the calibration span.

    Parameters
    ----------
    system
        Reading of the gas given at the probe [ppm or %], before the dilution factor.
    dilution_factor
        Dilution factor [1].
    certified
        Certified value of that gas [same unit].
    span
        Calibration span [same unit], not zero.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        SCE [% of span], signed.
    """
    return hundred * (system * dilution_factor - certified) / span


@equation(
    "D",
    "%",
    {"after": "%", "before": "%"},
    _cite("12.5", "Eq. 7E-4"),
    symbols={"after": "SB_final", "before": "SB_initial"},
    difference=True,
)
def drift(*, after: Value, before: Value) -> Value:
    """Drift of one gas over a run: magnitude of the change of its bias.

    Parameters
    ----------
    after
        Bias (or dilution error) after the run [% of span].
    before
        Bias (or dilution error) before the run [% of span].

    Returns
    -------
    float
        D [% of span], not negative.
    """
    return absolute(after - before)


@equation(
    "C_gas",
    "*c",
    {"average": "*c", "zero": "*c", "upscale": "*c", "certified": "*c"},
    _cite("12.6", "Eq. 7E-5b"),
    symbols={"average": "C_Avg", "zero": "C_O", "upscale": "C_M", "certified": "C_MA"},
    gives="average",
)
def corrected_zero(*, average: Value, zero: Value, upscale: Value, certified: Value) -> Value:
    """Run mean corrected for bias and drift where the low-level gas is a zero gas.

    Parameters
    ----------
    average
        Mean of all valid readings of the run [ppm or %].
    zero
        Mean of the system readings of the zero gas before and after the run [same unit].
    upscale
        Mean of the system readings of the upscale gas before and after the run [same unit].
    certified
        Certified value of the upscale gas [same unit].

    Returns
    -------
    float
        C_gas [same unit], on the basis of `average`.
    """
    return (average - zero) * certified / (upscale - zero)


@equation(
    "C_gas",
    "*c",
    {"average": "*c", "low": "*c", "upscale": "*c", "certified": "*c", "low_certified": "*c"},
    _cite("12.6", "Eq. 7E-5a"),
    symbols={
        "average": "C_Avg",
        "low": "C_O",
        "upscale": "C_M",
        "certified": "C_MA",
        "low_certified": "C_OA",
    },
    gives="average",
)
def corrected_low(*, average: Value, low: Value, upscale: Value, certified: Value, low_certified: Value) -> Value:
    """Run mean corrected for bias and drift where the low-level gas is not a zero gas.

    Parameters
    ----------
    average
        Mean of all valid readings of the run [ppm or %].
    low
        Mean of the system readings of the low-level gas before and after the run [same unit].
    upscale
        Mean of the system readings of the upscale gas before and after the run [same unit].
    certified
        Certified value of the upscale gas [same unit].
    low_certified
        Certified value of the low-level gas [same unit].

    Returns
    -------
    float
        C_gas [same unit], on the basis of `average`.
    """
    return (average - upscale) * (certified - low_certified) / (upscale - low) + certified


@equation(
    "C_NO2",
    "*c",
    {"nox": "*c", "no": "*c"},
    _cite("12", "NO2 as NOx − NO"),
    symbols={"nox": "C_NOx", "no": "C_NO"},
    gives="nox",
    difference=True,
)
def no2_difference(*, nox: Value, no: Value) -> Value:
    """Nitrogen dioxide as the difference of NOx and NO.

    Parameters
    ----------
    nox
        NOx concentration [ppm].
    no
        NO concentration [same unit and basis].

    Returns
    -------
    float
        C_NO2 [same unit], on the basis of `nox`.
    """
    return nox - no


@equation(
    "Eff_NO2",
    "%",
    {"direct": "*c", "certified": "*c"},
    _cite("12.7", "Eq. 7E-7"),
    symbols={"direct": "C_Dir", "certified": "C_V"},
)
def converter_efficiency(*, direct: Value, certified: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Efficiency of the NO2 converter from a reading of an NO2 gas.

    Parameters
    ----------
    direct
        Analyzer reading of the NO2 gas in the NOx mode [ppm].
    certified
        Certified NO2 value of that gas [same unit], not zero.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        Efficiency [%].
    """
    return hundred * direct / certified


@equation(
    "NOx_Corr",
    "*c",
    {"no": "*c", "nox": "*c", "efficiency": "%"},
    _cite("12.8", "Eq. 7E-8"),
    symbols={"no": "C_NO", "nox": "C_NOx", "efficiency": "Eff_NO2"},
    gives="nox",
)
def converter_corrected(*, no: Value, nox: Value, efficiency: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """NOx corrected for the efficiency of the converter (optional in the method).

    Parameters
    ----------
    no
        NO concentration [ppm].
    nox
        NOx concentration as read [same unit and basis].
    efficiency
        Converter efficiency [%], not zero.
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        Corrected NOx [same unit], on the basis of `nox`.
    """
    return no + (nox - no) / efficiency * hundred


@equation(
    "Decrease",
    "%",
    {"peak": "*c", "final": "*c"},
    _cite("12.9", "Eq. 7E-9"),
    symbols={"peak": "NOx_Peak", "final": "NOx_Final"},
    difference=True,
)
def peak_decrease(*, peak: Value, final: Value, hundred: Value = constant(100.0, "%")) -> Value:
    """Fall of the NOx reading from its peak in the alternative converter test.

    Parameters
    ----------
    peak
        Highest NOx reading of the test [ppm], not zero.
    final
        Last NOx reading of the test [same unit].
    hundred
        Printed 100 [%].

    Returns
    -------
    float
        Decrease [% of the peak].
    """
    return hundred * (peak - final) / peak


@equation(
    "C_d",
    "*c",
    {"c": "*c", "bws": "1"},
    _cite("12.10", "Eq. 7E-10"),
    symbols={"c": "C_w", "bws": "B_ws"},
    needs={"c": NEED_WET},
    gives=_made(Moisture.DRY),
)
def dry_from_wet(*, c: Value, bws: Value) -> Value:
    """Dry concentration from a wet one.

    Parameters
    ----------
    c
        Concentration [ppm or %; wet, as measured].
    bws
        Moisture of the stack gas as a fraction [1], below 1.

    Returns
    -------
    float
        Concentration [same unit; dry].

    Raises
    ------
    BasisError
        In a ledger, where `c` is not wet.
    """
    return c / (1 - bws)


@equation(
    "C_w",
    "*c",
    {"c": "*c", "bws": "1"},
    _cite("12.10", "Eq. 7E-10, solved for the wet concentration"),
    symbols={"c": "C_d", "bws": "B_ws"},
    needs={"c": NEED_DRY},
    gives=_made(Moisture.WET),
)
def wet_from_dry(*, c: Value, bws: Value) -> Value:
    """Wet concentration from a dry one.

    Parameters
    ----------
    c
        Concentration [ppm or %; dry, as measured].
    bws
        Moisture of the stack gas as a fraction [1].

    Returns
    -------
    float
        Concentration [same unit; wet].

    Raises
    ------
    BasisError
        In a ledger, where `c` is not dry.
    """
    return c * (1 - bws)


@equation(
    "C_mean",
    "*c",
    {"before": "*c", "after": "*c"},
    _cite("12.6"),
    symbols={"before": "C_pre", "after": "C_post"},
    gives="before",
)
def mean_of_two(*, before: Value, after: Value) -> Value:
    """Mean of the system readings of one gas before and after a run.

    Parameters
    ----------
    before
        Reading before the run [ppm or %].
    after
        Reading after the run [same unit].

    Returns
    -------
    float
        Mean [same unit], on the basis of `before`.
    """
    return (before + after) / 2


@equation(
    "C_Avg",
    "*c",
    {"readings": "*c"},
    _cite("12.6"),
    symbols={"readings": "C"},
    gives="readings",
    series=("readings",),
)
def run_mean(*, readings: Value) -> Value:
    """Arithmetic mean of all valid readings of a run.

    Parameters
    ----------
    readings
        Valid readings [ppm or %], a series.

    Returns
    -------
    float
        Mean [same unit], on the basis of the readings.
    """
    return mean(readings)
