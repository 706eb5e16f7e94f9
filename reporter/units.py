"""Units: how people write them, the canonical spelling, exact factors, and the one registry behind them.

`tables/units.toml` holds each canonical unit with its factor, so that the everyday path needs no registry;
`quantity` and `pint_unit` build the (cached) pint registry only when someone computes with quantities.  A
test holds every factor of the table against the registry.
"""

from __future__ import annotations

import re
import tomllib
from dataclasses import dataclass
from functools import cache
from typing import Any

from reporter.basis import ACTUAL, EPA_STANDARD, NO_VOLUME, NORMAL, Moisture, Standard
from reporter.errors import UnitError
from reporter.resources import table_text


@dataclass(frozen=True, slots=True)
class Unit:
    """A canonical unit: dimension, factor to the dimension's base, offset for temperatures."""

    name: str
    dimension: str
    factor: float
    offset: float
    pint: str


@dataclass(frozen=True, slots=True)
class ReadUnit:
    """A unit as someone wrote it, with what its spelling says about the basis."""

    unit: str
    moisture: Moisture | None = None
    standard: Standard = NO_VOLUME


@cache
def _table() -> tuple[dict[str, Unit], dict[str, str]]:
    units: dict[str, Unit] = {}
    spellings: dict[str, str] = {}
    for dimension, group in tomllib.loads(table_text("units.toml")).items():
        for name, row in group["units"].items():
            units[name] = Unit(name, dimension, row["factor"], row.get("offset", 0.0), row["pint"])
            for spelling in (name, *row["spellings"]):
                spellings.setdefault(spelling, name)
    for spelling, name in list(spellings.items()):
        spellings.setdefault(_folded(spelling), name)
    return units, spellings


def _folded(text: str) -> str:
    return re.sub(r"\s+", "", text).lower().replace("³", "3").replace("²", "2").replace("μ", "µ")


def known(name: str) -> Unit:
    """The canonical unit of that name (`UnitError` if there is none)."""
    try:
        return _table()[0][name]
    except KeyError:
        raise UnitError(f"{name!r} is not a unit of the table") from None


def dimension(name: str) -> str:
    """The dimension of a canonical unit, e.g. ``pressure``."""
    return known(name).dimension


def spellings_of(wanted: str) -> list[str]:
    """The canonical units of one dimension."""
    return [unit.name for unit in _table()[0].values() if unit.dimension == wanted]


_HINTS = (
    (re.compile(r"^(ppm|ppb|%|vol%)v?d(ry)?$"), Moisture.DRY),
    (re.compile(r"^(ppm|ppb|%|vol%)v?w(et)?$"), Moisture.WET),
)
_STANDARD = re.compile(r"(?<![a-z])(d|w)?(scf|scm|sm3)")
_ACTUAL = re.compile(r"(?<![a-z])(acf|am3|acm)")
_NORMAL = re.compile(r"(?<![a-z])nm3")


def read_unit(text: str) -> ReadUnit:
    """A unit as written on a sheet.

    Raises
    ------
    UnitError
        The spelling is not known.
    """
    _, spellings = _table()
    plain = text.strip().strip("[]()").strip()
    moisture: Moisture | None = None
    folded = _folded(plain)
    words = re.sub(r"[,;(]?\s*\b(dry|wet)\b\)?$", "", plain, flags=re.IGNORECASE).strip()
    if words and words != plain:
        moisture = Moisture.DRY if "dry" in folded else Moisture.WET
        plain, folded = words, _folded(words)
    for pattern, facet in _HINTS:
        match = pattern.match(folded)
        if match and plain not in spellings:
            moisture, plain, folded = facet, match.group(1), match.group(1)
    name = spellings.get(plain) or spellings.get(folded)
    if name is None:
        raise UnitError(f"the unit {text.strip()!r} is not known")
    standard = NO_VOLUME
    if match := _STANDARD.search(folded):
        standard = EPA_STANDARD
        moisture = moisture or {"d": Moisture.DRY, "w": Moisture.WET}.get(match.group(1))
    elif _ACTUAL.search(folded):
        standard = ACTUAL
    elif _NORMAL.search(folded):
        standard = NORMAL
    return ReadUnit(name, moisture, standard)


def factor(source: str, target: str) -> float:
    """The number a value in `source` is multiplied by to give it in `target` (temperature differences too).

    Raises
    ------
    UnitError
        The two have different dimensions.
    """
    a, b = known(source), known(target)
    if a.dimension != b.dimension:
        raise UnitError(f"{source or '1'} ({a.dimension}) cannot become {target or '1'} ({b.dimension})")
    return 1.0 if source == target else a.factor / b.factor


def convert(value: float, source: str, target: str) -> float:
    """A value in another unit of its dimension; temperatures with their zero point."""
    ratio = factor(source, target)
    if source == target:
        return value
    a, b = known(source), known(target)
    return value * ratio + (a.offset - b.offset) / b.factor


def pint_expression(name: str) -> str:
    """The registry's expression of a canonical unit or of a product of them, with powers as ``^0.5``."""
    units, _ = _table()
    if name in units:
        return units[name].pint
    return "".join(_pint_part(part) for part in re.split(r"([*/])", name))


def _pint_part(part: str) -> str:
    if part in "*/":
        return part
    base, _, power = part.partition("^")
    expression = f"({_table()[0][base].pint if base in _table()[0] else base})"
    return f"{expression}**{power}" if power else expression


@cache
def registry() -> Any:
    """The one pint registry of the package."""
    import pint

    ureg: Any = pint.UnitRegistry(autoconvert_offset_to_baseunit=False)
    ureg.define("ppb = 1e-9")
    ureg.define("therm_it = 1e5 * Btu_it")
    ureg.define("MMBtu = 1e6 * Btu_it")
    ureg.define("pound_mole = 453.59237 * mole = lbmol")
    return ureg


@cache
def pint_unit(name: str) -> Any:
    """The registry's unit for a canonical name; temperatures on a scale become differences."""
    return registry().Unit(pint_expression(name))


def quantity(value: Any, name: str) -> Any:
    """A pint quantity in a canonical unit, e.g. ``quantity(8710.0, "ft3/MMBtu")``."""
    return registry().Quantity(value, pint_unit(name))
