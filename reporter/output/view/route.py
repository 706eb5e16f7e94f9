"""How a rate was had by Method 19: which form, which F factor from where, which kind of heat."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.equation import Equation
from reporter.ledger import Entry, FromEquation, FromTable
from reporter.output.numbers import formulas, shortest
from reporter.output.view.desk import Desk
from reporter.output.view.standing import dagger

#: Prefix of the volume that an F factor counts: dry, wet, or carbon dioxide alone.
_FACTORS = {"fd": "d", "fw": "w", "fc": ""}
#: Significant digits of an F factor.
_DIGITS = 6


def factor_route(desk: Desk, key: str) -> list[str]:
    """The form of Method 19 and the F factor a rate of one run rests on, in words; nothing for other results."""
    found = _form(desk, key)
    if found is None:
        return []
    equation, factor, name = found
    desk.show(factor.key)
    value = f"{shortest(float(factor.value), _DIGITS)}{dagger(desk, (factor.key,))}"
    words = f"F factor {value} {_volume_unit(name, factor.unit)} {_source(desk, factor)}"
    return [equation.citation.text(), formulas(words), desk.words("limit.gross_heat")]


def _form(desk: Desk, key: str) -> tuple[Equation[object], Entry, str] | None:
    """The equation that takes an F factor, the factor and its name, at or before a result."""
    ledger = desk.outcome.ledger
    stack, seen = [key], set[str]()
    while stack:
        at = stack.pop()
        origin = ledger[at].origin
        if at in seen or not isinstance(origin, FromEquation):
            continue
        seen.add(at)
        inputs = dict(origin.inputs)
        for name in _FACTORS:
            value = inputs.get(name)
            if isinstance(value, str) and origin.equation.citation.document == "m19":
                return origin.equation, ledger[value], name
        before = origin.keys()
        stack += [one for one in before if one.startswith(("run.", "average."))]
    return None


def _source(desk: Desk, factor: Entry) -> str:
    """Table and fuel of a factor; for fuels burned together, the equation and those of each."""
    origin = factor.origin
    if not isinstance(origin, FromEquation):
        return _of_tables(desk, [factor])
    ledger = desk.outcome.ledger
    before = [ledger[key] for key in origin.keys()]  # noqa: SIM118
    parts = [entry for entry in before if entry.key.rsplit(".", 1)[-1] in _FACTORS]
    by = f"by {origin.equation.citation.text()}"
    return f"{by} from those {_of_tables(desk, parts)}" if parts else by


def _of_tables(desk: Desk, factors: Sequence[Entry]) -> str:
    """The tables of some factors, each with the fuels read in it."""
    fuels: dict[str, list[str]] = {}
    for factor in factors:
        origin = factor.origin
        if isinstance(origin, FromTable):
            row = f"{origin.row}{dagger(desk, (factor.key,)) if len(factors) > 1 else ''}"
            fuels.setdefault(origin.citation.text(), []).append(row)
        else:
            fuels.setdefault(desk.origin_words(factor), [])
    return ", ".join(f"of {source}{_listed(rows)}" for source, rows in fuels.items())


def _listed(rows: Sequence[str]) -> str:
    return f" ({', '.join(rows)})" if any(rows) else ""


def _volume_unit(name: str, unit: str) -> str:
    """The unit with the kind of volume an F factor counts, e.g. ``dscf/MMBtu``."""
    volume, _, heat = unit.partition("/")
    return f"{_FACTORS[name]}{'scf' if volume == 'ft3' else 'scm'}/{heat}"
