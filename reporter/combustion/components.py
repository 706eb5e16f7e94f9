"""Components of gas fuels: formula, what people call them, molar gross heating value."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from reporter.equation import Citation
from reporter.errors import RecordError
from reporter.gases import molar_mass
from reporter.ledger import slug
from reporter.resources import table_text

ELEMENTS = ("C", "H", "O", "N", "S")
INERT = ("Ar", "He")
_PART = re.compile(r"(Ar|He|[CHONS])(\d*)")
_LOWERED = str.maketrans("₀₁₂₃₄₅₆₇₈₉", "0123456789")


@dataclass(frozen=True, slots=True)
class Component:
    """One component of a gas fuel; `heat`: molar gross heating value at 25 °C [kJ/mol], None if unknown."""

    key: str
    label: str
    formula: str
    heat: float | None
    citation: Citation
    status: str
    spellings: tuple[str, ...] = ()

    @property
    def atoms(self) -> Mapping[str, int]:
        """Atoms in the molecule, by element."""
        return atoms_of(self.formula)

    @property
    def molar_mass(self) -> float:
        """Molar mass [g/mol] from the atomic weights."""
        return molar_mass({element: float(count) for element, count in self.atoms.items()})


@cache
def atoms_of(formula: str) -> Mapping[str, int]:
    """Atoms of a formula of C, H, O, N, S, Ar and He.

    Raises
    ------
    RecordError
        It is no such formula.

    Examples
    --------
    >>> atoms_of("C2H6O")
    {'C': 2, 'H': 6, 'O': 1}
    """
    if not formula or _PART.sub("", formula):
        raise RecordError(f"{formula!r} is no formula of C, H, O, N, S, Ar and He")
    atoms: dict[str, int] = {}
    for element, count in _PART.findall(formula):
        atoms[element] = atoms.get(element, 0) + int(count or 1)
    return atoms


@cache
def _table() -> dict[str, Component]:
    return {
        key: Component(
            key=key,
            label=row["label"],
            formula=row["formula"],
            heat=row["heat"],
            citation=Citation(**row["source"]),
            status=row["status"],
            spellings=tuple(row["spellings"]),
        )
        for key, row in tomllib.loads(table_text("components.toml")).items()
    }


def all_components() -> tuple[Component, ...]:
    """All components, in the order of the table."""
    return tuple(_table().values())


def _folded(text: str) -> str:
    return re.sub(r"[\s_-]+", "", text.translate(_LOWERED)).lower()


@cache
def _names() -> dict[str, str]:
    names: dict[str, str] = {}
    for row in _table().values():
        for name in (row.key, row.label, *row.spellings):
            names.setdefault(_folded(name), row.key)
    for row in _table().values():
        names.setdefault(_folded(row.formula), row.key)
    return names


def find_component(text: str) -> Component | None:
    """The component people mean; None where no name matches.

    Examples
    --------
    >>> find_component("n-Butane").formula
    'C4H10'
    >>> find_component("CH₄").label
    'methane'
    """
    key = _names().get(_folded(text))
    return None if key is None else _table()[key]


def component(name: str) -> Component:
    """The component of a key, or, for any other name, the molecule of that formula (heating value unknown).

    Raises
    ------
    RecordError
        The name is neither.
    """
    row = _table().get(name)
    if row is not None:
        return row
    atoms_of(name)
    return Component(slug(name), name, name, None, Citation("record"), "formula as given")
