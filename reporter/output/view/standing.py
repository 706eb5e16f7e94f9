"""Which documents a test cites, and which printed bounds and factors were read in a copy of theirs.

The tables of criteria, fuel factors and F factors carry a status per number; what is recalled is marked in the
report with a dagger, and one footnote says what that means.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Any

from reporter.equation import Citation, Equation
from reporter.errors import RecordError
from reporter.ledger import FromEquation, FromTable, Stated
from reporter.methods.criteria import criteria, method_family
from reporter.methods.method_3b import fo_range
from reporter.methods.tables import factor_tables, fuel_factors
from reporter.output.view.desk import Desk, said

DAGGER = "†"
_FOUND = "found"


def is_recalled(desk: Desk, key: str) -> bool:
    """Whether a bound or a factor is recalled, not read in a copy of what prints it."""
    if not key:
        return False
    parts = key.split(".")
    if parts[0] == "criterion" and len(parts) > 3:
        return _criterion_recalled(desk, parts[1], parts[2])
    origin = desk.outcome.ledger[key].origin
    if isinstance(origin, FromTable):
        return _table_recalled(parts, origin)
    if isinstance(origin, FromEquation):
        inputs = tuple(origin.keys())
        return any(isinstance(desk.outcome.ledger[one].origin, FromTable) and is_recalled(desk, one) for one in inputs)
    return False


def _criterion_recalled(desk: Desk, segment: str, name: str) -> bool:
    channels = (gas.channel for run in desk.outcome.runs for gas in run.gases if gas.segment == segment)
    channel = next(channels, None)
    held = criteria(said(channel.method)) if channel is not None else None
    return held is not None and name in held and held[name].status != _FOUND


def _table_recalled(parts: list[str], origin: FromTable) -> bool:
    """Table 3B-1 by its fuel; Method 19's F factors by table, fuel (as the key has it) and column."""
    document, number = origin.citation.document, origin.citation.number
    fuel = parts[1].replace("_", " ")
    if document == "m3b":
        found = fo_range(origin.row or fuel)
        return found is not None and found.status != _FOUND
    named = [table for table in factor_tables() if number.endswith(table)]
    if not named or parts[0] != "fuel":
        return False
    try:
        factors = fuel_factors(fuel, named[0])
    except RecordError:
        return False
    factor = getattr(factors, parts[-1], None)
    return factor is not None and factor.status_us != _FOUND


def cited_documents(desk: Desk) -> set[str]:
    """The ids of the documents that entries, criteria and channels of this test cite."""
    cited = {check.citation.document for check in desk.outcome.checks}
    equations: dict[str, Equation[Any]] = {}
    for entry in desk.outcome.ledger:
        match entry.origin:
            case FromEquation(equation=equation):
                equations[equation.name] = equation
            case FromTable(citation=citation) | Stated(citation=Citation() as citation):
                cited.add(citation.document)
    for equation in equations.values():
        cited.add(equation.citation.document)
        constants = (one.constant for one in equation.parameters.values() if one.constant is not None)
        cited.update(one.citation.document for one in constants if one.citation is not None)
    families = {method_family(said(channel.method)) for channel in desk.outcome.record.channels}
    cited.update(f"m{family.lower()}" for family in families if family)
    if any("60.8" in one.reason for one in _stated(desk)):
        cited.add("cfr60_8")
    return cited


def _stated(desk: Desk) -> Iterator[Stated]:
    return (entry.origin for entry in desk.outcome.ledger if isinstance(entry.origin, Stated))


def dagger(desk: Desk, keys: Iterable[str]) -> str:
    """The dagger where any of some numbers is recalled, else nothing."""
    return DAGGER if any(is_recalled(desk, key) for key in keys) else ""
