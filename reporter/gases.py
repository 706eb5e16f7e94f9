"""Gases by the names people write: unit, molar masses, what they are expressed as, method family.

`tables/gases.toml` is the one list.  A method mass is the rounded number used with method equations; the
physical mass follows from the composition and the CIAAW 2021 atomic weights.
"""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from typing import Any

from reporter.equation import Citation
from reporter.errors import RecordError
from reporter.resources import table_text

_LOWERED = str.maketrans("₀₁₂₃₄₅₆₇₈₉ₓ", "0123456789x")


@dataclass(frozen=True, slots=True)
class Gas:
    """One gas.

    `unit` is the unit it is usually read in; `method_mass` [g/mol] belongs with method equations, `mass`
    [g/mol] with physics; both are those of `expressed_as` where that is not empty.  `by_analogy` says that
    Method 19 does not name the gas as a pollutant, and `is_diluent` that it is O2 or CO2.
    """

    key: str
    label: str
    html: str
    unit: str
    expressed_as: str
    method_mass: float
    mass: float
    atoms: Mapping[str, int]
    method: str
    by_analogy: bool
    synonyms: tuple[str, ...]

    @property
    def is_diluent(self) -> bool:
        """Whether the gas is a diluent of the reference correction."""
        return self.key in ("o2", "co2")

    @property
    def mass_citation(self) -> Citation:
        """Where the physical molar mass comes from."""
        return Citation("ciaaw")


@cache
def _table() -> dict[str, Any]:
    return tomllib.loads(table_text("gases.toml"))


@cache
def atomic_weights() -> Mapping[str, float]:
    """Abridged standard atomic weights, CIAAW 2021 [g/mol], by element."""
    return dict(_table()["atomic_weights"])


def molar_mass(atoms: Mapping[str, float]) -> float:
    """Molar mass [g/mol] of a composition, from the atomic weights."""
    return sum(count * atomic_weights()[element] for element, count in atoms.items())


@cache
def _gases() -> dict[str, Gas]:
    return {
        key: Gas(
            key=key,
            label=row["label"],
            html=row["html"],
            unit=row["unit"],
            expressed_as=row.get("expressed_as", ""),
            method_mass=float(row["method_mass"]),
            mass=molar_mass(row["atoms"]),
            atoms=row["atoms"],
            method=row["method"],
            by_analogy=row["method_19"] == "analogy",
            synonyms=tuple(row["synonyms"]),
        )
        for key, row in _table()["gases"].items()
    }


@cache
def _names() -> dict[str, str]:
    names: dict[str, str] = {}
    for key, found in _gases().items():
        for name in (key, found.label, *found.synonyms):
            names.setdefault(_folded(name), key)
    return names


def _folded(text: str) -> str:
    return "".join(text.translate(_LOWERED).lower().replace("_", "").split())


def all_gases() -> tuple[Gas, ...]:
    """All gases, in the order of the table."""
    return tuple(_gases().values())


def gas(key: str) -> Gas:
    """The gas of a key such as ``nox``.

    Raises
    ------
    RecordError
        There is no such key.
    """
    try:
        return _gases()[key]
    except KeyError:
        raise RecordError(f"no gas has the key {key!r}") from None


def find_gas(text: str) -> Gas | None:
    """The gas people mean, whatever case, spaces or subscripts they used; None where no name matches.

    Examples
    --------
    >>> find_gas(" NOₓ ").key
    'nox'
    >>> find_gas("Carbon monoxide").key
    'co'
    """
    key = _names().get(_folded(text))
    return None if key is None else _gases()[key]
