"""What of a test is there: fields, entries, criteria, named rows and facts, as the content checklist asks for them."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from datetime import timedelta
from fnmatch import fnmatchcase
from itertools import pairwise

from reporter.output.view.desk import Desk, said
from reporter.output.view.documents import certificate_cylinders
from reporter.record import Record

_OFTEN = timedelta(minutes=15)
#: Letters a word needs to name a piece of control equipment.
_WORD = 6


def is_there(desk: Desk, name: str) -> bool:
    """Whether what a name of `templates/checklist.toml` asks for is there."""
    kind, colon, rest = name.partition(":")
    return _KINDS[kind](desk, rest) if colon else _field(desk.outcome.record, name, every=True)


def _field(record: Record, name: str, *, every: bool) -> bool:
    """Whether a sheet has rows, or a field of it is filled: in every row, or in any."""
    table, _, rest = name.partition(".")
    value = getattr(record, table)
    if not rest:
        return bool(getattr(value, "times", value))
    if isinstance(value, tuple):
        filled = [getattr(row, rest) is not None for row in value]
        return (all(filled) if every else any(filled)) and bool(filled)
    return getattr(value, rest) is not None


def _any(desk: Desk, name: str) -> bool:
    return _field(desk.outcome.record, name, every=False)


def _entry(desk: Desk, pattern: str) -> bool:
    return any(fnmatchcase(entry.key, pattern) for entry in desk.outcome.ledger)


def _check(desk: Desk, title: str) -> bool:
    return any(check.title.startswith(title) for check in desk.outcome.checks)


def _extra(desk: Desk, words: str) -> bool:
    record = desk.outcome.record
    return any(words in item.item.lower() and bool(item.entry) for item in (*record.test.extra, *record.location.extra))


def _fact(desk: Desk, name: str) -> bool:
    return _FACTS[name](desk)


def _logged_often(desk: Desk) -> bool:
    """Whether the process log has a row at least every 15 minutes of every run."""
    times = desk.outcome.record.process.times
    if not times or not desk.outcome.runs:
        return False
    for run in desk.outcome.runs:
        start, end = run.run.start.value, run.run.end.value
        inside = [start, *(time for time in times if start <= time <= end), end]
        if any(after - before > _OFTEN for before, after in pairwise(inside)):
            return False
    return True


def _control_logged(desk: Desk) -> bool:
    """Whether a column of the process log shares a long word with the control equipment as entered."""
    equipment = {
        word for word in said(desk.outcome.record.test.control_equipment).lower().split() if len(word) >= _WORD
    }
    return any(equipment & set(name.lower().split()) for name in desk.outcome.record.process.columns)


def _heating_value(desk: Desk) -> bool:
    """Whether a heating value stands with its kind: in Fuel use, or as the gross one of an analysis."""
    record = desk.outcome.record
    used = [use.heating_value is not None and use.heating_value_kind is not None for use in record.fuel_use]
    return (bool(used) and all(used)) or any(fuel.gross_heating_value is not None for fuel in record.fuels)


def _certificates_listed(desk: Desk) -> bool:
    """Whether each gas but the zero gases has number and expiry."""
    rows = [row for row in desk.outcome.record.cylinders if row.certified_value.value != 0.0]
    return bool(rows) and all(row.certificate_number is not None and row.expires is not None for row in rows)


def count_of(desk: Desk, name: str) -> int:
    """How many documents a line asks for: one for each protocol cylinder, or for each run."""
    return len(certificate_cylinders(desk)) if name == "cylinders" else len(desk.outcome.runs)


_KINDS: Mapping[str, Callable[[Desk, str], bool]] = {
    "any": _any,
    "ledger": _entry,
    "check": _check,
    "extra": _extra,
    "fact": _fact,
}
_FACTS: Mapping[str, Callable[[Desk], bool]] = {
    "logged_often": _logged_often,
    "control_logged": _control_logged,
    "heating_value": _heating_value,
    "certificates_listed": _certificates_listed,
    "fuel_analysed": lambda desk: bool(desk.outcome.record.fuel_gas) or _any(desk, "fuels.carbon"),
    "duct_size": lambda desk: (
        desk.outcome.record.location.diameter is not None or desk.outcome.record.location.width is not None
    ),
    "f_factor": lambda desk: any(_entry(desk, f"fuel.*.{name}") for name in ("fd", "fw", "fc")),
    "converter_asked": lambda desk: any(gas.segment == "nox" for run in desk.outcome.runs for gas in run.gases),
}
