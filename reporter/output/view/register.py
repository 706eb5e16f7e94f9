"""The register: a derivation row for each printed number, and all it needs, that is derived nowhere else.

Entries that differ by run, or by calibration reading, alone share a row, so that a row reads like the
equation it stands under: every run beside the next.
"""

from __future__ import annotations

import re

from reporter.basis import Basis
from reporter.ledger import Entry, FromCells, FromEquation, FromTable
from reporter.output.numbers import formulas, unit_text
from reporter.output.view.desk import Desk
from reporter.output.view.model import Derivation, DerivationGroup, Register, Source
from reporter.output.view.sample import value_text

_VARYING = re.compile(
    r"^(run|cylinder|component|comparison|limit)\.[a-z0-9_]+"
    r"|(?<=\.)(direct|system)_[0-9]+"
    r"|(?<=\.component)\.[a-z0-9_]+"
)
_Inputs = tuple[tuple[str, tuple[str, ...]], ...]


def register(desk: Desk) -> Register:
    """Rows of all keys that are printed, or needed by one that is, and have no row yet."""
    open_keys = {key for key in desk.needed(desk.printed) if key not in desk.places}
    carried = {key: source for key in open_keys if (source := desk.source_of(key)) != key}
    shown = set(desk.printed) | set(carried.values())
    computed: dict[tuple[str, str], dict[tuple[str, str, Basis, _Inputs], list[Entry]]] = {}
    leaves: dict[tuple[str, str, Basis, str], list[Entry]] = {}
    for entry in desk.outcome.ledger:
        if entry.key not in open_keys or entry.key in carried:
            continue
        if isinstance(entry.origin, FromEquation):
            equation = entry.origin.equation
            rule = (desk.equation_line(equation), equation.citation.text())
            row = (pattern(entry.key), entry.unit, entry.basis, _patterns(entry.origin))
            computed.setdefault(rule, {}).setdefault(row, []).append(entry)
        elif entry.key in shown or not isinstance(entry.origin, FromCells):
            leaf = (pattern(entry.key), entry.unit, entry.basis, desk.origin_kind(entry))
            leaves.setdefault(leaf, []).append(entry)
    groups = tuple(
        DerivationGroup(*rule, tuple(_computed(desk, entries) for entries in rows.values()))
        for rule, rows in computed.items()
    )
    values = tuple(_leaf(desk, entries) for entries in leaves.values())
    desk.places.update({key: desk.places[source] for key, source in carried.items()})
    return Register(groups, values)


def pattern(key: str) -> str:
    """A key with a star for the run, cylinder, component or limit, and for the number of a calibration reading."""
    return _VARYING.sub(_star, key)


def _star(match: re.Match[str]) -> str:
    if match.group(1):
        return f"{match.group(1)}.*"
    return f"{match.group(2)}_*" if match.group(2) else ".*"


def _patterns(origin: FromEquation) -> _Inputs:
    return tuple(
        (name, tuple(dict.fromkeys(map(pattern, (keys,) if isinstance(keys, str) else keys))))
        for name, keys in origin.inputs
    )


def _computed(desk: Desk, entries: list[Entry]) -> Derivation:
    origins = [entry.origin for entry in entries]
    first = origins[0]
    assert isinstance(first, FromEquation)
    inputs = []
    for at, (name, _) in enumerate(first.inputs):
        keys: list[str] = []
        for origin in origins:
            assert isinstance(origin, FromEquation)
            given = origin.inputs[at][1]
            keys += (given,) if isinstance(given, str) else given
        inputs.append(_input(desk, first.equation.parameters[name].symbol, keys))
    return Derivation(_placed(desk, entries), pattern(entries[0].key), _values(entries), tuple(inputs), "")


def _input(desk: Desk, symbol: str, keys: list[str]) -> Source:
    """One argument of all entries of a row: its values and cells in their order, once where they are all the same."""
    entries = [desk.outcome.ledger[key] for key in keys]
    if entries[0].is_indicator:
        return Source(symbol, ", ".join(dict.fromkeys(map(value_text, entries))), "", "", "section-criteria")
    here = all(isinstance(entry.origin, FromCells) and entry.key not in desk.printed for entry in entries)
    return Source(symbol, ", ".join(_texts(entries)), "", _cells(desk, keys), "" if here else keys[0])


def _cells(desk: Desk, keys: list[str]) -> str:
    """The cells of an argument, one for each entry of the row, so that they pair with the values before."""
    origins = [desk.outcome.ledger[key].origin for key in keys]
    cells = [origin.place.cell for origin in origins if isinstance(origin, FromCells)]
    sheets = {origin.place.sheet for origin in origins if isinstance(origin, FromCells)}
    if len(cells) < len(keys) or len(sheets) != 1 or len(set(cells)) in {1, len(cells)}:
        return desk.cells(keys)
    return f"{sheets.pop()}!{' '.join(cells)}"


def _leaf(desk: Desk, entries: list[Entry]) -> Derivation:
    where = desk.cells(entry.key for entry in entries) or _table_words(desk, entries)
    return Derivation(_placed(desk, entries), pattern(entries[0].key), _values(entries), (), formulas(where))


def _table_words(desk: Desk, entries: list[Entry]) -> str:
    """Where entries of one table come from: the citation once, then their rows."""
    origins = [entry.origin for entry in entries]
    rows = [origin.row for origin in origins if isinstance(origin, FromTable) and origin.row]
    if len(rows) < 2:
        return desk.origin_words(entries[0])
    return f"{desk.origin_kind(entries[0])}, {', '.join(dict.fromkeys(rows))}"


def _placed(desk: Desk, entries: list[Entry]) -> str:
    return desk.place(entry.key for entry in entries)


def _values(entries: list[Entry]) -> str:
    """The values with their unit and basis, once each where all entries have the same."""
    unit = "" if entries[0].is_series else unit_text(entries[0].unit)
    basis = formulas(entries[0].basis.text())
    return ", ".join(part for part in (f"{', '.join(_texts(entries))} {unit}".strip(), basis) if part)


def _texts(entries: list[Entry]) -> list[str]:
    """The values as text; one text where they are all the same."""
    texts = list(map(value_text, entries))
    return texts[:1] if len(set(texts)) == 1 else texts
