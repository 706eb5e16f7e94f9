"""The sheets of a field workbook from a test day: the rows typed by hand and the rows that were measured."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping, Sequence
from datetime import date, datetime, time, timedelta
from functools import cache
from pathlib import Path
from typing import Any

from making.day import Day, Row, Rows, minute

GAS_CONSTANT = 8.314462618
WATER_MOLAR_MASS = 18.015
FIELD_SHEETS = Path(__file__).parents[2] / "reporter" / "tables" / "field_sheets.toml"


@cache
def field_sheets() -> Mapping[str, Sequence[str]]:
    """Sheet names of the field workbook, each with its column names, in the order of the form."""
    with FIELD_SHEETS.open("rb") as file:
        return {s["name"]: [c["name"] for c in s["columns"]] for s in tomllib.load(file)["sheet"]}


def in_order(sheet: str, rows: Rows) -> Rows:
    """Rows with their columns in the order of the form; columns that are not of the form come last."""
    form = field_sheets()[sheet]
    if not rows or "Item" in rows[0]:
        return rows
    found = list(dict.fromkeys(name for row in rows for name in row))
    bare = {name: name.split(" [")[0] for name in found}
    found.sort(key=lambda name: form.index(bare[name]) if bare[name] in form else len(form))
    return [{name: row.get(name) for name in found} for row in rows]


def at(scenario: Mapping[str, Any], minutes: int) -> datetime | time:
    """A minute of the test day as a date and time, or as a time alone where the scenario types it so."""
    day: date = scenario["date"]
    moment = datetime(day.year, day.month, day.day) + timedelta(minutes=minutes)
    return moment.time() if scenario.get("times_alone") else moment


def typed(scenario: Mapping[str, Any], sheet: str) -> Rows:
    """The rows people typed, each with what all rows of its sheet have in common."""
    common = scenario.get("common", {}).get(sheet, {})
    return [{**row, **common} for row in scenario["sheets"].get(sheet, [])]


def times(scenario: Mapping[str, Any], row: Mapping[str, Any]) -> Row:
    """A row in which clock texts of time columns are dates and times."""
    columns = ("Time", "Until", "Start", "End", "From")
    return {name: at(scenario, minute(value)) if name in columns else value for name, value in row.items()}


def calibrations(day: Day) -> Rows:
    """One row for each reading of a calibration gas, in time order."""
    return [
        {
            "Time": at(day.scenario, reading.at),
            "Channel": reading.channel,
            "Route": reading.route,
            "Level": reading.level,
            "Reading": day.read(reading),
            "Cylinder": reading.cylinder,
        }
        for reading in sorted(day.gas_readings, key=lambda r: r.at)
    ]


def readings(day: Day) -> Rows:
    """The logged series; a logger that marks calibration writes its word instead of a number."""
    series = {channel: day.logged(channel) for channel in day.analyzers}
    word = day.scenario.get("calibration_word", "")
    gaps = day.scenario.get("gaps", [])
    late = 1 if day.scenario["stamp"] == "interval end" else 0
    rows = []
    for k in range(day.length):
        calibrating = word and day.feeds[k].source not in ("stack", "ambient")
        values = {channel: word if calibrating else values[k] for channel, values in series.items()}
        open_gaps = [g for g in gaps if minute(g["from"]) <= day.start + k < minute(g["until"])]
        values |= {gap["channel"]: None for gap in open_gaps}
        rows.append({"Time": at(day.scenario, day.start + k + late), **values})
    return rows


def runs(day: Day) -> Rows:
    """The run sheet: what was typed and, for the columns under [computed], what the plant showed."""
    rows = []
    for run in typed(day.scenario, "Runs"):
        span = minute(run["Start"]), minute(run["End"])
        measured = {
            column: day.shown(rule, day.mean(rule["of"], *span)) for column, rule in day.scenario["computed"].items()
        }
        rows.append({**times(day.scenario, run), **measured})
    return rows


def train(day: Day) -> Rows:
    """The condenser train of each run, with a water catch that fits the moisture within its scatter."""
    data = day.scenario.get("train")
    if data is None:
        return []
    rows: list[Row] = []
    volume, names, factor = data["volume_start"], data["columns"], data["meter_factor"]
    for i, run in enumerate(typed(day.scenario, "Runs")):
        begin, until = minute(run["Start"]), minute(run["End"])
        end = round(volume + data["rate"] * (until - begin), data["decimals"])
        kelvin = data["kelvin"][i]
        dry = data["pascal"] * factor * (end - volume) * data["cubic_metre"] / (GAS_CONSTANT * kelvin)
        moisture = day.mean("moisture", begin, until) / 100
        water = dry * moisture / (1 - moisture) * WATER_MOLAR_MASS * (1 + data["catch_error"][i])
        gain = round(data["silica"] * (1 + 0.1 * day.noise.normal()), 1)
        rows.append(
            {
                "Run": run["Run"],
                names["start"]: round(volume, data["decimals"]),
                names["end"]: end,
                "Meter factor": factor,
                names["temperature"]: round(kelvin * data["temperature_scale"] + data["temperature_offset"], 1),
                names["pressure"]: round(data["pascal"] * data["pressure_scale"], 2),
                "Water collected [g]": round(water - gain, 1),
                "Silica gel gain [g]": gain,
            }
        )
        volume = end + data["pause"]
    return rows


def fuel_use(day: Day) -> Rows:
    """Fuel burned in each run: meter readings, or a rate, from the fuel's heat and heating value."""
    rows = []
    meters = {rule["Fuel"]: rule.get("meter_start", 0.0) for rule in day.scenario.get("fuel_use", [])}
    for run in typed(day.scenario, "Runs"):
        begin, until = minute(run["Start"]), minute(run["End"])
        for rule in day.scenario.get("fuel_use", []):
            heat = day.mean(rule["Fuel"], begin, until) * (1 + rule.get("error", 0.0))
            rate = heat / rule["megajoule"]
            row: Row = {"Run": run["Run"], "Fuel": rule["Fuel"]}
            if "meter_start" in rule:
                start = round(meters[rule["Fuel"]], 0)
                end = round(start + rate * (until - begin) / 60 / rule["typed"]["Meter factor"], 0)
                row |= {rule["start"]: start, rule["end"]: end}
                meters[rule["Fuel"]] = end + rate * rule["pause"] / 60
            else:
                row[rule["rate"]] = round(rate, rule["decimals"])
            rows.append({**row, **rule["typed"]})
    return rows


def process(day: Day) -> Rows:
    """The plant's log, one row each so many minutes."""
    log = day.scenario["process"]
    rows = []
    for m in range(minute(log["from"]), minute(log["until"]) + 1, log["every"]):
        k = min(m - day.start, day.length - 1)
        shown = {name: day.shown(rule, day.quantity(rule["of"], k)) for name, rule in log["columns"].items()}
        rows.append({"Time": at(day.scenario, m), **shown})
    return rows


def items(table: Mapping[str, Any]) -> Rows:
    """The rows of an item sheet (Test, Location); an entry may be a pair of entry and note."""
    rows = []
    for item, entry in table.items():
        value, note = entry if isinstance(entry, list) else (entry, "")
        rows.append({"Item": item, "Entry": value, "Note": note})
    return rows


def all_sheets(scenario: Mapping[str, Any]) -> dict[str, Rows]:
    """Every sheet of a scenario, in the order of the field workbook; sheets without rows are left out."""
    day = Day(scenario)
    made: dict[str, Rows] = {
        "Calibrations": calibrations(day),
        "Readings": readings(day),
        "Runs": runs(day),
        "Moisture": train(day),
        "Fuel use": fuel_use(day),
        "Process": process(day),
        "Test": items(scenario["sheets"]["Test"]),
        "Location": items(scenario["sheets"].get("Location", {})),
        "Events": [times(scenario, row) for row in typed(scenario, "Events")],
        "Points": [times(scenario, row) for row in typed(scenario, "Points")],
    }
    sheets = {name: made[name] if name in made else typed(scenario, name) for name in field_sheets()}
    return {name: in_order(name, rows) for name, rows in sheets.items() if rows}
