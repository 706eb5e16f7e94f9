"""A test day: what the plant does each minute, and what the analyzers make of it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from making import flue
from making.noise import Noise, interpolate

Row = dict[str, Any]
Rows = Sequence[Row]

STANDARD_VOLUME = 0.0240548  # m3/mol at 20 °C and 101.325 kPa
AMBIENT_OXYGEN = 20.85  # ambient air behind the sample cooler, which leaves a little water
SETTLING_SHARE = 0.45  # what the first minute after a change of gas still shows of the gas before


def minute(clock: str) -> int:
    """Minutes since midnight of a time such as ``09:30``."""
    hours, minutes = clock.split(":")
    return int(hours) * 60 + int(minutes)


def _rounded(value: float, decimals: int) -> float:
    """A number as an instrument stores it; a rounded zero has no sign."""
    return float(round(value, decimals)) + 0.0


@dataclass(frozen=True)
class Feed:
    """What flows to the analyzers during one minute: a cylinder, ambient air, or the stack."""

    source: str = "stack"
    route: str = "system"
    air_share: float = 0.0


@dataclass(frozen=True)
class GasReading:
    """One reading of a calibration gas: the minute it ends on, and what was read where."""

    at: int
    channel: str
    route: str
    level: str
    cylinder: str


class Day:
    """The plant and the analyzers of one scenario, minute by minute."""

    def __init__(self, scenario: Mapping[str, Any]) -> None:
        self.scenario = scenario
        self.noise = Noise(scenario["seed"])
        self.start, self.end = (minute(t) for t in scenario["log"])
        self.length = self.end - self.start
        self.plant = scenario["plant"]
        self.analyzers: Mapping[str, Mapping[str, Any]] = scenario["analyzers"]
        self.cylinders = self._cylinders()
        self.fuels = {name: self._fuel(data) for name, data in self.plant["fuels"].items()}
        weather = self.plant["weather"]
        self.humidity = flue.air_humidity(weather["celsius"], weather["relative"], weather["pascal"])
        self.series = self._plant_series()
        self.flue = [self._burn(k) for k in range(self.length)]
        self.gas_readings = self._gas_readings()
        self.feeds = self._feeds()

    def _cylinders(self) -> dict[str, dict[str, float]]:
        """What is in each cylinder: the certified values, but for small errors of the certificates."""
        contents: dict[str, dict[str, float]] = {}
        errors = self.scenario.get("certificate_errors", {})
        for row in self.scenario["sheets"]["Cylinders"]:
            cylinder, gas = row["Cylinder"], row["Gas"]
            error = errors.get(cylinder, {}).get(gas, 0.0)
            contents.setdefault(cylinder, {})[gas] = row["Certified value"] * (1 + error)
        return contents

    @staticmethod
    def _fuel(data: Mapping[str, Any]) -> flue.Fuel:
        if "gas" in data:
            return flue.fuel_from_gas(data["gas"])
        return flue.fuel_from_analysis(data["analysis"], data["gross"])

    def _plant_series(self) -> dict[str, list[float]]:
        """Load, dry oxygen and the pollutants, one value a minute."""
        series = {}
        for name, data in self.plant["series"].items():
            knots = [(float(minute(t)), v) for t, v in data["knots"]]
            swing, wander = self.noise.swing(self.length), self.noise.wander(self.length)
            series[name] = [
                interpolate(knots, self.start + k + 0.5)
                * (1 + data.get("swing", 0.0) * swing[k] + data.get("noise", 0.0) * wander[k])
                for k in range(self.length)
            ]
        return series

    def shares(self, k: int) -> dict[str, float]:
        """Shares of the heat input by fuel; the first fuel takes what the others leave."""
        names = list(self.fuels)
        others = {name: self.series[f"share of {name}"][k] for name in names[1:]}
        return {names[0]: 1 - sum(others.values()), **others}

    def _burn(self, k: int) -> flue.Flue:
        fuel = flue.blend(self.fuels, self.shares(k))
        return flue.burn(fuel, self.series["oxygen"][k] / 100, self.humidity)

    def quantity(self, name: str, k: int) -> float:
        """A plant quantity: heat (of one fuel too) in MJ/h, flow in m3/h at 20 °C, moisture in percent."""
        heat = float(self.plant["full_heat"]) * self.series["load"][k]
        gas = self.flue[k]
        known = {
            "heat": heat,
            "flow dry": heat * gas.dry * STANDARD_VOLUME,
            "flow wet": heat * (gas.dry + gas.water) * STANDARD_VOLUME,
            "moisture": gas.moisture * 100,
            "constant": 1.0,
        }
        if name in known:
            return known[name]
        if name in self.fuels:
            return heat * self.shares(k)[name]
        return self.series[name][k]

    def _gas_readings(self) -> list[GasReading]:
        readings = []
        for check in self.scenario["checks"]:
            at = minute(check["start"])
            for cylinder, level, channels in check["steps"]:
                at += check.get("minutes", 3)
                readings += [GasReading(at, c, check["route"], level, cylinder) for c in channels.split()]
        return readings

    def _feeds(self) -> list[Feed]:
        feeds = [Feed("ambient")] * self.length
        for begin, until in self.scenario["on_stack"]:
            for k in range(minute(begin), minute(until)):
                feeds[k - self.start] = Feed()
        for leak in self.scenario.get("leaks", []):
            for k in range(minute(leak["from"]), minute(leak["until"])):
                feeds[k - self.start] = Feed(air_share=leak["air_share"])
        for check in self.scenario["checks"]:
            k, length = minute(check["start"]) - self.start, check.get("minutes", 3)
            for cylinder, _, _ in check["steps"]:
                feeds[k : k + length] = [Feed(cylinder, check["route"])] * length
                k += length
        return feeds

    def stack_value(self, channel: str, k: int) -> float:
        """The true stack concentration a channel should show (dry, or wet for a wet channel)."""
        analyzer, gas = self.analyzers[channel], self.flue[k]
        oxygen = self.series["oxygen"][k]
        name = analyzer["gas"]
        if name == "O2":
            dry = oxygen
        elif name == "CO2":
            dry = gas.carbon_dioxide * 100
        else:
            k_ref, reference = self.plant["oxygen_reference"]
            dry = self.series[name][k] * (k_ref - oxygen) / (k_ref - reference)
        return dry * (1 - gas.moisture) if analyzer.get("wet") else dry

    def fed_value(self, channel: str, k: int) -> float:
        """The concentration at the inlet of the sampling system or analyzer in a minute."""
        feed, analyzer = self.feeds[k], self.analyzers[channel]
        air = {"O2": AMBIENT_OXYGEN, "CO2": 0.04}.get(analyzer["gas"], 0.0)
        if feed.source == "ambient":
            return air
        if feed.source == "stack":
            return self.stack_value(channel, k) * (1 - feed.air_share) + air * feed.air_share
        contents = self.cylinders[feed.source]
        if analyzer["gas"] == "NOx" and "NO2" in contents:
            return contents["NO2"] * float(analyzer["converter"])
        return contents.get(analyzer["gas"], 0.0)

    def _faults(self, channel: str, k: int, what: str) -> float:
        """What the faults of a channel add to a property in a minute."""
        return float(
            sum(
                fault.get(what, 0.0)
                for fault in self.scenario.get("faults", [])
                if fault["channel"] == channel and minute(fault["from"]) <= self.start + k < minute(fault["until"])
            )
        )

    def response(self, channel: str, value: float, k: int, route: str) -> float:
        """What an analyzer shows for a value: system bias, gain and zero that drift over the day."""
        analyzer, hours = self.analyzers[channel], k / 60
        if route == "system":
            lost = self._faults(channel, k, "system_gain")
            value = value * (1 + analyzer["system_gain"] + lost) + analyzer["system_zero"]
        gain = analyzer["gain"] + analyzer["gain_per_hour"] * hours
        zero = analyzer["zero"] + analyzer["zero_per_hour"] * hours + self._faults(channel, k, "zero")
        return float(value * (1 + gain) + zero)

    def logged(self, channel: str) -> list[float]:
        """The minute series of a channel as the logger stores it."""
        analyzer = self.analyzers[channel]
        shown = [self.response(channel, self.fed_value(channel, k), k, feed.route) for k, feed in enumerate(self.feeds)]
        series = []
        for k, value in enumerate(shown):
            changed = k > 0 and self.feeds[k] != self.feeds[k - 1]
            settled = value + SETTLING_SHARE * (shown[k - 1] - value) if changed else value
            series.append(_rounded(settled + analyzer["noise"] * self.noise.normal(), analyzer["decimals"]))
        return series

    def read(self, reading: GasReading) -> float:
        """What was written down for a calibration gas at the end of its step."""
        analyzer, k = self.analyzers[reading.channel], reading.at - self.start - 1
        shown = self.response(reading.channel, self.fed_value(reading.channel, k), k, reading.route)
        return _rounded(shown + 0.3 * analyzer["noise"] * self.noise.normal(), analyzer["decimals"])

    def mean(self, name: str, begin: int, until: int) -> float:
        """Mean of a plant quantity from one minute of the day to another."""
        values = [self.quantity(name, k - self.start) for k in range(begin, until)]
        return sum(values) / len(values)

    def shown(self, rule: Mapping[str, Any], value: float) -> float:
        """A number as an instrument of the plant shows it: scale, offset, error, noise, decimals."""
        noisy = value * (1 + rule.get("error", 0.0) + rule.get("noise", 0.0) * self.noise.normal())
        return _rounded(noisy * rule.get("scale", 1.0) + rule.get("offset", 0.0), rule["decimals"])
