"""A fuel from one line of text: a published name, a gas composition, or an ultimate analysis."""

from __future__ import annotations

import re

from reporter.combustion.components import find_component
from reporter.combustion.fuel import (
    AnalysisBasis,
    Fuel,
    FuelKind,
    fuel_from_analysis,
    fuel_from_gas,
    nominal_fuel,
    nominal_names,
)
from reporter.errors import RecordError, UnitError
from reporter.units import convert, read_unit

_SHARES = {
    "c": "carbon",
    "carbon": "carbon",
    "h": "hydrogen",
    "hydrogen": "hydrogen",
    "o": "oxygen",
    "oxygen": "oxygen",
    "n": "nitrogen",
    "nitrogen": "nitrogen",
    "s": "sulfur",
    "sulfur": "sulfur",
    "sulphur": "sulfur",
    "ash": "ash",
    "water": "water",
    "moisture": "water",
    "h2o": "water",
}
#: Names that only an analysis by weight uses; hydrogen, oxygen, nitrogen and water are components too.
_ONLY_ANALYSIS = {"c", "carbon", "h", "o", "n", "s", "sulfur", "sulphur", "ash"}
_HEAT = {"hhv", "ghv", "gcv", "gross heating value", "heating value"}
_NUMBER = re.compile(r"[+-]?\d+(\.\d*)?|[+-]?\.\d+")
_EXPECTED = (
    "expected: a published fuel name, mole percentages such as 'CH4 94, C2H6 4, N2 2', or percent by weight "
    "such as 'C 86.5 H 12.5 S 0.4 O 0.6 HHV 45.0 MJ/kg'"
)


def fuel_from_text(text: str) -> Fuel:
    """A published fuel name (composition assumed) or a composition.

    Raises
    ------
    RecordError
        The text is neither.

    Examples
    --------
    >>> fuel_from_text("Natural gas").assumed
    True
    """
    if " ".join(text.lower().split()) in nominal_names():
        return nominal_fuel(text)
    if not re.search(r"\d", text):
        raise RecordError(f"{text.strip()!r} is not a published fuel name: {', '.join(nominal_names())}; {_EXPECTED}")
    return parse_composition(text)


def parse_composition(text: str, name: str = "fuel as given") -> Fuel:
    """A fuel from names and percentages, in any order.

    Parameters
    ----------
    text
        Mole percent by component (``CH4 94, C2H6 4, N2 2``), or percent by weight (``C 50 H 6 O 43 ash 1
        water 40 dry HHV 20 MJ/kg``; `dry` or `as fired` is the basis, as fired where absent).
    name
        What the fuel is called.

    Raises
    ------
    RecordError
        The text cannot be read, a name is unknown or repeated, or the sum is off 100 %.
    """
    heat, rest = _take_heat(_tokens(text))
    pairs, words = _pairs(rest)
    if not pairs:
        raise RecordError(f"no name with a percentage was found in {text.strip()!r}; {_EXPECTED}")
    basis = _basis(words)
    if any(word.lower() in _ONLY_ANALYSIS for word, _ in pairs):
        return fuel_from_analysis(
            name,
            _analysis(pairs),
            heat=heat,
            basis=basis or AnalysisBasis.AS_FIRED,
            kind=FuelKind.SOLID,
        )
    if heat is not None or basis is not None:
        raise RecordError("a gas has its heating value from its components; a basis or a heating value is not expected")
    return fuel_from_gas(name, _once(pairs))


def _tokens(text: str) -> list[str]:
    plain = re.sub(r"[=:]", " ", text.replace("%", " "))
    return [token for token in re.split(r"[,;\s]+", plain) if token]


def _take_heat(tokens: list[str]) -> tuple[float | None, list[str]]:
    """The heating value [kJ/kg], if one is named, and the other tokens."""
    for start, _ in enumerate(tokens):
        for length in (3, 2, 1):
            if " ".join(tokens[start : start + length]).lower() not in _HEAT:
                continue
            after = tokens[start + length : start + length + 2]
            if len(after) < 2 or not _NUMBER.fullmatch(after[0]):
                raise RecordError("a heating value needs a number and a unit, for example HHV 45.0 MJ/kg")
            return _kilojoules(float(after[0]), after[1]), tokens[:start] + tokens[start + length + 2 :]
    return None, tokens


def _kilojoules(value: float, unit: str) -> float:
    try:
        return convert(value, read_unit(unit).unit, "kJ/kg")
    except UnitError as error:
        raise RecordError(f"{unit!r} is not a unit of heat by weight; MJ/kg, kJ/kg or Btu/lb is expected") from error


def _pairs(tokens: list[str]) -> tuple[list[tuple[str, float]], list[str]]:
    """Names with their numbers, and the words that have none."""
    pairs: list[tuple[str, float]] = []
    name: list[str] = []
    words: list[str] = []
    for token in tokens:
        if token.lower() in ("dry", "as", "fired", "as-fired"):
            words.append(token.lower())
        elif not _NUMBER.fullmatch(token):
            name.append(token)
        elif name:
            pairs.append((" ".join(name), float(token)))
            name = []
        else:
            raise RecordError(f"the number {token} has no name before it; decimals are written with a point")
    if name:
        raise RecordError(f"{' '.join(name)!r} has no number after it; {_EXPECTED}")
    return pairs, words


def _basis(words: list[str]) -> AnalysisBasis | None:
    if not words:
        return None
    return AnalysisBasis.DRY if words == ["dry"] else AnalysisBasis.AS_FIRED


def _analysis(pairs: list[tuple[str, float]]) -> dict[str, float]:
    named: list[tuple[str, float]] = []
    for word, percent in pairs:
        share = _SHARES.get(word.lower())
        if share is None:
            component = find_component(word)
            what = f"{word!r} is a component of a gas" if component else f"{word!r} is not known"
            raise RecordError(
                f"{what}; beside elements by weight, {', '.join(sorted(set(_SHARES.values())))} are expected"
            )
        named.append((share, percent))
    return _once(named)


def _once(pairs: list[tuple[str, float]]) -> dict[str, float]:
    found: dict[str, float] = {}
    for word, percent in pairs:
        if word in found:
            raise RecordError(f"{word} is given twice")
        found[word] = percent
    return found
