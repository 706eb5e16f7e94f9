"""The truth of a rehearsal as data: what the stack emitted in each run, and what was made wrong."""

from __future__ import annotations

from collections.abc import Sequence
from statistics import fmean
from typing import Any

from reporter.gases import Gas
from reporter.rehearse.analyzers import Analyzer, CylinderGas, drifting_gas, wrong_cylinder
from reporter.rehearse.budget import allowance
from reporter.rehearse.order import Fault, Order, settings
from reporter.rehearse.sheets import fuel_rate, moment
from reporter.rehearse.stack import Flue, Stack, mass_rate, standard_volume
from reporter.rehearse.timetable import RunTime, cylinder_of


def truth(
    order: Order,
    stack: Stack,
    *,
    held: tuple[CylinderGas, ...],
    made: tuple[Analyzer, ...],
    upscale: dict[str, str],
) -> dict[str, Any]:
    """All that is known of a rehearsal, ready for JSON."""
    checked = {
        one.gas.label: one for one in held if upscale.get(one.gas.label) and _checks(one, upscale[one.gas.label])
    }
    return {
        "synthetic": order.mark,
        "order": _order(order),
        "fuel": {
            "entered": order.entered_fuel.name,
            "burned": stack.fuel.name,
            "composition_percent": {share.name: share.percent for share in stack.fuel.shares},
            "gross_heat_kj_per_mol" if stack.fuel.is_gas else "gross_heat_kj_per_kg": stack.heat_of_amount,
        },
        "runs": [_run(order, stack, run, made, checked) for run in stack.day.runs],
        "cylinders": [
            {"cylinder": one.cylinder, "gas": one.gas.label, "unit": one.gas.unit}
            | {"certified": one.certified, "content": one.content, "uncertainty_percent": one.uncertainty}
            for one in held
        ],
        "analyzers": [_analyzer(one) for one in made],
        "stated_errors_percent": settings()["measured"],
        "fault": fault(order, stack),
    }


def _checks(one: CylinderGas, level: str) -> bool:
    return one.cylinder == cylinder_of(one.gas, level)


def _order(order: Order) -> dict[str, Any]:
    return {
        "fuel": order.fuel,
        "gases": list(order.gases),
        "runs": order.runs,
        "run_minutes": order.run_minutes,
        "units": order.system.value,
        "oxygen_percent": order.oxygen,
        "load_profile": order.profile.value,
        "interval_seconds": order.interval,
        "seed": order.seed,
    }


def _run(
    order: Order, stack: Stack, run: RunTime, made: tuple[Analyzer, ...], checked: dict[str, CylinderGas]
) -> dict[str, Any]:
    minutes = stack.minutes(run.start, run.end)
    dry = {}
    for one in made:
        value = fmean(flue.dry[one.gas.label] for flue in minutes)
        parts = allowance(order, stack, run, one=one, upscale=checked[one.gas.label], value=value)
        dry[one.gas.label] = {"value": value, "unit": one.gas.unit, "allowance": parts}
    heat = fmean(flue.heat for flue in minutes)
    unit = "m3/h at 20 °C and 101.325 kPa" if stack.fuel.is_gas else "kg/h"
    return {
        "run": str(run.number),
        "start": moment(run.start).isoformat(),
        "end": moment(run.end).isoformat(),
        "dry": dry,
        "moisture_percent": fmean(flue.moisture for flue in minutes),
        "excess_air_percent": fmean(flue.excess_air for flue in minutes),
        "load": fmean(flue.load for flue in minutes),
        "heat_input_gj_per_h": heat,
        "fuel_burned": {"value": fuel_rate(stack.fuel, heat), "unit": unit},
        "stack_flow_dry_m3_per_h": standard_volume(fmean(flue.dry_flow for flue in minutes)),
        "rates": {gas.label: _rates(minutes, heat, gas) for gas in order.measured if not gas.is_diluent},
    }


def _rates(minutes: Sequence[Flue], heat: float, gas: Gas) -> dict[str, float]:
    grams = fmean(mass_rate(flue, gas) for flue in minutes)
    return {"kg_per_h": grams / 1000, "g_per_gj": grams / heat}


def _analyzer(one: Analyzer) -> dict[str, Any]:
    return {
        "channel": one.gas.label,
        "unit": one.gas.unit,
        "span": one.span,
        "gain": one.gain,
        "gain_per_hour": one.gain_per_hour,
        "zero": one.zero,
        "zero_per_hour": one.zero_per_hour,
        "system_gain": one.system_gain,
        "system_zero": one.system_zero,
        "noise": one.noise,
        "time_constant_seconds": one.seconds,
    }


def fault(order: Order, stack: Stack) -> dict[str, Any] | None:
    """The fault with the signs that a reviewer looks for; None without one."""
    if order.fault is None:
        return None
    rule, number = settings()["fault"][order.fault.value], order.faulty_run
    held_wrong = [gas for gas in order.measured if cylinder_of(gas, "mid") == wrong_cylinder(order)]
    names = {
        "run": number,
        "gas": drifting_gas(order).label,
        "gases": " and ".join(gas.label for gas in held_wrong),
        "burned": stack.fuel.name,
        "declared": order.entered_fuel.name,
        "minutes": rule.get("minutes"),
    }
    of_one_run = order.fault in (Fault.AIR_LEAK, Fault.DRIFTING_ANALYZER)
    return {
        "name": order.fault.value,
        "what": rule["what"].format(**names),
        "runs": [str(number)] if of_one_run else [str(run.number) for run in stack.day.runs],
        "expected_signs": [sign.format(**names) for sign in rule["signs"]],
    }
