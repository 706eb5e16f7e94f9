"""The ledger: every number of a test as an entry of one graph that can be replayed.

An entry has a stable dotted key, a value, a unit, a basis and an origin.  An origin is a cell of the input,
a published table, a statement (a default, said so), or an equation with its input entries.  `Ledger.replay`
evaluates the graph again with other leaves: a changed reading, numbers with uncertainty, draws.  Entries
that share a leaf stay correlated, because the leaf is one.
"""

from __future__ import annotations

import math
import re
import unicodedata
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import lru_cache
from typing import Any

from reporter.basis import NO_BASIS, Basis
from reporter.equation import Citation, Equation, System
from reporter.errors import EquationError, LedgerError
from reporter.problems import Place
from reporter.trace import Name, Term, Terms

KEY = re.compile(r"[a-z][a-z0-9_]*(\.[a-z0-9_]+)*")
#: A key of one segment that a spreadsheet would take for a cell; a key is a defined name of the workbook.
_CELL = re.compile(r"[a-z]{1,3}[0-9]+|r[0-9]*c[0-9]*|r|c|true|false")
_NOT_SLUG = re.compile(r"[^a-z0-9]+")


@lru_cache(maxsize=4096)
def slug(text: str) -> str:
    """A key segment from a name people wrote: lower case, all but letters and digits become ``_``."""
    plain = "".join(_latin(char) for char in unicodedata.normalize("NFKD", text.strip()).lower())
    return _NOT_SLUG.sub("_", plain).strip("_") or "x"


def _latin(char: str) -> str:
    """A letter or digit outside ASCII by its code point, so that names in other scripts stay apart."""
    if char.isascii() or unicodedata.combining(char) or not char.isalnum():
        return char if not unicodedata.combining(char) else ""
    return f"_u{ord(char):x}_"


@dataclass(frozen=True, slots=True)
class FromCells:
    """Read from the input at a place; `text` is what stood there."""

    place: Place
    text: str = ""


@dataclass(frozen=True, slots=True)
class FromTable:
    """Taken from a published table."""

    citation: Citation
    row: str = ""


@dataclass(frozen=True, slots=True)
class Stated:
    """Set by a stated rule, e.g. a default of the unit system; `reason` says so."""

    reason: str
    citation: Citation | None = None


Input = str | tuple[str, ...]


@dataclass(frozen=True, slots=True)
class FromEquation:
    """Computed: the equation and the keys it was given, by argument."""

    equation: Equation[Any]
    inputs: tuple[tuple[str, Input], ...]

    def keys(self) -> tuple[str, ...]:
        """All input keys, in the order of the arguments, each once."""
        flat: dict[str, None] = {}
        for _, value in self.inputs:
            for key in (value,) if isinstance(value, str) else value:
                flat[key] = None
        return tuple(flat)


Origin = FromCells | FromTable | Stated | FromEquation


@dataclass(frozen=True, slots=True)
class Entry:
    """One number, or one series of numbers, of the test."""

    key: str
    value: Any
    unit: str
    basis: Basis
    origin: Origin
    label: str = ""
    symbol: str = ""
    note: str = ""
    decimals: int | None = None

    @property
    def is_series(self) -> bool:
        """Whether the value is a series."""
        return isinstance(self.value, tuple)

    @property
    def is_indicator(self) -> bool:
        """Whether the value is 1 or 0 as the answer of a check."""
        return isinstance(self.origin, FromEquation) and self.origin.equation.indicator

    @property
    def name(self) -> Name:
        """The traced leaf that stands for this entry."""
        return Name(self.key, self.symbol or self.key, self.is_series, self.value, self.unit)


Given = Entry | str | Sequence[Entry | str]


class Ledger:
    """Entries by key, in the order they were made."""

    def __init__(self, system: System = System.US) -> None:
        self.system = system
        self._entries: dict[str, Entry] = {}

    def __getitem__(self, key: str) -> Entry:
        try:
            return self._entries[key]
        except KeyError:
            raise LedgerError(f"no entry has the key {key!r}") from None

    def __contains__(self, key: object) -> bool:
        return key in self._entries

    def __iter__(self) -> Iterator[Entry]:
        return iter(self._entries.values())

    def __len__(self) -> int:
        return len(self._entries)

    def get(self, key: str) -> Entry | None:
        """The entry of a key, or None."""
        return self._entries.get(key)

    def under(self, prefix: str) -> list[Entry]:
        """All entries whose key is `prefix` or begins with ``prefix.``."""
        return [e for e in self if e.key == prefix or e.key.startswith(prefix + ".")]

    def enter(
        self,
        key: str,
        value: float | Sequence[float],
        unit: str,
        origin: Origin,
        *,
        basis: Basis = NO_BASIS,
        label: str = "",
        symbol: str = "",
        note: str = "",
        decimals: int | None = None,
    ) -> Entry:
        """Add an entry that is not computed: a reading, a table value, a stated default.

        Raises
        ------
        LedgerError
            The key is taken or ill-formed, or a value is not a finite number.
        """
        plain = tuple(map(float, value)) if isinstance(value, Iterable) else float(value)
        numbers = plain if isinstance(plain, tuple) else (plain,)
        if not numbers or not all(map(math.isfinite, numbers)):
            raise LedgerError(f"{key}: {value} is no finite number, or no number at all")
        return self._add(Entry(key, plain, unit, basis, origin, label, symbol, note, decimals))

    def apply(
        self,
        eq: Equation[Any],
        key: str,
        inputs: Mapping[str, Given],
        *,
        label: str = "",
        symbol: str = "",
        note: str = "",
        decimals: int | None = None,
        basis: Basis | None = None,
    ) -> Entry:
        """Compute an equation on entries and record the result.

        `basis` replaces the basis the equation gives; only a facet the equation cannot know (expressed-as,
        a limit's own conditions) is set that way.

        Raises
        ------
        BasisError, LedgerError, EquationError
            The inputs do not fit the equation, or it has no finite real value.
        """
        given = {name: self._resolve(value) for name, value in inputs.items()}
        _check_series(eq, given)
        units = {n: v.unit if isinstance(v, Entry) else _one_unit(eq, n, v) for n, v in given.items()}
        unit = eq.units_of(units, self.system)
        bases = {n: v.basis if isinstance(v, Entry) else _one_basis(eq, n, v) for n, v in given.items()}
        values = {n: v.value if isinstance(v, Entry) else tuple(e.value for e in v) for n, v in given.items()}
        result_basis = eq.basis_of(bases, values)
        try:
            value = eq.evaluate(values, self.system)
        except EquationError as error:
            raise EquationError(f"{key}: {error.message}", error.place) from error
        if not isinstance(value, float):
            raise LedgerError(f"{key}: {eq.name} gives a series, and an entry is computed as one number")
        keys = tuple((n, v.key if isinstance(v, Entry) else tuple(e.key for e in v)) for n, v in given.items())
        origin = FromEquation(eq, keys)
        return self._add(
            Entry(key, value, unit, basis or result_basis, origin, label, symbol or eq.symbol, note, decimals)
        )

    def annotate(self, key: str, note: str) -> None:
        """Add a note to an entry."""
        entry = self[key]
        self._entries[key] = replace(entry, note=f"{entry.note}; {note}" if entry.note else note)

    def set_basis(self, key: str, basis: Basis) -> Entry:
        """Give an entry that is not computed from others of a basis its printed basis (a table's column)."""
        self._entries[key] = replace(self[key], basis=basis)
        return self._entries[key]

    def _resolve(self, value: Given) -> Entry | tuple[Entry, ...]:
        if isinstance(value, Entry):
            return self[value.key]
        if isinstance(value, str):
            return self[value]
        return tuple(self[v.key if isinstance(v, Entry) else v] for v in value)

    def _add(self, entry: Entry) -> Entry:
        if not KEY.fullmatch(entry.key) or len(entry.key) > 200 or _CELL.fullmatch(entry.key):
            raise LedgerError(f"{entry.key!r} is not a key: lower-case segments joined by dots, no cell's name")
        if entry.key in self._entries:
            raise LedgerError(f"the key {entry.key!r} is taken")
        self._entries[entry.key] = entry
        return entry

    def replay(
        self,
        changed: Mapping[str, Any] | None = None,
        leaf: Callable[[Entry], Any] | None = None,
        only: Sequence[str] | None = None,
    ) -> dict[str, Any]:
        """Evaluate the graph again.

        Parameters
        ----------
        changed
            Other values for some entries, by key (leaves or results).
        leaf
            Gives the value of every other leaf; its recorded value where absent.
        only
            Keys wanted; what they do not need is left out.

        Returns
        -------
        dict
            Values by key.
        """
        wanted = None if only is None else self.roots(only, everything=True)
        values: dict[str, Any] = {}
        for entry in self:
            if wanted is not None and entry.key not in wanted:
                continue
            if changed is not None and entry.key in changed:
                values[entry.key] = changed[entry.key]
            elif isinstance(entry.origin, FromEquation):
                arguments = {
                    name: values[key] if isinstance(key, str) else tuple(values[k] for k in key)
                    for name, key in entry.origin.inputs
                }
                values[entry.key] = entry.origin.equation.evaluate(arguments, self.system)
            else:
                values[entry.key] = entry.value if leaf is None else leaf(entry)
        return values

    def roots(self, keys: Sequence[str], everything: bool = False) -> set[str]:
        """The leaves some entries rest on; with `everything`, all entries on the way too."""
        seen: set[str] = set()
        leaves: set[str] = set()
        stack = list(keys)
        while stack:
            key = stack.pop()
            if key in seen:
                continue
            seen.add(key)
            origin = self[key].origin
            if isinstance(origin, FromEquation):
                stack.extend(origin.keys())
            else:
                leaves.add(key)
        return seen if everything else leaves

    def trace(self, entry: Entry) -> Term:
        """The expression tree of a computed entry, in terms of its direct inputs.

        Raises
        ------
        LedgerError
            The entry is not computed.
        """
        if not isinstance(entry.origin, FromEquation):
            raise LedgerError(f"{entry.key} is not computed")
        equation = entry.origin.equation
        terms: dict[str, Term | Terms] = {}
        for name, keys in entry.origin.inputs:
            if isinstance(keys, str):
                leaf = self[keys].name
                terms[name] = replace(leaf, symbol=equation.parameters[name].symbol)
            else:
                symbol = equation.parameters[name].symbol
                leaves = [replace(self[k].name, symbol=f"{symbol}{i}") for i, k in enumerate(keys, 1)]
                terms[name] = Terms(tuple(leaves))
        return equation.trace(terms, self.system)


def _check_series(eq: Equation[Any], given: Mapping[str, Entry | tuple[Entry, ...]]) -> None:
    for name, value in given.items():
        parameter = eq.parameters.get(name)
        many = isinstance(value, tuple) or value.is_series
        if parameter is not None and many != parameter.series:
            raise LedgerError(f"{eq.name}: {name} is {'one number' if many else 'a series'}")


def _one_unit(eq: Equation[Any], name: str, entries: tuple[Entry, ...]) -> str:
    units = {entry.unit for entry in entries}
    if len(units) != 1:
        raise LedgerError(f"{eq.name}: {name} needs entries of one unit, but has {sorted(units)}")
    return units.pop()


def _one_basis(eq: Equation[Any], name: str, entries: tuple[Entry, ...]) -> Basis:
    from reporter.errors import BasisError

    bases = {entry.basis for entry in entries}
    if len(bases) != 1:
        texts = ", ".join(sorted(basis.text() or "none" for basis in bases))
        raise BasisError(f"{eq.name}: {name} needs entries of one basis, but has: {texts}")
    return bases.pop()
