"""A committed sample read by nothing but openpyxl, and the script that makes it."""

from __future__ import annotations

import importlib.util
import sys
from datetime import date, datetime, time
from pathlib import Path
from types import ModuleType
from typing import Any

import openpyxl

FOLDER = Path(__file__).parents[2] / "sample_inputs"
Row = dict[str, Any]


def load_script() -> ModuleType:
    spec = importlib.util.spec_from_file_location("make_samples", FOLDER / "make_samples.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules["make_samples"] = module
    spec.loader.exec_module(module)
    return module


class Sample:
    """The tables of a committed sample, with the means and checks of its runs."""

    def __init__(self, name: str) -> None:
        self.name = name
        book = openpyxl.load_workbook(FOLDER / "valid" / f"{name}.xlsx")
        self.tables = {sheet.title: self._rows(sheet) for sheet in book.worksheets}
        self.test = {row["Item"]: row["Entry"] for row in self.tables["Test"]}
        self.channels = {row["Channel"]: row for row in self.tables["Channels"]}
        self.certified = {(r["Cylinder"], r["Gas"]): r["Certified value"] for r in self.tables["Cylinders"]}
        self.runs = self.tables["Runs"]

    @staticmethod
    def _rows(sheet: Any) -> list[Row]:
        head, *rows = list(sheet.iter_rows(min_row=3, values_only=True))
        return [dict(zip(head, row, strict=True)) for row in rows]

    def moment(self, value: datetime | time) -> datetime:
        """A time of the workbook with its date."""
        day: date = self.test["Test date"]
        return datetime.combine(day, value) if isinstance(value, time) else value

    def run(self, name: str) -> Row:
        return next(row for row in self.runs if row["Run"] == name)

    def checks(self, channel: str, route: str, level: str | None = None) -> list[tuple[datetime, float, float]]:
        """Time, certified value and reading of a channel's calibration gases of a route, in time order."""
        gas = self.channels[channel]["Gas"]
        return [
            (self.moment(r["Time"]), self.certified[r["Cylinder"], gas], r["Reading"])
            for r in self.tables["Calibrations"]
            if r["Channel"] == channel and r["Route"] == route and r["Level"] != "NO2" and level in (None, r["Level"])
        ]

    def around(self, channel: str, run: Row, upscale: bool) -> tuple[tuple[Any, ...], tuple[Any, ...]]:
        """The last system reading before a run and the first one after it, zero or upscale."""
        found = [c for c in self.checks(channel, "system") if (c[1] > 0) == upscale]
        start, end = self.moment(run["Start"]), self.moment(run["End"])
        return [c for c in found if c[0] <= start][-1], next(c for c in found if c[0] >= end)

    def minutes(self, channel: str, run: Row) -> list[float | None]:
        """The logged readings of a run, excluded periods left out."""
        late = self.test["Reading stamp"] == "interval end"
        start, end = self.moment(run["Start"]), self.moment(run["End"])
        out = [
            (self.moment(e["Time"]), self.moment(e["Until"]))
            for e in self.tables["Events"]
            if e.get("Readings excluded") == "yes"
        ]

        def inside(t: datetime, begin: datetime, until: datetime) -> bool:
            return begin < t <= until if late else begin <= t < until

        rows = [(self.moment(r["Time"]), r[channel]) for r in self.tables["Readings"]]
        return [v for t, v in rows if inside(t, start, end) and not any(inside(t, *period) for period in out)]

    def corrected(self, channel: str, run: Row) -> float:
        """Mean of a run corrected by the system readings around it (Method 7E, Eq. 7E-5b)."""
        values = [v for v in self.minutes(channel, run) if v is not None]
        mean = sum(values) / len(values)
        zero = sum(c[2] for c in self.around(channel, run, False)) / 2
        upscale = self.around(channel, run, True)
        return float((mean - zero) * upscale[0][1] / (sum(c[2] for c in upscale) / 2 - zero))

    def shares(self, run: Row) -> dict[str, float]:
        """Shares of the heat input by fuel."""
        used = [r for r in self.tables.get("Fuel use", []) if r["Run"] == run["Run"] and "Rate [lb/h]" in r]
        if not used:
            return {self.tables["Fuel"][0]["Fuel"]: 1.0}
        heat = {r["Fuel"]: r["Rate [lb/h]"] * r["Heating value [Btu/lb]"] for r in used}
        return {fuel: h / sum(heat.values()) for fuel, h in heat.items()}
