"""The tracing operand: an equation's body run on names instead of numbers gives its own formula.

A `Term` records the arithmetic done on it as a small tree.  `reporter.typeset` prints such a tree as the
live formula of a spreadsheet, as typeset mathematics and as one line of text.  A term refuses to be
compared or taken as true or false: a choice on a measured value must be written with the functions of
`reporter.functions`, so that it stays live in the workbook.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from numbers import Real
from typing import Any, NoReturn


class Term:
    """Base of all nodes; arithmetic on a node gives a node."""

    __slots__ = ()
    __array_ufunc__ = None

    def _with(self, other: Any, operator: str) -> Any:
        """A node; a series of terms takes over, and works element by element."""
        return NotImplemented if isinstance(other, Terms) else Operation(operator, self, as_term(other))

    def __add__(self, other: Any) -> Any:
        return self._with(other, "+")

    def __radd__(self, other: Any) -> Term:
        return Operation("+", as_term(other), self)

    def __sub__(self, other: Any) -> Any:
        return self._with(other, "-")

    def __rsub__(self, other: Any) -> Term:
        return Operation("-", as_term(other), self)

    def __mul__(self, other: Any) -> Any:
        return self._with(other, "*")

    def __rmul__(self, other: Any) -> Term:
        return Operation("*", as_term(other), self)

    def __truediv__(self, other: Any) -> Any:
        return self._with(other, "/")

    def __rtruediv__(self, other: Any) -> Term:
        return Operation("/", as_term(other), self)

    def __pow__(self, other: Any) -> Any:
        return self._with(other, "^")

    def __rpow__(self, other: Any) -> Term:
        return Operation("^", as_term(other), self)

    def __neg__(self) -> Term:
        return Negation(self)

    def __pos__(self) -> Term:
        return self

    def __bool__(self) -> NoReturn:
        raise TypeError("a traced value is neither true nor false: use at_most, at_least, all_of, any_of")

    def _refuse(self, other: object) -> NoReturn:
        raise TypeError("a traced value cannot be compared: use at_most, at_least, lower, higher")

    __lt__ = __le__ = __gt__ = __ge__ = _refuse
    __eq__ = _refuse
    __ne__ = _refuse
    __hash__ = None  # type: ignore[assignment]


@dataclass(frozen=True, slots=True, eq=False)
class Name(Term):
    """A leaf that stands for a ledger entry; a series stands for a range of cells."""

    key: str
    symbol: str
    series: bool = False
    value: Any = None
    unit: str = ""


@dataclass(frozen=True, slots=True, eq=False)
class Number(Term):
    """A pure number or a printed constant (which then has a symbol and a unit)."""

    value: float
    symbol: str = ""
    unit: str = ""


@dataclass(frozen=True, slots=True, eq=False)
class Operation(Term):
    """Two operands and one of ``+ - * / ^``."""

    operator: str
    left: Term
    right: Term


@dataclass(frozen=True, slots=True, eq=False)
class Negation(Term):
    """The negative of a node."""

    operand: Term


@dataclass(frozen=True, slots=True, eq=False)
class Call(Term):
    """One of the functions of `reporter.functions` on its arguments."""

    function: str
    arguments: tuple[Term, ...]


class Terms:
    """A series given as separate entries: arithmetic is done element by element."""

    __slots__ = ("items",)
    __array_ufunc__ = None

    def __init__(self, items: tuple[Term, ...]) -> None:
        self.items = items

    def __iter__(self) -> Iterator[Term]:
        return iter(self.items)

    def __len__(self) -> int:
        return len(self.items)

    def _with(self, other: Any, swap: bool, operator: str) -> Terms:
        others = other.items if isinstance(other, Terms) else (as_term(other),) * len(self.items)
        pairs = zip(self.items, others, strict=True)
        return Terms(tuple(Operation(operator, b, a) if swap else Operation(operator, a, b) for a, b in pairs))

    def __add__(self, other: Any) -> Terms:
        return self._with(other, False, "+")

    def __radd__(self, other: Any) -> Terms:
        return self._with(other, True, "+")

    def __sub__(self, other: Any) -> Terms:
        return self._with(other, False, "-")

    def __rsub__(self, other: Any) -> Terms:
        return self._with(other, True, "-")

    def __mul__(self, other: Any) -> Terms:
        return self._with(other, False, "*")

    def __rmul__(self, other: Any) -> Terms:
        return self._with(other, True, "*")

    def __truediv__(self, other: Any) -> Terms:
        return self._with(other, False, "/")

    def __rtruediv__(self, other: Any) -> Terms:
        return self._with(other, True, "/")

    def __pow__(self, other: Any) -> Terms:
        return self._with(other, False, "^")

    def __rpow__(self, other: Any) -> Terms:
        return self._with(other, True, "^")

    def __neg__(self) -> Terms:
        return Terms(tuple(-item for item in self.items))

    def __bool__(self) -> NoReturn:
        raise TypeError("a traced series is neither true nor false")

    def _refuse(self, other: object) -> NoReturn:
        raise TypeError("a traced series cannot be compared: use at_most, at_least, lower, higher")

    __lt__ = __le__ = __gt__ = __ge__ = _refuse
    __eq__ = _refuse
    __ne__ = _refuse
    __hash__ = None  # type: ignore[assignment]


#: Functions that make one number of a series.
REDUCING = frozenset({"mean", "count", "total", "dot", "all_of", "any_of"})


def as_term(value: Any) -> Term:
    """A node for a value: nodes stay, plain numbers become `Number`."""
    if isinstance(value, Term):
        return value
    if isinstance(value, Real) and not isinstance(value, bool):
        return Number(float(value))
    raise TypeError(f"{type(value).__name__} cannot stand in a traced equation")


def is_traced(value: Any) -> bool:
    """Whether a value belongs to this module."""
    return isinstance(value, (Term, Terms))


def has_series(term: Term) -> bool:
    """Whether a tree holds a range of cells outside the functions that reduce it."""
    match term:
        case Name(series=series):
            return series
        case Operation(left=left, right=right):
            return has_series(left) or has_series(right)
        case Negation(operand=operand):
            return has_series(operand)
        case Call(function=function, arguments=arguments):
            reduces = function in REDUCING or (function in {"lower", "higher"} and len(arguments) == 1)
            return not reduces and any(map(has_series, arguments))
        case _:
            return False
