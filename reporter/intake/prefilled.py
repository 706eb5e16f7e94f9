"""What a blank field workbook already says: channels of the gases, numbered runs, the usual calibration order."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.equation import System
from reporter.gases import Gas
from reporter.intake.sheets import Sheet

#: One row of the form: cells by column name; "band" asks for the shade that sets its group apart.
Line = dict[str, str | int | bool]


def prefilled(spec: Sheet, gases: Sequence[Gas], runs: int, system: System) -> list[Line]:
    """The lines a sheet of the blank form is printed with."""
    if spec.attr == "test":
        return [
            {"Item": "Unit system", "Entry": system.value},
            {"Item": "Status", "Entry": "draft"},
            {"Item": "Revision", "Entry": 0},
        ]
    if spec.attr == "channels":
        return [_channel(gas) for gas in gases]
    if spec.attr == "calibrations":
        return calibration_lines(gases, runs)
    if spec.attr in ("runs", "fuel_use", "moisture"):
        return [{"Run": number} for number in range(1, runs + 1)]
    return []


def _channel(gas: Gas) -> Line:
    method = {"Method": f"Method {gas.method}"} if gas.method else {}
    return {"Channel": gas.label, "Gas": gas.label, "Unit": gas.unit, **method, "System": "extractive"}


def calibration_lines(gases: Sequence[Gas], runs: int) -> list[Line]:
    """The normal sequence: direct zero, mid and high; system zero and mid before run 1 and after each run."""
    groups: list[list[Line]] = [
        [
            {"Channel": gas.label, "Route": "direct", "Level": level}
            for gas in gases
            for level in ("zero", "mid", "high")
        ]
    ]
    if any(gas.key == "nox" for gas in gases):
        groups[0].append({"Channel": "NOx", "Route": "direct", "Level": "NO2"})
    for _ in range(runs + 1):
        groups.append(
            [{"Channel": gas.label, "Route": "system", "Level": level} for gas in gases for level in ("zero", "mid")]
        )
    return [{**line, "band": number % 2 == 1} for number, group in enumerate(groups) for line in group]
