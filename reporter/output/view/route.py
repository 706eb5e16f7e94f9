"""How a rate was had by Method 19: which form, which F factor from where, which kind of heat."""

from __future__ import annotations

from reporter.equation import Equation
from reporter.ledger import Entry, FromEquation
from reporter.output.numbers import formulas, unit_text
from reporter.output.view.desk import Desk
from reporter.output.view.standing import dagger

_FACTORS = {"fd": "dry F factor", "fw": "wet F factor", "fc": "carbon F factor"}


def factor_route(desk: Desk, key: str) -> list[str]:
    """The form of Method 19 and the F factor a rate of one run rests on, in words; nothing for other results."""
    found = _form(desk, key)
    if found is None:
        return []
    equation, factor, name = found
    text = f"{_FACTORS[name]} {desk.number_text(factor.key, unit=False)}{dagger(desk, (factor.key,))}"
    source = _source(desk, factor)
    words = f"{text} {_volume_unit(name, factor.unit)}{f' of {source}' if source else ''}"
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
        stack += [one for one in origin.keys() if one.startswith(("run.", "average."))]
    return None


def _source(desk: Desk, factor: Entry) -> str:
    """Table and fuel of a factor; for fuels burned together, those of each."""
    origin = factor.origin
    if not isinstance(origin, FromEquation):
        return desk.factor_words(factor)
    ledger = desk.outcome.ledger
    parts = [ledger[key] for key in origin.keys() if key.rsplit(".", 1)[-1] in _FACTORS]
    marked = [f"{desk.factor_words(part)}{dagger(desk, (part.key,))}" for part in parts]
    return ", ".join(dict.fromkeys([origin.equation.citation.text(), *marked]))


def _volume_unit(name: str, unit: str) -> str:
    """The unit with the kind of volume an F factor counts: dry, wet, or carbon dioxide alone."""
    kind = {"fd": "dry standard", "fw": "wet standard", "fc": "standard"}[name]
    volume, _, heat = unit_text(unit).partition("/")
    return f"{kind} {volume}/{heat}"
