"""What the entries of a fuel share while they are made."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TypeVar

from reporter.combustion.components import find_component
from reporter.combustion.fuel import Fuel, Share
from reporter.ledger import Entry, FromTable, Ledger, Origin, Stated

T = TypeVar("T")
#: Elements counted, with their symbols.
SYMBOLS = {"carbon": "C", "hydrogen": "H", "oxygen": "O", "nitrogen": "N", "sulfur": "S"}


def amount_symbol(name: str) -> str:
    """Symbol of the amount of an element, of water or of inert gas."""
    return f"n_{(SYMBOLS | {'water': 'W', 'inert': 'I'})[name]}"


@dataclass(frozen=True, slots=True)
class FuelBook:
    """A fuel, where it is entered, where its shares come from, and the shares that are entries already."""

    ledger: Ledger
    prefix: str
    fuel: Fuel
    origin: Origin | Mapping[str, Origin] | None
    entries: Mapping[str, Entry]

    @classmethod
    def of(
        cls,
        ledger: Ledger,
        prefix: str,
        fuel: Fuel,
        origin: Origin | Mapping[str, Origin] | None,
        entries: Mapping[str, Entry] | None,
    ) -> FuelBook:
        """The book, with shares named as people write components found under the fuel's own names."""
        named = _named(fuel, origin) if isinstance(origin, Mapping) else origin
        return cls(ledger, prefix, fuel, named, _named(fuel, entries or {}))

    def origin_of(self, name: str) -> Origin:
        """Where a share, or `heat`, comes from."""
        if isinstance(self.origin, Mapping):
            found = self.origin.get(name)
            if found is not None:
                return found
        elif self.origin is not None:
            return self.origin
        if self.fuel.assumed:
            return FromTable(self.fuel.citation, self.fuel.name)
        return Stated("as given", self.fuel.citation)

    def given(self, share: Share, key: str, *, label: str, unit: str = "%") -> Entry:
        """The entry of a share, or of the heat, as given."""
        if share.name in self.entries:
            return self.entries[share.name]
        note = f"assumed, ± {share.spread:g} {unit}" if self.fuel.assumed else ""
        origin = self.origin_of(share.name)
        return self.ledger.enter(f"{self.prefix}.{key}", share.percent, unit, origin, label=label, note=note)

    def zero(self, name: str, reason: str) -> Entry:
        """An amount that is zero, and why."""
        return self.ledger.enter(
            f"{self.prefix}.{name}",
            0.0,
            self.fuel.amount_unit,
            Stated(reason),
            label=f"{self.fuel.name}: {name}",
            symbol=amount_symbol(name),
        )


def _named(fuel: Fuel, given: Mapping[str, T]) -> dict[str, T]:
    if not fuel.is_gas:
        return dict(given)
    found = {name: find_component(name) for name in given}
    return {name if row is None else row.key: given[name] for name, row in found.items()}
