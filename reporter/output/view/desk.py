"""The desk at which the view is made: the outcome, the phrases, and the one way a number becomes text.

Whatever is shown is remembered, so that the register can hold a derivation row for each printed number that
is derived nowhere else.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable, Sequence
from dataclasses import dataclass, field, replace
from datetime import datetime
from typing import Any

from reporter.equation import Citation, Equation
from reporter.errors import LedgerError
from reporter.gases import find_gas
from reporter.ledger import Entry, FromCells, FromEquation, FromTable
from reporter.outcome import Outcome
from reporter.output.numbers import decimals_in, fixed, formulas, runs_text, shortest, shown, unit_text
from reporter.output.phrases import Phrases
from reporter.output.view.model import AnyCell, Heading, Shown
from reporter.quantities import label_of, quantity_of, table
from reporter.record import Channel, Real, Record, Run, Text
from reporter.typeset import text_formula

#: The equation that only gives an entry a second name.
CARRIED = "carried"
#: The sections in the order of the report; each has a heading ``title.<name>``.
SECTIONS = (
    "summary", "quality_summary", "process", "location", "runs", "combustion", "traces", "criteria",
    "calibrations", "sample", "inputs", "register", "attachments", "checklist", "references", "statements",
    "signatures",
)  # fmt: skip


@dataclass
class Desk:
    """What the parts of the view share; `places` holds the anchor of the derivation row of each key that has one."""

    outcome: Outcome
    issued: datetime
    version: str
    phrases: Phrases
    printed: dict[str, None] = field(default_factory=dict)
    places: dict[str, str] = field(default_factory=dict)
    row_words: dict[str, str] = field(init=False)
    _lines: dict[tuple[str, Citation], str] = field(default_factory=dict)
    _below: dict[str, list[str]] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.row_words = self.phrases.all("row")

    def words(self, name: str, **values: object) -> str:
        """A fixed phrase."""
        return self.phrases(name, **values)

    @property
    def missing(self) -> str:
        """What stands where a value was not formed."""
        return self.words("missing.value")

    def headings(self) -> dict[str, Heading]:
        """Anchor, number and title of every section."""
        return {
            name: Heading(f"section-{name}", str(number), self.words(f"title.{name}"))
            for number, name in enumerate(SECTIONS, 1)
        }

    def section_number(self, name: str) -> str:
        """The number of a section."""
        return str(SECTIONS.index(name) + 1)

    def show(self, key: str, *, unit: bool = False) -> AnyCell:
        """The number of a key as a cell (a dash where there is none); `unit` puts its unit behind it."""
        entry = self.outcome.ledger.get(key) if key else None
        if entry is None:
            return self.missing
        return self.shown(entry, unit=unit)

    def shown(self, entry: Entry, *, unit: bool = False) -> Shown:
        """The printed number of an entry, remembered as printed."""
        self.printed[entry.key] = None
        text = shown(entry)
        name = unit_text(entry.unit)
        return Shown(entry.key, f"{text}\u00a0{name}".strip() if unit else text, name, decimals_in(text))

    def row(self, entries: Sequence[Entry | None]) -> list[AnyCell]:
        """The numbers of one row as cells, with one count of decimals where they are of like size."""
        cells: list[AnyCell] = [self.missing if entry is None else self.shown(entry) for entry in entries]
        numbers = [(at, cell) for at, cell in enumerate(cells) if isinstance(cell, Shown)]
        decimals = [cell.decimals for _, cell in numbers]
        if decimals and max(decimals) - min(decimals) == 1:
            for at, cell in numbers:
                text = fixed(float(self.outcome.ledger[cell.key].value), max(decimals))
                cells[at] = replace(cell, text=text, decimals=max(decimals))
        return cells

    def averaged(self, key: str) -> tuple[str, ...]:
        """The runs an average holds, by key segment; nothing for what is no average of runs."""
        entry = self.outcome.ledger.get(key) if key else None
        if entry is None or not isinstance(entry.origin, FromEquation):
            return ()
        inputs = dict(entry.origin.inputs)
        values, flags = inputs.get("values", ()), inputs.get("flags", ())
        if isinstance(values, str) or isinstance(flags, str) or len(values) != len(flags):
            return ()
        held = [value for value, flag in zip(values, flags, strict=True) if self.outcome.ledger[flag].value == 1.0]
        return tuple(value.split(".")[1] for value in held)

    def run_names(self, keys: Iterable[str]) -> str:
        """Names of runs, as in ``runs 1, 3, 4``, kept in one line."""
        return runs_text([self.outcome.run(key).run.run.value for key in keys]).replace(" ", "\u00a0")

    def number_text(self, key: str, *, unit: bool = True) -> str:
        """The printed number of a key with its unit, for a sentence; remembered as printed."""
        cell = self.show(key, unit=unit)
        return cell.text if isinstance(cell, Shown) else str(cell)

    def place(self, keys: Iterable[str]) -> str:
        """The anchor of a row that derives some keys: the first that has none yet; nothing where all have one."""
        new = [key for key in keys if key not in self.places]
        for key in new:
            self.places[key] = new[0]
        return new[0] if new else ""

    def is_read(self, key: str) -> bool:
        """Whether an entry was read from a cell or taken from a table, as it stands."""
        return isinstance(self.outcome.ledger[key].origin, (FromCells, FromTable))

    def label(self, key: str) -> str:
        """The words for a key: its entry's label, else the words of the quantity table, else the key."""
        entry = self.outcome.ledger.get(key)
        if entry is not None and entry.label:
            return formulas(entry.label)
        try:
            return formulas(label_of(key))
        except LedgerError:
            return key

    def quantity_label(self, key: str) -> str:
        """The words for the quantity of a key and its variants, without gas and run."""
        try:
            found, variants = quantity_of(key)
        except LedgerError:
            return key.rsplit(".", 1)[-1].replace("_", " ")
        label = self.row_words.get(found.segment, found.label)
        for segment in variants:
            words = self.row_words.get(segment)
            label = f"{label}, {_variant(segment)}" if words is None else words.replace("{of}", label)
        return label

    def origin_words(self, entry: Entry) -> str:
        """Where an entry that is not computed comes from: cell, table or statement."""
        origin = entry.origin
        if isinstance(origin, FromCells):
            return cell_words(origin)
        if isinstance(origin, FromTable):
            return ", ".join(part for part in (origin.citation.text(), origin.row) if part)
        if isinstance(origin, FromEquation):
            return origin.equation.citation.text()
        cited = f" ({origin.citation.text()})" if origin.citation is not None else ""
        return f"{origin.reason}{cited}"

    def factor_words(self, entry: Entry) -> str:
        """Where an F factor is from: table and fuel, equation, or what was entered."""
        origin = entry.origin
        if isinstance(origin, FromTable):
            return f"{origin.citation.text()}{f', {origin.row}' if origin.row else ''}"
        return self.origin_words(entry)

    def keys_under(self, stem: str) -> list[str]:
        """The keys below a stem, in the order they were made."""
        if not self._below:
            for entry in self.outcome.ledger:
                parts = entry.key.split(".")
                for count in range(1, len(parts)):
                    self._below.setdefault(".".join(parts[:count]), []).append(entry.key)
        return self._below.get(stem, [])

    def equation_line(self, equation: Equation[Any]) -> str:
        """An equation in symbols, in one line of text."""
        known = (equation.name, equation.citation)
        if known not in self._lines:
            term = equation.in_system(self.outcome.ledger.system).symbols()
            self._lines[known] = f"{equation.symbol} = {text_formula(term)}"
        return self._lines[known]

    def needed(self, keys: Iterable[str], stop: Collection[str] = ()) -> set[str]:
        """The keys some numbers rest on, themselves too; the answers of criteria, and `stop`, are not followed."""
        ledger = self.outcome.ledger
        found: set[str] = set()
        stack = [key for key in keys if key in ledger]
        while stack:
            key = stack.pop()
            entry = ledger[key]
            if key in found or key in stop or entry.is_indicator:
                continue
            found.add(key)
            if isinstance(entry.origin, FromEquation):
                stack.extend(entry.origin.keys())
        return found

    def origin_kind(self, entry: Entry) -> str:
        """Sheet and column of a value read, or the citation of its table: what like entries have in common."""
        origin = entry.origin
        if isinstance(origin, FromCells):
            return f"{origin.place.sheet} {origin.place.field}"
        return origin.citation.text() if isinstance(origin, FromTable) else self.origin_words(entry)

    def cells(self, keys: Iterable[str]) -> str:
        """The cells some entries were read from, the sheet once: ``Runs!L4 L5 L6``; nothing for other origins."""
        by_sheet: dict[str, dict[str, None]] = {}
        for key in keys:
            origin = self.outcome.ledger[key].origin
            if isinstance(origin, FromCells):
                by_sheet.setdefault(origin.place.sheet, {})[origin.place.cell] = None
        return ", ".join(f"{sheet}!{' '.join(cells)}".strip("!") for sheet, cells in by_sheet.items())

    def source_of(self, key: str) -> str:
        """The key an entry was carried over from under a second name; else the key itself."""
        origin = self.outcome.ledger[key].origin
        while isinstance(origin, FromEquation) and origin.equation.name == CARRIED:
            key = origin.keys()[0]
            origin = self.outcome.ledger[key].origin
        return key


def _variant(segment: str) -> str:
    """A variant of a quantity in words."""
    words = table()
    return words[segment].label if segment in words else segment.replace("_", " ").replace("limit ", "for limit ")


def cell_words(origin: FromCells) -> str:
    """A place in the field workbook as ``Sheet!C5``."""
    place = origin.place
    return f"{place.sheet}!{place.cell}" if place.sheet and place.cell else place.sheet or place.text()


def gas_name(text: str) -> str:
    """A gas as it is printed."""
    found = find_gas(text)
    return formulas(found.label if found is not None else text)


def fuel_words(record: Record, run: Run) -> str:
    """The fuels burned in a run: those of Fuel use, else those of the sheet Fuel."""
    used = [use.fuel.value for use in record.fuel_use if use.run.value == run.run.value]
    return ", ".join(dict.fromkeys(used or [fuel.fuel.value for fuel in record.fuels]))


def channel_name(channel: Channel) -> str:
    """The gas of a channel, with the channel's name where that says more."""
    gas, name = gas_name(channel.gas.value), channel.channel.value
    return gas if gas_name(name) == gas else f"{gas}, {name}"


def entered(value: Real | None, missing: str) -> str:
    """A number as it was entered, with its unit."""
    if value is None:
        return missing
    unit = unit_text(value.unit.unit) if value.unit is not None else ""
    return f"{shortest(value.value, 8)} {unit}".strip()


def said(value: Text | None, missing: str = "") -> str:
    """An entered text, or what stands for a missing one."""
    return missing if value is None or not value.value.strip() else value.value
