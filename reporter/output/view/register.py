"""The register: a derivation row for each printed number, and all it needs, that is derived nowhere else."""

from __future__ import annotations

from reporter.ledger import Entry, FromEquation
from reporter.output.numbers import formulas, shortest, unit_text
from reporter.output.view.desk import Desk
from reporter.output.view.model import Derivation, DerivationGroup, Leaf, Register, Shown
from reporter.output.view.sample import DIGITS, sources, value_text


def register(desk: Desk) -> Register:
    """Rows of all keys that are printed, or needed by one that is, without an anchor yet."""
    ledger = desk.outcome.ledger
    needed = desk.needed(desk.printed)
    groups: dict[str, list[Entry]] = {}
    leaves: list[Leaf] = []
    for entry in ledger:
        if entry.key not in needed or entry.key in desk.anchors:
            continue
        desk.anchors.add(entry.key)
        if isinstance(entry.origin, FromEquation):
            equation = entry.origin.equation
            groups.setdefault(f"{equation.name} {equation.citation.text()}", []).append(entry)
        else:
            leaves.append(_leaf(desk, entry))
    return Register(tuple(_group(desk, entries) for entries in groups.values()), tuple(leaves))


def _group(desk: Desk, entries: list[Entry]) -> DerivationGroup:
    origin = entries[0].origin
    assert isinstance(origin, FromEquation)
    rows = tuple(_row(desk, entry) for entry in entries)
    return DerivationGroup(desk.equation_line(origin.equation), origin.equation.citation.text(), rows)


def _row(desk: Desk, entry: Entry) -> Derivation:
    value = Shown(entry.key, value_text(entry), unit_text(entry.unit))
    return Derivation(entry.key, value, sources(desk, entry), desk.roots(entry.key))


def _leaf(desk: Desk, entry: Entry) -> Leaf:
    number = value_text(entry) if entry.is_series else shortest(float(entry.value), DIGITS)
    unit = "" if entry.is_series else unit_text(entry.unit)
    basis = formulas(entry.basis.text())
    value = ", ".join(part for part in (f"{number} {unit}".strip(), basis) if part)
    return Leaf(entry.key, value, formulas(desk.origin_words(entry)))
