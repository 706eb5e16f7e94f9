"""A solved balance as a value, and the balance of bare numbers by the same equations."""

from __future__ import annotations

from dataclasses import dataclass

from reporter.ledger import Entry, Ledger

#: At this distance from 1 the equivalence ratio is called stoichiometric.
_STOICHIOMETRIC = 0.0005


@dataclass(frozen=True)
class State:
    """A solved balance: where its entries stand, what decided it, the keys of the readings.

    `by` is ``o2`` or ``co2`` (the measured gas that decided), ``rich`` (CO with the water-gas relation) or
    ``air`` (the air was given).
    """

    ledger: Ledger
    prefix: str
    fuel_prefix: str
    by: str
    readings: tuple[str, ...]

    def entry(self, name: str) -> Entry:
        """An entry of this balance, e.g. ``co2_expected``."""
        return self.ledger[f"{self.prefix}.{name}"]

    def value(self, name: str) -> float:
        """The value of an entry of this balance."""
        return float(self.entry(name).value)

    def get(self, name: str) -> float | None:
        """The value of an entry of this balance, None where there is none."""
        found = self.ledger.get(f"{self.prefix}.{name}")
        return None if found is None else float(found.value)

    @property
    def mixture(self) -> str:
        """``fuel-lean``, ``stoichiometric`` or ``fuel-rich``; empty where the air burned is not positive."""
        ratio = self.value("equivalence_ratio")
        if abs(ratio - 1) <= _STOICHIOMETRIC:
            return "stoichiometric"
        if ratio <= 0:
            return ""
        return "fuel-lean" if ratio < 1 else "fuel-rich"
