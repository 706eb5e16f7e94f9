"""The rows of a rehearsal that come from readings: channels, cylinders, calibrations, runs, trains, fuel."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import datetime, time, timedelta
from statistics import fmean
from typing import Any

from reporter.combustion.fuel import Fuel
from reporter.combustion.fuel_entries import amounts
from reporter.equation import System
from reporter.gases import molar_mass
from reporter.intake.blank import header_text
from reporter.intake.sheets import sheet
from reporter.rehearse.analyzers import RESPONSE, Analyzer, CylinderGas, Logger
from reporter.rehearse.order import Fault, Order, settings
from reporter.rehearse.stack import Flue, Stack, heat_of_amount, standard_volume
from reporter.rehearse.timetable import ZERO, RunTime
from reporter.units import convert

Row = dict[str, Any]
Rows = list[Row]


@dataclass(frozen=True, slots=True)
class Pen:
    """Writes cells under the headers of the form, in the units of the order's system."""

    system: System

    def cell(self, of: str, column: str, value: float, unit: str, *, digits: int = 4) -> Row:
        """One cell: a value in a unit becomes the number under the form's own header."""
        known = sheet(of).column(column)
        wanted = known.default_unit(self.system)
        return {header_text(known, self.system): rounded(convert(value, unit, wanted), digits)}

    def choose(self, us: str, si: str) -> str:
        """A word of the unit system."""
        return us if self.system is System.US else si

    def headed(self, column: str, value: float, source: str, units: tuple[str, str], *, digits: int = 4) -> Row:
        """One cell whose header names its own unit: that of the US form or that of the SI form."""
        wanted = self.choose(*units)
        return {f"{column} [{wanted}]": rounded(convert(value, source, wanted), digits)}


def rounded(value: float, digits: int) -> float:
    """A number to significant digits."""
    return float(f"{value:.{digits}g}") + 0.0


def moment(minutes: float) -> datetime:
    """A time of the day of the rehearsal."""
    return datetime.combine(settings()["day"]["date"], time()) + timedelta(seconds=round(minutes * 60))


def channels(order: Order, made: tuple[Analyzer, ...]) -> Rows:
    """The analyzers as the crew describes them."""
    kinds = settings()["analyzer"]["kind"]
    return [
        {
            "Channel": one.gas.label,
            "Gas": one.gas.label,
            "Unit": one.gas.unit,
            "Moisture basis": "wet" if one.gas.label in order.wet else "dry",
            "Calibration span": one.span,
            "Method": f"Method {one.gas.method}",
            "System": "extractive",
            "Analyzer": f"synthetic, {kinds[one.gas.label]}",
            "Serial number": f"SYN-{number}",
            "Response time up [s]": round(RESPONSE * one.seconds),
            "Response time down [s]": round(RESPONSE * one.seconds),
        }
        for number, one in enumerate(made, 1)
    ]


def cylinders(order: Order, held: tuple[CylinderGas, ...]) -> Rows:
    """The cylinders as certified."""
    pen, rule, rows = Pen(order.system), settings()["cylinder"], []
    for one in held:
        row: Row = {
            "Cylinder": one.cylinder,
            "Gas": one.gas.label,
            "Certified value": one.certified,
            "Unit": one.gas.unit,
            "Kind": "zero" if one.cylinder == ZERO else "protocol",
            "Producer": settings()["words"]["producer"],
            "Certificate number": f"SYNTHETIC-{order.seed}-{one.cylinder}",
        }
        if one.cylinder != ZERO:
            pressure = order.random(f"pressure/{one.cylinder}").uniform(*rule["pressure"])
            row |= {
                "Uncertainty [%]": one.uncertainty,
                "Expires": rule["expires"],
                "Assay date": rule["assayed"],
                "Balance gas": "nitrogen",
                **pen.cell("Cylinders", "Pressure", pressure, "bar", digits=3),
            }
        rows.append(row)
    return rows


def calibrations(logger: Logger) -> Rows:
    """One row for each reading of a calibration gas, in time order."""
    return [
        {
            "Time": moment(injection.end),
            "Channel": one.gas.label,
            "Route": injection.route,
            "Level": injection.level,
            "Reading": logger.reading(one, injection),
            "Cylinder": injection.cylinder,
        }
        for injection in logger.day.injections
        for one in logger.analyzers
        if one.gas in injection.gases
    ]


def readings(logger: Logger) -> Rows:
    """The logged series, stamped at the start or the end of each interval by the clock of the logger."""
    order, day = logger.order, logger.day
    late = order.interval / 60 if order.stamp == "interval end" else 0
    behind = settings()["fault"]["clock-shift"]["minutes"] if order.has(Fault.CLOCK_SHIFT) else 0
    series = {f"{one.gas.label} [{one.gas.unit}]": logger.series(one) for one in logger.analyzers}
    count = (day.end - day.start) * 60 // order.interval
    return [
        {
            "Time": moment(day.start - behind + late + number * order.interval / 60),
            **{name: values[number] for name, values in series.items()},
        }
        for number in range(count)
    ]


def runs(order: Order, stack: Stack) -> Rows:
    """The runs with what the plant, the weather station and the flow measurement showed."""
    return [_run(order, run, stack.minutes(run.start, run.end)) for run in stack.day.runs]


def _run(order: Order, run: RunTime, minutes: Sequence[Flue]) -> Row:
    pen, plant, physics = Pen(order.system), settings()["plant"], settings()["physics"]
    flow = standard_volume(fmean(one.dry_flow for one in minutes)) * (1 + flow_error(order, run))
    standard = physics["standard_temperature"] - physics["zero_celsius"]
    steam = pen.choose("klb/h", "t/h")
    return {
        "Run": str(run.number),
        "Start": moment(run.start),
        "End": moment(run.end),
        "Load": rounded(convert(fmean(one.load for one in minutes) * plant["steam"], "t/h", steam), 3),
        "Load unit": steam,
        "Load basis": rounded(convert(plant["steam"], "t/h", steam), 3),
        "Heat input source": settings()["words"]["heat_source"],
        "Moisture source": "Method 4",
        **pen.cell("Runs", "Ambient temperature", plant["celsius"], "°C"),
        "Relative humidity [%]": plant["relative_humidity"],
        **pen.cell("Runs", "Stack flow", flow, "m3/h"),
        "Flow basis": "dry standard",
        **pen.cell("Runs", "Flow standard temperature", standard, "°C"),
        **pen.cell("Runs", "Flow standard pressure", physics["standard_pressure"], "kPa", digits=6),
        **pen.cell("Runs", "Stack temperature", plant["stack_celsius"], "°C"),
        **pen.cell("Runs", "Static pressure", plant["static"], "Pa", digits=2),
        **pen.cell("Runs", "Barometric pressure", plant["pressure"], "kPa"),
    }


def flow_error(order: Order, run: RunTime) -> float:
    """Relative error of the stack flow of a run."""
    return float(settings()["measured"]["flow"] / 100 * order.random(f"flow/{run.number}").uniform(-1, 1))


def moisture(order: Order, stack: Stack) -> Rows:
    """The condenser train of each run: the water that the flue gas of the run held, in what went through the meter."""
    pen, train, physics = Pen(order.system), settings()["train"], settings()["physics"]
    kelvin = train["celsius"] + physics["zero_celsius"]
    rows, volume = [], train["start"]
    for run in stack.day.runs:
        end = volume + train["rate"] * (run.end - run.start)
        metered = train["meter_factor"] * (end - volume)
        dry = train["pressure"] * 1000 * metered / (physics["gas_constant"] * kelvin)
        share = fmean(one.moisture for one in stack.minutes(run.start, run.end)) / 100
        error = settings()["measured"]["water"] / 100 * order.random(f"water/{run.number}").uniform(-1, 1)
        grams = dry * share / (1 - share) * molar_mass({"H": 2, "O": 1}) * (1 + error)
        caught = (grams - train["silica"]) / train["water_mass"]
        rows.append(
            {
                "Run": str(run.number),
                **pen.cell("Moisture", "Meter volume start", volume, "m3", digits=7),
                **pen.cell("Moisture", "Meter volume end", end, "m3", digits=7),
                "Meter factor": train["meter_factor"],
                **pen.cell("Moisture", "Meter temperature", train["celsius"], "°C"),
                **pen.cell("Moisture", "Meter pressure", train["pressure"], "kPa"),
                "Water collected [mL]": round(caught, 1),
                "Silica gel gain [g]": train["silica"],
            }
        )
        volume = end + train["rate"] / 2
    return rows


def fuel_use(order: Order, stack: Stack) -> Rows:
    """The fuel meter: the heat released, as an amount of the fuel that was entered."""
    return list(_uses(order, stack, order.entered_fuel))


def _uses(order: Order, stack: Stack, fuel: Fuel) -> Iterator[Row]:
    pen, physics = Pen(order.system), settings()["physics"]
    standard = physics["standard_temperature"] - physics["zero_celsius"]
    start = settings()["plant"]["fuel_meter"]
    for run in stack.day.runs:
        rate = fuel_rate(fuel, fmean(one.heat for one in stack.minutes(run.start, run.end)))
        rate *= 1 + settings()["measured"]["fuel"] / 100 * order.random(f"fuel/{run.number}").uniform(-1, 1)
        row: Row = {"Run": str(run.number), "Fuel": fuel.name}
        if fuel.is_gas:
            end = start + rate * (run.end - run.start) / 60
            value = heat_of_amount(fuel) / 1000 / standard_volume(1.0)
            row |= pen.cell("Fuel use", "Meter start", start, "m3", digits=8)
            row |= pen.cell("Fuel use", "Meter end", end, "m3", digits=8)
            row |= {"Meter factor": 1.0}
            row |= pen.cell("Fuel use", "Base temperature", standard, "°C")
            row |= pen.cell("Fuel use", "Base pressure", physics["standard_pressure"], "kPa", digits=5)
            row |= pen.cell("Fuel use", "Heating value", value, "MJ/m3", digits=5)
            start = end + rate / 6
        else:
            heat = amounts(fuel).gross_heating_value or 0.0
            row |= pen.headed("Rate", rate, "kg/h", ("lb/h", "kg/h"), digits=5)
            row |= pen.headed("Heating value", heat, "kJ/kg", ("Btu/lb", "kJ/kg"), digits=5)
        yield {**row, "Heating value kind": "gross"}


def fuel_rate(fuel: Fuel, heat: float) -> float:
    """How much of a fuel gives a heat [GJ/h]: m3/h at 20 °C and 101.325 kPa of a gas, kg/h of another."""
    amount = heat * 1e6 / heat_of_amount(fuel)
    return standard_volume(amount) if fuel.is_gas else amount


def process(order: Order, stack: Stack) -> Rows:
    """The plant's own log: steam, at the interval of its log, while the probe was on the stack."""
    steam = Pen(order.system).choose("klb/h", "t/h")
    full = convert(settings()["plant"]["steam"], "t/h", steam)
    minutes = range(stack.day.on_stack, stack.day.off_stack, settings()["plant"]["log_minutes"])
    return [
        {"Time": moment(minute), f"Steam flow [{steam}]": rounded(stack.load(minute) * full, 3)} for minute in minutes
    ]
