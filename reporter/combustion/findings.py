"""Combinations of fuel, air and readings that cannot have occurred together, and what would have to be wrong.

A derived amount that is negative beyond twice its uncertainty is a finding, never a block.  For each reading the
change that alone would bring the amount to zero is found by central differences on a replay of the ledger.
Negative readings are carried and noted, not blamed.  Where the composition is assumed, an amount within
reach of the composition's stated spread is no finding.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from enum import Enum

from reporter.combustion.state import State
from reporter.errors import EquationError, LedgerError
from reporter.ledger import Entry
from reporter.quantities import label_of

#: Derived amounts looked at, with what they are; the first that is negative in a group says it all.
SPECIES = {
    "determinant": "oxygen taken from the air",
    "air_dry": "combustion air",
    "dry_products": "dry products",
    "co2": "carbon dioxide",
    "h2o": "water",
    "n2": "nitrogen",
    "o2": "oxygen",
    "co": "carbon monoxide",
    "h2": "hydrogen",
    "air_humidity_implied": "water in the combustion air",
}
_TINY = 1e-9
_STEP = 1e-5
_ROUNDS = 12
_FAR = 10.0


class FindingKind(Enum):
    """What a finding says."""

    IMPOSSIBLE = "cannot have occurred together"
    NEGATIVE_READING = "negative reading, carried as read"


@dataclass(frozen=True, slots=True)
class Suspect:
    """A reading that alone would explain the finding: what it was, what it would have to be [unit]."""

    key: str
    label: str
    value: float
    needed: float
    unit: str

    @property
    def change(self) -> float:
        """The change that would be needed [unit]."""
        return self.needed - self.value


@dataclass(frozen=True, slots=True)
class BalanceFinding:
    """One finding: the entry it is about, its amount with standard uncertainty [unit], the readings suspected."""

    kind: FindingKind
    key: str
    species: str
    amount: float
    unit: str
    uncertainty: float = 0.0
    suspects: tuple[Suspect, ...] = ()
    assumed: bool = False

    @property
    def keys(self) -> tuple[str, ...]:
        """The entries it rests on."""
        return (self.key, *(suspect.key for suspect in self.suspects))

    def text(self) -> str:
        """The finding in words."""
        if self.kind is FindingKind.NEGATIVE_READING:
            amount = f"{_signed(self.amount)} {self.unit}"
            return f"{self.species[0].upper()}{self.species[1:]}: the reading of {amount} is negative; carried as read."
        fuel = "the assumed composition of the fuel" if self.assumed else "this fuel"
        unit = "" if self.unit == "1" else f" {self.unit}"
        if self.key.endswith("determinant"):
            head = f"With {fuel} and this air, oxygen at or above that of air leaves no room for combustion."
        else:
            head = (
                f"{fuel[0].upper()}{fuel[1:]}, this air and these readings cannot have occurred together: "
                f"{self.species} would be {_signed(self.amount)}{unit} "
                f"(standard uncertainty {self.uncertainty:.2g}{unit})."
            )
        if not self.suspects:
            return f"{head} No single reading explains it; another fuel may."
        ways = ", or ".join(_way(suspect) for suspect in self.suspects)
        return f"{head} One of these alone would bring it to zero: {ways}; another fuel may explain it too."


def _way(suspect: Suspect) -> str:
    unit = "" if suspect.unit == "1" else f" {suspect.unit}"
    return f"{suspect.label} {suspect.needed:.4g}{unit} instead of {_signed(suspect.value)}{unit}"


def _signed(value: float) -> str:
    return f"{value:.4g}".replace("-", "−")


def findings(
    state: State,
    uncertainties: Mapping[str, float] | None = None,
    *,
    spreads: Mapping[str, float] | None = None,
) -> tuple[BalanceFinding, ...]:
    """What the balance says cannot be, and which readings were negative.

    Parameters
    ----------
    state
        A solved balance.
    uncertainties
        Standard uncertainty of readings by ledger key, in the unit of the entry; zero where absent.
    spreads
        Half ranges of an assumed composition by ledger key (`fuel_entries.spreads`): an amount that some
        composition within them brings to zero is no finding.

    Returns
    -------
    tuple of BalanceFinding
        Impossible amounts first, then negative readings.
    """
    probe = _Probe(state)
    found: list[BalanceFinding] = []
    for name, species in SPECIES.items():
        key = f"{state.prefix}.{name}"
        if key not in state.ledger or key in state.readings:
            continue
        made = _impossible(probe, key, species, uncertainties or {}, spreads or {})
        if made is not None:
            found.append(made)
        if made is not None and name == "determinant":
            break
    return (*found, *_negative_readings(state))


def _impossible(
    probe: _Probe, key: str, species: str, uncertainties: Mapping[str, float], spreads: Mapping[str, float]
) -> BalanceFinding | None:
    value = probe.value(key)
    # An amount that is the fraction of a reading by definition repeats that reading: noted, not a finding.
    if value >= -_TINY or probe.repeats_a_reading(key):
        return None
    squares = sum((probe.slope(key, leaf) * u) ** 2 for leaf, u in uncertainties.items() if probe.reaches(key, leaf))
    uncertainty = float(squares) ** 0.5
    if value >= -2.0 * uncertainty - probe.reach_of(key, spreads):
        return None
    entry = probe.state.ledger[key]
    return BalanceFinding(
        FindingKind.IMPOSSIBLE,
        key,
        species,
        value,
        entry.unit,
        uncertainty,
        tuple(probe.suspects(key)),
        assumed=bool(spreads),
    )


def _negative_readings(state: State) -> tuple[BalanceFinding, ...]:
    entries = (state.ledger[key] for key in state.readings)
    return tuple(
        BalanceFinding(FindingKind.NEGATIVE_READING, entry.key, _label(entry), float(entry.value), entry.unit)
        for entry in entries
        if float(entry.value) < 0
    )


class _Probe:
    """Changes single entries of a solved balance and looks at what follows."""

    def __init__(self, state: State) -> None:
        self.state = state
        self._slopes: dict[tuple[str, str], float] = {}
        self._reach: dict[str, set[str]] = {}

    def value(self, key: str, changed: Mapping[str, float] | None = None) -> float:
        """An entry, with other values for some entries before it."""
        if not changed:
            return float(self.state.ledger[key].value)
        return float(self.state.ledger.replay(changed, only=[key])[key])

    def reaches(self, key: str, source: str) -> bool:
        """Whether an entry rests on another."""
        if key not in self._reach:
            self._reach[key] = self.state.ledger.roots([key], everything=True)
        return source in self._reach[key]

    def repeats_a_reading(self, key: str) -> bool:
        """Whether an amount is a reading's fraction of the products, and the reading is the negative one."""
        fraction = f"{key}_fraction"
        return self.reaches(key, fraction) and float(self.state.ledger[fraction].value) < 0

    def slope(self, key: str, source: str) -> float:
        """Derivative of an entry by another; infinite, so that nothing is claimed, where it cannot be found."""
        if (key, source) not in self._slopes:
            at = float(self.state.ledger[source].value)
            step = _STEP * max(abs(at), _scale(self.state.ledger[source].unit))
            self._slopes[key, source] = self._difference(key, source, at, step)
        return self._slopes[key, source]

    def reach_of(self, key: str, spreads: Mapping[str, float]) -> float:
        """How far an entry moves with half ranges of the entries before it."""
        return sum(abs(self.slope(key, leaf)) * s for leaf, s in spreads.items() if self.reaches(key, leaf))

    def _difference(self, key: str, source: str, at: float, step: float) -> float:
        try:
            return (self.value(key, {source: at + step}) - self.value(key, {source: at - step})) / (2 * step)
        except EquationError:
            return math.inf

    def suspects(self, key: str) -> list[Suspect]:
        """The readings each of which alone could bring an amount to zero, the smallest relative change first.

        A reading that would have to be many times what it is explains nothing while a nearer one does.
        """
        found: list[Suspect] = []
        for reading in self.state.readings:
            if not self.reaches(key, reading):
                continue
            needed = self._root(key, reading)
            entry = self.state.ledger[reading]
            if needed is not None:
                found.append(Suspect(reading, _label(entry), float(entry.value), needed, entry.unit))
        near = [one for one in found if abs(one.needed) <= _FAR * max(abs(one.value), _scale(one.unit))]
        return sorted(near or found, key=lambda suspect: abs(suspect.change) / _scale(suspect.unit))

    def _root(self, key: str, reading: str) -> float | None:
        """The value of a reading that brings an amount to zero: the linear step, then refined; None if none."""
        entry = self.state.ledger[reading]
        at, scale = float(entry.value), _scale(entry.unit)
        level, slope = self.value(key), self.slope(key, reading)
        goal = _TINY * abs(level)
        for _ in range(_ROUNDS):
            if slope == 0 or math.isinf(slope):
                return None
            at -= level / slope
            if not 0 <= at <= _whole(entry.unit):
                return None
            try:
                level = self.value(key, {reading: at})
            except EquationError:
                return None
            slope = self._difference(key, reading, at, _STEP * max(abs(at), scale))
            if abs(level) <= goal:
                return at
        return None


def _scale(unit: str) -> float:
    """A small amount in a unit of concentration."""
    return {"%": 0.1, "ppm": 10.0}.get(unit, 1e-3)


def _whole(unit: str) -> float:
    """All of the gas in a unit of concentration."""
    return {"%": 100.0, "ppm": 1e6, "1": 1.0}.get(unit, math.inf)


def _label(entry: Entry) -> str:
    """What an entry is called: its own label, or that of its key."""
    if entry.label:
        return entry.label
    try:
        return label_of(entry.key)
    except LedgerError:
        return entry.key
