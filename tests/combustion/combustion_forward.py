"""Flue gas made the other way round, from air and burnout, for tests: plain arithmetic, none of the program's."""

from __future__ import annotations

from dataclasses import dataclass

OXYGEN = 0.2095


@dataclass(frozen=True)
class Fuel:
    """Atoms, moisture and inert gas per kg or mole of fuel."""

    c: float
    h: float
    o: float = 0.0
    n: float = 0.0
    s: float = 0.0
    w: float = 0.0
    inert: float = 0.0


@dataclass(frozen=True)
class Flue:
    """Moles of each product, and the air they come from."""

    air: float
    co2: float
    co: float
    hc: float
    h2: float
    h2o: float
    o2: float
    n2: float
    so2: float
    no: float
    inert: float

    @property
    def dry(self) -> float:
        return self.co2 + self.co + self.hc + self.h2 + self.o2 + self.n2 + self.so2 + self.no + self.inert

    @property
    def wet(self) -> float:
        return self.dry + self.h2o

    def percent(self, name: str, *, wet: bool = False) -> float:
        return float(100.0 * getattr(self, name) / (self.wet if wet else self.dry))


@dataclass(frozen=True)
class Burnout:
    """What does not burn to the end: moles of CO, NO and hydrocarbon C_pH_q left per kg or mole of fuel."""

    co: float = 0.0
    no: float = 0.0
    hc: float = 0.0
    p: int = 1
    q: int = 4


def burn(fuel: Fuel, air: float, left: Burnout, *, humidity: float = 0.0, oxygen: float = OXYGEN) -> Flue:
    """Products of burning in `air` mol of dry air with `humidity` mol of water per mol."""
    co2 = fuel.c - left.co - left.p * left.hc
    h2o = fuel.h / 2 + fuel.w + humidity * air - left.q / 2 * left.hc
    n2 = fuel.n / 2 + (1 - oxygen) * air - left.no / 2
    atoms_in = fuel.o + fuel.w + (2 * oxygen + humidity) * air
    o2 = (atoms_in - 2 * co2 - left.co - h2o - 2 * fuel.s - left.no) / 2
    return Flue(air, co2, left.co, left.hc, 0.0, h2o, o2, n2, fuel.s, left.no, fuel.inert)


def stoichiometric_air(fuel: Fuel, oxygen: float = OXYGEN) -> float:
    """Dry air for complete combustion: the air at which no oxygen is left."""
    rest = burn(fuel, 0.0, Burnout(), oxygen=oxygen).o2
    return -rest / oxygen
