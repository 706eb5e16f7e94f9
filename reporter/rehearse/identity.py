"""The rows of the field workbook of a rehearsal that people would type: test, place, fuel, limits, events.

Each says that it is synthetic.
"""

from __future__ import annotations

from reporter.combustion.components import find_component
from reporter.equation import System
from reporter.gases import Gas
from reporter.rehearse.order import Order, settings
from reporter.rehearse.sheets import Pen, Row, Rows, moment, rounded
from reporter.rehearse.stack import Stack, mass_rate
from reporter.units import convert


def test(order: Order) -> Rows:
    """The identity of the test, with the item Synthetic."""
    words, day = settings()["words"], settings()["day"]
    interval = {"Logging interval [s]": order.interval}
    if order.interval % 60 == 0:
        interval = {"Logging interval [min]": order.interval // 60}
    items: Row = {
        "Synthetic": order.mark,
        "Facility": words["facility"],
        "Facility address": words["address"],
        "Unit tested": words["unit"],
        "Stack": words["stack"],
        "Permit number": words["permit"],
        "Authority": words["authority"],
        "Testing firm": words["firm"],
        "Test lead": words["lead"],
        "Test date": day["date"],
        "Purpose": words["purpose"],
        "Time zone": order.zone,
        "Reading stamp": order.stamp,
        **interval,
        "Unit system": order.system.value,
        "Report number": words["report"].format(seed=order.seed),
        "Revision": "0",
        "Status": "draft",
    }
    return [{"Item": item, "Entry": entry, "Note": ""} for item, entry in items.items()]


test.__test__ = False  # type: ignore[attr-defined]


def fuel(order: Order) -> Rows:
    """The fuel as the crew enters it, its composition as an analysis."""
    burned = order.entered_fuel
    row: Row = {"Fuel": burned.name, "Share of heat input [%]": 100, "Laboratory": settings()["words"]["laboratory"]}
    if burned.is_gas:
        return [{**row, "Factor source": "gas analysis"}]
    pen = Pen(order.system)
    shares = {f"{share.name.capitalize()} [%]": share.percent for share in burned.shares}
    heat = pen.headed("Gross heating value", burned.heat or 0.0, "kJ/kg", ("Btu/lb", "kJ/kg"), digits=6)
    return [{**row, "Factor source": "analysis", **shares, **heat, "Analysis basis": burned.basis.value}]


def fuel_gas(order: Order) -> Rows:
    """The components of a gas fuel; nothing for another."""
    burned = order.entered_fuel
    shares = burned.shares if burned.is_gas else ()
    return [
        {"Fuel": burned.name, "Component": _component(share.name), "Mole fraction [%]": share.percent}
        for share in shares
    ]


def _component(name: str) -> str:
    found = find_component(name)
    return found.label if found is not None else name


def limits(order: Order, stack: Stack) -> Rows:
    """Limits that are no limits: above what the stack emits, and marked synthetic."""
    pollutants = [gas for gas in order.measured if not gas.is_diluent]
    rows = [_concentration(order, stack, gas) for gas in pollutants]
    rows.append(_by_heat(order, stack, pollutants[0]))
    rows.append(_by_hour(order, stack, pollutants[-1]))
    common = {
        "Relation": "at most",
        "Applies when": "rehearsal only",
        "Averaging": "mean of runs",
        "Runs required": order.runs,
        "Minimum run length [min]": order.run_minutes,
        "Rounding": "half up",
        "Authority": settings()["words"]["authority"],
        "Citation": settings()["words"]["citation"],
        "In force from": settings()["day"]["date"],
        "Entered by": settings()["words"]["lead"],
    }
    return [{**row, **common} for row in rows]


def _concentration(order: Order, stack: Stack, gas: Gas) -> Row:
    rule, physics = settings()["limit"], settings()["physics"]
    reference, system = rule["oxygen"][order.system.value], order.system
    ppm = rule["above"] * max(1.0, stack.expected(reference).dry[gas.label])
    row: Row = {"Limit id": f"SYNTHETIC-{gas.label}", "Pollutant": gas.label, "Moisture basis": "dry"}
    if gas.key == "nox":
        row |= {"Expressed as": "NO2"}
    if any(one.key == "o2" for one in order.measured):
        row |= {"Diluent": "O2", "Reference oxygen [%]": reference, "Oxygen constant": rule["constant"][system.value]}
    else:
        row |= {"Diluent": "CO2", "Reference carbon dioxide [%]": rule["carbon_dioxide"]}
    if system is System.US:
        return {**row, "Limit": rounded(ppm, 2), "Unit": "ppm"}
    kelvin, pressure = physics["zero_celsius"], physics["standard_pressure"]
    milligrams = ppm / 1e6 * gas.mass * 1000 * pressure * 1000 / (physics["gas_constant"] * kelvin)
    standard = {"Standard temperature [K]": kelvin, "Standard pressure [kPa]": pressure}
    return {**row, **standard, "Limit": rounded(milligrams, 2), "Unit": "mg/m3"}


def _by_heat(order: Order, stack: Stack, gas: Gas) -> Row:
    flue = stack.expected()
    unit = Pen(order.system).choose("lb/MMBtu", "g/GJ")
    value = convert(mass_rate(flue, gas) / flue.heat, "g/GJ", unit) * settings()["limit"]["above"]
    row: Row = {"Limit id": f"SYNTHETIC-{gas.label}-HEAT", "Pollutant": gas.label, "Unit": unit}
    return {**row, **_as(gas), "Limit": rounded(max(value, 1e-4), 2)}


def _by_hour(order: Order, stack: Stack, gas: Gas) -> Row:
    unit = Pen(order.system).choose("lb/h", "kg/h")
    value = convert(mass_rate(stack.expected(), gas) / 1000, "kg/h", unit) * settings()["limit"]["above"]
    row: Row = {"Limit id": f"SYNTHETIC-{gas.label}-HOUR", "Pollutant": gas.label, "Unit": unit}
    return {**row, **_as(gas), "Limit": rounded(max(value, 1e-3), 2), "Mass rate route": "flow"}


def _as(gas: Gas) -> Row:
    return {"Expressed as": "NO2"} if gas.key == "nox" else {}


def events(stack: Stack) -> Rows:
    """What happened: that nothing did."""
    return [
        {"Time": moment(stack.day.start), "What": settings()["words"]["event"]},
        {"Time": moment(stack.day.on_stack), "What": "Synthetic probe on the stack"},
        {"Time": moment(stack.day.off_stack), "What": "Synthetic probe off the stack"},
    ]
